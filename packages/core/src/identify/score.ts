/**
 * How well an axis explains the found lines, and how likely so good an explanation is by accident.
 *
 * Model    each found line is either a published line of the lamp, its wavelength scattered about it with a standard
 *          deviation s, or (share `strayShare`) anything else, equally likely anywhere in the window of length L:
 *          g(lambda) = strayShare + (1 - strayShare) L sum_j pi_j N(lambda - lambda_j; s),   sum pi_j = 1
 *          score = sum over lines of ln g - misses; pi_j leans on published intensities, more for the stronger lines
 * Evidence ln of the Bayes factor: the likelihood ratio, product of g, averaged over what is believed of the axis (`problem`), by
 *          Laplace's approximation about the best axis: score + ln prior density + (4/2) ln 2 pi - ln det(H)/2, H the curvature of
 *          the score plus the precision of the belief; mean over the standard deviations s tried
 * Chance   null model: the found lines lie independently and evenly over the window, whatever lamp it was. Under it each
 *          g has mean 1 and so has their product averaged over all axes: it reaches e^S or more with a probability of at
 *          most e^-S (Markov). An upper bound, not an estimate
 * Mixtures a lamp of several elements may show all alike or one of them brightly (warming up, worn): the mean over these as well
 * Misses   prominent lines of the lamp that should be in the window and were not found lower the score a little: lamps,
 *          fibres and detectors hide lines, so that is weak evidence
 */
import { exp, log, PI } from "../numeric/elementary.ts";
import { addPrior, bendPenalty, factorise, priorSd } from "./correction.ts";
import { orderCount, type Problem } from "./problem.ts";
import { lowerBound, oddsOf, type ReferenceTable } from "./reference-table.ts";

const terms = orderCount;
/** Share of found lines that are no listed line of the lamp: impurities, room light, weak unlisted lines. */
export const strayShare = 0.12;
/** Of these, lines of room light. */
const roomShare = 0.03;
/** Strong found lines lean more on published intensities than weak ones. */
const strongPower = 0.7;
const weakPower = 0.3;
export const coarsePowers = { strong: strongPower, weak: weakPower } as const;
const missCost = 0.25;
const prominent = 0.3;
/** Standard deviations tried, shares of the FWHM. */
const widthShares = [0.02, 0.05, 0.12, 0.28] as const;

export interface Odds {
  /** pi_j for strong and for weak found lines, each summing to 1. */
  strong: Float64Array;
  weak: Float64Array;
  /** Sums of pi_j for each element. */
  strongOf: Float64Array;
  weakOf: Float64Array;
  windowNm: number;
  /** Mercury's lines of room light, nm, where the lamp itself holds none. */
  roomNm: readonly number[];
}

export function oddsFor(table: ReferenceTable, windowNm: number, roomNm: readonly number[] = []): Odds {
  const strong = new Float64Array(table.nm.length);
  const weak = new Float64Array(table.nm.length);
  const strongOf = new Float64Array(table.elements);
  const weakOf = new Float64Array(table.elements);
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
    const e = table.element[j] as number;
    strongOf[e] = (strongOf[e] as number) + (strong[j] as number);
    weakOf[e] = (weakOf[e] as number) + (weak[j] as number);
  }
  return { strong, weak, strongOf, weakOf, windowNm, roomNm };
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
  const k = i * terms;
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
  /** ln of the Bayes factor over lines scattered at random; see the module's header. */
  value: number;
  /** exp(-value), at most 1. */
  chanceProbability: number;
  /** The width that explains the lines best. */
  standardDeviationNm: number;
}

/** What a stray has for it: anything anywhere, or one of the lines of room light. */
function strayOdds({ roomNm, windowNm }: Odds, at: number, sd: number): number {
  if (roomNm.length === 0) return strayShare;
  let sum = 0;
  for (let k = 0; k < roomNm.length; k++) {
    const u = (at - (roomNm[k] as number)) / sd;
    if (u < 4 && u > -4) sum += exp(-0.5 * u * u);
  }
  return strayShare - roomShare + (sum === 0 ? 0 : (roomShare * windowNm * sum) / (roomNm.length * sd * root2Pi));
}

const widths = widthShares.length;
const root2Pi = Math.sqrt(2 * PI);
const hessian = Array.from({ length: widths }, () => new Float64Array(terms * terms));
const sdAt = new Float64Array(widths);
/** Strength of the other elements where one alone is bright. */
const dimShare = 0.05;
/** Lines whose g are multiplied before a logarithm is taken. */
const linesPerLog = 24;

/** Working space for a lamp of so many elements: `mixtures` is all alike, then each alone bright. */
interface Space {
  mixtures: number;
  /** For each width and element: sum of pi N. */
  sums: Float64Array;
  /** For each mixture and width. */
  product: Float64Array;
  score: Float64Array;
  misses: Float64Array;
}
const spaces: Space[] = [];

function spaceFor(elements: number): Space {
  let space = spaces[elements];
  if (space === undefined) {
    const mixtures = elements > 1 ? elements + 1 : 1;
    space = {
      mixtures,
      sums: new Float64Array(widths * elements),
      product: new Float64Array(mixtures * widths),
      score: new Float64Array(mixtures * widths),
      misses: new Float64Array(elements),
    };
    spaces[elements] = space;
  }
  return space;
}

