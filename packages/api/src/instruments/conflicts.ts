/** Unique keys that decide between two people, told as sentences. */
import { sqlState } from "../http/idempotency.ts";
import { problem, type ProblemKind } from "../http/problem.ts";

const UNIQUE_VIOLATION = "23505";
const FOREIGN_KEY_VIOLATION = "23503";

/** Name of the constraint that a database error speaks of, through the query builder's wrapper. */
export function violatedConstraint(error: unknown): string | null {
  for (let at: unknown = error; typeof at === "object" && at !== null; at = (at as { cause?: unknown }).cause) {
    const { constraint } = at as { constraint?: unknown };
    if (typeof constraint === "string") return constraint;
  }
  return null;
}

export const isUniqueViolation = (error: unknown, constraint?: string): boolean =>
  sqlState(error) === UNIQUE_VIOLATION && (constraint === undefined || violatedConstraint(error) === constraint);

/** Run a change; where its unique key is taken, say so at the field. A reference to what is not there is an input problem too. */
export async function nameTaken<T>(
  field: string,
  constraint: string,
  detail: string,
  change: () => Promise<T>,
): Promise<T> {
  try {
    return await change();
  } catch (error) {
    if (isUniqueViolation(error, constraint))
      throw problem("already-exists", `${detail} Nothing was stored.`, { fields: [{ path: field, message: detail }] });
    if (sqlState(error) === FOREIGN_KEY_VIOLATION) {
      throw problem(
        "invalid-input",
        "The form names a person, instrument or source that is not in this lab. Nothing was stored; choose again.",
      );
    }
    throw error;
  }
}

/** Run a change that only one of two can make; the other is told plainly. */
export async function onlyOnce<T>(kind: ProblemKind, detail: string, change: () => Promise<T>): Promise<T> {
  try {
    return await change();
  } catch (error) {
    if (isUniqueViolation(error)) throw problem(kind, detail);
    throw error;
  }
}
