/**
 * Nonlinear least squares: Levenberg-Marquardt with a trust region.
 *
 * Minimises the sum of squares of residuals that the caller has already divided by their uncertainty.
 * Source   J. J. Moré, in Numerical Analysis, Lecture Notes in Mathematics 630 (Springer 1978) 105: trust region in
 *          scaled parameters, damping found on the secular equation; K. Levenberg (1944), D. W. Marquardt (1963).
 * Stops    when the full Gauss-Newton step is below `tolerance` of the parameters' standard errors (relative offset,
 *          D. M. Bates and D. G. Watts, Technometrics 23 (1981) 179) or below rounding of the parameters. Where the sum of
 *          squares can no longer show a gain, Gauss-Newton steps go on as long as each shortens the next.
 * Held to  twelve nonlinear sets of NIST StRD from both published starts (tests/external/strd.test.ts).
 */

export interface LeastSquaresProblem {
  parameterCount: number;
  residualCount: number;
  /**
   * Fills residuals (fitted minus observed, over the uncertainty) and the Jacobian: row-major
   * residualCount x parameterCount, derivative of each residual; every cell is written anew.
   * @returns false when the parameters are not allowed (the step is then shortened)
   */
  evaluate(parameters: Float64Array, residuals: Float64Array, jacobian: Float64Array): boolean;
}

export interface MinimiseOptions {
  /** Default 100. */
  maxIterations?: number;
  /** Gauss-Newton step in standard errors at which it is done; default 1e-9. */
  tolerance?: number;
  /** First trust radius over the scaled length of the start; default 100 (Moré). */
  radiusFactor?: number;
}

export interface Minimum {
  /**
   * converged: at a minimum. stalled: no step lowers the sum of squares though the offset criterion is not met (the
   * rounding of the model is reached). iterations: stopped by maxIterations. bad-start: the start is not allowed.
   */
  outcome: "converged" | "stalled" | "iterations" | "bad-start";
  parameters: Float64Array;
  /** Inverse of J'J, row-major, not scaled by the residuals; null where J has not full rank. */
  covariance: Float64Array | null;
  sumOfSquares: number;
  degreesOfFreedom: number;
  iterations: number;
}

const EPSILON = 2.220446049250313e-16;
/** Share of the sum of squares that a full step still explains, below which the minimum is near enough for undamped steps. */
const NEAR_MINIMUM = 1e-9;
/** Keeps the damped triangle solvable where the Jacobian is singular. */
const SMALLEST_DAMPING = 1e-200;

