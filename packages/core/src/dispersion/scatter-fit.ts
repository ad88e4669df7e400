/**
 * Weighted polynomial through points with known uncertainties and, where those do not explain the scatter, one more that all share.
 *
 * Model       y_i = sum over j of c_j T_j(t_i) + e_i, e_i of variance u_i² + tau²; t runs from -1 to 1 over all points' positions
 * Solution    Householder reflections on the weighted Chebyshev columns (G. H. Golub, Numer. Math. 7 (1965) 206); no normal equations
 * tau²        the value at which chi-squared equals its degrees of freedom, 0 where it is below them already (R. C. Paule,
 *             J. Mandel, J. Res. NBS 87 (1982) 377; from memory). Newton's step on 1/chi-squared, which is straight where all own
 *             uncertainties are the same and concave else: it comes from below in two or three steps
 * Built for   many fits through subsets of the same few dozen points: every buffer is made once, for the largest fit
 */
import { chebyshevArgument, fillChebyshevBasis } from "../numeric/chebyshev.ts";

const mostNewtonSteps = 30;
/** Tolerances of the reduced chi-squared: for an axis that is reported, and for telling lines and degrees apart. */
export const reportedScatter = 1e-4;
export const comparedScatter = 0.01;

export class ScatterFit {
  /** Positions between which t runs from -1 to 1. */
  readonly first: number;
  readonly last: number;
  readonly pointCount: number;

  // What the last `solve` left, rows in the order of the points used.
  /** Index of each row's point; the first `rowCount` count. */
  readonly rows: Int32Array;
  rowCount = 0;
  columns = 0;
  degreesOfFreedom = 0;
  readonly coefficients: Float64Array;
  /** y - fitted, in the unit of y. */
  readonly residuals: Float64Array;
  /** Standard uncertainties used, tau included. */
  readonly unc: Float64Array;
  /** Influence of each row on its own fitted value, 0..1; filled by `fillLeverages`. */
  readonly leverages: Float64Array;
  /** tau². */
  excessSquare = 0;
  /** Chi-squared at tau = 0. */
  statedChiSquare = 0;

  private readonly basis: Float64Array;
  private readonly width: number;
  private readonly values: Float64Array;
  private readonly own: Float64Array;
  /** Reflected columns, one after the other, and the right-hand side. */
  private readonly work: Float64Array;
  private readonly right: Float64Array;
  private readonly diagonal: Float64Array;
  private readonly row: Float64Array;

  /**
   * @param positions  at least two different ones
   * @param values     of the same length
   * @param own        standard uncertainty of each value, > 0
   * @param most       highest degree that will be asked for
   */
  constructor(positions: Float64Array, values: Float64Array, own: Float64Array, most: number) {
    const m = positions.length;
    let first = Number.POSITIVE_INFINITY;
    let last = Number.NEGATIVE_INFINITY;
    for (let i = 0; i < m; i++) {
      first = Math.min(first, positions[i] as number);
      last = Math.max(last, positions[i] as number);
    }
    this.first = first;
    this.last = last;
    this.pointCount = m;
    this.width = most + 1;
    this.values = values;
    this.own = own;
    this.basis = new Float64Array(m * this.width);
    for (let i = 0; i < m; i++) {
      fillChebyshevBasis(this.basis, i * this.width, most, chebyshevArgument(positions[i] as number, first, last));
    }
    this.rows = new Int32Array(m);
    this.coefficients = new Float64Array(this.width);
    this.residuals = new Float64Array(m);
    this.unc = new Float64Array(m);
    this.leverages = new Float64Array(m);
    this.work = new Float64Array(m * this.width);
    this.right = new Float64Array(m);
    this.diagonal = new Float64Array(this.width);
    this.row = new Float64Array(this.width);
  }

  /**
   * Fit the points marked as used; more of them than coefficients.
   *
   * @param tolerance  how closely the reduced chi-squared is brought to 1; null: the stated uncertainties are taken as they are, tau = 0
   * @param target     what the reduced chi-squared is brought to instead, where the points are the best of more
   */
  solve(used: ArrayLike<boolean | number>, degree: number, tolerance: number | null, target = 1): void {
    let n = 0;
    for (let i = 0; i < this.pointCount; i++) {
      if (!used[i]) continue;
      this.rows[n] = i;
      this.unc[n] = this.own[i] as number;
      n += 1;
    }
    this.rowCount = n;
    this.columns = degree + 1;
    this.degreesOfFreedom = n - this.columns;
    this.excessSquare = 0;
    this.solveOnce();
    const { residuals, unc } = this;
    const freedom = this.degreesOfFreedom;
    this.statedChiSquare = 0;
    for (let k = 0; k < n; k++) {
      const ratio = (residuals[k] as number) / (unc[k] as number);
      this.statedChiSquare += ratio * ratio;
    }
    if (tolerance === null || freedom <= 0) return;
    for (let step = 0; step < mostNewtonSteps; step++) {
      let chiSquare = 0;
      let slope = 0;
      for (let k = 0; k < n; k++) {
        const weight = 1 / ((unc[k] as number) * (unc[k] as number));
        const part = weight * (residuals[k] as number) * (residuals[k] as number);
        chiSquare += part;
        slope += part * weight;
      }
      const wanted = freedom * target;
      if (chiSquare <= wanted * (1 + tolerance)) break;
      this.excessSquare += ((chiSquare / wanted - 1) * chiSquare) / slope;
      for (let k = 0; k < n; k++) {
        const own = this.own[this.rows[k] as number] as number;
        unc[k] = Math.sqrt(own * own + this.excessSquare);
      }
      this.solveOnce();
    }
  }

