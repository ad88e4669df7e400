/**
 * Probability that all of several correlated, normally distributed quantities lie within their limits at once.
 *
 * What      P(lower_i <= X_i <= upper_i for all i), X normal with a given mean and covariance; the covariance may be singular
 *           (quantities that depend on each other exactly), limits may be infinite
 * Source    A. Genz, J. Comput. Graph. Stat. 1 (1992) 141: separation of variables; order of the variables after G. J. Gibson,
 *           C. A. Glasbey, D. A. Elston (1994), the least probable first; singular covariances after A. Genz, K.-S. Kwong,
 *           J. Stat. Comput. Simul. 68 (2000) 1. Points: shifted lattices, folded (A. Genz,
 *           F. Bretz, Computation of Multivariate Normal and t Probabilities, Springer 2009, 4.2), found component by component
 * Error     stated with the result: three standard errors over twelve fixed shifts of the points, plus what was left out.
 *           The same input always gives the same bits: the shifts are constants, not drawn
 * Limits    up to 300 quantities; conditional variances below 1e-12 of the variance count as none (1e-6 standard deviations)
 */
import { normalCdf, normalDensity, normalQuantile } from "./distributions.ts";

export interface RectangleProbability {
  probability: number;
  /** Absolute; the true value lies within it in about 99 of 100 cases. 0 where the result is exact to rounding. */
  errorEstimate: number;
  /** Evaluations of the integrand; 0 where none were needed. */
  pointCount: number;
}

export interface RectangleOptions {
  /** Absolute error at which it is done; default 5e-4. */
  tolerance?: number;
  /** Most evaluations, each of some 0.2 µs a quantity; default 16,000. What is reached then is returned with its error. */
  maxPoints?: number;
}

const MAX_DIMENSION = 300;
const SINGULAR_VARIANCE = 1e-12;
const SINGULAR_COEFFICIENT = 1e-6;
/** More negative than rounding makes a conditional variance: no covariance. */
const INDEFINITE = -1e-8;
const SHIFTS = 12;
/**
 * Lattices by their number of points and generating vector (fixtures/generate-lattice.py), finest last. Variables beyond the vector,
 * the least telling ones, go by square roots of primes.
 */
const LATTICES: readonly { points: number; vector: readonly number[] }[] = [
  { points: 61, vector: [1, 18, 28, 12, 8, 22, 3, 14, 23, 24, 26, 16, 7, 2, 5, 20, 13, 16, 7, 13, 20, 5, 24, 29] },
  {
    points: 251,
    vector: [1, 70, 119, 87, 27, 51, 109, 15, 64, 75, 20, 8, 58, 37, 99, 34, 80, 4, 46, 56, 96, 124, 122, 38],
  },
  {
    points: 1021,
    vector: [
      1, 374, 154, 420, 130, 37, 436, 450, 104, 354, 214, 69, 322, 402, 385, 79, 469, 460, 241, 126, 41, 330, 171, 408,
    ],
  },
  {
    points: 2039,
    vector: [
      1, 790, 965, 494, 414, 563, 183, 521, 438, 714, 594, 171, 427, 133, 465, 20, 674, 650, 765, 348, 450, 258, 667,
      433,
    ],
  },
];

/**
 * P(lower <= X <= upper), X ~ N(mean, covariance).
 *
 * @param mean        length n
 * @param covariance  n x n, row-major, symmetric, positive semidefinite; a variance of 0 is a fixed quantity
 * @param lower       length n, -Infinity allowed
 * @param upper       length n, Infinity allowed
 * @throws {RangeError} caller bugs: wrong lengths, more than 300 quantities, values that are not numbers, a matrix that is no
 *   covariance
 */
export function normalRectangleProbability(
  mean: ArrayLike<number>,
  covariance: ArrayLike<number>,
  lower: ArrayLike<number>,
  upper: ArrayLike<number>,
  options: RectangleOptions = {},
): RectangleProbability {
  const tolerance = options.tolerance ?? 5e-4;
  const maxPoints = options.maxPoints ?? 16000;
  checkInput(mean, covariance, lower, upper);
  const kept = new Kept(mean, covariance, lower, upper, tolerance);
  if (kept.isImpossible) return { probability: 0, errorEstimate: 0, pointCount: 0 };
  if (kept.size === 0) return { probability: 1 - 0.5 * kept.leftOut, errorEstimate: 0.5 * kept.leftOut, pointCount: 0 };

  const factor = new OrderedFactor(kept);
  if (factor.rank === 1) {
    // One free variable: nothing to integrate.
    const probability = factor.integrand(new Float64Array(0));
    return { probability, errorEstimate: kept.leftOut, pointCount: 1 };
  }
  return integrate(factor, kept.leftOut, tolerance, maxPoints);
}

