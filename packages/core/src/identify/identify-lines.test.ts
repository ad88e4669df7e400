import { describe, expect, test } from "vitest";
import type { FittedLine, LineFlag, PixelAxis } from "../analysis/types.ts";
import { axisNm, axisUncNm } from "../dispersion/axis.ts";
import { builtInLineList } from "../linelist/built-in.ts";
import { type IdentifyInput, identifyLines } from "./identify-lines.ts";

/** 2,048 px array, 340.4 to 1,026 nm: the axis that the lines below are placed with. */
const coefficients = [340.4, 0.3815, -1.95e-5, -1.6e-9];
const nmAt = (px: number): number => coefficients.reduceRight((sum, c) => sum * px + c, 0);
function pixelOf(nm: number): number {
  let low = -500;
  let high = 3000;
  for (let n = 0; n < 80; n++) {
    const middle = (low + high) / 2;
    if (nmAt(middle) < nm) low = middle;
    else high = middle;
  }
  return low;
}

/** A found line at a wavelength; a deterministic scatter of up to 0.03 px stands for the fit's own error. */
function lineAt(nm: number, height = 1000, flags: LineFlag[] = [], position = pixelOf(nm)): FittedLine {
  const shift = 0.03 * Math.sin(nm * 37.7);
  return {
    position: position + shift,
    positionUnc: 0.03,
    fwhm: 4.2,
    fwhmUnc: 0.1,
    areaCounts: height * 4.5,
    peakHeightCounts: height,
    signalToNoise: height / 5,
    reducedChiSquare: 1,
    degreesOfFreedom: 8,
    windowFirst: 0,
    windowLast: 0,
    group: 0,
    flags,
  };
}

const mercury = [404.6565, 435.8335, 546.075, 576.961, 579.067];
const argon = [
  696.5431, 706.7218, 727.2936, 738.398, 763.5106, 794.8176, 811.5311, 826.4522, 852.1442, 866.7944, 912.2967, 922.4499,
  965.7786,
];
const neon = [
  585.24878, 588.1895, 594.4834, 602.99968, 607.43376, 609.6163, 614.30627, 616.35937, 626.64952, 633.44276, 638.29914,
  640.2248, 650.65277, 659.89528, 667.82766, 692.94672, 703.24128, 717.3938, 724.51665, 743.88981,
];
const mercuryArgon = [...mercury, ...argon].map((nm) => lineAt(nm));

const input = (lines: FittedLine[], more: Partial<IdentifyInput> = {}): IdentifyInput => ({
  lines: lines.slice().sort((a, b) => a.position - b.position),
  firstPosition: 0,
  lastPosition: 2047,
  axisKind: "pixel",
  medianFwhm: 4.2,
  elements: ["Hg", "Ar"],
  expectedLinesNm: [],
  lineList: builtInLineList,
  mode: { kind: "range", firstNm: 360, lastNm: 1010 },
  axisMeaning: "standard-air",
  toleranceNm: null,
  ...more,
});
const earlier = (offsetNm: number, scale: number): PixelAxis => ({
  coefficients: coefficients.map((c, k) => c * scale + (k === 0 ? offsetNm + (1 - scale) * nmAt(1023.5) : 0)),
  firstPx: 0,
  lastPx: 2047,
  chebyshevCovariance: null,
  degreesOfFreedom: null,
  meaning: "standard-air",
});
const namedNm = (result: ReturnType<typeof identifyLines>): (number | null)[] =>
  result.names.map((name) => name?.wavelengthNm ?? null);

