/**
 * Polynomial fits of the core against ml-regression's PolynomialRegression (normal equations in powers): two independent ways.
 *
 * The library solves in raw powers, so agreement is asked for where its own condition allows it: x within [-1, 1].
 */
import { describe, expect, test } from "vitest";
import { createRequire } from "node:module";
import { createRandom } from "../../packages/core/src/testing/index.ts";
import { chebyshevToPowers, fillChebyshevBasis, solveLeastSquares } from "../../packages/core/src/numeric/index.ts";

interface Regression {
  predict(x: number): number;
  coefficients: number[];
}
// The package has no types and its meaning here is these two members.
const { PolynomialRegression } = createRequire(import.meta.url)("ml-regression") as {
  PolynomialRegression: new (x: number[], y: number[], degree: number) => Regression;
};

describe("polynomials of degree 1 to 5 through 30 noisy points", () => {
  test.each([1, 2, 3, 4, 5])("degree %d: same coefficients and same curve to 1e-9", (degree) => {
    const random = createRandom(400 + degree);
    const x = Array.from({ length: 30 }, () => random.between(-1, 1));
    const y = x.map((t) => 500 + 150 * t - 8 * t * t + 0.7 * t * t * t + 0.05 * random.normal());
    const design = new Float64Array(30 * (degree + 1));
    x.forEach((t, i) => fillChebyshevBasis(design, i * (degree + 1), degree, t));
    const fit = solveLeastSquares(design, 30, degree + 1, y, null);
    const library = new PolynomialRegression(x, y, degree);
    const powers = chebyshevToPowers(fit.coefficients, -1, 1);
    library.coefficients.forEach((theirs, j) => expect(Math.abs(powers[j]! - theirs)).toBeLessThan(1e-9));
    x.forEach((t, i) => expect(Math.abs(y[i]! - fit.residuals[i]! - library.predict(t))).toBeLessThan(1e-9));
  });
});
