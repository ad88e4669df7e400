/**
 * From fitted and named lines to errors with their budgets and verdicts, line by line.
 *
 * Budget  reference, blend, fit, repeatability, display resolution, set-up reproducibility, temperature, air (JCGM 100); everything in nm,
 *         positions multiplied by the local dispersion. What is not known is left out and named in `notIncluded`.
 */
import type { LineName } from "../identify/identify-lines.ts";
import { isBeyondChance } from "../lineshape/fit-line.ts";
import { combineContributions, type Contribution } from "../uncertainty/budget.ts";
import { judgeError, toleranceAt, type Judgement } from "../uncertainty/conformity.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import type { AnalysisSetup, FittedLine, LeftOutLine, LineResult } from "./types.ts";

/** A published wavelength is the same line as another within this, nm: lists print at least three decimals. */
export const sameLineNm = 0.002;
/** A blend whose centroid is less sure than this share of the tolerance is not judged. */
const blendShare = 0.2;

export interface JudgedLineResult {
  result: LineResult;
  /** What the verdict would be if no person had left the line out; null when it can't be judged at all. */
  judgement: Judgement | null;
  /** Part of the standard uncertainty that belongs to this line alone, and the part all lines share, nm. */
  ownUncNm: number;
  sharedUncNm: number;
  /** May enter the dispersion fit. */
  fitsAxis: boolean;
}

export interface LineInput {
  line: FittedLine;
  name: LineName | null;
  /** Type A standard uncertainty of the mean position over repeats, axis units, or null with one capture. */
  repeatability: { unc: number; degreesOfFreedom: number } | null;
}

export function isLine(list: readonly number[], wavelengthNm: number): boolean {
  return list.some((one) => Math.abs(one - wavelengthNm) <= sameLineNm);
}

/** Left-out entry that speaks of this line (or of a component of this blend). */
function leftOutEntry(setup: AnalysisSetup, name: LineName): LeftOutLine | null {
  const parts = [name.wavelengthNm, ...blendWavelengths(name)];
  return setup.leftOut.find((entry) => parts.some((part) => Math.abs(part - entry.wavelengthNm) <= sameLineNm)) ?? null;
}

function blendWavelengths(name: LineName): number[] {
  return name.blendOf.map((line) => line.wavelengthAirNm ?? line.wavelengthVacuumNm);
}

/** A line that was found and not named: what is filled in later is null. */
function unnamedResult(line: FittedLine, axis: IndicatingAxis | null): LineResult {
  return {
    position: line.position,
    positionUnc: line.positionUnc,
    fwhm: line.fwhm,
    fwhmUnc: line.fwhmUnc,
    areaCounts: line.areaCounts,
    peakHeightCounts: line.peakHeightCounts,
    signalToNoise: line.signalToNoise,
    reducedChiSquare: line.reducedChiSquare,
    degreesOfFreedom: line.degreesOfFreedom,
    flags: line.flags.slice(),
    wavelengthNm: null,
    medium: "air",
    element: null,
    species: null,
    blendOfNm: [],
    order: 1,
    referenceUncNm: null,
    referenceUncAssumed: false,
    referenceSource: null,
    indicatedNm: axis === null ? null : axis.indicatedNm(line.position),
    errorNm: null,
    errorUncNm: null,
    errorExpandedUncNm: null,
    coverageFactor: null,
    effectiveDegreesOfFreedom: null,
    budget: [],
    toleranceNm: null,
    guardBandNm: null,
    toleranceUsed: null,
    conformanceProbability: null,
    verdict: null,
    nearLimit: false,
    status: "unnamed",
    reason: line.flags.includes("spike")
      ? "Narrower than the instrument's lines: a hot pixel or a spike, no line of a lamp."
      : null,
    leftOut: null,
    required: false,
    usedInAxis: false,
    residualNm: null,
  };
}

