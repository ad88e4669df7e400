/**
 * Lines to names: which published line is each found line, or why that can't be said.
 *
 * Modes      earlier axis (an earlier calibration, or the file's own axis): 4 FWHM in offset, 1 % in scale; asked again with
 *            7 % of the span at either end when that finds nothing. Range: first and last wavelength each good to 5 % of the
 *            span; their order says whether the wavelength rises or falls with the pixel. None: the lamp's elements alone; the
 *            wavelength may rise or fall, and a file's own wavelength axis is taken as no more than an order of its samples
 * Answers    identified, ambiguous (two axes explain the lines about as well: both are told), unidentified (with what speaks
 *            against it: too few lines, chance, another lamp). A wrong name is worse than none
 * Confidence chanceProbability bounds the probability that lines scattered evenly over the window agree as well with any
 *            axis allowed (null model and bound: `score`); margin is the natural logarithm by which the best axis beats the
 *            best one that names lines differently. Identified asks for at most 0.05 and a margin of 4; the tests ask 150 captures with
 *            lines placed at random about a range: no more than 7 may fall below that chance, and none may be identified
 */
import type {
  AxisKind,
  AxisMeaning,
  FittedLine,
  IdentificationMode,
  LineList,
  Medium,
  PixelAxis,
  ReferenceLine,
} from "../analysis/types.ts";
import { lineWavelengthNm } from "../linelist/built-in.ts";
import { log } from "../numeric/elementary.ts";
import { nameFewLines, nameOfReference } from "./few-lines.ts";
import { namedAxis } from "./named-axis.ts";
import { agreeAt, agreement, ask, type Candidate, candidatesAlone, candidatesOf, strongShare } from "./candidates.ts";
import type { Naming } from "./name-lines.ts";
import { findOtherGases, findOtherLamp, nameOfElement, type OtherGas } from "./other-lamps.ts";
import type { Problem } from "./problem.ts";
import type { ReferenceTable } from "./reference-table.ts";
import { correctedNm, endNm } from "./score.ts";
import { findSecondOrder } from "./second-order.ts";
import { warmingLampText } from "./warming-lamp.ts";

/** Largest chance probability of an identification. */
const largestChance = 0.05;
/** Least margin over an axis that names the lines differently (natural logarithm of the ratio of likelihoods). */
const leastMargin = 4;
const leastStrongShare = 0.6;
/** With a second gas seen between them, the lamp's own lines may be fewer. */
const leastOwnShare = 0.4;
const leastNamed = 3;
/** In a crowd of lines a good axis gains by nearly every one of them; an axis that is right in part gains less. */
const crowdedFrom = 30;
const leastEvidencePerLine = 0.45;
const borneOutShare = 0.75;
/** Lines on either side that must together be explained better than by accident, and by how much each (ln). */
const supportReach = 4;
const leastSupport = 0.3;
/** Neighbours fainter than this share of a line may be anything: they do not speak for or against it. */
const comparableHeight = 0.3;
/** Two axes that agree at this share of the explained lines are one identification, less the lines they differ in. */
const samePlaceShare = 0.7;
const prominentStrength = 0.3;

export interface LineName {
  /** By which the line is known: air above 200 nm, vacuum below; of a blend its centroid, or the component that carries it. */
  wavelengthNm: number;
  medium: Medium;
  element: string;
  species: string;
  /** Grating order; a line of order 2 is seen at twice its wavelength and is not used as a line of the axis. */
  order: number;
  /** Components of a blend (two or more), else empty. */
  blendOf: ReferenceLine[];
  /** Standard uncertainty of the wavelength from a blend or from weak companions of a plain line, nm. */
  blendUncNm: number;
  referenceUncNm: number;
  referenceUncAssumed: boolean;
  referenceSource: string;
  relativeIntensity: number | null;
}

export interface IdentifyInput {
  lines: FittedLine[];
  firstPosition: number;
  lastPosition: number;
  axisKind: AxisKind;
  /** Median FWHM of the lines in the unit of the axis. */
  medianFwhm: number;
  elements: string[];
  /** A procedure's lines, taken to be well visible and reported when missing; every line of the elements may be named. */
  expectedLinesNm: number[];
  lineList: LineList;
  mode: IdentificationMode;
  axisMeaning: AxisMeaning;
  /** Smallest tolerance that will be judged with, or null: blends open by more than a fifth of it are told in the warnings. */
  toleranceNm: number | null;
}

