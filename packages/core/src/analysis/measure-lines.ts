/**
 * The lines of a check's captures, whatever captures those are: one exposure or several, scans in one direction or both, the whole range or
 * windows of it.
 *
 * Exposures   each line from the capture where it is strongest and not saturated; heights, areas and baselines in counts of the capture with
 *             the most light
 * Directions  the position is the mean of the upward and the downward one, whatever the number of scans of each; their difference is the
 *             backlash
 * Windows     each file is fitted by itself: its noise comes from its own fit. Windows of the same stretch are repeats of one line
 */
import { findLines, type FindLinesOptions, type FittedWindow, type FoundLines } from "../spectrum/find-lines.ts";
import { median } from "../spectrum/median.ts";
import type { CaptureGroup, CombinedCaptures } from "./combine-captures.ts";
import { findInWindow } from "./find-in-window.ts";
import { repeatabilityFrom, repeatabilityOf } from "./repeatability.ts";
import type { LineRepeatability } from "./line-budget.ts";
import { longestAlone, type Stretch } from "./window-names.ts";
import type { AnalysisSetup, FittedLine, Spectrum } from "./types.ts";

export interface MeasuredLines {
  /** What is drawn and what positions refer to. */
  spectrum: Spectrum;
  found: FoundLines;
  repeatability: (LineRepeatability | null)[];
  /** Weighted mean over the lines, axis unit; null where nothing was scanned in both directions. */
  backlash: { value: number; unc: number } | null;
  /** First and last position of each window; null for captures of the whole range. */
  stretches: Stretch[] | null;
}

type Repeats = Omit<CaptureGroup, "names">;

/** A line of another capture is the same one within this share of the width. */
const sameLineWidths = 0.5;

export function measureLines(combined: CombinedCaptures, setup: AnalysisSetup): MeasuredLines {
  if (combined.windows !== undefined) return measureWindows(combined.windows, setup);
  if (combined.exposures !== undefined) return measureExposures(combined, combined.exposures, setup);
  return measureGroup(combined, setup);
}

function optionsOf(setup: AnalysisSetup, group: Repeats | null): FindLinesOptions {
  return {
    falseLinesPerCapture: setup.falseLinesPerCapture,
    lineShape: setup.lineShape ?? "gaussian",
    positionDefinition: setup.positionDefinition ?? "fitted",
    ...(group === null || group.saturated === null
      ? {}
      : { saturated: group.saturated, ceilingCounts: group.ceilingCounts }),
  };
}

/** Captures of one exposure on one axis, in one direction or both. */
function measureGroup(group: Repeats, setup: AnalysisSetup): MeasuredLines {
  const { spectrum, repeats } = group;
  const n = spectrum.positions.length;
  const stretches: Stretch[] | null = n > longestAlone ? null : [[spectrum.positions[0]!, spectrum.positions[n - 1]!]];
  const isDown = repeats.map((one) => one.wasDescending);
  if (!isDown.includes(true) || !isDown.includes(false)) {
    const found = (n > longestAlone ? findLines : findInWindow)(spectrum, optionsOf(setup, group));
    return { spectrum, found, repeatability: repeatabilityOf(group, found, setup), backlash: null, stretches };
  }
  const each = repeats.map((repeat, k) => ({ found: findLines(repeat, optionsOf(setup, group)), isDown: isDown[k]! }));
  const merged = mergeScans(each);
  return {
    spectrum,
    found: merged.found,
    repeatability: merged.repeatability,
    backlash: meanBacklash(merged.found.lines),
    stretches,
  };
}

