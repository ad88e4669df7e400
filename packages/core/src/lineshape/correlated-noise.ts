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

  const correlation = new Float64Array(m * m);
  for (let i = 0; i < m; i++) {
    for (let j = i; j < m; j++) {
      const lag = Math.round((positions[j]! - positions[i]!) / step);
      if (lag > reach) break;
      const value = correlationAt(lag, lagOne);
      correlation[i * m + j] = value;
      correlation[j * m + i] = value;
    }
  }
  // G = J (J'J)^-1, so that H = G J' and the covariance is G' R G.
  const g = multiply(jacobian, covariance, m, n, n);
  const rg = multiply(correlation, g, m, m, n);
  const result = new Float64Array(n * n);
  for (let a = 0; a < n; a++) {
    for (let b = 0; b < n; b++) {
      let sum = 0;
      for (let i = 0; i < m; i++) sum += g[i * n + a]! * rg[i * n + b]!;
      result[a * n + b] = sum;
    }
  }
  // P = (1 - H) R = R - G (J'R); trace P and trace P² give mean and variance of chi-squared.
  const jr = new Float64Array(n * m);
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < m; j++) {
      const value = correlation[i * m + j]!;
      if (value === 0) continue;
      for (let a = 0; a < n; a++) jr[a * m + j] = jr[a * m + j]! + jacobian[i * n + a]! * value;
    }
  }
  const p = multiply(g, jr, m, n, m);
  for (let k = 0; k < m * m; k++) p[k] = correlation[k]! - p[k]!;
  let mean = 0;
  let square = 0;
  for (let i = 0; i < m; i++) {
    mean += p[i * m + i]!;
    for (let j = 0; j < m; j++) square += p[i * m + j]! * p[j * m + i]!;
  }
  return { covariance: result, expectedChiSquare: mean, degreesOfFreedom: (mean * mean) / square };
}

/** a (rows x inner) times b (inner x columns), row-major. */
function multiply(a: Float64Array, b: Float64Array, rows: number, inner: number, columns: number): Float64Array {
  const product = new Float64Array(rows * columns);
  for (let i = 0; i < rows; i++) {
    for (let k = 0; k < inner; k++) {
      const value = a[i * inner + k]!;
      if (value === 0) continue;
      for (let j = 0; j < columns; j++) product[i * columns + j] = product[i * columns + j]! + value * b[k * columns + j]!;
    }
  }
  return product;
}
