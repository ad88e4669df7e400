/**
 * What a weighted fit is worth when the noise of neighbouring samples is correlated.
 *
 * The noise of a sample is its standard uncertainty times a stationary sequence with the given autocorrelation by lag, 0 beyond the last.
 * Where only the correlation r of neighbours is known, white noise averaged over w = 1 / (1 - r) neighbours is taken (running mean, the
 * usual smoothing): 1 - k (1 - r) at lag k, 0 from w on; a negative r acts at lag one only.
 * Source  covariance of least squares under a covariance of the noise that the weights do not hold: (J'J)^-1 J'RJ (J'J)^-1; degrees of
 *         freedom by matching the first two moments (F. E. Satterthwaite, Biometrics 2 (1946) 110)
 */

export interface CorrelatedFit {
  /** (J'J)^-1 J' R J (J'J)^-1, row-major n x n. */
  covariance: Float64Array;
  /** Expected chi-squared: trace of (1 - H) R. */
  expectedChiSquare: number;
  /** Of the chi-squared distribution with the same mean and variance. */
  degreesOfFreedom: number;
}

/** Autocorrelation by lag (first entry: lag one) of a running mean whose neighbours correlate by `lagOne`. */
export function runningMeanAutocorrelation(lagOne: number): Float64Array {
  if (lagOne <= 0) return Float64Array.of(lagOne);
  const lags = Math.ceil(1 / (1 - lagOne)) - 1;
  return Float64Array.from({ length: Math.max(lags, 1) }, (_, k) => Math.max(0, 1 - (k + 1) * (1 - lagOne)));
}

/** Each sample's number on the grid of the smallest step, so that gaps count as lags. */
function gridOf(positions: Float64Array, m: number): Int32Array {
  let step = Infinity;
  for (let i = 1; i < m; i++) step = Math.min(step, positions[i]! - positions[i - 1]!);
  const grid = new Int32Array(m);
  for (let i = 1; i < m; i++)
    grid[i] = grid[i - 1]! + Math.min(1000, Math.round((positions[i]! - positions[i - 1]!) / step));
  return grid;
}

/**
 * @param columns          n columns of the Jacobian, each of `stride` cells of which m are used, each cell over its sample's uncertainty
 * @param prior            what is known of each parameter beside the samples: 1 / u², 0 for nothing
 * @param covariance       (J'J + prior)^-1, row-major
 * @param positions        of the samples, increasing; the smallest distance is one sampling step
 * @param autocorrelation  by lag, first entry lag one
 */
export function correlatedCovariance(
  columns: Float64Array,
  stride: number,
  m: number,
  n: number,
  prior: Float64Array,
  covariance: Float64Array,
  positions: Float64Array,
  autocorrelation: Float64Array,
): CorrelatedFit {
  const lags = autocorrelation.length;
  const grid = gridOf(positions, m);
  // RJ with R's few diagonals only; the sum of R's squares on the way.
  const rj = new Float64Array(n * m);
  let squares = m;
  for (let a = 0; a < n; a++) for (let i = 0; i < m; i++) rj[a * m + i] = columns[a * stride + i]!;
  for (let i = 0; i < m; i++) {
    for (let j = i + 1; j < m; j++) {
      const lag = grid[j]! - grid[i]!;
      if (lag > lags) break;
      const value = autocorrelation[lag - 1]!;
      squares += 2 * value * value;
      for (let a = 0; a < n; a++) {
        rj[a * m + i] = rj[a * m + i]! + value * columns[a * stride + j]!;
        rj[a * m + j] = rj[a * m + j]! + value * columns[a * stride + i]!;
      }
    }
  }
  // With C = (J'J)^-1, H = J C J' and B = J'R J: covariance C B C, trace HR = trace BC, trace HRHR = trace BCBC,
  // trace HRR = trace (RJ)'(RJ) C. The mean of chi-squared is trace (1 - H) R, its variance twice trace ((1 - H) R)².
  const b = new Float64Array(n * n);
  const doubled = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      let single = 0;
      let twice = 0;
      for (let i = 0; i < m; i++) {
        single += columns[p * stride + i]! * rj[q * m + i]!;
        twice += rj[p * m + i]! * rj[q * m + i]!;
      }
      b[p * n + q] = single;
      doubled[p * n + q] = twice;
    }
  }
  for (let p = 0; p < n; p++) b[p * n + p] = b[p * n + p]! + prior[p]!;
  const bc = multiply(b, covariance, n);
  let mean = m;
  let square = squares;
  for (let p = 0; p < n; p++) {
    mean -= bc[p * n + p]!;
    if (prior[p]! > 0) mean += 1;
    for (let q = 0; q < n; q++) {
      square += bc[p * n + q]! * bc[q * n + p]! - 2 * doubled[p * n + q]! * covariance[p * n + q]!;
    }
  }
  mean = Math.max(mean, 1e-3 * m);
  // An autocorrelation that was estimated need not be one that noise can have: the variances stay above a share of the white ones.
  const whole = multiply(covariance, bc, n);
  for (let p = 0; p < n; p++)
    whole[p * n + p] = Math.max(whole[p * n + p]!, leastVarianceShare * covariance[p * n + p]!);
  return { covariance: whole, expectedChiSquare: mean, degreesOfFreedom: (mean * mean) / Math.max(square, mean / m) };
}

const leastVarianceShare = 0.02;

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
