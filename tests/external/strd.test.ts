/**
 * NIST StRD: certified values against what the core reaches; the whole table of digits is printed.
 *
 * Held to, nonlinear  from each published start 8 digits of every parameter, or what the set's record says double precision reaches
 *                     where that is less; 6 of every standard error; 9 of the residual standard deviation
 * Held to, linear     11 digits of every coefficient or what is recorded; residual standard deviation and fitted values 9 digits of
 *                     those from the certified estimates in exact arithmetic; where the certified figure is 0, below 1e-9 of the
 *                     largest response
 */
import { afterAll, describe, expect, test } from "vitest";
import { exactLeastSquares, exactPolynomialFit } from "./support/exact-rationals.ts";
import { digitsAgreed, readStrd, strdTable, strdTableText, type StrdRow } from "./support/strd-table.ts";

const rows = strdTable();
afterAll(() => process.stdout.write(`\n${strdTableText(rows)}\n`));
const named = (row: StrdRow): [string, StrdRow] => [`${row.set}, ${row.way}`, row];

describe("nonlinear", () => {
  test.each(rows.filter((row) => row.way.startsWith("start")).map(named))("%s", (_, row) => {
    expect(row.outcome).toMatch(/^(converged|stalled)/);
    expect(row.degreesOfFreedom).toBe(readStrd(row.set).certified.degreesOfFreedom);
    expect(Math.min(...row.parameterDigits)).toBeGreaterThanOrEqual(Math.min(8, row.recordedDigits));
    expect(Math.min(...row.standardErrorDigits)).toBeGreaterThanOrEqual(6);
    expect(row.residualSdDigits).toBeGreaterThanOrEqual(9);
  });
  test("twelve sets, both starts of each", () => {
    expect(rows.filter((row) => row.way.startsWith("start")).length).toBe(24);
  });
});

describe("linear", () => {
  test.each(rows.filter((row) => !row.way.startsWith("start")).map(named))("%s", (_, row) => {
    expect(row.outcome).toBe("solved");
    expect(row.degreesOfFreedom).toBe(readStrd(row.set).certified.degreesOfFreedom);
    expect(Math.min(...row.parameterDigits)).toBeGreaterThanOrEqual(Math.min(11, row.recordedDigits));
    for (const digits of row.standardErrorDigits) expect(digits).toBeGreaterThanOrEqual(row.set === "Filip" ? 7 : 9);
    // Filip's raw powers (condition 2e15) are held by their coefficients, its fit in the orthogonal basis below; the other sets'
    // fits by their raw powers, which are exact, whereas a rescaled basis is rounded before the fit begins.
    if (row.way === "Chebyshev" || row.set === "Filip") return;
    expect(row.residualSdDigits).toBeGreaterThanOrEqual(9);
    expect(row.fittedDigits).toBeGreaterThanOrEqual(9);
  });
  test("Filip in the orthogonal basis: 9 digits of the residual standard deviation and of the exact solution's fitted values", () => {
    const row = rows.find(({ set, way }) => set === "Filip" && way === "Chebyshev")!;
    expect(row.residualSdDigits).toBeGreaterThanOrEqual(9);
    expect(row.fittedExactDigits).toBeGreaterThanOrEqual(9);
  });
  test("Filip's certified estimates, printed to 15 digits, cannot give 9 digits of its fitted values themselves", () => {
    const { x, y, certified } = readStrd("Filip");
    const exact = exactLeastSquares(x as number[], y, 11);
    const fromCertified = exactPolynomialFit(x, y, certified.estimates).fitted;
    const digits = exact.map((value, i) => digitsAgreed(fromCertified[i]!, value, 1));
    expect(Math.min(...digits)).toBeLessThan(9);
    // Half a unit of the 15th digit of every estimate explains the difference.
    exact.forEach((value, i) => {
      const rounding = certified.estimates.reduce((sum, estimate, j) => {
        const unit = 10 ** (Math.floor(Math.log10(Math.abs(estimate))) - 14);
        return sum + 0.5 * unit * Math.abs(x[i] as number) ** j;
      }, 0);
      expect(Math.abs(value - fromCertified[i]!)).toBeLessThan(rounding);
    });
  });
  test("exact arithmetic returns the certified residual standard deviations to 13 digits", () => {
    for (const name of ["Norris", "Pontius", "Longley", "Wampler3", "Wampler5"]) {
      const { x, y, certified } = readStrd(name);
      expect(
        Math.abs(exactPolynomialFit(x, y, certified.estimates).residualSd / certified.residualStandardDeviation - 1),
      ).toBeLessThan(1e-13);
    }
    const { x, y, certified } = readStrd("Wampler1");
    expect(exactPolynomialFit(x, y, certified.estimates).residualSd).toBe(0);
  });
});