export interface IdentifiedLines {
  outcome: "identified" | "ambiguous" | "unidentified";
  /** Why it is not identified, in a sentence; null when it is. */
  reason: string | null;
  /** Same order as the lines; null where a line has no name. All null unless identified. */
  names: (LineName | null)[];
  /** The axis as identified (earlier axis or range, corrected), null unless identified or where it is no polynomial. */
  axis: PixelAxis | null;
  chanceProbability: number;
  margin: number;
  note: string;
  warnings: { code: string; text: string }[];
  missingLinesNm: number[];
  /** Other gases seen between the lamp's lines, with the indices of their lines. */
  otherGases: OtherGas[];
}

/**
 * Name the lines of a capture.
 *
 * @returns always an answer; names are given only when the outcome is identified
 */
export function identifyLines(input: IdentifyInput): IdentifiedLines {
  const spanOk = Math.abs(input.lastPosition - input.firstPosition) > 0 && input.medianFwhm > 0;
  const usable = input.lines.filter((line) => !line.flags.includes("spike")).length;
  if (!spanOk || usable < leastNamed) {
    const few = spanOk ? byFewLines(input) : null;
    if (few !== null) return few;
    return unidentified(
      input,
      `${usable === 0 ? "No usable line was" : usable === 1 ? "Only one usable line was" : `Only ${usable} usable lines were`} ` +
        `found; at least ${leastNamed} are needed to name any. Expose longer, or use a lamp with more lines in this range.`,
    );
  }
  if (input.mode.kind === "none") return answer(input, candidatesAlone(input, input.elements));
  const question = ask(input, input.elements, false);
  if (question.table.nm.length === 0) {
    return unidentified(input, `The line list has no line of ${lampOf(input.elements)} in this range.`);
  }
  const narrow = answer(input, candidatesOf(question));
  if (narrow.outcome === "identified" || input.mode.kind === "range") return narrow;
  // An axis further off than it should be: worth following, as long as the evidence pays for the wider search.
  const wide = answer(input, candidatesOf(ask(input, input.elements, true)));
  if (wide.outcome !== "identified") return narrow.outcome === "ambiguous" ? narrow : orOtherLamp(input, wide, narrow);
  wide.warnings.unshift({
    code: "axis-far-off",
    text: "The earlier axis is off by more than four line widths and one per cent of scale; the lines were found all the same. Was the instrument moved or its grating changed?",
  });
  return wide;
}

function orOtherLamp(input: IdentifyInput, wide: IdentifiedLines, narrow: IdentifiedLines): IdentifiedLines {
  return wide.outcome === "ambiguous" && narrow.chanceProbability > wide.chanceProbability ? wide : narrow;
}

function answer(input: IdentifyInput, candidates: readonly Candidate[]): IdentifiedLines {
  const best = candidates[0];
  if (best === undefined) {
    return refuse(input, 1, 0, "No axis within the bounds brings the lines onto published ones.");
  }
  const { problem } = best;
  let margin = Number.POSITIVE_INFINITY;
  let rival: Candidate | null = null;
  for (const other of candidates.slice(1)) {
    const lead = best.evidence.value - other.evidence.value;
    if (agreement(best, other) >= samePlaceShare) {
      if (lead < leastMargin) dropDisputed(best, other);
      continue;
    }
    if (lead < margin) {
      margin = lead;
      rival = other;
    }
  }
  // No rival among the axes looked at: the margin is at least what separates the best from pure chance.
  if (!Number.isFinite(margin)) margin = Math.max(best.evidence.value, 0);
  const chance = best.evidence.chanceProbability;
  const { explained, strong } = strongShare(best);
  if (chance > largestChance) {
    return refuse(
      input,
      chance,
      margin,
      `${best.namedCount} of ${problem.byHeight.length} lines agree with ${lampOf(input.elements)}, ` +
        "which so many published lines would also do by accident.",
    );
  }
  const otherGases = findOtherGases(input, problem, best.naming);
  const byOthers = otherGases.reduce((sum, gas) => sum + gas.strongLines, 0);
  const enough = explained >= leastStrongShare * strong;
  const enoughWithOthers = explained >= leastOwnShare * strong && explained + byOthers >= leastStrongShare * strong;
  if (!enough && !enoughWithOthers) {
    return refuse(
      input,
      chance,
      margin,
      `Only ${explained} of the ${strong} strongest lines belong to ${lampOf(input.elements)}.`,
    );
  }
  const usable = problem.byHeight.length;
  if (usable >= crowdedFrom && best.evidence.value < leastEvidencePerLine * usable && !isBorneOut(best)) {
    const sentence = `${usable} lines so close together would fit ${lampOf(input.elements)} nearly as well on many an axis.`;
    return refuse(input, chance, margin, sentence);
  }
  if (rival !== null && margin < leastMargin) {
    return {
      ...unidentified(input, ambiguityOf(best, rival)),
      outcome: "ambiguous",
      chanceProbability: chance,
      margin,
      note: noteOf(chance, margin),
    };
  }
  if (best.namedCount < leastNamed) {
    const sentence = `The lines fit ${lampOf(input.elements)}, but only ${best.namedCount} of them can be told from their neighbours for sure.`;
    return refuse(input, chance, margin, sentence);
  }
  dropUnsupported(best);
  return accept(input, best, otherGases, chance, margin);
}