describe("range", () => {
  test("18 lines of mercury and argon, ends wrong by 3 % and 2.5 % of the span: all named, the axis found", () => {
    const result = identifyLines(input(mercuryArgon));
    expect(result).toMatchObject({ outcome: "identified", reason: null });
    expect(namedNm(result)).toEqual([...mercury, ...argon]);
    expect(result.chanceProbability).toBeLessThan(1e-10);
    expect(result.margin).toBeGreaterThan(4);
    const { axis } = result;
    for (let px = 180; px <= 1850; px += 100) {
      expect(Math.abs(axisNm(axis as PixelAxis, px) - nmAt(px))).toBeLessThan(
        4 * (axisUncNm(axis as PixelAxis, px) as number) + 0.01,
      );
    }
  });

  test("the wavelength may fall with the pixel: the order of the ends says so", () => {
    const turned = mercuryArgon.map((line) => ({ ...line, position: 2047 - line.position }));
    const result = identifyLines(input(turned, { mode: { kind: "range", firstNm: 1010, lastNm: 360 } }));
    expect(namedNm(result)).toEqual([...mercury, ...argon].reverse());
    expect(axisNm(result.axis as PixelAxis, 2047 - 560)).toBeCloseTo(nmAt(560), 1);
  });

  test("four lines can't hold an axis with four unknowns: no name, however well they fit", () => {
    const result = identifyLines(input([435.8335, 546.075, 576.961, 696.5431].map((nm) => lineAt(nm))));
    expect(result.outcome).not.toBe("identified");
    expect(result.names).toEqual([null, null, null, null]);
    expect(result.reason).toMatch(/\S/);
  });
});

describe("earlier axis", () => {
  test.each([
    ["right", 0, 1],
    ["3 FWHM too long and 1 % too wide", 3 * 4.2 * 0.34, 1.01],
    ["3 FWHM too short and 1 % too narrow", -3 * 4.2 * 0.34, 0.99],
    ["wrong by 16 FWHM, followed by the wider search", 16 * 4.2 * 0.34, 1],
  ])("%s", (_title, offset, scale) => {
    const result = identifyLines(input(mercuryArgon, { mode: { kind: "earlier-axis", axis: earlier(offset, scale) } }));
    expect(result.outcome).toBe("identified");
    expect(namedNm(result)).toEqual([...mercury, ...argon]);
    expect(result.warnings.some((warning) => warning.code === "axis-far-off")).toBe(offset > 20);
  });

  test("the file's own wavelength axis, in air or in vacuum", () => {
    for (const meaning of ["standard-air", "vacuum"] as const) {
      const lines = neon.map((nm) => {
        const published = builtInLineList.lines.find((line) => line.element === "Ne" && line.wavelengthAirNm === nm);
        const shown = meaning === "vacuum" ? (published?.wavelengthVacuumNm as number) : nm;
        return { ...lineAt(nm, 1000, [], shown + 0.35), positionUnc: 0.01, fwhm: 0.5 };
      });
      const own = {
        mode: { kind: "earlier-axis", axis: "own" } as const,
        axisKind: "wavelength" as const,
        axisMeaning: meaning,
      };
      const result = identifyLines(
        input(lines, { ...own, elements: ["Ne"], firstPosition: 560, lastPosition: 760, medianFwhm: 0.5 }),
      );
      expect(namedNm(result)).toEqual(neon);
      expect(result.names.every((name) => name?.medium === "air")).toBe(true);
    }
  });
});

describe("what else it may be", () => {
  test("a wrong lamp is told: argon said, neon found", () => {
    const lines = neon.map((nm) => lineAt(nm));
    const result = identifyLines(
      input(lines, { elements: ["Ar"], mode: { kind: "earlier-axis", axis: earlier(0.5, 1) } }),
    );
    expect(result.outcome).toBe("unidentified");
    expect(result.reason).toMatch(/\d+ of \d+ strong lines belong to neon, not argon/);
    expect(result.names.every((name) => name === null)).toBe(true);
  });

  test("room light: mercury's lines between those of a neon lamp are left without a name and told", () => {
    const lines = [...neon, 435.8335, 546.075, 576.961, 579.067].map((nm) => lineAt(nm));
    const result = identifyLines(
      input(lines, { elements: ["Ne"], mode: { kind: "earlier-axis", axis: earlier(0.5, 1) } }),
    );
    expect(result.outcome).toBe("identified");
    expect(result.warnings.map((warning) => warning.code)).toContain("mercury-light");
    expect(namedNm(result).filter((nm) => nm !== null)).toEqual(neon);
    expect(result.otherGases[0]).toMatchObject({ element: "Hg" });
  });

  test("second order: two strong ultraviolet lines at twice their wavelength, with order 2", () => {
    const lines = [...mercury, ...argon, 2 * 365.0158, 2 * 404.6565].map((nm) =>
      lineAt(nm, nm === 2 * 404.6565 ? 300 : 1000),
    );
    const result = identifyLines(
      input([...lines, lineAt(365.0158)], { mode: { kind: "earlier-axis", axis: earlier(0.2, 1) } }),
    );
    const second = result.names.filter((name) => name?.order === 2).map((name) => name?.wavelengthNm);
    expect(result.outcome).toBe("identified");
    expect(second.every((nm) => nm === 365.0158 || nm === 404.6565)).toBe(true);
  });
});