  /** Leverages of the last solution. */
  fillLeverages(): void {
    const n = this.columns;
    const m = this.rowCount;
    const { work, diagonal, row, basis, width } = this;
    for (let k = 0; k < m; k++) {
      // Row of Q: the weighted row of the design times the inverse of R, by forward substitution.
      const weight = 1 / (this.unc[k] as number);
      const at = (this.rows[k] as number) * width;
      let sum = 0;
      for (let j = 0; j < n; j++) {
        let value = weight * (basis[at + j] as number);
        for (let i = 0; i < j; i++) value -= (row[i] as number) * (work[j * m + i] as number);
        value /= diagonal[j] as number;
        row[j] = value;
        sum += value * value;
      }
      this.leverages[k] = sum;
    }
  }

  /** Covariance of the coefficients of the last solution, from the uncertainties used; row-major, columns². */
  covariance(): Float64Array {
    const n = this.columns;
    const m = this.rowCount;
    const { work, diagonal } = this;
    const inverse = new Float64Array(n * n);
    for (let c = 0; c < n; c++) {
      for (let k = c; k >= 0; k--) {
        let sum = k === c ? 1 : 0;
        for (let j = k + 1; j <= c; j++) sum -= (work[j * m + k] as number) * (inverse[j * n + c] as number);
        inverse[k * n + c] = sum / (diagonal[k] as number);
      }
    }
    const result = new Float64Array(n * n);
    for (let a = 0; a < n; a++) {
      for (let b = a; b < n; b++) {
        let sum = 0;
        for (let c = b; c < n; c++) sum += (inverse[a * n + c] as number) * (inverse[b * n + c] as number);
        result[a * n + b] = sum;
        result[b * n + a] = sum;
      }
    }
    return result;
  }

  /** y - fitted of any point, used or not, by the last solution. */
  residualOf(point: number): number {
    let fitted = 0;
    for (let j = 0; j < this.columns; j++) {
      fitted += (this.basis[point * this.width + j] as number) * (this.coefficients[j] as number);
    }
    return (this.values[point] as number) - fitted;
  }

  /** Residual of row k against a fit that did not know it: r/(1 - leverage). */
  leftOut(k: number): number {
    return (this.residuals[k] as number) / Math.max(1 - (this.leverages[k] as number), 1e-6);
  }

  private solveOnce(): void {
    const m = this.rowCount;
    const n = this.columns;
    const { work, right, diagonal, basis, width, rows, unc, coefficients } = this;
    for (let k = 0; k < m; k++) {
      const weight = 1 / (unc[k] as number);
      const i = rows[k] as number;
      for (let j = 0; j < n; j++) work[j * m + k] = weight * (basis[i * width + j] as number);
      right[k] = weight * (this.values[i] as number);
    }
    for (let j = 0; j < n; j++) {
      const column = j * m;
      let square = 0;
      for (let i = j; i < m; i++) square += (work[column + i] as number) * (work[column + i] as number);
      const head = work[column + j] as number;
      const alpha = head > 0 ? -Math.sqrt(square) : Math.sqrt(square);
      diagonal[j] = alpha;
      work[column + j] = head - alpha;
      const scale = -1 / (alpha * (head - alpha));
      for (let c = j + 1; c < n; c++) {
        const other = c * m;
        let dot = 0;
        for (let i = j; i < m; i++) dot += (work[column + i] as number) * (work[other + i] as number);
        dot *= scale;
        for (let i = j; i < m; i++) work[other + i] = (work[other + i] as number) - dot * (work[column + i] as number);
      }
      let dot = 0;
      for (let i = j; i < m; i++) dot += (work[column + i] as number) * (right[i] as number);
      dot *= scale;
      for (let i = j; i < m; i++) right[i] = (right[i] as number) - dot * (work[column + i] as number);
    }
    // Above its diagonal `work` now holds R; the reflections below are no longer needed.
    for (let j = n - 1; j >= 0; j--) {
      let sum = right[j] as number;
      for (let c = j + 1; c < n; c++) sum -= (work[c * m + j] as number) * (coefficients[c] as number);
      coefficients[j] = sum / (diagonal[j] as number);
    }
    for (let k = 0; k < m; k++) {
      const i = rows[k] as number;
      let fitted = 0;
      for (let j = 0; j < n; j++) fitted += (basis[i * width + j] as number) * (coefficients[j] as number);
      this.residuals[k] = (this.values[i] as number) - fitted;
    }
  }
}
