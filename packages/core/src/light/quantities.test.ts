import { describe, expect, test } from "vitest";
import {
  frequencyTHz,
  photonEnergyEv,
  ramanShift,
  scatteredWavelength,
  scatteredWavelengthNm,
  wavelengthFromEnergyNm,
  wavelengthFromFrequencyNm,
  wavelengthFromWavenumberNm,
  wavenumberPerCm,
  withUncertainty,
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
      scatteredWavelengthNm(532.1, ramanShift({ wavelengthVacuumNm: 532.1, uncNm: 0 }, 562.7, 0).shiftPerCm),
    ).toBeCloseTo(562.7, 11);
  });
  test("Raman shift from 500 to 520 nm: 20000 - 19230.769 = 769.231 cm-1; a laser 0.1 nm wrong moves it by 4 cm-1", () => {
    const shift = ramanShift({ wavelengthVacuumNm: 500, uncNm: 0.1 }, 520, 0);
    expect(shift.shiftPerCm).toBeCloseTo(769.230769, 6);
    // d(1e7/l)/dl = 1e7 / 500² = 40 cm-1 per nm
    expect(shift.laserSensitivity).toBeCloseTo(-40, 12);
    expect(shift.shiftUncPerCm).toBeCloseTo(4, 12);
  });
  test("uncertainties of laser and line add in quadrature: 40 x 0.1 and (1e7 / 520²) x 0.1", () => {
    expect(ramanShift({ wavelengthVacuumNm: 500, uncNm: 0.1 }, 520, 0.1).shiftUncPerCm).toBeCloseTo(
      Math.sqrt(16 + (1e7 / 520 / 520 / 10) ** 2),
      10,
    );
  });
  test("uncertainties: 500.00(5) nm is 20 000(2) cm-1 and 2.47968(25) eV: the same 1e-4 of each", () => {
    const wavelength = { value: 500, unc: 0.05 };
    expect(withUncertainty(wavenumberPerCm, wavelength)).toEqual({ value: 20000, unc: 2 });
    expect(withUncertainty(frequencyTHz, wavelength).unc).toBeCloseTo(0.0599584916, 9);
    expect(withUncertainty(photonEnergyEv, wavelength).unc).toBeCloseTo(2.479684e-4, 9);
    const back = withUncertainty(wavelengthFromWavenumberNm, { value: 20000, unc: 2 });
    expect(back.value).toBeCloseTo(500, 12);
    expect(back.unc).toBeCloseTo(0.05, 12);
  });
  test("where a shift is seen: 769.231 cm-1 from 500.0(1) nm is 520 nm; (520/500)² x 0.1 = 0.10816 nm, 520²/1e7 x 1 cm-1 = 0.02704 nm", () => {
    const seen = scatteredWavelength({ wavelengthVacuumNm: 500, uncNm: 0.1 }, 1e7 / 500 - 1e7 / 520, 1);
    expect(seen.value).toBeCloseTo(520, 9);
    expect(seen.unc).toBeCloseTo(Math.hypot(0.10816, 0.02704), 9);
    expect(() => scatteredWavelength({ wavelengthVacuumNm: 500, uncNm: -1 }, 100, 0)).toThrow(RangeError);
  });
  test("refuses what is no wavelength", () => {
    expect(() => wavenumberPerCm(0)).toThrow(RangeError);
    expect(() => scatteredWavelengthNm(500, 20000)).toThrow(RangeError);
  });
});
