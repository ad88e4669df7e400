/**
 * Darks: what the detector counts without light, by exposure time, and the hot pixels they show.
 *
 * Dark     bias + rate x exposure, sample by sample. A dark of the lamp's own exposure is taken off as it is; darks of two exposures or more
 *          give bias and rate by a straight line
 * Hot      a sample that stands above its neighbours by more than 8 times the dark's own scatter, alone or with one beside it: narrower than any
 *          line of an instrument
 */
import { beamNoise } from "../bands/ordinate.ts";
import { median } from "../spectrum/median.ts";
import { meanOf } from "./read-captures.ts";

export interface Dark {
  counts: Float64Array;
  exposureMs: number | null;
}

/** Exposures that differ by less than this share are the same. */
const sameExposureShare = 0.02;
const hotSigmas = 8;

export function isSameExposure(a: number, b: number): boolean {
  return Math.abs(a - b) <= sameExposureShare * Math.max(a, b);
}

/** @returns what is to be taken off a capture of that exposure, null for nothing, and a sentence where it is not plain */
export function darkFor(
  darks: readonly Dark[],
  exposureMs: number | null,
): { counts: Float64Array | null; remark: string | null } {
  if (darks.length === 0) return { counts: null, remark: null };
  const n = darks[0]!.counts.length;
  const mean = (some: readonly Dark[]): Float64Array =>
    meanOf(
      some.map(({ counts }) => counts),
      n,
    );
  if (exposureMs === null || darks.some((dark) => dark.exposureMs === null))
    return { counts: mean(darks), remark: null };
  const same = darks.filter((dark) => isSameExposure(dark.exposureMs!, exposureMs));
  if (same.length > 0) return { counts: mean(same), remark: null };
  const times = darks.map((dark) => dark.exposureMs!);
  const middle = times.reduce((sum, time) => sum + time, 0) / times.length;
  let square = 0;
  for (const time of times) square += (time - middle) * (time - middle);
  if (square < 1e-4 * middle * middle) {
    return {
      counts: null,
      remark: `The dark was recorded with ${plain(times[0]!)} ms, the lamp with ${plain(exposureMs)} ms: it was not taken off. Lines are measured above a baseline of their own all the same; record a dark of the same exposure.`,
    };
  }
  const average = mean(darks);
  const counts = average.map((value, i) => {
    let slope = 0;
    darks.forEach((dark, k) => (slope += ((times[k]! - middle) * (dark.counts[i]! - value)) / square));
    return value + slope * (exposureMs - middle);
  });
  return {
    counts,
    remark: `No dark has the lamp's exposure of ${plain(exposureMs)} ms: one was made from darks of other exposures.`,
  };
}

function plain(milliseconds: number): string {
  return String(Math.round(milliseconds * 1000) / 1000);
}

/** Samples that are hot in the mean of the darks. */
export function hotPixelsOf(darks: readonly Dark[]): { mask: Uint8Array; count: number } {
  const n = darks[0]!.counts.length;
  const counts = meanOf(
    darks.map((dark) => dark.counts),
    n,
  );
  const noise = Math.max(beamNoise(counts), 1e-12);
  const mask = new Uint8Array(n);
  let count = 0;
  for (let i = 0; i < n; i += 1) {
    const around: number[] = [];
    for (const k of [i - 4, i - 3, i - 2, i + 2, i + 3, i + 4]) {
      const value = k >= 0 && k < n ? counts[k]! : NaN;
      if (value === value) around.push(value);
    }
    if (around.length < 3) continue;
    // The neighbours two samples on must be dark: a line of stray light is broader.
    const level = median(around);
    const beside = Math.max(counts[i - 2] ?? level, counts[i + 2] ?? level);
    if (counts[i]! - level > hotSigmas * noise && counts[i]! - level > 4 * (beside - level)) {
      mask[i] = 1;
      count += 1;
    }
  }
  return { mask, count };
}