/** Scans of the same stretch, each found by itself, to one list of lines: those of the first scan that others show too. */
function mergeScans(each: readonly { found: FoundLines; isDown: boolean }[]): {
  found: FoundLines;
  repeatability: (LineRepeatability | null)[];
} {
  const first = each[0]!;
  const offsets = each.map(({ found }) => offsetBetween(first.found.lines, found.lines));
  const repeated: { fitUnc: number; positions: number[] }[] = [];
  const lines = first.found.lines.map((line): FittedLine => {
    const up: FittedLine[] = [];
    const down: FittedLine[] = [];
    each.forEach(({ found, isDown }, k) => {
      const match = k === 0 ? line : nearestLine(found.lines, line.position + offsets[k]!, sameLineWidths * line.fwhm);
      if (match !== null) (isDown ? down : up).push(match);
    });
    const sides = [up, down].filter((side) => side.length > 0).map(meanOfSide);
    const position = sides.reduce((sum, side) => sum + side.mean, 0) / sides.length;
    const unc = Math.sqrt(sides.reduce((sum, side) => sum + side.unc * side.unc, 0)) / sides.length;
    repeated.push({ fitUnc: unc, positions: scatterAbout(sides, position) });
    const both = up.length > 0 && down.length > 0;
    return {
      ...line,
      position,
      positionUnc: unc,
      flags: commonFlags([...up, ...down]),
      ...(both
        ? {
            backlash: {
              value: sides[0]!.mean - sides[1]!.mean,
              unc: Math.sqrt(sides[0]!.unc * sides[0]!.unc + sides[1]!.unc * sides[1]!.unc),
            },
          }
        : {}),
    };
  });
  return { found: { ...first.found, lines }, repeatability: repeatabilityFrom(repeated) };
}

/** Shift of one scan's lines against another's: from the strongest line they share by order of height, refined by the median of all. */
function offsetBetween(a: readonly FittedLine[], b: readonly FittedLine[]): number {
  if (a.length === 0 || b.length === 0) return 0;
  const strongest = (lines: readonly FittedLine[]): FittedLine =>
    lines.reduce((x, y) => (y.peakHeightCounts > x.peakHeightCounts ? y : x));
  const [main, other] = [strongest(a), strongest(b)];
  const rough = Math.abs(other.position - main.position) < 3 * main.fwhm ? other.position - main.position : 0;
  const offsets = a.flatMap((line) => {
    const match = nearestLine(b, line.position + rough, line.fwhm);
    return match === null ? [] : [match.position - line.position];
  });
  return offsets.length === 0 ? rough : median(offsets);
}

function nearestLine(lines: readonly FittedLine[], position: number, within: number): FittedLine | null {
  let found: FittedLine | null = null;
  for (const line of lines) {
    const off = Math.abs(line.position - position);
    if (off <= within && (found === null || off < Math.abs(found.position - position))) found = line;
  }
  return found;
}

interface Side {
  mean: number;
  /** Standard uncertainty of the mean, from the fits. */
  unc: number;
  positions: number[];
}

function meanOfSide(lines: readonly FittedLine[]): Side {
  const n = lines.length;
  let mean = 0;
  let variance = 0;
  for (const line of lines) {
    mean += line.position / n;
    variance += (line.positionUnc * line.positionUnc) / (n * n);
  }
  return { mean, unc: Math.sqrt(variance), positions: lines.map(({ position }) => position) };
}

/** Positions about their own direction's mean, widened for the second mean that was taken; none where no direction was repeated. */
function scatterAbout(sides: readonly Side[], position: number): number[] {
  const n = sides.reduce((sum, side) => sum + side.positions.length, 0);
  const free = n - sides.length;
  if (free < 1) return [];
  const widened = Math.sqrt((n - 1) / free);
  return sides.flatMap((side) => side.positions.map((one) => position + widened * (one - side.mean)));
}

/** Flags that any of the scans has. */
function commonFlags(lines: readonly FittedLine[]): FittedLine["flags"] {
  const flags = new Set<FittedLine["flags"][number]>();
  for (const line of lines) for (const flag of line.flags) flags.add(flag);
  return [...flags];
}

function meanBacklash(lines: readonly FittedLine[]): { value: number; unc: number } | null {
  let weights = 0;
  let sum = 0;
  for (const { backlash, flags } of lines) {
    if (
      backlash === undefined ||
      !(backlash.unc > 0) ||
      flags.some((flag) => flag === "saturated" || flag === "spike")
    ) {
      continue;
    }
    const weight = 1 / (backlash.unc * backlash.unc);
    weights += weight;
    sum += weight * backlash.value;
  }
  if (weights === 0) return null;
  const value = sum / weights;
  // Lines that differ more than their uncertainties say widen the mean's.
  let chiSquare = 0;
  let count = 0;
  for (const { backlash } of lines) {
    if (backlash === undefined || !(backlash.unc > 0)) continue;
    chiSquare += ((backlash.value - value) * (backlash.value - value)) / (backlash.unc * backlash.unc);
    count += 1;
  }
  const growth = count > 1 ? Math.max(1, chiSquare / (count - 1)) : 1;
  return { value, unc: Math.sqrt(growth / weights) };
}

