/**
 * Every closed line shape against the Cramér-Rao bound with every parameter free, by simulation (`support/line-fit-study.ts`, which shares no
 * shape with the fitter). Quick form: 600 fits a case, so each limit is met within three of the study's own standard uncertainties, which are
 * printed; the full form (`npm run validate`) has 20,000.
 */
import { afterAll, describe, expect, test } from "vitest";
import { describeRow, runLineFitStudy, studiedCases } from "./support/line-fit-study.ts";

const table: string[] = [];
afterAll(() => process.stdout.write(`\nLine shapes by simulation\n${table.join("\n")}\n`));

const quickCases = studiedCases().filter(({ fwhmPx, signalToNoise }) => signalToNoise > 100 || fwhmPx > 4);

describe("600 fits a case", () => {
  test.each(quickCases.map((one) => [one.shape, one.fwhmPx, one.signalToNoise, one] as const))(
    "%s, FWHM %d px, %d : 1: variance at the bound, no bias, intervals hold",
    (_shape, _fwhm, _signalToNoise, one) => {
      const [row] = runLineFitStudy({ fits: 600, seed: 2026, cases: [one] });
      table.push(describeRow(row!));
      expect(row!.refused).toBeLessThanOrEqual(3);
      expect(row!.varianceOverBound - 3 * row!.varianceUnc).toBeLessThan(1.05);
      expect(row!.varianceOverBound + 3 * row!.varianceUnc).toBeGreaterThan(0.95);
      expect(Math.abs(row!.biasPx) - 3 * row!.biasUncPx).toBeLessThan(0.01);
      expect(row!.coveredPercent + 3 * row!.coveredUncPercent).toBeGreaterThan(94.5);
      expect(row!.coveredPercent - 3 * row!.coveredUncPercent).toBeLessThan(96.4);
    },
  );
});
