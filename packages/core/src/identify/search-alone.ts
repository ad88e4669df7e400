/**
 * Search for axes with nothing known but the lamp: any span, any place, either direction.
 *
 * Three strong found lines, well apart, are tried on every three published lines that an axis bent like a grating's could bring them to;
 * three pairs fix an axis of second order, third order at what gratings usually have. The other strong lines vote (`score`), with
 * the odds of the window that the axis would show. Triples are tried in rounds, so that strays among them cost nothing but time;
 * the caller stops when an answer is beyond doubt.
 *
 * Limits   `scale-tables`: 36 to 1,150 nm of span within 150 to 1,250 nm; the axis leaves its chord by at most 5.5 % of the span
 */
import type { Problem } from "./problem.ts";
import { usualCubic } from "./problem.ts";
import { lowerBound } from "./reference-table.ts";
import { leastSpanNm, longestNm, mostSpanNm, shortestNm, type Scale } from "./scale-tables.ts";
import { strayShare, strongCount } from "./score.ts";

const linesVoting = 20;
const keptAxes = 40;
const mostTriples = 24;
const anchorLines = 9;
/** Largest |q| of q (t - ta)(tb - t), over the slope: 5.5 % of the span. */
const mostBend = 0.11;
/** Third orders tried, as shares of the span beside the usual one. */
const cubicOffsets = [-0.0011, 0.0011] as const;
const oneCubicFrom = 0.003;
/** A line that is no published line counts for this much at the most. */
const missBelow = 0.3;
/** Of the first n voting lines so many may be strays: a start, and a share of them. */
const firstStrays = 2;
const strayVotes = 0.42;
/** What a pair of outer lines costs beside its votes, in places looked up. */
const pairWork = 6;

/** An axis over t = -1..1 in Chebyshev terms, nm, and what the voters say of it. */
export interface LampAxis {
  terms: Float64Array;
  score: number;
}

export type Triple = readonly [number, number, number];

/** Lines to try on: triples of strong ones that lie well apart, the best first, no line in more than its share. */
export function triplesOf(problem: Problem): Triple[] {
  const { byHeight, t } = problem;
  const pool = byHeight.slice(0, anchorLines);
  const ranked: { triple: Triple; rank: number }[] = [];
  for (let a = 0; a < pool.length; a++) {
    for (let b = a + 1; b < pool.length; b++) {
      for (let c = b + 1; c < pool.length; c++) {
        const [low, middle, high] = [pool[a] as number, pool[b] as number, pool[c] as number].sort(
          (x, y) => (t[x] as number) - (t[y] as number),
        ) as [number, number, number];
        const apart = (t[high] as number) - (t[low] as number);
        const inner = Math.min((t[middle] as number) - (t[low] as number), (t[high] as number) - (t[middle] as number));
        if (inner < 0.02 || apart < 0.1) continue;
        ranked.push({
          triple: [low, middle, high],
          rank: (a + b + c + 6) / (apart * Math.sqrt(inner / apart)),
        });
      }
    }
  }
  const uses = new Int32Array(problem.count);
  const chosen: Triple[] = [];
  const costOf = ({ triple, rank }: { triple: Triple; rank: number }): number =>
    rank * (1 + triple.reduce((sum, i) => sum + (uses[i] as number), 0));
  while (ranked.length > 0 && chosen.length < mostTriples) {
    let next = 0;
    for (let k = 1; k < ranked.length; k++) {
      if (costOf(ranked[k] as (typeof ranked)[number]) < costOf(ranked[next] as (typeof ranked)[number])) next = k;
    }
    const [{ triple }] = ranked.splice(next, 1) as [(typeof ranked)[number]];
    for (const i of triple) uses[i] = (uses[i] as number) + 1;
    chosen.push(triple);
  }
  return chosen;
}

