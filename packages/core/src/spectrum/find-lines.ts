/**
 * A spectrum to fitted lines: baseline and noise, saturation, detection, then each line, or group of lines that overlap, fitted.
 *
 * Weights   read noise from the quiet samples; photon noise from the scatter about first fits of the single lines (`photon-gain`)
 * Flags     saturated, blend, edge, spike, poor fit, weak, smoothed: kept, marked, left to the caller
 */
import type { FittedLine, LineFlag, Spectrum } from "../analysis/types.ts";
import { fitLines, type FittedShape, type LineFit, type LineStart } from "../lineshape/fit-line.ts";
import { estimateBaseline } from "./baseline.ts";
import { detectLines, type Candidate } from "./detect.ts";
import { median } from "./median.ts";
import { estimatePhotonGain, leveragesOf, type LineScatter } from "./photon-gain.ts";
import { findSaturation } from "./saturation.ts";

export interface FindLinesOptions {
  /** Expected number of false lines in the capture; default 0.01. */
  falseLinesPerCapture?: number;
  /** 1 where a sample was at the ceiling in the captures this spectrum was made of; default: found in the spectrum itself. */
  saturated?: Uint8Array;
  ceilingCounts?: number | null;
}

/** The fitted curve of one line's window, for drawing. */
export interface FittedWindow {
  first: number;
  last: number;
  /** Sample indices that were fitted. */
  samples: Int32Array;
  fittedCounts: Float64Array;
  /** Straight baseline of the fit at each of those samples. */
  baselineCounts: Float64Array;
  countsUnc: Float64Array;
}

export interface FoundLines {
  lines: FittedLine[];
  /** One per group number of `lines`. */
  windows: (FittedWindow | null)[];
  baseline: Float64Array;
  /** Median standard deviation of the quiet samples, counts. */
  noiseCounts: number;
  /** Lag-one correlation of the quiet samples' noise. */
  noiseCorrelation: number;
  ceilingCounts: number | null;
  /** Median FWHM of the lines that were fitted well, axis units; null when there is none. */
  medianFwhm: number | null;
  /** Plain sentences: smoothed noise, spikes, saturation. */
  notes: string[];
}

/** Lag-one correlation above which a capture is said to be smoothed. */
export const smoothedAbove = 0.2;
/** The window reaches this many widths from the outermost tops of a group. */
const windowWidths = 1.8;
const leastReach = 4;
/** Tops nearer than this many widths are fitted together. */
const groupWidths = 2.6;
const mostTogether = 4;
const blendWidths = 1.5;
const poorFitShare = 0.12;
const weakSigmas = 6;
/** Lines that tell the photon noise: this far above the noise, and at most so many. */
const gainSigmas = 12;
const mostForGain = 10;
/** Share of the width that stands in for an uncertainty where no fit was possible. Common practice, no source. */
const unfittedUncShare = 0.25;

interface Prepared {
  spectrum: Spectrum;
  counts: Float64Array;
  baseline: Float64Array;
  readNoise: Float64Array;
  correlation: number;
  excluded: Uint8Array;
  pixelIntegrated: boolean;
  typicalWidth: number;
}

