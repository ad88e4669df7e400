import type { LineResult, SegmentResult, ToleranceSegment } from "./types.ts";

const leastLines = 2;

/**
 * Per tolerance segment the largest |error| + U for use where errors are left uncorrected; not judged where it holds fewer
 * than two lines or reaches beyond the outermost one.
 */
export function judgeSegments(lines: readonly LineResult[], segments: readonly ToleranceSegment[]): SegmentResult[] {
  const judged = lines
    .map((line, index) => ({ line, index }))
    .filter(({ line }) => line.status === "judged" && line.wavelengthNm !== null);
  const wavelengths = judged.map(({ line }) => line.wavelengthNm!);
  const first = wavelengths.length > 0 ? wavelengths.reduce((a, b) => Math.min(a, b)) : NaN;
  const last = wavelengths.length > 0 ? wavelengths.reduce((a, b) => Math.max(a, b)) : NaN;
  return segments.map((segment) => {
    const inside = judged.filter(
      ({ line }) => line.wavelengthNm! >= segment.fromNm && line.wavelengthNm! <= segment.toNm,
    );
    let largest: number | null = null;
    let worstLine: number | null = null;
    for (const { line, index } of inside) {
      const forUse = Math.abs(line.errorNm!) + line.errorExpandedUncNm!;
      if (largest === null || forUse > largest) {
        largest = forUse;
        worstLine = index;
      }
    }
    let notJudgedBecause: string | null = null;
    if (inside.length < leastLines) {
      notJudgedBecause = inside.length === 0 ? "No judged line lies in it." : "Only one judged line lies in it.";
    } else if (segment.fromNm < first || segment.toNm > last) {
      notJudgedBecause = `It reaches beyond the outermost judged lines (${first.toFixed(2)} and ${last.toFixed(2)} nm).`;
    }
    return {
      ...segment,
      judgedCount: inside.length,
      largestErrorForUseNm: notJudgedBecause === null ? largest : null,
      worstLine,
      notJudgedBecause,
    };
  });
}
