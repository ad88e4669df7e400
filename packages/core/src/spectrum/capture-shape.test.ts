import { describe, expect, it } from "vitest";
import { createRandom } from "../testing/index.ts";
import { densityOverPixel, type LineShape } from "../testing/profile.ts";
import { findLines } from "./find-lines.ts";

/** Ten lines 190 px apart, 30000 to 5000 counts high, read noise 20, 1 count an electron; shape by line. */
function capture(seed: number, shapeOf: (k: number) => LineShape) {
  const random = createRandom(seed);
  const centres = Array.from({ length: 10 }, (_, k) => 120 + 190 * k + random.uniform() - 0.5);
  const counts = new Float64Array(2048);
  centres.forEach((centre, k) => {
    const peak = densityOverPixel(shapeOf(k), 4.5, 0);
    const height = 30000 - 2700 * k;
    for (let i = Math.floor(centre) - 40; i <= centre + 40; i += 1)
      counts[i] = counts[i]! + (height * densityOverPixel(shapeOf(k), 4.5, i - centre)) / peak;
  });
  for (let i = 0; i < counts.length; i += 1)
    counts[i] = 800 + counts[i]! + Math.sqrt(400 + counts[i]!) * random.normal();
  const spectrum = {
    axisKind: "pixel" as const,
    axisUnit: "px" as const,
    wasDescending: false,
    positions: Float64Array.from(counts, (_, i) => i),
    counts,
    fullScaleCounts: null,
    scansSummed: 1,
  };
  return { found: findLines(spectrum, { lineShape: "automatic" }), centres };
}

const skewed = (tailShare: number): LineShape => ({ kind: "skewed", tailShare });

describe("the shape by evidence", () => {
  it("is the tail where all lines have it: positions are the first moments (20 captures)", () => {
    let [held, all] = [0, 0];
    for (let seed = 1; seed <= 20; seed += 1) {
      const { found, centres } = capture(seed, () => skewed(0.9));
      expect(found.lineShape?.name).toBe("exponentially-modified-gaussian");
      expect(found.lines).toHaveLength(centres.length);
      found.lines.forEach((line, k) => {
        all += 1;
        if (Math.abs(line.position - centres[k]!) < 2 * line.positionUnc) held += 1;
      });
    }
    // 95 of 100 expected; below 91 % of 200 has a chance of about 1 %.
    expect(held / all).toBeGreaterThan(0.91);
  });

  it("stays the Gaussian where the tail changes along the detector: no shape of one parameter describes the lines", () => {
    for (let seed = 1; seed <= 5; seed += 1) {
      const { found } = capture(seed, (k) => (k < 4 ? { kind: "gaussian" } : skewed(1.4)));
      expect(found.lineShape?.name).toBe("gaussian");
      expect(found.lineShape?.note).toContain("the Gaussian is kept");
    }
  });

  it("stays the Gaussian where the lines are Gaussian (20 captures)", () => {
    let gaussian = 0;
    for (let seed = 1; seed <= 20; seed += 1)
      gaussian += capture(seed, () => ({ kind: "gaussian" })).found.lineShape?.name === "gaussian" ? 1 : 0;
    expect(gaussian).toBeGreaterThanOrEqual(19);
  });
});
