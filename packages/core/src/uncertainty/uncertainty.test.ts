import { describe, expect, it } from "vitest";
import type { BudgetEntry } from "../analysis/types.ts";
import { combineContributions, coverageFactorFor, type Contribution } from "./budget.ts";
import { conformanceProbability, judgeError, summarise, toleranceAt, type JudgedError } from "./conformity.ts";
import { roundResult } from "./rounding.ts";

function entry(
  contribution: BudgetEntry["contribution"],
  uncNm: number,
  degreesOfFreedom: number | null,
): Contribution {
  return { contribution, uncNm, degreesOfFreedom, sensitivity: 1, assumed: false, note: "" };
}

function error(errorNm: number, uncNm: number, effectiveDegreesOfFreedom: number | null = null): JudgedError {
  return {
    errorNm,
    uncNm,
    expandedUncNm: coverageFactorFor(effectiveDegreesOfFreedom) * uncNm,
    effectiveDegreesOfFreedom,
  };
}

describe("combineContributions", () => {
  // JCGM 100:2008, annex H.1 (end gauge), table H.1: component sizes as read in the documentation of a public uncertainty library;
  // the printed 32 nm and 16 effective degrees of freedom are from memory, and follow from the components.
  it("combines the end-gauge budget of the GUM's annex H.1", () => {
    const combined = combineContributions([
      entry("reference", 25, 18),
      entry("fit", 9.7, 25.6),
      entry("set-up", 2.9, 50),
      entry("temperature", 16.6, 2),
    ]);
    expect(Math.round(combined.uncNm)).toBe(32);
    expect(Math.floor(combined.effectiveDegreesOfFreedom!)).toBe(16);
    expect(combined.budget[0]!.contribution).toBe("reference");
    expect(combined.budget.reduce((sum, one) => sum + one.shareOfVariance, 0)).toBeCloseTo(1, 12);
  });

  // JCGM 100:2008, table G.2, column 95.45 %: printed factors as remembered, not read; computing them gives the same digits.
  it.each([
    [1, 13.97],
    [2, 4.53],
    [3, 3.31],
    [4, 2.87],
    [5, 2.65],
    [6, 2.52],
    [7, 2.43],
    [8, 2.37],
    [9, 2.32],
    [10, 2.28],
    [15, 2.18],
    [20, 2.13],
    [30, 2.09],
    [50, 2.05],
    [100, 2.025],
  ])("has the GUM's coverage factor for %d degrees of freedom", (dof, factor) => {
    expect(Math.abs(coverageFactorFor(dof) - factor)).toBeLessThanOrEqual(0.005);
  });

  it("uses k = 2 for infinite degrees of freedom and leaves out what is zero", () => {
    const combined = combineContributions([
      entry("fit", 0.003, null),
      entry("reference", 0.004, null),
      entry("air", 0, 3),
    ]);
    expect(combined.uncNm).toBeCloseTo(0.005, 15);
    expect(combined.expandedUncNm).toBeCloseTo(0.01, 15);
    expect(combined.effectiveDegreesOfFreedom).toBeNull();
    expect(combined.budget).toHaveLength(2);
  });

  it("truncates effective degrees of freedom (GUM G.4.1)", () => {
    expect(coverageFactorFor(16.7)).toBe(coverageFactorFor(16));
    expect(coverageFactorFor(0.4)).toBe(coverageFactorFor(1));
  });
});

