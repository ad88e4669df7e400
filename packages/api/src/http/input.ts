/** From a parser's findings to a problem with its fields, so that the form can show each where it belongs. */
import type { z } from "zod";
import { problem, type Problem } from "./problem.ts";

export function inputProblem(error: z.ZodError, part: "query" | "body"): Problem {
  const fields = error.issues.slice(0, 40).map((issue) => ({ path: issue.path.join("."), message: sentence(issue) }));
  const first = fields[0];
  const detail =
    part === "query"
      ? `The address asks for something that cannot be: ${first?.path ?? ""} ${first?.message ?? ""}`.trim()
      : fields.length === 1
        ? `One field needs another look: ${first!.message} Nothing was stored.`
        : `${fields.length} fields need another look. Nothing was stored.`;
  return problem("invalid-input", detail, { fields });
}

/** Our own messages pass; the library's terse ones become sentences. */
function sentence(issue: z.core.$ZodIssue): string {
  if (issue.code === "invalid_type") {
    const missing = issue.input === undefined || issue.message.includes("received undefined");
    return missing ? "This is missing." : `This must be ${wordFor(issue.expected)}.`;
  }
  const text = issue.message;
  return /[.!?]$/.test(text) ? text : `${text}.`;
}

const wordFor = (expected: string): string =>
  ({
    string: "text",
    number: "a number",
    int: "a whole number",
    boolean: "yes or no",
    array: "a list",
    object: "a group of fields",
    null: "empty",
  })[expected] ?? expected;