/** Looks for axes through one triple; good ones are offered to `best`. */
export function searchTriple(
  problem: Problem,
  scales: readonly Scale[],
  triple: Triple,
  level: number,
  best: BestLampAxes,
): void {
  const { t, byHeight } = problem;
  // Where modules are not bundled, each look at an imported constant is a call: taken out of the loops.
  const [lowestNm, highestNm, narrowestNm, widestNm] = [shortestNm, longestNm, leastSpanNm, mostSpanNm];
  const stray = strayShare;
  const [ta, tb, tc] = triple.map((i) => t[i] as number) as [number, number, number];
  const voters = byHeight.filter((i) => !triple.includes(i)).slice(0, linesVoting - 3);
  const order = [...triple, ...voters];
  const count = order.length;
  const strong = strongCount(problem);
  const isStrong = Uint8Array.from(order, (i) => (byHeight.indexOf(i) < strong ? 1 : 0));
  const wa = new Float64Array(count + 2);
  const wb = new Float64Array(count + 2);
  const wc = new Float64Array(count + 2);
  const fwhmShare = problem.fwhmNm / problem.spanNm;
  const cubics =
    fwhmShare > oneCubicFrom || count < 5 ? [usualCubic] : cubicOffsets.map((offset) => usualCubic + offset);
  const apart = tc - ta;
  for (const cubic of cubics) {
    // Places are linear in the three wavelengths: Lagrange's weights, with a third order in proportion to the chord.
    const perChord = (2 * cubic) / apart;
    const ca = perChord * third(ta);
    const cb = perChord * third(tb);
    const cc = perChord * third(tc);
    for (let k = 0; k < count + 2; k++) {
      const tk = k < count ? (t[order[k] as number] as number) : k === count ? -1 : 1;
      const la = ((tk - tb) * (tk - tc)) / ((ta - tb) * (ta - tc));
      const lb = ((tk - ta) * (tk - tc)) / ((tb - ta) * (tb - tc));
      const lc = ((tk - ta) * (tk - tb)) / ((tc - ta) * (tc - tb));
      const chord = perChord * third(tk) - la * ca - lb * cb - lc * cc;
      wa[k] = la - chord;
      wb[k] = lb;
      wc[k] = lc + chord;
    }
    for (const scale of scales) {
      const { cellsPerNm } = scale;
      const pool = scale.pools[level] as Float64Array;
      const leastApart = (scale.fromSpanNm * apart) / 2;
      const mostApart = (scale.toSpanNm * apart) / 2;
      const size = pool.length;
      for (let first = 0; first < size; first++) {
        const low = pool[first] as number;
        for (let second = lowerBound(pool, low + leastApart); second < size; second++) {
          const high = pool[second] as number;
          if (high - low >= mostApart) break;
          best.work += pairWork;
          for (let direction = 0; direction < 2; direction++) {
            const a = direction === 0 ? low : high;
            const c = direction === 0 ? high : low;
            const slope = (c - a) / apart;
            const straight = a + slope * (tb - ta) + (c - a) * (cb - ca - ((cc - ca) * (tb - ta)) / apart);
            const reach = Math.abs(mostBend * slope) * (tb - ta) * (tc - tb);
            for (let third = lowerBound(pool, straight - reach); third < size; third++) {
              const b = pool[third] as number;
              if (b > straight + reach) break;
              const start = (wa[count] as number) * a + (wb[count] as number) * b + (wc[count] as number) * c;
              const end = (wa[count + 1] as number) * a + (wb[count + 1] as number) * b + (wc[count + 1] as number) * c;
              const from = start < end ? start : end;
              const to = start < end ? end : start;
              if (from < lowestNm || to > highestNm) continue;
              const span = to - from;
              if (span < narrowestNm || span > widestNm) continue;
              const below = (from - lowestNm) | 0;
              const above = ((to - lowestNm) | 0) + 1;
              const strongSum = (scale.strongBelow[above] as number) - (scale.strongBelow[below] as number);
              const weakSum = (scale.weakBelow[above] as number) - (scale.weakBelow[below] as number);
              const strongFactor = ((1 - stray) * span) / strongSum;
              const weakFactor = ((1 - stray) * span) / weakSum;
              best.work += count;
              // Spans are believed equal in their logarithm, places equal: the narrower, the more places there are.
              let score = span;
              let misses = 0;
              for (let k = 0; k < count; k++) {
                const place = (wa[k] as number) * a + (wb[k] as number) * b + (wc[k] as number) * c;
                const cell = Math.round((place - lowestNm) * cellsPerNm);
                const g =
                  stray +
                  (isStrong[k] === 1
                    ? strongFactor * (scale.strong[cell] as number)
                    : weakFactor * (scale.weak[cell] as number));
                score *= g;
                if (g < missBelow && (misses += 1) > firstStrays + strayVotes * k) break;
              }
              if (misses > strayVotes * count || !(score > best.threshold)) continue;
              best.offer(score, axisThrough(ta, a, tb, b, tc, c, cubic));
            }
          }
        }
      }
    }
  }
}

const third = (t: number): number => (4 * t * t - 3) * t;

/** Chebyshev terms of the axis through three pairs, with a given third order (share of the span that the chord leads to). */
function axisThrough(ta: number, a: number, tb: number, b: number, tc: number, c: number, cubic: number): Float64Array {
  const a3 = (cubic * 2 * (c - a)) / (tc - ta);
  const fa = a - a3 * third(ta);
  const fb = b - a3 * third(tb);
  const fc = c - a3 * third(tc);
  const ab = (fb - fa) / (tb - ta);
  const bc = (fc - fb) / (tc - tb);
  const q = (bc - ab) / (tc - ta);
  // fa + ab (t - ta) + q (t - ta)(t - tb)
  const linear = ab - q * (ta + tb);
  return Float64Array.of(fa - ab * ta + q * ta * tb + q / 2, linear, q / 2, a3);
}

/** The best few axes, none close to a better one. */
export class BestLampAxes {
  threshold = 0;
  /** Places looked up so far: what the search has cost. */
  work = 0;
  readonly axes: LampAxis[] = [];

  offer(score: number, terms: Float64Array): void {
    const { axes } = this;
    const apart = 0.003 * Math.abs(2 * (terms[1] as number));
    for (let k = 0; k < axes.length; k++) {
      const other = axes[k] as LampAxis;
      if (!isClose(other.terms, terms, apart)) continue;
      if (other.score >= score) return;
      axes.splice(k, 1);
      break;
    }
    let at = axes.length;
    while (at > 0 && (axes[at - 1] as LampAxis).score < score) at -= 1;
    axes.splice(at, 0, { terms, score });
    if (axes.length > keptAxes) axes.length = keptAxes;
    if (axes.length === keptAxes) this.threshold = (axes[keptAxes - 1] as LampAxis).score;
  }
}

/** Whether two axes agree within a tolerance at both ends and in the middle. */
function isClose(a: Float64Array, b: Float64Array, apartNm: number): boolean {
  const d0 = (a[0] as number) - (b[0] as number);
  const d1 = (a[1] as number) - (b[1] as number);
  const d2 = (a[2] as number) - (b[2] as number);
  const d3 = (a[3] as number) - (b[3] as number);
  return (
    Math.abs(d0 + d1 + d2 + d3) <= apartNm && Math.abs(d0 - d1 + d2 - d3) <= apartNm && Math.abs(d0 - d2) <= apartNm
  );
}
