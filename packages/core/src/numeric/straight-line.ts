/**
 * Straight lines y = intercept + slope x with their covariance, and what is read off them in either direction.
 *
 * known weights    y uncertain by a known amount at each point, x exact (ISO/TS 28037:2010, clause 6): covariance as the stated
 *                  uncertainties imply it; chi-squared tells whether they are believable
 * unknown scale    all y alike uncertain by an amount estimated from the residuals (ISO/TS 28037:2010, Annex E, there with a further
 *                  factor because it works without degrees of freedom; here plain, with n - 2 of them)
 * both uncertain   x and y uncertain by known amounts, independent of each other (D. York et al., Am. J. Phys. 72 (2004) 367);
 *                  standard errors are theirs, at the adjusted points
 * forward, inverse propagation with the covariance of intercept and slope (JCGM 100, 5.2; ISO/TS 28037, clause 11)
 * Units            the caller's; a slope's is that of y over x
 * Held to          published examples in tests/external/straight-lines.test.ts
 */
import { solveLeastSquares } from "./linear-least-squares.ts";

export interface StraightLine {
  intercept: number;
  slope: number;
  interceptUnc: number;
  slopeUnc: number;
  /** Of intercept and slope. */
  covariance: number;
  /** Sum of squared residuals over their uncertainties; over 1 where the scale is unknown. */
  chiSquare: number;
  degreesOfFreedom: number;
  /** sqrt(chiSquare / degrees of freedom); null when there are none. */
  residualSd: number | null;
}

/** A value with its standard uncertainty. */
export interface ReadValue {
  value: number;
  unc: number;
}

/**
 * Line through points whose y is uncertain by known amounts.
 *
 * @param uncY  standard uncertainties, above 0
 * @throws {RangeError} fewer than 2 points, lengths that differ, values that are not finite, all x equal
 */
export function lineKnownWeights(x: ArrayLike<number>, y: ArrayLike<number>, uncY: ArrayLike<number>): StraightLine {
  return byLeastSquares(x, y, uncY);
}

/**
 * Line through points whose y is alike uncertain by an unknown amount.
 *
 * @returns uncertainties from the scatter; Infinity with only two points
 * @throws {RangeError} as above
 */
export function lineUnknownScale(x: ArrayLike<number>, y: ArrayLike<number>): StraightLine {
  return byLeastSquares(x, y, null);
}

function byLeastSquares(x: ArrayLike<number>, y: ArrayLike<number>, uncY: ArrayLike<number> | null): StraightLine {
  const n = x.length;
  if (n < 2) throw new RangeError(`A line needs at least 2 points; got ${n}`);
  const design = new Float64Array(2 * n);
  for (let i = 0; i < n; i++) {
    design[2 * i] = 1;
    design[2 * i + 1] = x[i]!;
  }
  const fit = solveLeastSquares(design, n, 2, y, uncY);
  if (fit.rank < 2) throw new RangeError("All points have the same x: they lie on no line y = a + b x");
  let chiSquare = 0;
  for (let i = 0; i < n; i++) {
    const ratio = fit.residuals[i]! / (uncY ? uncY[i]! : 1);
    chiSquare += ratio * ratio;
  }
  return {
    intercept: fit.coefficients[0]!,
    slope: fit.coefficients[1]!,
    interceptUnc: Math.sqrt(fit.covariance[0]!),
    slopeUnc: Math.sqrt(fit.covariance[3]!),
    covariance: fit.covariance[1]!,
    chiSquare,
    degreesOfFreedom: n - 2,
    residualSd: fit.residualSd,
  };
}

const MAX_ROUNDS = 200;

/**
 * Line through points whose x and y are uncertain by known amounts, by York's iteration.
 *
 * @param uncX  standard uncertainties, at least 0
 * @param uncY  standard uncertainties, above 0
 * @returns null where the iteration does not settle (points that lie on no line with a finite slope)
 * @throws {RangeError} as above, a negative uncertainty
 */