function accept(
  input: IdentifyInput,
  best: Candidate,
  otherGases: OtherGas[],
  chance: number,
  margin: number,
): IdentifiedLines {
  const { problem, table, naming } = best;
  const warnings: { code: string; text: string }[] = [];
  for (const gas of otherGases) {
    for (const i of gas.disputed) {
      naming.reference[i] = -1;
      naming.components[i] = [];
    }
    warnings.push({
      code: gas.element === "Hg" ? "mercury-light" : "second-gas",
      text: gas.text,
    });
  }
  const names: (LineName | null)[] = input.lines.map((_, i) => nameOf(problem, table, naming, i));
  for (const { line, reference } of findSecondOrder(input, problem, table, naming)) {
    names[line] = { ...nameOfReference(reference), order: 2 };
  }
  const open = names.filter(
    (name) => name !== null && input.toleranceNm !== null && name.blendUncNm > 0.2 * input.toleranceNm,
  );
  if (open.length > 0) {
    const list = open.map((name) => (name as LineName).wavelengthNm.toFixed(2)).join(", ");
    warnings.push({
      code: "blends",
      text: `Lines closer than the instrument resolves, open by more than a fifth of the tolerance: ${list} nm. They are not judged.`,
    });
  }
  const axis = namedAxis(problem, input.lines, naming);
  const warming = warmingLampText(input.elements, input.lines, names, axis, input.firstPosition, input.lastPosition);
  if (warming !== null) warnings.push({ code: "warming-lamp", text: warming });
  return {
    outcome: "identified",
    reason: null,
    names,
    axis,
    chanceProbability: chance,
    margin,
    note: noteOf(chance, margin),
    warnings,
    missingLinesNm: missingLines(input, problem, table, naming),
    otherGases,
  };
}

function refuse(input: IdentifyInput, chance: number, margin: number, sentence: string): IdentifiedLines {
  const other = findOtherLamp(input, (elements) => {
    const asked = { ...input, expectedLinesNm: [] };
    const best = (
      input.mode.kind === "none" ? candidatesAlone(asked, elements, "brief") : candidatesOf(ask(asked, elements, false))
    )[0];
    if (best === undefined || best.evidence.chanceProbability > largestChance) return null;
    return {
      evidence: best.evidence.value,
      lines: best.problem.byHeight.length,
      ...strongShare(best),
    };
  });
  return {
    ...unidentified(input, other ?? `${sentence} Check the lamp, the range and the exposure.`),
    chanceProbability: chance,
    margin,
    note: noteOf(chance, margin),
  };
}

function unidentified(input: IdentifyInput, reason: string): IdentifiedLines {
  return {
    outcome: "unidentified",
    reason,
    names: input.lines.map(() => null),
    axis: null,
    chanceProbability: 1,
    margin: 0,
    note: noteOf(1, 0),
    warnings: [],
    missingLinesNm: [],
    otherGases: [],
  };
}

/** Two lines of a lamp that shows no more, on an axis that is known. */
function byFewLines(input: IdentifyInput): IdentifiedLines | null {
  if (input.mode.kind !== "earlier-axis") return null;
  const few = nameFewLines({ ...input, axis: input.mode.axis });
  if (few === null || few.chanceProbability > largestChance) return null;
  // No other pairing was allowed, so that chance is the only rival.
  const margin = -log(few.chanceProbability);
  return {
    ...unidentified(input, ""),
    outcome: "identified",
    reason: null,
    names: few.names,
    axis: input.mode.axis === "own" ? null : input.mode.axis,
    chanceProbability: few.chanceProbability,
    margin,
    note: noteOf(few.chanceProbability, margin),
  };
}

/** Whether three quarters of the lines, and of the strong ones, are each explained better than by accident. */
function isBorneOut(best: Candidate): boolean {
  const { byHeight } = best.problem;
  let all = 0;
  for (const i of byHeight) if ((best.support[i] as number) > 0) all += 1;
  const { explained, strong } = strongShare(best);
  return all >= borneOutShare * byHeight.length && explained >= borneOutShare * strong;
}

/** Lines on which two nearly equal axes disagree stay without a name. */
function dropDisputed(best: Candidate, other: Candidate): void {
  for (let i = 0; i < best.problem.count; i++) {
    const reference = best.naming.reference[i] as number;
    if (reference < 0 || reference === other.naming.reference[i] || agreeAt(best, other, i)) continue;
    best.naming.reference[i] = -1;
    best.naming.components[i] = [];
    best.namedCount -= 1;
  }
}

