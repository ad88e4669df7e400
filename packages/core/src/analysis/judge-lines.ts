/** From fitted and named lines to errors with their budgets (`line-budget.ts`) and verdicts, line by line. */
import type { LineName } from "../identify/identify-lines.ts";
import { combineContributions, type Contribution } from "../uncertainty/budget.ts";
import { judgeError, toleranceAt, type Judgement } from "../uncertainty/conformity.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import { toleranceInNm } from "./wavenumber-axis.ts";
import { budgetOfLine, type LineRepeatability } from "./line-budget.ts";
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
  /** Signed share of each cause that moves all lines together, nm: `sharedCauses` in their order. */
  sharedByCauseNm: readonly number[];
  /** May enter the dispersion fit. */
  fitsAxis: boolean;
}

export interface LineInput {
  line: FittedLine;
  name: LineName | null;
  /** What repeats show beyond the fit's own uncertainty, or null with one capture. */
  repeatability: LineRepeatability | null;
  /** Contributions of the line's own that only its kind of sample has; absent = none. */
  extra?: readonly Contribution[];
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
  const result: LineResult = {
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
  // One by one: spreading them into the literal makes a slow object of every line.
  if (line.shape !== undefined) result.shape = line.shape;
  if (line.shapeParameters !== undefined) result.shapeParameters = line.shapeParameters;
  if (line.covariance !== undefined) result.covariance = line.covariance;
  if (line.takenFrom !== undefined) result.takenFrom = line.takenFrom;
  if (line.backlash !== undefined) result.backlash = line.backlash;
  return result;
}

/** Judge one line. */
export function judgeLine(input: LineInput, axis: IndicatingAxis | null, setup: AnalysisSetup): JudgedLineResult {
  const { line, name } = input;
  const result = unnamedResult(line, axis);
  const judged: JudgedLineResult = {
    result,
    judgement: null,
    ownUncNm: 0,
    sharedUncNm: 0,
    sharedByCauseNm: [],
    fitsAxis: false,
  };
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
  const stated = toleranceAt(setup.tolerance, name.wavelengthNm);
  const referenceNm = axis === null ? name.wavelengthNm : axis.referenceNm(name.wavelengthNm, name.medium);
  const indicatedNm = axis === null ? referenceNm : axis.indicatedNm(line.position);
  const toleranceNm = stated === null ? null : toleranceInNm(stated, setup, indicatedNm, referenceNm);
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

  const { contributions, sharedByCauseNm } = budgetOfLine(line, name, input.repeatability, axis, setup);
  const combined = combineContributions([...contributions, ...(input.extra ?? [])]);
  const errorNm = indicatedNm - referenceNm;
  result.errorNm = errorNm;
  result.errorUncNm = combined.uncNm;
  result.errorExpandedUncNm = combined.expandedUncNm;
  result.coverageFactor = combined.coverageFactor;
  result.effectiveDegreesOfFreedom = combined.effectiveDegreesOfFreedom;
  result.errorForUseNm = Math.abs(errorNm) + combined.expandedUncNm;
  result.budget = combined.budget;
  result.toleranceNm = toleranceNm;
  let sharedVariance = 0;
  for (const share of sharedByCauseNm) sharedVariance += share * share;
  judged.sharedByCauseNm = sharedByCauseNm;
  judged.sharedUncNm = Math.sqrt(sharedVariance);
  judged.ownUncNm = Math.sqrt(Math.max(0, combined.uncNm * combined.uncNm - sharedVariance));
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
  result.specificRisk = judgement.specificRisk;
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
