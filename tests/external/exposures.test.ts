/**
 * Exposure series, darks and hot pixels: invented mercury scans (`support/scan-generator.ts`) whose strongest lines no single exposure can hold
 * beside the weakest.
 */
import { describe, expect, it } from "vitest";
import { analyseCaptures, defaultSetup, type Analysis, type CaptureInput } from "../../packages/core/src/index.ts";
import { scanText, steps, type Scan } from "./support/scan-generator.ts";

const mercury: readonly [number, number][] = [
  [296.7283, 5000],
  [334.1484, 1500],
  [365.0158, 90000],
  [404.6565, 60000],
  [407.7837, 4000],
  [435.8335, 150000],
  [491.6068, 600],
  [546.075, 180000],
  [576.961, 15000],
  [579.067, 15000],
];
const strong = [365.0158, 404.6565, 435.8335, 546.075];
const errorAt = (nm: number): number => 0.08 + 1e-4 * (nm - 450);
const positions = steps(280, 620, 0.2).map((x) => Math.round(x * 1e4) / 1e4);
const scanOf = (exposure: number, given: Partial<Scan> = {}): Scan => ({
  positions,
  lines: mercury.map(([nm, height]) => ({ position: nm + errorAt(nm), height })),
  fwhm: 0.9,
  exposure,
  fullScale: 16383,
  background: 200,
  ...given,
});
const capture = (name: string, text: string, part: CaptureInput["part"] = "lamp"): CaptureInput => ({
  name,
  bytes: new TextEncoder().encode(text),
  sha256: null,
  part,
});
const inMs = (ms: number): string => `Integration time (ms): ${ms}\n`;
const shot = (name: string, scan: Scan, seed: number, ms: number | null, part?: CaptureInput["part"]): CaptureInput =>
  capture(name, scanText(scan, seed, "nm,counts", 4, ms === null ? "" : inMs(ms)), part);
const setup = defaultSetup({ elements: ["Hg"], reading: { fullScaleCounts: 16383 } });
const analyse = (captures: CaptureInput[]): Analysis => analyseCaptures(captures, setup).analysis;
const lineAt = (analysis: Analysis, nm: number) => analysis.lines.find((line) => line.wavelengthNm === nm);
const said = (analysis: Analysis): string => analysis.warnings.map(({ text }) => text).join(" ");

function expectAllMeasured(analysis: Analysis, long: string, short: string): void {
  expect(analysis.outcome).toBe("identified");
  for (const [nm] of mercury) {
    const line = lineAt(analysis, nm)!;
    expect(line, `${nm} nm`).toBeDefined();
    expect(line.flags).not.toContain("saturated");
    expect(line.takenFrom).toContain(strong.includes(nm) ? short : long);
    expect(Math.abs(line.errorNm! - errorAt(nm))).toBeLessThan(4 * line.errorUncNm! + 5e-4);
  }
}

describe("each line from the capture where it is strongest and not saturated", () => {
  it("exposures told from the light where no time is written", () => {
    const analysis = analyse([shot("short.csv", scanOf(0.05), 2, null), shot("long.csv", scanOf(1), 1, null)]);
    expectAllMeasured(analysis, "long.csv", "short.csv");
    // One scale of counts: heights are those of the exposure with the most light.
    for (const [nm, height] of mercury) {
      if (nm !== 365.0158) expect(lineAt(analysis, nm)!.peakHeightCounts / height).toBeCloseTo(1, 1);
    }
  });

  it("exposures from the header, repeats of one averaged", () => {
    const analysis = analyse([
      shot("long 1.csv", scanOf(1), 1, 100),
      shot("short.csv", scanOf(0.05), 2, 5),
      shot("long 2.csv", scanOf(1), 3, 100),
    ]);
    expectAllMeasured(analysis, "long 2.csv", "short.csv");
    expect(lineAt(analysis, 491.6068)!.takenFrom).toEqual(["long 1.csv", "long 2.csv"]);
  });

  it("scans summed count as exposure: the same time five times over is the longer one", () => {
    const one = shot("one.csv", scanOf(1, { fullScale: 1e9 }), 1, 20);
    const analysis = analyseCaptures([one, shot("half.csv", scanOf(0.5, { fullScale: 1e9 }), 2, 10)], {
      ...setup,
      reading: { fullScaleCounts: 65535, scansSummed: 5 },
    }).analysis;
    // The ceiling is 65,535 times five scans: nothing is full.
    expect(analysis.lines.every((line) => !line.flags.includes("saturated"))).toBe(true);
    expect(lineAt(analysis, 546.075)!.takenFrom).toEqual(["one.csv"]);
  });

  it("repeats are no series: light within a fifth is averaged, and no file is named", () => {
    const analysis = analyse([shot("a.csv", scanOf(0.05), 1, null), shot("b.csv", scanOf(0.055), 2, null)]);
    expect(analysis.outcome).toBe("identified");
    expect(analysis.lines.every((line) => line.takenFrom === undefined)).toBe(true);
  });

  it("says when the light does not follow the exposure times", () => {
    const analysis = analyse([shot("long.csv", scanOf(1), 1, 100), shot("short.csv", scanOf(0.1), 2, 5)]);
    expect(said(analysis)).toContain("was the lamp steady");
  });

  it("a line that is saturated in every exposure is refused as before", () => {
    const analysis = analyse([shot("long.csv", scanOf(1), 1, 100), shot("short.csv", scanOf(0.3), 2, 30)]);
    const line = lineAt(analysis, 546.075)!;
    expect([line.status, line.flags.includes("saturated")]).toEqual(["refused", true]);
    expect(said(analysis)).toContain("saturated in every exposure");
  });
});

describe("darks", () => {
  const pattern = (i: number): number => 40 + 30 * Math.sin(i / 9) + (i % 311 === 7 ? 3000 : 0);
  const dark = (ms: number, seed: number): CaptureInput =>
    shot(`dark ${ms}.csv`, scanOf(0, { lines: [], dark: (i) => (pattern(i) * ms) / 5 }), seed, ms, "dark");
  const lamp = shot("lamp.csv", scanOf(0.05, { dark: pattern }), 4, 5);

  it("one of the same exposure is taken off, and its hot pixels are left out", () => {
    const analysis = analyse([lamp, dark(5, 5), dark(5, 6)]);
    expect(said(analysis)).toMatch(/\d+ hot pixels learned/);
    expect(analysis.lines.every((line) => !line.flags.includes("spike"))).toBe(true);
    for (const nm of strong.slice(1)) {
      expect(Math.abs(lineAt(analysis, nm)!.errorNm! - errorAt(nm))).toBeLessThan(
        4 * lineAt(analysis, nm)!.errorUncNm! + 5e-4,
      );
    }
  });

  it("one of another exposure is left off and said so; its hot pixels are learned all the same", () => {
    const analysis = analyse([lamp, dark(100, 5)]);
    expect(said(analysis)).toContain("recorded with 100 ms, the lamp with 5 ms");
    expect(said(analysis)).toMatch(/hot pixels learned/);
    expect(analysis.outcome).toBe("identified");
  });

  it("two of other exposures give one for the lamp's, by a straight line", () => {
    const analysis = analyse([lamp, dark(2, 5), dark(20, 6)]);
    expect(said(analysis)).toContain("made from darks of other exposures");
    expect(analysis.outcome).toBe("identified");
  });

  it("no lamp, only darks: refused in a sentence", () => {
    const analysis = analyse([dark(5, 5)]);
    expect([analysis.outcome, analysis.reason]).toEqual(["refused", expect.stringContaining("no capture of the lamp")]);
  });
});
