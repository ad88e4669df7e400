/**
 * Search for axes on which the found lines fall on published ones.
 *
 * Two strong found lines, one towards each end, are tried on every published line they may be; with them fixed, the one
 * freedom left, how far the axis leaves its chord, is run through its bounds (for two third orders, where those matter), and every strong line votes (see `score`).
 * Several such pairs of anchors are tried, so that a stray among them costs nothing. The best axes are then refined:
 * soft assignment to the lines near, a least-squares correction of third order held by the bounds as by a prior, the
 * reach shrinking from step to step.
 *
 * Deterministic; no allocation inside the loops.
 */
import { addPrior, factorise, solveFactorised } from "./correction.ts";
import { orderCount, type Problem } from "./problem.ts";
import { lowerBound, type ReferenceTable } from "./reference-table.ts";
import { coarseTable, correctedNm, evidenceFor, type Evidence, lineEvidence, type Odds, strongCount } from "./score.ts";

const terms = orderCount;
const anchorPool = 12;
const anchorPairs = 5;
const linesVoting = 13;
const kept = 24;
const anchorReferences = 14;
const cubicShare = 0.35;
/** Starts looked at where the best of them leaves nothing to explain. */
const startsForCertain = 7;
/** A sound axis: evidence (ln), and share of the lines that it explains. */
const soundEvidence = 8;
const soundShare = 0.88;

export interface Hypothesis {
  /** a0..a3, nm. */
  correction: Float64Array;
  evidence: Evidence;
}

/** Coarse half width: what a line may be off while third order is not yet fitted. */
function coarseHalfWidth(problem: Problem): number {
  return Math.max(0.9 * problem.fwhmNm, 0.6 * problem.bounds.cubicNm + 0.6 * problem.fwhmNm) * 0.9;
}

/**
 * The best axes, best first; empty where fewer than three usable lines or no published line are there.
 */
export function searchAxes(problem: Problem, table: ReferenceTable, odds: Odds): Hypothesis[] {
  if (problem.byHeight.length < 3 || table.nm.length === 0) return [];
  const coarse = coarseSearch(problem, table, odds);
  const found: Hypothesis[] = [];
  let leader: Hypothesis | null = null;
  for (const [at, start] of coarse.entries()) {
    // A leader that explains nearly every line is not overtaken from far down the list.
    if (at >= startsForCertain && leader !== null && isSound(problem, table, odds, leader)) break;
    const correction = refine(problem, table, odds, start);
    if (correction === null) continue;
    if (found.some((other) => sameAxis(problem, other.correction, correction, 0.05 * problem.fwhmNm))) continue;
    const hypothesis = { correction, evidence: evidenceFor(problem, table, odds, correction) };
    found.push(hypothesis);
    if (leader === null || hypothesis.evidence.value > leader.evidence.value) leader = hypothesis;
  }
  return found.sort((a, b) => b.evidence.value - a.evidence.value);
}

/** Whether an axis explains nearly every line, and not by accident. */
export function isSound(
  problem: Problem,
  table: ReferenceTable,
  odds: Odds,
  { correction, evidence }: Hypothesis,
): boolean {
  if (evidence.value < soundEvidence) return false;
  const support = lineEvidence(problem, table, odds, correction, evidence.standardDeviationNm);
  let sound = 0;
  for (const i of problem.byHeight) if ((support[i] as number) > 0) sound += 1;
  return sound >= soundShare * problem.byHeight.length;
}

/** Whether two axes agree within a tolerance at every found line. */
export function sameAxis(problem: Problem, a: Float64Array, b: Float64Array, toleranceNm: number): boolean {
  for (let i = 0; i < problem.count; i++) {
    if (Math.abs(correctedNm(problem, a, i) - correctedNm(problem, b, i)) > toleranceNm) return false;
  }
  return true;
}

interface Anchors {
  left: number;
  right: number;
  rank: number;
}