/**
 * An axis may be right over most of a capture and run astray at an end, where crowded lines still find something to lie on.
 * There the lines around say so: taken together they are explained no better than by accident.
 */
function dropUnsupported(best: Candidate): void {
  const { problem, support } = best;
  const order = problem.byHeight.slice().sort((a, b) => (problem.t[a] as number) - (problem.t[b] as number));
  for (let at = 0; at < order.length; at++) {
    const i = order[at] as number;
    if ((best.naming.reference[i] as number) < 0) continue;
    const least = comparableHeight * (problem.heightCounts[i] as number);
    let sum = 0;
    let count = 0;
    for (const step of [-1, 1]) {
      let taken = 0;
      for (let k = at + step; k >= 0 && k < order.length && taken < supportReach; k += step) {
        const other = order[k] as number;
        if ((problem.heightCounts[other] as number) < least) continue;
        sum += support[other] as number;
        taken += 1;
      }
      count += taken;
    }
    if (count < supportReach || sum >= leastSupport * count) continue;
    best.naming.reference[i] = -1;
    best.naming.components[i] = [];
    best.namedCount -= 1;
  }
}

function ambiguityOf(best: Candidate, rival: Candidate): string {
  const { problem } = best;
  const end = (candidate: Candidate): string => {
    const first = problem.byHeight.reduce((a, b) => ((problem.t[a] as number) <= (problem.t[b] as number) ? a : b));
    const last = problem.byHeight.reduce((a, b) => ((problem.t[a] as number) >= (problem.t[b] as number) ? a : b));
    const from = (candidate.places[first] as number).toFixed(1);
    const to = (candidate.places[last] as number).toFixed(1);
    return `${candidate.namedCount} lines named with the outermost at ${from} and ${to} nm`;
  };
  return (
    `Two axes explain the lines about as well: ${end(best)}, or ${end(rival)}. ` +
    "A longer exposure, a second lamp or a closer range would decide it."
  );
}

function noteOf(chance: number, margin: number): string {
  const probability = chance >= 0.01 ? chance.toFixed(2) : chance.toExponential(0);
  return (
    `Lines scattered at random would agree as well with a probability of at most ${probability}; ` +
    `the next axis that names them differently is less likely by a factor of e^${margin.toFixed(1)}.`
  );
}

function nameOf(problem: Problem, table: ReferenceTable, naming: Naming, i: number): LineName | null {
  const reference = naming.reference[i] as number;
  if (reference < 0) return null;
  const line = table.lines[reference] as ReferenceLine;
  const name = nameOfReference(line);
  const components = naming.components[i] as number[];
  if (components.length < 2) return { ...name, blendUncNm: naming.blendUncNm[i] as number };
  const parts = components.map((j) => table.lines[j] as ReferenceLine);
  // The centroid was taken on the axis' medium; the name is given in the one the line is known by.
  const shift = (naming.nm[i] as number) - (table.nm[reference] as number);
  return {
    ...name,
    wavelengthNm: name.wavelengthNm + shift,
    species: [...new Set(parts.map((part) => part.spectrum))].join(" + "),
    blendOf: parts,
    blendUncNm: naming.blendUncNm[i] as number,
  };
}

/** Prominent (of a procedure: expected) lines inside the capture that no found line stands for. */
function missingLines(input: IdentifyInput, problem: Problem, table: ReferenceTable, naming: Naming): number[] {
  const ends = [-1, 1].map((t) => endNm(problem, naming.fit.correction, t));
  const low = Math.min(...ends) + problem.fwhmNm;
  const high = Math.max(...ends) - problem.fwhmNm;
  const missing: number[] = [];
  for (let j = 0; j < table.nm.length; j++) {
    const nm = table.nm[j] as number;
    if (nm < low || nm > high) continue;
    const wanted =
      input.expectedLinesNm.length > 0 ? table.expected[j] === 1 : (table.strength[j] as number) >= prominentStrength;
    if (!wanted) continue;
    let seen = false;
    for (let i = 0; i < problem.count && !seen; i++) {
      seen =
        (naming.components[i] as number[]).includes(j) ||
        Math.abs(correctedNm(problem, naming.fit.correction, i) - nm) < 0.75 * problem.fwhmNm;
    }
    if (!seen) missing.push(lineWavelengthNm(table.lines[j] as ReferenceLine).wavelengthNm);
  }
  return missing;
}

function lampOf(elements: readonly string[]): string {
  return elements.length === 0 ? "no element" : elements.map(nameOfElement).join(" and ");
}
