import { describe, expect, test } from "vitest";
import { buildSetup, type SetupRecords } from "./setup.ts";
import { storableJson } from "./storable.ts";

const records: SetupRecords = {
  configuration: {
    axisKind: "pixel",
    axisMeaning: "standard-air",
    rangeFirstNm: 200,
    rangeLastNm: 850,
    optics: { pixels: 2001, fullScaleCounts: 65535 },
    setupReproducibilityNm: null,
    decisionRule: { kind: "guarded", r: 1 },
    warningShare: 0.75,
  },
  procedure: { code: "A-1", elements: ["Hg", "Ar", "D"], requiredLinesNm: [486.0, 656.1] },
  sources: [{ label: "HA-1", kind: "low-pressure-lamp", elements: ["Hg", "Ar"], laserLineNm: null }],
  draft: {
    sourceIds: [],
    minutesSinceSwitchOn: 30,
    temperatureC: 21.4,
    pressureHpa: null,
    relativeHumidity: null,
    fullScaleCounts: null,
    mode: "earlier-axis",
    rangeFirstNm: null,
    rangeLastNm: null,
    leftOut: [],
    note: "",
  },
  tolerance: [{ fromNm: 200, toNm: 850, toleranceNm: 0.4 }],
  axis: {
    coefficients: [200, 0.3, 1e-5],
    firstPx: 0,
    lastPx: 2000,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
    meaning: "standard-air",
  },
  altitudeM: 48,
  history: null,
  reading: { axisKind: "pixel", rows: 2001, first: 0, last: 2000 },
};
const setupWith = (change: Partial<SetupRecords>) => buildSetup({ ...records, ...change });
const problemOf = (change: Partial<SetupRecords>): string => {
  try {
    setupWith(change);
  } catch (error) {
    return (error as Error).message;
  }
  return "none";
};

describe("what the core is told", () => {
  test("set-up reproducibility: own history before what is stated before 0.1 px assumed", () => {
    // Dispersion at pixel 1000: 0.3 + 2 * 1e-5 * 1000 = 0.32 nm a pixel.
    expect(setupWith({}).setupReproducibility).toEqual({
      value: 0.1,
      unit: "px",
      basis: "assumed",
      degreesOfFreedom: null,
    });
    const stated = { configuration: { ...records.configuration, setupReproducibilityNm: 0.016 } };
    expect(setupWith(stated).setupReproducibility).toMatchObject({ basis: "stated", unit: "px" });
    expect(setupWith(stated).setupReproducibility!.value).toBeCloseTo(0.05, 12);
    const history = setupWith({
      ...stated,
      history: { reproducibilityNm: 0.032, degreesOfFreedom: 6 },
    }).setupReproducibility!;
    expect(history).toMatchObject({ basis: "history", degreesOfFreedom: 6 });
    expect(history.value).toBeCloseTo(0.1, 12);
  });

  test("on a wavelength axis a tenth of the step is assumed, in nm: 650 nm over 1300 steps gives 0.05", () => {
    const own = {
      configuration: { ...records.configuration, axisKind: "wavelength" },
      reading: { axisKind: "wavelength", rows: 1301, first: 850, last: 200 },
    };
    expect(setupWith(own)).toMatchObject({ mode: { kind: "earlier-axis", axis: "own" } });
    expect(setupWith(own).setupReproducibility!.value).toBeCloseTo(0.05, 12);
    expect(setupWith(own).setupReproducibility).toMatchObject({ unit: "nm", basis: "assumed" });
  });

  test("with no axis in force lines may be named by a range, or by the lamp's elements alone", () => {
    const range = { ...records.draft, mode: "range" as const, rangeFirstNm: 340, rangeLastNm: 1020 };
    expect(setupWith({ axis: null, draft: range }).mode).toEqual({ kind: "range", firstNm: 340, lastNm: 1020 });
    const alone = { ...records.draft, mode: "none" as const };
    expect(setupWith({ axis: null, draft: alone }).mode).toEqual({ kind: "none" });
  });

  test("the draft's full scale before the detector's own; no barometer: the lab's altitude", () => {
    expect(setupWith({}).reading).toEqual({ fullScaleCounts: 65535 });
    expect(setupWith({ draft: { ...records.draft, fullScaleCounts: 4095 } }).reading).toEqual({
      fullScaleCounts: 4095,
    });
    expect(setupWith({}).room).toMatchObject({ temperatureC: 21.4, pressurePa: null, altitudeM: 48 });
    expect(setupWith({ draft: { ...records.draft, pressureHpa: 1012 } }).room!.pressurePa).toBe(101200);
  });

  test("a required line counts where the source has it: deuterium's two, none with mercury and argon", () => {
    expect(setupWith({}).requiredLinesNm).toEqual([]);
    const deuterium = setupWith({ sources: [{ label: "D-1", kind: "built-in", elements: ["D"], laserLineNm: null }] });
    // Derived from hydrogen by the ratio of reduced masses (docs/line-list.md): 486.0011 and 656.1005 nm.
    expect(deuterium.requiredLinesNm).toEqual([486.0011, 656.1005]);
  });

  test("a laser is expected at its own line alone", () => {
    const setup = setupWith({ sources: [{ label: "L-1", kind: "laser", elements: [], laserLineNm: 632.81646 }] });
    expect(setup).toMatchObject({ elements: ["laser"], expectedLinesNm: [632.81646] });
  });

  test("what does not go together is refused in words, with what to do", () => {
    expect(problemOf({ sources: [] })).toMatch(/Name the source first/);
    expect(
      problemOf({ sources: [{ label: "KR-1", kind: "low-pressure-lamp", elements: ["Kr"], laserLineNm: null }] }),
    ).toMatch(/KR-1 has lines of Kr; procedure A-1 is made for Hg, Ar, D/);
    expect(
      problemOf({ sources: [{ label: "HO-1", kind: "absorption-standard", elements: ["Ho"], laserLineNm: null }] }),
    ).toMatch(/absorption standard/);
    expect(problemOf({ axis: null })).toMatch(/No axis is in force/);
    expect(problemOf({ reading: { axisKind: "wavelength", rows: 10, first: 1, last: 2 } })).toMatch(/counts pixels/);
  });
});

test("what a damaged header holds is made storable; NaN becomes null, the rest stays", () => {
  const half = "\ud83d";
  expect(storableJson({ "a\u0000": `x\u0000${half}y😀`, list: [Number.NaN, 1.5, "\u202f"] })).toEqual({
    "a\ufffd": "x\ufffd\ufffdy😀",
    list: [null, 1.5, "\u202f"],
  });
});
