import { describe, expect, test } from "vitest";
import {
  binomialUpperTail,
  chiSquareCdf,
  chiSquareQuantile,
  chiSquareUpperTail,
  fCdf,
  fQuantile,
  fUpperTail,
  normalCdf,
  normalQuantile,
  poissonUpperTail,
  studentCdf,
  studentQuantile,
} from "./distributions.ts";

describe("distributions", () => {
  // Exact values computed with mpmath 1.3.0 at 40 digits.
  test.each([
    [0.97725, 2.0000024438996027],
    [0.025, -1.9599639845400542],
    [1e-300, -37.0470962993612],
    [0.3, -0.52440051270804078],
  ])("normal quantile of %d is %d", (p, z) => {
    expect(Math.abs(normalQuantile(p) / z - 1)).toBeLessThan(1e-12);
    expect(Math.abs(normalCdf(z) / p - 1)).toBeLessThan(1e-12);
  });
  // GUM (JCGM 100:2008) table G.2, t for 95.45 %: printed to two decimals.
  test.each([
    [1, 13.97],
    [2, 4.53],
    [5, 2.65],
    [10, 2.28],
    [20, 2.13],
    [50, 2.05],
    [100, 2.025],
  ])("Student t for 95.45 %% and %d degrees of freedom is %d", (dof, printed) => {
    expect(Math.abs(studentQuantile(0.5 + 0.9545 / 2, dof) - printed)).toBeLessThan(0.0051);
  });
  test("Student with one degree of freedom is Cauchy: t(0.75) = 1, cdf(1) = 3/4", () => {
    expect(studentQuantile(0.75, 1)).toBeCloseTo(1, 13);
    expect(studentCdf(1, 1)).toBeCloseTo(0.75, 13);
    expect(studentCdf(-1, 1)).toBeCloseTo(0.25, 13);
  });
  test("Student quantile returns its own probability for uneven degrees of freedom", () => {
    for (const dof of [0.7, 2.34, 7.5, 63.2, 4000]) {
      for (const p of [1e-6, 0.02275, 0.4, 0.9, 0.97725, 0.9999]) {
        expect(Math.abs(studentCdf(studentQuantile(p, dof), dof) / p - 1)).toBeLessThan(1e-12);
      }
    }
    expect(studentQuantile(0.97725, Infinity)).toBe(normalQuantile(0.97725));
  });
  test("chi-squared with two degrees of freedom is 1 - exp(-x/2): 1 - exp(-1) at 2", () => {
    expect(chiSquareCdf(2, 2)).toBeCloseTo(0.6321205588285577, 14);
    expect(chiSquareUpperTail(2, 2)).toBeCloseTo(0.36787944117144233, 14);
  });
  test("tails by counting: at least 2 of 3 at 1/2 is 4/8; at least 1 at mean 2 is 1 - exp(-2)", () => {
    expect(binomialUpperTail(2, 3, 0.5)).toBeCloseTo(0.5, 14);
    expect(poissonUpperTail(1, 2)).toBeCloseTo(0.8646647167633873, 14);
    expect([binomialUpperTail(0, 3, 0.5), binomialUpperTail(4, 3, 0.5), poissonUpperTail(0, 1)]).toEqual([1, 0, 1]);
  });
  // Exact values computed with mpmath 1.3.0 at 40 digits.
  test.each([
    [0.05, 4, 0.71072302139732413],
    [0.95, 4, 9.4877290367811546],
    [0.999, 10, 29.588298445074416],
    [1e-6, 3, 0.00024181048720124282],
    [0.5, 1, 0.45493642311957275],
    [0.025, 0.7, 3.808256451953091e-5],
    [0.975, 63.2, 87.064593530902436],
    [1e-12, 0.3, 1.2599925262770267e-80],
    [0.9999, 500, 626.24271005607844],
    [0.01, 2000, 1855.816319593285],
  ])("chi-squared quantile of %d with %d degrees of freedom is %d", (p, dof, exact) => {
    expect(Math.abs(chiSquareQuantile(p, dof) / exact - 1)).toBeLessThan(2e-12);
  });
  test.each([
    [0.95, 3, 10, 3.7082648190468431],
    [0.05, 3, 10, 0.11382359425864678],
    [0.99, 1, 7.5, 11.706133210809958],
    [1e-6, 2, 30, 1.0000005333337007e-6],
    [0.5, 5, 5, 1.0],
    [0.999, 40, 3, 124.95896949958344],
    [0.975, 0.8, 120, 5.6950480397480167],
    [0.9, 200, 300, 1.1778548651189069],
  ])("F quantile of %d with %d and %d degrees of freedom is %d", (p, top, bottom, exact) => {
    expect(Math.abs(fQuantile(p, top, bottom) / exact - 1)).toBeLessThan(2e-12);
    expect(Math.abs(fCdf(exact, top, bottom) / p - 1)).toBeLessThan(1e-12);
    expect(Math.abs(fUpperTail(exact, top, bottom) / (1 - p) - 1)).toBeLessThan(1e-12);
  });
  test("F with one degree of freedom above is Student squared; ends and what is no probability", () => {
    expect(fQuantile(0.95, 1, 12)).toBeCloseTo(studentQuantile(0.975, 12) ** 2, 10);
    expect([chiSquareQuantile(0, 3), chiSquareQuantile(1, 3), chiSquareQuantile(2, 3), fQuantile(0.5, -1, 2)]).toEqual([
      0,
      Infinity,
      NaN,
      NaN,
    ]);
  });
});
