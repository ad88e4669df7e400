import { describe, expect, test } from "vitest";
import type { PixelAxis } from "../analysis/types.ts";
import { axisNm, axisPx, axisSlope, axisUncNm, isMonotonic } from "./axis.ts";

const axisOf = (coefficients: number[], more: Partial<PixelAxis> = {}): PixelAxis => ({
  coefficients,
  firstPx: 0,
  lastPx: 2047,
  chebyshevCovariance: null,
  degreesOfFreedom: null,
  meaning: "standard-air",
  ...more,
});

describe("pixel to wavelength", () => {
  test("200 + 0.4·1000 - 0.00002·1000² = 580 nm, slope 0.4 - 0.04 = 0.36 nm/px", () => {
    const axis = axisOf([200, 0.4, -0.00002]);
    expect(axisNm(axis, 1000)).toBeCloseTo(580, 12);
    expect(axisSlope(axis, 1000)).toBeCloseTo(0.36, 14);
  });
});

describe("wavelength to pixel", () => {
  test.each([
    ["rising", [340, 0.38, -0.000022, 1.1e-9]],
    ["falling", [900, -0.31, -0.00001, 2e-9]],
    ["straight", [545, 0.055]],
  ])("%s axis: there and back to 1e-9 px everywhere", (_name, coefficients) => {
    const axis = axisOf(coefficients as number[]);
    for (let px = -300; px <= 2400; px += 37.3) {
      const back = axisPx(axis, axisNm(axis, px));
      expect(back).not.toBeNull();
      expect(Math.abs((back as number) - px)).toBeLessThan(1e-9);
    }
  });

  test("a wavelength beyond the turning point has no pixel", () => {
    // lambda = 500 + p - p²/4000 turns at p = 2000, where it is 1500 nm
    const axis = axisOf([500, 1, -1 / 4000], { lastPx: 1500 });
    expect(axisPx(axis, 1500.5)).toBeNull();
    expect(axisPx(axis, 1499)).toBeCloseTo(2000 - Math.sqrt(4000), 8);
  });

  test("a flat axis has no inverse", () => {
    expect(axisPx(axisOf([500]), 500)).toBeNull();
  });
});

describe("monotonic", () => {
  test("turns are found wherever they lie, even narrow ones", () => {
    expect(isMonotonic(axisOf([500, 1, -1 / 4000]), 0, 1999)).toBe(true);
    expect(isMonotonic(axisOf([500, 1, -1 / 4000]), 0, 2001)).toBe(false);
    // slope (p - 1000)² - 0.01: two turning points only 0.2 px apart
    expect(isMonotonic(axisOf([0, 1e6 - 0.01, -1000, 1 / 3]), 0, 2047)).toBe(false);
    expect(isMonotonic(axisOf([0, 1e6 + 0.01, -1000, 1 / 3]), 0, 2047)).toBe(true);
    expect(isMonotonic(axisOf([500, Number.NaN]), 0, 10)).toBe(false);
    expect(isMonotonic(axisOf([500]), 0, 10)).toBe(false);
  });
});

describe("uncertainty", () => {
  test("straight axis with variances a and b: u² = a + b t², growing beyond the outermost lines", () => {
    const axis = axisOf([500, 0.1], { firstPx: 100, lastPx: 300, chebyshevCovariance: [4e-4, 0, 0, 9e-4] });
    expect(axisUncNm(axis, 200)).toBeCloseTo(0.02, 14);
    expect(axisUncNm(axis, 300)).toBeCloseTo(Math.sqrt(4e-4 + 9e-4), 14);
    expect(axisUncNm(axis, 500)).toBeCloseTo(Math.sqrt(4e-4 + 9 * 9e-4), 14);
  });

  test("unknown is not zero", () => {
    expect(axisUncNm(axisOf([500, 0.1]), 5)).toBeNull();
  });
});
