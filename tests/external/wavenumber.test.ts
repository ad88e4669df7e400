/**
 * Wavenumber axes and Raman shifts: the same light on two axes gives the same answer; errors and tolerances in cm-1; the laser's uncertainty
 * in every error. Spectra are invented, the lines are those of the built-in list.
 */
import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import {
  analyseCapture,
  builtInLineList,
  defaultSetup,
  errorPerCm,
  expandedUncPerCm,
  linesOf,
  type AnalysisSetup,
  type Spectrum,
} from "../../packages/core/src/index.ts";
import { scanCounts } from "./support/scan-generator.ts";

const acceptance = JSON.parse(readFileSync(new URL("../fixtures/bands/acceptance.json", import.meta.url), "utf8")) as {
  raman: { shifts: number[][] }[];
};

const strong = linesOf(builtInLineList, ["Ne"])
  .filter((line) => (line.relativeIntensity ?? 0) > 0 && line.wavelengthVacuumNm > 575 && line.wavelengthVacuumNm < 720)
  .sort((a, b) => b.relativeIntensity! - a.relativeIntensity!)
  .slice(0, 16);

/** Neon on an axis of wavenumbers: `shown` turns a true wavenumber into the one that is indicated. */
function neon(positionsPerCm: number[], shown: (trueNmVacuum: number) => number, fwhm: number): Spectrum {
  const lines = strong.map((line) => ({
    position: shown(line.wavelengthVacuumNm),
    height: 2000 + 40 * (line.relativeIntensity ?? 1) ** 0.5,
  }));
  const counts = scanCounts({ positions: positionsPerCm, lines, fwhm, electronsPerCount: 10 }, 11);
  return {
    axisKind: "wavenumber",
    axisUnit: "cm-1",
    wasDescending: false,
    positions: Float64Array.from(positionsPerCm),
    counts: Float64Array.from(counts),
    fullScaleCounts: null,
    scansSummed: 1,
  };
}

const rising = (first: number, last: number, step: number): number[] =>
  Array.from({ length: Math.round((last - first) / step) + 1 }, (_, i) => first + i * step);

const setupOf = (given: Partial<AnalysisSetup>): AnalysisSetup =>
  defaultSetup({
    elements: ["Ne"],
    mode: { kind: "earlier-axis", axis: "own" },
    lineListVersion: builtInLineList.version,
    ...given,
  });

describe("absolute wavenumbers", () => {
  const offset = 1.5;
  const capture = neon(rising(13900, 17500, 1.5), (nm) => 1e7 / nm + offset, 6);

  it("judges neon in cm-1: errors near the shift that was put in, positions and widths in cm-1", () => {
    const { analysis } = analyseCapture(
      capture,
      setupOf({ toleranceUnit: "cm-1", tolerance: [{ fromNm: 200, toNm: 1000, toleranceNm: 2 }] }),
    );
    expect(analysis.outcome).toBe("identified");
    expect([analysis.axisKind, analysis.axisUnit]).toEqual(["wavenumber", "cm-1"]);
    const named = analysis.lines.filter((line) => line.errorNm !== null && line.blendOfNm.length === 0);
    expect(named.length).toBeGreaterThanOrEqual(8);
    for (const line of named) {
      expect(Math.abs(errorPerCm(line)! - offset)).toBeLessThanOrEqual(1.5 * expandedUncPerCm(line)!);
      expect(line.fwhm).toBeGreaterThan(4);
      expect(line.fwhm).toBeLessThan(9);
      expect(line.position).toBeGreaterThan(13900);
    }
  });

  it("gives a tolerance in cm-1 the same meaning as the errors: just inside passes, just outside fails", () => {
    const judge = (tolerance: number) =>
      analyseCapture(
        capture,
        setupOf({
          toleranceUnit: "cm-1",
          decisionRule: { kind: "simple" },
          tolerance: [{ fromNm: 200, toNm: 1000, toleranceNm: tolerance }],
        }),
      ).analysis;
    const first = judge(10);
    const errors = first.lines.filter((line) => line.status === "judged").map((line) => Math.abs(errorPerCm(line)!));
    const worst = Math.max(...errors);
    expect(judge(worst * (1 + 1e-9)).verdict!.verdict).toBe("pass");
    expect(judge(worst * (1 - 1e-9)).verdict!.verdict).toBe("fail");
  });

  it("refuses what looks like Raman shifts without a laser, in a sentence", () => {
    const { analysis } = analyseCapture(
      { ...capture, positions: capture.positions.map((x) => x - 13800) },
      setupOf({}),
    );
    expect(analysis.outcome).toBe("refused");
    expect(analysis.reason).toContain("laser");
  });
});

