import { describe, expect, test } from "vitest";
import { checkLaserByFringes, fringeWavelength, type FringeSetup } from "./index.ts";

const doubleSlit: FringeSetup = {
  kind: "double-slit",
  slitUm: { value: 250, unc: 2 },
  screenMm: { value: 2000, unc: 2 },
  // Ten spacings of 5.0624 mm = 632.8 nm x 2000 mm / 250 µm, five to each side: the tangent adds (25.3/2000)²/2 = 8e-5.
  acrossMm: { value: 50.628, unc: 0.3 },
  order: 5,
};

describe("fringes", () => {
  test("double slit 250 µm at 2 m, ten fringes across 50.628 mm: 632.8 nm", () => {
    const found = fringeWavelength(doubleSlit);
    expect(found.wavelengthNm).toBeCloseTo(632.8, 1);
    // 632.8 x (0.008, 0.001, 0.3 / 50.628 = 0.005926): 5.06, 0.63, 3.75 nm; together 6.33 nm
    const each = Object.fromEntries(found.contributions.map(({ of, uncNm }) => [of, uncNm]));
    expect(each["slit"]).toBeCloseTo(5.062, 2);
    expect(each["screen distance"]).toBeCloseTo(0.633, 2);
    expect(each["fringes"]).toBeCloseTo(3.75, 2);
    expect(found.wavelengthUncNm).toBeCloseTo(Math.hypot(5.062, 0.633, 3.75), 1);
    expect(found).toMatchObject({ largest: "slit", isFar: true });
  });
  test.each(["single-slit", "wire"] as const)(
    "%s 80 µm at 1.5 m, third minima 71.9 mm apart: 80 000 x 35.95 / (1500.43 x 3) = 638.9 nm",
    (kind) => {
      const found = fringeWavelength({
        kind,
        slitUm: { value: 80, unc: 1 },
        screenMm: { value: 1500, unc: 1 },
        acrossMm: { value: 71.9, unc: 0.5 },
        order: 3,
      });
      // r = sqrt(1500² + 35.95²) = 1500.4307
      expect(found.wavelengthNm).toBeCloseTo(638.9, 0);
      expect(found.wavelengthNm).toBeCloseTo((80000 * 35.95) / (1500.4307 * 3), 3);
    },
  );
  test("uncertainties are the slopes of the formula", () => {
    const setup: FringeSetup = { ...doubleSlit, acrossMm: { value: 900, unc: 1 } };
    const found = fringeWavelength(setup);
    const slope = (name: "slitUm" | "screenMm" | "acrossMm"): number => {
      const by = (delta: number): number =>
        fringeWavelength({ ...setup, [name]: { ...setup[name], value: setup[name].value + delta } }).wavelengthNm;
      return Math.abs((by(0.01) - by(-0.01)) / 0.02) * setup[name].unc;
    };
    (["slitUm", "screenMm", "acrossMm"] as const).forEach((name, i) =>
      expect(found.contributions[i]!.uncNm / slope(name)).toBeCloseTo(1, 5),
    );
  });
  test("a check says what it found, with the limit of it", () => {
    const good = checkLaserByFringes(doubleSlit, { value: 632.8, unc: 0 });
    expect(good.agrees).toBe(true);
    expect(good.sentence).toBe(
      "The fringes give 633 nm ± 13 nm (k = 2): no reason to doubt 632.8 nm. The slit limits the check.",
    );
    const green = checkLaserByFringes(doubleSlit, { value: 532, unc: 0.1 });
    expect(green.agrees).toBe(false);
    expect(green.normalisedDifference).toBeGreaterThan(15);
    expect(
      checkLaserByFringes(
        { ...doubleSlit, screenMm: { value: 500, unc: 1 }, acrossMm: { value: 12.657, unc: 0.1 } },
        { value: 632.8, unc: 0 },
      ).sentence,
    ).toMatch(/too near/);
  });
  test("what cannot be is a caller's mistake", () => {
    expect(() => fringeWavelength({ ...doubleSlit, order: 0.3 })).toThrow(RangeError);
    expect(() => fringeWavelength({ ...doubleSlit, kind: "wire", order: 1.5 })).toThrow(RangeError);
    expect(() => fringeWavelength({ ...doubleSlit, slitUm: { value: 0, unc: 0 } })).toThrow(RangeError);
  });
});
