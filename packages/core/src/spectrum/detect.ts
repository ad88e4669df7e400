/**
 * Where lines stand, before any is fitted: peaks of the smoothed residual above a threshold with a stated false-alarm rate, told apart
 * from hot pixels and spikes by their width, split where a valley shows.
 */
import { normalQuantile } from "../numeric/distributions.ts";
import type { Baseline } from "./baseline.ts";
import { median, medianInPlace } from "./median.ts";

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

/**
 * @param counts    counts with gaps already filled by the baseline
 * @param saturated 1 where a sample is at the ceiling
 * @param falseLinesPerCapture  expected number of false lines in the whole capture
 */
export function detectLines(
  counts: Float64Array,
  base: Baseline,
  saturated: Uint8Array,
  falseLinesPerCapture: number,
): Detection {
  const n = counts.length;
  const residual = new Float64Array(n);
  for (let i = 0; i < n; i += 1) residual[i] = counts[i]! - base.baseline[i]!;
  const typicalWidth = findTypicalWidth(residual, base, saturated);
  // Two searches, each a chance of a false line at every sample.
  const threshold = normalQuantile(1 - Math.min(0.4, falseLinesPerCapture / (2 * n)));
  const width = typicalWidth ?? 3;
  const candidates = width >= narrowestWithSpikes ? takeLoneSamples(residual, base, saturated) : [];

  // Narrow smoothing keeps neighbours apart; broad smoothing, matched to the line, finds the weak ones between them.
  const narrowBox = oddAtLeastOne(width / 2);
  const narrow = smooth(residual, narrowBox);
  const tops = findTops(narrow, noiseOf(narrow, base), threshold, residual, base, narrowBox >> 1);
  const broadBox = oddAtLeastOne(0.8 * width);
  const broad = smooth(smooth(residual, broadBox), broadBox);
  for (const top of findTops(broad, noiseOf(broad, base), threshold, residual, base, broadBox)) {
    if (tops.every((other) => Math.abs(other - top) > 1.2 * width)) tops.push(top);
  }
  tops.sort((a, b) => a - b);

  for (const top of tops) {
    const one = describe(narrow, residual, top, saturated, tops);
    if (typicalWidth !== null && one.width > bandShare * typicalWidth && !one.saturated) continue;
    const others = tops.filter((other) => Math.abs(other - top) > width / 2);
    const sharp = describe(
      residual,
      residual,
      sharpestNear(residual, top, 1 + Math.round(width / 2)),
      saturated,
      others,
    );
    if (
      typicalWidth !== null &&
      typicalWidth >= narrowestToJudge &&
      !one.saturated &&
      sharp.height > strongSigmas * base.noiseCounts[sharp.top]! &&
      sharp.width < spikeShare * typicalWidth
    ) {
      candidates.push({ ...sharp, spike: true });
    } else candidates.push(one);
  }
  return { candidates: dropWings(dropTwins(candidates), width).sort((a, b) => a.centre - b.centre), typicalWidth };
}

function oddAtLeastOne(width: number): number {
  return 2 * Math.floor(width / 2) + 1;
}

