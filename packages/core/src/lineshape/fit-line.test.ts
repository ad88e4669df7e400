import { describe, expect, test } from "vitest";
import { erf, exp } from "../numeric/elementary.ts";
import { fitLines, type LineStart, type LineWindow } from "./fit-line.ts";
import { gaussian, gaussianIntegral } from "./gaussian.ts";

/** Noise-free lines on 50 + 0.5 (x - 10) counts, integrated with erf itself where asked. */
function windowOf(lines: LineStart[], samples: number, pixelIntegrated: boolean, unc = 1): LineWindow {
  const positions = Float64Array.from({ length: samples }, (_, i) => i);
  const counts = positions.map((x) => {
    let y = 50 + 0.5 * (x - 10);
    for (const { centre, fwhm, peakHeightCounts } of lines) {
      const std = fwhm / 2.3548200450309493;
      const edge = (at: number) => erf((at - centre) / (std * Math.SQRT2));
      y += pixelIntegrated
        ? peakHeightCounts * std * Math.sqrt(Math.PI / 2) * (edge(x + 0.5) - edge(x - 0.5))
        : peakHeightCounts * exp(-0.5 * ((x - centre) / std) ** 2);
    }
    return y;
  });
  return { positions, counts, countsUnc: new Float64Array(samples).fill(unc), pixelIntegrated, noiseCorrelation: 0 };
}
const line = (centre: number, fwhm: number, peakHeightCounts: number): LineStart => ({
  centre,
  fwhm,
  peakHeightCounts,
});

describe("gaussian and its integral", () => {
  test("agree with exp and erf to 1e-14 everywhere", () => {
    for (let u = -10; u <= 10; u += 0.00713) {
      expect(Math.abs(gaussian(u) - exp(-0.5 * u * u))).toBeLessThan(1e-14);
      expect(Math.abs(gaussianIntegral(u) - Math.sqrt(Math.PI / 2) * erf(u / Math.SQRT2))).toBeLessThan(1e-14);
    }
  });
});

describe("fitLines without noise returns what was put in", () => {
  test.each([
    [2, true],
    [2, false],
    [4.3, true],
    [1.2, true],
    [9, false],
  ])("fwhm %d, pixel-integrated %s", (fwhm, pixel) => {
    const truth = line(10.237, fwhm, 1000);
    const fit = fitLines(windowOf([truth], 24, pixel), [line(10.8, fwhm * 1.3, 700)]);
    if (fit.outcome !== "fitted") throw new Error(fit.detail);
    expect(fit.lines[0]!.centre).toBeCloseTo(10.237, 8);
    expect(fit.lines[0]!.fwhm).toBeCloseTo(fwhm, 6);
    expect(fit.lines[0]!.peakHeightCounts).toBeCloseTo(1000, 4);
    expect(fit.baseline[1]).toBeCloseTo(0.5, 5);
    // area = height * std * sqrt(2 pi) = 1000 fwhm 1.0644670
    expect(fit.lines[0]!.areaCounts / (1000 * fwhm * 1.0644670194312262)).toBeCloseTo(1, 6);
  });
  test("three neighbours fitted together, one a tenth of the others", () => {
    const truth = [line(9.1, 3, 900), line(13.4, 3.1, 90), line(18.2, 2.9, 1200)];
    const fit = fitLines(windowOf(truth, 30, true), [line(9, 3.3, 800), line(13, 3.3, 120), line(18.6, 3.3, 1000)]);
    if (fit.outcome !== "fitted") throw new Error(fit.detail);
    truth.forEach((t, k) => expect(fit.lines[k]!.centre).toBeCloseTo(t.centre, 6));
  });
  test("a gap of saturated samples left out moves nothing", () => {
    const whole = windowOf([line(10.237, 4, 1000)], 24, true);
    const keep = [...whole.positions.keys()].filter((i) => i < 9 || i > 11);
    const take = (values: Float64Array) => Float64Array.from(keep, (i) => values[i]!);
    const fit = fitLines(
      { ...whole, positions: take(whole.positions), counts: take(whole.counts), countsUnc: take(whole.countsUnc) },
      [line(10, 5, 800)],
    );
    if (fit.outcome !== "fitted") throw new Error(fit.detail);
    expect(fit.lines[0]!.centre).toBeCloseTo(10.237, 7);
  });
});

describe("fitLines refuses", () => {
  test("too few samples", () => {
    expect(fitLines(windowOf([line(2, 2, 100)], 5, true), [line(2, 2, 100)])).toMatchObject({
      outcome: "refused",
      reason: "too-few-samples",
    });
  });
  test("a flat window", () => {
    const flat = windowOf([], 20, true);
    expect(fitLines(flat, [line(10, 3, 100)])).toMatchObject({ outcome: "refused" });
  });
  test("caller bugs by throwing", () => {
    const good = windowOf([line(10, 3, 100)], 20, true);
    expect(() => fitLines(good, [])).toThrow(RangeError);
    expect(() => fitLines({ ...good, countsUnc: new Float64Array(20) }, [line(10, 3, 100)])).toThrow(/above 0/);
    expect(() =>
      fitLines({ ...good, counts: good.counts.map((v, i) => (i === 3 ? NaN : v)) }, [line(10, 3, 100)]),
    ).toThrow(/not finite/);
  });
});

test("centre uncertainty of a well-sampled line follows the closed form sigma^1.5 ... of white noise", () => {
  // For a Gaussian in white noise u per sample at unit spacing, background known: u_c = u sqrt(2 s / sqrt(pi)) / h.
  // s = 4 / 2.35482, h = 1000, u = 1: 0.001384; the free background is even about the centre and hardly enters.
  const fit = fitLines(windowOf([line(20.2, 4, 1000)], 41, false), [line(20, 4, 900)]);
  if (fit.outcome !== "fitted") throw new Error(fit.detail);
  expect(fit.lines[0]!.centreUnc / 0.0013845).toBeGreaterThan(0.995);
  expect(fit.lines[0]!.centreUnc / 0.0013845).toBeLessThan(1.03);
});

test("noise averaged over two neighbours (correlation 1/2) widens the centre's uncertainty by nearly sqrt(2)", () => {
  const white = windowOf([line(20.2, 6, 1000)], 41, false);
  const a = fitLines(white, [line(20, 6, 900)]);
  const b = fitLines({ ...white, noiseCorrelation: 0.5 }, [line(20, 6, 900)]);
  if (a.outcome !== "fitted" || b.outcome !== "fitted") throw new Error("refused");
  const ratio = b.lines[0]!.centreUnc / a.lines[0]!.centreUnc;
  expect(ratio).toBeGreaterThan(1.3);
  expect(ratio).toBeLessThan(Math.SQRT2);
  expect(b.degreesOfFreedom).toBeLessThan(a.degreesOfFreedom);
});
