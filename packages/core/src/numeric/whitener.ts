/**
 * Whitening: correlated values turned into uncorrelated ones of variance 1, by the Cholesky factor L of their covariance (L L' = V).
 *
 * Limits   V symmetric and positive definite; a pivot below 1e-13 of its variance counts as singular
 */
export class Whitener {
  private readonly l: Float64Array;

  /**
   * @param covariance  n x n, row-major; the lower triangle is read
   * @throws {RangeError} not square, not positive definite
   */
  constructor(
    covariance: ArrayLike<number>,
    readonly n: number,
  ) {
    if (covariance.length !== n * n)
      throw new RangeError(`A covariance of ${n} values needs ${n * n} cells; got ${covariance.length}`);
    const l = new Float64Array(n * n);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j <= i; j++) {
        let sum = covariance[i * n + j]!;
        for (let k = 0; k < j; k++) sum -= l[i * n + k]! * l[j * n + k]!;
        if (i > j) l[i * n + j] = sum / l[j * n + j]!;
        else if (sum > 1e-13 * covariance[i * n + i]!) l[i * n + i] = Math.sqrt(sum);
        else throw new RangeError("The covariance is singular or none: its values depend on each other exactly");
      }
    }
    this.l = l;
  }

  /** L⁻¹ values, as a new array. */
  whiten(values: ArrayLike<number>): Float64Array {
    const { l, n } = this;
    const white = new Float64Array(n);
    for (let i = 0; i < n; i++) {
      let sum = values[i]!;
      for (let k = 0; k < i; k++) sum -= l[i * n + k]! * white[k]!;
      white[i] = sum / l[i * n + i]!;
    }
    return white;
  }
}
