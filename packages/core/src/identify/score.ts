/**
 * How well an axis explains the found lines, and how likely so good an explanation is by accident.
 *
 * Model    each found line is either a published line of the lamp, its wavelength scattered about it with a standard
 *          deviation s, or (share `strayShare`) anything else, equally likely anywhere in the window of length L:
 *          g(lambda) = strayShare + (1 - strayShare) L sum_j pi_j N(lambda - lambda_j; s),   sum pi_j = 1
 *          score = sum over lines of ln g - misses - unusual bending; pi_j leans on published intensities, more for the stronger lines
 * Chance   null model: the found lines lie independently and evenly over the window, whatever lamp it was. Under it each
 *          g has mean 1, so a given axis reaches a score of S or more with a probability of at most e^-S (Markov), and
 *          any of n distinguishable axes with at most n e^-S. n is the volume that the bounds allow over the volume of
 *          one axis to within s, times the number of widths s tried. An upper bound, not an estimate.
 * Misses   prominent lines of the lamp that should be in the window and were not found lower the score a little: lamps,
 *          fibres and detectors hide lines, so that is weak evidence
 */
import { exp, log, PI } from "../numeric/elementary.ts";
import { bendPenalty } from "./correction.ts";
import { orderCount, type Problem } from "./problem.ts";
import { lowerBound, oddsOf, type ReferenceTable } from "./reference-table.ts";

/** Share of found lines that are no listed line of the lamp: impurities, room light, weak unlisted lines. */
const strayShare = 0.12;
/** Strong found lines lean more on published intensities than weak ones. */
const strongPower = 0.7;
const weakPower = 0.3;
const missCost = 0.5;
const prominent = 0.3;
/** Standard deviations tried, shares of the FWHM. */
const widthShares = [0.05, 0.12, 0.28] as const;

export interface Odds {
  /** pi_j for strong and for weak found lines, each summing to 1. */
  strong: Float64Array;
  weak: Float64Array;
  windowNm: number;
}

export function oddsFor(table: ReferenceTable, windowNm: number): Odds {
  const strong = new Float64Array(table.nm.length);
  const weak = new Float64Array(table.nm.length);
  let strongSum = 0;
  let weakSum = 0;
  for (let j = 0; j < strong.length; j++) {
    const strength = table.strength[j] as number;
    strongSum += strong[j] = oddsOf(strength, strongPower);
    weakSum += weak[j] = oddsOf(strength, weakPower);
  }
  for (let j = 0; j < strong.length; j++) {
    strong[j] = (strong[j] as number) / strongSum;
    weak[j] = (weak[j] as number) / weakSum;
  }
  return { strong, weak, windowNm };
}

/** Found lines that count as strong: the upper 60 %, at most fourteen. */
export function strongCount(problem: Problem): number {
  return Math.min(14, Math.ceil(0.6 * problem.byHeight.length));
}

/**
 * ln g of every found line is not needed by the coarse search: it multiplies g itself, read from a table over wavelength.
 * The kernel there is a biweight, (15/16h)(1 - u²)², as wide as what the coarse axis leaves out.
 */
export interface CoarseTable {
  fromNm: number;
  cellsPerNm: number;
  strong: Float64Array;
  weak: Float64Array;
  halfWidthNm: number;
}

export function coarseTable(
  table: ReferenceTable,
  odds: Odds,
  fromNm: number,
  toNm: number,
  halfWidthNm: number,
): CoarseTable {
  const cellsPerNm = 5 / halfWidthNm;
  const cells = Math.ceil((toNm - fromNm) * cellsPerNm) + 2;
  const strong = new Float64Array(cells).fill(strayShare);
  const weak = new Float64Array(cells).fill(strayShare);
  const height = (15 / 16 / halfWidthNm) * (1 - strayShare) * odds.windowNm;
  for (let j = 0; j < table.nm.length; j++) {
    const at = table.nm[j] as number;
    const first = Math.max(0, Math.ceil((at - halfWidthNm - fromNm) * cellsPerNm));
    const last = Math.min(cells - 1, Math.floor((at + halfWidthNm - fromNm) * cellsPerNm));
    for (let cell = first; cell <= last; cell++) {
      const u = (fromNm + cell / cellsPerNm - at) / halfWidthNm;
      const shape = 1 - u * u;
      const value = height * shape * shape;
      strong[cell] = (strong[cell] as number) + value * (odds.strong[j] as number);
      weak[cell] = (weak[cell] as number) + value * (odds.weak[j] as number);
    }
  }
  return { fromNm, cellsPerNm, strong, weak, halfWidthNm };
}

