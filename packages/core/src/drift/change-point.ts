/**
 * Steps in the level of a series: where they lie, how large they are, and how many the evidence supports.
 *
 * Segments  the division into levels with the least weighted sum of squares for each number of steps, exactly, by dynamic programming
 *           (R. Bellman, Commun. ACM 4 (1961) 284); each segment holds at least `least` values
 * Number    by the Bayesian information criterion, n (ln(2 pi RSS/n) + 1) + p ln n, p = levels + steps + one variance (G. Schwarz, Ann.
 *           Stat. 6 (1978) 461; A. Zeileis et al., Comput. Stat. Data Anal. 44 (2003) 109)
 * Rank test for one step without a distribution (A. N. Pettitt, Appl. Stat. 28 (1979) 126): K and its approximate probability
 * Any unit. A history's step is judged against trend, temperature and odd checks in choose-model.ts; this is the series by itself.
 */
import { exp, log } from "../numeric/elementary.ts";

export interface Segmentation {
  /** Number of values before each step, rising: a step after value 28 is 28. */
  breaks: number[];
  levels: number[];
  sumOfSquares: number;
  bic: number;
}

const TWO_PI = 6.283185307179586;

/**
 * @param values   n values
 * @param most     largest number of steps tried
 * @param least    fewest values in a segment, at least 1
 * @param weights  relative weights; null = equal
 * @returns one segmentation for each number of steps from 0 that fits, and which of them has the least criterion
 */
export function changePoints(
  values: ArrayLike<number>,
  most: number,
  least: number,
  weights: ArrayLike<number> | null = null,
): { segmentations: Segmentation[]; best: number } {
  const n = values.length;
  // Sums from the mean on, so that squares lose no digits to a large level.
  let mean = 0;
  for (let i = 0; i < n; i++) mean += values[i]! / n;
  const w = new Float64Array(n + 1);
  const wy = new Float64Array(n + 1);
  const wyy = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    const weight = weights === null ? 1 : weights[i]!;
    const y = values[i]! - mean;
    w[i + 1] = w[i]! + weight;
    wy[i + 1] = wy[i]! + weight * y;
    wyy[i + 1] = wyy[i]! + weight * y * y;
  }
  const cost = (from: number, to: number): number => {
    const sum = wy[to]! - wy[from]!;
    return Math.max(0, wyy[to]! - wyy[from]! - (sum * sum) / (w[to]! - w[from]!));
  };

  let reached = Float64Array.from({ length: n + 1 }, (_, to) => (to >= least ? cost(0, to) : Infinity));
  const cuts: Int32Array[] = [];
  const segmentations: Segmentation[] = [];
  for (let steps = 0; steps <= most && (steps + 1) * least <= n; steps++) {
    if (steps > 0) {
      const next = new Float64Array(n + 1).fill(Infinity);
      const cut = new Int32Array(n + 1);
      for (let to = (steps + 1) * least; to <= n; to++) {
        for (let from = steps * least; from <= to - least; from++) {
          const total = reached[from]! + cost(from, to);
          if (total < next[to]!) {
            next[to] = total;
            cut[to] = from;
          }
        }
      }
      reached = next;
      cuts.push(cut);
    }
    const breaks: number[] = [];
    for (let k = steps - 1, to = n; k >= 0; k--) {
      to = cuts[k]![to]!;
      breaks.unshift(to);
    }
    const edges = [0, ...breaks, n];
    const levels = edges.slice(1).map((to, k) => mean + (wy[to]! - wy[edges[k]!]!) / (w[to]! - w[edges[k]!]!));
    const sumOfSquares = reached[n]!;
    const parameters = 2 * steps + 2;
    const bic = n * (log((TWO_PI * Math.max(sumOfSquares, 1e-300)) / n) + 1) + parameters * log(n);
    segmentations.push({ breaks, levels, sumOfSquares, bic });
  }
  let best = 0;
  segmentations.forEach((one, k) => {
    if (one.bic < segmentations[best]!.bic) best = k;
  });
  return { segmentations, best };
}

/** Pettitt's K, the number of values before the step it points at, and its approximate probability without a step. */
export function pettitt(values: ArrayLike<number>): { k: number; breakAfter: number; probability: number } {
  const n = values.length;
  let u = 0;
  let k = 0;
  let breakAfter = 0;
  for (let t = 0; t < n - 1; t++) {
    for (let j = 0; j < n; j++) u += Math.sign(values[t]! - values[j]!);
    if (Math.abs(u) > k) {
      k = Math.abs(u);
      breakAfter = t + 1;
    }
  }
  return { k, breakAfter, probability: Math.min(1, 2 * exp((-6 * k * k) / (n * n * n + n * n))) };
}
