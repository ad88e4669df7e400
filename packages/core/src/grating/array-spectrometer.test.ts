import { describe, expect, test } from "vitest";
import {
  ARRAY_PARAMETERS,
  arrayGeometryAtCentre,
  ArrayModel,
  arrayPixel,
  arrayWavelengthNm,
  fitArraySpectrometer,
  fittedWavelength,
  type ArrayFit,
  type ArrayGeometry,
  type ArrayParameter,
} from "./index.ts";

const geometry: ArrayGeometry = {
  order: 1,
  grooveDensityPerMm: 600,
  incidenceDeg: 25,
  includedAngleDeg: 30,
  focalLengthMm: 75,
  detectorTiltDeg: 4,
  pixelPitchUm: 14,
  axisPx: 1000,
  direction: 1,
};
const pixels = [0, 240, 500, 777, 1000, 1400, 1800, 2047];
const lines = (true_: ArrayGeometry, uncNm = 0.01, error: (i: number) => number = () => 0) =>
  pixels.map((px, i) => ({ px, wavelengthNm: arrayWavelengthNm(true_, px) + error(i), uncNm }));
const fitted = (result: ReturnType<typeof fitArraySpectrometer>): ArrayFit => {
  if (result.outcome === "refused") throw new Error(result.detail);
  return result;
};

describe("forward model", () => {
  test("on the optical axis: 1e6 / 600 (sin 25° + sin(-5°)) = 559.104 nm", () => {
    // sin 25° = 0.422618262, sin 5° = 0.087155743
    expect(arrayWavelengthNm(geometry, 1000)).toBeCloseTo((1e6 / 600) * (0.422618262 - 0.087155743), 5);
  });
  test("square detector, 1 000 px from the axis: theta = atan(14 mm / 75 mm) = 10.573523°", () => {
    const square = { ...geometry, detectorTiltDeg: 0 };
    expect(arrayWavelengthNm(square, 2000)).toBeCloseTo(
      (1e6 / 600) * (0.422618262 + Math.sin((5.5735234 * Math.PI) / 180)),
      4,
    );
    expect(arrayWavelengthNm({ ...square, direction: -1 }, 0)).toBeCloseTo(arrayWavelengthNm(square, 2000), 10);
  });
  test.each([
    geometry,
    { ...geometry, direction: -1 as const, order: 2 },
    { ...geometry, order: -1, incidenceDeg: -30, includedAngleDeg: 20, detectorTiltDeg: -12 },
  ])("partial derivatives are those of the model (%#)", (g) => {
    const model = new ArrayModel(g);
    const steps: Record<ArrayParameter, number> = {
      grooveDensityPerMm: 0.01,
      incidenceDeg: 1e-4,
      includedAngleDeg: 1e-4,
      focalLengthMm: 1e-3,
      detectorTiltDeg: 1e-3,
      axisPx: 0.1,
    };
    for (const px of [3.25, 900, 2040]) {
      model.evaluate(px);
      ARRAY_PARAMETERS.forEach((name, j) => {
        const h = steps[name];
        const by = (delta: number): number => arrayWavelengthNm({ ...g, [name]: g[name] + delta }, px);
        const difference = (by(h) - by(-h)) / (2 * h);
        expect(Math.abs(model.partials[j]! - difference)).toBeLessThan(1e-5 * Math.max(Math.abs(difference), 1e-3));
      });
      const slope = (arrayWavelengthNm(g, px + 0.1) - arrayWavelengthNm(g, px - 0.1)) / 0.2;
      expect(Math.abs(model.dispersionNmPerPx / slope - 1)).toBeLessThan(1e-6);
      const pitch =
        (arrayWavelengthNm({ ...g, pixelPitchUm: g.pixelPitchUm + 1e-3 }, px) -
          arrayWavelengthNm({ ...g, pixelPitchUm: g.pixelPitchUm - 1e-3 }, px)) /
        2e-3;
      expect(Math.abs(model.pitchPartial(px) - pitch)).toBeLessThan(1e-5 * Math.abs(pitch));
    }
  });
  test("a wavelength finds its pixel again; one that no angle sends there has none", () => {
    for (const px of pixels) expect(arrayPixel(geometry, arrayWavelengthNm(geometry, px))).toBeCloseTo(px, 8);
    expect(arrayPixel(geometry, 5000)).toBeNull();
  });
  test("optics of a data sheet: the asked wavelength lies on the axis; one beyond the grating's reach is refused", () => {
    const optics = {
      order: 1,
      grooveDensityPerMm: 1200,
      includedAngleDeg: 30,
      focalLengthMm: 300,
      pixelPitchUm: 26,
      axisPx: 511.5,
    };
    const at = arrayGeometryAtCentre({ ...optics, centreNm: 600 });
    if (at.outcome === "refused") throw new Error(at.detail);
    expect(arrayWavelengthNm(at.geometry, 511.5)).toBeCloseTo(600, 9);
    expect(arrayGeometryAtCentre({ ...optics, centreNm: 1700 })).toMatchObject({
      outcome: "refused",
      reason: "evanescent",
    });
  });
  test("what no spectrometer has is a caller's mistake", () => {
    for (const change of [{ order: 0 }, { focalLengthMm: 0 }, { incidenceDeg: 90 }, { pixelPitchUm: NaN }])
      expect(() => new ArrayModel({ ...geometry, ...change })).toThrow(RangeError);
  });
});

