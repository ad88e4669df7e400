/**
 * Conformity against JCGM 106:2012, ILAC-G8:09/2019 and the relations of ANSI/NCSL Z540.3. JCGM 106 and the guard-band formula are from memory:
 * arithmetic checks, each figure computed from the inputs named beside it. Of ILAC-G8 the rows marked `read` were read.
 */
import { describe, expect, it } from "vitest";
import { normalCdf, normalQuantile } from "../../packages/core/src/numeric/index.ts";
import { conformanceProbability, judgeError } from "../../packages/core/src/uncertainty/conformity.ts";
import {
  acceptanceLimitAfterDobbert,
  acceptanceLimitByRootDifference,
  globalRisks,
  riskOnAcceptanceLimit,
} from "../../packages/core/src/uncertainty/global-risk.ts";
import fixture from "../fixtures/gum/budgets-and-conformity.json" with { type: "json" };

const normal = (errorNm: number, uncNm: number) => ({
  errorNm,
  uncNm,
  expandedUncNm: 2 * uncNm,
  effectiveDegreesOfFreedom: null,
});

describe("JCGM 106:2012 (from memory: arithmetic checks)", () => {
  const [table, zener, radar, resistors] = fixture.conformity_JCGM106.examples;

  it("z against probability of conformance, one-sided", () => {
    for (const [probability, z] of Object.entries(table!.published as unknown as Record<string, number>)) {
      expect(normalQuantile(Number(probability)).toFixed(2)).toBe(z.toFixed(2));
    }
  });

  it("Zener diode: 92 % below the upper limit", () => {
    const { y_V, u_V, upperLimit_V } = zener!.inputs as { y_V: number; u_V: number; upperLimit_V: number };
    const pc = normalCdf((upperLimit_V - y_V) / u_V);
    expect(Math.abs(pc - (zener!.computed as { pc: number }).pc)).toBeLessThan(1e-9);
    expect(pc.toFixed(2)).toBe("0.92");
  });

  it("speed by radar: action from 107 km/h for 99.9 % certainty", () => {
    const { limit_kmh, relativeStandardUncertainty, requiredProbability } = radar!.inputs as unknown as Record<
      string,
      number
    >;
    const speed = limit_kmh! / (1 - normalQuantile(requiredProbability!) * relativeStandardUncertainty!);
    expect(Math.round(speed)).toBe(107);
    expect(Math.abs(speed - (radar!.computed as { actionSpeed_kmh: number }).actionSpeed_kmh)).toBeLessThan(1e-3);
  });

  it("two-sided tolerances: probability of conformance and specific risk", () => {
    for (const { y, u, TU, pc } of fixture.conformity_JCGM106.plainCases.rows) {
      expect(Math.abs(conformanceProbability(normal(y, u), TU) - pc)).toBeLessThan(1e-12);
      const judged = judgeError(normal(y, u), TU, { kind: "simple" }, 0.75);
      expect(judged.verdict).toBe("pass");
      expect(Math.abs(judged.specificRisk - (1 - pc))).toBeLessThan(1e-12);
    }
    const failed = judgeError(normal(0.6, 0.1), 0.5, { kind: "simple" }, 0.75);
    expect(failed.verdict).toBe("fail");
    expect(Math.abs(failed.specificRisk - normalCdf(-1))).toBeLessThan(1e-9);
  });

  it("resistors: global risks with no, a 1 u and a 2 u guard band", () => {
    const { processMean_ohm, processSd_ohm, TL_ohm, TU_ohm, u_m_ohm } = resistors!.inputs as unknown as Record<
      string,
      number
    >;
    const computed = resistors!.computed as unknown as Record<string, { consumerRisk: number; producerRisk: number }>;
    (["simpleAcceptance", "guardBand_1u", "guardBand_2u"] as const).forEach((rule, k) => {
      const risks = globalRisks({
        processMean: processMean_ohm!,
        processSd: processSd_ohm!,
        unc: u_m_ohm!,
        toleranceFrom: TL_ohm!,
        toleranceTo: TU_ohm!,
        acceptFrom: TL_ohm! + k * u_m_ohm!,
        acceptTo: TU_ohm! - k * u_m_ohm!,
      });
      expect(Math.abs(risks.falseAcceptance - computed[rule]!.consumerRisk)).toBeLessThan(2e-9);
      expect(Math.abs(risks.falseRejection - computed[rule]!.producerRisk)).toBeLessThan(2e-9);
      expect(Math.abs(risks.inTolerance - (computed.probabilityInTolerance as unknown as number))).toBeLessThan(1e-12);
    });
  });
});