export function lineBothUncertain(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  uncX: ArrayLike<number>,
  uncY: ArrayLike<number>,
): StraightLine | null {
  const n = x.length;
  if (uncX.length !== n) throw new RangeError(`Lengths differ: ${n} points, ${uncX.length} uncertainties of x`);
  for (let i = 0; i < n; i++)
    if (!(uncX[i]! >= 0 && uncX[i]! < Infinity))
      throw new RangeError(`uncX[${i}] must be at least 0 and finite; got ${uncX[i]}`);
  // With x exact this is the weighted line, which also checks the rest of the input and gives the start.
  let slope = lineKnownWeights(x, y, uncY).slope;
  const weights = new Float64Array(n);
  const beta = new Float64Array(n);
  for (let round = 0; round < MAX_ROUNDS; round++) {
    const { meanX, meanY } = weigh(x, y, uncX, uncY, slope, weights);
    let top = 0;
    let bottom = 0;
    for (let i = 0; i < n; i++) {
      const u = x[i]! - meanX;
      const v = y[i]! - meanY;
      beta[i] = weights[i]! * (u * uncY[i]! * uncY[i]! + slope * v * uncX[i]! * uncX[i]!);
      top += weights[i]! * beta[i]! * v;
      bottom += weights[i]! * beta[i]! * u;
    }
    const next = top / bottom;
    if (!Number.isFinite(next)) return null;
    const isSettled = Math.abs(next - slope) <= 1e-15 * Math.abs(next);
    const isLast = round === MAX_ROUNDS - 1;
    if (isLast && !(Math.abs(next - slope) <= 1e-10 * Math.abs(next))) return null;
    slope = next;
    if (isSettled || isLast) break;
  }
  const { meanX, meanY, total } = weigh(x, y, uncX, uncY, slope, weights);
  const intercept = meanY - slope * meanX;
  let adjustedMean = 0;
  for (let i = 0; i < n; i++) adjustedMean += (weights[i]! * (meanX + beta[i]!)) / total;
  let spread = 0;
  let chiSquare = 0;
  for (let i = 0; i < n; i++) {
    const u = meanX + beta[i]! - adjustedMean;
    spread += weights[i]! * u * u;
    const residual = y[i]! - intercept - slope * x[i]!;
    chiSquare += weights[i]! * residual * residual;
  }
  const slopeVariance = 1 / spread;
  return {
    intercept,
    slope,
    interceptUnc: Math.sqrt(1 / total + adjustedMean * adjustedMean * slopeVariance),
    slopeUnc: Math.sqrt(slopeVariance),
    covariance: -adjustedMean * slopeVariance,
    chiSquare,
    degreesOfFreedom: n - 2,
    residualSd: n > 2 ? Math.sqrt(chiSquare / (n - 2)) : null,
  };
}

/** Weights of the points at a slope (into `weights`), their sum, and the weighted means. */
function weigh(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  uncX: ArrayLike<number>,
  uncY: ArrayLike<number>,
  slope: number,
  weights: Float64Array,
): { meanX: number; meanY: number; total: number } {
  let total = 0;
  let sumX = 0;
  let sumY = 0;
  for (let i = 0; i < x.length; i++) {
    const across = slope * uncX[i]!;
    const weight = 1 / (uncY[i]! * uncY[i]! + across * across);
    weights[i] = weight;
    total += weight;
    sumX += weight * x[i]!;
    sumY += weight * y[i]!;
  }
  return { meanX: sumX / total, meanY: sumY / total, total };
}

/** The line's y at an x that is itself uncertain. */
export function lineForward(line: StraightLine, x: number, uncX = 0): ReadValue {
  const variance =
    line.interceptUnc * line.interceptUnc +
    x * x * line.slopeUnc * line.slopeUnc +
    2 * x * line.covariance +
    line.slope * line.slope * uncX * uncX;
  return { value: line.intercept + line.slope * x, unc: Math.sqrt(Math.max(variance, 0)) };
}

/** The x at which the line has a measured y; null for a level line. */
export function lineInverse(line: StraightLine, y: number, uncY: number): ReadValue | null {
  return polynomialInverse(
    [line.intercept, line.slope],
    [line.interceptUnc * line.interceptUnc, line.covariance, line.covariance, line.slopeUnc * line.slopeUnc],
    y,
    uncY,
    0,
  );
}

/**
 * The x at which a fitted polynomial has a measured y (e-Handbook 4.6.1.6: both uncertainties over the local slope).
 *
 * @param coefficients  ascending powers
 * @param covariance    of the coefficients, row-major
 * @param start         an x on the wanted branch
 * @returns null where Newton's steps find no such x
 */
export function polynomialInverse(
  coefficients: ArrayLike<number>,
  covariance: ArrayLike<number>,
  y: number,
  uncY: number,
  start: number,
): ReadValue | null {
  const n = coefficients.length;
  let x = start;
  let slope = 0;
  for (let round = 0; round < 60; round++) {
    let value = 0;
    slope = 0;
    for (let j = n - 1; j >= 0; j--) {
      slope = slope * x + value;
      value = value * x + coefficients[j]!;
    }
    const step = (y - value) / slope;
    if (!Number.isFinite(step)) return null;
    x += step;
    if (Math.abs(step) <= 1e-15 * Math.abs(x)) break;
    if (round === 59) return null;
  }
  const powers = new Float64Array(n);
  for (let j = 0, power = 1; j < n; j++, power *= x) powers[j] = power;
  let variance = uncY * uncY;
  for (let a = 0; a < n; a++) for (let b = 0; b < n; b++) variance += powers[a]! * covariance[a * n + b]! * powers[b]!;
  return { value: x, unc: Math.sqrt(Math.max(variance, 0)) / Math.abs(slope) };
}
