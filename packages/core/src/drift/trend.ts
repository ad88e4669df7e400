/**
 * Straight lines through a series over time: by weighted least squares, and by the median of pairwise slopes.
 *
 * Weighted     y = a + b t with weights 1/u²; without uncertainties the residuals give the scale
 * Theil-Sen    slope = median of (y_j - y_i)/(t_j - t_i) over all pairs with different t; its limits are two of the ordered slopes, as far
 *              from the middle as Kendall's rank statistic allows, tied values accounted for (P. K. Sen, J. Am. Stat. Assoc. 63
 *              (1968) 1379). Holds where up to 29 % of the points are wild. Equal weights.
 * The median is the library's; of an even number of slopes it takes the lower of the two middle ones, so the mirrored series is fitted
 * too and the mean of both is the median as it is defined. (The library's source was read: it uses no function that engines differ in.)
 */
// @ts-expect-error the package brings no types; what is used of it is written below
import { TheilSenRegression } from "ml-regression";
import { normalQuantile } from "../numeric/distributions.ts";
import { solveLeastSquares } from "../numeric/linear-least-squares.ts";

const PairwiseSlopes = TheilSenRegression as new (x: readonly number[], y: readonly number[]) => { slope: number };

export interface StraightLine {
  intercept: number;
  slope: number;
  interceptUnc: number;
  slopeUnc: number;
  covariance: number;
  /** Standard deviation of the residuals, over their uncertainties where those were given; null with two points. */
  residualSd: number | null;
  degreesOfFreedom: number;
}

/**
 * @param unc  standard uncertainties; null = equal and estimated from the residuals
 * @param scaleByResiduals  with uncertainties given, let the residuals scale the covariance
 */
export function weightedLine(
  t: ArrayLike<number>,
  y: ArrayLike<number>,
  unc: ArrayLike<number> | null,
  scaleByResiduals = false,
): StraightLine {
  const n = t.length;
  const design = new Float64Array(2 * n);
  for (let i = 0; i < n; i++) {
    design[2 * i] = 1;
    design[2 * i + 1] = t[i]!;
  }
  const fit = solveLeastSquares(design, n, 2, y, unc);
  const factor = unc !== null && scaleByResiduals && fit.residualSd !== null ? fit.residualSd * fit.residualSd : 1;
  return {
    intercept: fit.coefficients[0]!,
    slope: fit.coefficients[1]!,
    interceptUnc: Math.sqrt(fit.covariance[0]! * factor),
    slopeUnc: Math.sqrt(fit.covariance[3]! * factor),
    covariance: fit.covariance[1]! * factor,
    residualSd: fit.residualSd,
    degreesOfFreedom: fit.degreesOfFreedom,
  };
}

export interface TheilSenLine {
  slope: number;
  /** Limits of the slope; -Infinity and Infinity where there are too few points for the confidence asked. */
  slopeLow: number;
  slopeHigh: number;
  confidence: number;
  /** Median of y - slope t. */
  intercept: number;
  pairs: number;
}

/** @returns null where no two points differ in t */
export function theilSenLine(t: ArrayLike<number>, y: ArrayLike<number>, confidence: number): TheilSenLine | null {
  const n = t.length;
  const slopes: number[] = [];
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) if (t[j] !== t[i]) slopes.push((y[j]! - y[i]!) / (t[j]! - t[i]!));
  }
  if (slopes.length === 0) return null;
  const times = Array.from(t);
  const values = Array.from(y);
  const up = new PairwiseSlopes(times, values);
  const down = new PairwiseSlopes(
    times,
    values.map((value) => -value),
  );
  const slope = (up.slope - down.slope) / 2;
  const cuts = values.map((value, i) => value - slope * times[i]!).sort((a, b) => a - b);
  slopes.sort((a, b) => a - b);
  const reach = normalQuantile((1 + confidence) / 2) * Math.sqrt(kendallVariance(t, y));
  const low = Math.round((slopes.length - reach) / 2) - 1;
  const high = Math.round((slopes.length + reach) / 2);
  return {
    slope,
    slopeLow: slopes[low] ?? -Infinity,
    slopeHigh: slopes[high] ?? Infinity,
    confidence,
    intercept: (cuts[(n - 1) >> 1]! + cuts[n >> 1]!) / 2,
    pairs: slopes.length,
  };
}

/** Variance of Kendall's score of n pairs: (n (n-1) (2n+5) - the same of each group of equal t, and of equal y) / 18 (Sen, eq. 2.6). */
function kendallVariance(t: ArrayLike<number>, y: ArrayLike<number>): number {
  const term = (n: number): number => n * (n - 1) * (2 * n + 5);
  let sum = term(t.length);
  for (const values of [t, y]) {
    const sorted = Float64Array.from(values).sort();
    let from = 0;
    for (let i = 1; i <= sorted.length; i++) {
      if (i < sorted.length && sorted[i] === sorted[from]) continue;
      if (i - from > 1) sum -= term(i - from);
      from = i;
    }
  }
  return Math.max(0, sum) / 18;
}