describe("conformity", () => {
  const guarded = { kind: "guarded", r: 1 } as const;
  const simple = { kind: "simple" } as const;

  it("passes up to T - w, fails above T, and is inconclusive between (w = U)", () => {
    const u = 0.05; // U = 0.1, so the limit of a pass is 0.4
    expect(judgeError(error(0.4, u), 0.5, guarded, 0.75).verdict).toBe("pass");
    expect(judgeError(error(-0.4001, u), 0.5, guarded, 0.75).verdict).toBe("inconclusive");
    expect(judgeError(error(0.5, u), 0.5, guarded, 0.75).verdict).toBe("inconclusive");
    expect(judgeError(error(-0.5001, u), 0.5, guarded, 0.75).verdict).toBe("fail");
    expect(judgeError(error(0.5, u), 0.5, simple, 0.75).verdict).toBe("pass");
    expect(judgeError(error(0.0, 0.3), 0.5, guarded, 0.75).verdict).toBe("inconclusive");
    expect(judgeError(error(0.4, u), 0.5, { kind: "guarded", r: 0.5 }, 0.75).guardBandNm).toBeCloseTo(0.05, 12);
  });

  it("calls a pass above the warning share near the limit", () => {
    expect(judgeError(error(0.38, 0.01), 0.5, guarded, 0.75).nearLimit).toBe(true);
    expect(judgeError(error(0.37, 0.01), 0.5, guarded, 0.75).nearLimit).toBe(false);
    expect(judgeError(error(0.495, 0.01), 0.5, guarded, 0.75).nearLimit).toBe(false);
  });

  it("gives the normal probability of conformance", () => {
    // At the limit itself half of the distribution is inside (the other limit is 100 u away).
    expect(conformanceProbability(error(0.5, 0.01), 0.5)).toBeCloseTo(0.5, 9);
    expect(conformanceProbability(error(0, 0.25), 0.5)).toBeCloseTo(0.954499736, 8);
    expect(conformanceProbability(error(0, 0.25, 5), 0.5)).toBeLessThan(0.92);
  });

  it("takes the tighter of two segments on their shared edge, and none outside", () => {
    const segments = [
      { fromNm: 200, toNm: 400, toleranceNm: 0.5 },
      { fromNm: 400, toNm: 800, toleranceNm: 0.3 },
    ];
    expect(toleranceAt(segments, 400)).toBe(0.3);
    expect(toleranceAt(segments, 253.65)).toBe(0.5);
    expect(toleranceAt(segments, 900)).toBeNull();
  });

  it("takes the worst line's verdict, and no pass while something required is missing", () => {
    const judged = [0.1, 0.45, 0.2].map((e, line) => ({
      line,
      judgement: judgeError(error(e, 0.01), 0.5, simple, 0.75),
    }));
    expect(summarise(judged, 3, [])).toMatchObject({ verdict: "pass", worstLine: 1, nearLimit: true, judgedCount: 3 });
    expect(summarise(judged, 3, ["The required line 546.075 nm was not found."]).verdict).toBe("inconclusive");
    const failing = [...judged, { line: 3, judgement: judgeError(error(0.6, 0.01), 0.5, simple, 0.75) }];
    expect(summarise(failing, 4, ["something is missing"])).toMatchObject({ verdict: "fail", worstLine: 3 });
    expect(summarise([], 2, [])).toMatchObject({ verdict: "inconclusive", worstLine: null });
  });
});

describe("roundResult", () => {
  it.each([
    [0.12345, 0.0345, "0.123", "0.035"], // up: 0.034 would lose 1.4 %, but 0.0345 is nearer 0.035 (half up)
    [0.12345, 0.0341, "0.123", "0.034"],
    [1.23456, 0.00994, "1.2346", "0.0099"],
    [1.23456, 0.00996, "1.235", "0.010"],
    [-0.0004, 0.012, "0.000", "0.012"],
    [546.0748, 0.2, "546.07", "0.20"],
    [1234.6, 123, "1230", "120"],
    [0.125, 0.1, "0.12", "0.10"],
  ])("rounds %d ± %d to %s ± %s", (value, unc, valueText, uncText) => {
    const rounded = roundResult(value, unc);
    expect(rounded.value).toBe(valueText);
    expect(rounded.expandedUnc).toBe(uncText);
  });

  it("never states an uncertainty more than 5 % too small", () => {
    for (let i = 1; i < 4000; i += 1) {
      const unc = i * 0.000137;
      expect(Number(roundResult(1, unc).expandedUnc)).toBeGreaterThanOrEqual(unc * 0.95);
    }
  });
});
