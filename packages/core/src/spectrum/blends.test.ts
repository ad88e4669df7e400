import { describe, expect, it } from "vitest";
import { createRandom } from "../testing/index.ts";
import { densityOverPixel } from "../testing/profile.ts";
import { findLines } from "./find-lines.ts";

const fwhm = 5;

/** Five single lines and one pair, Gaussian, read noise one part in `signalToNoise` of the singles' height and of the pair's stronger line. */
function capture(seed: number, separation: number, ratio: number, signalToNoise: number) {
  const random = createRandom(seed);
  const counts = new Float64Array(1600);
  const peak = densityOverPixel({ kind: "gaussian" }, fwhm, 0);
  const centres = [150, 350, 550, 950, 1250].map((centre) => centre + random.uniform());
  const pair = [750 + random.uniform()];
  pair.push(pair[0]! + separation * fwhm);
  [...centres, ...pair].forEach((centre, k) => {
    const height = k === 6 ? 20000 / ratio : 20000;
    for (let i = Math.floor(centre) - 25; i <= centre + 25; i += 1)
      counts[i] = counts[i]! + (height * densityOverPixel({ kind: "gaussian" }, fwhm, i - centre)) / peak;
  });
  for (let i = 0; i < counts.length; i += 1) counts[i] = 900 + counts[i]! + (20000 / signalToNoise) * random.normal();
  const { lines } = findLines(
    {
      axisKind: "pixel",
      axisUnit: "px",
      wasDescending: false,
      positions: Float64Array.from(counts, (_, i) => i),
      counts,
      fullScaleCounts: null,
      scansSummed: 1,
    },
    { lineShape: "automatic" },
  );
  return { lines, centres, pair };
}

/** Twelve captures a case: captures where two lines were found, and lines of these within two standard uncertainties. */
function study(separation: number, ratio: number, signalToNoise: number) {
  let [two, held, split] = [0, 0, 0];
  for (let seed = 1; seed <= 12; seed += 1) {
    const { lines, centres, pair } = capture(seed, separation, ratio, signalToNoise);
    const near = lines.filter((line) => Math.abs(line.position - pair[0]!) < 2 * fwhm);
    for (const centre of centres)
      if (lines.filter((line) => Math.abs(line.position - centre) < 2 * fwhm).length !== 1) split += 1;
    if (near.length !== 2) continue;
    two += 1;
    near.forEach((line, k) => {
      expect(line.flags).toContain("blend");
      if (Math.abs(line.position - pair[k]!) < 2 * line.positionUnc) held += 1;
    });
  }
  return { two, held, split };
}

describe("blends without a valley", () => {
  const told = [0.6, 0.8, 1, 1.2].flatMap((separation) =>
    [1, 3, 7].flatMap((ratio) => [100, 1000].map((signalToNoise) => [separation, ratio, signalToNoise] as const)),
  );
  // At 0.6 widths and 100 : 1, and for a companion of a seventh at 100 : 1, the sum looks like one line more often than not; at 1.2 widths
  // and 7 : 1 the companion is not told reliably at either noise: nothing is asserted there but that single lines stay single.
  const isReliable = (separation: number, ratio: number, signalToNoise: number): boolean =>
    signalToNoise > 100 ? separation < 1.2 || ratio < 7 : separation > 0.6 && ratio < 7;

  it("are two lines where the samples tell, single lines stay single (12 captures a case)", () => {
    let [held, all] = [0, 0];
    for (const [separation, ratio, signalToNoise] of told) {
      const result = study(separation, ratio, signalToNoise);
      // 1440 single lines in all, none may be split.
      expect(result.split).toBe(0);
      held += result.held;
      all += 2 * result.two;
      if (isReliable(separation, ratio, signalToNoise))
        expect(result.two, `${separation} widths, ${ratio} : 1, ${signalToNoise}`).toBeGreaterThanOrEqual(10);
    }
    // Measured 0.89: a pair's intervals hold somewhat less than 0.95.
    expect(held / all).toBeGreaterThan(0.85);
  });
});
