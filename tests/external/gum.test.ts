/**
 * Budgets against worked examples of JCGM 100:2008 (the GUM). Figures that were read are published values; where `basis` says memory the
 * same test is an arithmetic check: it shows that the formula gives what the printed inputs give, not that the document prints it.
 */
import { describe, expect, it } from "vitest";
import { studentQuantile } from "../../packages/core/src/numeric/index.ts";
import {
  combineContributions,
  coverageFactorFor,
  type Contribution,
} from "../../packages/core/src/uncertainty/budget.ts";
import fixture from "../fixtures/gum/budgets-and-conformity.json" with { type: "json" };

function contribution(uncNm: number, degreesOfFreedom: number | null): Contribution {
  return { contribution: "fit", uncNm, degreesOfFreedom, sensitivity: 1, assumed: false, note: "" };
}

describe("end gauge, annex H.1 (components read; printed roundings, degrees of freedom and U from memory: arithmetic checks)", () => {
  const { components, computed, published } = fixture.endGauge;
  const combined = combineContributions(
    components
      .filter((one) => one.contribution_nm > 0)
      .map((one) => contribution(one.contribution_nm, one.dof as number | null)),
  );

  it("combines the measured difference from its three parts: 9.7 nm with 25.6 degrees of freedom, both read", () => {
    const { parts } = components[1]!;
    const difference = combineContributions(
      parts!.map((part) => contribution((part as { u_nm: number }).u_nm, (part as { dof: number }).dof)),
    );
    expect(Math.abs(difference.uncNm - computed.u_d_nm)).toBeLessThan(1e-9);
    expect(difference.uncNm.toFixed(1)).toBe("9.7");
    // The document prints 25.6, from unrounded parts; the rounded ones give 25.45.
    expect(Math.abs(difference.effectiveDegreesOfFreedom! - computed.dof_d)).toBeLessThan(5e-4);
  });

  /** The components before the document rounded them, with the degrees of freedom of the measured difference at full precision. */
  const exact = combineContributions(
    components
      .filter((one) => one.contribution_nm > 0)
      .map((one) => {
        if (one.name.startsWith("u(d)")) return contribution(computed.u_d_nm, computed.dof_d);
        if (one.name.startsWith("u(deltaAlpha)")) return contribution((50000623 * 0.1 * 1e-6) / Math.sqrt(3), 50);
        if (one.name.startsWith("u(deltaTheta)")) {
          return contribution((50000623 * 1.15e-5 * 0.05) / Math.sqrt(3), 2);
        }
        return contribution(one.contribution_nm, one.dof as number);
      }),
  );

  it("combined variance 1002 nm², uc = 32 nm", () => {
    // The components as tabulated are rounded: 25² + 9.7² + 2.9² + 16.6² = 1003.1; the unrounded ones give 1002.6.
    expect(Math.abs(combined.uncNm * combined.uncNm - 1003.06)).toBeLessThan(0.01);
    expect(Math.round(combined.uncNm)).toBe(published.uc_nm);
    expect(Math.abs(exact.uncNm * exact.uncNm - computed.uc2_nm2)).toBeLessThan(0.01);
    expect(Math.abs(exact.uncNm - computed.uc_nm)).toBeLessThan(2e-4);
  });

  it("effective degrees of freedom 16.7, truncated 16, t99 = 2.92, U99 = 93 nm", () => {
    // 16.75 from the unrounded components: the document prints 16.7, cut off and not rounded.
    expect(Math.abs(exact.effectiveDegreesOfFreedom! - computed.effectiveDof)).toBeLessThan(5e-6);
    expect(Math.trunc(10 * exact.effectiveDegreesOfFreedom!) / 10).toBe(published.effectiveDof);
    expect(Math.floor(combined.effectiveDegreesOfFreedom!)).toBe(published.effectiveDofTruncated);
    const t = studentQuantile(0.995, published.effectiveDofTruncated);
    expect(t.toFixed(2)).toBe(published.t99_16.toFixed(2));
    expect(Math.abs(t - computed.t99_16)).toBeLessThan(5e-7);
    expect(Math.trunc(t * published.uc_nm)).toBe(published.U99_nm);
  });
});

describe("Welch-Satterthwaite, G.4.1 (from memory: an arithmetic check)", () => {
  it("relative uncertainties 0.25, 0.57, 0.82 % of 10, 5 and 15 observations", () => {
    const { relativeU_percent, dof, computed, published } = fixture.welchSatterthwaite;
    const combined = combineContributions(relativeU_percent.map((u, k) => contribution(u, dof[k]!)));
    expect(Math.abs(combined.uncNm - computed.relativeUc_percent)).toBeLessThan(1e-9);
    expect(combined.uncNm.toFixed(2)).toBe("1.03");
    expect(Math.abs(combined.effectiveDegreesOfFreedom! - computed.effectiveDof_from_unrounded)).toBeLessThan(1e-6);
    expect(combined.effectiveDegreesOfFreedom!.toFixed(1)).toBe(published.effectiveDof.toFixed(1));
    expect((studentQuantile(0.975, 19) * combined.uncNm).toFixed(1)).toBe("2.2");
  });
});

describe("coverage factors, table G.2 (computed from Student's distribution; a dozen printed entries from memory)", () => {
  const shares: Record<string, number> = {
    "68.27": 0.682689492137086,
    "90": 0.9,
    "95": 0.95,
    "95.45": 0.954499736103642,
    "99": 0.99,
    "99.73": 0.99730020393674,
  };

  it("every row and column to the digits given", () => {
    for (const row of fixture.coverageFactors.rows) {
      const dof = row.dof === "infinity" ? Number.POSITIVE_INFINITY : Number(row.dof);
      for (const [column, share] of Object.entries(shares)) {
        const value = (row as unknown as Record<string, number>)[column]!;
        const t = studentQuantile((1 + share) / 2, dof);
        expect(Math.abs(t - value), `${row.dof}, ${column} %`).toBeLessThan(6e-7 * Math.max(1, Math.abs(value)));
      }
      const k = coverageFactorFor(dof === Number.POSITIVE_INFINITY ? null : dof);
      expect(Math.abs(k - row["95.45"]), `k of ${row.dof}`).toBeLessThan(1e-5 * row["95.45"]);
    }
  });

  it("the printed entries to their two decimals", () => {
    for (const [dof, column, printed] of fixture.coverageFactors.rememberedPrintedEntries) {
      const t = studentQuantile(
        (1 + shares[column as string]!) / 2,
        dof === "infinity" ? Number.POSITIVE_INFINITY : Number(dof),
      );
      const digits = String(printed).split(".")[1]?.length ?? 0;
      expect(Math.abs(t - Number(printed)), `${dof}, ${column} %`).toBeLessThanOrEqual(0.5 * 10 ** -digits + 1e-9);
    }
  });

  it("goes over from exact quantiles to their expansion without a step", () => {
    for (const dof of [399, 400, 401, 402, 1000, 99_999]) {
      expect(Math.abs(coverageFactorFor(dof) - studentQuantile((1 + shares["95.45"]!) / 2, dof))).toBeLessThan(1e-9);
    }
  });
});