/** Wavelength of line i with a correction, nm. */
export function correctedNm(problem: Problem, correction: Float64Array, i: number): number {
  const k = i * orderCount;
  return (
    (problem.baseNm[i] as number) +
    (correction[0] as number) * (problem.basis[k] as number) +
    (correction[1] as number) * (problem.basis[k + 1] as number) +
    (correction[2] as number) * (problem.basis[k + 2] as number) +
    (correction[3] as number) * (problem.basis[k + 3] as number)
  );
}

/** Wavelength at the first (t = -1) or last (t = 1) position of the capture, nm. */
export function endNm(problem: Problem, correction: Float64Array, t: number): number {
  const base = t < 0 ? problem.baseFirstNm : problem.baseLastNm;
  const odd = (correction[1] as number) + (correction[3] as number);
  return base + (correction[0] as number) + (correction[2] as number) + t * odd;
}

export interface Evidence {
  /** Score less the logarithm of the number of distinguishable axes, at the best of the widths tried. */
  value: number;
  /** exp(-value) times the number of widths, at most 1. */
  chanceProbability: number;
  standardDeviationNm: number;
}

/** Evidence for one axis: best over the widths tried. */
export function evidenceFor(problem: Problem, table: ReferenceTable, odds: Odds, correction: Float64Array): Evidence {
  const strong = strongCount(problem);
  const misses = missedCost(problem, table, correction);
  const bend = bendPenalty(correction, problem.bounds);
  let best = Number.NEGATIVE_INFINITY;
  let bestWidth = 0;
  for (const share of widthShares) {
    const width = share * problem.fwhmNm;
    let score = bend - misses;
    for (let rank = 0; rank < problem.byHeight.length; rank++) {
      const i = problem.byHeight[rank] as number;
      const pi = rank < strong ? odds.strong : odds.weak;
      score += log(lineOdds(problem, table, odds.windowNm, pi, correctedNm(problem, correction, i), i, width));
    }
    const value = score - log(distinguishableAxes(problem, width));
    if (value > best) {
      best = value;
      bestWidth = width;
    }
  }
  return {
    value: best,
    chanceProbability: Math.min(1, widthShares.length * exp(-best)),
    standardDeviationNm: bestWidth,
  };
}

/** ln g of every line, at one width; NaN for lines that may not name themselves. */
export function lineEvidence(
  problem: Problem,
  table: ReferenceTable,
  odds: Odds,
  correction: Float64Array,
  width: number,
): Float64Array {
  const evidence = new Float64Array(problem.count).fill(Number.NaN);
  const strong = strongCount(problem);
  problem.byHeight.forEach((i, rank) => {
    const pi = rank < strong ? odds.strong : odds.weak;
    evidence[i] = log(lineOdds(problem, table, odds.windowNm, pi, correctedNm(problem, correction, i), i, width));
  });
  return evidence;
}

/** g of one line. */
function lineOdds(
  problem: Problem,
  table: ReferenceTable,
  windowNm: number,
  pi: Float64Array,
  nm: number,
  i: number,
  width: number,
): number {
  const own = problem.lineUncNm[i] as number;
  const sd = Math.sqrt(width * width + own * own);
  const reach = 4 * sd;
  let sum = 0;
  for (let j = lowerBound(table.nm, nm - reach); j < table.nm.length; j++) {
    const u = ((table.nm[j] as number) - nm) / sd;
    if (u > 4) break;
    sum += (pi[j] as number) * exp(-0.5 * u * u);
  }
  return strayShare + ((1 - strayShare) * windowNm * sum) / (sd * Math.sqrt(2 * PI));
}

/** Number of axes within the bounds that differ by more than one standard deviation. */
export function distinguishableAxes(problem: Problem, width: number): number {
  const { bounds } = problem;
  const cell = 2.5 * width;
  const along = (half: number): number => Math.max(1, (2 * half) / cell);
  const ends = along(bounds.endNm) * along(Math.min(bounds.scaleNm, bounds.endNm));
  return ends * along(bounds.curvatureNm) * along(bounds.cubicNm);
}

function missedCost(problem: Problem, table: ReferenceTable, correction: Float64Array): number {
  const a = endNm(problem, correction, -1);
  const b = endNm(problem, correction, 1);
  const low = Math.min(a, b) + problem.fwhmNm;
  const high = Math.max(a, b) - problem.fwhmNm;
  let cost = 0;
  for (let j = lowerBound(table.nm, low); j < table.nm.length && (table.nm[j] as number) <= high; j++) {
    const strength = table.strength[j] as number;
    if (strength < prominent) continue;
    let found = false;
    for (let i = 0; i < problem.count && !found; i++) {
      found = Math.abs(correctedNm(problem, correction, i) - (table.nm[j] as number)) < 0.8 * problem.fwhmNm;
    }
    if (!found) cost += missCost * strength;
  }
  return cost;
}
