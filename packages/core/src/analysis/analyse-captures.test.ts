import { describe, expect, it } from "vitest";
import { builtInLineList } from "../linelist/built-in.ts";
import { arraySpectrometer, createRandom, simulateCapture } from "../testing/index.ts";
import { analyseCapture, analyseCaptures } from "./analyse-captures.ts";
import { defaultSetup } from "./defaults.ts";
import { referenceMedium } from "./reference-medium.ts";
import { judgeSegments, type CurvePlace } from "./segments.ts";
import type { AnalysisSetup, CaptureInput, LineResult, PixelAxis } from "./types.ts";

const coefficients = [200, 0.345, -1.4e-5];
const wanted = [253.6521, 296.7283, 312.5674, 365.0158, 404.6565, 435.8335, 546.075, 576.961, 579.067];
const mercury = builtInLineList.lines.filter((line) => wanted.includes(line.wavelengthAirNm ?? 0));
const heightsCounts = Object.fromEntries(mercury.map((line, i) => [line.wavelengthAirNm!.toFixed(4), 9000 + 2000 * i]));

function capture(seed: number, offsetPx = 0, name = `lamp-${seed}.txt`): CaptureInput {
  const trueAxis = { kind: "polynomial", coefficients: [coefficients[0]! - 0.345 * offsetPx, 0.345, -1.4e-5] } as const;
  const { text } = simulateCapture({
    seed,
    instrument: arraySpectrometer({ trueAxis }),
    lamp: { lines: mercury, strongestCounts: 20000, intensityScatter: 1, heightsCounts },
  });
  return { name, bytes: new TextEncoder().encode(text), sha256: "ab".repeat(32), part: "lamp" };
}

function earlierAxis(offsetNm: number): PixelAxis {
  return {
    coefficients: [coefficients[0]! + offsetNm, coefficients[1]!, coefficients[2]!],
    firstPx: 0,
    lastPx: 2047,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
    meaning: "standard-air",
  };
}

function setup(changes: Partial<AnalysisSetup> = {}): AnalysisSetup {
  return defaultSetup({
    elements: ["Hg"],
    mode: { kind: "earlier-axis", axis: earlierAxis(0.2) },
    tolerance: [{ fromNm: 250, toNm: 580, toleranceNm: 0.5 }],
    requiredLinesNm: [253.6521, 435.8335, 546.075],
    ...changes,
  });
}

