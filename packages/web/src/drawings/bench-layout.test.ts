import { expect, test } from "vitest";
import { benchRegisters, countsRuler, netDrawing, panBy, zoomAbout } from "./bench-layout.ts";

const drawing = {
  x: [0, 1, 2],
  counts: [0, 62_500, 100],
  baseline: [0, 0, 0],
  axisLabel: "air, nm",
  axisUnit: "nm" as const,
  ceilingCounts: 65_535,
  fits: [],
  residuals: [],
};

test("registers stand in order and the spectrum is 280 px high, 220 on a phone", () => {
  const wide = benchRegisters(false);
  expect(wide.zero - wide.spectrumTop).toBe(280);
  expect(benchRegisters(true).spectrumHeight).toBe(220);
  expect(benchRegisters(true).residualZero).toBeNull();
  expect([
    wide.stripTop,
    wide.leaderTop,
    wide.flagsTop,
    wide.leaderBottom,
    wide.zero,
    wide.residualZero ?? 0,
    wide.rulerTop,
    wide.height,
  ]).toEqual([20, 127, 146, 201, 481, 525, 563, 587]);
});

test("on a root scale a quarter of the counts stands at half the height", () => {
  const ruler = countsRuler("root", drawing, 280, 20);
  expect(ruler.up(ruler.max)).toBeCloseTo(280, 9);
  expect(ruler.up(ruler.max / 4)).toBeCloseTo(140, 9);
  expect(ruler.ticks).toContain(62_500);
});

test("the detector's ceiling is inside the drawing when the trace comes near it", () => {
  expect(countsRuler("linear", drawing, 280, 20).max).toBeGreaterThanOrEqual(65_535);
  expect(countsRuler("linear", { ...drawing, counts: [0, 900, 10] }, 280, 20).max).toBeLessThan(1000);
});

test("zooming keeps the place under the pointer and never leaves the whole", () => {
  expect(zoomAbout([200, 800], [200, 800], 500, 0.5)).toEqual([350, 650]);
  expect(zoomAbout([350, 650], [200, 800], 350, 0.5)).toEqual([350, 500]);
  expect(zoomAbout([350, 650], [200, 800], 400, 100)).toEqual([200, 800]);
  expect(panBy([350, 650], [200, 800], 10)).toEqual([500, 800]);
});

test("net counts leave off one baseline under trace, fits and ceiling", () => {
  const net = netDrawing({
    ...drawing,
    counts: [100, 600, 300],
    baseline: [100, 200, 300],
    ceilingCounts: 65_535,
    fits: [{ line: 0, x: [0.5, 1], counts: [400, 600], baseline: [140, 200] }],
  });
  expect(net.counts).toEqual([0, 400, 0]);
  expect(net.fits[0]).toEqual({ line: 0, x: [0.5, 1], counts: [250, 400], baseline: [-10, 0] });
  expect(net.ceilingCounts).toBe(65_335);
});
