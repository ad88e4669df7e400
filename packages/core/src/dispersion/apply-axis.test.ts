import { describe, expect, test } from "vitest";
import type { PixelAxis, Spectrum } from "../analysis/types.ts";
import { createRandom } from "../testing/index.ts";
import { applyAxis, naturalSteps } from "./apply-axis.ts";
import { axisNm } from "./axis.ts";

const axis: PixelAxis = {
  coefficients: [400, 0.2, 1e-5],
  firstPx: 0,
  lastPx: 499,
  chebyshevCovariance: null,
  degreesOfFreedom: null,
  meaning: "standard-air",
};
const falling: PixelAxis = { ...axis, coefficients: [600, -0.2, -1e-5] };

function spectrumOf(counts: Float64Array): Spectrum {
  return {
    axisKind: "pixel",
    axisUnit: "px",
    wasDescending: false,
    positions: Float64Array.from(counts, (_, i) => i),
    counts,
    fullScaleCounts: 65535,
    scansSummed: 1,
  };
}
const line = (at: number): Spectrum =>
  spectrumOf(Float64Array.from({ length: 500 }, (_, i) => 1000 * Math.exp(-0.5 * ((i - at) / 2.5) ** 2)));

describe("applyAxis", () => {
  test.each([
    ["rising", axis],
    ["falling", falling],
  ])("a %s axis: the samples keep their counts, ascending in nm, and the spectrum is marked", (_, used) => {
    const applied = applyAxis(line(200), used);
    if (applied.outcome !== "applied") throw new Error(applied.reason);
    const { positions, counts, correctedBy, axisKind } = applied.spectrum;
    expect(axisKind).toBe("wavelength");
    for (let k = 1; k < 500; k++) expect(positions[k]!).toBeGreaterThan(positions[k - 1]!);
    const top = counts.indexOf(counts.reduce((a, b) => Math.max(a, b)));
    expect(Math.abs(positions[top]! - axisNm(used, 200))).toBeLessThan(1e-9);
    expect(correctedBy).toMatchObject({ isResampled: false, coefficients: used.coefficients });
    expect(applyAxis(applied.spectrum, used)).toMatchObject({
      outcome: "refused",
      reason: expect.stringContaining("corrected already"),
    });
  });

  test.each([
    ["rising", axis],
    ["falling", falling],
  ])("resampled by a %s axis: flux and centroid are kept", (_, used) => {
    const steps = naturalSteps(line(200), used)!;
    const applied = applyAxis(line(200), used, steps);
    if (applied.outcome !== "applied") throw new Error(applied.reason);
    const { positions, counts } = applied.spectrum;
    const sum = (values: Float64Array): number => values.reduce((a, b) => a + b, 0);
    expect(Math.abs(sum(counts) / sum(line(200).counts) - 1)).toBeLessThan(1e-12);
    let moment = 0;
    counts.forEach((value, k) => (moment += value * positions[k]!));
    expect(Math.abs(moment / sum(counts) - axisNm(used, 200))).toBeLessThan(0.005 * steps.stepNm);
    expect(applied.spectrum.correctedBy!.isResampled).toBe(true);
    expect(applied.remark).toMatch(/correlated by/);
  });

  test("the noise it states is the noise that resampled white noise has", () => {
    const random = createRandom(5);
    const noise = spectrumOf(Float64Array.from({ length: 60_000 }, () => random.normal()));
    const long: PixelAxis = { ...axis, coefficients: [200, 0.01, 1e-8], lastPx: 59_999 };
    const steps = { fromNm: 210, toNm: 800, stepNm: 0.0137 };
    const applied = applyAxis(noise, long, steps);
    if (applied.outcome !== "applied") throw new Error(applied.reason);
    const { counts } = applied.spectrum;
    let square = 0;
    let product = 0;
    for (let k = 1; k < counts.length; k++) {
      square += counts[k]! * counts[k]!;
      product += counts[k]! * counts[k - 1]!;
    }
    expect(Math.abs(Math.sqrt(square / counts.length) / applied.noise!.relativeDeviation - 1)).toBeLessThan(0.02);
    expect(Math.abs(product / square - applied.noise!.neighbourCorrelation)).toBeLessThan(0.02);
  });

  test("refuses steps beyond the spectrum, an axis that turns, wavenumbers", () => {
    const { reason } = applyAxis(line(200), axis, { fromNm: 300, toNm: 450, stepNm: 0.2 }) as { reason: string };
    expect(reason).toMatch(/reaches from/);
    expect(applyAxis(line(200), { ...axis, coefficients: [400, 0.2, -4e-4] })).toMatchObject({ outcome: "refused" });
    expect(applyAxis({ ...line(200), axisKind: "wavenumber" }, axis)).toMatchObject({ outcome: "refused" });
  });
});