describe("ILAC-G8:09/2019, table 1: risk of a result on the acceptance limit", () => {
  const bounds: Record<string, number> = {
    "6 sigma": 1e-6,
    "3 sigma": 0.0016,
    "rule of ILAC-G8:2009": 0.025,
    "ISO 14253-1:2017 default": 0.05,
    "simple acceptance": 0.5,
    uncritical: 0.025,
  };
  const rows = fixture.decisionRules_ILACG8.table1.filter((row) => row.computed_k2 !== undefined);

  it.each(rows.map((row) => [row.name, row.read ? "read" : "from memory", row] as const))("%s (%s)", (name, _, row) => {
    const r = Number(row.w_over_U);
    const risk = riskOnAcceptanceLimit(r, 2);
    expect(Math.abs(risk / row.computed_k2! - 1)).toBeLessThan(1e-10);
    expect(risk).toBeLessThanOrEqual(bounds[name]!);
    expect(Math.abs(riskOnAcceptanceLimit(r, 1.96) / row.computed_k196! - 1)).toBeLessThan(1e-10);
    if (r < 0) return;
    // The same through the rule as it judges: a pass on the limit T - rU has that specific risk, the other limit being far.
    const T = 100;
    const judged = judgeError(normal(T - r * 2 * (1 - 1e-12), 1), T, { kind: "guarded", r }, 1);
    expect(Math.abs(judged.specificRisk - risk)).toBeLessThan(1e-9);
  });
});

describe("global risks after ANSI/NCSL Z540.3 (relations read, guard band and the 4:1 figures from memory)", () => {
  const at = (tur: number, inTolerance: number, limit: number) =>
    globalRisks({
      processMean: 0,
      processSd: 1 / normalQuantile((1 + inTolerance) / 2),
      unc: 1 / (2 * tur),
      toleranceFrom: -1,
      toleranceTo: 1,
      acceptFrom: -limit,
      acceptTo: limit,
    });
  const rows = fixture.globalRiskFixtures.rows.map((row) => [row.TUR, row.inToleranceFraction, row.rule, row] as const);

  it.each(rows)("test uncertainty ratio %d, %d in tolerance, %s", (tur, share, rule, row) => {
    const limit =
      rule === "simple acceptance"
        ? 1
        : rule.startsWith("guard band")
          ? acceptanceLimitAfterDobbert(1, 1 / tur)
          : acceptanceLimitByRootDifference(1, 1 / tur);
    expect(Math.abs(limit - row.A)).toBeLessThan(1e-8);
    const risks = at(tur, share, limit);
    expect(Math.abs(risks.falseAcceptance - row.PFA)).toBeLessThan(1e-8);
    expect(Math.abs(risks.falseRejection - row.PFR)).toBeLessThan(1e-8);
  });

  it("4:1 with 95 % in tolerance: 0.8 and 1.5 % as widely quoted (truncated there)", () => {
    const risks = at(4, 0.95, 1);
    expect(Math.trunc(1000 * risks.falseAcceptance) / 10).toBe(
      fixture.globalRiskFixtures.published.tur4_q95.PFA_percent,
    );
    expect(Math.trunc(1000 * risks.falseRejection) / 10).toBe(
      fixture.globalRiskFixtures.published.tur4_q95.PFR_percent,
    );
  });

  it("that guard band keeps the false acceptance under 2 % whatever the share in tolerance", () => {
    for (const tur of [1, 2, 4]) {
      for (let share = 0.3; share < 0.995; share += 0.02) {
        expect(at(tur, share, acceptanceLimitAfterDobbert(1, 1 / tur)).falseAcceptance).toBeLessThan(0.02);
      }
    }
  });
});
