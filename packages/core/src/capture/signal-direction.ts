/**
 * Whether a signal's lines point down (a photomultiplier's negative current, a reversed amplifier), and turning it over.
 *
 * Judged on the median of three neighbours, so that single dead or hot samples say nothing. Lines point down when the signal falls below
 * its median at least four times as far as it rises above it, and the deep parts are narrow and lie within the capture: a dark end or a
 * cut-off filter is no line. Where no sample is above 0, deeper than high is enough.
 */

/** Down over up, and share of all samples that may lie below half depth. Common practice, no source. */
const leastRatio = 4;
const mostDeepShare = 0.2;
/** The same where no sample is above 0: a current that flows the other way, also in a short window that its line fills. */
const leastRatioBelowZero = 1;
const mostDeepShareBelowZero = 0.6;
/** Fall over the spread of the quiet samples: below it there are no lines at all. */
const leastDepth = 12;

export function pointsDown(counts: Float64Array): boolean {
  const n = counts.length;
  const values = new Float64Array(n);
  let kept = 0;
  for (let i = 0; i < n; i += 1) if (counts[i] === counts[i]) values[kept++] = counts[i]!;
  if (kept < 8) return false;
  const smooth = new Float64Array(kept - 2);
  for (let i = 1; i + 1 < kept; i += 1) smooth[i - 1] = middleOf(values[i - 1]!, values[i]!, values[i + 1]!);
  let top = smooth[0]!;
  let bottom = smooth[0]!;
  for (const value of smooth) {
    if (value > top) top = value;
    if (value < bottom) bottom = value;
  }
  // Half way between the ends parts lines from the rest: no sorting is needed for a plain signal, whose samples lie low.
  const half = (top + bottom) / 2;
  let low = 0;
  for (const value of smooth) if (value < half) low += 1;
  const isBelowZero = top <= 0;
  const deepShare = isBelowZero ? mostDeepShareBelowZero : mostDeepShare;
  if (low > deepShare * smooth.length || low === 0) return false;
  const sorted = Float64Array.from(smooth).sort();
  const level = sorted[smooth.length >> 1]!;
  const down = level - bottom;
  if (down < (isBelowZero ? leastRatioBelowZero : leastRatio) * (top - level)) return false;
  if (isBelowZero) return deepPartsLieWithin(smooth, half);
  // Lines that point down leave the upper half of the samples alone: its quartile is 0.674 standard deviations of the noise above the median.
  const quartile = sorted[(3 * smooth.length) >> 2]!;
  if (down < (leastDepth * (quartile - level)) / 0.674) return false;
  return deepPartsLieWithin(smooth, level - down / 2);
}

/** The deepest part is no stretch that touches an end. */
function deepPartsLieWithin(smooth: Float64Array, limit: number): boolean {
  const last = smooth.length - 1;
  return smooth[0]! > limit && smooth[last]! > limit;
}

function middleOf(a: number, b: number, c: number): number {
  return Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
}

/** The signal turned over about its largest value: never negative, and in the order of before. */
export function turnOver(counts: Float64Array): Float64Array {
  let top = Number.NEGATIVE_INFINITY;
  for (const value of counts) if (value > top) top = value;
  return counts.map((value) => top - value);
}
