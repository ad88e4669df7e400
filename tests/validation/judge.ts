/**
 * One simulated capture through the core's front door, held against its truth.
 *
 * Solved      identified, no wrong line, and the axis within 0.1 sample of the truth everywhere between the outermost lines that were
 *             rightly named and used
 * Wrong line  a name whose true place lies further than a quarter of the FWHM plus three standard uncertainties from where the line was
 *             found (for a blend: from the stretch its components cover); or a name where no light of a tenth of the fitted height stands
 * Interval    position +- 2 u (with an earlier axis: error +- U) of single, unsaturated lines of the lamp; axis +- k u at eleven places
 *             between the outermost used lines
 */
import {
  analyseCapture,
  axisNm,
  axisUncNm,
  defaultSetup,
  type Analysis,
  type AnalysisSetup,
  type LineResult,
  type LineShapeChoice,
} from "../../packages/core/src/index.ts";
import { shareIn, type Simulated, type TrueLine } from "./simulator/index.ts";

export type ModeName = "earlier-axis" | "range" | "none";

export interface Judged {
  outcome: Analysis["outcome"];
  reason: string | null;
  isSolved: boolean;
  /** Clear lamp lines of the element that has most of them. */
  clearOfOneElement: number;
  wrong: { position: number; namedNm: number; trueNm: number | null; offBySamples: number }[];
  named: number;
  /** Largest departure of the axis between the outermost good lines, samples; NaN without an axis. */
  axisOffSamples: number;
  linesHeld: number;
  linesTried: number;
  axisHeld: number;
  axisTried: number;
  /** Squared departure over the Cramér-Rao bound of single lines (white noise, Gaussian), above 20:1. */
  overBound: number[];
  /** Departure of each single line's position from the truth, samples. */
  centreOff: number[];
  elapsedMs: number;
}

export function setupFor(sim: Simulated, mode: ModeName, lineShape?: LineShapeChoice): AnalysisSetup {
  const identification: AnalysisSetup["mode"] =
    mode === "none"
      ? { kind: "none" }
      : mode === "range"
        ? { kind: "range", ...sim.range }
        : sim.earlierCoefficients === null
          ? { kind: "earlier-axis", axis: "own" }
          : {
              kind: "earlier-axis",
              axis: {
                coefficients: sim.earlierCoefficients,
                firstPx: sim.first,
                lastPx: sim.last,
                chebyshevCovariance: null,
                degreesOfFreedom: null,
                meaning: "standard-air",
              },
            };
  return defaultSetup({
    elements: sim.elements,
    mode: identification,
    reading: {
      fullScaleCounts: sim.fullScaleCounts,
      scansSummed: sim.scansSummed,
      ...(sim.axisKind === "step" ? { axisKind: "step" as const } : {}),
    },
    ...(lineShape === undefined ? {} : { lineShape }),
  });
}

export function judgeCapture(sim: Simulated, mode: ModeName, lineShape?: LineShapeChoice): Judged {
  const bytes = new TextEncoder().encode(sim.text);
  const setup = setupFor(sim, mode, lineShape);
  const begun = performance.now();
  const { analysis } = analyseCapture(bytes, setup);
  const elapsedMs = performance.now() - begun;
  return { ...compare(analysis, sim, mode), elapsedMs };
}

