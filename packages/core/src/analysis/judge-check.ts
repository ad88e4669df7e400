/** From judged lines to what is said of the whole check: its verdicts, the joint probability of conformance, its point of the drift series. */
import { driftPointOf } from "../drift/drift-point.ts";
import type { IdentifiedLines } from "../identify/identify-lines.ts";
import { summarise, type JudgedLine } from "../uncertainty/conformity.ts";
import { jointConformanceProbability } from "../uncertainty/joint-conformance.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import { isLine, type JudgedLineResult } from "./judge-lines.ts";
import type { Analysis, AnalysisSetup } from "./types.ts";

export function verdictsOf(
  lines: JudgedLineResult[],
  identified: IdentifiedLines,
  setup: AnalysisSetup,
  axis: IndicatingAxis | null,
): { asAsked: Analysis["verdict"]; withEveryLine: Analysis["verdict"] } {
  if (setup.tolerance.length === 0 || axis === null) return { asAsked: null, withEveryLine: null };
  const namedCount = lines.filter(({ result }) => result.wavelengthNm !== null).length;
  const judged = (withLeftOut: boolean): JudgedLine[] =>
    lines.flatMap(({ result, judgement }, line) =>
      judgement !== null && (withLeftOut || result.leftOut === null) ? [{ line, judgement }] : [],
    );
  const reasons = (withLeftOut: boolean): string[] => {
    const found: string[] = [];
    if (identified.outcome !== "identified")
      found.push(identified.reason ?? "The lines could not be named with certainty.");
    for (const required of setup.requiredLinesNm) {
      const line = lines.find(
        ({ result }) =>
          result.wavelengthNm !== null &&
          (isLine([required], result.wavelengthNm) || result.blendOfNm.some((part) => isLine([required], part))),
      );
      const label = `The required line ${required} nm`;
      if (line === undefined) found.push(`${label} was not found.`);
      else if (line.judgement === null) found.push(`${label} can't be judged. ${line.result.reason ?? ""}`.trim());
      else if (!withLeftOut && line.result.leftOut !== null) found.push(`${label} was left out.`);
    }
    return found;
  };
  return {
    asAsked: summarise(judged(false), namedCount, reasons(false)),
    withEveryLine: summarise(judged(true), namedCount, reasons(true)),
  };
}

export function driftPointOfLines(lines: JudgedLineResult[]): Analysis["driftPoint"] {
  const used = lines.filter(
    ({ result }) => result.errorNm !== null && (result.status === "judged" || result.status === "not-judged"),
  );
  let shared = 0;
  for (const { sharedUncNm } of used) shared += sharedUncNm / used.length;
  return driftPointOf(
    used.map(({ result, ownUncNm }) => ({ wavelengthNm: result.wavelengthNm!, errorNm: result.errorNm!, ownUncNm })),
    shared,
  );
}

/** Probability that all judged lines conform together, from the covariance of their errors; null where none was judged. */
export function jointProbabilityOf(lines: readonly JudgedLineResult[]): number | null {
  return jointConformanceProbability(
    lines.flatMap(({ result, judgement, ownUncNm, sharedByCauseNm }) =>
      judgement === null || result.status !== "judged"
        ? []
        : [
            {
              errorNm: result.errorNm!,
              toleranceNm: judgement.toleranceNm,
              ownUncNm,
              sharedUncNm: sharedByCauseNm,
              conformanceProbability: judgement.conformanceProbability,
            },
          ],
    ),
  );
}

/** Standard uncertainty of what moves all lines together, nm: the mean over the lines. */
export function sharedUncOf(lines: readonly JudgedLineResult[]): number {
  let sum = 0;
  let count = 0;
  for (const { result, sharedUncNm } of lines) {
    if (result.errorNm === null) continue;
    sum += sharedUncNm;
    count += 1;
  }
  return count > 0 ? sum / count : 0;
}