function measureExposures(
  combined: CombinedCaptures,
  exposures: NonNullable<CombinedCaptures["exposures"]>,
  setup: AnalysisSetup,
): MeasuredLines {
  const each = exposures.map(({ group, light }) => ({ ...measureGroup(group, setup), group, light }));
  const longest = each[0]!;
  const chosen: { line: FittedLine; repeatability: LineRepeatability | null; window: FittedWindow | null }[] = [];
  // From the most light to the least: a line is first seen where it is strongest.
  for (const one of each) {
    one.found.lines.forEach((line, k) => {
      const scaled = {
        ...line,
        peakHeightCounts: line.peakHeightCounts / one.light,
        areaCounts: line.areaCounts / one.light,
        takenFrom: one.group.names,
      };
      const entry = {
        line: scaled,
        repeatability: one.repeatability[k] ?? null,
        window: scaledWindow(one.found.windows[line.group] ?? null, one.light),
      };
      const before = chosen.findIndex(
        (other) =>
          Math.abs(other.line.position - line.position) < sameLineWidths * Math.max(line.fwhm, other.line.fwhm),
      );
      if (before < 0) chosen.push(entry);
      else if (isBetter(line, chosen[before]!.line)) chosen[before] = entry;
    });
  }
  // What only a short exposure shows beside a saturated line, or a saturated line's own width, is no second line.
  const kept = chosen.filter(
    ({ line }) =>
      !chosen.some(
        (other) =>
          other.line !== line &&
          line.flags.includes("saturated") &&
          !other.line.flags.includes("saturated") &&
          Math.abs(other.line.position - line.position) < line.fwhm,
      ),
  );
  kept.sort((a, b) => a.line.position - b.line.position);
  const found: FoundLines = {
    ...longest.found,
    lines: kept.map(({ line }, group) => ({ ...line, group })),
    windows: kept.map(({ window }) => window),
    notes: withoutSaturation(longest.found.notes, kept.filter(({ line }) => line.flags.includes("saturated")).length),
  };
  const widths = kept
    .filter(({ line }) => line.flags.every((flag) => flag === "smoothed"))
    .map(({ line }) => line.fwhm);
  if (widths.length > 0) found.medianFwhm = median(widths);
  return {
    spectrum: composite(exposures),
    found,
    repeatability: kept.map(({ repeatability }) => repeatability),
    backlash: meanBacklash(found.lines),
    stretches: longest.stretches,
  };
}

/** Unsaturated before saturated, then the one whose position is better known. */
function isBetter(a: FittedLine, b: FittedLine): boolean {
  const bad = (line: FittedLine): number =>
    line.flags.includes("saturated")
      ? 2
      : // A blend that only the longer exposure resolves is no worse there.
        line.flags.some(
            (flag) => (flag === "poor-fit" && !line.flags.includes("blend")) || flag === "spike" || flag === "edge",
          )
        ? 1
        : 0;
  return bad(a) !== bad(b)
    ? bad(a) < bad(b)
    : bad(a) > 0
      ? a.positionUnc < b.positionUnc
      : a.signalToNoise > b.signalToNoise;
}

function withoutSaturation(notes: readonly string[], saturated: number): string[] {
  return notes
    .filter((text) => !text.includes("saturated"))
    .concat(
      saturated === 0
        ? []
        : [`${saturated} line${saturated === 1 ? " is" : "s are"} saturated in every exposure: record a shorter one.`],
    );
}

function scaledWindow(window: FittedWindow | null, light: number): FittedWindow | null {
  if (window === null || light === 1) return window;
  const scaled = (values: Float64Array): Float64Array => values.map((value) => value / light);
  return {
    ...window,
    fittedCounts: scaled(window.fittedCounts),
    baselineCounts: scaled(window.baselineCounts),
    countsUnc: scaled(window.countsUnc),
  };
}

/** What is drawn: each sample from the capture with the most light that does not have it full, in counts of the first. */
function composite(exposures: NonNullable<CombinedCaptures["exposures"]>): Spectrum {
  const { spectrum } = exposures[0]!.group;
  const counts = spectrum.counts.map((value, i) => {
    if (exposures[0]!.group.saturated?.[i] !== 1) return value;
    const free = exposures.find(({ group }) => group.saturated?.[i] !== 1);
    return free === undefined ? value : free.group.spectrum.counts[i]! / free.light;
  });
  return { ...spectrum, counts };
}

