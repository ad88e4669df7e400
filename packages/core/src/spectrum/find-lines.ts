/**
 * A spectrum to fitted lines: baseline and noise, saturation, detection, the capture's line shape, then each line, or group of lines that
 * overlap, fitted.
 *
 * Weights   read noise from the quiet samples; photon noise from the scatter about first fits of the single lines (`photon-gain.ts`)
 * Shape     a Gaussian, the one that is asked for, or by evidence (`capture-shape.ts`)
 * Flags     saturated, blend, edge, spike, poor fit, weak, smoothed: kept, marked, left to the caller
 */
import type {
  CaptureLineShape,
  FittedLine,
  LineFlag,
  LineShapeChoice,
  LineShapeName,
  PositionDefinition,
  Spectrum,
} from "../analysis/types.ts";
import { estimateBaseline } from "./baseline.ts";
import { fitBlend, typicalFit } from "./blends.ts";
import { gaussianShape, givenShape, shapeByEvidence, strongLines, type ShapeInUse } from "./capture-shape.ts";
import { detectLines, type Candidate } from "./detect.ts";
import { estimateGain, fitGroup, spikeLine, type FittedWindow, type FitSettings } from "./fit-groups.ts";
import { axisAt, groupCandidates, type Prepared } from "./line-groups.ts";
import { learnShape } from "./learned-shape.ts";
import { wavelengthScale } from "./local-scale.ts";
import { median } from "./median.ts";
import { findSaturation } from "./saturation.ts";

export type { FittedWindow } from "./fit-groups.ts";

export interface FindLinesOptions {
  /** Expected number of false lines in the capture; default 0.01. */
  falseLinesPerCapture?: number;
  /** 1 where a sample was at the ceiling in the captures this spectrum was made of; default: found in the spectrum itself. */
  saturated?: Uint8Array;
  ceilingCounts?: number | null;
  /** Default `gaussian`. */
  lineShape?: LineShapeChoice;
  /** Default `fitted`. */
  positionDefinition?: PositionDefinition;
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
  /** Correlation by lag, first entry lag one, as far as it can be told from none. */
  noiseAutocorrelation?: number[];
  /** Shape that the lines were fitted with; absent: a Gaussian. */
  lineShape?: CaptureLineShape;
  /** Counts per electron that the lines' scatter shows; 0 or absent: none. */
  countsPerElectron?: number;
  ceilingCounts: number | null;
  /** Median FWHM of the lines that were fitted well, axis units; null when there is none. */
  medianFwhm: number | null;
  /** Plain sentences: smoothed noise, spikes, saturation, shape. */
  notes: string[];
}

/** Lag-one correlation above which a capture is said to be smoothed. */
export const smoothedAbove = 0.2;

/** Largest count, and smallest difference of the largest and the least, whose fourth powers are still numbers. */
const mostCounts = 1e70;
const leastSpanCounts = 1e-70;
/** A line nearer than this many widths to an end of the capture has no whole flank on that side. */
const cutWidths = 0.5;

/** Find and fit the lines of a spectrum. Never throws; a spectrum without lines, or one whose counts can't be squared, gives none. */
export function findLines(spectrum: Spectrum, options: FindLinesOptions = {}): FoundLines {
  const refusal = refusalOf(spectrum.counts);
  if (refusal !== null) {
    const none = findLines({ ...spectrum, counts: new Float64Array(spectrum.counts.length) }, options);
    return { ...none, notes: [refusal] };
  }
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
  const scale = wavelengthScale(spectrum);
  const rate = options.falseLinesPerCapture ?? 0.01;
  const { candidates, typicalWidth } = detectLines(counts, base, saturation.mask, rate, scale);
  const smoothed = base.lagOneCorrelation > smoothedAbove;
  excludeFullAndSpikes(excluded, saturation.mask, candidates, smoothed ? 1 : 0);

  const prepared: Prepared = {
    spectrum,
    counts,
    baseline: base.baseline,
    readNoise: base.noiseCounts,
    autocorrelation: base.autocorrelation,
    excluded,
    pixelIntegrated: spectrum.axisKind === "pixel",
    typicalWidth: typicalWidth ?? 3,
  };
  const { lines, windows, settings } = fitCandidates(prepared, candidates, options);
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
  const others = good.length > 0 ? good : kept.filter((line) => !line.flags.includes("spike"));
  const medianFwhm = others.length > 0 ? median(others.map((line) => line.fwhm)) : null;
  markAgainstWidth(kept, others, spectrum.positions, scale, smoothed);
  markCut(kept, spectrum.positions);
  return {
    lines: kept,
    windows,
    baseline: base.baseline,
    noiseCounts: base.medianNoiseCounts,
    noiseCorrelation: base.lagOneCorrelation,
    noiseAutocorrelation: [...base.autocorrelation],
    lineShape: settings.shape.report,
    countsPerElectron: settings.gain.gain,
    ceilingCounts: saturation.ceilingCounts,
    medianFwhm,
    notes: notesOf(kept, base.lagOneCorrelation),
  };
}

/** Squares of counts must be numbers, and not 0: null where they are, else a sentence. */
function refusalOf(counts: Float64Array): string | null {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < counts.length; i += 1) {
    if (counts[i]! < low) low = counts[i]!;
    if (counts[i]! > high) high = counts[i]!;
  }
  const isLarge = high > mostCounts || low < -mostCounts;
  if (!isLarge && !(high > low && high - low < leastSpanCounts)) return null;
  return (
    `The counts are too ${isLarge ? "large" : "small"} to be reckoned with (from ${low.toExponential(1)} to ${high.toExponential(1)}), so no ` +
    `line was looked for: record them in a unit in which they lie between ${leastSpanCounts.toExponential(0)} and ${mostCounts.toExponential(0)}.`
  );
}

