/**
 * The groups of a capture to fitted lines: first fits, weights from the fitted curves, final fits, flags.
 *
 * Photon noise  the scatter about first, evenly weighted fits of single lines of all heights (`photon-gain.ts`)
 * Two fits      the second with weights from the first one's curve, so that a sample's own noise does not make its weight
 * Position      as the setup defines it (`position-definition.ts`)
 */
import type { FittedLine, LineFlag, PositionDefinition } from "../analysis/types.ts";
import {
  fitLines,
  isBeyondChance,
  type FittedShape,
  type FittedWindowOfLines,
  type LineStart,
} from "../lineshape/fit-line.ts";
import { misfitOf, parameterName, redundancyOf, type ShapeInUse } from "./capture-shape.ts";
import type { Candidate } from "./detect.ts";
import {
  axisAt,
  splitGroup,
  startsOf,
  weigh,
  windowOf,
  type Group,
  type GroupWindow,
  type Prepared,
} from "./line-groups.ts";
import { estimatePhotonGain, scatterOf, type LineScatter, type PhotonGain } from "./photon-gain.ts";
import { positionBy } from "./position-definition.ts";
import { addScores, noScores, showsMisfit } from "./shape-scores.ts";

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

export interface FittedGroup {
  /** Group number still to be set. */
  lines: FittedLine[];
  window: FittedWindow | null;
}

export interface FitSettings {
  shape: ShapeInUse;
  gain: PhotonGain;
  positionDefinition: PositionDefinition;
}

const blendWidths = 1.5;
const poorFitShare = 0.12;
const weakSigmas = 6;
/** Lines that tell the photon noise: this far above the noise, and at most so many. */
const gainSigmas = 12;
const mostForGain = 16;
const fewestForGain = 7;
/** Share of the width that stands in for an uncertainty where no fit was possible. Common practice, no source. */
const unfittedUncShare = 0.25;
/** From so many degrees of freedom on an interval is no wider than with all. */
const negligibleFreedom = 200;
const noCorrelation = new Float64Array(0);

/** Counts per electron, and whether the shape fails, from first fits of single lines of all heights; their curves stay with the groups. */
export function estimateGain(
  prepared: Prepared,
  groups: readonly Group[],
  shape: ShapeInUse,
): { gain: PhotonGain; isMisfit: boolean } {
  const single = groups
    .filter(({ members }) => members.length === 1 && !members[0]!.saturated)
    .filter(({ members }) => members[0]!.height > gainSigmas * prepared.readNoise[members[0]!.top]!)
    .sort((a, b) => b.members[0]!.height - a.members[0]!.height);
  const scatters: LineScatter[] = [];
  const scores = noScores();
  const redundancy = redundancyOf(prepared);
  const step = Math.max(1, single.length / mostForGain);
  for (let at = 0; at < single.length; at += step) {
    const group = single[Math.floor(at)]!;
    const window = windowOf(prepared, group, 0);
    if (window.samples.length < fewestForGain) continue;
    const starts = startsOf(prepared, group);
    const fit = fitWindow(prepared, group, window, starts, shape, true, true);
    if (fit === null) continue;
    keepCurve(group, fit, window);
    const residuals = window.values.map((value, k) => value - fit.fittedCounts[k]!);
    const columns = fit.derivatives!;
    scatters.push(scatterOf(columns, residuals, group.signal!, window.unc, prepared.autocorrelation));
    addScores(scores, fit, window, columns, group.signal!, redundancy);
  }
  const isMisfit = showsMisfit(scores);
  // With a wrong shape the bright samples must decide, not the wings: even weights, and the scatter about the fit grows the uncertainty.
  return { gain: isMisfit ? { gain: 0, relativeUnc: 0 } : estimatePhotonGain(scatters), isMisfit };
}

/** One window's lines under a shape; null where the fit is refused or strays from its starts. */
export function fitWindow(
  prepared: Prepared,
  group: Group,
  window: GroupWindow,
  starts: LineStart[],
  shape: ShapeInUse,
  isWhite: boolean,
  withDerivatives: boolean,
): FittedWindowOfLines | null {
  if (window.samples.length < 3 * starts.length + 3) return null;
  const fit = fitLines(
    {
      positions: window.positions,
      counts: window.values,
      countsUnc: window.unc,
      pixelIntegrated: prepared.pixelIntegrated,
      noiseCorrelation: 0,
      noiseAutocorrelation: isWhite ? noCorrelation : prepared.autocorrelation,
    },
    starts,
    { shape: shape.profile, shapeParameter: shape.knownFor(group.members[0]!.top), withDerivatives },
  );
  if (fit.outcome === "refused" || !fit.lines.every((line, k) => isSane(line, starts[k]!))) return null;
  return fit;
}

/** The fit's lines are the next starts, and its curve gives the next weights. */
function keepCurve(group: Group, fit: FittedWindowOfLines, window: GroupWindow): void {
  group.starts = fit.lines;
  const { positions } = window;
  group.signal = new Float64Array(positions.length);
  for (let k = 0; k < positions.length; k += 1) {
    const baseline = fit.baseline[0] + fit.baseline[1] * (positions[k]! - fit.windowCentre);
    group.signal[k] = Math.max(0, fit.fittedCounts[k]! - baseline);
  }
}

