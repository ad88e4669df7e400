/**
 * Candidates: axes that may be the capture's, with the names they would give, for one question (lamp, belief about the range).
 *
 * With an earlier axis or a range the search runs within the bounds of the belief (`search`). With the lamp alone it runs over all
 * spans and places (`search-alone`); each axis found there is then asked about as if its own ends had been given as a range, but
 * with the evidence that so free a choice leaves.
 */
import { log } from "../numeric/elementary.ts";
import type { IdentifyInput } from "./identify-lines.ts";
import { mend } from "./mend.ts";
import { type Naming, nameLines } from "./name-lines.ts";
import { buildProblem, type Problem, usualCubic } from "./problem.ts";
import { type ReferenceTable, referenceTable, roomLightOn } from "./reference-table.ts";
import { longestNm, leastSpanNm, mostSpanNm, scalesOf, shortestNm } from "./scale-tables.ts";
import { correctedNm, type Evidence, evidenceFor, lineEvidence, type Odds, oddsFor, strongCount } from "./score.ts";
import { BestLampAxes, type LampAxis, searchTriple, triplesOf } from "./search-alone.ts";
import { isSound, refine, searchAxes } from "./search.ts";

/** Axes looked at closely. */
const polished = 5;
/** An axis so much less likely than the best (ln) can't overtake it, nor be its rival. */
const outOfSight = 25;
const agreementShare = 0.3;
/** Of those, so many are mended first. */
const mendedAxes = 3;
/** Triples of lines tried, round by round, with the lamp alone. */
const rounds = [
  { level: 0, from: 0, to: 1 },
  { level: 0, from: 1, to: 2 },
  { level: 0, from: 2, to: 6 },
  { level: 1, from: 0, to: 5 },
  { level: 1, from: 5, to: 12 },
  { level: 2, from: 0, to: 8 },
  { level: 2, from: 8, to: 20 },
] as const;
/** Rounds for lamps that were not said: what they may be is only a hint. */
const briefRounds = 2;
/** Work after which no further triple is begun (places looked up; some 5 ns each), so that a question without an answer ends. */
const mostWork = 4e7;
const mostBriefWork = 3e6;
/** Axes looked at closely where the best of them leaves nothing to explain. */
const axesForCertain = 8;
/** An answer beyond doubt ends the rounds. */
const decisiveEvidence = 15;
const decisiveLead = 8;
const decisiveShare = 0.75;

export interface Question {
  problem: Problem;
  table: ReferenceTable;
  odds: Odds;
}

export interface Candidate extends Question {
  correction: Float64Array;
  naming: Naming;
  evidence: Evidence;
  namedCount: number;
  /** ln of how much better than by accident each line is explained; NaN for lines that may not name themselves. */
  support: Float64Array;
  /** Wavelength of every line on this axis, nm. */
  places: Float64Array;
}

interface Hypothesis extends Question {
  correction: Float64Array;
  evidence: Evidence;
  places: Float64Array;
}

/** The question for some elements; `wide`: an earlier axis is trusted less. */
export function ask(input: IdentifyInput, elements: readonly string[], wide: boolean): Question {
  const problem = buildProblem(input, wide);
  const reach = problem.bounds.endNm + problem.fwhmNm;
  const low = Math.min(problem.baseFirstNm, problem.baseLastNm) - reach;
  const high = Math.max(problem.baseFirstNm, problem.baseLastNm) + reach;
  const table = referenceTable(input.lineList, elements, input.expectedLinesNm, low, high, problem.meaning);
  return { problem, table, odds: oddsFor(table, high - low, roomLightOn(input.lineList, elements, problem.meaning)) };
}

/** Candidates of one question, best first. */
export function candidatesOf(question: Question): Candidate[] {
  const { problem, table, odds } = question;
  const hypotheses = searchAxes(problem, table, odds).map((one) => ({
    ...question,
    ...one,
    places: placesOf(problem, one.correction),
  }));
  return polish(hypotheses);
}

/** Candidates with nothing known but the elements, best first; `brief`: a first look only. */
export function candidatesAlone(
  input: IdentifyInput,
  elements: readonly string[],
  effort: "thorough" | "brief" = "thorough",
): Candidate[] {
  const problem = buildProblem(input);
  const scales = scalesOf(input.lineList, elements, problem.meaning);
  const triples = triplesOf(problem);
  const best = new BestLampAxes();
  const known = new Set<LampAxis>();
  const hypotheses: Hypothesis[] = [];
  const looked: Looked = new Map();
  let candidates: Candidate[] = [];
  const isBrief = effort === "brief";
  const affordable = isBrief ? mostBriefWork : mostWork;
  for (const { level, from, to } of isBrief ? rounds.slice(0, briefRounds) : rounds) {
    if (best.work >= affordable) break;
    for (const triple of triples.slice(from, to)) {
      if (best.work < affordable) searchTriple(problem, scales, triple, level, best);
    }
    let leader: Hypothesis | null = null;
    for (const [at, axis] of best.axes.entries()) {
      if (at >= axesForCertain && leader !== null && isSound(leader.problem, leader.table, leader.odds, leader)) break;
      if (known.has(axis)) continue;
      known.add(axis);
      const hypothesis = hypothesisFrom(input, elements, axis);
      if (hypothesis === null) continue;
      hypotheses.push(hypothesis);
      if (leader === null || hypothesis.evidence.value > leader.evidence.value) leader = hypothesis;
    }
    hypotheses.sort((a, b) => b.evidence.value - a.evidence.value);
    candidates = polish(hypotheses, looked);
    if (isDecided(candidates)) break;
  }
  return candidates;
}

