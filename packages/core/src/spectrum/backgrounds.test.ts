/** False lines and lost lines on backgrounds that are not level: humps, phosphor bands, steps, slopes, and lamps with lines everywhere. */
import { describe, expect, it } from "vitest";
import { exp } from "../numeric/elementary.ts";
import type { Spectrum } from "../analysis/types.ts";
import { createRandom } from "../testing/index.ts";
import { estimateBaseline } from "./baseline.ts";
import { findLines } from "./find-lines.ts";

interface Scene {
  samples?: number;
  /** Counts, by share of the capture. */
  background: (share: number) => number;
  countsPerElectron: number;
  lines: number;
  fwhm?: number;
}

const readNoise = 8;
const captures = 20;
const rate = 0.3;

const hill = (x: number, centre: number, fwhm: number): number =>
  exp((-2.772588722 * (x - centre) * (x - centre)) / (fwhm * fwhm));
const hump = (x: number): number => 1200 + 2000 * hill(x, 0.5, 0.35);

/** Lines one to each even part of the capture, heights from 15 to 900 deviations of the noise about them. */
function record(scene: Scene, seed: number): { counts: Float64Array; centres: number[] } {
  const { samples: n = 2048, fwhm = 4, background, countsPerElectron: gain } = scene;
  const random = createRandom(seed);
  const light = Float64Array.from({ length: n }, (_, i) => background(i / n));
  const centres: number[] = [];
  for (let k = 0; k < scene.lines; k += 1) {
    const centre = (n * (k + 0.2 + 0.6 * random.uniform())) / scene.lines;
    const deviations = 15 * exp(4.094 * random.uniform());
    if (centre < 3 * fwhm || centre > n - 3 * fwhm) continue;
    centres.push(centre);
    const height = deviations * Math.sqrt(readNoise * readNoise + gain * background(centre / n));
    for (let i = Math.max(0, Math.floor(centre - 5 * fwhm)); i < Math.min(n, centre + 5 * fwhm); i += 1)
      light[i] = light[i]! + height * hill(i, centre, fwhm);
  }
  const counts = light.map((value) => gain * random.poisson(value / gain) + readNoise * random.normal());
  return { counts, centres };
}

function tally(scene: Scene): { falseLines: number; lost: number; wanted: number } {
  const fwhm = scene.fwhm ?? 4;
  let [falseLines, lost, wanted] = [0, 0, 0];
  for (let seed = 1; seed <= captures; seed += 1) {
    const { counts, centres } = record(scene, seed);
    const found = findLines(spectrumOf(counts), { falseLinesPerCapture: rate }).lines;
    const isNear = (a: number, b: number): boolean => Math.abs(a - b) < 0.75 * fwhm;
    falseLines += found.filter((line) => !centres.some((centre) => isNear(centre, line.position))).length;
    lost += centres.filter((centre) => !found.some((line) => isNear(centre, line.position))).length;
    wanted += centres.length;
  }
  return { falseLines, lost, wanted };
}

const spectrumOf = (counts: Float64Array): Spectrum => ({
  axisKind: "pixel",
  axisUnit: "px",
  wasDescending: false,
  positions: counts.map((_, i) => i),
  counts,
  fullScaleCounts: null,
  scansSummed: 1,
});

describe("findLines on backgrounds", () => {
  // 20 captures at 0.3 false lines each: 6 expected; more than 15 has a chance of 5e-4.
  const mostFalse = 15;

  it.each<[string, Scene, number]>([
    ["a hump with five times the noise of the rest", { background: hump, countsPerElectron: 2, lines: 0 }, 0],
    ["lines on that hump", { background: hump, countsPerElectron: 2, lines: 25 }, 0.01],
    [
      "a slope of fluorescence",
      { background: (x) => 500 + 30000 * exp(-x / 0.3), countsPerElectron: 1, lines: 20 },
      0.01,
    ],
    ["a step", { background: (x) => (x < 0.45 ? 800 : 2400), countsPerElectron: 1, lines: 20 }, 0.03],
    ["220 lines in 4096 samples", { background: () => 800, countsPerElectron: 1, lines: 220, samples: 4096 }, 0.01],
    ["the same on a hump", { background: hump, countsPerElectron: 2, lines: 220, samples: 4096 }, 0.01],
    ["lines with hardly a quiet sample between", { background: () => 800, countsPerElectron: 1, lines: 150 }, 0.03],
    ["lines as broad as half a block", { background: () => 800, countsPerElectron: 1, lines: 8, fwhm: 40 }, 0.02],
  ])("%s: the stated rate of false lines, and no more lost than stated", (_, scene, mostLostShare) => {
    const { falseLines, lost, wanted } = tally(scene);
    expect(falseLines).toBeLessThanOrEqual(mostFalse);
    expect(lost).toBeLessThanOrEqual(mostLostShare * wanted);
  });

  it("follows a steep hump within its noise", () => {
    const { counts } = record({ background: hump, countsPerElectron: 2, lines: 12 }, 99);
    const { baseline } = estimateBaseline(counts);
    for (let i = 0; i < 2048; i += 1) expect(Math.abs(baseline[i]! - hump(i / 2048))).toBeLessThan(60);
  });
});

