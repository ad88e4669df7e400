/**
 * Baseline and noise of a capture, from its quiet samples.
 *
 * Baseline  knots one a block (a 32nd of the capture), each the median of the block's quiet samples, straight between them; lines, bands
 *           and gaps are masked in a few rounds, and a block with too few quiet samples takes its knot from its neighbours
 * Noise     per block, 1.4826 times the median absolute deviation of the quiet residuals, median of three blocks
 * Lag one   correlation of neighbouring quiet residuals; above 0.2 the capture is said to be smoothed
 * Source    common practice; the factor 1.4826 makes the deviation a standard deviation for normal noise
 */
import { medianInPlace, selectInPlace } from "./median.ts";

export interface Baseline {
  /** Counts, one a sample. */
  baseline: Float64Array;
  /** Standard deviation of the quiet samples' noise at each sample, counts, > 0. */
  noiseCounts: Float64Array;
  /** Median over the capture, counts. */
  medianNoiseCounts: number;
  /** Correlation of neighbouring quiet samples' noise, -1 to 1; 0 when too few samples are quiet. */
  lagOneCorrelation: number;
  /** 1 where the sample is quiet: no line, no gap. */
  quiet: Uint8Array;
}

const blocksWanted = 32;
const shortestBlock = 32;
const rounds = 5;
const clipSigmas = 3;
const leastQuietShare = 0.2;
/** Relative variance of the median of three such deviations, times the samples of one: 1.36 (normal noise) x 0.45. */
const medianOfThreeVariance = 0.61;
/** Consistency of the median absolute deviation with the standard deviation of normal noise. */
const madToSd = 1.4826;
/** The block's own knot takes up some of its scatter: share per sample by which the deviation is low. Found by simulation. */
const knotShare = 1;

/**
 * Estimate baseline and noise.
 *
 * @param counts  counts, NaN for gaps, length >= 8
 * @returns arrays of the same length; the noise is never zero (a capture without any scatter gets a millionth of its span)
 */
export function estimateBaseline(counts: Float64Array): Baseline {
  const n = counts.length;
  const block = Math.max(shortestBlock, Math.ceil(n / blocksWanted));
  const blocks = Math.max(1, Math.floor(n / block));
  const edge = (b: number): number => (b === blocks ? n : b * block);
  const centres = Float64Array.from({ length: blocks }, (_, b) => (edge(b) + edge(b + 1) - 1) / 2);
  const knots = new Float64Array(blocks);
  const scratch = new Float64Array(n);
  const baseline = new Float64Array(n);
  const quiet = new Uint8Array(n);
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < n; i += 1) {
    const value = counts[i]!;
    if (value !== value) continue;
    if (value < low) low = value;
    if (value > high) high = value;
    quiet[i] = 1;
  }
  const leastNoise = high > low ? 1e-6 * (high - low) : 1e-12 * Math.max(Math.abs(high), 1e-300);

  // Lines only add light: the lower third of each block is nearer the baseline than its median.
  for (let b = 0; b < blocks; b += 1) knots[b] = quantileOf(counts, quiet, edge(b), edge(b + 1), 0.3, scratch, 1);
  let sd = 0;
  for (let round = 0; round < rounds; round += 1) {
    interpolate(centres, fillGaps(knots), baseline);
    sd = Math.max(lowerSpread(counts, baseline, scratch), leastNoise);
    maskLines(counts, baseline, clipSigmas * sd, quiet);
    for (let b = 0; b < blocks; b += 1) {
      const least = Math.max(3, leastQuietShare * (edge(b + 1) - edge(b)));
      knots[b] = quantileOf(counts, quiet, edge(b), edge(b + 1), 0.5, scratch, least);
    }
  }
  interpolate(centres, fillGaps(knots), baseline);
  const noise = blockNoise(counts, baseline, quiet, blocks, edge, scratch, Math.max(sd, leastNoise));
  const noiseCounts = new Float64Array(n);
  interpolate(centres, noise, noiseCounts);
  for (let i = 0; i < n; i += 1) if (noiseCounts[i]! < leastNoise) noiseCounts[i] = leastNoise;
  return {
    baseline,
    noiseCounts,
    medianNoiseCounts: Math.max(medianInPlace(noise.slice(), blocks), leastNoise),
    lagOneCorrelation: lagOneOf(counts, baseline, quiet, noiseCounts),
    quiet,
  };
}

function quantileOf(
  counts: Float64Array,
  quiet: Uint8Array,
  from: number,
  to: number,
  share: number,
  scratch: Float64Array,
  least: number,
): number {
  let m = 0;
  for (let i = from; i < to; i += 1) if (quiet[i] === 1) scratch[m++] = counts[i]!;
  if (m < least) return NaN;
  return share === 0.5 ? medianInPlace(scratch, m) : selectInPlace(scratch, m, Math.floor(share * (m - 1)));
}