function checkInput(
  mean: ArrayLike<number>,
  covariance: ArrayLike<number>,
  lower: ArrayLike<number>,
  upper: ArrayLike<number>,
): void {
  const n = mean.length;
  if (n < 1 || n > MAX_DIMENSION) throw new RangeError(`Needs 1 to ${MAX_DIMENSION} quantities; got ${n}`);
  if (covariance.length !== n * n || lower.length !== n || upper.length !== n)
    throw new RangeError(
      `Lengths differ: covariance ${covariance.length}, limits ${lower.length} and ${upper.length} for ${n}`,
    );
  for (let i = 0; i < n; i++) {
    if (!Number.isFinite(mean[i]) || lower[i]! !== lower[i]! || upper[i]! !== upper[i]!)
      throw new RangeError(`Quantity ${i} has a mean or a limit that is not a number`);
    if (!(covariance[i * n + i]! >= 0)) throw new RangeError(`Quantity ${i} has a negative variance`);
    for (let j = 0; j < n; j++) {
      const value = covariance[i * n + j]!;
      const size = Math.sqrt(covariance[i * n + i]! * covariance[j * n + j]!);
      if (!Number.isFinite(value) || Math.abs(value) > size * (1 + 1e-8) + 1e-300)
        throw new RangeError(`Covariance of quantities ${i} and ${j} exceeds what their variances allow`);
      if (Math.abs(value - covariance[j * n + i]!) > 1e-9 * size)
        throw new RangeError(`Covariance of quantities ${i} and ${j} is not symmetric`);
    }
  }
}

/** P(a <= Z <= b), without cancellation in either tail; 0 where b < a. */
function intervalProbability(a: number, b: number): number {
  if (!(b > a)) return 0;
  return a > 0 ? normalCdf(-a) - normalCdf(-b) : normalCdf(b) - normalCdf(a);
}

/**
 * The quantities that matter, in units of their standard deviation. Those that leave their limits with a probability far below
 * the tolerance are left out: together they lower the result by no more than `leftOut`.
 */
class Kept {
  readonly size: number;
  readonly correlation: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  readonly leftOut: number;
  readonly isImpossible: boolean;

  constructor(
    mean: ArrayLike<number>,
    covariance: ArrayLike<number>,
    lower: ArrayLike<number>,
    upper: ArrayLike<number>,
    tolerance: number,
  ) {
    const n = mean.length;
    const budget = (0.1 * tolerance) / n;
    const chosen: number[] = [];
    let leftOut = 0;
    let isImpossible = false;
    for (let i = 0; i < n; i++) {
      const deviation = Math.sqrt(covariance[i * n + i]!);
      if (!(upper[i]! >= lower[i]!)) isImpossible = true;
      if (deviation === 0) {
        if (!(mean[i]! >= lower[i]! && mean[i]! <= upper[i]!)) isImpossible = true;
        continue;
      }
      const outside = normalCdf((lower[i]! - mean[i]!) / deviation) + normalCdf((mean[i]! - upper[i]!) / deviation);
      if (outside <= budget) leftOut += outside;
      else chosen.push(i);
    }
    const k = chosen.length;
    this.size = k;
    this.isImpossible = isImpossible;
    this.leftOut = leftOut;
    this.correlation = new Float64Array(k * k);
    this.lower = new Float64Array(k);
    this.upper = new Float64Array(k);
    chosen.forEach((i, a) => {
      const deviation = Math.sqrt(covariance[i * n + i]!);
      this.lower[a] = (lower[i]! - mean[i]!) / deviation;
      this.upper[a] = (upper[i]! - mean[i]!) / deviation;
      chosen.forEach((j, b) => {
        this.correlation[a * k + b] =
          a === b ? 1 : covariance[i * n + j]! / (deviation * Math.sqrt(covariance[j * n + j]!));
      });
    });
  }
}

/**
 * Cholesky factor of the correlation with the variables ordered by how improbable each is given those before it, and the
 * integrand of the separated variables. Rows without variance of their own (`bindingColumn` tells which free variable they
 * limit) only narrow that variable's interval.
 */
