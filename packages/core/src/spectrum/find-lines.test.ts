import { describe, expect, it } from "vitest";
import type { Spectrum } from "../analysis/types.ts";
import { builtInLineList } from "../linelist/built-in.ts";
import { arraySpectrometer, createRandom, simulateCapture, type SimulatedInstrument } from "../testing/index.ts";
import { estimateBaseline } from "./baseline.ts";
import { findLines } from "./find-lines.ts";
import { median, selectInPlace } from "./median.ts";
import { estimatePhotonGain, type LineScatter } from "./photon-gain.ts";
import { findSaturation } from "./saturation.ts";

const axis = { kind: "polynomial", coefficients: [200, 0.345, -1.4e-5] } as const;
const wanted = [253.6521, 296.7283, 404.6565, 435.8335, 546.075, 576.961, 579.067];
const mercury = builtInLineList.lines.filter((line) => wanted.includes(line.wavelengthAirNm ?? 0));

function spectrumOf(counts: Float64Array, changes: Partial<Spectrum> = {}): Spectrum {
  return {
    axisKind: "pixel",
    axisUnit: "px",
    wasDescending: false,
    positions: Float64Array.from(counts, (_, i) => i),
    counts,
    fullScaleCounts: null,
    scansSummed: 1,
    ...changes,
  };
}

function simulate(seed: number, changes: Partial<SimulatedInstrument> = {}, heightCounts = 20000, extra = {}) {
  const heightsCounts = Object.fromEntries(mercury.map((line) => [line.wavelengthAirNm!.toFixed(4), heightCounts]));
  return simulateCapture({
    seed,
    instrument: arraySpectrometer({ trueAxis: axis, ...changes }),
    lamp: { lines: mercury, strongestCounts: heightCounts, intensityScatter: 1, heightsCounts },
    ...extra,
  });
}

