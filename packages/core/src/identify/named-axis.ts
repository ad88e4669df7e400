/** The identified axis in the shape others use: powers of the pixel, covariance in Chebyshev terms between its outermost lines. */
import type { FittedLine, PixelAxis } from "../analysis/types.ts";
import { chebyshevArgument, chebyshevBasis, chebyshevToPowers } from "../numeric/chebyshev.ts";
import type { Naming } from "./name-lines.ts";
import { orderCount, type Problem, usualCubic } from "./problem.ts";
import { cos, PI } from "../numeric/elementary.ts";

/**
 * Believed axis plus correction.
 *
 * @returns null on a wavenumber axis, whose wavelength is no polynomial, and with fewer than two named lines
 */
export function namedAxis(problem: Problem, lines: readonly FittedLine[], naming: Naming): PixelAxis | null {
  if (problem.axisKind === "wavenumber") return null;
  const { firstPosition, lastPosition } = problem;
  const base = basePowers(problem);
  const correction = chebyshevToPowers(naming.fit.correction, firstPosition, lastPosition);
  const coefficients = Array.from(
    { length: Math.max(base.length, orderCount) },
    (_, k) => (base[k] ?? 0) + (correction[k] ?? 0),
  );
  let first = Number.POSITIVE_INFINITY;
  let last = Number.NEGATIVE_INFINITY;
  let named = 0;
  for (let i = 0; i < problem.count; i++) {
    if ((naming.reference[i] as number) < 0) continue;
    const position = (lines[i] as FittedLine).position;
    first = Math.min(first, position);
    last = Math.max(last, position);
    named += 1;
  }
  if (named < 2) return null;
  return {
    coefficients,
    firstPx: first,
    lastPx: last,
    chebyshevCovariance: movedCovariance(naming.fit.covariance, problem, first, last, coefficients.length),
    degreesOfFreedom: Math.max(named - orderCount, 1),
    meaning: problem.meaning,
  };
}

function basePowers({ mode, firstPosition, lastPosition }: Problem): number[] {
  if (mode.kind === "earlier-axis") return mode.axis === "own" ? [0, 1] : mode.axis.coefficients.slice();
  if (mode.kind === "none") throw new RangeError("an axis without a belief to correct");
  const span = mode.lastNm - mode.firstNm;
  const terms = [(mode.firstNm + mode.lastNm) / 2, span / 2, 0, usualCubic * span];
  return Array.from(chebyshevToPowers(terms, firstPosition, lastPosition));
}

/** Covariance of the Chebyshev terms over the capture, rewritten for terms over [first, last]; zero for higher terms. */
function movedCovariance(
  covariance: Float64Array,
  problem: Problem,
  first: number,
  last: number,
  size: number,
): number[] {
  const n = orderCount;
  // Column j: T_j over the capture as a sum of T_k over [first, last], by the discrete orthogonality at the nodes of T_n.
  const moved = new Float64Array(n * n);
  for (let m = 0; m < n; m++) {
    const node = cos((PI * (m + 0.5)) / n);
    const position = (first + last) / 2 + (node * (last - first)) / 2;
    const wide = chebyshevBasis(n - 1, chebyshevArgument(position, problem.firstPosition, problem.lastPosition));
    const narrow = chebyshevBasis(n - 1, node);
    for (let k = 0; k < n; k++) {
      for (let j = 0; j < n; j++) {
        const share = ((k === 0 ? 1 : 2) / n) * (narrow[k] as number) * (wide[j] as number);
        moved[k * n + j] = (moved[k * n + j] as number) + share;
      }
    }
  }
  const result = new Array<number>(size * size).fill(0);
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < n; c++) {
      let sum = 0;
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) {
          sum += (moved[r * n + i] as number) * (covariance[i * n + j] as number) * (moved[c * n + j] as number);
        }
      }
      result[r * size + c] = sum;
    }
  }
  return result;
}
