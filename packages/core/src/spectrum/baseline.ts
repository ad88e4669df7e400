/**
 * Baseline and noise of a capture, from its quiet samples.
 *
 * Baseline  knots one a block (a 32nd of the capture), each the median of the block's quiet samples, straight between them; lines, bands
 *           and gaps are masked in a few rounds, and a block with too few quiet samples takes its knot from its neighbours
 * Noise     per block, 1.4826 times the median absolute deviation of the quiet residuals, median of three blocks; at least that of the
 *           steps that the counts are written in (step / sqrt 12)
 * Alike     autocorrelation of the quiet residuals by lag (`noise-correlation.ts`)
 * Source    common practice; the factor 1.4826 makes the deviation a standard deviation for normal noise
 */
import { median, medianInPlace, selectInPlace } from "./median.ts";
import { estimateAutocorrelation } from "./noise-correlation.ts";

export interface Baseline {
  /** Counts, one a sample. */
  baseline: Float64Array;
  /** Standard deviation of the quiet samples' noise at each sample, counts, > 0. */
  noiseCounts: Float64Array;
  /** Median over the capture, counts. */
  medianNoiseCounts: number;
  /** Correlation of neighbouring quiet samples' noise, -1 to 1; 0 when too few samples are quiet. */
  lagOneCorrelation: number;
  /** Correlation by lag, first entry lag one, as far as it can be told from none; empty for white noise. */
  autocorrelation: Float64Array;
  /** By how much the noise about a baseline that follows alike noise is too low, 1 where it is white: already in `noiseCounts`. */
  followed: number;
  /** 1 where the sample is quiet: no line, no gap. */
  quiet: Uint8Array;
}

const blocksWanted = 32;
const shortestBlock = 32;
const rounds = 5;
const clipSigmas = 3;
const startShare = 0.3;
/** The first knots are low. */
const firstClipSigmas = 6;
const leastQuietShare = 0.2;
/** Relative variance of the median of three such deviations, times the samples of one: 1.36 (normal noise) x 0.45. */
const medianOfThreeVariance = 0.61;
/** Consistency of the median absolute deviation with the standard deviation of normal noise. */
const madToSd = 1.4826;
/** The block's own knot takes up some of its scatter: share per sample by which the deviation is low. Found by simulation. */
const knotShare = 1;
/** The rounds end when no knot moves by more than this share of the noise: a third of what a knot's own noise is. */
const settledShare = 0.05;
/** Samples beside a high one that a line's flank may reach. */
const flank = 3;
/** The spread below the baseline is taken from at most so many samples. */
const mostForSpread = 1024;

/** With more samples than this share at the least count, the upper quantile of all tells the spread: that of a normal deviate. */
const leastAtFloor = 0.15;
const floorQuantile = 0.75;
const floorQuantileSd = 0.6745;
const upperQuantile = 0.8413;
/** Of normal noise the deviation is 0.71 of this quantile; where it is less than this share of it, half of the counts are cut off. */
const leastOfUpper = 0.45;
/** Mean of the lower half of |z| (normal), 4 (phi(0) - phi(0.6745)), times sqrt(3/2) for the two neighbours' own noise. */
const lowerHalfOfSteps = 0.3976;
const fewestSteps = 6;
/** With fewer samples below the baseline their spread is that of the steps. */
const fewestBelow = 8;

let scratch = new Float64Array(0);

/**
 * Estimate baseline and noise.
 *
 * @param counts  counts, NaN for gaps, length >= 8
 * @returns arrays of the same length; the noise is never zero (a capture without any scatter gets a millionth of its span)
 */