/** Windows that share more than this of the shorter one show the same stretch. */
const sameStretchShare = 0.5;

function measureWindows(windows: readonly CaptureGroup[], setup: AnalysisSetup): MeasuredLines {
  const ends = (spectrum: Spectrum): [number, number] => [
    spectrum.positions[0]!,
    spectrum.positions[spectrum.positions.length - 1]!,
  ];
  const sorted = windows.slice().sort((a, b) => ends(a.spectrum)[0] - ends(b.spectrum)[0]);
  const stretches: CaptureGroup[][] = [];
  for (const window of sorted) {
    const [first, last] = ends(window.spectrum);
    const stretch = stretches.find((one) => {
      const [from, to] = ends(one[0]!.spectrum);
      return Math.min(to, last) - Math.max(from, first) > sameStretchShare * Math.min(to - from, last - first);
    });
    if (stretch === undefined) stretches.push([window]);
    else stretch.push(window);
  }
  const lines: FittedLine[] = [];
  const repeatability: (LineRepeatability | null)[] = [];
  const drawn: (FittedWindow | null)[] = [];
  const positions: number[] = [];
  const counts: number[] = [];
  const baseline: number[] = [];
  let sample: FoundLines | null = null;
  for (const stretch of stretches) {
    const each = stretch.map(({ spectrum }) => ({
      found: findInWindow(spectrum, optionsOf(setup, null)),
      isDown: spectrum.wasDescending,
    }));
    const names = stretch.flatMap((one) => one.names);
    const merged = mergeScans(each);
    const { spectrum } = stretch[0]!;
    // Stretches may touch: a sample that the one before reaches is left out of the drawing.
    let skipped = 0;
    while (
      skipped < spectrum.positions.length &&
      spectrum.positions[skipped]! <= (positions[positions.length - 1] ?? -Infinity)
    ) {
      skipped += 1;
    }
    const shift = positions.length - skipped;
    merged.found.lines.forEach((line, k) => {
      const window = merged.found.windows[line.group] ?? null;
      lines.push({
        ...line,
        windowFirst: line.windowFirst + shift,
        windowLast: line.windowLast + shift,
        group: drawn.length,
        takenFrom: names,
      });
      drawn.push(window === null || skipped > 0 ? null : shiftedWindow(window, shift));
      repeatability.push(merged.repeatability[k] ?? null);
    });
    for (let i = skipped; i < spectrum.positions.length; i += 1) {
      positions.push(spectrum.positions[i]!);
      counts.push(spectrum.counts[i]!);
      baseline.push(merged.found.baseline[i]!);
    }
    if (sample === null || merged.found.lines.length > 0) sample = merged.found;
  }
  // Stretches that touch may both show a line, one of them only in part.
  const order = lines
    .map((_, k) => k)
    .filter((k) => lines.every((other, m) => m === k || !isTwin(lines[k]!, other) || isBetter(lines[k]!, other)))
    .sort((a, b) => lines[a]!.position - lines[b]!.position);
  const widths = lines.filter(({ flags }) => !flags.includes("spike")).map(({ fwhm }) => fwhm);
  const found: FoundLines = {
    ...sample!,
    lines: order.map((k) => lines[k]!),
    windows: drawn,
    baseline: Float64Array.from(baseline),
    medianFwhm: widths.length === 0 ? null : median(widths),
  };
  return {
    spectrum: {
      ...windows[0]!.spectrum,
      wasDescending: false,
      positions: Float64Array.from(positions),
      counts: Float64Array.from(counts),
    },
    found,
    repeatability: order.map((k) => repeatability[k]!),
    backlash: meanBacklash(lines),
    stretches: stretches.map((stretch) => ends(stretch[0]!.spectrum)),
  };
}

function isTwin(a: FittedLine, b: FittedLine): boolean {
  return Math.abs(a.position - b.position) < sameLineWidths * Math.max(a.fwhm, b.fwhm);
}

function shiftedWindow(window: FittedWindow, shift: number): FittedWindow {
  return {
    ...window,
    first: window.first + shift,
    last: window.last + shift,
    samples: window.samples.map((i) => i + shift),
  };
}
