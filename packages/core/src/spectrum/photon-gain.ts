/**
 * How the scatter grows with the signal: counts per detected electron, told apart from a line shape that does not fit.
 *
 * Model   variance of a sample = read noise² + gain x signal + (misfit x signal)²; photon noise grows with the signal, a wrong shape with
 *         its square, so that lines of different height part the two: gain is where the straight line of (excess / signal) against height
 *         meets height zero
 * Seen    the sum of squared residuals of an evenly weighted fit is on average the trace of (1 - H) V, H the projection on the fit's
 *         columns, V the covariance of the noise (its correlation by lag included): a narrow line's few bright samples are followed by
 *         the fit and show little of their noise
 * Solved  lower quartile over the lines, because a line with an unresolved companion has an excess of any size; where the gain rises with the height
 *         (M. G. Kendall, Biometrika 30, 81, 1938) the straight line's value at height zero (P. K. Sen, JASA 63, 1379, 1968); then
 *         the weighted mean of the lines that agree with it, by the quantiles of chi-squared
 */
import { median } from "./median.ts";

export interface LineScatter {
  /** Sum of squared residuals less what the read noise leaves of itself, counts². */
  excess: number;
  /** What the read noise leaves of itself, counts². */
  readFree: number;
  /** What a gain of one leaves of its noise: trace of (1 - H) V for V of the signal, counts. */
  signal: number;
  /** Sum of (1 - leverage) x signal², counts². */
  squareSignal: number;
  /**
   * Mean read noise², counts², and what gives the variance of `excess`: sums of (1 - leverage)² x 1, signal, signal² (of correlated noise the
   * traces that these stand for).
   */
  readVariance: number;
  moments: readonly [number, number, number];
}

export interface PhotonGain {
  /** Counts per electron; 0 where the lines show no photon noise (or there is none to judge by). */
  gain: number;
  /** Standard uncertainty of it over it; 0 where the gain is 0. */
  relativeUnc: number;
}

/** Lines whose scatter lies outside what chi-squared gives to all but one in a thousand do not enter the mean. */
const agreeingSigmas = 3.3;
const trimRounds = 4;
/** Photon noise is taken from the lines that agree when at least this share does; else the quartile speaks. */
const leastAgreeing = 1 / 3;
/** Kendall's rank correlation of gain and height above which the shape, not the photons, makes the scatter, and its significance. */
const misfitCorrelation = 0.5;
const misfitSigmas = 2;
const quartileSigmas = -0.6745;

export function estimatePhotonGain(lines: readonly LineScatter[]): PhotonGain {
  const none = { gain: 0, relativeUnc: 0 };
  const seen = lines.filter((line) => line.signal > 0);
  if (seen.length === 0) return none;
  // Companions and misfit only add to the scatter: the lower quartile is nearer the photons than the median is. The quantile of chi-squared that
  // it stands for lies below its mean, the more the fewer degrees of freedom a line has.
  const rough = Math.max(0, median(seen.map((line) => line.excess / line.signal)));
  const gainAt = (line: LineScatter, z: number): number =>
    ((line.excess + line.readFree) / chiSquareShare(freedomOf(line, rough), z) - line.readFree) / line.signal;
  const trend = trendWithHeight(
    seen,
    seen.map((line) => gainAt(line, 0)),
  );
  let gain = trend.isMisfit ? trend.atHeightZero : lowerQuartile(seen.map((line) => gainAt(line, quartileSigmas)));
  let weights = 0;
  for (let round = 0; round < trimRounds && gain > 0; round += 1) {
    let [sum, total, agreeing] = [0, 0, 0];
    for (const line of seen) {
      const freedom = freedomOf(line, gain);
      const share = (line.excess + line.readFree) / (line.readFree + gain * line.signal);
      if (share < chiSquareShare(freedom, -agreeingSigmas) || share > chiSquareShare(freedom, agreeingSigmas)) continue;
      const weight = (line.signal * line.signal) / varianceOf(line, gain);
      agreeing += 1;
      total += weight;
      sum += (weight * line.excess) / line.signal;
    }
    weights = total;
    if (agreeing < leastAgreeing * seen.length) {
      return { gain, relativeUnc: Math.sqrt(2 / seen.length) };
    }
    gain = sum / total;
  }
  // A gain that can't be told from none would only widen every interval, since it can't go below zero.
  return gain > 0 && gain * gain * weights > 1 ? { gain, relativeUnc: 1 / (gain * Math.sqrt(weights)) } : none;
}

function lowerQuartile(values: number[]): number {
  const sorted = values.slice().sort((a, b) => a - b);
  const at = 0.25 * (sorted.length - 1);
  const below = Math.floor(at);
  const above = Math.min(sorted.length - 1, below + 1);
  return sorted[below]! + (at - below) * (sorted[above]! - sorted[below]!);
}

/** Degrees of freedom of the chi-squared distribution that a line's sum of squares follows, by its first two moments. */
function freedomOf(line: LineScatter, gain: number): number {
  const mean = line.readFree + gain * line.signal;
  return (2 * mean * mean) / Math.max(varianceOf(line, gain), 1e-300);
}

/** Quantile of chi-squared over its mean at z normal deviations (E. B. Wilson, M. M. Hilferty, PNAS 17 (1931) 684). */
function chiSquareShare(freedom: number, z: number): number {
  const v = 2 / (9 * freedom);
  const root = Math.max(0, 1 - v + z * Math.sqrt(v));
  return root * root * root;
}

