import { describe, expect, test } from "vitest";
import { reproducibilityOfRuns } from "./reproducibility.ts";

/** Normal numbers by Box and Muller over a linear congruential generator (Numerical Recipes' constants): test use only. */
function normals(seed: number, count: number): number[] {
  let state = seed >>> 0;
  const uniform = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return (state + 0.5) / 4294967296;
  };
  return Array.from({ length: count }, () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform()));
}

describe("set-up reproducibility from a configuration's history", () => {
  test("seven checks say nothing", () => {
    expect(reproducibilityOfRuns([[0, 1, 0, 1, 0, 1, 0]])).toBeNull();
  });

  test("0, 2, 0, 2 …: every difference is 2, so sqrt(4 / 2) = 1.414", () => {
    expect(reproducibilityOfRuns([[0, 2, 0, 2, 0, 2, 0, 2]])!.reproducibilityNm).toBeCloseTo(Math.SQRT2, 12);
  });

  test("one run of n = 8: dof = 2 (n-1)^2 / (3n - 4) = 98 / 20 = 4.9", () => {
    expect(reproducibilityOfRuns([[0, 2, 0, 2, 0, 2, 0, 2]])!.degreesOfFreedom).toBeCloseTo(4.9, 12);
  });

  test("the step across a break does not enter", () => {
    const whole = reproducibilityOfRuns([[0, 0.01, 0, 0.01, 5, 5.01, 5, 5.01]])!;
    const broken = reproducibilityOfRuns([
      [0, 0.01, 0, 0.01],
      [5, 5.01, 5, 5.01],
    ])!;
    expect(whole.reproducibilityNm).toBeGreaterThan(1);
    expect(broken.reproducibilityNm).toBeCloseTo(0.01 / Math.SQRT2, 12);
  });

  test("5 000 normal series of 12: unbiased in the square, and its spread is that of the stated degrees of freedom", () => {
    const runs = 5000;
    const squares: number[] = [];
    let dof = 0;
    for (let run = 0; run < runs; run += 1) {
      const found = reproducibilityOfRuns([normals(1000 + run * 7919, 12)])!;
      squares.push(found.reproducibilityNm ** 2);
      dof = found.degreesOfFreedom;
    }
    const mean = squares.reduce((a, b) => a + b, 0) / runs;
    const variance = squares.reduce((a, b) => a + (b - mean) ** 2, 0) / (runs - 1);
    expect(mean).toBeGreaterThan(0.98);
    expect(mean).toBeLessThan(1.02);
    // A variance estimate with dof degrees of freedom has relative variance 2 / dof.
    expect(variance / mean ** 2).toBeGreaterThan((2 / dof) * 0.92);
    expect(variance / mean ** 2).toBeLessThan((2 / dof) * 1.08);
  });
});