export function compare(analysis: Analysis, sim: Simulated, mode: ModeName): Judged {
  const perSample = sim.axisPerSample;
  const named = analysis.lines.filter((line) => line.wavelengthNm !== null);
  const wrong = named.flatMap((line) => {
    const off = offBy(line, sim);
    return off === null ? [] : [off];
  });
  const wrongAt = new Set(wrong.map((one) => one.position));
  const judged: Judged = {
    outcome: analysis.outcome,
    reason: analysis.reason,
    isSolved: false,
    clearOfOneElement: clearOfOneElement(sim),
    wrong,
    named: named.length,
    axisOffSamples: Number.NaN,
    linesHeld: 0,
    linesTried: 0,
    axisHeld: 0,
    axisTried: 0,
    overBound: [],
    centreOff: [],
    elapsedMs: 0,
  };
  const used = named.filter((line) => line.usedInAxis && !wrongAt.has(line.position)).map((line) => line.position);
  const { dispersion } = analysis;
  if (dispersion !== null && used.length >= 2) {
    const low = Math.min(...used);
    const high = Math.max(...used);
    const { axis } = dispersion;
    const k = coverageFactor(axis.degreesOfFreedom);
    let largest = 0;
    for (let j = 0; j <= 40; j += 1) {
      const position = low + ((high - low) * j) / 40;
      const truth = sim.wavelengthAt(position);
      const step = perSample / 2;
      const nmPerSample = Math.abs(sim.wavelengthAt(position + step) - sim.wavelengthAt(position - step));
      const off = axisNm(axis, position) - truth;
      largest = Math.max(largest, Math.abs(off) / nmPerSample);
      if (j % 4 !== 0 || analysis.outcome !== "identified" || wrong.length > 0) continue;
      judged.axisTried += 1;
      if (Math.abs(off) <= k * (axisUncNm(axis, position) ?? 0)) judged.axisHeld += 1;
    }
    judged.axisOffSamples = largest;
  }
  judged.isSolved = analysis.outcome === "identified" && wrong.length === 0 && judged.axisOffSamples <= 0.1;
  if (analysis.outcome !== "identified") return judged;

  for (const line of named) {
    if (line.blendOfNm.length > 1 || wrongAt.has(line.position)) continue;
    if (line.flags.some((flag) => flag === "saturated" || flag === "blend" || flag === "edge" || flag === "poor-fit"))
      continue;
    const truth = nearest(
      sim,
      line.position,
      (one) => one.order === line.order && Math.abs(one.wavelengthNm - line.wavelengthNm!) < 1e-6,
    );
    // A line beside others that cannot be told apart has no position of its own.
    if (truth === null || truth.crowding > 0.003 || truth.isSaturated) continue;
    judged.linesTried += 1;
    const off = line.position - truth.position;
    judged.centreOff.push(off / perSample);
    if (mode === "earlier-axis" && line.errorNm !== null && line.errorExpandedUncNm !== null) {
      const trueError = sim.earlierAt(truth.position) - truth.trueNm;
      if (Math.abs(line.errorNm - trueError) <= line.errorExpandedUncNm) judged.linesHeld += 1;
    } else if (Math.abs(off) <= coverageFactor(line.positionDegreesOfFreedom ?? null) * line.positionUnc)
      judged.linesHeld += 1;
    if (truth.signalToNoise > 20 && sim.variance !== null && sim.shapeKind.name === "gaussian" && sim.mix === "plain")
      judged.overBound.push((off / perSample) ** 2 / boundOf(sim, truth));
  }
  return judged;
}

function clearOfOneElement(sim: Simulated): number {
  const counts = new Map<string, number>();
  for (const line of sim.truth)
    if (line.from === "lamp" && line.order === 1 && line.signalToNoise > 10 && line.crowding < 0.2)
      counts.set(line.element, (counts.get(line.element) ?? 0) + 1);
  return Math.max(0, ...counts.values());
}

function nearest(sim: Simulated, position: number, isWanted: (line: TrueLine) => boolean): TrueLine | null {
  let best: TrueLine | null = null;
  for (const line of sim.truth)
    if (isWanted(line) && (best === null || Math.abs(line.position - position) < Math.abs(best.position - position)))
      best = line;
  return best;
}

