/** Rules for intervals against the worked examples; the rules are from memory of their documents, so these are arithmetic checks. */
import { describe, expect, it } from "vitest";
import { proposeInterval, type IntervalSettings } from "../../packages/core/src/interval/propose-interval.ts";
import {
  commonSteps,
  daysOfUseLeft,
  driftLineInterval,
  exponentialInterval,
  reliabilityFromCounts,
  simpleResponse,
  simpleResponseReliability,
  staircase,
} from "../../packages/core/src/interval/rules.ts";
import intervals from "../fixtures/intervals/intervals.json" with { type: "json" };
import { createDraws, simulateHistory, toDriftChecks } from "./support/drift-history.ts";

describe("rules (arithmetic checks, from memory)", () => {
  it.each(intervals.simpleResponse.examples)("simple response tends to $R for a = $a, b = $b", ({ a, b, R }) => {
    expect(simpleResponseReliability(a, b)).toBeCloseTo(R, 6);
    // At that share in tolerance, many moves leave the interval where it was.
    const moved = simpleResponse(1, true, a, b) ** R * simpleResponse(1, false, a, b) ** (1 - R);
    expect(moved).toBeCloseTo(1, 5);
  });

  it.each(intervals.exponentialReliability.examples)(
    "exponential reliability: $intervalNow at $observed becomes $newInterval for $target",
    ({ intervalNow, observed, target, newInterval }) => {
      expect(exponentialInterval(intervalNow, observed, target)).toBeCloseTo(newInterval, 6);
    },
  );

  it.each(intervals.driftLine.examples)("drift line: $t_months months from $b_nm nm", (row) => {
    expect(driftLineInterval(row.T_nm, row.g_nm, row.b_nm, row.d_nmPerMonth)).toBeCloseTo(row.t_months, 10);
    expect(driftLineInterval(row.T_nm, row.g_nm, -row.b_nm, -row.d_nmPerMonth)).toBeCloseTo(row.t_months, 10);
  });

  it("staircase with the document's share of 80 % and the steps of common practice", () => {
    expect(commonSteps.share).toBe(intervals.staircase.share);
    const well = { shareOfLimit: 0.5 };
    expect(staircase(365, [well, well, well])).toEqual({ interval: 456.25, move: "longer" });
    expect(staircase(365, [well, well])).toEqual({ interval: 365, move: "kept" });
    expect(staircase(365, [well, well, { shareOfLimit: 0.9 }])).toEqual({ interval: 365, move: "kept" });
    expect(staircase(365, [well, well, { shareOfLimit: 1.2 }])).toEqual({ interval: 182.5, move: "shorter" });
  });

  it("counts use, and never says that all or none will be in tolerance", () => {
    expect(daysOfUseLeft(2000, 500, 5)).toBe(300);
    expect(daysOfUseLeft(2000, 2500, 5)).toBe(0);
    expect(daysOfUseLeft(2000, 500, 0)).toBe(Infinity);
    expect(reliabilityFromCounts(10, 10)).toBeCloseTo(10.5 / 11, 12);
    expect(reliabilityFromCounts(0, 3)).toBeGreaterThan(0);
  });
});

describe("proposal", () => {
  const settings = (toleranceNm: number): IntervalSettings => ({
    presentDays: 365,
    method: "reliability-target",
    tolerance: [{ fromNm: 0, toNm: 1e5, toleranceNm }],
  });
  const drifting = simulateHistory("drift", createDraws(11), {
    checks: [24, 24],
    trendSizes: [10, 10],
    stepSizes: [5, 5],
    oddSizes: [10, 10],
    spacingDays: [30, 31],
    jitter: 0,
  });
  const history = toDriftChecks(drifting);
  const last = drifting.checks.at(-1)!.day;
  const errorAt = (day: number): number => {
    const { midErrorNm, scaleErrorNm } = drifting.truth(day);
    return Math.abs(midErrorNm) + Math.abs(scaleErrorNm) / 2;
  };

  it("shortens by itself to where a drift still keeps the target, also when another rule would keep the interval", () => {
    const toleranceNm = errorAt(last + 180);
    const proposal = proposeInterval(history, settings(toleranceNm));
    expect(proposal.direction).toBe("shorter");
    expect(proposal.proposedDays).toBeLessThan(180);
    expect(proposal.proposedDays).toBeGreaterThan(60);
    expect(proposal.reliabilityAtProposed).toBeGreaterThanOrEqual(0.95);
    expect(proposal.reliabilityAtPresent).toBeLessThan(0.95);
    const well = [{ shareOfLimit: 0.3 }, { shareOfLimit: 0.3 }, { shareOfLimit: 0.3 }];
    const held = proposeInterval(history, { ...settings(toleranceNm), method: "staircase", findings: well });
    expect(held.rules.find((rule) => rule.method === "staircase")!.days).toBeCloseTo(456.25, 10);
    expect(held.proposedDays).toBe(proposal.proposedDays);
    expect(held.heldBy).toBe("evidence");
  });

  it("lengthens by no more than the step, with room enough", () => {
    const proposal = proposeInterval(history, settings(20 * errorAt(last)));
    expect(proposal).toMatchObject({ direction: "longer", proposedDays: 547, heldBy: "longest-step" });
    expect(proposal.why).toMatch(/^Lengthen to 547 days \(reliability target: /);
  });

  it("does not lengthen on too few checks, and says so", () => {
    const well = [{ shareOfLimit: 0.3 }, { shareOfLimit: 0.3 }, { shareOfLimit: 0.3 }];
    const few = proposeInterval(history.slice(0, 4), { ...settings(1), method: "staircase", findings: well });
    expect(few).toMatchObject({ direction: "kept", proposedDays: 365, heldBy: "too-few-checks" });
    const out = proposeInterval([], { ...settings(1), method: "staircase", findings: [{ shareOfLimit: 1.4 }] });
    expect(out).toMatchObject({ direction: "shorter", proposedDays: 182, dueOn: null });
  });
});
