/** From an analysis to what lists, strips and mails say of it; and the procedure's own demand on the number of lines. */
import type { Analysis, LineResult, ToleranceSegment, VerdictSummary } from "@wavekeep/core";
import type { StripLine } from "../contract/common.ts";
import type { StoredResult } from "../db/schema/analyses.ts";

/**
 * Hold an analysis to the number of judged lines that its procedure asks for in each tolerance segment: with fewer, a pass
 * becomes inconclusive and says why. A fail stays a fail.
 *
 * @param least  judged lines needed in every segment that the source's lines reach
 */
export function holdToProcedure(analysis: Analysis, least: number, procedureCode: string): Analysis {
  const judgedIn = (segment: ToleranceSegment, counts: (line: LineResult) => boolean): number =>
    analysis.lines.filter(
      (line) =>
        line.wavelengthNm !== null &&
        line.wavelengthNm >= segment.fromNm &&
        line.wavelengthNm <= segment.toNm &&
        counts(line),
    ).length;
  const hold = (summary: VerdictSummary | null, counts: (line: LineResult) => boolean): VerdictSummary | null => {
    if (summary === null) return null;
    const reasons = analysis.setup.tolerance
      .map((segment) => ({ segment, judged: judgedIn(segment, counts) }))
      .filter(({ judged }) => judged < least)
      .map(
        ({ segment, judged }) =>
          `From ${segment.fromNm} to ${segment.toNm}\u202fnm ${judged === 0 ? "no line was" : judged === 1 ? "one line was" : `${judged} lines were`} judged; procedure ${procedureCode} asks for ${least}.`,
      );
    if (reasons.length === 0) return summary;
    const verdict = summary.verdict === "pass" ? "inconclusive" : summary.verdict;
    return { ...summary, verdict, nearLimit: false, reasons: [...summary.reasons, ...reasons] };
  };
  return {
    ...analysis,
    verdict: hold(analysis.verdict, (line) => line.status === "judged"),
    verdictWithEveryLine: hold(
      analysis.verdictWithEveryLine,
      (line) => line.status === "judged" || line.status === "left-out",
    ),
  };
}

/** An analysis in one line. */
export function resultOf(analysis: Analysis): StoredResult {
  const { verdict, verdictWithEveryLine } = analysis;
  const worst = verdict?.worstLine === null || verdict === null ? undefined : analysis.lines[verdict.worstLine];
  const guardBandNm = worst?.guardBandNm ?? null;
  const toleranceNm = worst?.toleranceNm ?? null;
  return {
    outcome: analysis.outcome,
    verdict: verdict?.verdict ?? null,
    nearLimit: verdict?.nearLimit ?? false,
    toleranceUsed: verdict?.toleranceUsed ?? null,
    guardShare: guardBandNm === null || toleranceNm === null ? null : Math.min(1, guardBandNm / toleranceNm),
    judgedCount: verdict?.judgedCount ?? 0,
    lineCount: analysis.lines.filter((line) => line.wavelengthNm !== null).length,
    leftOutCount: analysis.lines.filter((line) => line.status === "left-out").length,
    worst:
      worst === undefined ||
      worst.wavelengthNm === null ||
      worst.errorNm === null ||
      worst.errorExpandedUncNm === null ||
      toleranceNm === null
        ? null
        : {
            wavelengthNm: worst.wavelengthNm,
            species: worst.species ?? worst.element ?? "",
            errorNm: worst.errorNm,
            expandedUncNm: worst.errorExpandedUncNm,
            toleranceNm,
          },
    withEveryLine:
      verdictWithEveryLine === null
        ? null
        : {
            verdict: verdictWithEveryLine.verdict,
            nearLimit: verdictWithEveryLine.nearLimit,
            toleranceUsed: verdictWithEveryLine.toleranceUsed,
          },
  };
}

/** Bars of the line strip, by wavelength: every line that has a name. */
export function stripOf(analysis: Analysis): StripLine[] {
  return analysis.lines
    .filter((line) => line.wavelengthNm !== null)
    .map((line) => ({
      wavelengthNm: line.wavelengthNm!,
      species: line.species,
      errorNm: line.errorNm,
      expandedUncNm: line.errorExpandedUncNm,
      toleranceNm: line.toleranceNm,
      status: line.status,
      verdict: line.verdict,
      nearLimit: line.nearLimit,
      flags: [...line.flags],
      blend: line.blendOfNm.length > 1,
    }))
    .sort((a, b) => a.wavelengthNm - b.wavelengthNm);
}
