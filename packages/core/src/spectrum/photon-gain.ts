/**
 * How the scatter grows with the signal: counts per detected electron, told apart from a line shape that does not fit.
 *
 * Model   variance of a sample = read noise² + gain x signal + (misfit x signal)²; photon noise grows with the signal, a wrong shape with
 *         its square, so that lines of different height part the two: gain is where the straight line of (excess / signal) against height
 *         meets height zero
 * Seen    the sum of squared residuals of an evenly weighted fit is on average sum of variance x (1 - leverage): a narrow line's few bright
 *         samples are followed by the fit and show little of their noise, so the leverage of each sample counts
 * Solved  median over the lines, because a line with an unresolved companion has an excess of any size; where the gain rises with the height
 *         (M. G. Kendall, Biometrika 30, 81, 1938) the straight line's value at height zero (P. K. Sen, JASA 63, 1379, 1968); then
 *         the weighted mean of the lines that agree with it
 */
import { median } from "./median.ts";

export interface LineScatter {
  /** Sum of squared residuals less what the read noise leaves of itself, counts². */
  excess: number;
  /** Sum of (1 - leverage) x fitted signal above the baseline, counts. */
  signal: number;
  /** Sum of (1 - leverage) x signal², counts². */
  squareSignal: number;
  /** Mean read noise², counts², and the sums of (1 - leverage)² x 1, signal, signal²: for the scatter of `excess`. */
  readVariance: number;
  moments: readonly [number, number, number];
}

const agreeingSigmas = 3;
const trimRounds = 3;
/** Photon noise is believed when at least this share of the lines shows it. */
const leastAgreeing = 1 / 3;
/** Kendall's rank correlation of gain and height above which the shape, not the photons, makes the scatter. */
const misfitCorrelation = 0.5;
const fewestForRank = 4;

/** Counts per electron; 0 where the lines show no photon noise (or there is none to judge by). */
export function estimatePhotonGain(lines: readonly LineScatter[]): number {
  const seen = lines.filter((line) => line.signal > 0);
  if (seen.length === 0) return 0;
  const gains = seen.map((line) => line.excess / line.signal);
  const { correlation, atHeightZero } = trendWithHeight(seen, gains);
  let gain = correlation > misfitCorrelation ? atHeightZero : median(gains);
  let weights = 0;
  for (let round = 0; round < trimRounds && gain > 0; round += 1) {
    weights = 0;
    let sum = 0;
    let agreeing = 0;
    seen.forEach((line, k) => {
      const variance = varianceOf(line, gain) / (line.signal * line.signal);
      const off = gains[k]! - gain;
      if (off * off > agreeingSigmas * agreeingSigmas * variance) return;
      agreeing += 1;
      weights += 1 / variance;
      sum += gains[k]! / variance;
    });
    if (agreeing < leastAgreeing * seen.length) return 0;
    gain = sum / weights;
  }
  // A gain that can't be told from none would only widen every interval, since it can't go below zero.
  return gain > 0 && gain * gain * weights > 1 ? gain : 0;
}

/** Kendall's correlation of gain and height, and the Theil-Sen line of gain against height at height zero. */
function trendWithHeight(
  lines: readonly LineScatter[],
  gains: readonly number[],
): { correlation: number; atHeightZero: number } {
  const heights = lines.map((line) => line.squareSignal / line.signal);
  const slopes: number[] = [];
  let concordance = 0;
  for (let a = 0; a < lines.length; a += 1) {
    for (let b = 0; b < a; b += 1) {
      const step = heights[a]! - heights[b]!;
      if (step === 0) continue;
      const slope = (gains[a]! - gains[b]!) / step;
      slopes.push(slope);
      concordance += Math.sign(slope);
    }
  }
  if (lines.length < fewestForRank || slopes.length === 0) return { correlation: 0, atHeightZero: 0 };
  const slope = median(slopes);
  return {
    correlation: concordance / slopes.length,
    atHeightZero: median(gains.map((gain, k) => gain - slope * heights[k]!)),
  };
}

/**
 * Leverages of the samples of an evenly weighted fit: diagonal of the projection on its columns, by modified Gram-Schmidt.
 *
 * @param columns  derivatives of the fitted curve with respect to each parameter, all of one length; overwritten
 */
export function leveragesOf(columns: Float64Array[]): Float64Array {
  const m = columns[0]!.length;
  const leverages = new Float64Array(m);
  columns.forEach((column, k) => {
    const before = norm(column);
    for (let other = 0; other < k; other += 1) {
      const basis = columns[other]!;
      let dot = 0;
      for (let i = 0; i < m; i += 1) dot += basis[i]! * column[i]!;
      for (let i = 0; i < m; i += 1) column[i] = column[i]! - dot * basis[i]!;
    }
    const after = norm(column);
    // A column that the others already hold adds no leverage.
    const scale = after > 1e-9 * before ? 1 / after : 0;
    for (let i = 0; i < m; i += 1) {
      column[i] = column[i]! * scale;
      leverages[i] = leverages[i]! + column[i]! * column[i]!;
    }
  });
  return leverages;
}

function norm(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i += 1) sum += values[i]! * values[i]!;
  return Math.sqrt(sum);
}

/** Variance of a line's excess under read and photon noise. */
function varianceOf({ readVariance, moments }: LineScatter, gain: number): number {
  return (
    2 * (readVariance * readVariance * moments[0] + 2 * readVariance * gain * moments[1] + gain * gain * moments[2])
  );
}
