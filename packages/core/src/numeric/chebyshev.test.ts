import { expect, test } from "vitest";
import {
  chebyshevArgument,
  chebyshevBasis,
  chebyshevToPowers,
  differentiateChebyshev,
  evaluateChebyshev,
} from "./chebyshev.ts";

test("T_0 … T_3 at t = 0.5 are 1, 0.5, -0.5, -1", () => {
  expect(Array.from(chebyshevBasis(3, 0.5))).toEqual([1, 0.5, -0.5, -1]);
  expect(evaluateChebyshev([1, 2, 3, 4], 0.5)).toBeCloseTo(1 + 1 - 1.5 - 4, 14);
});
test("derivative of T_3 = 4t³ - 3t is 12t² - 3", () => {
  expect(evaluateChebyshev(differentiateChebyshev([0, 0, 0, 1]), 0.3)).toBeCloseTo(12 * 0.09 - 3, 13);
});
test("powers over [0, 2047] give the same wavelengths as the Chebyshev sum", () => {
  const coefficients = [530.2, 310.4, -12.3, 0.8, 0.05];
  const powers = chebyshevToPowers(coefficients, 0, 2047);
  for (const x of [0, 511.3, 1024, 2047]) {
    let sum = 0;
    for (let i = powers.length - 1; i >= 0; i--) sum = sum * x + powers[i]!;
    expect(Math.abs(sum - evaluateChebyshev(coefficients, chebyshevArgument(x, 0, 2047)))).toBeLessThan(1e-11);
  }
  // 2 T_0 + 3 T_1 over [0, 2]: t = x - 1, so -1 + 3 x
  expect(Array.from(chebyshevToPowers([2, 3], 0, 2))).toEqual([-1, 3]);
});
