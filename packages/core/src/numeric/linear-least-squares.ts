/**
 * Weighted linear least squares by Householder reflections with column pivoting; no normal equations.
 *
 * Source   G. H. Golub, Numer. Math. 7 (1965) 206; P. Businger and G. H. Golub, Numer. Math. 7 (1965) 269.
 *          Columns are scaled by powers of two, which costs no digit; the solution is refined on its residuals and gradient in twice
 *          the precision (Å. Björck, BIT 7 (1967) 257). Held to NIST StRD (tests/external).
 */
import { PreciseSum } from "./double-double.ts";

export interface LinearFit {
  /** Length n; 0 for columns that the data cannot tell apart from the others (see `rank`). */
  coefficients: Float64Array;
  /**
   * n x n, row-major. With uncertainties given: what they imply, not scaled by the residuals. Without: scaled by
   * residualSd²; Infinity on the diagonal where nothing is left over to estimate it from, or the column was dropped.
   */
  covariance: Float64Array;
  /** y - design coefficients, in the unit of y, length m. */
  residuals: Float64Array;
  degreesOfFreedom: number;
  /** sqrt(sum of (residual/unc)² / degrees of freedom), unc = 1 when not given; null when there are none. */
  residualSd: number | null;
  /** Number of columns that are independent to 1e-13 of their length. */
  rank: number;
  /** Diagonal of the hat matrix (leverage) of each row, length m. */
  leverages: Float64Array;
}

const RANK_TOLERANCE = 1e-13;

/**
 * Fit y = design c.
 *
 * @param design  row-major m x n
 * @param m       number of observations, at least n
 * @param n       number of coefficients, at least 1
 * @param y       length m
 * @param unc     standard uncertainty of each y, > 0, or null: all equal and estimated from the residuals
 * @throws {RangeError} caller bugs: wrong lengths, fewer rows than columns, a value that is not finite, unc not positive
 */
export function solveLeastSquares(
  design: Float64Array,
  m: number,
  n: number,
  y: ArrayLike<number>,
  unc: ArrayLike<number> | null,
): LinearFit {
  checkInput(design, m, n, y, unc);
  // Weighted, scaled copy by columns: each column lies together, which is how reflections walk it.
  const columns = new Float64Array(m * n);
  const scales = new Float64Array(n);
  const right = new Float64Array(m);
  for (let j = 0; j < n; j++) {
    let sum = 0;
    for (let i = 0; i < m; i++) {
      const value = design[i * n + j]! / (unc ? unc[i]! : 1);
      columns[j * m + i] = value;
      sum += value * value;
    }
    scales[j] = powerOfTwoNear(Math.sqrt(sum));
    for (let i = 0; i < m; i++) columns[j * m + i] = columns[j * m + i]! / scales[j]!;
  }
  for (let i = 0; i < m; i++) right[i] = y[i]! / (unc ? unc[i]! : 1);

  const order = new Int32Array(n);
  for (let j = 0; j < n; j++) order[j] = j;
  const diagonal = new Float64Array(n);
  const rank = triangularise(columns, m, n, order, diagonal);
  const scaled = solveTriangular(columns, m, rank, diagonal, applyTranspose(columns, m, rank, right));

  const coefficients = new Float64Array(n);
  for (let k = 0; k < rank; k++) coefficients[order[k]!] = scaled[k]! / scales[order[k]!]!;
  const residuals = new Float64Array(m);
  for (let i = 0; i < m; i++) {
    let fitted = 0;
    for (let j = 0; j < n; j++) fitted += design[i * n + j]! * coefficients[j]!;
    residuals[i] = y[i]! - fitted;
  }
  if (rank === n) refine(design, m, n, y, unc, columns, diagonal, order, scales, coefficients, residuals);
  let chiSquare = 0;
  for (let i = 0; i < m; i++) {
    const ratio = residuals[i]! / (unc ? unc[i]! : 1);
    chiSquare += ratio * ratio;
  }
  const degreesOfFreedom = m - rank;
  const residualSd = degreesOfFreedom > 0 ? Math.sqrt(chiSquare / degreesOfFreedom) : null;
  const variance = unc ? 1 : residualSd === null ? Infinity : residualSd * residualSd;
  return {
    coefficients,
    covariance: covarianceOf(columns, m, n, rank, diagonal, order, scales, variance),
    residuals,
    degreesOfFreedom,
    residualSd,
    rank,
    leverages: leveragesOf(columns, m, rank),
  };
}