/** Pairs of strong lines far apart; no line in more than three of them. */
function anchorsOf(problem: Problem): Anchors[] {
  const { byHeight, t } = problem;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const i of byHeight) {
    low = Math.min(low, t[i] as number);
    high = Math.max(high, t[i] as number);
  }
  const pairs: Anchors[] = [];
  const pool = Math.min(byHeight.length, anchorPool);
  for (let a = 0; a < byHeight.length; a++) {
    // Beyond the strongest few only pairs that span the capture are worth a look.
    for (let b = a + 1; b < byHeight.length; b++) {
      const i = byHeight[a] as number;
      const j = byHeight[b] as number;
      const apart = Math.abs((t[i] as number) - (t[j] as number)) / (high - low);
      if (apart < 0.3 || (b >= pool && apart < 0.7)) continue;
      const left = (t[i] as number) < (t[j] as number) ? i : j;
      pairs.push({
        left,
        right: left === i ? j : i,
        rank: (a + b + 4) / apart,
      });
    }
    if (pairs.length > 60) break;
  }
  pairs.sort((a, b) => a.rank - b.rank || a.left - b.left || a.right - b.right);
  const uses = new Uint8Array(problem.count);
  const chosen: Anchors[] = [];
  for (const pair of pairs) {
    if ((uses[pair.left] as number) >= 3 || (uses[pair.right] as number) >= 3) continue;
    uses[pair.left] = (uses[pair.left] as number) + 1;
    uses[pair.right] = (uses[pair.right] as number) + 1;
    chosen.push(pair);
    if (chosen.length === anchorPairs) break;
  }
  return chosen;
}

/** Published lines an anchor may be: those within reach, the stronger ones where there are many. */
function referencesFor(problem: Problem, table: ReferenceTable, i: number): number[] {
  const t = problem.t[i] as number;
  const { bounds } = problem;
  const reach = bounds.endNm + 2 * bounds.curvatureNm * (1 - t * t) + problem.fwhmNm;
  const base = problem.baseNm[i] as number;
  const within: number[] = [];
  for (
    let j = lowerBound(table.nm, base - reach);
    j < table.nm.length && (table.nm[j] as number) <= base + reach;
    j++
  ) {
    within.push(j);
  }
  if (within.length <= anchorReferences) return within;
  return within
    .sort((a, b) => (table.strength[b] as number) - (table.strength[a] as number) || a - b)
    .slice(0, anchorReferences);
}