describe("analyseCaptures", () => {
  it("states the errors of an earlier axis that is 0.2 nm off, and passes it", () => {
    const { analysis, drawing } = analyseCaptures([capture(1)], setup());
    expect(analysis.outcome).toBe("identified");
    expect(analysis.verdict).toMatchObject({ verdict: "pass", judgedCount: wanted.length, reasons: [] });
    for (const line of analysis.lines.filter((one) => one.status === "judged")) {
      expect(Math.abs(line.errorNm! - 0.2)).toBeLessThan(3 * line.errorExpandedUncNm!);
      expect(line.budget.reduce((sum, entry) => sum + entry.shareOfVariance, 0)).toBeCloseTo(1, 9);
      expect(line.budget.map((entry) => entry.contribution)).toContain("fit");
    }
    expect(analysis.driftPoint!.midErrorNm).toBeCloseTo(0.2, 2);
    expect(analysis.notIncluded).toEqual(["set-up reproducibility"]);
    expect(analysis.dispersion!.coefficients[0]).toBeCloseTo(200, 1);
    expect(analysis.files[0]).toMatchObject({ name: "lamp-1.txt", sha256: "ab".repeat(32), rows: 2048 });
    expect(drawing!.x).toHaveLength(2048);
    expect(drawing!.fits).toHaveLength(analysis.lines.length);
    expect(JSON.parse(JSON.stringify(analysis))).toEqual(analysis);
  });

  it("fails an axis that is 0.7 nm off, and is inconclusive within the guard band", () => {
    expect(
      analyseCaptures([capture(2)], setup({ mode: { kind: "earlier-axis", axis: earlierAxis(0.7) } })).analysis.verdict!
        .verdict,
    ).toBe("fail");
    const wide = setup({
      mode: { kind: "earlier-axis", axis: earlierAxis(0.45) },
      setupReproducibility: { value: 0.1, unit: "px", basis: "assumed", degreesOfFreedom: null },
    });
    const { analysis } = analyseCaptures([capture(2)], wide);
    expect(analysis.verdict!.verdict).toBe("inconclusive");
    expect(analysis.notIncluded).toEqual([]);
    const judged = analysis.lines.find((line) => line.status === "judged")!;
    expect(judged.budget.find((entry) => entry.contribution === "set-up")).toMatchObject({ assumed: true });
    expect(analyseCaptures([capture(2)], { ...wide, decisionRule: { kind: "simple" } }).analysis.verdict!.verdict).toBe(
      "pass",
    );
  });

  it("shows the verdict with and without a line left out, and does not pass without a required one", () => {
    const leftOut = [{ wavelengthNm: 546.075, reason: "disturbed" as const, note: "stray reflection" }];
    const { analysis } = analyseCaptures([capture(3)], setup({ leftOut }));
    expect(analysis.verdict!.verdict).toBe("inconclusive");
    expect(analysis.verdict!.reasons).toEqual(["The required line 546.075 nm was left out."]);
    expect(analysis.verdictWithEveryLine!.verdict).toBe("pass");
    const line = analysis.lines.find((one) => one.wavelengthNm === 546.075)!;
    expect(line).toMatchObject({ status: "left-out", usedInAxis: false, required: true });
    expect(line.reason).toContain("stray reflection");
  });

  it("names a required line that was not found", () => {
    const { analysis } = analyseCaptures([capture(4)], setup({ requiredLinesNm: [253.6521, 690.7461] }));
    expect(analysis.verdict!.verdict).toBe("inconclusive");
    expect(analysis.verdict!.reasons).toEqual(["The required line 690.7461 nm was not found."]);
  });

  it("fits a new axis from a range, and judges nothing", () => {
    const { analysis } = analyseCaptures([capture(5)], setup({ mode: { kind: "range", firstNm: 205, lastNm: 840 } }));
    expect(analysis.outcome).toBe("identified");
    expect(analysis.verdict).toBeNull();
    expect(analysis.dispersion!.samples).toHaveLength(11);
    for (const line of analysis.lines) {
      expect(line.errorNm).toBeNull();
      expect(line.errorExpandedUncNm).toBeNull();
      expect(line.verdict).toBeNull();
    }
  });

  it("averages repeats, takes the dark off, and evaluates repeatability", () => {
    const dark = new TextEncoder().encode(
      `Pixel\tCounts\n${Array.from({ length: 2048 }, (_, i) => `${i}\t${300 + (i % 3)}`).join("\n")}`,
    );
    const random = createRandom(8);
    const repeats = [11, 12, 13, 14].map((seed) => capture(seed, 0.05 * random.normal()));
    const { analysis } = analyseCaptures(
      [...repeats, { name: "dark.txt", bytes: dark, sha256: null, part: "dark" }],
      setup(),
    );
    expect(analysis.outcome).toBe("identified");
    const line = analysis.lines.find((one) => one.wavelengthNm === 546.075)!;
    const entry = line.budget.find((one) => one.contribution === "repeatability")!;
    // Four repeats; what goes beyond the fit is a difference of variances and a little less certain than their own scatter.
    expect(entry.degreesOfFreedom).toBeGreaterThan(2.9);
    expect(entry.degreesOfFreedom).toBeLessThanOrEqual(3);
    expect(line.effectiveDegreesOfFreedom).not.toBeNull();
    expect(line.coverageFactor).toBeGreaterThan(2);
    expect(analysis.files).toHaveLength(5);
  });

  it("refuses captures on different axes, darks alone, and settings that fit nothing, each in a sentence", () => {
    const short = new TextEncoder().encode(Array.from({ length: 100 }, (_, i) => `${i}\t${i % 7}`).join("\n"));
    const refusals = [
      analyseCaptures([capture(1), { name: "other.txt", bytes: short, sha256: null, part: "lamp" }], setup()),
      analyseCaptures([{ ...capture(1), part: "dark" }], setup()),
      analyseCaptures([capture(1)], setup({ mode: { kind: "earlier-axis", axis: "own" } })),
      analyseCaptures([capture(1)], setup({ lineListVersion: "1999.1" })),
      analyseCaptures([capture(1)], setup({ mode: { kind: "range", firstNm: 300, lastNm: 300 } })),
      analyseCaptures([{ name: "empty", bytes: new Uint8Array(0), sha256: null, part: "lamp" }], setup()),
    ];
    const codes = refusals.map(({ analysis }) => analysis.warnings[0]!.code);
    expect(codes).toEqual(["different-axes", "no-lines", "bad-settings", "bad-settings", "bad-settings", "empty-file"]);
    for (const { analysis, drawing } of refusals) {
      expect(analysis.outcome).toBe("refused");
      expect(analysis.reason).toMatch(/[.?]$/);
      expect(analysis.verdict).toBeNull();
      expect(drawing).toBeNull();
    }
  });

  it("is inconclusive, not refused, when no line stands out", () => {
    const random = createRandom(2);
    const text = Array.from({ length: 500 }, (_, i) => `${i}\t${(100 + random.normal()).toFixed(2)}`).join("\n");
    const { analysis } = analyseCapture(text, setup());
    expect(analysis.outcome).toBe("unidentified");
    expect(analysis.verdict!.verdict).toBe("inconclusive");
  });

  it("keeps saturated lines out of the verdict unless asked for", () => {
    const sim = simulateCapture({
      seed: 21,
      instrument: arraySpectrometer({ trueAxis: { kind: "polynomial", coefficients } }),
      lamp: {
        lines: mercury,
        strongestCounts: 150000,
        intensityScatter: 1,
        heightsCounts: { ...heightsCounts, "435.8335": 150000 },
      },
    });
    const plain = analyseCapture(sim.text, setup({ requiredLinesNm: [] })).analysis;
    const line = plain.lines.find((one) => one.wavelengthNm === 435.8335)!;
    expect(line).toMatchObject({ status: "refused", verdict: null, usedInAxis: false });
    expect(line.reason).toContain("Saturated");
    const asked = analyseCapture(sim.text, setup({ requiredLinesNm: [], useSaturated: true })).analysis;
    expect(asked.lines.find((one) => one.wavelengthNm === 435.8335)!.status).toBe("judged");
  });
});