describe("findLines", () => {
  it("finds each line of a clean capture once, where it is", () => {
    const sim = simulate(1);
    const { lines, noiseCorrelation, medianFwhm } = findLines(spectrumOf(sim.counts));
    expect(lines).toHaveLength(wanted.length);
    sim.truth.forEach((truth, i) => {
      expect(Math.abs(lines[i]!.position - truth.position)).toBeLessThan(5 * lines[i]!.positionUnc);
      expect(Math.abs(lines[i]!.fwhm - truth.fwhm)).toBeLessThan(5 * lines[i]!.fwhmUnc);
    });
    expect(Math.abs(noiseCorrelation)).toBeLessThan(0.1);
    expect(medianFwhm).toBeCloseTo(3.6, 1);
  });

  it("finds nothing in noise more often than it says (0.01 a capture, 300 captures)", () => {
    const random = createRandom(11);
    let found = 0;
    for (let k = 0; k < 300; k += 1) {
      const counts = Float64Array.from({ length: 2048 }, (_, i) => 900 + 0.01 * i + 12 * random.normal());
      found += findLines(spectrumOf(counts)).lines.length;
    }
    // 3 expected; more than 12 has a chance of 2e-5.
    expect(found).toBeLessThanOrEqual(12);
  });

  it("finds a line of six noise deviations nearly always", () => {
    let found = 0;
    for (let seed = 1; seed <= 40; seed += 1) {
      const sim = simulate(seed, { countsPerElectron: 0 }, 18 * 6);
      const { lines } = findLines(spectrumOf(sim.counts));
      for (const truth of sim.truth)
        if (lines.some((line) => Math.abs(line.position - truth.position) < 1.5)) found += 1;
    }
    expect(found / (40 * wanted.length)).toBeGreaterThan(0.9);
  });

  it("flags lines at the ceiling, known or seen, and keeps the others unflagged", () => {
    for (const fullScaleCounts of [30000, null]) {
      const heightsCounts = Object.fromEntries(
        mercury.map((l, i) => [l.wavelengthAirNm!.toFixed(4), i < 3 ? 90000 : 9000]),
      );
      const sim = simulateCapture({
        seed: 3,
        instrument: arraySpectrometer({ trueAxis: axis, ceilingCounts: 30000 }),
        lamp: { lines: mercury, strongestCounts: 90000, intensityScatter: 1, heightsCounts },
      });
      const found = findLines(spectrumOf(sim.counts, { fullScaleCounts }));
      expect(found.ceilingCounts).toBe(30000);
      for (const truth of sim.truth) {
        const line = found.lines.find((one) => Math.abs(one.position - truth.position) < 1)!;
        expect(line.flags.includes("saturated")).toBe(truth.isSaturated);
      }
    }
  });

  it("tells hot pixels from lines", () => {
    for (let seed = 1; seed <= 10; seed += 1) {
      const sim = simulate(seed, {}, 20000, { hotPixels: 6 });
      const { lines } = findLines(spectrumOf(sim.counts));
      const real = lines.filter((line) => !line.flags.includes("spike"));
      for (const line of real) {
        expect(sim.truth.some((truth) => Math.abs(truth.position - line.position) < 1)).toBe(true);
      }
      expect(real.length).toBeGreaterThanOrEqual(wanted.length - 1);
    }
  });

  it("says when the noise was smoothed, and carries it", () => {
    const sim = simulate(5, { smoothingSamples: 3 });
    const found = findLines(spectrumOf(sim.counts));
    expect(found.noiseCorrelation).toBeGreaterThan(0.5);
    expect(found.lines.every((line) => line.flags.includes("smoothed"))).toBe(true);
    expect(found.notes.join(" ")).toContain("smoothed");
  });

  it("chooses the shape by evidence, and keeps the Gaussian where it is one", () => {
    const shapeOf = (changes: Partial<SimulatedInstrument>): string =>
      findLines(spectrumOf(simulate(8, changes).counts), { lineShape: "automatic" }).lineShape!.name;
    expect(shapeOf({})).toBe("gaussian");
    expect(shapeOf({ shape: { kind: "skewed", tailShare: 1 } })).toBe("exponentially-modified-gaussian");
    expect(shapeOf({ shape: { kind: "box", blurShare: 0.15 }, fwhm: { value: 8, unit: "px" } })).toBe("box");
  });

  it("gives the first moment of a skewed line, and its uncertainty", () => {
    const sim = simulate(9, { shape: { kind: "skewed", tailShare: 1 } });
    const found = findLines(spectrumOf(sim.counts), { lineShape: "automatic" });
    for (const line of found.lines.filter(({ flags }) => flags.length === 0)) {
      const truth = sim.truth.find((one) => Math.abs(one.position - line.position) < 1)!;
      expect(Math.abs(line.position - truth.position)).toBeLessThan(4 * line.positionUnc);
      expect(line.shapeParameters!["tail"]!.value).toBeGreaterThan(0.1);
    }
  });

  it("says so where too few strong lines show a shape to learn", () => {
    const { counts } = simulate(10);
    const found = findLines(spectrumOf(counts.slice(0, 300)), { lineShape: "empirical" });
    expect(found.lineShape!.name).toBe("gaussian");
    expect(found.lineShape!.note).toContain("too few");
  });

  it("reads a maximum as an instrument does, with an uncertainty that holds the centre", () => {
    const sim = simulate(11);
    for (const positionDefinition of ["highest-sample", "three-point-parabola"] as const) {
      const { lines } = findLines(spectrumOf(sim.counts), { positionDefinition });
      for (const line of lines.filter(({ flags }) => flags.length === 0)) {
        const truth = sim.truth.find((one) => Math.abs(one.position - line.position) < 1)!;
        expect(Math.abs(line.position - truth.position)).toBeLessThan(3 * line.positionUnc);
        if (positionDefinition === "highest-sample") expect(line.position).toBe(Math.round(line.position));
      }
    }
  });

  it("keeps to the stated rate on noise that is smoothed, cut off at a floor or in whole counts (0.3 a capture, 60 captures each)", () => {
    const random = createRandom(12);
    const mean = (values: Float64Array): Float64Array =>
      values.map(
        (_, i) => (values[Math.max(0, i - 1)]! + values[i]! + values[Math.min(values.length - 1, i + 1)]!) / 3,
      );
    const kinds: ((values: Float64Array) => Float64Array)[] = [
      mean,
      (values) => values.map((value) => Math.max(0, value)),
      (values) => values.map((value) => Math.round(value / 8)),
    ];
    for (const kind of kinds) {
      let found = 0;
      for (let k = 0; k < 60; k += 1) {
        const noise = Float64Array.from({ length: 2048 }, () => 12 * random.normal());
        found += findLines(spectrumOf(kind(noise)), { falseLinesPerCapture: 0.3 }).lines.length;
      }
      // 18 expected; more than 45 would be twice and a half the rate and six deviations off.
      expect(found).toBeLessThanOrEqual(45);
    }
  });

  it("fits neighbours together and marks them", () => {
    const sim = simulate(6, { fwhm: { value: 5.5, unit: "px" } });
    const { lines } = findLines(spectrumOf(sim.counts));
    const pair = sim.truth
      .slice(-2)
      .map((truth) => lines.find((line) => Math.abs(line.position - truth.position) < 0.5)!);
    expect(pair[0]!.group).toBe(pair[1]!.group);
    expect(pair.every((line) => line.flags.includes("blend"))).toBe(true);
  });

  it("leaves gaps out and answers on degenerate captures", () => {
    const sim = simulate(7);
    const at = Math.round(sim.truth[3]!.position);
    sim.counts[at - 3] = NaN;
    sim.counts[100] = NaN;
    const line = findLines(spectrumOf(sim.counts)).lines.find(
      (one) => Math.abs(one.position - sim.truth[3]!.position) < 1,
    )!;
    expect(Math.abs(line.position - sim.truth[3]!.position)).toBeLessThan(5 * line.positionUnc);
    for (const counts of [
      new Float64Array(8),
      new Float64Array(300).fill(7),
      new Float64Array(50).fill(NaN),
      Float64Array.from({ length: 60 }, (_, i) => (i === 30 ? 1e9 : 0)),
    ]) {
      const found = findLines(spectrumOf(counts));
      for (const one of found.lines) expect(Number.isFinite(one.position) && one.positionUnc > 0).toBe(true);
    }
  });
});

