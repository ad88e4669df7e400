import { describe, expect, test } from "vitest";
import {
  fitSineDrive,
  rangeFromOptics,
  SINE_DRIVE_PARAMETERS,
  sineDriveReading,
  sineDriveWavelengthNm,
  type Approach,
  type SineDrive,
  type SineDriveFit,
} from "./index.ts";

const drive: SineDrive = {
  order: 1,
  grooveDensityPerMm: 1200,
  includedAngleDeg: 20,
  stepsPerSine: 164130,
  offsetSteps: 40,
  backlashSteps: 3,
  zeroAngleDeg: 0.2,
};
const wavelength = (d: SineDrive, reading: number, approach?: Approach): number =>
  sineDriveWavelengthNm(d, reading, approach)!;
const fitted = (result: ReturnType<typeof fitSineDrive>): SineDriveFit => {
  if (result.outcome === "refused") throw new Error(result.detail);
  return result;
};

describe("sine drive", () => {
  test("without zero angle it is a straight line: 2 x 833.3333 nm x cos 10° / 164 130 = 0.0100003 nm a step", () => {
    // cos 10° = 0.984807753; 1666.666667 x 0.984807753 / 164130 = 0.010000282
    const plain = { ...drive, zeroAngleDeg: 0, offsetSteps: 0 };
    expect(wavelength(plain, 50000)).toBeCloseTo(50000 * 0.010000282, 4);
    expect(wavelength(plain, 20000) * 2.5).toBeCloseTo(wavelength(plain, 50000), 9);
    // and it is the grating equation at a fixed included angle
    const phi = Math.asin(50000 / 164130);
    const [alpha, beta] = [phi + (10 * Math.PI) / 180, phi - (10 * Math.PI) / 180];
    expect(wavelength(plain, 50000)).toBeCloseTo((1e6 / 1200) * (Math.sin(alpha) + Math.sin(beta)), 8);
  });
  test("a reading reached from above stands for what is read `backlash` steps higher from below", () => {
    expect(wavelength(drive, 50000, "from-above")).toBe(wavelength(drive, 50003));
  });
  test("partial derivatives are those of the model", () => {
    const partials = new Float64Array(4);
    for (const approach of ["from-below", "from-above"] as const) {
      for (const reading of [20000, 60000, 110000]) {
        sineDriveWavelengthNm(drive, reading, approach, partials);
        SINE_DRIVE_PARAMETERS.forEach((name, j) => {
          const h = name === "zeroAngleDeg" ? 1e-3 : 0.5;
          const by = (delta: number): number =>
            wavelength({ ...drive, [name]: drive[name] + delta }, reading, approach);
          expect(Math.abs(partials[j]! - (by(h) - by(-h)) / (2 * h))).toBeLessThan(
            1e-7 * Math.max(1, Math.abs(partials[j]!)),
          );
        });
      }
    }
  });
  test("a wavelength finds its reading again, from both sides; what the drive cannot reach has none", () => {
    for (const approach of ["from-below", "from-above"] as const)
      for (const reading of [-5000, 0, 30000, 120000])
        expect(sineDriveReading(drive, wavelength(drive, reading, approach), approach)).toBeCloseTo(reading, 6);
    expect(sineDriveReading(drive, 1700)).toBeNull();
    expect(sineDriveWavelengthNm(drive, 170000)).toBeNull();
  });
  test("fit returns scale, offset, backlash and zero angle from lines read both ways", () => {
    const lines = [25000, 40000, 55000, 70000, 85000].flatMap((reading) =>
      (["from-below", "from-above"] as const).map((approach) => ({
        reading,
        approach,
        wavelengthNm: wavelength(drive, reading, approach),
        uncNm: 0.01,
      })),
    );
    const start = { ...drive, stepsPerSine: 163000, offsetSteps: 0, backlashSteps: 0, zeroAngleDeg: 0 };
    const fit = fitted(fitSineDrive(lines, start, SINE_DRIVE_PARAMETERS));
    for (const name of SINE_DRIVE_PARAMETERS) expect(Math.abs(fit.drive[name] / drive[name] - 1)).toBeLessThan(1e-5);
    // Backlash: difference of two means of 5 lines of 0.01 nm = 1 step each: sqrt(2 / 5) = 0.632 steps, whatever else is fitted alike on both sides.
    const backlash = SINE_DRIVE_PARAMETERS.indexOf("backlashSteps");
    expect(Math.sqrt(fit.covariance[backlash * 4 + backlash]!)).toBeCloseTo(0.632, 2);
  });
  test("refusals say what is missing", () => {
    const oneWay = [30000, 50000, 70000].map((reading) => ({
      reading,
      wavelengthNm: wavelength(drive, reading),
      uncNm: 0.01,
    }));
    expect(fitSineDrive(oneWay, drive, ["backlashSteps"])).toMatchObject({
      outcome: "refused",
      reason: "one-approach",
    });
    expect(fitSineDrive(oneWay.slice(0, 1), drive, ["offsetSteps", "stepsPerSine"])).toMatchObject({
      reason: "too-few-lines",
    });
    expect(fitSineDrive(oneWay, drive, [])).toMatchObject({ reason: "nothing-free" });
    expect(() => sineDriveWavelengthNm({ ...drive, stepsPerSine: 0 }, 1)).toThrow(RangeError);
  });
});

