import { describe, expect, test } from "vitest";
import { axisNm, axisSlope, axisUncNm } from "./axis.ts";
import {
  type DispersionOptions,
  type DispersionPoint,
  type FittedDispersion,
  fitDispersion,
} from "./fit-dispersion.ts";

const options: DispersionOptions = {
  degree: null,
  firstPosition: 0,
  lastPosition: 2047,
  meaning: "standard-air",
  fwhm: 4,
};

/** Seeded normal deviates for these tests. */
function normals(seed: number): () => number {
  let state = seed >>> 0;
  const uniform = (): number => {
    state = (state + 0x6d2b79f5) >>> 0;
    let z = Math.imul(state ^ (state >>> 15), state | 1);
    z ^= z + Math.imul(z ^ (z >>> 7), z | 61);
    return ((z ^ (z >>> 14)) >>> 0) / 4294967296;
  };
  return () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
}

const truth = (p: number): number => 340 + 0.375 * p - 1.9e-5 * p * p - 2.2e-9 * p * p * p;
const slope = (p: number): number => 0.375 - 3.8e-5 * p - 6.6e-9 * p * p;

function pointsOf(positions: number[], scatterPx: number, statedPx: number, seed: number): DispersionPoint[] {
  const normal = normals(seed);
  return positions.map((position) => ({
    position: position + scatterPx * normal(),
    positionUnc: statedPx,
    wavelengthNm: truth(position),
    wavelengthUncNm: 0,
  }));
}
const spread = (count: number): number[] =>
  Array.from({ length: count }, (_, k) => 60 + (k * 1900) / (count - 1) + 9 * ((k * 7) % 5));
function fitted(points: DispersionPoint[], more: Partial<DispersionOptions> = {}): FittedDispersion {
  const fit = fitDispersion(points, { ...options, ...more });
  if (fit.outcome !== "fitted") throw new Error(fit.reason);
  return fit;
}

describe("exact lines", () => {
  test("a cubic is found again to 1e-9 nm, by the degree chosen and in ordinary powers", () => {
    const { dispersion } = fitted(pointsOf(spread(14), 0, 0.02, 1));
    expect(dispersion.degree).toBe(3);
    expect(dispersion.degreeChosenBy).toBe("leave-one-out");
    for (let px = 0; px <= 2047; px += 100)
      expect(Math.abs(axisNm(dispersion.axis, px) - truth(px))).toBeLessThan(1e-9);
    expect(dispersion.samples).toHaveLength(11);
    expect(dispersion.samples.map((sample) => sample.px)[10]).toBe(2047);
  });

  test("the printed coefficients keep 0.001 px everywhere and are short", () => {
    const { dispersion } = fitted(pointsOf(spread(14), 0.05, 0.05, 2));
    const printed = { ...dispersion.axis, coefficients: dispersion.coefficients };
    for (let px = 0; px <= 2047; px += 13) {
      const error = Math.abs(axisNm(printed, px) - axisNm(dispersion.axis, px)) / axisSlope(dispersion.axis, px);
      expect(error).toBeLessThan(0.001);
    }
    for (const value of dispersion.coefficients)
      expect(String(value).replace(/[^0-9]|e.*$/g, "").length).toBeLessThan(13);
  });
});

describe("honest uncertainty", () => {
  test("axis at a given degree: 95.45 % intervals hold the truth 94.5-96.4 % of 12,000 times, inside and beyond the lines", () => {
    // Stated uncertainties are right here, so the normal factor 2 applies when chi-squared is below 1 and t above; the check
    // takes the covariance as it comes, with many degrees of freedom.
    const positions = spread(40);
    let inside = 0;
    let beyond = 0;
    const runs = 12_000;
    for (let run = 0; run < runs; run++) {
      const { dispersion } = fitted(pointsOf(positions, 0.05, 0.05, 1000 + run), { degree: 3 });
      const px = 60 + ((run * 37) % 1900);
      if (Math.abs(axisNm(dispersion.axis, px) - truth(px)) <= 2 * (axisUncNm(dispersion.axis, px) as number))
        inside += 1;
      if (Math.abs(axisNm(dispersion.axis, 2040) - truth(2040)) <= 2 * (axisUncNm(dispersion.axis, 2040) as number))
        beyond += 1;
    }
    expect(inside / runs).toBeGreaterThan(0.945);
    expect(inside / runs).toBeLessThan(0.964);
    expect(beyond / runs).toBeGreaterThan(0.945);
    expect(beyond / runs).toBeLessThan(0.964);
  });

  test("after a chosen degree the intervals still hold 93-98 %", () => {
    let held = 0;
    const runs = 3000;
    for (let run = 0; run < runs; run++) {
      const { dispersion } = fitted(pointsOf(spread(16), 0.05, 0.05, 50_000 + run));
      const px = 60 + ((run * 41) % 1900);
      if (Math.abs(axisNm(dispersion.axis, px) - truth(px)) <= 2 * (axisUncNm(dispersion.axis, px) as number))
        held += 1;
    }
    expect(held / runs).toBeGreaterThan(0.93);
    expect(held / runs).toBeLessThan(0.98);
  });

  test("scatter three times the stated uncertainty is seen and carried; it grows beyond the outermost lines", () => {
    const fit = fitted(pointsOf(spread(20), 0.15, 0.05, 7), { degree: 3 });
    expect(fit.excessScatterNm).toBeGreaterThan(0.08 * slope(1000));
    const { axis } = fit.dispersion;
    const u = (px: number): number => axisUncNm(axis, px) as number;
    expect(u(1000)).toBeGreaterThan(0.03 * slope(1000));
    expect(u(2047)).toBeGreaterThan(u(axis.lastPx));
    expect(u(2400)).toBeGreaterThan(2 * u(2047));
  });
});

