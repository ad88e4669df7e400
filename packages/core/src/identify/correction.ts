/**
 * The correction of the believed axis from lines with known wavelengths: four Chebyshev terms, the upper two held by the
 * bounds as by a prior, so that few lines can't bend the axis beyond what gratings do.
 *
 * A working tool of the identification: four well-conditioned unknowns, hence plain normal equations. The axis that is
 * reported and judged with is fitted in `dispersion`.
 */
import { type Bounds, orderCount, type Problem } from "./problem.ts";

const n = orderCount;

/** Standard deviations of what is believed about the four terms, nm. */
export function priorSd(bounds: Bounds, k: number): number {
  if (k === 0) return bounds.endNm;
  if (k === 1) return bounds.scaleNm;
  return 0.6 * (k === 2 ? bounds.curvatureNm : bounds.cubicNm);
}

/** Adds what is believed about the four terms to the normal matrix. */
export function addPrior(normal: Float64Array, bounds: Bounds): void {
  for (let k = 0; k < n; k++) {
    const sd = priorSd(bounds, k);
    normal[k * n + k] = (normal[k * n + k] as number) + 1 / (sd * sd);
  }
}

/** How far an axis bends beyond what is usual, as the logarithm of a likelihood (0 or less); offset and scale are free. */
export function bendPenalty(correction: Float64Array, bounds: Bounds): number {
  const curvature = (correction[2] as number) / priorSd(bounds, 2);
  const cubic = (correction[3] as number) / priorSd(bounds, 3);
  return -0.5 * (curvature * curvature + cubic * cubic);
}

/** Cholesky factor into the lower triangle; false where the matrix is not positive definite. */
export function factorise(matrix: Float64Array): boolean {
  for (let r = 0; r < n; r++) {
    for (let c = 0; c <= r; c++) {
      let sum = matrix[r * n + c] as number;
      for (let k = 0; k < c; k++) sum -= (matrix[r * n + k] as number) * (matrix[c * n + k] as number);
      if (r === c) {
        if (!(sum > 0)) return false;
        matrix[r * n + r] = Math.sqrt(sum);
      } else {
        matrix[r * n + c] = sum / (matrix[c * n + c] as number);
      }
    }
  }
  return true;
}

/** Solves with a factor from `factorise`; `rhs` is overwritten. */
export function solveFactorised(factor: Float64Array, rhs: Float64Array, solution: Float64Array): void {
  for (let r = 0; r < n; r++) {
    let sum = rhs[r] as number;
    for (let k = 0; k < r; k++) sum -= (factor[r * n + k] as number) * (rhs[k] as number);
    rhs[r] = sum / (factor[r * n + r] as number);
  }
  for (let r = n - 1; r >= 0; r--) {
    let sum = rhs[r] as number;
    for (let k = r + 1; k < n; k++) sum -= (factor[k * n + r] as number) * (solution[k] as number);
    solution[r] = sum / (factor[r * n + r] as number);
  }
}

export interface CorrectionFit {
  /** a0..a3, nm. */
  correction: Float64Array;
  /** Covariance of a0..a3, nm², row-major. */
  covariance: Float64Array;
  /** Scatter beyond the lines' stated uncertainties, nm. */
  scatterNm: number;
  /** Standard uncertainty of the axis at each line, nm; of an axis without the line itself where it was used. */
  axisUncNm: Float64Array;
  /** target - axis at each line used, for an axis without that line, nm; NaN where the line was not used. */
  leaveOneOutNm: Float64Array;
}

/**
 * Fit the correction.
 *
 * @param targetNm     wavelength of each line, nm; NaN leaves the line out
 * @param targetUncNm  standard uncertainty of position and target together, nm
 * @param leastScatterNm scatter that is assumed however well the lines agree, nm
 * @returns null where fewer than two lines are given
 */