class OrderedFactor {
  readonly rank: number;
  private readonly n: number;
  /** Row-major, n x n; row r holds the variable at place r of the order. */
  private readonly l: Float64Array;
  private readonly lower: Float64Array;
  private readonly upper: Float64Array;
  /** Rows by the free variable they bind: rowsOf[firstRow[c]] … rowsOf[firstRow[c + 1] - 1]. */
  private readonly rowsOf: Int32Array;
  private readonly firstRow: Int32Array;
  private readonly z: Float64Array;

  constructor(kept: Kept) {
    const n = kept.size;
    this.n = n;
    const c = Float64Array.from(kept.correlation);
    const lower = Float64Array.from(kept.lower);
    const upper = Float64Array.from(kept.upper);
    const l = new Float64Array(n * n);
    const expected = new Float64Array(n);
    let rank = 0;
    for (; rank < n; rank++) {
      let best = -1;
      let bestProbability = Infinity;
      for (let i = rank; i < n; i++) {
        const variance = this.conditionalVariance(c, l, i, rank);
        if (variance <= SINGULAR_VARIANCE) continue;
        const deviation = Math.sqrt(variance);
        let shift = 0;
        for (let j = 0; j < rank; j++) shift += l[i * n + j]! * expected[j]!;
        const probability = intervalProbability((lower[i]! - shift) / deviation, (upper[i]! - shift) / deviation);
        if (probability < bestProbability) {
          bestProbability = probability;
          best = i;
        }
      }
      if (best < 0) break;
      exchange(c, l, lower, upper, n, rank, best);
      const pivot = Math.sqrt(this.conditionalVariance(c, l, rank, rank));
      l[rank * n + rank] = pivot;
      for (let i = rank + 1; i < n; i++) {
        let sum = c[i * n + rank]!;
        for (let j = 0; j < rank; j++) sum -= l[i * n + j]! * l[rank * n + j]!;
        l[i * n + rank] = sum / pivot;
      }
      expected[rank] = this.expectedWithin(l, lower, upper, expected, rank, pivot);
    }
    this.rank = rank;
    this.l = l;
    this.lower = lower;
    this.upper = upper;
    this.z = new Float64Array(rank);
    const binding = new Int32Array(n);
    this.firstRow = new Int32Array(rank + 1);
    for (let i = 0; i < n; i++) {
      let column = Math.min(i, rank - 1);
      while (column > 0 && Math.abs(l[i * n + column]!) <= SINGULAR_COEFFICIENT) column--;
      binding[i] = column;
      this.firstRow[column + 1]! += 1;
    }
    for (let column = 0; column < rank; column++) this.firstRow[column + 1]! += this.firstRow[column]!;
    this.rowsOf = new Int32Array(n);
    const next = this.firstRow.slice(0, rank);
    for (let i = 0; i < n; i++) this.rowsOf[next[binding[i]!]!++] = i;
  }

  private conditionalVariance(c: Float64Array, l: Float64Array, row: number, columns: number): number {
    let variance = c[row * this.n + row]!;
    for (let j = 0; j < columns; j++) variance -= l[row * this.n + j]! * l[row * this.n + j]!;
    if (variance < INDEFINITE)
      throw new RangeError("The matrix is no covariance: a combination of its quantities has a negative variance");
    return variance;
  }

  /** Mean of the free variable within its limits, those before it at their means: what the order is judged by. */
  private expectedWithin(
    l: Float64Array,
    lower: Float64Array,
    upper: Float64Array,
    expected: Float64Array,
    row: number,
    pivot: number,
  ): number {
    let shift = 0;
    for (let j = 0; j < row; j++) shift += l[row * this.n + j]! * expected[j]!;
    const a = (lower[row]! - shift) / pivot;
    const b = (upper[row]! - shift) / pivot;
    const probability = intervalProbability(a, b);
    if (!(probability > 1e-300)) return a > 0 ? a : b < 0 ? b : 0;
    const mean = (normalDensity(a) - normalDensity(b)) / probability;
    return Math.min(Math.max(mean, a), b);
  }

