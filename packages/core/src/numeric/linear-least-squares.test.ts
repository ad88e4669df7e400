import { describe, expect, test } from "vitest";
import { solveLeastSquares } from "./linear-least-squares.ts";

describe("solveLeastSquares", () => {
  test("straight line through (0, 1), (1, 3), (2, 5): 1 + 2 x, residuals 0", () => {
    const fit = solveLeastSquares(Float64Array.of(1, 0, 1, 1, 1, 2), 3, 2, [1, 3, 5], null);
    expect(fit.coefficients[0]).toBeCloseTo(1, 12);
    expect(fit.coefficients[1]).toBeCloseTo(2, 12);
    expect(fit.degreesOfFreedom).toBe(1);
    expect(fit.residualSd).toBeLessThan(1e-14);
  });
  test("weighted mean of 10 ± 1 and 13 ± 2: (10/1 + 13/4) / (1 + 1/4) = 10.6, u = sqrt(0.8)", () => {
    const fit = solveLeastSquares(Float64Array.of(1, 1), 2, 1, [10, 13], [1, 2]);
    expect(fit.coefficients[0]).toBeCloseTo(10.6, 12);
    expect(fit.covariance[0]).toBeCloseTo(0.8, 12);
    // leverage of a weighted mean: w / sum w = 1 / 1.25 and 0.25 / 1.25
    expect(Array.from(fit.leverages).map((l) => +l.toFixed(12))).toEqual([0.8, 0.2]);
  });
  test("with no uncertainties the covariance is scaled by the residuals: mean of 1, 2, 3 has u = 1/sqrt(3)", () => {
    const fit = solveLeastSquares(Float64Array.of(1, 1, 1), 3, 1, [1, 2, 3], null);
    expect(fit.residualSd).toBeCloseTo(1, 12);
    expect(fit.covariance[0]).toBeCloseTo(1 / 3, 12);
  });
  test("no degrees of freedom: the scatter is unknown, not zero", () => {
    const fit = solveLeastSquares(Float64Array.of(1, 0, 1, 1), 2, 2, [1, 3], null);
    expect(fit.residualSd).toBeNull();
    expect(fit.covariance[0]).toBe(Infinity);
  });
  test("a column that repeats another lowers the rank and says so", () => {
    const fit = solveLeastSquares(Float64Array.of(1, 1, 1, 1, 1, 1), 3, 2, [1, 2, 3], null);
    expect(fit.rank).toBe(1);
    expect(fit.coefficients[0]! + fit.coefficients[1]!).toBeCloseTo(2, 12);
    expect(Array.from(fit.covariance)).toContain(Infinity);
  });
  test("refuses what only a caller's mistake can send", () => {
    expect(() => solveLeastSquares(Float64Array.of(1), 1, 1, [NaN], null)).toThrow(RangeError);
    expect(() => solveLeastSquares(Float64Array.of(1), 1, 1, [1], [0])).toThrow(/above 0/);
    expect(() => solveLeastSquares(Float64Array.of(1, 1), 1, 2, [1], null)).toThrow(/at least as many/);
  });
});