/** Running mean over an odd number of samples, shorter at the ends. */
function smooth(values: Float64Array, box: number): Float64Array {
  if (box <= 1) return values;
  const n = values.length;
  const half = (box - 1) / 2;
  const out = new Float64Array(n);
  let sum = 0;
  let count = 0;
  for (let i = 0; i < Math.min(half, n); i += 1) {
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
  return out;
}

/** Noise of a smoothed residual as it is, correlation of the samples included: measured on the quiet samples. */
function noiseOf(values: Float64Array, base: Baseline): Float64Array {
  const n = values.length;
  const ratios = new Float64Array(n);
  let m = 0;
  for (let i = 0; i < n; i += 1) if (base.quiet[i] === 1) ratios[m++] = Math.abs(values[i]!) / base.noiseCounts[i]!;
  const factor = m < 20 ? 1 : Math.max(1.4826 * medianInPlace(ratios, m), 1e-3);
  const out = new Float64Array(n);
  for (let i = 0; i < n; i += 1) out[i] = factor * base.noiseCounts[i]!;
  return out;
}

/** Tops above the threshold, one for each hill that a deep enough valley parts from its neighbours. */
function findTops(
  values: Float64Array,
  noise: Float64Array,
  threshold: number,
  residual: Float64Array,
  base: Baseline,
  ends: number,
): number[] {
  const n = values.length;
  const tops: number[] = [];
  let top = -1;
  let valley = -1;
  const isDeep = (from: number, bottom: number, to: number): boolean => {
    const lower = Math.min(values[from]!, values[to]!);
    return lower - values[bottom]! > Math.max(valleySigmas * noise[bottom]!, valleyShare * lower);
  };
  for (let i = 0; i < n; i += 1) {
    const value = values[i]!;
    const rises = i === 0 || value > values[i - 1]!;
    if (top >= 0 && (valley < 0 || value < values[valley]!)) valley = i;
    if (!rises || value < threshold * noise[i]!) continue;
    let end = i;
    while (end + 1 < n && values[end + 1] === value) end += 1;
    if (end + 1 < n && values[end + 1]! > value) continue;
    const at = (i + end) >> 1;
    if (top >= 0 && valley >= 0 && valley < at && isDeep(top, valley, at)) {
      tops.push(top);
      top = at;
      valley = -1;
    } else if (top < 0 || value > values[top]!) {
      top = at;
      valley = -1;
    }
  }
  if (top >= 0) tops.push(top);
  // A top must stand out in the samples themselves, not only in their running mean over a step.
  // At the ends the running mean is over fewer samples, and a line is cut off.
  return tops.filter((at) => residual[at]! > base.noiseCounts[at]! && at >= ends && at < n - ends);
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
function takeLoneSamples(residual: Float64Array, base: Baseline, saturated: Uint8Array): Candidate[] {
  const spikes: Candidate[] = [];
  for (let i = 1; i + 1 < residual.length; i += 1) {
    const height = residual[i]!;
    const higherNeighbour = Math.max(residual[i - 1]!, residual[i + 1]!);
    const out = height - higherNeighbour;
    if (saturated[i] === 1 || out < strongSigmas * base.noiseCounts[i]! || out < 0.5 * height) continue;
    spikes.push({ top: i, centre: i, width: 1, height, spike: true, saturated: false });
    residual[i] = (residual[i - 1]! + residual[i + 1]!) / 2;
  }
  return spikes;
}

/** Half-height crossings on both sides of a top, not beyond the neighbouring tops. */
function describe(
  shape: Float64Array,
  residual: Float64Array,
  top: number,
  saturated: Uint8Array,
  tops: readonly number[],
): Candidate {
  const n = shape.length;
  let leftLimit = 0;
  let rightLimit = n - 1;
  for (const other of tops) {
    if (other < top && other > leftLimit) leftLimit = other;
    if (other > top && other < rightLimit) rightLimit = other;
  }
  const half = shape[top]! / 2;
  let i = top;
  while (i > leftLimit && shape[i]! > half) i -= 1;
  const left = shape[i]! <= half && i < top ? i + (half - shape[i]!) / (shape[i + 1]! - shape[i]!) : NaN;
  let j = top;
  while (j < rightLimit && shape[j]! > half) j += 1;
  const right = shape[j]! <= half && j > top ? j - (half - shape[j]!) / (shape[j - 1]! - shape[j]!) : NaN;
  let isSaturated = false;
  for (let k = Math.max(0, i); k <= Math.min(n - 1, j); k += 1) if (saturated[k] === 1) isSaturated = true;
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

/** Median width of the strong tops; tops of one or two samples count only when nothing broader is there. */
function findTypicalWidth(residual: Float64Array, base: Baseline, saturated: Uint8Array): number | null {
  const n = residual.length;
  const smoothed = smooth(residual, 3);
  const tops: number[] = [];
  for (let i = 1; i + 1 < n; i += 1) {
    const value = smoothed[i]!;
    if (value > strongSigmas * base.noiseCounts[i]! && value > smoothed[i - 1]! && value >= smoothed[i + 1]!)
      tops.push(i);
  }
  // The strongest in their surroundings, so that ripple on a flat top does not count as many narrow lines.
  tops.sort((a, b) => smoothed[b]! - smoothed[a]!);
  const widths: number[] = [];
  const taken: { left: number; right: number }[] = [];
  for (const top of tops) {
    if (taken.some((one) => top >= one.left && top <= one.right)) continue;
    const one = describe(residual, residual, sharpestNear(residual, top, 1), saturated, []);
    taken.push({ left: one.centre - 1.5 * one.width, right: one.centre + 1.5 * one.width });
    if (!one.saturated) widths.push(one.width);
    if (widths.length >= 40) break;
  }
  if (widths.length === 0) return null;
  const broad = widths.filter((width) => width >= narrowestToJudge);
  return median(broad.length >= Math.max(2, widths.length / 4) ? broad : widths);
}

/** The two smoothings may find one spike twice. */
function dropTwins(candidates: Candidate[]): Candidate[] {
  return candidates.filter(
    (one, k) =>
      !candidates.some((other, m) => m < k && Math.abs(other.top - one.top) <= 1 && other.spike === one.spike),
  );
}

/** What stands on the wing of a line fifty times as high is its wing, its ghost or the detector's ringing. */
function dropWings(candidates: Candidate[], width: number): Candidate[] {
  return candidates.filter(
    (one) =>
      one.spike ||
      !candidates.some(
        (other) =>
          !other.spike &&
          one.height < wingShare * other.height &&
          Math.abs(other.centre - one.centre) < wingWidths * width,
      ),
  );
}