/** Fit one group; lines that can't be told apart together are tried one by one. */
export function fitGroup(prepared: Prepared, group: Group, settings: FitSettings): FittedGroup[] {
  const { gain, shape } = settings;
  const window = windowOf(prepared, group, gain.gain);
  const candidateStarts = startsOf(prepared, group);
  let fit = fitWindow(
    prepared,
    group,
    window,
    candidateStarts,
    shape,
    group.signal === undefined && gain.gain > 0,
    false,
  );
  if (fit !== null && gain.gain > 0 && group.signal === undefined) {
    keepCurve(group, fit, window);
    weigh(prepared, group, gain.gain, window.samples, window.unc);
    fit = fitWindow(prepared, group, window, fit.lines, shape, false, false);
  }
  if (fit === null) {
    if (group.members.length > 1) return splitGroup(group).flatMap((part) => fitGroup(prepared, part, settings));
    const line = unfittedLine(prepared, group, group.members[0]!, candidateStarts[0]!);
    return [{ lines: line === null ? [] : [line], window: null }];
  }
  return [resultOf(prepared, group, window, fit, candidateStarts, settings)];
}

/** The lines of a fit with their flags, and its curve. */
export function resultOf(
  prepared: Prepared,
  group: Group,
  window: GroupWindow,
  fit: FittedWindowOfLines,
  starts: LineStart[],
  settings: FitSettings,
): FittedGroup {
  const { shape, gain } = settings;
  const { positions, unc, samples } = window;
  const { first, last } = group;
  const misfit = misfitOf(window, fit);
  const lines = fit.lines.map((line, k): FittedLine => {
    const noise = prepared.readNoise[group.members[k]!.top]!;
    const flags = flagsOf(prepared, group, k, starts);
    if (misfit > poorFitShare * line.peakHeightCounts) flags.push("poor-fit");
    if (line.peakHeightCounts < weakSigmas * noise) flags.push("weak");
    const read = positionBy(settings.positionDefinition, prepared, window, fit, k);
    return {
      position: read?.position ?? line.centre,
      positionUnc: read?.positionUnc ?? withShape(line.centreUnc, (shape.positionShare ?? 0) * line.fwhm),
      fwhm: line.fwhm,
      fwhmUnc: line.fwhmUnc,
      areaCounts: line.areaCounts,
      peakHeightCounts: line.peakHeightCounts,
      signalToNoise: line.peakHeightCounts / noise,
      reducedChiSquare: fit.reducedChiSquare,
      degreesOfFreedom: fit.degreesOfFreedom,
      windowFirst: first,
      windowLast: last,
      group: -1,
      flags,
      shape: shape.name,
      ...freedomOf(prepared, window, fit, k, gain),
      ...shapeParametersOf(shape, fit),
      covariance: line.covariance,
    };
  });
  const baselineCounts = new Float64Array(positions.length);
  for (let k = 0; k < positions.length; k += 1)
    baselineCounts[k] = fit.baseline[0] + fit.baseline[1] * (positions[k]! - fit.windowCentre);
  return { lines, window: { first, last, samples, fittedCounts: fit.fittedCounts, baselineCounts, countsUnc: unc } };
}

function withShape(fitUnc: number, shapeUnc: number): number {
  return shapeUnc === 0 ? fitUnc : Math.sqrt(fitUnc * fitUnc + shapeUnc * shapeUnc);
}

function shapeParametersOf(shape: ShapeInUse, fit: FittedWindowOfLines): Pick<FittedLine, "shapeParameters"> {
  const parameter = shape.held ?? fit.shapeParameter;
  return parameter === null ? {} : { shapeParameters: { [parameterName(shape.name)]: parameter } };
}

/** How well the noise is known that a line's uncertainty comes from: as well as the gain, as far as its photons make it. */
function freedomOf(
  prepared: Prepared,
  window: GroupWindow,
  fit: FittedWindowOfLines,
  k: number,
  gain: PhotonGain,
): Pick<FittedLine, "positionDegreesOfFreedom"> {
  if (gain.gain === 0 || isBeyondChance(fit.reducedChiSquare, fit.degreesOfFreedom)) return {};
  const photons = gain.gain * fit.lines[k]!.peakHeightCounts;
  const middle = window.samples[window.samples.length >> 1] ?? 0;
  const read = prepared.readNoise[middle]! * prepared.readNoise[middle]!;
  const relative = (gain.relativeUnc * photons) / (photons + read);
  const freedom = 2 / (relative * relative);
  return freedom < negligibleFreedom ? { positionDegreesOfFreedom: Math.max(1, freedom) } : {};
}

function isSane(line: FittedShape, start: LineStart): boolean {
  return (
    Math.abs(line.centre - start.centre) < 1.5 * start.fwhm &&
    line.fwhm > 0.2 * start.fwhm &&
    line.fwhm < 5 * start.fwhm &&
    line.peakHeightCounts > 0
  );
}

function flagsOf(prepared: Prepared, group: Group, k: number, starts: readonly LineStart[]): LineFlag[] {
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
    flags: [...flagsOf(prepared, group, group.members.indexOf(one), startsOf(prepared, group)), "poor-fit"],
  };
}

/** A hot pixel or a spike, as it stands. */
export function spikeLine(prepared: Prepared, one: Candidate, number: number): FittedLine {
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