/** Judge one line. */
export function judgeLine(input: LineInput, axis: IndicatingAxis | null, setup: AnalysisSetup): JudgedLineResult {
  const { line, name } = input;
  const result = unnamedResult(line, axis);
  const judged: JudgedLineResult = { result, judgement: null, ownUncNm: 0, sharedUncNm: 0, fitsAxis: false };
  if (name === null) return judged;

  const blend = blendWavelengths(name);
  result.wavelengthNm = name.wavelengthNm;
  result.medium = name.medium;
  result.element = name.element;
  result.species = name.species;
  result.order = name.order;
  result.referenceUncNm = name.referenceUncNm;
  result.referenceUncAssumed = name.referenceUncAssumed;
  result.referenceSource = name.referenceSource;
  if (blend.length > 1) {
    result.blendOfNm = blend;
    if (!result.flags.includes("blend")) result.flags.push("blend");
  }
  result.required = [name.wavelengthNm, ...blend].some((nm) => isLine(setup.requiredLinesNm, nm));
  const toleranceNm = toleranceAt(setup.tolerance, name.wavelengthNm);
  const refusedBecause = whyRefused(line, name, setup, toleranceNm);
  const leftOut = leftOutEntry(setup, name);
  result.leftOut = leftOut;
  result.status = refusedBecause !== null ? "refused" : leftOut !== null ? "left-out" : "not-judged";
  result.reason = refusedBecause ?? (leftOut !== null ? leftOutSentence(leftOut) : null);
  judged.fitsAxis = refusedBecause === null && leftOut === null;
  if (axis === null) {
    result.reason ??= "There is no earlier axis that says what the instrument indicated.";
    return judged;
  }

  const { contributions, sharedUncNm } = contributionsOf(input, name, axis, setup);
  const combined = combineContributions(contributions);
  const errorNm = axis.indicatedNm(line.position) - axis.referenceNm(name.wavelengthNm, name.medium);
  result.errorNm = errorNm;
  result.errorUncNm = combined.uncNm;
  result.errorExpandedUncNm = combined.expandedUncNm;
  result.coverageFactor = combined.coverageFactor;
  result.effectiveDegreesOfFreedom = combined.effectiveDegreesOfFreedom;
  result.budget = combined.budget;
  result.toleranceNm = toleranceNm;
  judged.sharedUncNm = sharedUncNm;
  judged.ownUncNm = Math.sqrt(Math.max(0, combined.uncNm * combined.uncNm - sharedUncNm * sharedUncNm));
  if (refusedBecause !== null) return judged;

  const notJudged = whyNotJudged(name, setup, toleranceNm, combined.expandedUncNm);
  if (toleranceNm === null || notJudged !== null) {
    result.reason ??= notJudged;
    return judged;
  }
  const { uncNm, expandedUncNm, effectiveDegreesOfFreedom } = combined;
  const error = { errorNm, uncNm, expandedUncNm, effectiveDegreesOfFreedom };
  const judgement = judgeError(error, toleranceNm, setup.decisionRule, setup.warningShare);
  judged.judgement = judgement;
  result.guardBandNm = judgement.guardBandNm;
  result.toleranceUsed = judgement.toleranceUsed;
  result.conformanceProbability = judgement.conformanceProbability;
  result.verdict = judgement.verdict;
  result.nearLimit = judgement.nearLimit;
  if (leftOut === null) result.status = "judged";
  return judged;
}

function whyRefused(line: FittedLine, name: LineName, setup: AnalysisSetup, toleranceNm: number | null): string | null {
  if (line.flags.includes("saturated") && !setup.useSaturated) {
    return "Saturated: the top of the line is cut off, so its centre is not known well. Record a shorter exposure.";
  }
  if (line.flags.includes("spike")) return "Narrower than the instrument's lines: a hot pixel or a spike.";
  if (name.order !== 1) return "Seen in the second order of the grating: no line of the axis by itself.";
  if (line.flags.includes("edge")) return "At the edge of the capture: part of the line or of its baseline is missing.";
  if (line.flags.includes("weak")) return "Too weak: hardly above the noise.";
  if (line.flags.includes("poor-fit"))
    return "Its shape is not that of a line by itself, so its centre is not known well.";
  if (name.blendOf.length > 1 && toleranceNm !== null && name.blendUncNm > blendShare * toleranceNm) {
    return `A blend of ${name.blendOf.length} lines: its centre is not known to a fifth of the tolerance.`;
  }
  return null;
}

function whyNotJudged(
  name: LineName,
  setup: AnalysisSetup,
  toleranceNm: number | null,
  expandedUncNm: number,
): string | null {
  if (toleranceNm === null) {
    return setup.tolerance.length === 0 ? "No tolerance is set." : "The line lies outside every tolerance segment.";
  }
  const ofProcedure = [...setup.expectedLinesNm, ...setup.requiredLinesNm];
  const parts = [name.wavelengthNm, ...blendWavelengths(name)];
  if (setup.expectedLinesNm.length > 0 && !parts.some((part) => isLine(ofProcedure, part))) {
    return "Not one of the procedure's lines.";
  }
  return expandedUncNm > toleranceNm ? "Its uncertainty is larger than the tolerance: it can tell nothing." : null;
}