/** Minimise from `start` (not changed). @throws {RangeError} caller bugs: wrong length, fewer residuals than parameters */
export function minimise(
  problem: LeastSquaresProblem,
  start: ArrayLike<number>,
  options: MinimiseOptions = {},
): Minimum {
  const n = problem.parameterCount;
  const m = problem.residualCount;
  if (start.length !== n || m < n || n < 1)
    throw new RangeError(`Cannot fit ${n} parameters (${start.length} given) to ${m} residuals`);
  const maxIterations = options.maxIterations ?? 100;
  const tolerance = options.tolerance ?? 1e-9;

  // One block for everything: many small fits are made, and memory asked for piece by piece costs more than they do.
  const room = new Float64Array(m * n + 3 * m + 2 * n * n + 8 * n);
  let used = 0;
  const take = (length: number): Float64Array => room.subarray(used, (used += length));
  let parameters = take(n);
  parameters.set(start);
  let trial = take(n);
  let residuals = take(m);
  let trialResiduals = take(m);
  const jacobian = take(m * n);
  const work = take(m);
  const r = take(n * n);
  const projected = take(n);
  const scale = take(n);
  const step = take(n);
  const damped = new DampedSolver(n, take);

  const finish = (outcome: Minimum["outcome"], sumOfSquares: number, iterations: number): Minimum => ({
    outcome,
    parameters: parameters.slice(),
    covariance: outcome === "bad-start" ? null : invertNormal(r, n),
    sumOfSquares,
    degreesOfFreedom: m - n,
    iterations,
  });

  if (!problem.evaluate(parameters, residuals, jacobian)) return finish("bad-start", Infinity, 0);
  let sum = sumOfSquares(residuals);
  if (!Number.isFinite(sum)) return finish("bad-start", Infinity, 0);
  let radius = 0;
  /** Set once only full Gauss-Newton steps are taken; then what the last but one of them explained. */
  let isPolishing = false;
  let polished = 0;

  for (let iteration = 0; ; iteration++) {
    work.set(residuals);
    triangularise(jacobian, m, n, work, r);
    // A column without effect explains nothing, whatever stands in its row.
    for (let j = 0; j < n; j++) projected[j] = r[j * n + j] === 0 ? 0 : -work[j]!;
    for (let j = 0; j < n; j++) {
      let square = 0;
      for (let i = 0; i <= j; i++) square += r[i * n + j]! * r[i * n + j]!;
      scale[j] = Math.max(scale[j]!, Math.sqrt(square));
      if (iteration === 0 && scale[j] === 0) scale[j] = 1;
    }
    if (iteration === 0) {
      const length = scaledLength(parameters, scale);
      radius = (options.radiusFactor ?? 100) * (length > 0 ? length : 1);
    }
    if (polished > 0 && !(sumOfSquares(projected) < 0.99 * polished)) {
      // The last step gained nothing that shows: of two points equally good the one with the shorter step ahead.
      const best = sumOfSquares(projected) < polished ? parameters : trial;
      parameters = best;
      return finish("converged", sum, iteration);
    }
    // Relative offset: length of the Gauss-Newton step in units of the parameters' joint standard error.
    const explained = sumOfSquares(projected);
    const left = Math.max(sum - explained, 0);
    const isAtMinimum = explained <= tolerance * tolerance * (m > n ? (left * n) / (m - n) : 0);
    if (isAtMinimum || explained === 0) return finish("converged", sum, iteration);
    if (iteration >= maxIterations) return finish("iterations", sum, iteration);

    // Shorten the step until the sum of squares falls.
    for (;;) {
      damped.solve(r, projected, scale, isPolishing ? Infinity : radius, step);
      let isTiny = true;
      for (let j = 0; j < n; j++) {
        trial[j] = parameters[j]! + step[j]!;
        if (Math.abs(step[j]!) > 4 * EPSILON * Math.abs(parameters[j]!)) isTiny = false;
      }
      if (isTiny) return finish(explained <= 1e-10 * sum ? "converged" : "stalled", sum, iteration);
      // The Jacobian's triangle is kept in r, so its room is free: most trials are accepted and need the new one.
      const allowed = problem.evaluate(trial, trialResiduals, jacobian);
      const trialSum = allowed ? sumOfSquares(trialResiduals) : Infinity;
      if (isPolishing) {
        if (!allowed || damped.lambda > 0) return finish("converged", sum, iteration);
        polished = explained;
        [parameters, trial] = [trial, parameters];
        [residuals, trialResiduals] = [trialResiduals, residuals];
        sum = trialSum;
        break;
      }
      const length = scaledLength(step, scale);
      // What the linear model promises: |Jp|² + 2 lambda |Dp|² of Moré.
      const predicted = damped.predictedReduction;
      const actual = sum - trialSum;
      const ratio = predicted > 0 && Number.isFinite(actual) ? actual / predicted : -1;
      // The first step tells the scale of the problem better than the length of the start does.
      if (iteration === 0) radius = Math.min(radius, length);
      if (ratio < 0.25) radius = Math.min(radius, 10 * length) * shrinkage(actual, damped.descent);
      else if (ratio > 0.75 || damped.lambda === 0) radius = 2 * length;
      if (ratio > 1e-4) {
        [parameters, trial] = [trial, parameters];
        [residuals, trialResiduals] = [trialResiduals, residuals];
        sum = trialSum;
        break;
      }
      if (!(predicted > 16 * EPSILON * sum)) {
        // The promised gain is below what the sum can show; an undamped step may still be above rounding.
        if (!(explained < NEAR_MINIMUM * sum)) return finish("stalled", sum, iteration);
        isPolishing = true;
        continue;
      }
      if (!(radius > EPSILON * scaledLength(parameters, scale))) return finish("stalled", sum, iteration);
    }
  }
}

