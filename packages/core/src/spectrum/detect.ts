/**
 * Where lines stand, before any is fitted: peaks of the smoothed residual above a threshold with a stated false-alarm rate, told apart
 * from hot pixels and spikes by their width, split where a valley shows.
 *
 * Two searches: a narrow running mean keeps neighbours apart, a broad one, matched to the line, finds the weak ones between them. Each is a
 * chance of a false line at every sample, so each gets half of the rate: threshold = normal quantile of 1 - rate / (2 samples), times
 * the noise that the running mean leaves, measured on the quiet samples (correlation of the samples included).
 */
import { normalQuantile } from "../numeric/distributions.ts";
import type { Baseline } from "./baseline.ts";
import { median, medianInPlace, selectInPlace } from "./median.ts";

export interface Candidate {
  /** Sample index of the top. */
  top: number;
  /** Centre between the half-height crossings, in samples. */
  centre: number;
  /** Width at half height, in samples. */
  width: number;
  /** Height over the baseline, counts. */
  height: number;
  spike: boolean;
  saturated: boolean;
}

export interface Detection {
  candidates: Candidate[];
  /** Width at half height of the instrument's lines, samples; null when no line shows it. */
  typicalWidth: number | null;
}

/** A valley between two tops must be this share of the lower one deep, and this many noise deviations. */
const valleyShare = 0.04;
const valleySigmas = 4;
/** Narrower than this share of the instrument's line is no line of a lamp. */
const spikeShare = 0.55;
/** Below this width (samples) a line can't be told from a hot pixel. */
const narrowestToJudge = 1.9;
/** Broader than this many lines is a band, not a line. */
const bandShare = 5;
const strongSigmas = 10;
const wingShare = 0.02;
const wingWidths = 5;
/** With narrower lines a single high sample may be a line's top. */
const narrowestWithSpikes = 2.5;
const mostForWidth = 40;
/** Normal quantiles of the median and the 98th percentile of what lies above the mean. */
const middleZ = 0.6745;
const highZ = 2.326;

let room = new Float64Array(0);
/** Memory for the residual and three running means of it, kept between captures. */
function takeRoom(n: number): {
  residual: Float64Array;
  first: Float64Array;
  second: Float64Array;
  third: Float64Array;
} {
  if (room.length < 4 * n) room = new Float64Array(4 * n);
  return {
    residual: room.subarray(0, n),
    first: room.subarray(n, 2 * n),
    second: room.subarray(2 * n, 3 * n),
    third: room.subarray(3 * n, 4 * n),
  };
}

/**
 * @param counts    counts with gaps already filled by the baseline
 * @param saturated 1 where a sample is at the ceiling
 * @param falseLinesPerCapture  expected number of false lines in the whole capture
 * @param scale     wavelength per sample over its median (`local-scale.ts`); null: even
 */
