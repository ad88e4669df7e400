import { describe, expect, it } from "vitest";
import { normalCdf } from "../numeric/distributions.ts";
import { jointConformanceProbability, type JointError } from "./joint-conformance.ts";
import { conformanceProbability } from "./conformity.ts";
import { setupReproducibilityOf } from "./setup-reproducibility.ts";

function error(errorNm: number, own: number, shared: number[], toleranceNm = 0.5): JointError {
  let variance = own * own;
  for (const share of shared) variance += share * share;
  const uncNm = Math.sqrt(variance);
  return {
    errorNm,
    toleranceNm,
    ownUncNm: own,
    sharedUncNm: shared,
    conformanceProbability: conformanceProbability(
      { errorNm, uncNm, expandedUncNm: 2 * uncNm, effectiveDegreesOfFreedom: null },
      toleranceNm,
    ),
  };
}

describe("jointConformanceProbability", () => {
  it("is the product where lines share nothing, and that of the worst line where they share everything", () => {
    const apart = [error(0.4, 0.1, [0]), error(-0.35, 0.1, [0]), error(0.1, 0.1, [0])];
    const product = apart.reduce((value, one) => value * one.conformanceProbability, 1);
    expect(Math.abs(jointConformanceProbability(apart)! - product)).toBeLessThan(1e-12);
    const together = [error(0.4, 0, [0.1]), error(0.35, 0, [0.1]), error(0.1, 0, [0.1])];
    // All true errors are 0.4 + d, 0.35 + d, 0.1 + d: within +-0.5 together for -0.6 <= d <= 0.1.
    expect(Math.abs(jointConformanceProbability(together)! - (normalCdf(1) - normalCdf(-6)))).toBeLessThan(1e-8);
  });

  it("for two one-sided lines with correlation 1/2 at their limits is 1/4 + arcsin(1/2)/(2 pi) = 1/3", () => {
    const wide = 1000;
    const pair = [error(wide, 1, [1], wide), error(wide, 1, [1], wide)];
    expect(Math.abs(jointConformanceProbability(pair)! - 1 / 3)).toBeLessThan(1e-9);
  });

  it("one cause and the same cause in two names give the same; causes of different pattern give what integration over both gives", () => {
    const once = [error(0.42, 0.05, [0.1, 0]), error(0.38, 0.06, [0.1, 0]), error(-0.2, 0.05, [0.1, 0])];
    const split = [error(0.42, 0.05, [0.06, 0.08]), error(0.38, 0.06, [0.06, 0.08]), error(-0.2, 0.05, [0.06, 0.08])];
    expect(Math.abs(jointConformanceProbability(once)! - jointConformanceProbability(split)!)).toBeLessThan(1e-9);
    const crossed = [error(0.42, 0.05, [0.1, 0.02]), error(0.38, 0.06, [0.1, -0.03]), error(-0.4, 0.05, [0.1, 0.08])];
    let sum = 0;
    const step = 0.05;
    for (let z = -6; z <= 6 + 1e-9; z += step) {
      const given = crossed.map((one) =>
        error(one.errorNm + one.sharedUncNm[1]! * z, one.ownUncNm, [one.sharedUncNm[0]!]),
      );
      sum += (step * Math.exp(-0.5 * z * z) * jointConformanceProbability(given)!) / Math.sqrt(2 * Math.PI);
    }
    expect(Math.abs(jointConformanceProbability(crossed)! - sum)).toBeLessThan(3e-4);
  });

  it("says 1 without risk and null without lines", () => {
    expect(jointConformanceProbability([error(0, 0.01, [0.01]), error(0.1, 0.01, [0.01])])).toBe(1);
    expect(jointConformanceProbability([])).toBeNull();
  });
});

describe("setupReproducibilityOf", () => {
  const flat = (errors: number[], ownUncNm = 0) => errors.map((errorNm) => ({ errorNm, ownUncNm }));

  it("counts from eight checks on, with the degrees of freedom of successive differences", () => {
    const errors = [0, 0.02, 0, 0.02, 0, 0.02, 0, 0.02];
    expect(setupReproducibilityOf(flat(errors.slice(1)))).toBeNull();
    const found = setupReproducibilityOf(flat(errors))!;
    // Differences of 0.02 nm: sqrt(0.02² / 2), and 2 x 7² / (3 x 8 - 4) degrees of freedom.
    expect(Math.abs(found.valueNm - 0.02 / Math.sqrt(2))).toBeLessThan(1e-12);
    expect(Math.abs(found.degreesOfFreedom - 98 / 20)).toBeLessThan(1e-12);
  });

  it("leaves out a slow drift, adjustments, and what each check's own uncertainty explains", () => {
    const drifting = flat([0, 0.02, 0.01, 0.03, 0.02, 0.04, 0.03, 0.05].map((value, k) => value + 0.001 * k));
    expect(setupReproducibilityOf(drifting)!.valueNm).toBeLessThan(0.0125);
    const adjusted = flat([0, 0.02, 0, 0.02, 0, 0.02, 0, 0.02, 3, 3.02]).map((one, k) => ({
      ...one,
      isAfterAdjustment: k === 8,
    }));
    expect(Math.abs(setupReproducibilityOf(adjusted)!.valueNm - 0.02 / Math.sqrt(2))).toBeLessThan(1e-12);
    const noisy = setupReproducibilityOf(flat([0, 0.02, 0, 0.02, 0, 0.02, 0, 0.02], 0.01))!;
    expect(Math.abs(noisy.valueNm - 0.01)).toBeLessThan(1e-12);
  });
});