/** Factor of the radius after a step that gained too little: the minimum of the parabola along it, 0.1 to 0.5 (Moré). */
function shrinkage(actual: number, descent: number): number {
  if (actual >= 0) return 0.5;
  return Number.isFinite(actual) ? Math.max(0.1, (0.5 * descent) / (descent - 0.5 * actual)) : 0.1;
}

function sumOfSquares(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i]! * values[i]!;
  return sum;
}

function scaledLength(values: Float64Array, scale: Float64Array): number {
  let sum = 0;
  for (let j = 0; j < values.length; j++) {
    const value = values[j]! * scale[j]!;
    sum += value * value;
  }
  return Math.sqrt(sum);
}

/** Householder reflections on the row-major Jacobian (destroyed); R into r, the reflected right side into work. */
function triangularise(jacobian: Float64Array, m: number, n: number, work: Float64Array, r: Float64Array): void {
  for (let k = 0; k < n; k++) {
    let square = 0;
    for (let i = k; i < m; i++) square += jacobian[i * n + k]! * jacobian[i * n + k]!;
    const head = jacobian[k * n + k]!;
    const alpha = head > 0 ? -Math.sqrt(square) : Math.sqrt(square);
    if (alpha !== 0) {
      const pivot = head - alpha;
      jacobian[k * n + k] = pivot;
      const factor = -1 / (alpha * pivot);
      for (let j = k + 1; j < n; j++) {
        let dot = 0;
        for (let i = k; i < m; i++) dot += jacobian[i * n + k]! * jacobian[i * n + j]!;
        dot *= factor;
        for (let i = k; i < m; i++) jacobian[i * n + j] = jacobian[i * n + j]! - dot * jacobian[i * n + k]!;
      }
      let dot = 0;
      for (let i = k; i < m; i++) dot += jacobian[i * n + k]! * work[i]!;
      dot *= factor;
      for (let i = k; i < m; i++) work[i] = work[i]! - dot * jacobian[i * n + k]!;
    }
    for (let i = 0; i < k; i++) r[i * n + k] = jacobian[i * n + k]!;
    r[k * n + k] = alpha;
    for (let i = k + 1; i < n; i++) r[i * n + k] = 0;
  }
}

/** Inverse of R'R, or null when R is singular to rounding. */
function invertNormal(r: Float64Array, n: number): Float64Array | null {
  const inverse = new Float64Array(n * n);
  for (let j = 0; j < n; j++) {
    let square = 0;
    for (let i = 0; i <= j; i++) square += r[i * n + j]! * r[i * n + j]!;
    if (!(Math.abs(r[j * n + j]!) > 1e-13 * Math.sqrt(square))) return null;
  }
  for (let c = 0; c < n; c++) {
    for (let k = c; k >= 0; k--) {
      let sum = k === c ? 1 : 0;
      for (let j = k + 1; j <= c; j++) sum -= r[k * n + j]! * inverse[j * n + c]!;
      inverse[k * n + c] = sum / r[k * n + k]!;
    }
  }
  const covariance = new Float64Array(n * n);
  for (let a = 0; a < n; a++) {
    for (let b = a; b < n; b++) {
      let sum = 0;
      for (let c = b; c < n; c++) sum += inverse[a * n + c]! * inverse[b * n + c]!;
      covariance[a * n + b] = sum;
      covariance[b * n + a] = sum;
    }
  }
  return covariance;
}

/** Step p that minimises |R p - q|² within |D p| <= radius. */
class DampedSolver {
  lambda = 0;
  /** Fall of the sum of squares that the linear model promises for the step. */
  predictedReduction = 0;
  /** Half of its slope along the step at the start of the step. */
  descent = 0;
  private readonly triangle: Float64Array;
  private readonly right: Float64Array;
  private readonly row: Float64Array;
  private readonly helper: Float64Array;

  constructor(
    private readonly n: number,
    take: (length: number) => Float64Array,
  ) {
    this.triangle = take(n * n);
    this.right = take(n);
    this.row = take(n);
    this.helper = take(n);
  }

