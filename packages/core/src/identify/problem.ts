/**
 * The question put to the search: where the found lines lie, what is believed about the axis, how far that may be wrong.
 *
 * Axis      lambda(p) = base(p) + a0 T0(t) + a1 T1(t) + a2 T2(t) + a3 T3(t), t = -1..1 over the capture; base is the
 *           earlier axis, or the line between the two ends of a range with the usual third order
 * Bounds    earlier axis: 4 FWHM in offset, 1.2 % in scale about any pixel, curvature nearly as it was (asked again with
 *           each end free by 7 % of the span when that finds nothing). Range: each end 5.6 % of the
 *           span; the axis leaves its chord by at most 5 % of the span (array spectrometers: 1 to 4 %, the two whole-range
 *           captures of the tests 2.7 and 3.7 %); third order from -0.49 to +0.23 % of
 *           the span: sines and a flat detector bend a wide axis so (-0.25 to -0.32 % for 600 to 1,200 grooves per mm over 300
 *           to 650 nm by the grating equation; -0.08 % in the sounder of the two captures)
 */
import type { AxisKind, AxisMeaning, FittedLine, IdentificationMode } from "../analysis/types.ts";
import { axisNm } from "../dispersion/axis.ts";
import { log } from "../numeric/elementary.ts";

export const orderCount = 4;

export interface Bounds {
  /** Largest |correction| at either end of the capture, nm. */
  endNm: number;
  /** Largest |a1| (difference of the ends over two), nm. */
  scaleNm: number;
  /** Largest |a2|, nm; the sagitta is twice that. */
  curvatureNm: number;
  /** Largest |a3|, nm. */
  cubicNm: number;
}

export interface Problem {
  count: number;
  /** -1..1 over the capture. */
  t: Float64Array;
  /** T0..T3 at each line, row-major count x 4. */
  basis: Float64Array;
  /** Wavelength each line would have on the believed axis, nm. */
  baseNm: Float64Array;
  /** Standard uncertainty of each line's position as a wavelength, nm, widened where its flags say so. */
  lineUncNm: Float64Array;
  heightCounts: Float64Array;
  signalToNoise: Float64Array;
  /** Lines that may name themselves: spikes and lines cut off by the edge may not. */
  usable: Uint8Array;
  saturated: Uint8Array;
  /** Lines much wider than the median: unresolved blends. */
  broad: Uint8Array;
  /** Own width of each line over the median one, at least 1. */
  widthRatio: Float64Array;
  /** Indices of usable lines, strongest first. */
  byHeight: number[];
  /** Indices of all lines along the capture. */
  byPlace: number[];
  fwhmNm: number;
  spanNm: number;
  baseFirstNm: number;
  baseLastNm: number;
  bounds: Bounds;
  /** The belief that the axis is a correction of: an earlier axis, or a range (its own ends where only the lamp is known). */
  mode: IdentificationMode;
  axisKind: AxisKind;
  /** Logarithm of the density that is believed of offset and scale, per nm². */
  logDensity: number;
  meaning: AxisMeaning;
  firstPosition: number;
  lastPosition: number;
}

export interface ProblemInput {
  lines: readonly FittedLine[];
  firstPosition: number;
  lastPosition: number;
  axisKind: AxisKind;
  medianFwhm: number;
  mode: IdentificationMode;
  axisMeaning: AxisMeaning;
}

/** Share of the FWHM added to the position's uncertainty where the top of a line is cut off (seen: up to 0.13 FWHM). */
const saturatedShare = 0.1;
/** Of a line nearer to the edge than this share of its width, the top need not be inside. */
const cutShare = 0.5;
const poorFitShare = 0.06;
const broadFactor = 1.3;
const broadShare = 0.12;
/** Unmodelled asymmetry and pixel response, share of the FWHM. Common practice, no source. */
const floorShare = 0.01;

/** Third-order term that a flat detector behind a grating gives a wide axis, share of the span. */
export const usualCubic = -0.0013;

/** Believed wavelength at a position, before any correction, nm. */
function baseNmAt(input: ProblemInput, position: number): number {
  const { mode } = input;
  if (mode.kind === "range") {
    const share = (position - input.firstPosition) / (input.lastPosition - input.firstPosition);
    const t = 2 * share - 1;
    return mode.firstNm + (mode.lastNm - mode.firstNm) * (share + usualCubic * (4 * t * t - 3) * t);
  }
  if (mode.kind === "earlier-axis" && mode.axis !== "own") return axisNm(mode.axis, position);
  return input.axisKind === "wavenumber" ? 1e7 / position : position;
}

/**
 * Set up the question.
 *
 * @param wide  an earlier axis is only trusted to 7 % of its span at each end: asked after the narrow search found nothing
 */