describe("referenceMedium", () => {
  // NIST ASD 5.12, Hg I 546.0750 nm in air is 546.2268 nm in vacuum (row of the line library).
  it("turns air into vacuum and leaves standard air alone", () => {
    expect(referenceMedium("vacuum", null).referenceNm(546.075, "air")).toBeCloseTo(546.2268, 4);
    expect(referenceMedium("standard-air", null).referenceNm(546.075, "air")).toBe(546.075);
    expect(referenceMedium("standard-air", null).referenceNm(184.94994, "vacuum")).toBe(184.94994);
  });

  it("reads a 546 nm line 0.029 nm long at 1,600 m, with the weather's 10 hPa in the uncertainty", () => {
    const room = { temperatureC: 15, temperatureUncC: 0, pressurePa: null, altitudeM: 1600, relativeHumidity: 0 };
    const medium = referenceMedium("room-air", room);
    expect(medium.referenceNm(546.075, "air") - 546.075).toBeCloseTo(0.027, 2);
    // (n - 1) lambda dp/p = 2.77e-4 x 546 nm x 10 hPa / 1013 hPa = 0.0015 nm
    expect(medium.airUncNm(546.075, "air")).toBeCloseTo(0.0015, 4);
    expect(medium.airNote).toContain("1600 m");
    expect(referenceMedium("standard-air", room).airUncNm(546.075, "air")).toBe(0);
  });
});

describe("judgeSegments", () => {
  const line = (wavelengthNm: number, errorNm: number): LineResult =>
    ({ wavelengthNm, errorNm, errorExpandedUncNm: 0.1, status: "judged" }) as LineResult;

  it("gives the largest error for use, and says why a segment is not judged", () => {
    const lines = [line(250, 0.1), line(300, -0.3), line(400, 0.2), line(600, 0)];
    const segments = [
      { fromNm: 250, toNm: 400, toleranceNm: 0.5 },
      { fromNm: 500, toNm: 600, toleranceNm: 0.5 },
      { fromNm: 390, toNm: 700, toleranceNm: 0.5 },
    ];
    // A curve that is worst between the lines: error 0.2 nm at 350 nm, U = 2 x 0.03 nm.
    const curve = (fromNm: number, toNm: number): CurvePlace[] =>
      [fromNm, (fromNm + toNm) / 2, 350, toNm].map((wavelengthNm) => ({
        wavelengthNm,
        errorNm: 0.2 - Math.abs(wavelengthNm - 350) / 1000,
        uncNm: 0.03,
      }));
    const [inside, single, beyond] = judgeSegments(lines, segments, curve);
    expect(inside!.fitted!.errorForUseNm).toBeCloseTo(0.26, 12);
    expect(inside!.fitted).toMatchObject({ atNm: 350, errorNm: 0.2 });
    expect(beyond!.fitted).toBeNull();
    expect(inside).toMatchObject({ judgedCount: 3, worstLine: 1, notJudgedBecause: null });
    expect(inside!.largestErrorForUseNm).toBeCloseTo(0.4, 12);
    expect(single!.notJudgedBecause).toContain("one judged line");
    expect(beyond!.notJudgedBecause).toContain("beyond the outermost");
    expect(beyond!.largestErrorForUseNm).toBeNull();
  });
});