/** Kendall's correlation of gain and height, and the Theil-Sen line of gain against height at height zero. */
function trendWithHeight(
  lines: readonly LineScatter[],
  gains: readonly number[],
): { isMisfit: boolean; atHeightZero: number } {
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
  if (slopes.length === 0) return { isMisfit: false, atHeightZero: 0 };
  const n = lines.length;
  const correlation = concordance / slopes.length;
  const byChance = Math.sqrt((2 * (2 * n + 5)) / (9 * n * (n - 1)));
  const slope = median(slopes);
  return {
    isMisfit: correlation > misfitCorrelation && correlation > misfitSigmas * byChance,
    atHeightZero: median(gains.map((gain, k) => gain - slope * heights[k]!)),
  };
}

/**
 * What a first, evenly weighted fit of one line leaves over, beside what each kind of noise would leave.
 *
 * @param columns  derivatives of the fitted curve with respect to each parameter (constant factors do not matter); overwritten
 */
export function scatterOf(
  columns: Float64Array[],
  residuals: Float64Array,
  signals: Float64Array,
  unc: Float64Array,
  autocorrelation: Float64Array,
): LineScatter {
  const m = residuals.length;
  orthonormalise(columns);
  const root = new Float64Array(m);
  const leverages = new Float64Array(m);
  let [readFree, signalFree, squareSignal, readVariance, excess] = [0, 0, 0, 0, 0];
  for (let i = 0; i < m; i += 1) {
    root[i] = Math.sqrt(signals[i]!);
    readFree += unc[i]! * unc[i]!;
    signalFree += signals[i]!;
    readVariance += (unc[i]! * unc[i]!) / m;
    excess += residuals[i]! * residuals[i]!;
  }
  const product = new Float64Array(m);
  for (const column of columns) {
    for (let i = 0; i < m; i += 1) {
      leverages[i] = leverages[i]! + column[i]! * column[i]!;
      product[i] = column[i]! * unc[i]!;
    }
    readFree -= correlatedSquare(product, autocorrelation);
    for (let i = 0; i < m; i += 1) product[i] = column[i]! * root[i]!;
    signalFree -= correlatedSquare(product, autocorrelation);
  }
  const moments: [number, number, number] = [0, 0, 0];
  for (let i = 0; i < m; i += 1) {
    const free = Math.max(0, 1 - leverages[i]!);
    const s = signals[i]!;
    squareSignal += free * s * s;
    if (autocorrelation.length > 0) continue;
    moments[0] += free * free;
    moments[1] += free * free * s;
    moments[2] += free * free * s * s;
  }
  if (autocorrelation.length > 0) {
    const read = unc.map((value) => value / Math.sqrt(readVariance));
    const byRead = leftOver(columns, read, autocorrelation);
    const bySignal = leftOver(columns, root, autocorrelation);
    moments[0] = traceOfProduct(byRead, byRead, m);
    moments[1] = traceOfProduct(byRead, bySignal, m);
    moments[2] = traceOfProduct(bySignal, bySignal, m);
  }
  readFree = Math.max(0, readFree);
  return { excess: excess - readFree, readFree, signal: signalFree, squareSignal, readVariance, moments };
}

/** (1 - QQ') V, V the covariance of noise with these deviations and the correlation by lag: row-major m x m. */
function leftOver(basis: Float64Array[], deviations: Float64Array, autocorrelation: Float64Array): Float64Array {
  const m = deviations.length;
  const v = new Float64Array(m * m);
  for (let i = 0; i < m; i += 1) {
    for (let j = Math.max(0, i - autocorrelation.length); j <= Math.min(m - 1, i + autocorrelation.length); j += 1) {
      const correlation = i === j ? 1 : autocorrelation[Math.abs(i - j) - 1]!;
      v[i * m + j] = correlation * deviations[i]! * deviations[j]!;
    }
  }
  for (const q of basis) {
    for (let j = 0; j < m; j += 1) {
      let dot = 0;
      for (let i = 0; i < m; i += 1) dot += q[i]! * v[i * m + j]!;
      for (let i = 0; i < m; i += 1) v[i * m + j] = v[i * m + j]! - q[i]! * dot;
    }
  }
  return v;
}

function traceOfProduct(a: Float64Array, b: Float64Array, m: number): number {
  let sum = 0;
  for (let i = 0; i < m; i += 1) for (let j = 0; j < m; j += 1) sum += a[i * m + j]! * b[j * m + i]!;
  return sum;
}

/** v'Rv, R the correlation by lag. */
function correlatedSquare(v: Float64Array, autocorrelation: Float64Array): number {
  const m = v.length;
  let sum = 0;
  for (let i = 0; i < m; i += 1) sum += v[i]! * v[i]!;
  for (let lag = 1; lag <= autocorrelation.length && lag < m; lag += 1) {
    let products = 0;
    for (let i = lag; i < m; i += 1) products += v[i]! * v[i - lag]!;
    sum += 2 * autocorrelation[lag - 1]! * products;
  }
  return sum;
}

/** An orthonormal basis of what the columns span, in their place, by modified Gram-Schmidt; a column that adds nothing becomes 0. */
function orthonormalise(columns: Float64Array[]): void {
  columns.forEach((column, k) => {
    const m = column.length;
    const before = norm(column);
    for (let other = 0; other < k; other += 1) {
      const basis = columns[other]!;
      let dot = 0;
      for (let i = 0; i < m; i += 1) dot += basis[i]! * column[i]!;
      for (let i = 0; i < m; i += 1) column[i] = column[i]! - dot * basis[i]!;
    }
    const after = norm(column);
    const scale = after > 1e-9 * before ? 1 / after : 0;
    for (let i = 0; i < m; i += 1) column[i] = column[i]! * scale;
  });
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