/** Knots that are NaN become straight lines between their neighbours; all NaN becomes 0. */
function fillGaps(knots: Float64Array): Float64Array {
  const filled = knots.slice();
  let before = -1;
  for (let b = 0; b < filled.length; b += 1) {
    if (filled[b] !== filled[b]) continue;
    const start = before < 0 ? filled[b]! : filled[before]!;
    for (let k = before + 1; k < b; k += 1) {
      const share = before < 0 ? 1 : (k - before) / (b - before);
      filled[k] = start + share * (filled[b]! - start);
    }
    before = b;
  }
  for (let k = before + 1; k < filled.length; k += 1) filled[k] = before < 0 ? 0 : filled[before]!;
  return filled;
}

function interpolate(centres: Float64Array, knots: Float64Array, out: Float64Array): void {
  const last = centres.length - 1;
  let b = 0;
  for (let i = 0; i < out.length; i += 1) {
    while (b < last - 1 && i > centres[b + 1]!) b += 1;
    if (last === 0 || i <= centres[0]!) out[i] = knots[0]!;
    else if (i >= centres[last]!) out[i] = knots[last]!;
    else out[i] = knots[b]! + ((i - centres[b]!) / (centres[b + 1]! - centres[b]!)) * (knots[b + 1]! - knots[b]!);
  }
}

/** Spread of what lies below the baseline: lines do not reach there. */
function lowerSpread(counts: Float64Array, baseline: Float64Array, scratch: Float64Array): number {
  let m = 0;
  for (let i = 0; i < counts.length; i += 1) {
    const residual = counts[i]! - baseline[i]!;
    if (residual < 0) scratch[m++] = -residual;
  }
  return m === 0 ? 0 : madToSd * medianInPlace(scratch, m);
}

/** Quiet = within the limit of the baseline, and no neighbour on either side far above it. */
function maskLines(counts: Float64Array, baseline: Float64Array, limit: number, quiet: Uint8Array): void {
  const n = counts.length;
  for (let i = 0; i < n; i += 1) {
    const residual = counts[i]! - baseline[i]!;
    quiet[i] = residual <= limit && residual >= -2 * limit ? 1 : 0;
  }
  let reach = 0;
  for (let i = 0; i < n; i += 1) {
    if (counts[i]! - baseline[i]! > limit) reach = 3;
    else if (reach > 0) {
      quiet[i] = 0;
      reach -= 1;
    }
  }
  reach = 0;
  for (let i = n - 1; i >= 0; i -= 1) {
    if (counts[i]! - baseline[i]! > limit) reach = 3;
    else if (reach > 0) {
      quiet[i] = 0;
      reach -= 1;
    }
  }
}

function blockNoise(
  counts: Float64Array,
  baseline: Float64Array,
  quiet: Uint8Array,
  blocks: number,
  edge: (b: number) => number,
  scratch: Float64Array,
  fallback: number,
): Float64Array {
  const raw = new Float64Array(blocks).fill(NaN);
  for (let b = 0; b < blocks; b += 1) {
    let m = 0;
    for (let i = edge(b); i < edge(b + 1); i += 1)
      if (quiet[i] === 1) scratch[m++] = Math.abs(counts[i]! - baseline[i]!);
    if (m >= 8) raw[b] = (1 + knotShare / m) * madToSd * medianInPlace(scratch, m);
  }
  const known = raw.some((value) => value === value);
  const filled = known ? fillGaps(raw) : raw.fill(fallback);
  const smooth = filled.slice();
  const three = new Float64Array(3);
  for (let b = 1; b + 1 < blocks; b += 1) {
    three[0] = filled[b - 1]!;
    three[1] = filled[b]!;
    three[2] = filled[b + 1]!;
    smooth[b] = medianInPlace(three, 3);
  }
  return shrinkToCommon(smooth, medianInPlace(filled, blocks), edge(1));
}

/**
 * Blocks that differ no more than chance makes them are given the common noise; the more they differ, the more each keeps its own
 * (empirical Bayes). Left as they are, the lowest tenth of the blocks would raise false lines many times over.
 */
function shrinkToCommon(noise: Float64Array, common: number, samplesPerBlock: number): Float64Array {
  if (!(common > 0)) return noise;
  let spread = 0;
  for (const value of noise) spread += ((value / common - 1) * (value / common - 1)) / noise.length;
  const byChance = medianOfThreeVariance / samplesPerBlock;
  const kept = spread > 0 ? Math.max(0, 1 - byChance / spread) : 0;
  return noise.map((value) => common + kept * (value - common));
}

function lagOneOf(counts: Float64Array, baseline: Float64Array, quiet: Uint8Array, noise: Float64Array): number {
  let products = 0;
  let squares = 0;
  let pairs = 0;
  for (let i = 1; i < counts.length; i += 1) {
    if (quiet[i] !== 1 || quiet[i - 1] !== 1) continue;
    const a = (counts[i - 1]! - baseline[i - 1]!) / noise[i - 1]!;
    const b = (counts[i]! - baseline[i]!) / noise[i]!;
    // A few samples far out (a weak line that was not masked) must not make the noise look smooth.
    if (Math.abs(a) > 4 || Math.abs(b) > 4) continue;
    products += a * b;
    squares += (a * a + b * b) / 2;
    pairs += 1;
  }
  return pairs < 20 || squares === 0 ? 0 : Math.max(-1, Math.min(1, products / squares));
}
