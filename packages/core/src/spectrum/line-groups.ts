/**
 * Which candidates are fitted together, on which samples, and with which weights.
 *
 * Group    tops nearer than 2.6 widths, at most four
 * Window   from the outermost tops so many widths as the shape needs (its wings carry what parts shape and background), but not past the
 *          middle between two groups
 * Weights  variance of a sample = read noise² + gain x signal, the signal from a fitted curve where there is one (its own noise must not
 *          make a sample's weight), else from the mean of three samples
 */
import type { LineShapeName, Spectrum } from "../analysis/types.ts";
import type { LineStart } from "../lineshape/fit-line.ts";
import type { Candidate } from "./detect.ts";

export interface Prepared {
  spectrum: Spectrum;
  /** Counts with gaps filled by the baseline. */
  counts: Float64Array;
  baseline: Float64Array;
  readNoise: Float64Array;
  /** Correlation of the noise by lag, first entry lag one; empty for white noise. */
  autocorrelation: Float64Array;
  /** 1 where a sample stays out of every fit. */
  excluded: Uint8Array;
  pixelIntegrated: boolean;
  typicalWidth: number;
}

export interface Group {
  members: Candidate[];
  first: number;
  last: number;
  /** A first fit's result, nearer the truth than the half-height crossings, and its curve above the background at each sample used. */
  starts?: LineStart[];
  signal?: Float64Array;
}

export interface GroupWindow {
  samples: Int32Array;
  positions: Float64Array;
  values: Float64Array;
  unc: Float64Array;
}

const groupWidths = 2.6;
const mostTogether = 4;
const leastReach = 4;

/** The window reaches this many widths from the outermost tops of a group. */
const windowWidths: Record<LineShapeName, number> = {
  gaussian: 1.8,
  box: 1.5,
  "exponentially-modified-gaussian": 2.6,
  "pseudo-voigt": 3,
  voigt: 3,
  lorentzian: 3.5,
  empirical: 2.4,
};

export function groupCandidates(
  candidates: readonly Candidate[],
  n: number,
  typicalWidth: number,
  shape: LineShapeName,
): Group[] {
  const widthOf = (one: Candidate): number => Math.max(Math.min(one.width, 2 * typicalWidth), 0.7 * typicalWidth, 1.2);
  const groups: Candidate[][] = [];
  for (const one of candidates) {
    if (one.spike) continue;
    const current = groups[groups.length - 1];
    const before = current?.[current.length - 1];
    const near =
      before !== undefined && one.centre - before.centre < groupWidths * Math.max(widthOf(one), widthOf(before));
    if (near && current!.length < mostTogether) current!.push(one);
    else groups.push([one]);
  }
  const reachOf = (one: Candidate): number => Math.max(leastReach, Math.round(windowWidths[shape] * widthOf(one)));
  return groups.map((members, g) => {
    let first = Math.round(members[0]!.centre) - reachOf(members[0]!);
    const end = members[members.length - 1]!;
    let last = Math.round(end.centre) + reachOf(end);
    const previous = groups[g - 1];
    const next = groups[g + 1];
    if (previous !== undefined) {
      const other = previous[previous.length - 1]!;
      first = Math.max(first, Math.ceil((other.centre + members[0]!.centre) / 2));
    }
    if (next !== undefined) last = Math.min(last, Math.floor((end.centre + next[0]!.centre) / 2));
    return { members, first: Math.max(0, first), last: Math.min(n - 1, last) };
  });
}

/** Each member by itself, on its own side of the valleys. */
export function splitGroup(group: Group): Group[] {
  return group.members.map((one, k) => {
    const before = group.members[k - 1];
    const after = group.members[k + 1];
    return {
      members: [one],
      first: before === undefined ? group.first : Math.ceil((before.centre + one.centre) / 2),
      last: after === undefined ? group.last : Math.floor((one.centre + after.centre) / 2),
    };
  });
}

export function windowOf(prepared: Prepared, group: Group, gain: number): GroupWindow {
  const { spectrum, counts, excluded } = prepared;
  let m = 0;
  for (let i = group.first; i <= group.last; i += 1) if (excluded[i] === 0) m += 1;
  const samples = new Int32Array(m);
  const positions = new Float64Array(m);
  const values = new Float64Array(m);
  const unc = new Float64Array(m);
  let k = 0;
  for (let i = group.first; i <= group.last; i += 1) {
    if (excluded[i] !== 0) continue;
    samples[k] = i;
    positions[k] = spectrum.positions[i]!;
    values[k] = counts[i]!;
    k += 1;
  }
  weigh(prepared, group, gain, samples, unc);
  return { samples, positions, values, unc };
}

/** Standard uncertainty of each sample of a window, counts. */
export function weigh(prepared: Prepared, group: Group, gain: number, samples: Int32Array, unc: Float64Array): void {
  const { counts, baseline, readNoise } = prepared;
  const n = counts.length;
  const known = group.signal !== undefined && group.signal.length === samples.length ? group.signal : null;
  for (let k = 0; k < samples.length; k += 1) {
    const i = samples[k]!;
    let signal = 0;
    if (gain > 0 && known !== null) signal = known[k]!;
    else if (gain > 0) {
      const beside = (i > 0 ? counts[i - 1]! : counts[i]!) + (i + 1 < n ? counts[i + 1]! : counts[i]!);
      signal = (beside + counts[i]!) / 3 - baseline[i]!;
    }
    unc[k] = Math.sqrt(readNoise[i]! * readNoise[i]! + (signal > 0 ? gain * signal : 0));
  }
}

/** Position in axis units at a fractional sample index, and the axis' step there. */
export function axisAt(positions: Float64Array, index: number): { position: number; step: number } {
  const n = positions.length;
  const i = Math.max(0, Math.min(n - 2, Math.floor(index)));
  const step = positions[i + 1]! - positions[i]!;
  return { position: positions[i]! + (index - i) * step, step };
}

export function startsOf(prepared: Prepared, group: Group): LineStart[] {
  if (group.starts !== undefined) return group.starts;
  return group.members.map((one) => {
    const { position, step } = axisAt(prepared.spectrum.positions, one.centre);
    const width = Math.max(0.7 * prepared.typicalWidth, Math.min(one.width, 2 * prepared.typicalWidth));
    return { centre: position, fwhm: width * step, peakHeightCounts: one.saturated ? 1.3 * one.height : one.height };
  });
}