/** Evidence for one axis: mean over the widths and the mixtures of elements tried. */
export function evidenceFor(problem: Problem, table: ReferenceTable, odds: Odds, correction: Float64Array): Evidence {
  const strong = strongCount(problem);
  const { byHeight, basis, bounds, fwhmNm } = problem;
  const { nm, elements } = table;
  const { mixtures, sums, product, score, misses } = spaceFor(elements);
  const scale = ((1 - strayShare) * odds.windowNm) / root2Pi;
  for (const one of hessian) one.fill(0);
  score.fill(0);
  product.fill(1);
  for (let rank = 0; rank < byHeight.length; rank++) {
    const i = byHeight[rank] as number;
    const pi = rank < strong ? odds.strong : odds.weak;
    const shares = rank < strong ? odds.strongOf : odds.weakOf;
    const own = problem.lineUncNm[i] as number;
    const at = correctedNm(problem, correction, i);
    for (let w = 0; w < widths; w++) {
      const width = (widthShares[w] as number) * fwhmNm;
      sdAt[w] = Math.sqrt(width * width + own * own);
    }
    sums.fill(0);
    const reach = 4 * (sdAt[widths - 1] as number);
    for (let j = lowerBound(nm, at - reach); j < nm.length; j++) {
      const d = (nm[j] as number) - at;
      if (d > reach) break;
      for (let w = widths - 1; w >= 0; w--) {
        const u = d / (sdAt[w] as number);
        if (u > 4 || u < -4) break;
        const k = w * elements + (table.element[j] as number);
        sums[k] = (sums[k] as number) + (pi[j] as number) * exp(-0.5 * u * u);
      }
    }
    const k = i * terms;
    for (let w = 0; w < widths; w++) {
      const sd = sdAt[w] as number;
      let all = 0;
      for (let e = 0; e < elements; e++) all += sums[w * elements + e] as number;
      const stray = strayOdds(odds, at, sd);
      const g = stray + (scale * all) / sd;
      product[w] = (product[w] as number) * g;
      for (let m = 1; m < mixtures; m++) {
        // One element bright, the others dim beside it.
        const sum = dimShare * all + (1 - dimShare) * (sums[w * elements + m - 1] as number);
        const norm = dimShare + (1 - dimShare) * (shares[m - 1] as number);
        product[m * widths + w] = (product[m * widths + w] as number) * (stray + (scale * sum) / (sd * norm));
      }
      const weight = (1 - stray / g) / (sd * sd);
      if (weight === 0) continue;
      const h = hessian[w] as Float64Array;
      for (let r = 0; r < terms; r++) {
        const br = weight * (basis[k + r] as number);
        for (let c = 0; c <= r; c++) h[r * terms + c] = (h[r * terms + c] as number) + br * (basis[k + c] as number);
      }
    }
    if (rank % linesPerLog === linesPerLog - 1 || rank === byHeight.length - 1) {
      for (let k = 0; k < product.length; k++) score[k] = (score[k] as number) + log(product[k] as number);
      product.fill(1);
    }
  }
  missedCosts(problem, table, correction, misses);
  let allMisses = 0;
  for (let e = 0; e < elements; e++) allMisses += misses[e] as number;
  const shared =
    bendPenalty(correction, bounds) + problem.logDensity + log((2 * PI) / (priorSd(bounds, 2) * priorSd(bounds, 3)));
  let best = Number.NEGATIVE_INFINITY;
  let bestWidth = 0;
  for (let w = 0; w < widths; w++) {
    const h = hessian[w] as Float64Array;
    addPrior(h, bounds);
    let volume = Number.NEGATIVE_INFINITY;
    if (factorise(h)) {
      let diagonal = 1;
      for (let r = 0; r < terms; r++) diagonal *= h[r * terms + r] as number;
      volume = -log(diagonal);
    }
    for (let m = 0; m < mixtures; m++) {
      const missed = m === 0 ? allMisses : dimShare * allMisses + (1 - dimShare) * (misses[m - 1] as number);
      const value = (score[m * widths + w] as number) + shared + volume - missed;
      score[m * widths + w] = value;
      if (value <= best) continue;
      best = value;
      bestWidth = (widthShares[w] as number) * fwhmNm;
    }
  }
  let sum = 0;
  for (let k = 0; k < score.length; k++) sum += exp((score[k] as number) - best);
  const value = best + log(sum / score.length);
  return {
    value,
    chanceProbability: Math.min(1, exp(-value)),
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

/** What the prominent lines of each element cost that should be in the capture and were not found. */
function missedCosts(problem: Problem, table: ReferenceTable, correction: Float64Array, costs: Float64Array): void {
  const a = endNm(problem, correction, -1);
  const b = endNm(problem, correction, 1);
  const low = Math.min(a, b) + problem.fwhmNm;
  const high = Math.max(a, b) - problem.fwhmNm;
  const within = 0.8 * problem.fwhmNm;
  const { byPlace } = problem;
  const { count } = problem;
  costs.fill(0);
  // Published lines ascend, and so do the found ones along the capture, one way or the other.
  let at = a <= b ? 0 : count - 1;
  const step = a <= b ? 1 : -1;
  for (let j = lowerBound(table.nm, low); j < table.nm.length; j++) {
    const nm = table.nm[j] as number;
    if (nm > high) break;
    const strength = table.strength[j] as number;
    if (strength < prominent) continue;
    while (at >= 0 && at < count && correctedNm(problem, correction, byPlace[at] as number) <= nm - within) at += step;
    const found = at >= 0 && at < count && correctedNm(problem, correction, byPlace[at] as number) < nm + within;
    if (found) continue;
    const e = table.element[j] as number;
    costs[e] = (costs[e] as number) + missCost * strength;
  }
}
