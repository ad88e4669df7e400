/**
 * Mending an axis that is right in part: where lines are crowded, a search may end on an axis that fits over most of a capture and
 * finds something to lie on elsewhere.
 *
 * Each end and the middle are moved in turn by so many line widths, the other two held; the axis is refined again from there, and kept
 * where the evidence is better. Repeated until nothing gets better.
 */
import type { Question } from "./candidates.ts";
import { orderCount } from "./problem.ts";
import { type Evidence, evidenceFor } from "./score.ts";
import { refine } from "./search.ts";

/** Moves, in line widths. */
const moves = [0.8, 1.8, 3.2, 5] as const;
const mostRounds = 4;
const betterBy = 0.1;
/** An axis that was right gains a little where a stray comes to lie on some line; one that was wrong in part gains more (ln). */
const leastGain = 3;

/** Corrections that move one place by 1 nm and hold the other two, in T0..T2. */
const bumps: readonly (readonly [number, number, number])[] = [
  // t = -1: (t² - t)/2
  [0.25, -0.5, 0.25],
  // t = +1: (t² + t)/2
  [0.25, 0.5, 0.25],
  // t = 0: 1 - t²
  [0.5, 0, -0.5],
];

export interface Mended {
  correction: Float64Array;
  evidence: Evidence;
}

/** The best axis to be had from one by moves of its ends and its middle. */
export function mend({ problem, table, odds }: Question, start: Mended): Mended {
  let best = start;
  const moved = new Float64Array(orderCount);
  for (let round = 0; round < mostRounds; round++) {
    const from = best;
    for (const [d0, d1, d2] of bumps) {
      for (const size of moves) {
        for (let sign = -1; sign <= 1; sign += 2) {
          const by = sign * size * problem.fwhmNm;
          moved.set(from.correction);
          moved[0] = (moved[0] as number) + by * d0;
          moved[1] = (moved[1] as number) + by * d1;
          moved[2] = (moved[2] as number) + by * d2;
          const correction = refine(problem, table, odds, moved, 1);
          if (correction === null) continue;
          const evidence = evidenceFor(problem, table, odds, correction);
          if (evidence.value > best.evidence.value + betterBy) best = { correction, evidence };
        }
      }
    }
    if (best === from) break;
  }
  return best.evidence.value >= start.evidence.value + leastGain ? best : start;
}