export function buildProblem(input: ProblemInput, wide = false): Problem {
  const count = input.lines.length;
  const { firstPosition, lastPosition } = input;
  const middle = (firstPosition + lastPosition) / 2;
  const half = (lastPosition - firstPosition) / 2;
  const baseFirstNm = baseNmAt(input, firstPosition);
  const baseLastNm = baseNmAt(input, lastPosition);
  const spanNm = Math.abs(baseLastNm - baseFirstNm);
  const fwhmNm = (input.medianFwhm * spanNm) / (lastPosition - firstPosition);
  const bounds = boundsOf(input.mode, spanNm, fwhmNm, wide);
  const problem: Problem = {
    count,
    t: new Float64Array(count),
    basis: new Float64Array(count * orderCount),
    baseNm: new Float64Array(count),
    lineUncNm: new Float64Array(count),
    heightCounts: new Float64Array(count),
    signalToNoise: new Float64Array(count),
    usable: new Uint8Array(count),
    saturated: new Uint8Array(count),
    broad: new Uint8Array(count),
    widthRatio: new Float64Array(count),
    byHeight: [],
    byPlace: [],
    fwhmNm,
    spanNm,
    baseFirstNm,
    baseLastNm,
    bounds,
    mode: input.mode,
    axisKind: input.axisKind,
    logDensity: log(
      input.mode.kind === "range" || wide
        ? 1 / (2 * bounds.endNm * bounds.endNm)
        : 1 / (4 * bounds.scaleNm * (bounds.endNm - bounds.scaleNm)),
    ),
    meaning:
      input.mode.kind === "earlier-axis" && input.mode.axis !== "own" ? input.mode.axis.meaning : input.axisMeaning,
    firstPosition,
    lastPosition,
  };
  if (input.axisKind === "wavenumber") problem.meaning = "vacuum";
  const step = half / 512;
  for (let i = 0; i < count; i++) {
    const line = input.lines[i] as FittedLine;
    const t = (line.position - middle) / half;
    problem.t[i] = t;
    problem.basis.set([1, t, 2 * t * t - 1, (4 * t * t - 3) * t], i * orderCount);
    problem.baseNm[i] = baseNmAt(input, line.position);
    const slope = Math.abs(
      (baseNmAt(input, line.position + step) - baseNmAt(input, line.position - step)) / (2 * step),
    );
    const isSaturated = line.flags.includes("saturated");
    const share = isSaturated ? saturatedShare : line.flags.includes("poor-fit") ? poorFitShare : floorShare;
    const unc = Math.min(Number.isFinite(line.positionUnc) ? line.positionUnc : line.fwhm, line.fwhm) * slope;
    // A line broader than its neighbours hides others: its centre may be theirs by part of what broadens it.
    const excess =
      isSaturated || line.fwhm < broadFactor * input.medianFwhm
        ? 0
        : line.fwhm * line.fwhm - input.medianFwhm * input.medianFwhm;
    const hidden = broadShare * Math.sqrt(Math.max(excess, 0)) * slope;
    problem.broad[i] = excess > 0 ? 1 : 0;
    // Neighbours fitted together share out their width between them: it says nothing of either.
    problem.widthRatio[i] = line.flags.includes("blend") ? 1 : Math.max(1, line.fwhm / input.medianFwhm);
    problem.lineUncNm[i] = Math.sqrt(unc * unc + share * share * fwhmNm * fwhmNm + hidden * hidden);
    problem.heightCounts[i] = line.peakHeightCounts;
    problem.signalToNoise[i] = line.signalToNoise;
    problem.saturated[i] = isSaturated ? 1 : 0;
    // A line whose top may lie outside is no line of a known place.
    const inside = Math.min(line.position - firstPosition, lastPosition - line.position);
    const isCut = line.flags.includes("edge") && inside < cutShare * line.fwhm;
    problem.usable[i] = line.flags.includes("spike") || isCut ? 0 : 1;
  }
  for (let i = 0; i < count; i++) {
    problem.byPlace.push(i);
    if (problem.usable[i] === 1) problem.byHeight.push(i);
  }
  problem.byPlace.sort((a, b) => (problem.t[a] as number) - (problem.t[b] as number));
  problem.byHeight.sort(
    (a, b) =>
      (problem.saturated[b] as number) - (problem.saturated[a] as number) ||
      (problem.heightCounts[b] as number) - (problem.heightCounts[a] as number) ||
      a - b,
  );
  return problem;
}

function boundsOf(mode: IdentificationMode, spanNm: number, fwhmNm: number, wide: boolean): Bounds {
  if (mode.kind === "range") {
    const endNm = 0.056 * spanNm;
    return { endNm, scaleNm: endNm, curvatureNm: 0.025 * spanNm, cubicNm: 0.003 * spanNm };
  }
  if (wide) {
    return { endNm: 0.07 * spanNm, scaleNm: 0.07 * spanNm, curvatureNm: 0.004 * spanNm, cubicNm: 0.001 * spanNm };
  }
  const scaleNm = 0.006 * spanNm;
  return {
    endNm: 4 * fwhmNm + 0.011 * spanNm,
    scaleNm,
    curvatureNm: Math.max(0.3 * fwhmNm, 0.0005 * spanNm),
    cubicNm: Math.max(0.15 * fwhmNm, 0.00025 * spanNm),
  };
}
