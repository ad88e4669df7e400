import { describe, expect, test } from "vitest";
import type { ArrayOptics } from "../analysis/types.ts";
import { arrayGeometryAtCentre, ArrayModel } from "../grating/array-spectrometer.ts";
import { createRandom } from "../testing/index.ts";
import { axisNm, axisPx, axisUncNm } from "./axis.ts";
import { type DispersionOptions, type DispersionPoint, fitDispersion } from "./fit-dispersion.ts";
import { fitGratingDispersion } from "./fit-grating-dispersion.ts";

const options: DispersionOptions = {
  degree: null,
  firstPosition: 0,
  lastPosition: 2047,
  meaning: "standard-air",
  fwhm: 4,
};
const optics: ArrayOptics = {
  groovesPerMm: 600,
  order: 1,
  focalLengthMm: 50,
  pixelPitchUm: 14,
  includedAngleDeg: 35,
};

/** The optics with what no data sheet has: another focal length and a tilt. */
function model(direction: 1 | -1 = 1): ArrayModel {
  const solved = arrayGeometryAtCentre({
    order: 1,
    grooveDensityPerMm: 600,
    includedAngleDeg: 35,
    focalLengthMm: 51.2,
    pixelPitchUm: 14,
    centreNm: 560,
    axisPx: 1023.5,
    detectorTiltDeg: 2.5,
    direction,
  });
  if (solved.outcome !== "solved") throw new Error("no geometry");
  return new ArrayModel(solved.geometry);
}

function pointsOf(instrument: ArrayModel, pixels: number[], unc: number, seed: number): DispersionPoint[] {
  const random = createRandom(seed);
  return pixels.map((px) => ({
    position: px + unc * random.normal(),
    positionUnc: unc,
    wavelengthNm: instrument.wavelengthAtPx(px),
    wavelengthUncNm: 0.0005,
  }));
}

function both(points: DispersionPoint[], given = optics) {
  const polynomial = fitDispersion(points, options);
  if (polynomial.outcome !== "fitted") throw new Error(polynomial.reason);
  return { polynomial, grating: fitGratingDispersion(points, given, options, polynomial) };
}
const spread = (count: number, from = 100, to = 1950): number[] =>
  Array.from({ length: count }, (_, k) => from + (k * (to - from)) / (count - 1));

describe("an axis by the spectrometer's geometry", () => {
  test.each([1, -1] as const)("exact lines are followed to 1e-4 px over the capture (direction %d)", (direction) => {
    const instrument = model(direction);
    const { grating } = both(pointsOf(instrument, spread(12), 1e-6, 1));
    if (grating.outcome !== "fitted") throw new Error(grating.reason);
    const { axis, family, geometry } = grating.dispersion;
    expect(family).toBe("grating");
    for (let px = 0; px <= 2047; px += 89) {
      const nm = instrument.wavelengthAtPx(px);
      expect(Math.abs(axisNm(axis, px) - nm)).toBeLessThan(1e-4 * Math.abs(instrument.dispersionNmPerPx));
      expect(Math.abs(axisPx(axis, axisNm(axis, px))! - px)).toBeLessThan(1e-7);
    }
    const focal = geometry!.find((one) => one.parameter === "focalLengthMm")!;
    expect(focal.unc).toBeGreaterThan(0);
    expect(geometry!.find((one) => one.parameter === "grooveDensityPerMm")).toMatchObject({ value: 600, unc: 0 });
  });

  test("few lines bunched at one side: better than any polynomial where there are no lines, and the evidence says so", () => {
    const instrument = model();
    let better = 0;
    for (let seed = 1; seed <= 20; seed++) {
      const { polynomial, grating } = both(pointsOf(instrument, spread(9, 60, 1100), 0.02, seed));
      if (grating.outcome !== "fitted") throw new Error(grating.reason);
      const off = (nm: number): number => Math.abs(nm - instrument.wavelengthAtPx(1900));
      if (off(axisNm(grating.dispersion.axis, 1900)) < off(axisNm(polynomial.dispersion.axis, 1900))) better += 1;
      expect(grating.dispersion.families!.map((one) => one.family)).toEqual(["polynomial", "grating"]);
    }
    expect(better).toBeGreaterThanOrEqual(15);
  });

  test("stated uncertainty: 95.45 % intervals hold the truth between the lines", () => {
    const instrument = model();
    const runs = 250;
    let held = 0;
    let count = 0;
    for (let seed = 1; seed <= runs; seed++) {
      const { grating } = both(pointsOf(instrument, spread(12), 0.03, 5000 + seed));
      if (grating.outcome !== "fitted") throw new Error(grating.reason);
      const { axis } = grating.dispersion;
      for (const px of [150, 700, 1300, 1900]) {
        count += 1;
        if (Math.abs(axisNm(axis, px) - instrument.wavelengthAtPx(px)) <= 2 * axisUncNm(axis, px)!) held += 1;
      }
    }
    expect(held / count).toBeGreaterThan(0.93);
    expect(held / count).toBeLessThan(0.98);
  });

  test("optics of another instrument: the evidence speaks for the polynomial, or the fit is refused", () => {
    const { grating } = both(pointsOf(model(), spread(14), 0.02, 3), { ...optics, groovesPerMm: 1800 });
    if (grating.outcome === "refused") expect(grating.reason.length).toBeGreaterThan(20);
    else expect(grating.dispersion.families![1]!.note).toMatch(/less well/);
  });
});
