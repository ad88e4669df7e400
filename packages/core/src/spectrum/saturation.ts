/**
 * Where the detector was full: samples at a known ceiling (full scale times scans summed), or at a ceiling the capture itself
 * shows as a flat top (three or more neighbouring samples with exactly the largest count of the capture).
 */

export interface Saturation {
  /** Counts at which the detector is full, or null when none is known and none shows. */
  ceilingCounts: number | null;
  /** 1 where the sample is at the ceiling. */
  mask: Uint8Array;
}

/** A sample within this share of the ceiling is taken as full: smoothing and the last bits of a converter hide the exact top. */
const ceilingShare = 0.99;
const flatSamples = 3;

/**
 * @param leastFlatCounts  a flat top below this is no ceiling: whole counts stand side by side in any weak capture
 */
export function findSaturation(
  counts: Float64Array,
  fullScaleCounts: number | null,
  scansSummed: number,
  leastFlatCounts: number,
): Saturation {
  const n = counts.length;
  const mask = new Uint8Array(n);
  const known = fullScaleCounts === null ? null : fullScaleCounts * scansSummed;
  let ceiling = known;
  let top = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < n; i += 1) if (counts[i]! > top) top = counts[i]!;
  if (ceiling === null || top < ceilingShare * ceiling) {
    const shown = top > leastFlatCounts && longestRun(counts, top) >= flatSamples ? top : null;
    ceiling = shown ?? ceiling;
  }
  if (ceiling === null) return { ceilingCounts: null, mask };
  const limit = ceilingShare * ceiling;
  for (let i = 0; i < n; i += 1) if (counts[i]! >= limit) mask[i] = 1;
  return { ceilingCounts: ceiling, mask };
}

function longestRun(counts: Float64Array, value: number): number {
  let longest = 0;
  let run = 0;
  for (let i = 0; i < counts.length; i += 1) {
    run = counts[i] === value ? run + 1 : 0;
    if (run > longest) longest = run;
  }
  return longest;
}