const leftOutWords: Record<LeftOutLine["reason"], string> = {
  saturated: "saturated",
  blended: "blended with a neighbour",
  spike: "a spike",
  "too-weak": "too weak",
  disturbed: "disturbed",
};

function leftOutSentence(entry: LeftOutLine): string {
  return `Left out by a person: ${leftOutWords[entry.reason]}${entry.note === "" ? "" : ` (${entry.note})`}.`;
}

function contributionsOf(
  input: LineInput,
  name: LineName,
  axis: IndicatingAxis,
  setup: AnalysisSetup,
): { contributions: Contribution[]; sharedUncNm: number } {
  const { line, repeatability } = input;
  const nmPerUnit = Math.abs(axis.slopeNm(line.position));
  const scaled = isBeyondChance(line.reducedChiSquare, line.degreesOfFreedom);
  const fitUnc = line.positionUnc;
  const contributions: Contribution[] = [
    {
      contribution: "reference",
      uncNm: name.referenceUncNm,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: name.referenceUncAssumed,
      note: name.referenceUncAssumed
        ? "the source states none: 0.001 nm assumed"
        : `published (${name.referenceSource})`,
    },
    {
      contribution: "fit",
      uncNm: fitUnc * nmPerUnit,
      degreesOfFreedom: scaled ? line.degreesOfFreedom : null,
      sensitivity: nmPerUnit,
      assumed: line.flags.includes("poor-fit") && line.degreesOfFreedom === 0,
      note: scaled ? "centre of the line, scaled by the scatter about the fit" : "centre of the line, from the noise",
    },
  ];
  if (name.blendUncNm > 0) {
    contributions.push({
      contribution: "blend",
      uncNm: name.blendUncNm,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: true,
      note: "half the spread of the blend's components over the square root of 3",
    });
  }
  if (repeatability !== null) {
    // The repeats scatter by their noise too, which the fit already holds: only what goes beyond it is added.
    const beyond = repeatability.unc * repeatability.unc - fitUnc * fitUnc;
    contributions.push({
      contribution: "repeatability",
      uncNm: beyond > 0 ? Math.sqrt(beyond) * nmPerUnit : 0,
      degreesOfFreedom: repeatability.degreesOfFreedom,
      sensitivity: nmPerUnit,
      assumed: false,
      note: `standard deviation of the mean of ${repeatability.degreesOfFreedom + 1} repeats, beyond the fit's own`,
    });
  }
  if (axis.displayStepNm > 0) {
    contributions.push({
      contribution: "resolution",
      uncNm: axis.displayStepNm / Math.sqrt(12),
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: false,
      note: "rounding of the axis as written, rectangular",
    });
  }
  const shared: Contribution[] = [];
  if (setup.setupReproducibility !== null) {
    const { value, unit, basis, degreesOfFreedom } = setup.setupReproducibility;
    const perUnit = unit === "px" ? axis.nmPerSample(line.position) : 1;
    shared.push({
      contribution: "set-up",
      uncNm: value * perUnit,
      degreesOfFreedom,
      sensitivity: perUnit,
      assumed: basis === "assumed",
      note:
        basis === "history"
          ? "scatter between this configuration's own checks"
          : basis === "stated"
            ? "stated by the lab"
            : "assumed: common practice, no source",
    });
  }
  if (setup.temperatureEffect !== null) {
    const { coefficientNmPerK, spreadK } = setup.temperatureEffect;
    shared.push({
      contribution: "temperature",
      uncNm: Math.abs(coefficientNmPerK) * spreadK,
      degreesOfFreedom: null,
      sensitivity: coefficientNmPerK,
      assumed: false,
      note: `standard spread of the room, ${spreadK} K`,
    });
  }
  const airUncNm = axis.airUncNm(name.wavelengthNm, name.medium);
  if (airUncNm > 0) {
    shared.push({
      contribution: "air",
      uncNm: airUncNm,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: false,
      note: axis.airNote,
    });
  }
  let sharedVariance = 0;
  for (const { uncNm } of shared) sharedVariance += uncNm * uncNm;
  return { contributions: [...contributions, ...shared], sharedUncNm: Math.sqrt(sharedVariance) };
}