describe("findLines in short windows", () => {
  it.each([20, 24, 27, 32, 40])("finds the one line of %i samples, where it is, and nothing else", (samples) => {
    let [found, held, others] = [0, 0, 0];
    for (let seed = 1; seed <= 40; seed += 1) {
      const random = createRandom(seed);
      const centre = samples * (0.35 + 0.3 * random.uniform());
      const counts = Float64Array.from(
        { length: samples },
        (_, i) => random.poisson(200 + 6000 * hill(i, centre, 5)) + 4 * random.normal(),
      );
      const { lines } = findLines(spectrumOf(counts));
      const line = lines.find(({ position }) => Math.abs(position - centre) < 2);
      others += lines.length - (line === undefined ? 0 : 1);
      if (line === undefined) continue;
      found += 1;
      if (Math.abs(line.position - centre) < 3 * line.positionUnc) held += 1;
    }
    expect(found).toBe(40);
    expect(held).toBeGreaterThanOrEqual(36);
    expect(others).toBeLessThanOrEqual(2);
  });
});

describe("findLines on axes that are even in energy", () => {
  it.each(["as wide in wavelength", "as wide in samples"])("takes no line for a spike: %s", (kind) => {
    const n = 2048;
    // 3.5 eV down to 1.2 eV, even in energy: 354 nm to 1033 nm, and 0.114 nm to 0.97 nm a sample.
    const positions = Float64Array.from({ length: n }, (_, i) => 1239.841984 / (3.5 - (2.3 * i) / (n - 1)));
    const random = createRandom(8);
    const counts = new Float64Array(n);
    for (let i = 0; i < n; i += 1) {
      counts[i] = 900 + 12 * random.normal();
      for (let nm = 375; nm < 1000; nm += 50) {
        const at = (3.5 - 1239.841984 / nm) * ((n - 1) / 2.3);
        counts[i] = counts[i]! + 5000 * (kind === "as wide in samples" ? hill(i, at, 5) : hill(positions[i]!, nm, 2.6));
      }
    }
    counts[700] = 9000;
    const { lines } = findLines({ ...spectrumOf(counts), axisKind: "wavelength", axisUnit: "nm", positions });
    const spikes = lines.filter((line) => line.flags.includes("spike"));
    expect(lines).toHaveLength(14);
    expect(spikes.map(({ position }) => Math.round(position))).toEqual([Math.round(positions[700]!)]);
  });
});

describe("findLines at the limits", () => {
  it("marks every line near an end of the capture, and places none outside it", () => {
    for (let k = -8; k <= 12; k += 1) {
      const centre = k / 2;
      const random = createRandom(100 + k);
      const counts = Float64Array.from(
        { length: 512 },
        (_, i) =>
          random.poisson(500 + 8000 * (hill(i, centre, 6) + hill(i, 511 - centre, 6) + hill(i, 200, 6))) +
          8 * random.normal(),
      );
      for (const line of findLines(spectrumOf(counts)).lines) {
        expect(line.position).toBeGreaterThanOrEqual(0);
        expect(line.position).toBeLessThanOrEqual(511);
        if (Math.abs(line.position - 200) > 2) expect(line.flags).toContain("edge");
      }
    }
  });

  it("never throws whatever the size of the counts, and gives the same lines or says why none", () => {
    const random = createRandom(4);
    const shape = Float64Array.from({ length: 512 }, (_, i) => 900 + 5000 * hill(i, 200, 4) + 12 * random.normal());
    for (let power = -324; power <= 308; power += 4) {
      const scale = Number(`1e${power}`);
      for (const sign of [1, -1]) {
        const { lines, notes } = findLines(spectrumOf(shape.map((value) => Math.max(-1e308, sign * scale * value))));
        for (const line of lines)
          expect(Number.isFinite(line.position) && Number.isFinite(line.positionUnc) && line.positionUnc > 0).toBe(
            true,
          );
        if (sign === 1 && Math.abs(power) < 60) {
          expect(lines.map(({ position }) => Math.round(position))).toEqual([200]);
        } else if (sign === 1 && Math.abs(power) > 80 && power > -322)
          expect(notes[0]).toContain("record them in a unit");
      }
    }
  });
});