describe("Raman shifts", () => {
  const laserNm = 532.1;
  const laser = { wavelengthVacuumNm: laserNm, uncNm: 0.02 };
  const capture = neon(rising(1450, 4800, 1.5), (nm) => 1e7 / laserNm - 1e7 / nm + 0.8, 6);

  it("finds neon's lines, the error in shift with its sign", () => {
    const { analysis } = analyseCapture(capture, setupOf({ laser }));
    expect(analysis.outcome).toBe("identified");
    const named = analysis.lines.filter((line) => line.errorNm !== null && line.blendOfNm.length === 0);
    expect(named.length).toBeGreaterThanOrEqual(8);
    for (const line of named) expect(Math.abs(errorPerCm(line, laser)! - 0.8)).toBeLessThan(0.3);
  });

  it("puts the laser's uncertainty into every error, u 1e7 / lambda² in cm-1, and moves all lines together", () => {
    const { analysis } = analyseCapture(capture, setupOf({ laser }));
    const inShift = (1e7 * laser.uncNm) / (laserNm * laserNm);
    for (const line of analysis.lines.filter((one) => one.errorNm !== null)) {
      const entry = line.budget.find(({ contribution }) => contribution === "laser")!;
      const lambda = line.indicatedNm!;
      expect((entry.uncNm * 1e7) / (lambda * lambda)).toBeCloseTo(inShift, 6);
      expect(expandedUncPerCm(line, laser)!).toBeGreaterThanOrEqual(2 * inShift * (1 - 1e-3));
    }
    expect(analysis.driftPoint!.midErrorUncNm).toBeGreaterThan(0.02);
  });

  it("says so when the laser's wavelength can't be right", () => {
    const { analysis } = analyseCapture(capture, setupOf({ laser: { wavelengthVacuumNm: 532000, uncNm: 0 } }));
    expect(analysis.outcome).toBe("refused");
    expect(analysis.reason).toContain("laser");
  });
});

describe("one light on two axes", () => {
  it("the same samples as vacuum wavelengths and as wavenumbers have the same errors, bit for bit in nm", () => {
    const perCm = neon(rising(13900, 17500, 1.5), (nm) => 1e7 / nm + 0.4, 6);
    const n = perCm.positions.length;
    const nm: Spectrum = {
      ...perCm,
      axisKind: "wavelength",
      axisUnit: "nm",
      positions: Float64Array.from({ length: n }, (_, i) => 1e7 / perCm.positions[n - 1 - i]!),
      counts: perCm.counts.slice().reverse(),
    };
    const a = analyseCapture(perCm, setupOf({})).analysis;
    const b = analyseCapture(nm, setupOf({ axisMeaning: "vacuum" })).analysis;
    expect(a.lines.map((line) => [line.wavelengthNm, line.errorNm, line.errorExpandedUncNm])).toEqual(
      b.lines.map((line) => [line.wavelengthNm, line.errorNm, line.errorExpandedUncNm]),
    );
  });
});

describe("Raman shifts of certified materials", () => {
  const laser = { wavelengthVacuumNm: 532.1, uncNm: 0.02 };
  const shifts = (name: string): { shiftPerCm: number; expandedUncPerCm: number; coverageFactor: number }[] =>
    name === "silicon"
      ? readFileSync(new URL("../fixtures/bands/raman-shifts.csv", import.meta.url), "utf8")
          .split("\n")
          .filter((row) => row.startsWith("silicon (non-doped"))
          .map((row) => row.split(","))
          .map((cells) => ({
            shiftPerCm: Number(cells[1]),
            expandedUncPerCm: Number(cells[2]),
            coverageFactor: Number(cells[3]),
          }))
      : acceptance.raman[0]!.shifts.map(([shiftPerCm]) => ({
          shiftPerCm: shiftPerCm!,
          expandedUncPerCm: 0.5,
          coverageFactor: 2,
        }));
  const spectrum = (places: number[], error: number, first: number, last: number): Spectrum => {
    const positions = rising(first, last, 1);
    const lines = places.map((place, k) => ({ position: place + error, height: 3000 + 900 * k }));
    return {
      axisKind: "wavenumber",
      axisUnit: "cm-1",
      wasDescending: false,
      positions: Float64Array.from(positions),
      counts: Float64Array.from(scanCounts({ positions, lines, fwhm: 7 }, 5)),
      fullScaleCounts: null,
      scansSummed: 1,
    };
  };
  const analyse = (capture: Spectrum, name: string, tolerance: number) =>
    analyseCapture(
      capture,
      setupOf({
        elements: [],
        laser,
        ramanCertificate: { material: name, shifts: shifts(name) },
        toleranceUnit: "cm-1",
        decisionRule: { kind: "simple" },
        tolerance: [{ fromNm: 200, toNm: 2000, toleranceNm: tolerance }],
      }),
    ).analysis;

  it("silicon, 520.45 cm-1 with U = 0.28 cm-1 (Itoh and Shirono 2020, abstract read): one line, judged in cm-1, the laser no part of U", () => {
    const analysis = analyse(spectrum([520.45], 0.7, 300, 800), "silicon", 1);
    expect(analysis.outcome).toBe("identified");
    const line = analysis.lines.find((one) => one.species === "silicon")!;
    expect(Math.abs(errorPerCm(line, laser)! - 0.7)).toBeLessThan(0.15);
    expect(line.budget.some(({ contribution }) => contribution === "laser")).toBe(false);
    expect(expandedUncPerCm(line, laser)!).toBeGreaterThan(0.28 - 1e-6);
    expect(analysis.verdict!.verdict).toBe("pass");
    expect(analyse(spectrum([520.45], 1.3, 300, 800), "silicon", 1).verdict!.verdict).toBe("fail");
  });

  it("arithmetic check, from memory: cyclohexane's shifts and tolerances of the European Pharmacopoeia 2.2.48", () => {
    const places = shifts("cyclohexane").map(({ shiftPerCm }) => shiftPerCm);
    const at = (error: number) => analyse(spectrum(places, error, 600, 3100), "cyclohexane", 1);
    expect(at(0.6).verdict!.verdict).toBe("pass");
    expect(at(1.3).verdict!.verdict).toBe("fail");
    expect(at(0.6).lines.filter((line) => line.species === "cyclohexane").length).toBe(places.length);
  });

  it("another material is refused", () => {
    const other = [640, 980, 1120, 1390, 1610, 2700];
    expect(analyse(spectrum(other, 0, 600, 3100), "cyclohexane", 1).outcome).toBe("unidentified");
  });
});