export function estimateBaseline(counts: Float64Array): Baseline {
  const n = counts.length;
  if (scratch.length < n) scratch = new Float64Array(n);
  const block = Math.max(shortestBlock, Math.ceil(n / blocksWanted));
  const blocks = Math.max(1, Math.floor(n / block));
  const edges = Int32Array.from({ length: blocks + 1 }, (_, b) => (b === blocks ? n : b * block));
  const centres = Float64Array.from({ length: blocks }, (_, b) => (edges[b]! + edges[b + 1]! - 1) / 2);
  const knots = new Float64Array(blocks);
  const baseline = new Float64Array(n);
  const limits = new Float64Array(n);
  const quiet = new Uint8Array(n);
  const leastNoise = leastNoiseOf(counts, quiet);

  const local = stepSpread(counts, edges, leastNoise);
  // Lines only add light: the lower third of each block is nearer the baseline than its median. Once more about straight lines between
  // those, so that a slope does not make it low.
  for (let pass = 0; pass < 2; pass += 1) {
    for (let b = 0; b < blocks; b += 1)
      knots[b] = knotOf(counts, baseline, quiet, edges[b]!, edges[b + 1]!, startShare, 1);
    interpolate(centres, fillGaps(knots), baseline, local);
  }
  let sd = 0;
  let isSettled = false;
  for (let round = 0; round < rounds && !isSettled; round += 1) {
    interpolate(centres, fillGaps(knots), baseline, local);
    interpolate(centres, local, limits, null);
    sd = lowerSpread(counts, baseline, limits);
    const clip = round === 0 ? firstClipSigmas : clipSigmas;
    for (let i = 0; i < n; i += 1) limits[i] = clip * Math.max(sd * limits[i]!, leastNoise);
    maskLines(counts, baseline, limits, quiet);
    isSettled = true;
    let known = 0;
    const before = knots.slice();
    for (let b = 0; b < blocks; b += 1) {
      const least = Math.max(3, leastQuietShare * (edges[b + 1]! - edges[b]!));
      const knot = knotOf(counts, baseline, quiet, edges[b]!, edges[b + 1]!, 0.5, least);
      if (!(Math.abs(knot - knots[b]!) <= settledShare * sd * local[b]!) && (knot === knot || knots[b] === knots[b]))
        isSettled = false;
      knots[b] = knot;
      if (knot === knot) known += 1;
    }
    if (known === 0) {
      // Lines everywhere: what was found before is nearer than nothing.
      knots.set(before);
      isSettled = true;
    }
  }
  interpolate(centres, fillGaps(knots), baseline, local);
  const raw = blockNoise(counts, baseline, quiet, edges, Math.max(sd * median(local), leastNoise));
  const noiseCounts = new Float64Array(n);
  let noise = shrinkToCommon(raw, edges[1]!, 1);
  spreadNoise(centres, noise, leastNoise, noiseCounts);
  const alike = estimateAutocorrelation(counts, baseline, quiet, noiseCounts, block);
  if (alike.byLag.length > 0) {
    // Alike samples tell less of the noise of a block, so the blocks differ more by chance.
    let squares = 1;
    for (const value of alike.byLag) squares += 2 * value * value;
    noise = shrinkToCommon(raw, edges[1]!, squares);
    spreadNoise(centres, noise, leastNoise, noiseCounts);
    for (let i = 0; i < n; i += 1) noiseCounts[i] = noiseCounts[i]! * alike.noiseFactor;
  }
  return {
    baseline,
    noiseCounts,
    medianNoiseCounts: Math.max(alike.noiseFactor * medianInPlace(noise, blocks), leastNoise),
    lagOneCorrelation: alike.lagOne,
    autocorrelation: alike.byLag,
    followed: alike.noiseFactor,
    quiet,
  };
}

/** Marks the samples that are there; the least noise that such counts can have, by their span and the step they are written in. */
function leastNoiseOf(counts: Float64Array, quiet: Uint8Array): number {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  let step = Number.POSITIVE_INFINITY;
  let before = NaN;
  for (let i = 0; i < counts.length; i += 1) {
    const value = counts[i]!;
    if (value !== value) continue;
    if (value < low) low = value;
    if (value > high) high = value;
    const change = value > before ? value - before : before - value;
    if (change > 0 && change < step) step = change;
    before = value;
    quiet[i] = 1;
  }
  if (!(high > low)) return 1e-12 * Math.max(Math.abs(high), 1e-300);
  // A step that is a good share of the whole is the signal itself.
  const byStep = step < 0.02 * (high - low) ? step / Math.sqrt(12) : 0;
  return Math.max(1e-6 * (high - low), byStep);
}

