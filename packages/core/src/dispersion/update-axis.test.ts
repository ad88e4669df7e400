import { describe, expect, test } from "vitest";
import type { PixelAxis } from "../analysis/types.ts";
import { createRandom } from "../testing/index.ts";
import { axisNm, axisSlope, axisUncNm } from "./axis.ts";
import { type DispersionPoint, fitDispersion } from "./fit-dispersion.ts";
import { updateAxis } from "./update-axis.ts";

const coefficients = [340, 0.375, -1.9e-5, -2.2e-9];
const truth = (px: number): number => coefficients.reduceRight((sum, c) => sum * px + c, 0);
const ends = { firstPosition: 0, lastPosition: 2047 };

/** Lines at given pixels of the first day, seen at pixels of today: q = p + offset + scale (p - 1000). */
function pointsAt(pixels: number[], unc: number, seed: number, offset = 0, scale = 0): DispersionPoint[] {
  const random = createRandom(seed);
  return pixels.map((q) => ({
    position: (q - offset + scale * 1000) / (1 + scale) + unc * random.normal(),
    positionUnc: unc,
    wavelengthNm: truth(q),
    wavelengthUncNm: 0,
  }));
}
const spread = (count: number): number[] => Array.from({ length: count }, (_, k) => 60 + (k * 1900) / (count - 1));

function earlierAxis(seed: number, unc = 0.03, count = 14): PixelAxis {
  const fit = fitDispersion(pointsAt(spread(count), unc, seed), {
    ...ends,
    degree: 3,
    meaning: "standard-air",
    fwhm: 4,
  });
  if (fit.outcome !== "fitted") throw new Error(fit.reason);
  return fit.dispersion.axis;
}

function updated(earlier: PixelAxis, points: DispersionPoint[], kind: "offset" | "offset-and-scale") {
  const result = updateAxis(earlier, points, { ...ends, kind });
  if (result.outcome !== "fitted") throw new Error(result.reason);
  return result;
}

describe("exact lines", () => {
  const exact: PixelAxis = {
    coefficients,
    firstPx: 60,
    lastPx: 1960,
    chebyshevCovariance: new Array<number>(16).fill(0),
    degreesOfFreedom: 10,
    meaning: "standard-air",
  };

  test("one line gives an offset of 12.5 px exactly, curvature included", () => {
    const { dispersion, remark } = updated(exact, pointsAt([700], 1e-7, 1, 12.5), "offset");
    expect(remark).toBeNull();
    expect(dispersion.update).toMatchObject({ kind: "offset", scale: 0, isCurvatureUncKnown: true });
    expect(Math.abs(dispersion.update!.offsetPx - 12.5)).toBeLessThan(1e-6);
    for (let p = 0; p <= 2000; p += 100)
      expect(Math.abs(axisNm(dispersion.axis, p) - truth(p + 12.5))).toBeLessThan(1e-6);
  });

  test("two lines give offset and scale; two at nearly one place only the offset, and say so", () => {
    const { dispersion } = updated(exact, pointsAt([300, 1700], 1e-7, 2, -3, 4e-4), "offset-and-scale");
    const { update } = dispersion;
    const now = (p: number): number => p + update!.offsetPx + update!.scale * (p - update!.centrePx);
    for (const p of [0, 500, 1500, 2000]) expect(Math.abs(now(p) - (p - 3 + 4e-4 * (p - 1000)))).toBeLessThan(1e-5);
    const close = updated(exact, pointsAt([700, 705], 0.01, 3, 2), "offset-and-scale");
    expect(close.dispersion.update!.kind).toBe("offset");
    expect(close.remark).toMatch(/only the offset/);
  });

  test("an axis without covariance says that its curvature is taken as exact", () => {
    const result = updated({ ...exact, chebyshevCovariance: null }, pointsAt([300, 1700], 0.01, 4), "offset");
    expect(result.remark).toMatch(/without its covariance/);
    expect(result.dispersion.update!.isCurvatureUncKnown).toBe(false);
  });

  test("a line named wrongly among eight is left out", () => {
    const points = pointsAt(spread(8), 0.02, 5, 4, 1e-4);
    points[3]!.position += 2;
    const { dispersion } = updated(exact, points, "offset-and-scale");
    expect(dispersion.rejected.map((one) => one.line)).toEqual([3]);
  });
});

describe("refusals", () => {
  test("no lines, and lines that no shift brings to the axis", () => {
    const earlier = earlierAxis(1);
    expect(updateAxis(earlier, [], { ...ends, kind: "offset" })).toMatchObject({ outcome: "refused" });
    const elsewhere = pointsAt([500, 900], 0.02, 1).map((point) => ({
      ...point,
      wavelengthNm: point.wavelengthNm + 9000,
    }));
    expect(updateAxis(earlier, elsewhere, { ...ends, kind: "offset" })).toMatchObject({ outcome: "refused" });
  });
});

describe("stated uncertainty of an updated axis", () => {
  test.each([
    ["offset", 1],
    ["offset", 3],
    ["offset-and-scale", 2],
    ["offset-and-scale", 5],
  ] as const)("%s from %d lines: twice the standard uncertainty holds the truth in 95.45 of 100", (kind, lines) => {
    const runs = 1200;
    let held = 0;
    for (let seed = 1; seed <= runs; seed++) {
      const random = createRandom(90_000 + seed);
      const offset = random.between(-20, 20);
      const scale = kind === "offset" ? 0 : random.between(-5e-4, 5e-4);
      const pixels = lines === 1 ? [1300] : spread(lines).map((q) => 100 + 0.9 * q);
      const earlier = earlierAxis(seed);
      const points = pointsAt(pixels, 0.03, 200_000 + seed, offset, scale);
      const { axis } = updated(earlier, points, kind).dispersion;
      const p = random.between(100, 1900);
      const now = truth(p + offset + scale * (p - 1000));
      if (Math.abs(axisNm(axis, p) - now) <= 2 * axisUncNm(axis, p)!) held += 1;
    }
    // Three standard deviations of the count about 95.45 %.
    const share = held / runs;
    expect(share).toBeGreaterThan(0.9365);
    expect(share).toBeLessThan(0.9725);
  });

  test("grows beyond the lines of the earlier axis and is smallest near the lines of today", () => {
    const { axis } = updated(earlierAxis(7), pointsAt([1000, 1050, 1100], 0.02, 8), "offset").dispersion;
    const u = (px: number): number => axisUncNm(axis, px)! / Math.abs(axisSlope(axis, px));
    expect(u(1050)).toBeLessThan(0.03);
    expect(u(60)).toBeGreaterThan(u(1050));
    expect(u(-300)).toBeGreaterThan(2 * u(60));
  });
});
