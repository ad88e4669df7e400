/**
 * Tolerance segments: what errors a user must reckon with anywhere in one, where known errors are left uncorrected.
 *
 * Lines       largest |error| + U over the judged lines of the segment
 * Curve       the errors of all lines as a curve over wavelength: what the instrument indicates minus the axis that was fitted to its lines,
 *             or, where none could be fitted, the weighted straight line of error against wavelength. Its standard uncertainty is that of the
 *             fit, with what moves all lines together; U with k = 2. Largest |error| + U over 97 places, the segment's ends among them
 * Not judged  fewer than two judged lines, or a part beyond the outermost of them
 */
import { axisNm, axisPx, axisUncNm } from "../dispersion/axis.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import type { Dispersion, DriftPoint, LineResult, SegmentResult, ToleranceSegment } from "./types.ts";

const leastLines = 2;
const placesPerSegment = 96;
const coverageFactor = 2;

/** The error at one place of the curve, with its standard uncertainty. */
export interface CurvePlace {
  wavelengthNm: number;
  errorNm: number;
  uncNm: number;
}
/** Places of the fitted error curve between two wavelengths, both ends included. */
export type ErrorCurve = (fromNm: number, toNm: number) => CurvePlace[];

/**
 * The fitted error curve of a check.
 *
 * @param sharedUncNm  what moves all lines together, nm; the axis fit does not know it
 * @returns null where nothing indicates, or neither an axis nor a straight line through two lines could be fitted
 */
export function errorCurveOf(
  axis: IndicatingAxis | null,
  dispersion: Dispersion | null,
  driftPoint: DriftPoint | null,
  sharedUncNm: number,
): ErrorCurve | null {
  if (axis === null) return null;
  if (dispersion !== null) {
    const fitted = dispersion.axis;
    return (fromNm, toNm) => {
      const from = axisPx(fitted, fromNm);
      const to = axisPx(fitted, toNm);
      if (from === null || to === null) return [];
      return spread(from, to, (position) => {
        const wavelengthNm = axisNm(fitted, position);
        const own = axisUncNm(fitted, position) ?? 0;
        const errorNm = axis.indicatedNm(position) - wavelengthNm;
        return { wavelengthNm, errorNm, uncNm: Math.sqrt(own * own + sharedUncNm * sharedUncNm) };
      });
    };
  }
  if (driftPoint === null || driftPoint.rangeNm === 0) return null;
  const { midNm, rangeNm, midErrorNm, scaleErrorNm, midErrorUncNm, scaleErrorUncNm, covarianceNm2 } = driftPoint;
  return (fromNm, toNm) =>
    spread(fromNm, toNm, (wavelengthNm) => {
      const x = (wavelengthNm - midNm) / rangeNm;
      const square = midErrorUncNm * midErrorUncNm + 2 * x * covarianceNm2 + x * x * scaleErrorUncNm * scaleErrorUncNm;
      return { wavelengthNm, errorNm: midErrorNm + scaleErrorNm * x, uncNm: Math.sqrt(Math.max(square, 0)) };
    });
}

function spread(from: number, to: number, at: (value: number) => CurvePlace): CurvePlace[] {
  const places: CurvePlace[] = [];
  for (let k = 0; k <= placesPerSegment; k += 1) places.push(at(from + (k * (to - from)) / placesPerSegment));
  return places;
}

/** Every segment, judged or with the reason why not. */
export function judgeSegments(
  lines: readonly LineResult[],
  segments: readonly ToleranceSegment[],
  curve: ErrorCurve | null,
): SegmentResult[] {
  if (segments.length === 0) return [];
  let first = Number.POSITIVE_INFINITY;
  let last = Number.NEGATIVE_INFINITY;
  for (const line of lines) {
    if (line.status !== "judged" || line.wavelengthNm === null) continue;
    first = Math.min(first, line.wavelengthNm);
    last = Math.max(last, line.wavelengthNm);
  }
  return segments.map((segment) => {
    let judgedCount = 0;
    let largest: number | null = null;
    let worstLine: number | null = null;
    lines.forEach((line, index) => {
      if (line.status !== "judged" || line.wavelengthNm === null) return;
      if (line.wavelengthNm < segment.fromNm || line.wavelengthNm > segment.toNm) return;
      judgedCount += 1;
      const forUse = Math.abs(line.errorNm!) + line.errorExpandedUncNm!;
      if (largest !== null && forUse <= largest) return;
      largest = forUse;
      worstLine = index;
    });
    let notJudgedBecause: string | null = null;
    if (judgedCount < leastLines) {
      notJudgedBecause = judgedCount === 0 ? "No judged line lies in it." : "Only one judged line lies in it.";
    } else if (segment.fromNm < first || segment.toNm > last) {
      notJudgedBecause = `It reaches beyond the outermost judged lines (${first.toFixed(2)} and ${last.toFixed(2)} nm).`;
    }
    return {
      ...segment,
      judgedCount,
      largestErrorForUseNm: notJudgedBecause === null ? largest : null,
      worstLine,
      notJudgedBecause,
      fitted: notJudgedBecause !== null || curve === null ? null : largestOn(curve, segment),
    };
  });
}

function largestOn(curve: ErrorCurve, { fromNm, toNm }: ToleranceSegment): SegmentResult["fitted"] {
  let worst: NonNullable<SegmentResult["fitted"]> | null = null;
  for (const { wavelengthNm, errorNm, uncNm } of curve(fromNm, toNm)) {
    const expandedUncNm = coverageFactor * uncNm;
    const errorForUseNm = Math.abs(errorNm) + expandedUncNm;
    if (worst === null || errorForUseNm > worst.errorForUseNm) {
      worst = { errorForUseNm, errorNm, expandedUncNm, atNm: wavelengthNm };
    }
  }
  return worst;
}
