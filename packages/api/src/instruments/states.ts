/** From standing and last verdict to the state that is shown. */
import type { ShownState, Standing } from "../contract/common.ts";

/** What a configuration shows: its standing where that is not plain service, else its last check's verdict. */
export function shownStateOf(
  standing: Standing,
  result: { verdict: string | null; nearLimit: boolean } | null,
): ShownState {
  if (standing !== "in-service") return standing;
  if (result === null || result.verdict === null) return "not-judged";
  if (result.verdict === "fail") return "out-of-tolerance";
  if (result.verdict === "inconclusive") return "inconclusive";
  return result.nearLimit ? "near-limit" : "in-tolerance";
}

/** Standings in which the configuration may give results. */
export const isInUse = (standing: Standing): boolean => standing === "in-service" || standing === "restricted";