describe("range from optics", () => {
  const optics = {
    grooveDensityPerMm: 600,
    focalLengthMm: 75,
    includedAngleDeg: 30,
    pixelPitchUm: 14,
    pixelCount: 2048,
  };
  test("600 per mm, 75 mm, 28.7 mm of detector around 550 nm: the ends by the model; uncertainties by differences of it", () => {
    const stated = {
      ...optics,
      grooveDensityUncPerMm: 0.6,
      focalLengthUncMm: 0.75,
      includedAngleUncDeg: 0.5,
      detectorTiltUncDeg: 2,
      axisUncPx: 20,
      centreNm: 550,
      centreUncNm: 5,
    };
    const range = rangeFromOptics(stated);
    if (range.outcome === "refused") throw new Error(range.detail);
    expect(range.assumed).toEqual([]);
    // d lambda = d cos(beta0) theta to first order: 28.66 mm / 75 mm x 1666.7 nm x cos(5.26°) = 634 nm, less the tangent's bend
    expect(range.lastNm - range.firstNm).toBeGreaterThan(600);
    expect(range.lastNm - range.firstNm).toBeLessThan(634);
    const end = (change: Partial<typeof stated> & { axisPx?: number; detectorTiltDeg?: number }): [number, number] => {
      const moved = rangeFromOptics({ ...stated, ...change });
      if (moved.outcome === "refused") throw new Error(moved.detail);
      return [moved.firstNm, moved.lastNm];
    };
    const changes = [
      { grooveDensityPerMm: 600.6 },
      { focalLengthMm: 75.75 },
      { includedAngleDeg: 30.5 },
      { detectorTiltDeg: 2 },
      { axisPx: 1023.5 + 20 },
      { centreNm: 555 },
    ];
    const squares = [0, 0];
    for (const change of changes)
      end(change).forEach((nm, i) => (squares[i]! += (nm - [range.firstNm, range.lastNm][i]!) ** 2));
    expect(Math.abs(range.firstUncNm / Math.sqrt(squares[0]!) - 1)).toBeLessThan(0.06);
    expect(Math.abs(range.lastUncNm / Math.sqrt(squares[1]!) - 1)).toBeLessThan(0.06);
  });
  test("what was not stated is assumed and listed", () => {
    expect(rangeFromOptics({ ...optics, centreNm: 550, focalLengthUncMm: 0.1 })).toMatchObject({
      outcome: "known",
      assumed: [
        "groove density",
        "included angle",
        "detector tilt",
        "pixel of the optical axis",
        "wavelength on the optical axis",
      ],
    });
    expect(rangeFromOptics({ ...optics, incidenceDeg: 24.6 })).toMatchObject({ outcome: "known" });
  });
  test("optics alone do not tell where the range lies; impossible ones are refused", () => {
    expect(rangeFromOptics(optics)).toMatchObject({ outcome: "refused", reason: "nowhere-pointed" });
    expect(rangeFromOptics({ ...optics, centreNm: 200 })).toMatchObject({ outcome: "refused", reason: "no-light" });
    expect(rangeFromOptics({ ...optics, centreNm: 4000 })).toMatchObject({ outcome: "refused", reason: "evanescent" });
    expect(() => rangeFromOptics({ ...optics, centreNm: 550, incidenceDeg: 20 })).toThrow(RangeError);
  });
});