function offBy(line: LineResult, sim: Simulated): Judged["wrong"][number] | null {
  const names = line.blendOfNm.length > 1 ? line.blendOfNm : [line.wavelengthNm!];
  const places = names.map((nm) => sim.positionAt(nm * line.order));
  const brightest = sim.truth
    .filter((one) => Math.abs(one.position - line.position) < Math.max(0.75 * one.fwhm, 3 * line.positionUnc))
    .reduce<TrueLine | null>((best, one) => (best === null || one.height > best.height ? one : best), null);
  const report = (offBySamples: number): Judged["wrong"][number] => ({
    position: line.position,
    namedNm: line.wavelengthNm!,
    trueNm: brightest?.wavelengthNm ?? null,
    offBySamples,
  });
  if (places.some(Number.isNaN)) return report(Number.POSITIVE_INFINITY);
  const low = Math.min(...places);
  const high = Math.max(...places);
  const off = Math.max(0, low - line.position, line.position - high);
  const fwhm =
    sim.fwhmAt(Math.min(sim.samples - 1, Math.max(0, sim.instrument.indexAt(names[0]! * line.order)))) *
    sim.axisPerSample;
  if (off > 0.25 * fwhm + 3 * line.positionUnc) return report(off / sim.axisPerSample);
  if (brightest === null || brightest.height < 0.1 * line.peakHeightCounts) return report(off / sim.axisPerSample);
  return null;
}

/** Variance of the centre that no unbiased estimate beats: centre, width, height and a straight baseline all free. Samples squared. */
export function boundOf(sim: Simulated, line: TrueLine): number {
  const fwhm = sim.fwhmAt(line.sample);
  const area = (line.height * fwhm) / sim.shape.peak;
  const from = Math.max(0, Math.ceil(line.sample - 4 * fwhm));
  const to = Math.min(sim.samples - 1, Math.floor(line.sample + 4 * fwhm));
  const information = Array.from({ length: 5 }, () => new Float64Array(5));
  const h = 1e-3 * fwhm;
  for (let i = from; i <= to; i += 1) {
    const u = i - line.sample;
    const row = [
      (area * (shareIn(sim.shape, u - h, fwhm) - shareIn(sim.shape, u + h, fwhm))) / (2 * h),
      (area * (shareIn(sim.shape, u, fwhm + h) - shareIn(sim.shape, u, fwhm - h))) / (2 * h),
      shareIn(sim.shape, u, fwhm),
      1,
      u,
    ];
    for (let a = 0; a < 5; a += 1)
      for (let b = 0; b < 5; b += 1) information[a]![b] = information[a]![b]! + (row[a]! * row[b]!) / sim.variance![i]!;
  }
  // First element of the inverse: solve for the first unit vector by elimination with the largest pivot.
  const scale = information.map((row, i) => 1 / Math.sqrt(row[i]!));
  const m = information.map((row, i) => [
    ...Array.from(row, (value, j) => value * scale[i]! * scale[j]!),
    i === 0 ? scale[0]! : 0,
  ]);
  for (let c = 0; c < 5; c += 1) {
    let pivot = c;
    for (let r = c + 1; r < 5; r += 1) if (Math.abs(m[r]![c]!) > Math.abs(m[pivot]![c]!)) pivot = r;
    [m[c], m[pivot]] = [m[pivot]!, m[c]!];
    for (let r = 0; r < 5; r += 1) {
      if (r === c) continue;
      const factor = m[r]![c]! / m[c]![c]!;
      for (let k = c; k < 6; k += 1) m[r]![k] = m[r]![k]! - factor * m[c]![k]!;
    }
  }
  return (m[0]![5]! / m[0]![0]!) * scale[0]!;
}

/** Student's factor for 95.45 % by the Cornish-Fisher series about z = 2; exact values for one and two degrees of freedom. */
export function coverageFactor(degreesOfFreedom: number | null): number {
  if (degreesOfFreedom === null || degreesOfFreedom > 1e6) return 2;
  const v = degreesOfFreedom;
  if (v < 1.5) return 13.97;
  if (v < 2.5) return 4.53;
  return 2 + 10 / (4 * v) + 294 / (96 * v * v) + 1114 / (384 * v * v * v);
}
