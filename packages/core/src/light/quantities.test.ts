import { describe, expect, test } from "vitest";
import {
  frequencyTHz,
  photonEnergyEv,
  ramanShift,
  scatteredWavelengthNm,
  wavelengthFromEnergyNm,
  wavelengthFromFrequencyNm,
  wavelengthFromWavenumberNm,
  wavenumberPerCm,
} from "./quantities.ts";

describe("light in vacuum", () => {
  test("500 nm is 20 000 cm-1, 599.584916 THz (299792.458 / 500) and 2.479684 eV (1239.841984 / 500)", () => {
    expect(wavenumberPerCm(500)).toBe(20000);
    expect(frequencyTHz(500)).toBeCloseTo(599.584916, 9);
    // h c / e = 1239.841984… eV nm, CODATA 2018 (exact)
    expect(photonEnergyEv(500)).toBeCloseTo(1239.841984 / 500, 8);
  });
  test("each has its inverse", () => {
    expect(wavelengthFromWavenumberNm(wavenumberPerCm(546.2268))).toBeCloseTo(546.2268, 12);
    expect(wavelengthFromFrequencyNm(frequencyTHz(546.2268))).toBeCloseTo(546.2268, 12);
    expect(wavelengthFromEnergyNm(photonEnergyEv(546.2268))).toBeCloseTo(546.2268, 12);
    expect(
      scatteredWavelengthNm(532.1, ramanShift({ vacuumNm: 532.1, vacuumUncNm: 0 }, 562.7, 0).shiftPerCm),
    ).toBeCloseTo(562.7, 11);
  });
  test("Raman shift from 500 to 520 nm: 20000 - 19230.769 = 769.231 cm-1; a laser 0.1 nm wrong moves it by 4 cm-1", () => {
    const shift = ramanShift({ vacuumNm: 500, vacuumUncNm: 0.1 }, 520, 0);
    expect(shift.shiftPerCm).toBeCloseTo(769.230769, 6);
    // d(1e7/l)/dl = 1e7 / 500² = 40 cm-1 per nm
    expect(shift.laserSensitivity).toBeCloseTo(-40, 12);
    expect(shift.shiftUncPerCm).toBeCloseTo(4, 12);
  });
  test("uncertainties of laser and line add in quadrature: 40 x 0.1 and (1e7 / 520²) x 0.1", () => {
    expect(ramanShift({ vacuumNm: 500, vacuumUncNm: 0.1 }, 520, 0.1).shiftUncPerCm).toBeCloseTo(
      Math.sqrt(16 + (1e7 / 520 / 520 / 10) ** 2),
      10,
    );
  });
  test("refuses what is no wavelength", () => {
    expect(() => wavenumberPerCm(0)).toThrow(RangeError);
    expect(() => scatteredWavelengthNm(500, 20000)).toThrow(RangeError);
  });
});
