/**
 * Simulated captures with known truth (the simulator shares nothing with the fitter): stated intervals hold the truth as often as they
 * say, no line is named wrongly, and a wrong lamp is refused.
 */
import { describe, expect, it } from "vitest";
import { analyseCapture, type Analysis, type LineResult } from "../../packages/core/src/index.ts";
import type { TrueLine } from "../../packages/core/src/testing/index.ts";
import { evaluate } from "./support/real-capture.ts";
import { simulatedCheck, type SimulatedCheck } from "./support/simulated-check.ts";

const stated = 0.9545;

interface Tally {
  captures: number;
  identified: number;
  named: number;
  wrong: string[];
  judged: number;
  covered: number;
}

function tallyOf(captures: number, mode: "earlier-axis" | "range", firstSeed: number): Tally {
  const tally: Tally = { captures, identified: 0, named: 0, wrong: [], judged: 0, covered: 0 };
  for (let seed = firstSeed; seed < firstSeed + captures; seed += 1) {
    const check = simulatedCheck(seed, mode);
    const { analysis } = analyseCapture(check.sim.text, check.setup);
    if (analysis.outcome === "identified") tally.identified += 1;
    for (const line of analysis.lines) count(tally, line, check, analysis, seed);
  }
  return tally;
}

/** A name is right when the lamp's own line of that name lies within a quarter of a width, of a blend one component within its reach. */
function count(tally: Tally, line: LineResult, check: SimulatedCheck, analysis: Analysis, seed: number): void {
  if (line.wavelengthNm === null) return;
  tally.named += 1;
  const names = [line.wavelengthNm, ...line.blendOfNm];
  const reach = line.blendOfNm.length > 1 ? 0.75 : 0.25;
  const near = check.sim.truth.filter(
    (one) => Math.abs(one.position - line.position) < reach * one.fwhm + 3 * line.positionUnc,
  );
  if (!near.some((one) => names.some((nm) => Math.abs(nm - one.wavelengthNm) < 0.05))) {
    tally.wrong.push(
      `seed ${seed}: ${line.wavelengthNm} nm at ${line.position.toFixed(2)} px, S/N ${line.signalToNoise.toFixed(1)}`,
    );
  }
  const truth = near.find((one) => Math.abs(one.wavelengthNm - line.wavelengthNm!) < 0.05);
  if (line.errorNm === null || truth === undefined || analysis.outcome !== "identified") return;
  if (!isAlone(truth, check.sim.truth) || line.blendOfNm.length > 0) return;
  if (line.flags.some((flag) => flag !== "weak" && flag !== "outlier")) return;
  const trueErrorNm = evaluate(check.earlier, truth.position) - truth.wavelengthNm;
  tally.judged += 1;
  if (Math.abs(line.errorNm - trueErrorNm) <= line.errorExpandedUncNm!) tally.covered += 1;
}

/** No neighbour that could move it: within four and a half widths none that reaches a third of the noise. */
function isAlone(line: TrueLine, all: readonly TrueLine[]): boolean {
  return all.every(
    (other) =>
      other === line || Math.abs(other.position - line.position) > 4.5 * line.fwhm || other.signalToNoise < 0.3,
  );
}

describe("2,000 simulated captures", () => {
  it.each([1, 501])(
    "an earlier axis wrong by up to 3 FWHM and 1 in 100 (500 from seed %d): named, never wrongly, intervals hold",
    (seed) => {
      const tally = tallyOf(500, "earlier-axis", seed);
      expect(tally.wrong.slice(0, 10)).toEqual([]);
      expect(tally.identified / tally.captures).toBeGreaterThanOrEqual(0.99);
      expect(tally.judged).toBeGreaterThan(1000);
      expect(Math.abs(tally.covered / tally.judged - stated), `${tally.covered} of ${tally.judged}`).toBeLessThan(0.02);
    },
  );

  it.each([100_001, 100_501])("a range good to 5 in 100 (500 from seed %d): named, never wrongly", (seed) => {
    const tally = tallyOf(500, "range", seed);
    expect(tally.wrong.slice(0, 10)).toEqual([]);
    expect(tally.identified / tally.captures).toBeGreaterThanOrEqual(0.97);
  });
});

describe("a wrong lamp", () => {
  it("is refused 200 times of 200", () => {
    let refused = 0;
    for (let k = 0; k < 200; k += 1) {
      const lamp = [["Xe"], ["Zn"], ["He"], ["Na"]][k % 4]!;
      const check = simulatedCheck(200_001 + k, k % 2 === 0 ? "earlier-axis" : "range", lamp);
      const { analysis } = analyseCapture(check.sim.text, check.setup);
      if (analysis.outcome !== "identified" && analysis.lines.every((line) => line.wavelengthNm === null)) refused += 1;
    }
    expect(refused).toBe(200);
  });
});