function checkInput(
  design: Float64Array,
  m: number,
  n: number,
  y: ArrayLike<number>,
  unc: ArrayLike<number> | null,
): void {
  if (!(Number.isInteger(m) && Number.isInteger(n) && n >= 1 && m >= n)) {
    throw new RangeError(`Needs at least as many observations as coefficients; got ${m} and ${n}`);
  }
  if (design.length !== m * n || y.length !== m || (unc && unc.length !== m)) {
    throw new RangeError(
      `Lengths differ: design ${design.length}, y ${y.length}, unc ${unc?.length ?? "none"} for ${m} x ${n}`,
    );
  }
  for (let i = 0; i < design.length; i++)
    if (!Number.isFinite(design[i])) throw new RangeError(`design[${i}] is not finite`);
  for (let i = 0; i < m; i++) {
    if (!Number.isFinite(y[i])) throw new RangeError(`y[${i}] is not finite`);
    if (unc && !(unc[i]! > 0 && unc[i]! < Infinity))
      throw new RangeError(`unc[${i}] must be above 0 and finite; got ${unc[i]}`);
  }
}

/** Reflects the columns into upper triangular form in place; Householder vectors stay below and on the diagonal. */
function triangularise(columns: Float64Array, m: number, n: number, order: Int32Array, diagonal: Float64Array): number {
  for (let k = 0; k < n; k++) {
    let pivot = k;
    let largest = -1;
    for (let j = k; j < n; j++) {
      let sum = 0;
      for (let i = k; i < m; i++) sum += columns[j * m + i]! * columns[j * m + i]!;
      // A later column must be clearly longer: keeps the given order, and with it the digits, in the usual case.
      if (sum > largest * 4) {
        largest = sum;
        pivot = j;
      }
    }
    if (pivot !== k) {
      for (let i = 0; i < m; i++) {
        const kept = columns[k * m + i]!;
        columns[k * m + i] = columns[pivot * m + i]!;
        columns[pivot * m + i] = kept;
      }
      const kept = order[k]!;
      order[k] = order[pivot]!;
      order[pivot] = kept;
    }
    const norm = Math.sqrt(largest);
    if (norm <= RANK_TOLERANCE) return k;
    const head = columns[k * m + k]!;
    const alpha = head > 0 ? -norm : norm;
    diagonal[k] = alpha;
    columns[k * m + k] = head - alpha;
    const scale = -1 / (alpha * columns[k * m + k]!);
    for (let j = k + 1; j < n; j++) {
      let dot = 0;
      for (let i = k; i < m; i++) dot += columns[k * m + i]! * columns[j * m + i]!;
      dot *= scale;
      for (let i = k; i < m; i++) columns[j * m + i] = columns[j * m + i]! - dot * columns[k * m + i]!;
    }
  }
  return n;
}

function reflect(columns: Float64Array, m: number, k: number, vector: Float64Array): void {
  let square = 0;
  let dot = 0;
  for (let i = k; i < m; i++) {
    square += columns[k * m + i]! * columns[k * m + i]!;
    dot += columns[k * m + i]! * vector[i]!;
  }
  const factor = (2 * dot) / square;
  for (let i = k; i < m; i++) vector[i] = vector[i]! - factor * columns[k * m + i]!;
}

function applyTranspose(columns: Float64Array, m: number, rank: number, vector: Float64Array): Float64Array {
  const result = Float64Array.from(vector);
  for (let k = 0; k < rank; k++) reflect(columns, m, k, result);
  return result;
}

function solveTriangular(
  columns: Float64Array,
  m: number,
  rank: number,
  diagonal: Float64Array,
  right: Float64Array,
): Float64Array {
  const solution = new Float64Array(rank);
  for (let k = rank - 1; k >= 0; k--) {
    let sum = right[k]!;
    for (let j = k + 1; j < rank; j++) sum -= columns[j * m + k]! * solution[j]!;
    solution[k] = sum / diagonal[k]!;
  }
  return solution;
}

/** Powers of two nearest to a length (within a factor of two); 1 for 0. */
function powerOfTwoNear(length: number): number {
  if (!(length > 0 && length < Infinity)) return 1;
  let power = 1;
  while (power > length) power /= 2;
  while (power * 2 <= length) power *= 2;
  return power;
}

/** Corrections are worth computing as long as each is below half of the one before it. */
const MAX_REFINEMENTS = 4;
const EPSILON = 2.220446049250313e-16;

