import type { Refusal } from "../analysis/types.ts";

/** A typed refusal with its sentence; `line` is the 1-based line of the file where it was seen. */
export function refuse(code: Refusal["code"], reason: string, line: number | null = null): Refusal {
  return { outcome: "refused", code, reason, line };
}