function coarseSearch(problem: Problem, table: ReferenceTable, odds: Odds): Float64Array[] {
  const { bounds, t } = problem;
  const halfWidth = coarseHalfWidth(problem);
  const margin = bounds.endNm + 2 * bounds.curvatureNm + halfWidth;
  const fromNm = Math.min(problem.baseFirstNm, problem.baseLastNm) - margin;
  const toNm = Math.max(problem.baseFirstNm, problem.baseLastNm) + margin;
  const votes = coarseTable(table, odds, fromNm, toNm, halfWidth);
  const cells = votes.strong.length;
  const count = Math.min(linesVoting, problem.byHeight.length);
  const strong = Math.min(strongCount(problem), count);
  const atChord = new Float64Array(count);
  const bend = new Float64Array(count);
  const best = new BestAxes(kept, halfWidth);
  const sagitta = 2 * bounds.curvatureNm;
  // Where the third order may move a line by more than the kernel forgives, two values of it are tried.
  const cubicStep = cubicShare * bounds.cubicNm;
  const cubics = cubicStep > 0.25 * halfWidth ? [-cubicStep, cubicStep] : [0];
  for (const { left, right } of anchorsOf(problem)) {
    const ta = t[left] as number;
    const tb = t[right] as number;
    let largestBend = 0;
    for (let k = 0; k < count; k++) {
      const ti = t[problem.byHeight[k] as number] as number;
      bend[k] = (ti - ta) * (tb - ti);
      largestBend = Math.max(largestBend, Math.abs(bend[k] as number));
    }
    const step = Math.min(sagitta, (0.7 * halfWidth) / Math.max(largestBend, 1e-6));
    const steps = Math.ceil(sagitta / step);
    const leftReferences = referencesFor(problem, table, left);
    const rightReferences = referencesFor(problem, table, right);
    for (const a3 of cubics) {
      const leftNm = (problem.baseNm[left] as number) + a3 * thirdOrder(problem, left);
      const rightNm = (problem.baseNm[right] as number) + a3 * thirdOrder(problem, right);
      for (const ja of leftReferences) {
        const da = (table.nm[ja] as number) - leftNm;
        for (const jb of rightReferences) {
          const slope = ((table.nm[jb] as number) - rightNm - da) / (tb - ta);
          if (Math.abs(slope) > bounds.scaleNm + halfWidth + 2 * sagitta) continue;
          for (let k = 0; k < count; k++) {
            const i = problem.byHeight[k] as number;
            const base = (problem.baseNm[i] as number) + a3 * thirdOrder(problem, i);
            atChord[k] = base + da + slope * ((t[i] as number) - ta) - fromNm;
          }
          for (let n = -steps; n <= steps; n++) {
            const q = (n * sagitta) / steps;
            // With the bend the straight part is no longer the chord: keep it within its bounds at both ends.
            const a1 = slope + q * (ta + tb);
            const a0 = da - slope * ta - q * (ta * tb + 1);
            if (Math.abs(a1) > bounds.scaleNm + halfWidth) continue;
            if (Math.abs(a0 + a1) > bounds.endNm + halfWidth || Math.abs(a0 - a1) > bounds.endNm + halfWidth) continue;
            let product = 1;
            for (let k = 0; k < count; k++) {
              const cell = Math.round(((atChord[k] as number) + q * (bend[k] as number)) * votes.cellsPerNm);
              if (cell < 0 || cell >= cells) product *= 0.1;
              else product *= (k < strong ? votes.strong[cell] : votes.weak[cell]) as number;
            }
            if (product > best.threshold) best.offer(product, a0 + q / 2, a1, -q / 2, a3);
          }
        }
      }
    }
  }
  return best.list();
}

const thirdOrder = (problem: Problem, i: number): number => problem.basis[i * terms + 3] as number;

/** The best few axes seen, none within a half width of a better one. */
class BestAxes {
  threshold = 0;
  private readonly scores: Float64Array;
  private readonly a0: Float64Array;
  private readonly a1: Float64Array;
  private readonly a2: Float64Array;
  private readonly a3: Float64Array;
  private size = 0;
  private readonly capacity: number;
  private readonly apartNm: number;

  constructor(capacity: number, apartNm: number) {
    this.capacity = capacity;
    this.apartNm = apartNm;
    this.scores = new Float64Array(capacity + 1);
    this.a0 = new Float64Array(capacity + 1);
    this.a1 = new Float64Array(capacity + 1);
    this.a2 = new Float64Array(capacity + 1);
    this.a3 = new Float64Array(capacity + 1);
  }

  offer(score: number, a0: number, a1: number, a2: number, a3: number): void {
    let at = this.size;
    for (let k = 0; k < this.size; k++) {
      const d0 = a0 - (this.a0[k] as number);
      const d1 = a1 - (this.a1[k] as number);
      const d2 = a2 - (this.a2[k] as number);
      const ends = Math.max(Math.abs(d0 + d1 + d2), Math.abs(d0 - d1 + d2), Math.abs(d0 - d2));
      if (ends > this.apartNm) continue;
      if ((this.scores[k] as number) >= score) return;
      at = k;
      break;
    }
    if (at === this.size) {
      if (this.size < this.capacity) this.size += 1;
      else at = this.capacity - 1;
    }
    while (at > 0 && (this.scores[at - 1] as number) < score) {
      this.scores[at] = this.scores[at - 1] as number;
      this.a0[at] = this.a0[at - 1] as number;
      this.a1[at] = this.a1[at - 1] as number;
      this.a2[at] = this.a2[at - 1] as number;
      this.a3[at] = this.a3[at - 1] as number;
      at -= 1;
    }
    this.scores[at] = score;
    this.a0[at] = a0;
    this.a1[at] = a1;
    this.a2[at] = a2;
    this.a3[at] = a3;
    if (this.size === this.capacity) this.threshold = this.scores[this.capacity - 1] as number;
  }

