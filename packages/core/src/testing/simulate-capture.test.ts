import { describe, expect, test } from "vitest";
import type { ReferenceLine } from "../analysis/types.ts";
import {
  arraySpectrometer,
  createRandom,
  ramanBench,
  scanningMonochromator,
  simulateCapture,
  spectrophotometer,
  wavelengthAt,
} from "./index.ts";

const reference = (element: string, air: number, relativeIntensity: number): ReferenceLine => ({
  element,
  spectrum: `${element} I`,
  wavelengthAirNm: air,
  wavelengthVacuumNm: air * 1.00028,
  uncertaintyNm: 0.0001,
  relativeIntensity,
  source: "test",
  note: "",
});
const lines = [
  reference("Hg", 404.6565, 1800),
  reference("Hg", 435.8335, 4000),
  reference("Hg", 546.075, 1100),
  reference("Hg", 576.961, 240),
  reference("Ne", 640.2248, 2000),
];
const lamp = { lines, strongestCounts: 30000, intensityScatter: 3 };

describe("seeded random numbers", () => {
  const moments = (draw: () => number, count: number) => {
    let sum = 0;
    let square = 0;
    for (let i = 0; i < count; i++) {
      const x = draw();
      sum += x;
      square += x * x;
    }
    return { mean: sum / count, variance: square / count - (sum / count) * (sum / count) };
  };
  test("the same seed gives the same numbers, another seed others", () => {
    const [a, b, c] = [createRandom(7), createRandom(7), createRandom(8)];
    expect([a.uniform(), a.normal(), a.poisson(50)]).toEqual([b.uniform(), b.normal(), b.poisson(50)]);
    expect(createRandom(7).uniform()).not.toBe(c.uniform());
  });
  test("mean and variance: uniform 1/2, 1/12; normal 0, 1; Poisson both its mean (100,000 draws, five standard errors)", () => {
    const random = createRandom(20260101);
    const uniform = moments(() => random.uniform(), 100_000);
    expect(Math.abs(uniform.mean - 0.5)).toBeLessThan((5 * 0.2887) / 316);
    expect(Math.abs(uniform.variance - 1 / 12)).toBeLessThan((5 * 0.0745) / 316);
    const normal = moments(() => random.normal(), 100_000);
    expect(Math.abs(normal.mean)).toBeLessThan(5 / 316);
    expect(Math.abs(normal.variance - 1)).toBeLessThan((5 * 1.4142) / 316);
    for (const mean of [0.7, 12, 40, 5000]) {
      const poisson = moments(() => random.poisson(mean), 100_000);
      expect(Math.abs(poisson.mean - mean)).toBeLessThan((5 * Math.sqrt(mean)) / 316);
      expect(Math.abs(poisson.variance / mean - 1)).toBeLessThan((5 * Math.sqrt(2 + 1 / mean)) / 316);
    }
  });
});

describe("simulateCapture", () => {
  test("the same options give the same text, another seed another", () => {
    const make = (seed: number) => simulateCapture({ seed, instrument: arraySpectrometer(), lamp }).text;
    expect(make(1)).toBe(make(1));
    expect(make(1)).not.toBe(make(2));
  });
  test("without noise the first moment of each line lies at its true position and its sum is its area (a sharper box would alias)", () => {
    for (const shape of [
      { kind: "gaussian" },
      { kind: "skewed", tailShare: 0.8 },
      { kind: "box", blurShare: 0.3 },
    ] as const) {
      const instrument = arraySpectrometer({
        shape,
        readNoiseCounts: 0,
        countsPerElectron: 0,
        isDigitised: false,
        ceilingCounts: null,
        baseline: { offsetCounts: 0, slopeCounts: 0, humpCounts: 0 },
      });
      const { counts, truth } = simulateCapture({ seed: 3, instrument, lamp: { ...lamp, lines: [lines[2]!] } });
      let area = 0;
      let moment = 0;
      counts.forEach((y, i) => {
        area += y;
        moment += y * i;
      });
      expect(Math.abs(moment / area - truth[0]!.position)).toBeLessThan(1e-4);
      expect(Math.abs(area / truth[0]!.areaCounts - 1)).toBeLessThan(1e-3);
    }
  });
  test("truth wavelengths lie on the true axis", () => {
    const instrument = ramanBench();
    const { truth } = simulateCapture({ seed: 3, instrument, lamp });
    expect(truth.map((line) => line.wavelengthNm)).toEqual([546.075, 576.961, 640.2248]);
    for (const line of truth)
      expect(wavelengthAt(instrument.trueAxis, line.samplePx)).toBeCloseTo(line.wavelengthNm, 9);
  });
  test("a printed nm axis is wrong by what it was told: +0.1 nm and -0.2 nm over 400 to 700 nm", () => {
    const instrument = scanningMonochromator({ axisError: { offsetNm: 0.1, scaleNm: -0.2 } });
    const { truth } = simulateCapture({ seed: 3, instrument, lamp });
    for (const line of truth)
      expect(line.position - line.wavelengthNm).toBeCloseTo(0.1 - (0.2 * (line.wavelengthNm - 550)) / 300, 9);
  });
  test("the ceiling cuts and the truth says which lines it cut", () => {
    const instrument = arraySpectrometer({ ceilingCounts: 4095 });
    const { counts, truth } = simulateCapture({ seed: 5, instrument, lamp });
    expect(Math.max(...counts)).toBe(4095);
    expect(truth.filter((line) => line.isSaturated).length).toBeGreaterThan(0);
    for (const line of truth) expect(line.isSaturated).toBe(counts[Math.round(line.position)] === 4095);
  });
  test("smoothing over 3 samples correlates neighbours by two thirds", () => {
    const instrument = arraySpectrometer({ smoothingSamples: 3, isDigitised: false });
    const { counts } = simulateCapture({ seed: 5, instrument, lamp: { ...lamp, lines: [] } });
    let sum = 0;
    let square = 0;
    for (let i = 2; i < 2000; i++) {
      const [a, b] = [counts[i]! - 900 - 30 * (i / 2047 - 0.5), counts[i + 1]! - 900 - 30 * ((i + 1) / 2047 - 0.5)];
      sum += a * b;
      square += a * a;
    }
    expect(sum / square).toBeGreaterThan(0.6);
    expect(sum / square).toBeLessThan(0.73);
  });
  test("each dialect writes the rows it says", () => {
    const make = (dialect: "comma" | "tab-with-metadata" | "semicolon-decimal-comma" | "spaces" | "comma-descending") =>
      simulateCapture({ seed: 5, instrument: spectrophotometer(), lamp, dialect, metadata: { Operator: "A. Person" } })
        .text;
    expect(make("comma").split("\n")[0]).toBe("Wavelength (nm),Intensity (counts)");
    expect(make("tab-with-metadata")).toMatch(
      /^Operator: A\. Person\n\nWavelength \(nm\)\tIntensity \(counts\)\n190\.0\t/,
    );
    expect(make("semicolon-decimal-comma")).toMatch(/^\uFEFFWavelength \(nm\);Intensity \(counts\)\r\n190,0;/);
    expect(make("spaces")).toMatch(/^190\.0 \d+\n190\.1 /);
    expect(make("comma-descending").split("\n")[1]).toMatch(/^800\.0,/);
  });
});