export function fitCorrection(
  problem: Problem,
  targetNm: Float64Array,
  targetUncNm: Float64Array,
  leastScatterNm: number,
): CorrectionFit | null {
  const { count, basis, baseNm } = problem;
  let used = 0;
  for (let i = 0; i < count; i++) if (!Number.isNaN(targetNm[i] as number)) used += 1;
  if (used < 2) return null;
  const factor = new Float64Array(n * n);
  const right = new Float64Array(n);
  const correction = new Float64Array(n);
  const weights = new Float64Array(count);
  let scatter = leastScatterNm;
  for (let round = 0; round < 3; round++) {
    factor.fill(0);
    right.fill(0);
    for (let i = 0; i < count; i++) {
      if (Number.isNaN(targetNm[i] as number)) continue;
      const unc = targetUncNm[i] as number;
      const w = 1 / (unc * unc + scatter * scatter);
      weights[i] = w;
      const d = (targetNm[i] as number) - (baseNm[i] as number);
      for (let r = 0; r < n; r++) {
        const br = basis[i * n + r] as number;
        right[r] = (right[r] as number) + w * br * d;
        for (let c = 0; c <= r; c++) {
          factor[r * n + c] = (factor[r * n + c] as number) + w * br * (basis[i * n + c] as number);
        }
      }
    }
    addPrior(factor, problem.bounds);
    if (!factorise(factor)) return null;
    solveFactorised(factor, right, correction);
    if (round === 2) break;
    scatter = excessScatter(problem, targetNm, targetUncNm, correction, used, leastScatterNm);
  }
  const covariance = invert(factor);
  const axisUncNm = new Float64Array(count);
  const leaveOneOutNm = new Float64Array(count).fill(Number.NaN);
  for (let i = 0; i < count; i++) {
    let variance = 0;
    let fitted = baseNm[i] as number;
    for (let r = 0; r < n; r++) {
      const br = basis[i * n + r] as number;
      fitted += br * (correction[r] as number);
      for (let c = 0; c < n; c++) variance += br * (basis[i * n + c] as number) * (covariance[r * n + c] as number);
    }
    if (Number.isNaN(targetNm[i] as number)) {
      axisUncNm[i] = Math.sqrt(variance);
    } else {
      // The line's own share in its fitted value taken back out.
      const leverage = Math.min((weights[i] as number) * variance, 1 - 1e-9);
      leaveOneOutNm[i] = ((targetNm[i] as number) - fitted) / (1 - leverage);
      axisUncNm[i] = Math.sqrt(variance / (1 - leverage));
    }
  }
  return { correction, covariance, scatterNm: scatter, axisUncNm, leaveOneOutNm };
}

/** Scatter that the stated uncertainties leave unexplained: mean square residual less mean square uncertainty. */
function excessScatter(
  problem: Problem,
  targetNm: Float64Array,
  targetUncNm: Float64Array,
  correction: Float64Array,
  used: number,
  least: number,
): number {
  const freedom = Math.max(used - Math.min(n, used - 1), 1);
  let surplus = 0;
  for (let i = 0; i < problem.count; i++) {
    if (Number.isNaN(targetNm[i] as number)) continue;
    let residual = (targetNm[i] as number) - (problem.baseNm[i] as number);
    for (let r = 0; r < n; r++) residual -= (problem.basis[i * n + r] as number) * (correction[r] as number);
    const unc = targetUncNm[i] as number;
    surplus += residual * residual - unc * unc * (freedom / used);
  }
  return Math.sqrt(Math.max(surplus / freedom, least * least));
}

function invert(factor: Float64Array): Float64Array {
  const inverse = new Float64Array(n * n);
  const right = new Float64Array(n);
  const column = new Float64Array(n);
  for (let k = 0; k < n; k++) {
    right.fill(0);
    right[k] = 1;
    solveFactorised(factor, right, column);
    for (let r = 0; r < n; r++) inverse[r * n + k] = column[r] as number;
  }
  return inverse;
}
