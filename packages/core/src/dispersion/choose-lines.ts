/**
 * Which named lines an axis is fitted to: the vague and the faint are set aside before anything is chosen, and lines that the others
 * contradict are taken out (S. Weisberg, Applied Linear Regression: studentised deleted residual).
 */
import { studentQuantile } from "../numeric/distributions.ts";
import type { DispersionPoint } from "./fit-dispersion.ts";
import { comparedScatter, type ScatterFit } from "./scatter-fit.ts";

/** Chance that any good line at all is rejected. */
const rejectionLevel = 0.01;
const rejectableShare = 0.33;
/** The best of the lines by which the others are judged, the least degrees of freedom they have, rounds until they are found. */
const bestShare = 0.67;
const freedomOfBest = 3;
const concentrations = 2;
/** Variance of a standard normal deviate within the central 67 of 100: 1 - 2 z phi(z)/0.67, z = 0.974. */
const trimmedVariance = 0.278;
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
 * Takes out lines that the others contradict: first those far from what the best two thirds agree on, all at once, then one at a
 * time; at most a third of all, none where fewer than three degrees of freedom remain, none within a fiftieth of the width.
 *
 * @returns leaves the fit without them in `fit`, leverages included, and `used` without them
 */
export function rejectOutliers(
  fit: ScatterFit,
  ownUncNm: Float64Array,
  used: boolean[],
  degree: number,
  unremarkableNm: number,
): void {
  const most = Math.floor(rejectableShare * fit.pointCount);
  for (let n = rejectFarOff(fit, ownUncNm, used, degree, most, unremarkableNm); ; n++) {
    fit.solve(used, degree, comparedScatter);
    fit.fillLeverages();
    if (n >= most || fit.degreesOfFreedom < 3) return;
    const worst = mostRemarkable(fit);
    if (worst < 0 || Math.abs(fit.leftOut(worst)) < unremarkableNm) return;
    used[fit.rows[worst] as number] = false;
  }
}

/**
 * Several bad lines hide each other: together they pass for scatter that all lines share. So the scatter is taken from the best of
 * them (least trimmed squares, P. J. Rousseeuw, J. Am. Stat. Assoc. 79 (1984) 871, by concentration from the plain fit), and what is
 * far off that goes.
 *
 * @returns how many were taken out
 */
function rejectFarOff(
  fit: ScatterFit,
  ownUncNm: Float64Array,
  used: boolean[],
  degree: number,
  most: number,
  unremarkableNm: number,
): number {
  fit.solve(used, degree, comparedScatter);
  // Nothing can hide where the stated uncertainties explain everything.
  if (fit.excessSquare === 0) return 0;
  const order = Array.from(fit.rows.subarray(0, fit.rowCount));
  const kept = Math.max(Math.ceil(bestShare * order.length), degree + 1 + freedomOfBest);
  if (kept >= order.length) return 0;
  const ratios = new Float64Array(used.length);
  const rank = (): void => {
    for (const i of order) {
      const own = ownUncNm[i] as number;
      ratios[i] = Math.abs(fit.residualOf(i)) / Math.sqrt(own * own + fit.excessSquare);
    }
    order.sort((a, b) => (ratios[a] as number) - (ratios[b] as number) || a - b);
  };
  const best = new Uint8Array(used.length);
  for (let round = 0; round < concentrations; round++) {
    rank();
    best.fill(0);
    for (let k = 0; k < kept; k++) best[order[k] as number] = 1;
    fit.solve(best, degree, comparedScatter, trimmedVariance);
  }
  rank();
  const limit = studentQuantile(1 - rejectionLevel / (2 * order.length), fit.degreesOfFreedom);
  let count = 0;
  for (let k = order.length - 1; k >= kept && count < most; k--) {
    const i = order[k] as number;
    if ((ratios[i] as number) < limit) break;
    if (Math.abs(fit.residualOf(i)) < unremarkableNm) continue;
    used[i] = false;
    count += 1;
  }
  return count;
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