  list(): Float64Array[] {
    const axes: Float64Array[] = [];
    for (let k = 0; k < this.size; k++) {
      axes.push(
        Float64Array.of(this.a0[k] as number, this.a1[k] as number, this.a2[k] as number, this.a3[k] as number),
      );
    }
    return axes;
  }
}

/** Reach of each refining step, in coarse half widths for the first and in FWHM after. */
const reaches = [0.9, 0.6, 0.4, 0.3] as const;

const normal = new Float64Array(terms * terms);
const right = new Float64Array(terms);

/** Refine one axis, from a first step on; null where it leaves the bounds or holds fewer than three lines. */
export function refine(
  problem: Problem,
  table: ReferenceTable,
  odds: Odds,
  start: Float64Array,
  firstStep = 0,
): Float64Array | null {
  const correction = Float64Array.from(start);
  const strong = strongCount(problem);
  const { bounds, fwhmNm } = problem;
  const first = coarseHalfWidth(problem);
  for (let step = firstStep; step <= reaches.length; step++) {
    const reach = step === 0 ? first : (reaches[step - 1] as number) * fwhmNm;
    const spread = 0.35 * reach;
    normal.fill(0);
    right.fill(0);
    let held = 0;
    for (let rank = 0; rank < problem.byHeight.length; rank++) {
      const i = problem.byHeight[rank] as number;
      const pi = rank < strong ? odds.strong : odds.weak;
      const nm = correctedNm(problem, correction, i);
      const widened = reach + 2 * (problem.lineUncNm[i] as number);
      let weight = 0;
      let pull = 0;
      for (let j = lowerBound(table.nm, nm - widened); j < table.nm.length; j++) {
        const d = (table.nm[j] as number) - nm;
        if (d > widened) break;
        const u = d / widened;
        const shape = (1 - u * u) * (1 - u * u) * (pi[j] as number);
        weight += shape;
        pull += shape * d;
      }
      if (weight === 0) continue;
      held += 1;
      const target = nm + pull / weight - (problem.baseNm[i] as number);
      const own = problem.lineUncNm[i] as number;
      const w = 1 / (spread * spread + own * own);
      const k = i * terms;
      for (let r = 0; r < terms; r++) {
        const br = problem.basis[k + r] as number;
        right[r] = (right[r] as number) + w * br * target;
        for (let c = 0; c <= r; c++) {
          normal[r * terms + c] = (normal[r * terms + c] as number) + w * br * (problem.basis[k + c] as number);
        }
      }
    }
    if (held < 3) return null;
    addPrior(normal, bounds);
    if (!factorise(normal)) return null;
    solveFactorised(normal, right, correction);
  }
  return withinBounds(problem, correction) ? correction : null;
}

function withinBounds(problem: Problem, a: Float64Array): boolean {
  const { bounds, fwhmNm } = problem;
  const even = (a[0] as number) + (a[2] as number);
  const odd = (a[1] as number) + (a[3] as number);
  return (
    Math.abs(even + odd) <= bounds.endNm + fwhmNm &&
    Math.abs(even - odd) <= bounds.endNm + fwhmNm &&
    Math.abs(a[1] as number) <= bounds.scaleNm + fwhmNm &&
    Math.abs(a[2] as number) <= 1.1 * bounds.curvatureNm &&
    Math.abs(a[3] as number) <= 1.2 * bounds.cubicNm
  );
}