/**
 * A block's knot: the mean baseline of the block plus a quantile of its quiet samples over it, so that a slope with one half of the block masked
 * does not shift it; NaN where fewer than `least` are quiet.
 */
function knotOf(
  counts: Float64Array,
  baseline: Float64Array,
  quiet: Uint8Array,
  from: number,
  to: number,
  share: number,
  least: number,
): number {
  const values = scratch;
  let m = 0;
  let mean = 0;
  for (let i = from; i < to; i += 1) {
    mean += baseline[i]! / (to - from);
    if (quiet[i] === 1) values[m++] = counts[i]! - baseline[i]!;
  }
  if (m < least) return NaN;
  return mean + (share === 0.5 ? medianInPlace(values, m) : selectInPlace(values, m, Math.floor(share * (m - 1))));
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

/**
 * Straight lines between the knots; beyond the outermost level, or, where the two outermost differ by more than `levelWithin` of theirs, on the
 * line through them.
 */
function interpolate(
  centres: Float64Array,
  knots: Float64Array,
  out: Float64Array,
  levelWithin: Float64Array | null,
): void {
  const n = out.length;
  const last = centres.length - 1;
  const slopeOf = (b: number): number => (knots[b + 1]! - knots[b]!) / (centres[b + 1]! - centres[b]!);
  const endSlope = (b: number, end: number): number =>
    levelWithin !== null && last > 0 && Math.abs(knots[b + 1]! - knots[b]!) > levelWithin[end]! ? slopeOf(b) : 0;
  let i = 0;
  const before = endSlope(0, 0);
  for (; i < n && (last === 0 || i <= centres[0]!); i += 1) out[i] = knots[0]! + (i - centres[0]!) * before;
  for (let b = 0; b < last; b += 1) {
    const from = centres[b]!;
    const start = knots[b]!;
    const slope = slopeOf(b);
    const end = Math.min(n, Math.floor(centres[b + 1]!) + 1);
    for (; i < end; i += 1) out[i] = start + (i - from) * slope;
  }
  const after = endSlope(last - 1, last);
  for (; i < n; i += 1) out[i] = knots[last]! + (i - centres[last]!) * after;
}

/**
 * Per block, spread of what a sample differs by from the mean of its neighbours, of white noise its deviation: needs no baseline, so that a
 * broad hump with more noise than the rest is seen as such. Mean of the lower half, median of three blocks: lines' samples are in the upper.
 */
function stepSpread(counts: Float64Array, edges: Int32Array, least: number): Float64Array {
  const blocks = edges.length - 1;
  const values = scratch;
  const raw = new Float64Array(blocks).fill(NaN);
  for (let b = 0; b < blocks; b += 1) {
    let m = 0;
    for (let i = Math.max(1, edges[b]!); i < edges[b + 1]! && i + 1 < counts.length; i += 1) {
      const step = Math.abs(counts[i]! - (counts[i - 1]! + counts[i + 1]!) / 2);
      if (step === step) values[m++] = step;
    }
    if (m < fewestSteps) continue;
    const half = m >> 1;
    selectInPlace(values, m, half);
    let sum = 0;
    for (let k = 0; k < half; k += 1) sum += values[k]!;
    raw[b] = Math.max(least, sum / half / lowerHalfOfSteps);
  }
  const filled = fillGaps(raw);
  for (let b = 0; b < blocks; b += 1) if (!(filled[b]! > 0)) filled[b] = least;
  return medianOfThree(filled);
}

function medianOfThree(values: Float64Array): Float64Array {
  const smooth = values.slice();
  const three = new Float64Array(3);
  for (let b = 1; b + 1 < values.length; b += 1) {
    three[0] = values[b - 1]!;
    three[1] = values[b]!;
    three[2] = values[b + 1]!;
    smooth[b] = medianInPlace(three, 3);
  }
  return smooth;
}

/**
 * Spread of what lies below the baseline, over the local measure of it: lines do not reach there. Where many samples have the least count of
 * the capture, the counts were cut off at a floor, and the upper part tells it.
 */
function lowerSpread(counts: Float64Array, baseline: Float64Array, local: Float64Array): number {
  const values = scratch;
  const n = counts.length;
  const stride = Math.max(1, Math.floor(n / mostForSpread));
  let [below, atFloor, seen] = [0, 0, 0];
  let floor = Number.POSITIVE_INFINITY;
  for (let i = 0; i < n; i += stride) if (counts[i]! < floor) floor = counts[i]!;
  for (let i = 0; i < n; i += stride) {
    const residual = (counts[i]! - baseline[i]!) / local[i]!;
    if (residual < 0) values[below++] = -residual;
    if (counts[i] === floor) atFloor += 1;
    if (residual === residual) seen += 1;
  }
  if (atFloor < leastAtFloor * seen) return below < fewestBelow ? 1 : madToSd * medianInPlace(values, below);
  let m = 0;
  for (let i = 0; i < n; i += stride) {
    const residual = (counts[i]! - baseline[i]!) / local[i]!;
    if (residual === residual) values[m++] = residual;
  }
  return Math.max(0, selectInPlace(values, m, Math.floor(floorQuantile * m)) / floorQuantileSd);
}

/** Quiet = within its limit of the baseline, and no neighbour on either side far above it. */
function maskLines(counts: Float64Array, baseline: Float64Array, limits: Float64Array, quiet: Uint8Array): void {
  const n = counts.length;
  let reach = 0;
  for (let i = 0; i < n; i += 1) {
    const residual = counts[i]! - baseline[i]!;
    const limit = limits[i]!;
    if (residual > limit) {
      quiet[i] = 0;
      if (reach < flank) for (let k = Math.max(0, i - flank); k < i; k += 1) quiet[k] = 0;
      reach = flank;
    } else if (reach > 0) {
      quiet[i] = 0;
      reach -= 1;
    } else quiet[i] = residual >= -2 * limit ? 1 : 0;
  }
}

function blockNoise(
  counts: Float64Array,
  baseline: Float64Array,
  quiet: Uint8Array,
  edges: Int32Array,
  fallback: number,
): Float64Array {
  const blocks = edges.length - 1;
  const values = scratch;
  const raw = new Float64Array(blocks).fill(NaN);
  let known = 0;
  for (let b = 0; b < blocks; b += 1) {
    let m = 0;
    for (let i = edges[b]!; i < edges[b + 1]!; i += 1)
      if (quiet[i] === 1) values[m++] = Math.abs(counts[i]! - baseline[i]!);
    if (m < 8) continue;
    const high = selectInPlace(values, m, Math.floor(upperQuantile * m));
    const deviation = (1 + knotShare / m) * madToSd * medianInPlace(values, m);
    // Counts cut off at a floor, or of few photons: half of them are equal, and the upper part of the spread tells the noise.
    raw[b] = deviation > leastOfUpper * high ? deviation : high;
    known += 1;
  }
  const filled = known > 0 ? fillGaps(raw) : raw.fill(fallback);
  return medianOfThree(filled);
}

function spreadNoise(centres: Float64Array, noise: Float64Array, least: number, out: Float64Array): void {
  interpolate(centres, noise, out, null);
  for (let i = 0; i < out.length; i += 1) if (out[i]! < least) out[i] = least;
}

/**
 * Blocks that differ no more than chance makes them are given the common noise; the more they differ, the more each keeps its own
 * (empirical Bayes). Left as they are, the lowest tenth of the blocks would raise false lines many times over.
 */
function shrinkToCommon(noise: Float64Array, samplesPerBlock: number, redundancy: number): Float64Array {
  const common = medianInPlace(noise.slice(), noise.length);
  if (!(common > 0)) return noise.slice();
  let spread = 0;
  for (const value of noise) spread += ((value / common - 1) * (value / common - 1)) / noise.length;
  const byChance = (redundancy * medianOfThreeVariance) / samplesPerBlock;
  const kept = spread > 0 ? Math.max(0, 1 - byChance / spread) : 0;
  return noise.map((value) => common + kept * (value - common));
}
