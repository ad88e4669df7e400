import { describe, expect, test } from "vitest";
import type { FittedLine, LineFlag } from "../analysis/types.ts";
import { builtInLineList } from "../linelist/built-in.ts";
import { nameFewLines } from "./few-lines.ts";

const found = (position: number, changes: Partial<FittedLine> = {}): FittedLine => ({
  position,
  positionUnc: 0.01,
  fwhm: 1.2,
  fwhmUnc: 0.01,
  areaCounts: 1000,
  peakHeightCounts: 800,
  signalToNoise: 200,
  reducedChiSquare: 1,
  degreesOfFreedom: 12,
  windowFirst: 0,
  windowLast: 20,
  group: 0,
  flags: [] as LineFlag[],
  ...changes,
});
const name = (lines: FittedLine[], elements = ["D"]) =>
  nameFewLines({
    lines,
    firstPosition: 400,
    lastPosition: 700,
    medianFwhm: 1.2,
    elements,
    lineList: builtInLineList,
    axis: "own",
  });

describe("two lines of a built-in deuterium lamp on the instrument's own axis", () => {
  test("both read 0.2 nm short: 485.80 and 655.90 are D beta 486.0011 and D alpha 656.1005", () => {
    const named = name([found(485.8), found(655.9)]);
    expect(named?.names.map((one) => one?.wavelengthNm)).toEqual([486.0011, 656.1005]);
    expect(named?.chanceProbability).toBeLessThan(0.05);
  });
  test.each([
    ["one is further off than two widths", [found(485.8), found(653)]],
    ["they are displaced differently by more than a width", [found(485), found(657.2)]],
    ["both lie at one published line", [found(655.8), found(656.4)]],
    ["there are three of them", [found(485.8), found(655.9), found(600)]],
    ["one is hardly above the noise", [found(485.8), found(655.9, { signalToNoise: 6 })]],
    ["one stands at the edge", [found(485.8), found(655.9, { flags: ["edge"] })]],
  ])("names nothing when %s", (_, lines) => {
    expect(name(lines)).toBeNull();
  });
  test("a spike beside them is no line", () => {
    expect(name([found(485.8), found(500, { flags: ["spike"] }), found(655.9)])?.names[1]).toBeNull();
  });
  test("two lines prove nothing of a lamp with many: neon", () => {
    expect(name([found(585.2), found(640.2)], ["Ne"])).toBeNull();
  });
});