describe("blends", () => {
  test("published lines closer than the width: centroid, half the spread / sqrt 3, both components told", () => {
    // Argon 772.3761 and 772.4207: 0.0446 nm apart, a thirtieth of the width: (0.0446 / 2) / sqrt 3 = 0.0129 nm
    const middle = (772.3761 + 772.4207) / 2;
    const result = identifyLines(input([...mercuryArgon, lineAt(middle)]));
    const blend = result.names.find((name) => (name?.blendOf.length ?? 0) > 1);
    expect(blend?.blendOf.map((line) => line.wavelengthAirNm)).toEqual([772.3761, 772.4207]);
    expect(Math.abs((blend?.wavelengthNm as number) - middle)).toBeLessThan(0.0224);
    expect(blend?.blendUncNm).toBeGreaterThan(0);
    // A little more than 0.0129: mercury's faint 772.88 nm may pull as well.
    expect(blend?.blendUncNm).toBeLessThan(0.02);
  });

  test("a blend open by more than a fifth of the tolerance is told", () => {
    const crowd = (365.0158 + 365.4842 + 366.3284) / 3;
    const lines = [...mercuryArgon, lineAt(crowd)];
    const result = identifyLines(
      input(lines, { toleranceNm: 0.3, mode: { kind: "earlier-axis", axis: earlier(0, 1) } }),
    );
    const name = result.names[0];
    // Either not named at all, or named as the blend and told: never one line pretending to be sure.
    if (name !== null && name !== undefined) {
      expect(name.blendOf.length).toBeGreaterThan(1);
      expect(result.warnings.map((warning) => warning.code)).toContain("blends");
    }
    expect(namedNm(result).filter((nm) => nm !== null && nm > 400)).toEqual([...mercury, ...argon]);
  });
});

describe("normal states of a first capture", () => {
  test("saturated lines, half a pixel off, are named; spikes never are", () => {
    const lines = mercuryArgon.map((line) => ({ ...line, flags: line.flags.slice() }));
    for (const k of [1, 2, 11]) {
      (lines[k] as FittedLine).flags.push("saturated");
      (lines[k] as FittedLine).position += 0.45;
    }
    const spike = { ...lineAt(0, 30000, ["spike"], 900), fwhm: 1 };
    const result = identifyLines(input([...lines, spike]));
    expect(namedNm(result).filter((nm) => nm !== null)).toEqual([...mercury, ...argon]);
  });

  test("a stray on no published line stays without a name", () => {
    const result = identifyLines(input([...mercuryArgon, lineAt(640), lineAt(500)]));
    expect(result.outcome).toBe("identified");
    expect(namedNm(result).filter((nm) => nm === null)).toHaveLength(2);
  });

  test("a procedure's line that is not there is missing, not invented", () => {
    const result = identifyLines(input(mercuryArgon.slice(0, -1), { expectedLinesNm: [404.6565, 965.7786] }));
    expect(result.missingLinesNm).toEqual([965.7786]);
  });

  test.each([
    ["no line", []],
    ["two lines", [lineAt(435.8335), lineAt(546.075)]],
  ])("%s: a sentence, no names, no crash", (_title, lines) => {
    const result = identifyLines(input(lines));
    expect(result).toMatchObject({ outcome: "unidentified", axis: null, chanceProbability: 1 });
    expect(result.reason).toMatch(/at least 3/);
  });

  test("an element that the list does not know", () => {
    expect(identifyLines(input(mercuryArgon, { elements: ["Uuo"] })).outcome).toBe("unidentified");
  });

  test("the same question gives the same answer", () => {
    expect(identifyLines(input(mercuryArgon))).toEqual(identifyLines(input(mercuryArgon)));
  });
});
