import { describe, expect, it } from "vitest";
import { solveLeastSquares } from "../numeric/linear-least-squares.ts";
import { driftPointOf } from "./drift-point.ts";

const wavelengths = [253.6521, 365.0158, 435.8335, 546.075, 579.067];

describe("driftPointOf", () => {
  it("gives a straight line back exactly", () => {
    const point = driftPointOf(
      wavelengths.map((nm) => ({ wavelengthNm: nm, errorNm: 0.2 + 0.001 * (nm - 416.35955), ownUncNm: 0.01 })),
      0,
    )!;
    expect(point.midNm).toBeCloseTo(416.35955, 10);
    expect(point.midErrorNm).toBeCloseTo(0.2, 12);
    expect(point.scaleErrorNm).toBeCloseTo(0.3254149, 10);
    expect(point.largestErrorNm).toBeCloseTo(0.2 + 0.3254149 / 2, 10);
    expect(point.largestAtNm).toBe(579.067);
  });

  it("agrees with a general weighted least-squares solution and its covariance", () => {
    const uncs = [0.02, 0.01, 0.015, 0.01, 0.03];
    const errors = [0.11, 0.1, 0.125, 0.12, 0.15];
    const mid = (wavelengths[0]! + wavelengths[4]!) / 2;
    const range = wavelengths[4]! - wavelengths[0]!;
    const design = Float64Array.from(wavelengths.flatMap((nm) => [1, (nm - mid) / range]));
    const fit = solveLeastSquares(design, 5, 2, Float64Array.from(errors), Float64Array.from(uncs));
    const point = driftPointOf(
      wavelengths.map((wavelengthNm, i) => ({ wavelengthNm, errorNm: errors[i]!, ownUncNm: uncs[i]! })),
      0.05,
    )!;
    expect(point.midErrorNm).toBeCloseTo(fit.coefficients[0]!, 12);
    expect(point.scaleErrorNm).toBeCloseTo(fit.coefficients[1]!, 12);
    const chi = fit.residuals.reduce((sum, r, i) => sum + (r / uncs[i]!) * (r / uncs[i]!), 0) / 3;
    const inflation = Math.max(1, chi);
    expect(point.midErrorUncNm).toBeCloseTo(Math.sqrt(fit.covariance[0]! * inflation + 0.0025), 12);
    expect(point.scaleErrorUncNm).toBeCloseTo(Math.sqrt(fit.covariance[3]! * inflation), 12);
    expect(point.covarianceNm2).toBeCloseTo(fit.covariance[1]! * inflation, 12);
  });

  it("knows no scale error from one line, and nothing from none", () => {
    expect(driftPointOf([{ wavelengthNm: 486, errorNm: 0.1, ownUncNm: 0.02 }], 0)).toMatchObject({
      midNm: 486,
      rangeNm: 0,
      midErrorNm: 0.1,
      midErrorUncNm: 0.02,
      scaleErrorNm: 0,
      scaleErrorUncNm: 0,
    });
    expect(driftPointOf([], 0)).toBeNull();
  });
});