export function detectLines(
  counts: Float64Array,
  base: Baseline,
  saturated: Uint8Array,
  falseLinesPerCapture: number,
  scale: Float64Array | null = null,
): Detection {
  const n = counts.length;
  const { residual, first, second, third } = takeRoom(n);
  for (let i = 0; i < n; i += 1) residual[i] = counts[i]! - base.baseline[i]!;
  smooth(residual, 3, first);
  const typical = findTypicalWidth(residual, first, base, saturated, scale);
  const typicalWidth = typical?.samples ?? null;
  const scaledWidth = typical?.scaled ?? null;
  /** Narrowest that the instrument's lines are known to be at a sample. */
  const narrowestAt = (i: number): number =>
    scale === null || scaledWidth === null || typicalWidth === null
      ? (typicalWidth ?? 3)
      : Math.min(typicalWidth, scaledWidth / scale[i]!);
  const threshold = normalQuantile(1 - Math.min(0.4, falseLinesPerCapture / (2 * n)));
  const width = typicalWidth ?? 3;
  const candidates = takeLoneSamples(residual, base, saturated, (i) => narrowestAt(i) >= narrowestWithSpikes);

  const narrowBox = oddAtLeastOne(width / 2);
  const narrow = narrowBox === 1 ? residual : first;
  smooth(residual, narrowBox, narrow);
  const tops = findTops(narrow, noiseOf(narrow, base, third, threshold), residual, base, narrowBox >> 1);
  const broadBox = oddAtLeastOne(0.8 * width);
  smooth(residual, broadBox, third);
  smooth(third, broadBox, second);
  const weak = findTops(second, noiseOf(second, base, third, threshold), residual, base, broadBox);
  addBetween(tops, weak, 1.2 * width);

  const reach = 1 + Math.round(width / 2);
  for (let k = 0; k < tops.length; k += 1) {
    const top = tops[k]!;
    const one = describe(narrow, residual, top, saturated, tops[k - 1] ?? 0, tops[k + 1] ?? n - 1);
    if (typicalWidth !== null && one.width > bandShare * typicalWidth && !one.saturated) continue;
    if (typicalWidth === null || narrowestAt(top) < narrowestToJudge || one.saturated) {
      candidates.push(one);
      continue;
    }
    let left = k - 1;
    let right = k + 1;
    while (left >= 0 && top - tops[left]! <= width / 2) left -= 1;
    while (right < tops.length && tops[right]! - top <= width / 2) right += 1;
    const sharpest = sharpestNear(residual, top, reach);
    const sharp = describe(residual, residual, sharpest, saturated, tops[left] ?? 0, tops[right] ?? n - 1);
    const isSpike =
      sharp.height > strongSigmas * base.noiseCounts[sharp.top]! && sharp.width < spikeShare * narrowestAt(sharp.top);
    candidates.push(isSpike ? { ...sharp, spike: true } : one);
  }
  candidates.sort((a, b) => a.centre - b.centre);
  return { candidates: dropWings(dropTwins(candidates), width), typicalWidth };
}

function oddAtLeastOne(width: number): number {
  return 2 * Math.floor(width / 2) + 1;
}

/** Running mean over an odd number of samples, shorter at the ends; `out` may be `values` itself only for a box of one. */
function smooth(values: Float64Array, box: number, out: Float64Array): void {
  const n = values.length;
  if (box <= 1) {
    if (out !== values) out.set(values);
    return;
  }
  const half = (box - 1) / 2;
  let sum = 0;
  let count = 0;
  for (let i = 0; i < half && i < n; i += 1) {
    sum += values[i]!;
    count += 1;
  }
  for (let i = 0; i < n; i += 1) {
    if (i + half < n) {
      sum += values[i + half]!;
      count += 1;
    }
    if (i - half - 1 >= 0) {
      sum -= values[i - half - 1]!;
      count -= 1;
    }
    out[i] = sum / count;
  }
}

/** Of a smoothed residual, in terms of the samples' noise. */
interface SmoothedNoise {
  deviation: number;
  /** What is surpassed with the probability of the normal quantile asked for. */
  limit: number;
}

/**
 * Noise of a smoothed residual over that of the samples, correlation of the samples included: measured on the quiet samples that lie above
 * the baseline, by their median and by their 98th percentile, whichever is more (noise of few photons has a longer tail upwards); more by as much as the
 * baseline followed the noise. The two tell the skewness, and that what is surpassed so many times (E. A. Cornish, R. A. Fisher, Rev. Inst. Int.
 * Stat. 5 (1938) 307, to first order: z + skewness (z² - 1) / 6).
 */
function noiseOf(values: Float64Array, base: Baseline, ratios: Float64Array, z: number): SmoothedNoise {
  const { quiet, noiseCounts } = base;
  let m = 0;
  for (let i = 0; i < values.length; i += 1) {
    if (quiet[i] === 1 && values[i]! > 0) ratios[m++] = values[i]! / noiseCounts[i]!;
  }
  if (m < 20) return { deviation: 1, limit: z };
  const high = selectInPlace(ratios, m, Math.floor(0.98 * m));
  const middle = medianInPlace(ratios, m);
  const deviation = base.followed * Math.max(middle / middleZ, high / highZ, 1e-3);
  // Both quantiles to the same order: their ratio gives the skewness, limited to what the order is good for.
  const ratio = (high * middleZ) / (middle * highZ);
  const shift = (at: number): number => (at * at - 1) / 6;
  const skewness =
    ratio > 1 ? Math.min(1, (ratio - 1) / (shift(highZ) / highZ - (ratio * shift(middleZ)) / middleZ)) : 0;
  const scaled = (base.followed * high * (z + skewness * shift(z))) / (highZ + skewness * shift(highZ));
  return { deviation, limit: Math.max(z * deviation, scaled) };
}

