/** What must hold for any argument: inverse functions return their argument, identities, no result outside its range. */
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import * as n from "./index.ts";

const runs = { numRuns: 300, seed: 20260301 };
const real = (min: number, max: number): fc.Arbitrary<number> => fc.double({ min, max, noNaN: true });
const relative = (a: number, b: number): number => Math.abs(a - b) / Math.max(Math.abs(b), 1e-300);

describe("inverse functions", () => {
  test("log(exp x), expm1 and log1p, pow by its root, asin(sin x), atan(tan x), acos(cos x)", () => {
    fc.assert(
      fc.property(real(-700, 700), real(-1.5, 1.5), real(0.01, 100), real(-5, 5), (x, angle, base, power) => {
        expect(Math.abs(n.log(n.exp(x)) - x)).toBeLessThan(1e-13 + 1e-15 * Math.abs(x));
        expect(relative(n.log1p(n.expm1(angle)), angle)).toBeLessThan(4e-15);
        expect(Math.abs(n.asin(n.sin(angle)) - angle)).toBeLessThan(1e-13);
        expect(relative(n.atan(n.tan(angle)), angle)).toBeLessThan(1e-14);
        expect(Math.abs(n.acos(n.cos(angle)) - Math.abs(angle))).toBeLessThan(1e-7);
        if (power !== 0)
          expect(relative(n.pow(n.pow(base, power), 1 / power), base)).toBeLessThan(1e-13 * (1 + 1 / Math.abs(power)));
      }),
      runs,
    );
  });
  test("quantiles return the probability of their value: normal, Student, chi-squared, F", () => {
    fc.assert(
      fc.property(real(1e-9, 0.999999), real(0.6, 400), real(0.6, 400), (p, dof, bottom) => {
        expect(relative(n.normalCdf(n.normalQuantile(p)), p)).toBeLessThan(1e-13);
        expect(relative(n.studentCdf(n.studentQuantile(p, dof), dof), p)).toBeLessThan(2e-12);
        expect(relative(n.chiSquareCdf(n.chiSquareQuantile(p, dof), dof), p)).toBeLessThan(2e-12);
        expect(relative(n.fCdf(n.fQuantile(p, dof, bottom), dof, bottom), p)).toBeLessThan(2e-12);
      }),
      runs,
    );
  });
});

describe("identities", () => {
  test("sin² + cos² = 1; exp(a + b) = exp a exp b; erf + erfc = 1; hypot and atan2 give the point back", () => {
    fc.assert(
      fc.property(real(-1e5, 1e5), real(-300, 300), real(-300, 300), real(-6, 6), (x, a, b, e) => {
        expect(Math.abs(n.sin(x) * n.sin(x) + n.cos(x) * n.cos(x) - 1)).toBeLessThan(5e-16);
        expect(relative(n.exp(a + b), n.exp(a) * n.exp(b))).toBeLessThan(2e-13);
        expect(Math.abs(n.erf(e) + n.erfc(e) - 1)).toBeLessThan(3e-16);
        const [radius, angle] = [n.hypot(a, b), n.atan2(b, a)];
        expect(Math.abs(radius * n.cos(angle) - a)).toBeLessThan(1e-13 * Math.max(radius, 1e-300));
        expect(Math.abs(radius * n.sin(angle) - b)).toBeLessThan(1e-13 * Math.max(radius, 1e-300));
      }),
      runs,
    );
  });
  test("Voigt's function lies within (0, 1], falls with |x|, and solves its differential equations", () => {
    const out = new Float64Array(4);
    fc.assert(
      fc.property(real(0, 50), real(1e-6, 50), (x, y) => {
        n.voigtWithGradient(x, y, out);
        const [k, l, dx, dy] = out as unknown as [number, number, number, number];
        expect(k > 0 && k <= 1).toBe(true);
        expect(dx).toBeLessThanOrEqual(1e-15);
        // w' = -2 z w + 2i / sqrt(pi), real and imaginary part
        expect(Math.abs(dx + 2 * (x * k - y * l))).toBeLessThan(1e-13);
        expect(Math.abs(dy - 2 * (x * l + y * k) + 2 / Math.sqrt(Math.PI))).toBeLessThan(1e-13);
      }),
      runs,
    );
  });
});

describe("least squares", () => {
  test("a polynomial's own points return its coefficients, whatever the weights", () => {
    fc.assert(
      fc.property(
        fc.array(real(-5, 5), { minLength: 1, maxLength: 5 }),
        fc.array(real(0.1, 10), { minLength: 12, maxLength: 12 }),
        (coefficients, unc) => {
          const design = new Float64Array(12 * coefficients.length);
          const y = unc.map((_, i) => {
            const t = (2 * i) / 11 - 1;
            n.fillChebyshevBasis(design, i * coefficients.length, coefficients.length - 1, t);
            return n.evaluateChebyshev(coefficients, t);
          });
          const fit = n.solveLeastSquares(design, 12, coefficients.length, y, unc);
          coefficients.forEach((value, j) => expect(Math.abs(fit.coefficients[j]! - value)).toBeLessThan(1e-13));
          // The trace of the hat matrix is the number of coefficients.
          expect(fit.leverages.reduce((sum, value) => sum + value, 0)).toBeCloseTo(coefficients.length, 10);
        },
      ),
      runs,
    );
  });
  test("a straight line moves with its points: y shifted and scaled, x and y exchanged where both are uncertain", () => {
    const points = fc.array(fc.tuple(real(0, 10), real(-0.2, 0.2)), { minLength: 4, maxLength: 12 });
    fc.assert(
      fc.property(points, real(-50, 50), real(0.1, 10), (list, shift, scale) => {
        const x = list.map(([at], i) => at + 11 * i);
        const y = list.map(([, error], i) => 3 + 0.7 * x[i]! + error);
        const unc = x.map(() => 0.2);
        const line = n.lineKnownWeights(x, y, unc);
        const moved = n.lineKnownWeights(
          x,
          y.map((value) => shift + scale * value),
          unc.map((value) => scale * value),
        );
        expect(moved.slope).toBeCloseTo(scale * line.slope, 8);
        expect(moved.intercept).toBeCloseTo(shift + scale * line.intercept, 7);
        expect(moved.slopeUnc).toBeCloseTo(scale * line.slopeUnc, 9);
        const both = n.lineBothUncertain(x, y, unc, unc)!;
        const turned = n.lineBothUncertain(y, x, unc, unc)!;
        expect(turned.slope).toBeCloseTo(1 / both.slope, 8);
        const back = n.lineInverse(line, n.lineForward(line, 17).value, 0.2)!;
        expect(back.value).toBeCloseTo(17, 9);
      }),
      runs,
    );
  });
});
