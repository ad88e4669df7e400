/**
 * What a weighted fit is worth when the noise of neighbouring samples is correlated.
 *
 * The noise is taken as white noise averaged over w = 1 / (1 - r) neighbours (running mean, the usual smoothing), so that its
 * correlation falls in a straight line: 1 - k (1 - r) at lag k, 0 from w on. A negative r acts at lag one only.
 */

export interface CorrelatedFit {
  /** (J'J)^-1 J' R J (J'J)^-1, row-major n x n. */
  covariance: Float64Array;
  /** Expected chi-squared: trace of (1 - H) R. */
  expectedChiSquare: number;
  /** Of the chi-squared distribution with the same mean and variance. */
  degreesOfFreedom: number;
}

/** Correlation of samples that lie `lag` sampling steps apart. */
function correlationAt(lag: number, lagOne: number): number {
  if (lag === 0) return 1;
  if (lagOne < 0) return lag === 1 ? lagOne : 0;
  return Math.max(0, 1 - lag * (1 - lagOne));
}

/**
 * @param jacobian    m x n row-major, each row over its uncertainty
 * @param covariance  (J'J)^-1
 * @param positions   of the samples, increasing; the smallest distance is one sampling step
 * @param lagOne      lag-one correlation, -1 < r < 1
 */
export function correlatedCovariance(
  jacobian: Float64Array,
  m: number,
  n: number,
  covariance: Float64Array,
  positions: Float64Array,
  lagOne: number,
): CorrelatedFit {
  let step = Infinity;
  for (let i = 1; i < m; i++) step = Math.min(step, positions[i]! - positions[i - 1]!);
  const reach = lagOne > 0 ? Math.ceil(1 / (1 - lagOne)) : 1;

  // RJ, with R's few diagonals only; the sum of R's squares on the way.
  const rj = Float64Array.from(jacobian);
  let squares = m;
  for (let i = 0; i < m; i++) {
    for (let j = i + 1; j < m; j++) {
      const lag = Math.round((positions[j]! - positions[i]!) / step);
      if (lag > reach) break;
      const value = correlationAt(lag, lagOne);
      squares += 2 * value * value;
      for (let a = 0; a < n; a++) {
        rj[i * n + a] = rj[i * n + a]! + value * jacobian[j * n + a]!;
        rj[j * n + a] = rj[j * n + a]! + value * jacobian[i * n + a]!;
      }
    }
  }
  // With C = (J'J)^-1, H = J C J' and B = J'R J: covariance C B C, trace HR = trace BC, trace HRHR = trace BCBC,
  // trace HRR = trace (RJ)'(RJ) C. The mean of chi-squared is trace (1 - H) R, its variance twice trace ((1 - H) R)².
  const bc = multiply(transposeProduct(jacobian, rj, m, n), covariance, n);
  const doubled = transposeProduct(rj, rj, m, n);
  let mean = m;
  let square = squares;
  for (let a = 0; a < n; a++) {
    mean -= bc[a * n + a]!;
    for (let b = 0; b < n; b++) {
      square += bc[a * n + b]! * bc[b * n + a]! - 2 * doubled[a * n + b]! * covariance[a * n + b]!;
    }
  }
  return { covariance: multiply(covariance, bc, n), expectedChiSquare: mean, degreesOfFreedom: (mean * mean) / square };
}

/** a'b of two m x n matrices, row-major: n x n. */
function transposeProduct(a: Float64Array, b: Float64Array, m: number, n: number): Float64Array {
  const product = new Float64Array(n * n);
  for (let i = 0; i < m; i++) {
    for (let p = 0; p < n; p++) {
      const value = a[i * n + p]!;
      for (let q = 0; q < n; q++) product[p * n + q] = product[p * n + q]! + value * b[i * n + q]!;
    }
  }
  return product;
}

/** a times b, both n x n, row-major. */
function multiply(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const product = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const value = a[i * n + k]!;
      for (let j = 0; j < n; j++) product[i * n + j] = product[i * n + j]! + value * b[k * n + j]!;
    }
  }
  return product;
}