/** Tops above the threshold, one for each hill that a deep enough valley parts from its neighbours; ascending. */
function findTops(
  values: Float64Array,
  noise: SmoothedNoise,
  residual: Float64Array,
  base: Baseline,
  ends: number,
): number[] {
  const n = values.length;
  const { noiseCounts } = base;
  const tops: number[] = [];
  let top = -1;
  let valley = -1;
  const take = (at: number): void => {
    // A top must stand out in the samples themselves, not only in their running mean over a step.
    // At the ends the running mean is over fewer samples, and a line is cut off.
    if (residual[at]! > noiseCounts[at]! && at >= ends && at < n - ends) tops.push(at);
  };
  for (let i = 0; i < n; i += 1) {
    const value = values[i]!;
    if (top >= 0 && (valley < 0 || value < values[valley]!)) valley = i;
    if (value < noise.limit * noiseCounts[i]! || (i > 0 && value <= values[i - 1]!)) continue;
    let end = i;
    while (end + 1 < n && values[end + 1] === value) end += 1;
    if (end + 1 < n && values[end + 1]! > value) continue;
    const at = (i + end) >> 1;
    if (top < 0) {
      top = at;
      valley = -1;
      continue;
    }
    const lower = Math.min(values[top]!, value);
    const isDeep =
      valley >= 0 &&
      valley < at &&
      lower - values[valley]! > Math.max(valleySigmas * noise.deviation * noiseCounts[valley]!, valleyShare * lower);
    if (isDeep) take(top);
    if (isDeep || value > values[top]!) {
      top = at;
      valley = -1;
    }
  }
  if (top >= 0) take(top);
  return tops;
}

/** Adds those of `more` that stand farther than `apart` from every one of `tops`; both ascending. */
function addBetween(tops: number[], more: readonly number[], apart: number): void {
  const count = tops.length;
  let k = 0;
  for (const at of more) {
    while (k < count && tops[k]! < at) k += 1;
    const isFree = (k === 0 || at - tops[k - 1]! > apart) && (k === count || tops[k]! - at > apart);
    if (isFree && (tops.length === count || at - tops[tops.length - 1]! > apart)) tops.push(at);
  }
  if (tops.length > count) tops.sort((a, b) => a - b);
}

function sharpestNear(residual: Float64Array, top: number, reach: number): number {
  let best = top;
  for (let i = Math.max(0, top - reach); i <= Math.min(residual.length - 1, top + reach); i += 1) {
    if (residual[i]! > residual[best]!) best = i;
  }
  return best;
}

/**
 * Single samples that stand out of both neighbours by more than half of their own height: hot pixels, also on the flank of a line. They
 * are taken out of the residual, so that what is left of a line is seen as it is.
 */
function takeLoneSamples(
  residual: Float64Array,
  base: Baseline,
  saturated: Uint8Array,
  isWideEnough: (sample: number) => boolean,
): Candidate[] {
  const spikes: Candidate[] = [];
  for (let i = 1; i + 1 < residual.length; i += 1) {
    const height = residual[i]!;
    if (height < strongSigmas * base.noiseCounts[i]!) continue;
    const out = height - Math.max(residual[i - 1]!, residual[i + 1]!);
    if (saturated[i] === 1 || !isWideEnough(i) || out < strongSigmas * base.noiseCounts[i]! || out < 0.5 * height)
      continue;
    spikes.push({ top: i, centre: i, width: 1, height, spike: true, saturated: false });
    residual[i] = (residual[i - 1]! + residual[i + 1]!) / 2;
  }
  return spikes;
}