describe("rejection", () => {
  test("one line 1 px off among 15 is left out with its reason; none of 15 good ones is", () => {
    const points = pointsOf(spread(15), 0.05, 0.05, 3);
    expect(fitted(points).dispersion.rejected).toEqual([]);
    (points[6] as DispersionPoint).position += 1;
    const { dispersion, leverages } = fitted(points);
    expect(dispersion.rejected.map((one) => one.line)).toEqual([6]);
    expect(dispersion.rejected[0]?.reason).toMatch(/nm from the axis/);
    expect(leverages[6]).toBe(0);
  });
});

describe("degree", () => {
  test("two lines more than coefficients: 5 lines give at most degree 2, 4 lines degree 1, 3 lines none", () => {
    expect(fitted(pointsOf(spread(5), 0, 0.02, 1)).dispersion.degree).toBe(2);
    expect(fitted(pointsOf(spread(4), 0, 0.02, 1)).dispersion.degree).toBe(1);
    const refused = fitDispersion(pointsOf(spread(3), 0, 0.02, 1), options);
    expect(refused).toMatchObject({
      outcome: "refused",
      reason: expect.stringContaining("3 usable lines are too few"),
    });
  });

  test("never above the cap of 5, and a given degree is kept", () => {
    const wild = spread(30).map((position, k) => ({
      position,
      positionUnc: 0.01,
      wavelengthNm: truth(position) + 0.3 * Math.cos(k),
      wavelengthUncNm: 0,
    }));
    expect(fitted(wild).dispersion.degree).toBeLessThanOrEqual(5);
    const given = fitted(pointsOf(spread(12), 0.02, 0.02, 4), { degree: 2 });
    expect(given.dispersion).toMatchObject({ degree: 2, degreeChosenBy: "given" });
  });
});

describe("refusals", () => {
  test("an axis that turns back within the capture", () => {
    const points = [100, 300, 500, 700, 900].map((position) => ({
      position,
      positionUnc: 0.05,
      wavelengthNm: 400 + 0.5 * position - 0.0004 * position * position,
      wavelengthUncNm: 0,
    }));
    expect(fitDispersion(points, options)).toMatchObject({
      outcome: "refused",
      reason: expect.stringContaining("turn back"),
    });
  });

  test.each([
    ["a position that is not a number", { position: Number.NaN }],
    ["no uncertainty", { positionUnc: 0 }],
  ])("%s", (_name, change) => {
    const points = pointsOf(spread(8), 0, 0.02, 1);
    points[2] = { ...(points[2] as DispersionPoint), ...change };
    expect(fitDispersion(points, options)).toMatchObject({ outcome: "refused" });
  });

  test("a degree that is no whole number", () => {
    expect(fitDispersion(pointsOf(spread(8), 0, 0.02, 1), { ...options, degree: 2.5 })).toMatchObject({
      outcome: "refused",
    });
  });
});

describe("a correction of an earlier axis", () => {
  const earlier = {
    coefficients: [342, 0.376, -1.9e-5, -2.2e-9],
    firstPx: 0,
    lastPx: 2047,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
    meaning: "standard-air" as const,
  };

  test("four lines keep the curvature that they could not tell", () => {
    const points = pointsOf([300, 800, 1300, 1800], 0.01, 0.01, 9);
    const { dispersion } = fitted(points, { earlier });
    expect(dispersion.degree).toBe(3);
    for (let px = 0; px <= 2047; px += 100) {
      expect(Math.abs(axisNm(dispersion.axis, px) - truth(px)) / slope(px)).toBeLessThan(0.06);
    }
    const anew = fitted(points);
    expect(Math.abs(axisNm(anew.dispersion.axis, 1050) - truth(1050)) / slope(1050)).toBeGreaterThan(1);
  });

  test("many lines overrule a curvature that is wrong, and intervals hold either way", () => {
    let held = 0;
    const runs = 1500;
    for (let run = 0; run < runs; run++) {
      const bent = run % 2 === 0 ? earlier : { ...earlier, coefficients: [342, 0.379, -2.05e-5, -2.2e-9] };
      const { dispersion } = fitted(pointsOf(spread(16), 0.05, 0.05, 70_000 + run), { earlier: bent });
      const px = 60 + ((run * 41) % 1900);
      if (Math.abs(axisNm(dispersion.axis, px) - truth(px)) <= 2 * (axisUncNm(dispersion.axis, px) as number))
        held += 1;
    }
    expect(held / runs).toBeGreaterThan(0.93);
    expect(held / runs).toBeLessThan(0.98);
  });

  test("its covariance above the correction's degree stays in the new one", () => {
    const covariance = new Array<number>(16).fill(0);
    covariance[10] = 0.04; // T_2: 0.2 nm
    const points = pointsOf([300, 800, 1300, 1800], 0.01, 0.01, 9);
    const { dispersion } = fitted(points, { earlier: { ...earlier, chebyshevCovariance: covariance } });
    expect(axisUncNm(dispersion.axis, 1050) as number).toBeGreaterThan(0.05);
  });
});

describe("several bad lines", () => {
  test("five of twenty off by a pixel in either direction are found, and the others keep their sharpness", () => {
    const points = pointsOf(spread(20), 0.01, 0.01, 11);
    for (const [k, off] of [
      [2, 1],
      [3, 0.8],
      [9, -1.1],
      [14, 0.9],
      [17, -0.7],
    ] as const) {
      (points[k] as DispersionPoint).position += off;
    }
    const { dispersion } = fitted(points);
    expect(dispersion.rejected.map((one) => one.line)).toEqual([2, 3, 9, 14, 17]);
    expect(dispersion.rmsPx).toBeLessThan(0.02);
  });
});