/** Find and fit the lines of a spectrum. Never throws; a spectrum without lines gives none. */
export function findLines(spectrum: Spectrum, options: FindLinesOptions = {}): FoundLines {
  const n = spectrum.counts.length;
  const base = estimateBaseline(spectrum.counts);
  const leastFlat = median(base.baseline) + 30 * base.medianNoiseCounts;
  const saturation =
    options.saturated === undefined
      ? findSaturation(spectrum.counts, spectrum.fullScaleCounts, spectrum.scansSummed, leastFlat)
      : { mask: options.saturated, ceilingCounts: options.ceilingCounts ?? null };
  const counts = spectrum.counts.slice();
  const excluded = new Uint8Array(n);
  for (let i = 0; i < n; i += 1) {
    if (counts[i] !== counts[i]) {
      counts[i] = base.baseline[i]!;
      excluded[i] = 1;
    }
  }
  const { candidates, typicalWidth } = detectLines(counts, base, saturation.mask, options.falseLinesPerCapture ?? 0.01);
  const smoothed = base.lagOneCorrelation > smoothedAbove;
  excludeFullAndSpikes(excluded, saturation.mask, candidates, smoothed ? 1 : 0);

  const prepared: Prepared = {
    spectrum,
    counts,
    baseline: base.baseline,
    readNoise: base.noiseCounts,
    correlation: base.lagOneCorrelation,
    excluded,
    pixelIntegrated: spectrum.axisKind === "pixel",
    typicalWidth: typicalWidth ?? 3,
  };
  const groups = groupCandidates(
    candidates.filter((one) => !one.spike),
    n,
    prepared.typicalWidth,
  );
  const gain = estimateGain(prepared, groups);
  const lines: FittedLine[] = [];
  const windows: (FittedWindow | null)[] = [];
  for (const group of groups) {
    for (const fitted of fitGroup(prepared, group, gain)) {
      if (fitted.lines.length === 0) continue;
      for (const line of fitted.lines) lines.push({ ...line, group: windows.length });
      windows.push(fitted.window);
    }
  }
  for (const spike of candidates) {
    if (!spike.spike) continue;
    lines.push(spikeLine(prepared, spike, windows.length));
    windows.push(null);
  }
  lines.sort((a, b) => a.position - b.position);
  const kept = dropMergedTwins(lines);
  const good = kept.filter(
    (line) => !line.flags.some((flag) => flag === "spike" || flag === "saturated" || flag === "poor-fit"),
  );
  const medianFwhm = (good.length > 0 ? good : kept.filter((line) => !line.flags.includes("spike"))).map(
    (line) => line.fwhm,
  );
  markAgainstWidth(kept, medianFwhm.length > 0 ? median(medianFwhm) : null, smoothed);
  return {
    lines: kept,
    windows,
    baseline: base.baseline,
    noiseCounts: base.medianNoiseCounts,
    noiseCorrelation: base.lagOneCorrelation,
    ceilingCounts: saturation.ceilingCounts,
    medianFwhm: medianFwhm.length > 0 ? median(medianFwhm) : null,
    notes: notesOf(kept, base.lagOneCorrelation),
  };
}

function excludeFullAndSpikes(excluded: Uint8Array, full: Uint8Array, candidates: Candidate[], beside: number): void {
  const n = excluded.length;
  for (let i = 0; i < n; i += 1) {
    if (full[i] !== 1) continue;
    for (let k = Math.max(0, i - beside); k <= Math.min(n - 1, i + beside); k += 1) excluded[k] = 1;
  }
  for (const one of candidates) {
    if (!one.spike) continue;
    const reach = Math.max(1, Math.ceil(one.width / 2));
    for (let k = Math.max(0, one.top - reach); k <= Math.min(n - 1, one.top + reach); k += 1) excluded[k] = 1;
  }
}

interface Group {
  members: Candidate[];
  first: number;
  last: number;
  /** A first fit's result, nearer the truth than the half-height crossings. */
  starts?: LineStart[];
}