/**
 * Improves coefficients and residuals in place: solves R'R c = … once more for what is left of y - Xc - r = 0 and X'W r = 0, both
 * computed in twice the precision, with the reflections that are there already.
 */
function refine(
  design: Float64Array,
  m: number,
  n: number,
  y: ArrayLike<number>,
  unc: ArrayLike<number> | null,
  columns: Float64Array,
  diagonal: Float64Array,
  order: Int32Array,
  scales: Float64Array,
  coefficients: Float64Array,
  residuals: Float64Array,
): void {
  const precise = new PreciseSum();
  const left = new Float64Array(m);
  const weighted = new Float64Array(m);
  const h = new Float64Array(n);
  const head = new Float64Array(n);
  let before = Infinity;
  for (let round = 0; round < MAX_REFINEMENTS; round++) {
    for (let i = 0; i < m; i++) {
      const u = unc ? unc[i]! : 1;
      precise.reset(y[i]!);
      precise.add(-residuals[i]!);
      for (let j = 0; j < n; j++) precise.addProduct(-design[i * n + j]!, coefficients[j]!);
      left[i] = precise.value / u;
      weighted[i] = residuals[i]! / u / u;
    }
    // R' h = -X'W r, columns in the order of the pivots.
    for (let k = 0; k < n; k++) {
      const column = order[k]!;
      precise.reset();
      for (let i = 0; i < m; i++) precise.addProduct(-design[i * n + column]!, weighted[i]!);
      let sum = precise.value / scales[column]!;
      for (let j = 0; j < k; j++) sum -= columns[k * m + j]! * h[j]!;
      h[k] = sum / diagonal[k]!;
    }
    const turned = applyTranspose(columns, m, n, left);
    for (let k = 0; k < n; k++) {
      head[k] = turned[k]! - h[k]!;
      turned[k] = h[k]!;
    }
    const step = solveTriangular(columns, m, n, diagonal, head);
    let size = 0;
    let isDone = true;
    for (let k = 0; k < n; k++) {
      const coefficient = coefficients[order[k]!]!;
      const change = step[k]! / scales[order[k]!]!;
      size += step[k]! * step[k]!;
      if (Math.abs(change) > EPSILON * Math.abs(coefficient)) isDone = false;
    }
    if (!(size < 0.25 * before)) return;
    before = size;
    for (let k = 0; k < n; k++) coefficients[order[k]!] = coefficients[order[k]!]! + step[k]! / scales[order[k]!]!;
    for (let k = n - 1; k >= 0; k--) reflect(columns, m, k, turned);
    for (let i = 0; i < m; i++) residuals[i] = residuals[i]! + turned[i]! * (unc ? unc[i]! : 1);
    if (isDone) return;
  }
}

function covarianceOf(
  columns: Float64Array,
  m: number,
  n: number,
  rank: number,
  diagonal: Float64Array,
  order: Int32Array,
  scales: Float64Array,
  variance: number,
): Float64Array {
  const inverse = new Float64Array(rank * rank);
  for (let c = 0; c < rank; c++) {
    for (let k = c; k >= 0; k--) {
      let sum = k === c ? 1 : 0;
      for (let j = k + 1; j <= c; j++) sum -= columns[j * m + k]! * inverse[j * rank + c]!;
      inverse[k * rank + c] = sum / diagonal[k]!;
    }
  }
  const covariance = new Float64Array(n * n);
  for (let k = rank; k < n; k++) covariance[order[k]! * n + order[k]!] = Infinity;
  for (let a = 0; a < rank; a++) {
    for (let b = a; b < rank; b++) {
      let sum = 0;
      for (let c = b; c < rank; c++) sum += inverse[a * rank + c]! * inverse[b * rank + c]!;
      const p = order[a]!;
      const q = order[b]!;
      const value = variance === Infinity ? (a === b ? Infinity : 0) : (sum * variance) / (scales[p]! * scales[q]!);
      covariance[p * n + q] = value;
      covariance[q * n + p] = value;
    }
  }
  return covariance;
}

/** Row sums of squares of the first `rank` columns of Q. */
function leveragesOf(columns: Float64Array, m: number, rank: number): Float64Array {
  const leverages = new Float64Array(m);
  const unit = new Float64Array(m);
  for (let c = 0; c < rank; c++) {
    unit.fill(0);
    unit[c] = 1;
    for (let k = c; k >= 0; k--) reflect(columns, m, k, unit);
    for (let i = 0; i < m; i++) leverages[i] = leverages[i]! + unit[i]! * unit[i]!;
  }
  return leverages;
}