  solve(r: Float64Array, q: Float64Array, scale: Float64Array, radius: number, step: Float64Array): void {
    const n = this.n;
    let isSingular = false;
    for (let j = 0; j < n; j++) if (Math.abs(r[j * n + j]!) <= EPSILON * scale[j]!) isSingular = true;
    this.lambda = 0;
    if (!isSingular) {
      this.substitute(r, q, 0, scale, step);
      if (scaledLength(step, scale) <= 1.1 * radius) return this.predict(r, scale, step);
    }
    // Bounds of lambda after Moré: Newton's step from 0 below, |D^-1 R'q| / radius above.
    let low = 0;
    if (!isSingular) {
      const length = scaledLength(step, scale);
      low = Math.max(0, (length - radius) / radius / (this.slope(scale, step, length) || Infinity));
    }
    let gradient = 0;
    for (let j = 0; j < n; j++) {
      let sum = 0;
      for (let i = 0; i <= j; i++) sum += r[i * n + j]! * q[i]!;
      gradient += (sum / scale[j]!) * (sum / scale[j]!);
    }
    let high = Math.sqrt(gradient) / radius;
    if (!(high > SMALLEST_DAMPING)) high = SMALLEST_DAMPING;
    let lambda = Math.max(low, 0.001 * high, SMALLEST_DAMPING);
    for (let k = 0; k < 20; k++) {
      this.substitute(r, q, lambda, scale, step);
      const length = scaledLength(step, scale);
      const excess = length - radius;
      this.lambda = lambda;
      if (Math.abs(excess) <= 0.1 * radius) break;
      if (excess > 0) low = Math.max(low, lambda);
      else high = Math.min(high, lambda);
      const slope = this.slope(scale, step, length);
      let next = lambda + excess / radius / slope;
      if (!(next > low && next < high)) next = Math.max(Math.sqrt(low * high), 0.001 * high);
      lambda = Math.max(next, SMALLEST_DAMPING);
    }
    this.predict(r, scale, step);
  }

  /** |D p|'s relative slope term of Moré's Newton step: |T^-T D² p|² / |D p|², T the damped triangle. */
  private slope(scale: Float64Array, step: Float64Array, length: number): number {
    const n = this.n;
    const w = this.helper;
    let sum = 0;
    for (let j = 0; j < n; j++) {
      let value = (scale[j]! * scale[j]! * step[j]!) / length;
      for (let i = 0; i < j; i++) value -= this.triangle[i * n + j]! * w[i]!;
      w[j] = value / this.triangle[j * n + j]!;
      sum += w[j]! * w[j]!;
    }
    return sum;
  }

  private predict(r: Float64Array, scale: Float64Array, step: Float64Array): void {
    const n = this.n;
    let model = 0;
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = i; j < n; j++) sum += r[i * n + j]! * step[j]!;
      model += sum * sum;
    }
    const length = scaledLength(step, scale);
    this.predictedReduction = model + 2 * this.lambda * length * length;
    this.descent = model + this.lambda * length * length;
  }

  /** Rotates sqrt(lambda) D into R (Givens) and solves; the damped triangle stays in `triangle`. */
  private substitute(r: Float64Array, q: Float64Array, lambda: number, scale: Float64Array, step: Float64Array): void {
    const n = this.n;
    const t = this.triangle;
    t.set(r);
    this.right.set(q);
    if (lambda > 0) {
      const root = Math.sqrt(lambda);
      for (let j = 0; j < n; j++) {
        this.row.fill(0);
        this.row[j] = root * scale[j]!;
        let rest = 0;
        for (let k = j; k < n; k++) {
          const b = this.row[k]!;
          if (b === 0) continue;
          const a = t[k * n + k]!;
          const norm = Math.sqrt(a * a + b * b);
          const c = a / norm;
          const s = b / norm;
          for (let l = k; l < n; l++) {
            const upper = t[k * n + l]!;
            const lower = this.row[l]!;
            t[k * n + l] = c * upper + s * lower;
            this.row[l] = c * lower - s * upper;
          }
          const upper = this.right[k]!;
          this.right[k] = c * upper + s * rest;
          rest = c * rest - s * upper;
        }
      }
    }
    for (let k = n - 1; k >= 0; k--) {
      let sum = this.right[k]!;
      for (let j = k + 1; j < n; j++) sum -= t[k * n + j]! * step[j]!;
      step[k] = sum / t[k * n + k]!;
    }
  }
}
