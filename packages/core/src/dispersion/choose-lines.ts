/**
 * Which named lines an axis is fitted to: the vague and the faint are set aside before anything is chosen, and lines that the others
 * contradict are taken out one at a time (S. Weisberg, Applied Linear Regression: studentised deleted residual).
 */
import { studentQuantile } from "../numeric/distributions.ts";
import type { DispersionPoint } from "./fit-dispersion.ts";
import { comparedScatter, type ScatterFit } from "./scatter-fit.ts";

/** Chance that any good line at all is rejected. */
const rejectionLevel = 0.01;
const rejectableShare = 0.2;
/** Share of the FWHM within which no line is called an outlier, however well the others agree. */
const unremarkableShare = 0.02;
/** A line this many times less sure than the median one (a ninth of its weight) is left out from the start. */
const vagueFactor = 3;
/** A line fainter than this share of the median one is left out where at least this many surer lines remain. */
const faintShare = 0.15;
const fewestBesideFaint = 8;
const freedomForAgreement = 6;
const leastAgreedScale = 0.1;
/** No quantile that is asked for lies below: smaller residuals need no quantile. */
const neverRemarkable = 2.5;

/**
 * Lines so much less sure, or so much fainter, than the others that they would only blur the picture. The uncertainty counts
 * together with the scatter all lines share, so that bright lines do not crowd out sound ones; the brightness counts beside
 * it because fits on skewed or boxy lines state an uncertainty that is about the same for bright lines, which share their
 * shape and so its error, and for faint ones, which have noise on top.
 *
 * @param used    all true on entry; false for what is set aside
 * @param fewest  surest lines that stay whatever they are
 * @returns the reason of each line set aside
 */
export function setVagueAside(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  fit: ScatterFit,
  used: boolean[],
  degree: number,
  fewest: number,
): Map<number, string> {
  const vague = new Map<number, string>();
  if (points.length <= fewest) return vague;
  fit.solve(used, degree, comparedScatter);
  const unc = agreedUncNm(points, fit);
  const usualUnc = medianOf(Array.from(unc));
  const brightness = points.map((point) => point.signalToNoise ?? Number.POSITIVE_INFINITY);
  const faintBelow = faintShare * medianOf(brightness.slice());
  let clearCount = 0;
  for (const value of brightness) if (value >= faintBelow) clearCount += 1;
  const order = points.map((_, i) => i).sort((a, b) => (unc[a] as number) - (unc[b] as number) || a - b);
  order.forEach((i, rank) => {
    if ((unc[i] as number) > vagueFactor * usualUnc && rank >= fewest) {
      const stated = (ownUncNm[i] as number).toFixed(4);
      vague.set(i, `Its uncertainty, ${stated} nm, is more than ${vagueFactor} times that of the usual line here`);
    } else if ((brightness[i] as number) < faintBelow && clearCount >= fewestBesideFaint) {
      vague.set(i, `It stands out of the noise less than ${faintShare * 100} % as far as the usual line here`);
    }
  });
  for (const i of vague.keys()) used[i] = false;
  return vague;
}

/**
 * Uncertainty of each line as the lines' own agreement shows it: where many agree better than their positions' stated
 * uncertainties, those are scaled down, while what a reference or a blend leaves open stays.
 */
function agreedUncNm(points: readonly DispersionPoint[], fit: ScatterFit): Float64Array {
  const unc = fit.unc.slice(0, fit.rowCount);
  if (fit.degreesOfFreedom < freedomForAgreement) return unc;
  const typical = 1.4826 * medianOf(Array.from(unc, (value, k) => Math.abs((fit.residuals[k] as number) / value)));
  const scale = Math.min(1, Math.max(typical, leastAgreedScale));
  return Float64Array.from(unc, (value, k) => {
    const open = (points[k] as DispersionPoint).wavelengthUncNm;
    return Math.sqrt(scale * scale * (value * value - open * open) + open * open);
  });
}

const medianOf = (values: number[]): number => values.sort((a, b) => a - b)[(values.length - 1) >> 1] as number;

/**
 * Takes out, one at a time, lines that the others contradict: at most a fifth of all, none where fewer than three degrees of
 * freedom remain, none within a fiftieth of the width.
 *
 * @returns leaves the fit without them in `fit`, leverages included, and `used` without them
 */
export function rejectOutliers(fit: ScatterFit, used: boolean[], degree: number, fwhm: number, nmPerPx: number): void {
  const most = Math.floor(rejectableShare * fit.pointCount);
  for (let n = 0; ; n++) {
    fit.solve(used, degree, comparedScatter);
    fit.fillLeverages();
    const freedom = fit.degreesOfFreedom;
    if (n === most || freedom < 3) return;
    const worst = mostRemarkable(fit);
    if (worst < 0) return;
    if (Math.abs(fit.leftOut(worst)) < unremarkableShare * fwhm * nmPerPx) return;
    used[fit.rows[worst] as number] = false;
  }
}

/** Row whose studentised deleted residual is larger than chance allows over all lines, the largest of them; else -1. */
function mostRemarkable(fit: ScatterFit): number {
  const freedom = fit.degreesOfFreedom;
  let sum = 0;
  for (let k = 0; k < fit.rowCount; k++) {
    const ratio = (fit.residuals[k] as number) / (fit.unc[k] as number);
    sum += ratio * ratio;
  }
  // Scatter of the others alone. With few lines never below what is stated; with more their own agreement tells, since
  // fits on skewed or boxy lines state too much.
  const least = fit.excessSquare > 0 || freedom >= freedomForAgreement ? 1e-12 : 1;
  let worst = -1;
  let largest = 0;
  for (let k = 0; k < fit.rowCount; k++) {
    const studentised = studentisedDeleted(fit, k, sum, least);
    if (studentised > largest) {
      largest = studentised;
      worst = k;
    }
  }
  if (largest < neverRemarkable) return -1;
  return largest > studentQuantile(1 - rejectionLevel / (2 * fit.rowCount), freedom - 1) ? worst : -1;
}

function studentisedDeleted(fit: ScatterFit, k: number, chiSquare: number, least: number): number {
  const room = Math.max(1 - (fit.leverages[k] as number), 1e-6);
  const ratio = (fit.residuals[k] as number) / (fit.unc[k] as number);
  const others = Math.max((chiSquare - (ratio * ratio) / room) / (fit.degreesOfFreedom - 1), least);
  return Math.abs(ratio) / Math.sqrt(room * others);
}
