/**
 * One check as a point of its drift series: the weighted straight line of error against wavelength.
 *
 * Error at mid-range  value of the line at the middle of the judged wavelengths
 * Scale error         its slope times the range (last minus first judged wavelength)
 * Weights             1/u², u = what belongs to each line alone; what all lines share (set-up reproducibility, temperature) moves the
 *                     line as a whole and is added to the variance at mid-range afterwards
 * Scatter             where the lines scatter more than their uncertainties say, the covariance grows by the reduced chi-squared
 */
import type { DriftPoint } from "../analysis/types.ts";

export interface DriftLine {
  wavelengthNm: number;
  errorNm: number;
  /** Standard uncertainty that belongs to this line alone, nm. */
  ownUncNm: number;
}

const leastUncNm = 1e-9;

/**
 * @param lines        judged lines, at least one
 * @param sharedUncNm  standard uncertainty that moves all lines together, nm
 * @returns null without lines; with one line (or all at one wavelength) the scale error is 0 and `rangeNm` is 0: it is not known
 */
export function driftPointOf(lines: readonly DriftLine[], sharedUncNm: number): DriftPoint | null {
  if (lines.length === 0) return null;
  let first = Number.POSITIVE_INFINITY;
  let last = Number.NEGATIVE_INFINITY;
  for (const { wavelengthNm } of lines) {
    if (wavelengthNm < first) first = wavelengthNm;
    if (wavelengthNm > last) last = wavelengthNm;
  }
  const midNm = (first + last) / 2;
  const rangeNm = last - first;
  let sw = 0;
  let sx = 0;
  let sxx = 0;
  let sy = 0;
  let sxy = 0;
  for (const { wavelengthNm, errorNm, ownUncNm } of lines) {
    const u = Math.max(ownUncNm, leastUncNm);
    const w = 1 / (u * u);
    const x = rangeNm > 0 ? (wavelengthNm - midNm) / rangeNm : 0; // -1/2 to 1/2, so that the slope is the scale error
    sw += w;
    sx += w * x;
    sxx += w * x * x;
    sy += w * errorNm;
    sxy += w * x * errorNm;
  }
  const determinant = sw * sxx - sx * sx;
  const hasSlope = rangeNm > 0 && determinant > 1e-9 * sw * sxx;
  const midErrorNm = hasSlope ? (sxx * sy - sx * sxy) / determinant : sy / sw;
  const scaleErrorNm = hasSlope ? (sw * sxy - sx * sy) / determinant : 0;
  let chiSquare = 0;
  for (const { wavelengthNm, errorNm, ownUncNm } of lines) {
    const u = Math.max(ownUncNm, leastUncNm);
    const x = rangeNm > 0 ? (wavelengthNm - midNm) / rangeNm : 0;
    const residual = (errorNm - midErrorNm - x * scaleErrorNm) / u;
    chiSquare += residual * residual;
  }
  const dof = lines.length - (hasSlope ? 2 : 1);
  const inflation = dof > 0 ? Math.max(1, chiSquare / dof) : 1;
  const shared = sharedUncNm * sharedUncNm;
  const midVariance = (hasSlope ? sxx / determinant : 1 / sw) * inflation + shared;
  const scaleVariance = hasSlope ? (sw / determinant) * inflation : 0;
  const covariance = hasSlope ? (-sx / determinant) * inflation : 0;

  // A straight line is largest at one of its ends.
  const atEnd = (x: number): { error: number; unc: number } => ({
    error: midErrorNm + x * scaleErrorNm,
    unc: Math.sqrt(Math.max(0, midVariance + 2 * x * covariance + x * x * scaleVariance)),
  });
  const low = atEnd(-0.5);
  const high = atEnd(0.5);
  const largest = Math.abs(high.error) >= Math.abs(low.error) ? high : low;
  return {
    midNm,
    rangeNm,
    midErrorNm,
    midErrorUncNm: Math.sqrt(midVariance),
    scaleErrorNm,
    scaleErrorUncNm: Math.sqrt(scaleVariance),
    covarianceNm2: covariance,
    largestErrorNm: largest.error,
    largestErrorUncNm: 2 * largest.unc,
    largestAtNm: largest === high ? last : first,
  };
}