describe("fit", () => {
  test.each<[ArrayParameter[], Partial<ArrayGeometry>]>([
    [["incidenceDeg", "focalLengthMm"], { incidenceDeg: 25.4, focalLengthMm: 73 }],
    [
      ["incidenceDeg", "focalLengthMm", "detectorTiltDeg"],
      { incidenceDeg: 24.6, focalLengthMm: 77, detectorTiltDeg: 0 },
    ],
    [["grooveDensityPerMm", "axisPx"], { grooveDensityPerMm: 603, axisPx: 1020 }],
  ])("returns the true %j from a wrong start", (free, wrong) => {
    const fit = fitted(fitArraySpectrometer(lines(geometry), { ...geometry, ...wrong }, { free }));
    for (const name of free) expect(Math.abs(fit.geometry[name] / geometry[name] - 1)).toBeLessThan(1e-6);
    expect(fit.degreesOfFreedom).toBe(pixels.length - free.length);
    expect(fit.chiSquare).toBeLessThan(1e-9);
  });
  test("twice the uncertainty gives twice the parameters' own, and the axis' at every pixel", () => {
    const one = fitted(
      fitArraySpectrometer(lines(geometry, 0.01), geometry, { free: ["incidenceDeg", "focalLengthMm"] }),
    );
    const two = fitted(
      fitArraySpectrometer(lines(geometry, 0.02), geometry, { free: ["incidenceDeg", "focalLengthMm"] }),
    );
    expect(two.covariance[0]! / one.covariance[0]!).toBeCloseTo(4, 6);
    const at = (fit: ArrayFit): number => fittedWavelength(fit, new ArrayModel(fit.geometry), 300).uncNm;
    expect(at(two) / at(one)).toBeCloseTo(2, 6);
    // Two parameters from eight lines: the mean variance of the fitted values is 2/8 of a line's (trace of the hat matrix).
    const mean =
      pixels.reduce((sum, px) => sum + fittedWavelength(one, new ArrayModel(one.geometry), px).uncNm ** 2, 0) / 8;
    expect(mean).toBeCloseTo((0.01 * 0.01 * 2) / 8, 9);
  });
  test("what is known beforehand counts as one more observation", () => {
    const few = lines(geometry).slice(0, 2);
    const options = { free: ["incidenceDeg", "focalLengthMm", "detectorTiltDeg"] as const };
    expect(fitArraySpectrometer(few, geometry, options)).toMatchObject({ outcome: "refused", reason: "too-few-lines" });
    const fit = fitted(fitArraySpectrometer(few, geometry, { ...options, priorUnc: { detectorTiltDeg: 1 } }));
    expect(Math.sqrt(fit.covariance[8]!)).toBeCloseTo(1, 6);
  });
  test("groove density and focal length are never free together; sets that cannot be told apart are refused, with their names", () => {
    const both = fitArraySpectrometer(lines(geometry), geometry, { free: ["grooveDensityPerMm", "focalLengthMm"] });
    expect(both).toMatchObject({ outcome: "refused", reason: "groove-density-and-focal-length" });
    const all = fitArraySpectrometer(lines(geometry), geometry, {
      free: ["incidenceDeg", "includedAngleDeg", "focalLengthMm", "detectorTiltDeg", "axisPx"],
    });
    expect(all).toMatchObject({ outcome: "refused", reason: "undetermined" });
    expect(fitArraySpectrometer(lines(geometry), geometry, { free: [] })).toMatchObject({ reason: "nothing-free" });
    expect(() => fitArraySpectrometer(lines(geometry), geometry, { free: ["axisPx", "axisPx"] })).toThrow(RangeError);
  });
});
