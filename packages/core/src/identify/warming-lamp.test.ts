/** A mercury-argon lamp on its way to being warm, and one that is, by the project's own simulator (invented instrument). */
import { expect, test } from "vitest";
import { analyseCapture } from "../analysis/analyse-captures.ts";
import { defaultSetup } from "../analysis/defaults.ts";
import { builtInLineList } from "../linelist/built-in.ts";
import { arraySpectrometer, opticsForRange, simulateCapture } from "../testing/index.ts";

/** Codes of the warnings, for a lamp whose neutral argon is drawn on a scale of its own, mercury by `mercury` beside it. */
function warningsOf(mercury: number, seed: number): { outcome: string; codes: string[] } {
  const elements = ["Hg", "Ar"];
  const sim = simulateCapture({
    seed,
    instrument: arraySpectrometer({ trueAxis: opticsForRange(350, 900, 2048, 600) }),
    lamp: {
      lines: builtInLineList.lines.filter((line) => line.spectrum === "Hg I" || line.spectrum === "Ar I"),
      strongestCounts: 50_000,
      intensityScatter: 2,
      // Strongest published intensities: 12 000 for Hg I, 35 000 for Ar I.
      elementStrength: { Hg: 3 * mercury, Ar: 1 },
    },
  });
  const { analysis } = analyseCapture(
    sim.text,
    defaultSetup({ elements, mode: { kind: "range", firstNm: 352, lastNm: 897 } }),
  );
  return { outcome: analysis.outcome, codes: analysis.warnings.map(({ code }) => code) };
}

test("argon bright and mercury a hundredth of it: identified, and said to be warming up", () => {
  for (const seed of [1, 2, 3, 4, 5]) {
    const { outcome, codes } = warningsOf(0.004, seed);
    expect(outcome).toBe("identified");
    expect(codes).toContain("warming-lamp");
  }
});

test("a warm lamp is not called so", () => {
  for (const seed of [11, 12, 13, 14, 15]) {
    const { outcome, codes } = warningsOf(1, seed);
    expect(outcome).toBe("identified");
    expect(codes).not.toContain("warming-lamp");
  }
});