/** An axis found with the lamp alone, asked about as a range would be. */
function hypothesisFrom(input: IdentifyInput, elements: readonly string[], axis: LampAxis): Hypothesis | null {
  const [c0, c1, c2, c3] = axis.terms as unknown as [number, number, number, number];
  const firstNm = c0 - c1 + c2 - c3;
  const lastNm = c0 + c1 + c2 + c3;
  const span = lastNm - firstNm;
  const question = ask({ ...input, mode: { kind: "range", firstNm, lastNm } }, elements, false);
  const { problem, table, odds } = question;
  if (table.nm.length < 2) return null;
  const width = Math.abs(span);
  const places = Math.max(longestNm - shortestNm - width, (longestNm - shortestNm) / 4);
  problem.logDensity = -log(width * places * log(mostSpanNm / leastSpanNm));
  const start = Float64Array.of(c0 - (firstNm + lastNm) / 2, c1 - span / 2, c2, c3 - usualCubic * span);
  const correction = refine(problem, table, odds, start);
  if (correction === null) return null;
  const evidence = evidenceFor(problem, table, odds, correction);
  return {
    ...question,
    correction,
    evidence,
    places: placesOf(problem, correction),
  };
}

function placesOf(problem: Problem, correction: Float64Array): Float64Array {
  const places = new Float64Array(problem.count);
  for (let i = 0; i < problem.count; i++) places[i] = correctedNm(problem, correction, i);
  return places;
}

/** Axes looked at closely before, mended or as they were: the same answer again costs nothing. */
type Looked = Map<Hypothesis, { asIs?: Candidate | null; mended?: Candidate | null }>;

/** Names for the best few hypotheses (sorted, best first). */
function polish(hypotheses: readonly Hypothesis[], looked: Looked = new Map()): Candidate[] {
  const found: Candidate[] = [];
  for (const hypothesis of hypotheses) {
    if (found.length === polished) break;
    const lead = found.length === 0 ? 0 : (found[0] as Candidate).evidence.value - hypothesis.evidence.value;
    if (lead > outOfSight) break;
    const apart = agreementShare * hypothesis.problem.fwhmNm;
    // Many starts end on one axis: naming its lines once is enough.
    if (found.some((one) => isSame(one.places, hypothesis.places, apart))) continue;
    const kind = found.length < mendedAxes ? "mended" : "asIs";
    const before = looked.get(hypothesis) ?? {};
    looked.set(hypothesis, before);
    const candidate = before[kind] ?? (before[kind] === null ? null : lookAt(hypothesis, kind === "mended"));
    before[kind] = candidate;
    if (candidate === null || found.some((one) => isSame(one.places, candidate.places, apart))) continue;
    found.push(candidate);
  }
  return found.sort((a, b) => b.evidence.value - a.evidence.value);
}

/** Names for one axis, mended first where it is not sound; null where too few lines hold it. */
function lookAt(hypothesis: Hypothesis, mayMend: boolean): Candidate | null {
  const { problem, table, odds } = hypothesis;
  const start = mayMend && !isSound(problem, table, odds, hypothesis) ? mend(hypothesis, hypothesis) : hypothesis;
  const naming = nameLines(problem, table, start.correction);
  if (naming === null) return null;
  const { correction } = naming.fit;
  const evidence = evidenceFor(problem, table, odds, correction);
  let namedCount = 0;
  for (const reference of naming.reference) if (reference >= 0) namedCount += 1;
  const places = placesOf(problem, correction);
  const support = lineEvidence(problem, table, odds, correction, evidence.standardDeviationNm);
  return { problem, table, odds, correction, naming, evidence, namedCount, support, places };
}

function isSame(a: Float64Array, b: Float64Array, toleranceNm: number): boolean {
  for (let i = 0; i < a.length; i++) {
    if (Math.abs((a[i] as number) - (b[i] as number)) > toleranceNm) return false;
  }
  return true;
}

function isDecided(candidates: readonly Candidate[]): boolean {
  const best = candidates[0];
  if (best === undefined || best.evidence.value < decisiveEvidence) return false;
  const { explained, strong } = strongShare(best);
  if (explained < decisiveShare * strong) return false;
  return candidates.every(
    (other) =>
      other === best || agreement(best, other) >= 0.7 || best.evidence.value - other.evidence.value >= decisiveLead,
  );
}

/** Strong lines, and how many of them lie on a published line. */
export function strongShare({ problem, naming, support }: Candidate): {
  explained: number;
  strong: number;
} {
  const strong = strongCount(problem);
  let explained = 0;
  for (let rank = 0; rank < strong; rank++) {
    const i = problem.byHeight[rank] as number;
    if (naming.explained[i] === 1 || (support[i] as number) > 0) explained += 1;
  }
  return { explained, strong };
}

/** Whether two axes say the same of a line, to a fraction of its width. */
export function agreeAt(a: Candidate, b: Candidate, i: number): boolean {
  return Math.abs((a.places[i] as number) - (b.places[i] as number)) <= agreementShare * a.problem.fwhmNm;
}

/** Share of the lines that the better axis explains where the other one says the same. */
export function agreement(best: Candidate, other: Candidate): number {
  let same = 0;
  let all = 0;
  for (let i = 0; i < best.problem.count; i++) {
    if (best.naming.explained[i] === 0) continue;
    all += 1;
    if (agreeAt(best, other, i)) same += 1;
  }
  return all === 0 ? 0 : same / all;
}
