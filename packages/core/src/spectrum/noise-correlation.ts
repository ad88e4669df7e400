/**
 * How alike the noise of neighbouring samples is: autocorrelation of the quiet residuals, by lag.
 *
 * Many instruments smooth, average over neighbours or resample before they write; the noise of a fit's samples is then not independent.
 * Mean products of residuals (over their noise) at each lag, over pairs of quiet samples, as far as they can be told from none: up to the
 * last of three neighbouring lags beyond three standard deviations 1 / sqrt(pairs).
 * Limits  the baseline takes up the slowest part of the noise: with b samples a block the correlation is low by about 1.3 T / b, T = the
 *         sum of all correlations; put back, and the noise with it. At most 24 lags
 * Source  M. S. Bartlett, J. R. Stat. Soc. B 8 (1946) 27 (scatter of a correlation); the correction found by simulation
 */

export interface Autocorrelation {
  /** First entry lag one; empty for white noise. */
  byLag: Float64Array;
  lagOne: number;
  /** By which the noise, measured about a baseline that follows it, is too low. */
  noiseFactor: number;
}

const mostLags = 24;
const fewestPairs = 20;
const tellingSigmas = 3;
/** A few samples far out (a weak line that was not masked) must not make the noise look smooth. */
const farthest = 4;
const baselineShare = 1.3;

let ratios = new Float64Array(0);

export function estimateAutocorrelation(
  counts: Float64Array,
  baseline: Float64Array,
  quiet: Uint8Array,
  noise: Float64Array,
  samplesPerBlock: number,
): Autocorrelation {
  const n = counts.length;
  if (ratios.length < n) ratios = new Float64Array(n);
  let squares = 0;
  let total = 0;
  let count = 0;
  for (let i = 0; i < n; i += 1) {
    const ratio = quiet[i] === 1 ? (counts[i]! - baseline[i]!) / noise[i]! : 0;
    const isNear = ratio <= farthest && ratio >= -farthest;
    ratios[i] = isNear ? ratio : 0;
    if (quiet[i] !== 1 || !isNear) continue;
    squares += ratio * ratio;
    total += ratio;
    count += 1;
  }
  const none = { byLag: new Float64Array(0), lagOne: 0, noiseFactor: 1 };
  if (count < fewestPairs || squares === 0) return none;
  // Cut off at a floor, the residuals have a mean of their own.
  const mean = total / count;
  const variance = squares / count - mean * mean;
  if (!(variance > 0)) return none;
  const found: number[] = [];
  let last = 0;
  for (let lag = 1; lag <= mostLags && lag < n / 4 && lag <= last + 3; lag += 1) {
    let products = 0;
    let pairs = 0;
    // A masked sample counts as 0 in the products, so only whole pairs are counted.
    for (let i = lag; i < n; i += 1) {
      products += ratios[i]! * ratios[i - lag]!;
      pairs += quiet[i]! & quiet[i - lag]!;
    }
    if (pairs < fewestPairs) break;
    const value = Math.max(-0.99, Math.min(0.99, (products / pairs - mean * mean) / variance));
    found.push(value);
    if (Math.abs(value) > tellingSigmas / Math.sqrt(pairs)) last = lag;
  }
  const lagOne = found[0] ?? 0;
  if (last === 0) return { ...none, lagOne };
  const byLag = Float64Array.from(found.slice(0, last));
  let sum = 1;
  for (const value of byLag) sum += 2 * value;
  const lost = Math.min(0.5, (baselineShare * Math.max(0, sum)) / samplesPerBlock);
  for (let k = 0; k < byLag.length; k += 1) byLag[k] = (byLag[k]! + lost) / (1 + lost);
  return { byLag, lagOne: byLag[0]!, noiseFactor: Math.sqrt(1 + lost) };
}
