/**
 * The grating equation m lambda = d (sin alpha + sin beta), solved by hand for each unknown.
 *
 * One state throughout: 1 200 grooves per mm, so d = 1e6 / 1200 = 833.3333 nm; alpha = 30°, sin = 0.5; order 1; 500 nm.
 *   m lambda / d = 500 / 833.3333 = 0.6
 *   sin beta     = 0.6 - 0.5 = 0.1          beta = 5.739170477°   cos beta = sqrt(1 - 0.01) = 0.994987437
 */
import { describe, expect, test } from "vitest";
import * as grating from "../../packages/core/src/grating/equation.ts";

const state = {
  order: 1,
  wavelengthNm: 500,
  grooveDensityPerMm: 1200,
  incidenceDeg: 30,
  diffractionDeg: 5.739170477266787,
};
const value = (answer: grating.GratingAnswer): number => {
  if (answer.outcome === "refused") throw new Error(answer.detail);
  return answer.value;
};

describe("each unknown", () => {
  test("diffraction angle: asin(500/833.3333 - 0.5) = asin(0.1) = 5.739170°", () => {
    expect(value(grating.diffractionAngleDeg(state))).toBeCloseTo(5.739170477, 9);
  });
  test("angle of incidence: asin(0.6 - 0.1) = asin(0.5) = 30°", () => {
    expect(value(grating.incidenceAngleDeg(state))).toBeCloseTo(30, 12);
  });
  test("wavelength: 833.3333 (0.5 + 0.1) / 1 = 500 nm; in order 2 it is 250 nm", () => {
    expect(value(grating.gratingWavelengthNm(state))).toBeCloseTo(500, 10);
    expect(value(grating.gratingWavelengthNm({ ...state, order: 2 }))).toBeCloseTo(250, 10);
  });
  test("groove density: (0.5 + 0.1) 1e6 / (1 x 500) = 1 200 per mm", () => {
    expect(value(grating.grooveDensityPerMm(state))).toBeCloseTo(1200, 9);
  });
  test("order: 833.3333 (0.5 + 0.1) / 500 = 1; of 250 nm it is 2", () => {
    expect(value(grating.gratingOrder(state))).toBeCloseTo(1, 12);
    expect(value(grating.gratingOrder({ ...state, wavelengthNm: 250 }))).toBeCloseTo(2, 12);
  });
  test("both angles at 40° between the beams: sin phi = 0.6 / (2 cos 20°) = 0.3 / 0.939692621 = 0.319253332, phi = 18.617565°", () => {
    const both = grating.anglesForIncludedAngle({
      order: 1,
      wavelengthNm: 500,
      grooveDensityPerMm: 1200,
      includedAngleDeg: 40,
    });
    if (both.outcome === "refused") throw new Error(both.detail);
    expect(Math.sin((both.rotationDeg * Math.PI) / 180)).toBeCloseTo(0.319253332, 9);
    expect(both.incidenceDeg - both.diffractionDeg).toBeCloseTo(40, 12);
    // and back through the equation itself
    expect(value(grating.gratingWavelengthNm({ order: 1, grooveDensityPerMm: 1200, ...both }))).toBeCloseTo(500, 9);
  });
});

describe("what follows", () => {
  test("mirror: order 0 sends light to beta = -alpha", () => {
    expect(value(grating.diffractionAngleDeg({ ...state, order: 0 }))).toBeCloseTo(-30, 12);
  });
  test("angular dispersion: m / (d cos beta) = 1 / (833.3333 x 0.994987437) = 0.001206045 rad/nm", () => {
    expect(grating.angularDispersionRadPerNm(state)).toBeCloseTo(0.001206045, 9);
  });
  test("reciprocal dispersion at 300 mm: 833.3333 x 0.994987437 / 300 = 2.763853992 nm/mm; 14 µm pixels: 0.038693956 nm/px", () => {
    expect(grating.reciprocalDispersionNmPerMm({ ...state, focalLengthMm: 300 })).toBeCloseTo(2.763853992, 8);
    expect(grating.dispersionNmPerPx({ ...state, focalLengthMm: 300, pixelPitchUm: 14 })).toBeCloseTo(0.038693956, 9);
  });
  test("free spectral range: 500 / 2 = 250 nm in order 2", () => {
    expect(grating.freeSpectralRangeNm(500, 2)).toBe(250);
  });
  test("resolving power: order 2, 1 200 per mm, 50 mm lit: 2 x 60 000 = 120 000", () => {
    expect(grating.resolvingPower(2, 1200, 50)).toBe(120000);
  });
  test("slit 100 µm: its image is cos 30° / cos beta = 0.866025404 / 0.994987437 = 0.870388 as wide, 87.0388 µm; times 2.763854 nm/mm = 0.240563 nm", () => {
    expect(grating.slitLimitedBandwidthNm({ ...state, focalLengthMm: 300, slitUm: 100, exitUm: 14 })).toBeCloseTo(
      0.240563,
      6,
    );
  });
  test("limits: slit 100 µm 0.240563 nm as above, two pixels 2 x 0.038694 = 0.077388 nm, 50 mm lit 500 / 60 000 = 0.008333 nm", () => {
    const limits = grating.bandwidthLimits({
      ...state,
      focalLengthMm: 300,
      slitUm: 100,
      pixelPitchUm: 14,
      litWidthMm: 50,
    });
    expect(limits.slitNm).toBeCloseTo(0.240563, 6);
    expect(limits.pixelNm).toBeCloseTo(0.077388, 6);
    expect(limits.diffractionNm).toBeCloseTo(0.008333, 6);
    expect(limits.largest).toBe("slit");
    expect(
      grating.bandwidthLimits({ ...state, focalLengthMm: 300, slitUm: 20, pixelPitchUm: 14, litWidthMm: null }),
    ).toMatchObject({ largest: "pixel", diffractionNm: null });
  });
  test("where 600 nm falls in order 1, 300 nm falls in order 2 and 200 nm in order 3", () => {
    expect(grating.overlappingOrders(600, 1, 190, 1100)).toEqual([
      { order: 2, wavelengthNm: 300 },
      { order: 3, wavelengthNm: 200 },
    ]);
  });
});

describe("no answer is said to be none", () => {
  test("1 200 nm in order 2: 2 x 1200 / 833.3333 - 0.5 = 2.38, no such sine", () => {
    expect(grating.diffractionAngleDeg({ ...state, order: 2, wavelengthNm: 1200 })).toMatchObject({
      outcome: "refused",
      reason: "evanescent",
    });
  });
  test("order 0 fixes no wavelength and no groove density", () => {
    expect(grating.gratingWavelengthNm({ ...state, order: 0 })).toMatchObject({ reason: "undetermined" });
    expect(grating.grooveDensityPerMm({ ...state, order: 0 })).toMatchObject({ reason: "undetermined" });
  });
  test("a groove density that is not above 0 is a caller's mistake", () => {
    expect(() => grating.diffractionAngleDeg({ ...state, grooveDensityPerMm: 0 })).toThrow(RangeError);
  });
});