describe("estimateBaseline", () => {
  it("is unbiased in level and noise on white noise, and not lifted by lines", () => {
    const random = createRandom(3);
    let noise = 0;
    let level = 0;
    for (let k = 0; k < 50; k += 1) {
      const counts = Float64Array.from(
        { length: 2048 },
        (_, i) => 1000 + 10 * random.normal() + (i % 100 < 8 ? 4000 : 0),
      );
      const base = estimateBaseline(counts);
      noise += base.medianNoiseCounts / 50;
      level += median(base.baseline) / 50;
    }
    expect(Math.abs(noise - 10)).toBeLessThan(0.3);
    expect(Math.abs(level - 1000)).toBeLessThan(0.5);
  });
});

describe("estimatePhotonGain", () => {
  const line = (height: number, gain: number, misfit: number): LineScatter => {
    const signal = 3 * height;
    const squareSignal = 2 * height * height;
    const moments = [12, 2.5 * height, 1.5 * height * height] as const;
    return {
      excess: gain * signal + misfit * squareSignal,
      readFree: 1200,
      signal,
      squareSignal,
      readVariance: 100,
      moments,
    };
  };
  const heights = [300, 600, 1200, 2500, 5000, 10000, 20000, 40000];

  it("finds photon noise alone, none, and photon noise beside a shape that does not fit", () => {
    expect(estimatePhotonGain(heights.map((h) => line(h, 0.6, 0))).gain).toBeCloseTo(0.6, 6);
    expect(estimatePhotonGain(heights.map((h) => line(h, 0, 0))).gain).toBe(0);
    expect(estimatePhotonGain(heights.map((h) => line(h, 0.6, 0.01))).gain).toBeLessThan(2);
    const withCompanions = heights.map((h, i) => line(h, i % 3 === 0 ? 200 : 0.6, 0));
    expect(estimatePhotonGain(withCompanions).gain).toBeCloseTo(0.6, 6);
    expect(estimatePhotonGain([]).gain).toBe(0);
  });
});

describe("findSaturation", () => {
  it("takes no flat top for a ceiling in weak whole counts", () => {
    const counts = Float64Array.from([3, 4, 5, 5, 5, 4, 3, 2, 3]);
    expect(findSaturation(counts, null, 1, 100).ceilingCounts).toBeNull();
    expect(findSaturation(counts, null, 1, 4).mask.reduce((a, b) => a + b, 0)).toBe(3);
  });

  it("multiplies the full scale by the scans summed", () => {
    const counts = Float64Array.from([10, 8190, 100]);
    expect(findSaturation(counts, 4095, 2, 1e9)).toMatchObject({ ceilingCounts: 8190 });
    expect(findSaturation(counts, 4095, 4, 1e9).mask[1]).toBe(0);
  });
});

describe("selectInPlace", () => {
  it("agrees with sorting", () => {
    const random = createRandom(9);
    for (let n = 1; n < 60; n += 1) {
      const values = Float64Array.from({ length: n }, () => Math.floor(10 * random.uniform()));
      const sorted = [...values].sort((a, b) => a - b);
      for (let k = 0; k < n; k += 1) expect(selectInPlace(values.slice(), n, k)).toBe(sorted[k]);
      expect(median(values)).toBe((sorted[(n - 1) >> 1]! + sorted[n >> 1]!) / 2);
    }
  });
});
