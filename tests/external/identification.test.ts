/**
 * Naming lines, held to synthetic lists of found lines with known names (`support/line-generator.ts`, the mix written down there: eleven
 * lamps, eight ranges, brightness scattered by a factor of three, strays, lost, merged and saturated lines) and to the positions of the
 * real captures. What comes out of whole simulated captures is in simulated-captures.test.ts.
 */
import { describe, expect, it } from "vitest";
import type { FittedLine } from "../../packages/core/src/analysis/types.ts";
import { identifyLines } from "../../packages/core/src/identify/identify-lines.ts";
import { builtInLineList } from "../../packages/core/src/linelist/built-in.ts";
import {
  identifyGenerated as identify,
  modeOf,
  runIdentificationStudy,
  wrongNames,
} from "./support/identification-study.ts";
import { generateCapture, Random } from "./support/line-generator.ts";
import { isPresent, loadCapture, mercuryCaptures, neonSeries, type RealCapture } from "./support/real-capture.ts";

describe("synthetic lines", () => {
  it.each([
    { mode: "earlier-axis", captures: 200, fewest: 10, share: 0.985, seed: 31 },
    { mode: "range", captures: 120, fewest: 10, share: 0.97, seed: 32 },
    { mode: "none", captures: 40, fewest: 10, share: 0.95, seed: 37 },
  ] as const)(
    "$captures captures of $fewest lines and more, mode $mode: a share of $share identified, no line wrong",
    ({ share, ...question }) => {
      const study = runIdentificationStudy({ ...question, source: "lines" });
      expect(study.wrongLines).toEqual([]);
      expect(study.named).toBeGreaterThan(10 * question.captures);
      expect(study.identified / study.captures).toBeGreaterThanOrEqual(share);
    },
  );

  it("200 captures of only 4 or 5 lines and more: often no answer, never a wrong one", () => {
    for (const kind of ["earlier-axis", "range"] as const) {
      const random = new Random(33);
      for (let n = 0; n < 100;) {
        const capture = generateCapture(builtInLineList, random, 4, { strays: 0 });
        if (capture.lines.length > 6) continue;
        n += 1;
        expect(wrongNames(capture, identify(capture, capture.elements, modeOf(capture, kind, random)))).toEqual([]);
      }
    }
  });

  it("100 captures of a lamp that was not said: none identified", () => {
    for (const kind of ["earlier-axis", "range"] as const) {
      const random = new Random(34);
      for (let n = 0; n < 50; n++) {
        const capture = generateCapture(builtInLineList, random, 5);
        const others = ["Hg", "Ar", "Ne", "Kr", "Xe", "Cd", "Zn", "He"].filter(
          (element) => !capture.elements.includes(element),
        );
        const result = identify(capture, [random.pick(others)], modeOf(capture, kind, random));
        expect(result.outcome).not.toBe("identified");
        expect(result.names.every((name) => name === null)).toBe(true);
      }
    }
  });

  it("150 captures whose lines lie at random: the bound on chance falls below 0.05 in no more than 5 %, and none is identified", () => {
    const random = new Random(35);
    let below = 0;
    for (let n = 0; n < 150; n++) {
      const capture = generateCapture(builtInLineList, random, 6);
      for (const line of capture.lines) line.position = random.uniform(5, capture.pixels - 6);
      capture.lines.sort((a, b) => a.position - b.position);
      const result = identify(capture, capture.elements, {
        kind: "range",
        firstNm: capture.firstNm,
        lastNm: capture.lastNm,
      });
      if (result.chanceProbability < 0.05) below += 1;
      expect(result.outcome).not.toBe("identified");
    }
    expect(below).toBeLessThanOrEqual(7);
  });
});

const captures: { name: string; elements: string[] }[] = [
  { name: "hg-ar-array-saturated.txt", elements: ["Hg", "Ar"] },
  { name: "hg-array-ultraviolet.txt", elements: ["Hg"] },
  { name: "ne-raman-bench.csv", elements: ["Ne"] },
  { name: "ar-arc-angstrom.csv", elements: ["Ar"] },
  ...neonSeries.map((name) => ({ name, elements: ["Ne"] })),
];

/** Positions fitted by hand, scattered by their stated uncertainty; all equally bright, so that nothing but the place can tell. */
function linesByHand(capture: RealCapture, random: Random): FittedLine[] {
  return capture.truth.map((line, group) => {
    const positionUnc = 0.01 * line.fwhm;
    return {
      position: line.position + positionUnc * random.normal(),
      positionUnc,
      fwhm: line.fwhm,
      fwhmUnc: positionUnc,
      areaCounts: 1000 * line.fwhm,
      peakHeightCounts: 1000,
      signalToNoise: 100,
      reducedChiSquare: 1,
      degreesOfFreedom: 8,
      windowFirst: 0,
      windowLast: 0,
      group,
      flags: line.flags.includes("saturated") ? ["saturated"] : [],
    };
  });
}

describe.each(captures)("positions of $name", ({ name, elements }) => {
  const absent = mercuryCaptures.includes(name) && !isPresent(name);
  const title = absent
    ? " (not tested: the capture has no licence to be carried here and lies not beside the project)"
    : "";

  it.skipIf(absent)(`no line of twenty noisy copies is named wrongly${title}`, () => {
    const capture = loadCapture(name, elements);
    const { positions } = capture.spectrum;
    const first = positions[0] as number;
    const last = positions[positions.length - 1] as number;
    const random = new Random(36);
    const outer = capture.truth.filter((line) => line.inFit);
    const [a, b] = [outer[0], outer[outer.length - 1]] as [RealCapture["truth"][number], RealCapture["truth"][number]];
    const slope = (b.wavelengthNm - a.wavelengthNm) / (b.position - a.position);
    let identified = 0;
    for (let n = 0; n < 20; n++) {
      const lines = linesByHand(capture, random);
      const fwhm = lines.map((line) => line.fwhm).sort((x, y) => x - y)[lines.length >> 1] as number;
      const result = identifyLines({
        lines,
        firstPosition: first,
        lastPosition: last,
        axisKind: capture.spectrum.axisKind,
        medianFwhm: fwhm,
        elements,
        expectedLinesNm: [],
        lineList: builtInLineList,
        mode: {
          kind: "range",
          firstNm: a.wavelengthNm + slope * (first - a.position),
          lastNm: a.wavelengthNm + slope * (last - a.position),
        },
        axisMeaning: "standard-air",
        toleranceNm: null,
      });
      if (result.outcome === "identified") identified += 1;
      result.names.forEach((given, i) => {
        if (given === null) return;
        const truth = capture.truth[i] as RealCapture["truth"][number];
        const parts = [
          given.wavelengthNm,
          ...given.blendOf.map((line) => line.wavelengthAirNm ?? line.wavelengthVacuumNm),
        ];
        expect(
          parts.some((nm) => Math.abs(nm - truth.wavelengthNm) < 0.003),
          `${truth.wavelengthNm} nm named ${given.wavelengthNm}`,
        ).toBe(true);
      });
    }
    expect(identified).toBeGreaterThanOrEqual(19);
  });
});
