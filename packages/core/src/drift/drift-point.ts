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

/** The weighted line of error against wavelength, as the stated uncertainties alone give it. */
export interface ErrorLine {
  firstNm: number;
  lastNm: number;
  midNm: number;
  rangeNm: number;
  midErrorNm: number;
  scaleErrorNm: number;
  /** nm², not grown by scatter; the scale error's is 0 where it is not known. */
  midVarianceNm2: number;
  scaleVarianceNm2: number;
  covarianceNm2: number;
  /** Sum of (residual / u)². */
  chiSquare: number;
  degreesOfFreedom: number;
  /** False with one line, or all at one wavelength. */
  hasSlope: boolean;
}

const leastUncNm = 1e-9;

/** @returns null without lines */
export function errorLineOf(lines: readonly DriftLine[]): ErrorLine | null {
  if (lines.length === 0) return null;
  let firstNm = Number.POSITIVE_INFINITY;
  let lastNm = Number.NEGATIVE_INFINITY;
  for (const { wavelengthNm } of lines) {
    if (wavelengthNm < firstNm) firstNm = wavelengthNm;
    if (wavelengthNm > lastNm) lastNm = wavelengthNm;
  }
  const midNm = (firstNm + lastNm) / 2;
  const rangeNm = lastNm - firstNm;
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
  return {
    firstNm,
    lastNm,
    midNm,
    rangeNm,
    midErrorNm,
    scaleErrorNm,
    midVarianceNm2: hasSlope ? sxx / determinant : 1 / sw,
    scaleVarianceNm2: hasSlope ? sw / determinant : 0,
    covarianceNm2: hasSlope ? -sx / determinant : 0,
    chiSquare,
    degreesOfFreedom: lines.length - (hasSlope ? 2 : 1),
    hasSlope,
  };
}

/**
 * @param lines        judged lines, at least one
 * @param sharedUncNm  standard uncertainty that moves all lines together, nm
 * @returns null without lines; with one line (or all at one wavelength) the scale error is 0 and `rangeNm` is 0: it is not known
 */
export function driftPointOf(lines: readonly DriftLine[], sharedUncNm: number): DriftPoint | null {
  const line = errorLineOf(lines);
  if (line === null) return null;
  const { midErrorNm, scaleErrorNm, degreesOfFreedom } = line;
  const inflation = degreesOfFreedom > 0 ? Math.max(1, line.chiSquare / degreesOfFreedom) : 1;
  const midVariance = line.midVarianceNm2 * inflation + sharedUncNm * sharedUncNm;
  const scaleVariance = line.scaleVarianceNm2 * inflation;
  const covariance = line.covarianceNm2 * inflation;

  // A straight line is largest at one of its ends.
  const atEnd = (x: number): { error: number; unc: number } => ({
    error: midErrorNm + x * scaleErrorNm,
    unc: Math.sqrt(Math.max(0, midVariance + 2 * x * covariance + x * x * scaleVariance)),
  });
  const low = atEnd(-0.5);
  const high = atEnd(0.5);
  const largest = Math.abs(high.error) >= Math.abs(low.error) ? high : low;
  return {
    midNm: line.midNm,
    rangeNm: line.rangeNm,
    midErrorNm,
    midErrorUncNm: Math.sqrt(midVariance),
    scaleErrorNm,
    scaleErrorUncNm: Math.sqrt(scaleVariance),
    covarianceNm2: covariance,
    largestErrorNm: largest.error,
    largestErrorUncNm: 2 * largest.unc,
    largestAtNm: largest === high ? line.lastNm : line.firstNm,
  };
}