  /** Product of the conditional probabilities at a point of the unit cube of rank - 1 dimensions. */
  integrand(u: Float64Array): number {
    const { n, l, z, rank } = this;
    let product = 1;
    for (let k = 0; k < rank; k++) {
      let a = -Infinity;
      let b = Infinity;
      for (let r = this.firstRow[k]!; r < this.firstRow[k + 1]!; r++) {
        const row = this.rowsOf[r]!;
        const offset = row * n;
        let shift = 0;
        for (let j = 0; j < k; j++) shift += l[offset + j]! * z[j]!;
        const coefficient = l[offset + k]!;
        let low = (this.lower[row]! - shift) / coefficient;
        let high = (this.upper[row]! - shift) / coefficient;
        if (coefficient < 0) [low, high] = [high, low];
        if (low > a) a = low;
        if (high < b) b = high;
      }
      if (!(b > a)) return 0;
      // Seen from whichever tail is near, so that no digits are lost far from the mean.
      const isUpper = a > 0;
      const from = isUpper ? normalCdf(-b) : normalCdf(a);
      const width = (isUpper ? normalCdf(-a) : normalCdf(b)) - from;
      product *= width;
      if (product === 0 || k === rank - 1) break;
      const drawn = normalQuantile(from + u[k]! * width);
      z[k] = Math.min(Math.max(isUpper ? -drawn : drawn, a), b);
    }
    return product;
  }
}

/** Exchanges two variables: rows and columns of the correlation, rows of the factor, limits. */
function exchange(
  c: Float64Array,
  l: Float64Array,
  lower: Float64Array,
  upper: Float64Array,
  n: number,
  p: number,
  q: number,
): void {
  if (p === q) return;
  const swap = (values: Float64Array, i: number, j: number): void => {
    const kept = values[i]!;
    values[i] = values[j]!;
    values[j] = kept;
  };
  for (let j = 0; j < n; j++) swap(c, p * n + j, q * n + j);
  for (let j = 0; j < n; j++) swap(c, j * n + p, j * n + q);
  for (let j = 0; j < n; j++) swap(l, p * n + j, q * n + j);
  swap(lower, p, q);
  swap(upper, p, q);
}

/** Means over the shifted lattices; finer ones are taken until the tolerance or the limit is reached. */
function integrate(factor: OrderedFactor, leftOut: number, tolerance: number, maxPoints: number): RectangleProbability {
  const dimension = factor.rank - 1;
  const roots = rootsOfPrimes(dimension);
  const shifts = fixedShifts(SHIFTS * dimension);
  const step = new Float64Array(dimension);
  const u = new Float64Array(dimension);
  const means = new Float64Array(SHIFTS);
  let pointCount = 0;
  for (let level = 0; ; level++) {
    const { points, vector } = LATTICES[level]!;
    for (let j = 0; j < dimension; j++) step[j] = j < vector.length ? vector[j]! / points : roots[j]!;
    let mean = 0;
    for (let s = 0; s < SHIFTS; s++) {
      let sum = 0;
      for (let k = 0; k < points; k++) {
        for (let j = 0; j < dimension; j++) {
          const position = k * step[j]! + shifts[s * dimension + j]!;
          // Folding makes the integrand continuous across the edges of the cube.
          u[j] = Math.abs(2 * (position - Math.floor(position)) - 1);
        }
        sum += factor.integrand(u);
      }
      means[s] = sum / points;
      mean += means[s]! / SHIFTS;
    }
    pointCount += SHIFTS * points;
    let square = 0;
    for (let s = 0; s < SHIFTS; s++) square += (means[s]! - mean) * (means[s]! - mean);
    const errorEstimate = 3 * Math.sqrt(square / (SHIFTS * (SHIFTS - 1))) + leftOut;
    const isLast = level + 1 === LATTICES.length || pointCount + SHIFTS * LATTICES[level + 1]!.points > maxPoints;
    if (errorEstimate <= tolerance || isLast)
      return { probability: Math.min(Math.max(mean, 0), 1), errorEstimate, pointCount };
  }
}

/** Fractional parts of the square roots of the first primes. */
function rootsOfPrimes(count: number): Float64Array {
  const roots = new Float64Array(count);
  for (let candidate = 2, found = 0; found < count; candidate++) {
    let isPrime = true;
    for (let d = 2; d * d <= candidate && isPrime; d++) if (candidate % d === 0) isPrime = false;
    if (!isPrime) continue;
    const root = Math.sqrt(candidate);
    roots[found++] = root - Math.floor(root);
  }
  return roots;
}

/** Numbers in [0, 1) without visible order, always the same (G. L. Steele et al., 2014: splitting by mixing of a counter). */
function fixedShifts(count: number): Float64Array {
  const shifts = new Float64Array(count);
  let state = 0x2545f491;
  for (let i = 0; i < count; i++) {
    state = (state + 0x9e3779b9) | 0;
    let mixed = Math.imul(state ^ (state >>> 16), 0x85ebca6b);
    mixed = Math.imul(mixed ^ (mixed >>> 13), 0xc2b2ae35);
    shifts[i] = ((mixed ^ (mixed >>> 16)) >>> 0) / 4294967296;
  }
  return shifts;
}