function groupCandidates(candidates: Candidate[], n: number, typicalWidth: number): Group[] {
  const widthOf = (one: Candidate): number => Math.max(Math.min(one.width, 2 * typicalWidth), 0.7 * typicalWidth, 1.2);
  const groups: Candidate[][] = [];
  for (const one of candidates) {
    const current = groups[groups.length - 1];
    const before = current?.[current.length - 1];
    const near =
      before !== undefined && one.centre - before.centre < groupWidths * Math.max(widthOf(one), widthOf(before));
    if (near && current!.length < mostTogether) current!.push(one);
    else groups.push([one]);
  }
  return groups.map((members, g) => {
    const reachOf = (one: Candidate): number => Math.max(leastReach, Math.round(windowWidths * widthOf(one)));
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

/** Position in axis units at a fractional sample index, and the axis' step there. */
function axisAt(positions: Float64Array, index: number): { position: number; step: number } {
  const n = positions.length;
  const i = Math.max(0, Math.min(n - 2, Math.floor(index)));
  const step = positions[i + 1]! - positions[i]!;
  return { position: positions[i]! + (index - i) * step, step };
}

function windowOf(prepared: Prepared, group: Group, gain: number) {
  const { spectrum, counts, baseline, readNoise, excluded } = prepared;
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
    // Mean of three: a sample's own noise must not make its weight.
    const beside = (i > 0 ? counts[i - 1]! : counts[i]!) + (i + 1 < counts.length ? counts[i + 1]! : counts[i]!);
    const signal = (beside + counts[i]!) / 3 - baseline[i]!;
    unc[k] = Math.sqrt(readNoise[i]! * readNoise[i]! + (signal > 0 ? gain * signal : 0));
    k += 1;
  }
  return { samples, positions, values, unc };
}

function startsOf(prepared: Prepared, group: Group): LineStart[] {
  if (group.starts !== undefined) return group.starts;
  return group.members.map((one) => {
    const { position, step } = axisAt(prepared.spectrum.positions, one.centre);
    const width = Math.max(0.7 * prepared.typicalWidth, Math.min(one.width, 2 * prepared.typicalWidth));
    return { centre: position, fwhm: width * step, peakHeightCounts: one.saturated ? 1.3 * one.height : one.height };
  });
}

/** Counts per electron, from first fits of single lines of all heights. */
function estimateGain(prepared: Prepared, groups: Group[]): number {
  const single = groups
    .filter(({ members }) => members.length === 1 && !members[0]!.saturated)
    .filter(({ members }) => members[0]!.height > gainSigmas * prepared.readNoise[members[0]!.top]!)
    .sort((a, b) => b.members[0]!.height - a.members[0]!.height);
  const scatters: LineScatter[] = [];
  const step = Math.max(1, single.length / mostForGain);
  for (let at = 0; at < single.length; at += step) {
    const group = single[Math.floor(at)]!;
    const { samples, positions, values, unc } = windowOf(prepared, group, 0);
    if (samples.length < 7) continue;
    const fit = fitLines(
      {
        positions,
        counts: values,
        countsUnc: unc,
        pixelIntegrated: prepared.pixelIntegrated,
        noiseCorrelation: 0,
      },
      startsOf(prepared, group),
    );
    if (fit.outcome === "refused" || !isSane(fit.lines[0]!, startsOf(prepared, group)[0]!)) continue;
    group.starts = fit.lines;
    scatters.push(scatterOf(fit, positions, values, unc));
  }
  return estimatePhotonGain(scatters);
}

/** What a first fit leaves over, beside what each kind of noise would leave. */
function scatterOf(
  fit: Extract<LineFit, { outcome: "fitted" }>,
  positions: Float64Array,
  values: Float64Array,
  unc: Float64Array,
): LineScatter {
  const m = positions.length;
  const { centre, fwhm } = fit.lines[0]!;
  const columns = Array.from({ length: 5 }, () => new Float64Array(m));
  const signals = new Float64Array(m);
  for (let k = 0; k < m; k += 1) {
    const offset = positions[k]! - fit.windowCentre;
    const signal = Math.max(0, fit.fittedCounts[k]! - fit.baseline[0] - fit.baseline[1] * offset);
    const u = (positions[k]! - centre) / fwhm;
    signals[k] = signal;
    // Constant factors do not matter to the space that the columns span.
    columns[0]![k] = signal;
    columns[1]![k] = signal * u;
    columns[2]![k] = signal * u * u;
    columns[3]![k] = 1;
    columns[4]![k] = offset;
  }
  const leverages = leveragesOf(columns);
  let [excess, signal, squareSignal, readVariance] = [0, 0, 0, 0];
  const moments: [number, number, number] = [0, 0, 0];
  for (let k = 0; k < m; k += 1) {
    const residual = values[k]! - fit.fittedCounts[k]!;
    const free = Math.max(0, 1 - leverages[k]!);
    const s = signals[k]!;
    excess += residual * residual - free * unc[k]! * unc[k]!;
    readVariance += (unc[k]! * unc[k]!) / m;
    signal += free * s;
    squareSignal += free * s * s;
    moments[0] += free * free;
    moments[1] += free * free * s;
    moments[2] += free * free * s * s;
  }
  return { excess, signal, squareSignal, readVariance, moments };
}

interface FittedGroup {
  /** Group number still to be set. */
  lines: FittedLine[];
  window: FittedWindow | null;
}

function fitGroup(prepared: Prepared, group: Group, gain: number): FittedGroup[] {
  const { samples, positions, values, unc } = windowOf(prepared, group, gain);
  const starts = startsOf(prepared, group);
  const fit =
    samples.length >= 3 * starts.length + 3
      ? fitLines(
          {
            positions,
            counts: values,
            countsUnc: unc,
            pixelIntegrated: prepared.pixelIntegrated,
            noiseCorrelation: prepared.correlation,
          },
          starts,
        )
      : null;
  const isFitted = fit !== null && fit.outcome === "fitted" && fit.lines.every((line, k) => isSane(line, starts[k]!));
  if (!isFitted) {
    // Lines that can't be told apart together are tried one by one, each on its own side of the valley.
    if (group.members.length > 1) return splitGroup(group).flatMap((part) => fitGroup(prepared, part, gain));
    const line = unfittedLine(prepared, group, group.members[0]!, starts[0]!);
    return [{ lines: line === null ? [] : [line], window: null }];
  }
  const lines = fit.lines.map((line, k): FittedLine => {
    const noise = prepared.readNoise[group.members[k]!.top]!;
    const flags = flagsOf(prepared, group, k, starts);
    const misfit = Math.sqrt(Math.max(0, fit.reducedChiSquare - 1)) * rootMeanSquare(unc);
    if (misfit > poorFitShare * line.peakHeightCounts) flags.push("poor-fit");
    if (line.peakHeightCounts < weakSigmas * noise) flags.push("weak");
    return {
      position: line.centre,
      positionUnc: line.centreUnc,
      fwhm: line.fwhm,
      fwhmUnc: line.fwhmUnc,
      areaCounts: line.areaCounts,
      peakHeightCounts: line.peakHeightCounts,
      signalToNoise: line.peakHeightCounts / noise,
      reducedChiSquare: fit.reducedChiSquare,
      degreesOfFreedom: fit.degreesOfFreedom,
      windowFirst: group.first,
      windowLast: group.last,
      group: -1,
      flags,
    };
  });
  const baselineCounts = positions.map((at) => fit.baseline[0] + fit.baseline[1] * (at - fit.windowCentre));
  const { first, last } = group;
  return [{ lines, window: { first, last, samples, fittedCounts: fit.fittedCounts, baselineCounts, countsUnc: unc } }];
}

function isSane(line: FittedShape, start: LineStart): boolean {
  return (
    Math.abs(line.centre - start.centre) < 1.5 * start.fwhm &&
    line.fwhm > 0.2 * start.fwhm &&
    line.fwhm < 5 * start.fwhm &&
    line.peakHeightCounts > 0
  );
}

function splitGroup(group: Group): Group[] {
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

function rootMeanSquare(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i += 1) sum += values[i]! * values[i]!;
  return Math.sqrt(sum / Math.max(1, values.length));
}

function flagsOf(prepared: Prepared, group: Group, k: number, starts: LineStart[]): LineFlag[] {
  const one = group.members[k]!;
  const flags: LineFlag[] = [];
  if (one.saturated) flags.push("saturated");
  const near = starts.some(
    (other, m) =>
      m !== k && Math.abs(other.centre - starts[k]!.centre) < blendWidths * Math.max(other.fwhm, starts[k]!.fwhm),
  );
  if (near) flags.push("blend");
  const width = Math.max(one.width, prepared.typicalWidth);
  if (one.centre < width || one.centre > prepared.counts.length - 1 - width) flags.push("edge");
  return flags;
}

/** A strong line that no fit describes keeps its half-height centre, with a wide uncertainty; a weak one is dropped. */
function unfittedLine(prepared: Prepared, group: Group, one: Candidate, start: LineStart): FittedLine | null {
  const noise = prepared.readNoise[one.top]!;
  if (one.height < 2 * weakSigmas * noise && !one.saturated) return null;
  const index = group.members.indexOf(one);
  return {
    position: start.centre,
    positionUnc: unfittedUncShare * start.fwhm,
    fwhm: start.fwhm,
    fwhmUnc: start.fwhm / 2,
    areaCounts: 1.0645 * one.height * start.fwhm,
    peakHeightCounts: one.height,
    signalToNoise: one.height / noise,
    reducedChiSquare: 0,
    degreesOfFreedom: 0,
    windowFirst: group.first,
    windowLast: group.last,
    group: -1,
    flags: [...flagsOf(prepared, group, index, startsOf(prepared, group)), "poor-fit"],
  };
}

function spikeLine(prepared: Prepared, one: Candidate, number: number): FittedLine {
  const { position, step } = axisAt(prepared.spectrum.positions, one.top);
  return {
    position,
    positionUnc: step / Math.sqrt(12),
    fwhm: one.width * step,
    fwhmUnc: step / 2,
    areaCounts: one.height * step,
    peakHeightCounts: one.height,
    signalToNoise: one.height / prepared.readNoise[one.top]!,
    reducedChiSquare: 0,
    degreesOfFreedom: 0,
    windowFirst: Math.max(0, one.top - 1),
    windowLast: Math.min(prepared.counts.length - 1, one.top + 1),
    group: number,
    flags: ["spike"],
  };
}

/** Two tops of one broad line may converge on the same place; the weaker is dropped. */
function dropMergedTwins(lines: FittedLine[]): FittedLine[] {
  return lines.filter(
    (line) =>
      !lines.some(
        (other) =>
          other !== line &&
          !other.flags.includes("spike") &&
          Math.abs(other.position - line.position) < 0.25 * Math.max(line.fwhm, other.fwhm) &&
          (other.peakHeightCounts > line.peakHeightCounts ||
            (other.peakHeightCounts === line.peakHeightCounts && other.position < line.position)),
      ),
  );
}

function markAgainstWidth(lines: FittedLine[], medianFwhm: number | null, smoothed: boolean): void {
  for (const line of lines) {
    if (smoothed && !line.flags.includes("spike")) line.flags.push("smoothed");
    if (medianFwhm === null || line.flags.includes("spike") || line.flags.includes("poor-fit")) continue;
    if (line.fwhm + 2 * line.fwhmUnc < 0.5 * medianFwhm) line.flags.push("spike");
  }
}

function notesOf(lines: FittedLine[], correlation: number): string[] {
  const notes: string[] = [];
  const count = (flag: LineFlag): number => lines.filter((line) => line.flags.includes(flag)).length;
  const spikes = count("spike");
  const full = count("saturated");
  if (correlation > smoothedAbove) {
    notes.push(
      `The noise of neighbouring samples is alike (correlation ${correlation.toFixed(2)}): the capture was smoothed. The uncertainties take that in.`,
    );
  }
  if (full > 0)
    notes.push(
      `${full} line${full === 1 ? " is" : "s are"} saturated: record a shorter exposure to use ${full === 1 ? "it" : "them"}.`,
    );
  if (spikes > 0)
    notes.push(
      `${spikes} spike${spikes === 1 ? "" : "s"} narrower than the instrument's lines ${spikes === 1 ? "was" : "were"} set aside.`,
    );
  return notes;
}
