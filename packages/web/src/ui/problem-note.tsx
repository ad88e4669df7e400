/** A refusal in plain words: what happened, what was kept, what to do. */
import { problemOf } from "../shared/problem.ts";
import { StatusShape } from "./status.tsx";

interface ProblemNoteProps {
  error: unknown;
  className?: string;
  /** Fields named by the problem are listed, unless the form shows them at their places. */
  withFields?: boolean;
}

export function ProblemNote({ error, className, withFields = true }: ProblemNoteProps) {
  if (error === null || error === undefined) return null;
  const problem = problemOf(error);
  return (
    <div role="alert" className={`caution ${className ?? ""}`}>
      <p>
        <StatusShape state="inconclusive" className="mr-2 translate-y-[1px]" />
        <b>{problem.title.replace(/[.]?$/, ".")}</b> {problem.detail === problem.title ? null : problem.detail}
      </p>
      {problem.kept !== undefined && <p className="text-quiet mt-1">{problem.kept}</p>}
      {withFields && problem.fields !== undefined && problem.fields.length > 0 && (
        <ul className="mt-1">
          {problem.fields.map((field) => (
            <li key={`${field.path} ${field.message}`}>
              {field.path === "" ? field.message : `${field.path}: ${field.message}`}
            </li>
          ))}
        </ul>
      )}
    </div>
  );
}