/** Half-height crossings on both sides of a top, not beyond the limits. */
function describe(
  shape: Float64Array,
  residual: Float64Array,
  top: number,
  saturated: Uint8Array,
  leftLimit: number,
  rightLimit: number,
): Candidate {
  const half = shape[top]! / 2;
  let isSaturated = false;
  let i = top;
  while (i > leftLimit && shape[i]! > half) {
    if (saturated[i] === 1) isSaturated = true;
    i -= 1;
  }
  const left = shape[i]! <= half && i < top ? i + (half - shape[i]!) / (shape[i + 1]! - shape[i]!) : NaN;
  let j = top;
  while (j < rightLimit && shape[j]! > half) {
    if (saturated[j] === 1) isSaturated = true;
    j += 1;
  }
  const right = shape[j]! <= half && j > top ? j - (half - shape[j]!) / (shape[j - 1]! - shape[j]!) : NaN;
  if (saturated[i] === 1 || saturated[j] === 1) isSaturated = true;
  const leftReach = left === left ? top - left : right === right ? right - top : 1;
  const rightReach = right === right ? right - top : leftReach;
  const both = left === left && right === right;
  return {
    top,
    centre: both ? (left + right) / 2 : top,
    width: leftReach + rightReach,
    height: residual[top]!,
    spike: false,
    saturated: isSaturated,
  };
}

/** Median width of the strong tops, in samples and in wavelength; tops of one or two samples count only when nothing broader is there. */
function findTypicalWidth(
  residual: Float64Array,
  smoothed: Float64Array,
  base: Baseline,
  saturated: Uint8Array,
  scale: Float64Array | null,
): { samples: number; scaled: number } | null {
  const n = residual.length;
  const { noiseCounts } = base;
  const tops: number[] = [];
  for (let i = 1; i + 1 < n; i += 1) {
    const value = smoothed[i]!;
    if (value > strongSigmas * noiseCounts[i]! && value > smoothed[i - 1]! && value >= smoothed[i + 1]!) tops.push(i);
  }
  // The strongest in their surroundings, so that ripple on a flat top does not count as many narrow lines.
  tops.sort((a, b) => smoothed[b]! - smoothed[a]!);
  const widths: { samples: number; scaled: number }[] = [];
  const taken: { left: number; right: number }[] = [];
  for (const top of tops) {
    if (taken.some((one) => top >= one.left && top <= one.right)) continue;
    const one = describe(residual, residual, sharpestNear(residual, top, 1), saturated, 0, n - 1);
    taken.push({ left: one.centre - 1.5 * one.width, right: one.centre + 1.5 * one.width });
    if (!one.saturated) widths.push({ samples: one.width, scaled: one.width * (scale?.[top] ?? 1) });
    if (widths.length >= mostForWidth) break;
  }
  if (widths.length === 0) return null;
  const broad = widths.filter(({ samples }) => samples >= narrowestToJudge);
  const telling = broad.length >= Math.max(2, widths.length / 4) ? broad : widths;
  return {
    samples: median(telling.map(({ samples }) => samples)),
    scaled: median(telling.map(({ scaled }) => scaled)),
  };
}

/** The two smoothings may find one spike twice. */
function dropTwins(candidates: Candidate[]): Candidate[] {
  return candidates.filter((one, k) => {
    for (let m = k - 1; m >= 0 && one.centre - candidates[m]!.centre <= 3; m -= 1) {
      const other = candidates[m]!;
      if (Math.abs(other.top - one.top) <= 1 && other.spike === one.spike) return false;
    }
    return true;
  });
}

/** What stands on the wing of a line fifty times as high is its wing, its ghost or the detector's ringing. */
function dropWings(candidates: Candidate[], width: number): Candidate[] {
  const reach = wingWidths * width;
  const isWing = (one: Candidate, other: Candidate): boolean => !other.spike && one.height < wingShare * other.height;
  return candidates.filter((one, k) => {
    if (one.spike) return true;
    for (let m = k - 1; m >= 0 && one.centre - candidates[m]!.centre < reach; m -= 1)
      if (isWing(one, candidates[m]!)) return false;
    for (let m = k + 1; m < candidates.length && candidates[m]!.centre - one.centre < reach; m += 1)
      if (isWing(one, candidates[m]!)) return false;
    return true;
  });
}