function fitCandidates(
  prepared: Prepared,
  candidates: readonly Candidate[],
  options: FindLinesOptions,
): { lines: FittedLine[]; windows: (FittedWindow | null)[]; settings: FitSettings } {
  const choice = options.lineShape ?? "gaussian";
  const { n, typicalWidth } = { n: prepared.counts.length, typicalWidth: prepared.typicalWidth };
  const groupsFor = (name: LineShapeName) => groupCandidates(candidates, n, typicalWidth, name);
  let groups = groupsFor("gaussian");
  let shape: ShapeInUse = gaussianShape(options.lineShape === undefined ? "default" : "setup", 0);
  const firstFits = estimateGain(prepared, groups, shape);
  let gain = firstFits.gain;
  if (choice !== "gaussian") {
    shape = chooseShape(prepared, groupsFor, gain.gain, firstFits.isMisfit, choice);
    if (shape.name !== "gaussian") {
      groups = groupsFor(shape.name);
      gain = estimateGain(prepared, groups, shape).gain;
    }
  }
  const settings: FitSettings = { shape, gain, positionDefinition: options.positionDefinition ?? "fitted" };
  const lines: FittedLine[] = [];
  const windows: (FittedWindow | null)[] = [];
  const each = groups.map((group) => ({ group, parts: fitGroup(prepared, group, settings) }));
  const typical = typicalFit(each.flatMap(({ parts }) => parts));
  for (const { group, parts } of each) {
    const two = typical !== null && parts.length === 1 ? fitBlend(prepared, group, parts[0]!, typical, settings) : null;
    for (const fitted of two === null ? parts : [two]) {
      if (fitted.lines.length === 0) continue;
      for (const line of fitted.lines) {
        line.group = windows.length;
        lines.push(line);
      }
      windows.push(fitted.window);
    }
  }
  return { lines, windows, settings };
}

function chooseShape(
  prepared: Prepared,
  groupsFor: (name: LineShapeName) => ReturnType<typeof groupCandidates>,
  gain: number,
  isMisfit: boolean,
  choice: Exclude<LineShapeChoice, "gaussian">,
): ShapeInUse {
  // The wings are where shapes differ: the windows are as wide as the widest of them needs.
  const strong = strongLines(prepared, groupsFor("voigt"), gain);
  if (choice === "automatic") {
    return strong.length < 2 || !isMisfit
      ? gaussianShape("evidence", strong.length)
      : shapeByEvidence(prepared, strong);
  }
  if (choice === "empirical") {
    const start = isMisfit ? shapeByEvidence(prepared, strong) : gaussianShape("setup", strong.length);
    const learned = learnShape(prepared, strong, start);
    if (learned !== null) return learned;
    const note = `Only ${strong.length} strong single lines: too few to learn a shape from. ${start.report.note}`;
    return { ...start, report: { ...start.report, note } };
  }
  return givenShape(prepared, strong, choice);
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

/** Two tops of one broad line may converge on the same place; the weaker is dropped. Lines ascend. */
function dropMergedTwins(lines: FittedLine[]): FittedLine[] {
  let widest = 0;
  for (const line of lines) if (line.fwhm > widest) widest = line.fwhm;
  const isTwin = (line: FittedLine, other: FittedLine): boolean =>
    !other.flags.includes("spike") &&
    Math.abs(other.position - line.position) < 0.25 * Math.max(line.fwhm, other.fwhm) &&
    (other.peakHeightCounts > line.peakHeightCounts ||
      (other.peakHeightCounts === line.peakHeightCounts && other.position < line.position));
  return lines.filter((line, k) => {
    for (let m = k - 1; m >= 0 && line.position - lines[m]!.position < 0.25 * widest; m -= 1)
      if (isTwin(line, lines[m]!)) return false;
    for (let m = k + 1; m < lines.length && lines[m]!.position - line.position < 0.25 * widest; m += 1)
      if (isTwin(line, lines[m]!)) return false;
    return true;
  });
}

/** Lines that are narrower than the others, of uneven samples both in samples and in wavelength, are none of the instrument's. */
function markAgainstWidth(
  lines: FittedLine[],
  others: readonly FittedLine[],
  positions: Float64Array,
  scale: Float64Array | null,
  smoothed: boolean,
): void {
  const middleOf = (line: FittedLine): number => (line.windowFirst + line.windowLast) >> 1;
  const perSample = (line: FittedLine): number => 1 / axisAt(positions, middleOf(line)).step;
  const measures: ((line: FittedLine) => number)[] =
    scale === null ? [() => 1] : [perSample, (line) => perSample(line) * scale[middleOf(line)]!];
  const typical = measures.map((factor) => median(others.map((line) => line.fwhm * factor(line))));
  for (const line of lines) {
    if (smoothed && !line.flags.includes("spike")) line.flags.push("smoothed");
    if (line.flags.includes("spike") || line.flags.includes("poor-fit")) continue;
    const widest = line.fwhm + 2 * line.fwhmUnc;
    if (measures.every((factor, k) => widest * factor(line) < 0.5 * typical[k]!)) line.flags.push("spike");
  }
}

/** A fit may move a line's top to the end of the capture, or beyond it: there its place is only where the samples end. */
function markCut(lines: FittedLine[], positions: Float64Array): void {
  const first = positions[0] ?? 0;
  const last = positions[positions.length - 1] ?? 0;
  for (const line of lines) {
    const inside = Math.min(line.position - first, last - line.position);
    if (inside < cutWidths * line.fwhm && !line.flags.some((flag) => flag === "edge" || flag === "spike"))
      line.flags.push("edge");
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
