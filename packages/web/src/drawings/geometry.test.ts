import fc from "fast-check";
import type { StripLine } from "@wavekeep/api/contract";
import { describe, expect, test } from "vitest";
import { countsTicks, countsTransform, linearScale, roundTicks, thinToColumns, wavelengthTicks } from "./scale.ts";
import { chooseFlagged, leaderPoints, spreadLabels } from "./spread.ts";
import { barWidth, guardShareOf, layoutMini, layoutStrip } from "./strip-layout.ts";

const line = (over: Partial<StripLine>): StripLine => ({
  wavelengthNm: 546.075,
  species: "Hg",
  errorNm: 0.1,
  expandedUncNm: 0.02,
  toleranceNm: 0.4,
  status: "judged",
  verdict: "pass",
  nearLimit: false,
  flags: [],
  blend: false,
  ...over,
});

describe("labels spread by pooling adjacent violators", () => {
  test("labels that have room stand on their marks", () => {
    expect(spreadLabels([100, 300, 500], 43, 0, 1032)).toEqual([100, 300, 500]);
  });

  test("two labels on one mark share the shift: 576.96 and 579.07 stand 21.5 px either side", () => {
    expect(spreadLabels([500, 500], 43, 0, 1032)).toEqual([478.5, 521.5]);
  });

  test("an edge pushes inwards", () => {
    expect(spreadLabels([0, 10], 43, 0, 1032)).toEqual([21.5, 64.5]);
    expect(spreadLabels([1030, 1032], 43, 0, 1032)).toEqual([967.5, 1010.5]);
  });

  test("order is kept, nobody overlaps, nobody leaves the drawing, and no single label could stand nearer", () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0, max: 1032, noNaN: true }), { minLength: 1, maxLength: 24 }), (marks) => {
        const targets = [...marks].sort((a, b) => a - b);
        const centres = spreadLabels(targets, 43, 0, 1032);
        centres.forEach((centre, i) => {
          expect(centre).toBeGreaterThanOrEqual(21.5 - 1e-6);
          expect(centre).toBeLessThanOrEqual(1010.5 + 1e-6);
          const gapBefore = i === 0 ? centre - 21.5 : centre - (centres[i - 1] ?? 0) - 43;
          const gapAfter = i === centres.length - 1 ? 1010.5 - centre : (centres[i + 1] ?? 0) - centre - 43;
          expect(gapBefore).toBeGreaterThanOrEqual(-1e-6);
          const wish = (targets[i] ?? 0) - centre;
          // A label off its mark is held there by a neighbour or an edge on at least one side of its pool.
          if (Math.abs(wish) > 1e-6) expect(gapBefore < 1e-6 || gapAfter < 1e-6).toBe(true);
        });
      }),
      { seed: 7, numRuns: 300 },
    );
  });

  test("more labels than room are squeezed evenly, not dropped", () => {
    expect(spreadLabels([1, 2, 3, 4], 50, 0, 100)).toEqual([12.5, 37.5, 62.5, 87.5]);
  });

  test("the chosen and the worst keep their flags, then the strongest", () => {
    expect(chooseFlagged(6, 4, [5, 0], [9, 1, 5, 3, 8, 0])).toEqual([0, 2, 4, 5]);
    expect(chooseFlagged(3, 8, [], [0, 0, 0])).toEqual([0, 1, 2]);
  });

  test("a leader goes on a little, across, on", () => {
    expect(leaderPoints(10, 100, 50, 80)).toBe("10,100 10,95 50,85 50,80");
  });
});

describe("strip", () => {
  const scale = linearScale(200, 800, 600);

  test("a bar is error over tolerance: 0.1 of 0.4 nm is a quarter of 52 px", () => {
    const mark = layoutStrip([line({})], scale, 52).marks[0];
    expect(mark).toMatchObject({ kind: "bar", height: 13, isBeyond: false, width: 5 });
    expect(mark?.whisker?.[0]).toBeCloseTo(13 - 2.6, 9);
    expect(mark?.x).toBeCloseTo(346.075, 9);
  });

  test("beyond the limit the bar is held there and marked", () => {
    expect(layoutStrip([line({ errorNm: -0.5 })], scale, 52).marks[0]).toMatchObject({ height: -52, isBeyond: true });
  });

  test("left out and refused are hollow; a line without an error is a tick", () => {
    const { marks, judged } = layoutStrip(
      [
        line({ status: "left-out" }),
        line({ wavelengthNm: 600, status: "refused" }),
        line({ wavelengthNm: 700, errorNm: null, status: "not-judged" }),
      ],
      scale,
      52,
    );
    expect(marks.map((mark) => mark.kind)).toEqual(["hollow", "hollow", "tick"]);
    expect(judged).toBeNull();
  });

  test("the worst uses most of its own tolerance, not the largest error", () => {
    expect(
      layoutStrip(
        [line({ errorNm: 0.3, toleranceNm: 1 }), line({ wavelengthNm: 300, errorNm: 0.2, toleranceNm: 0.4 })],
        scale,
        52,
      ).worst,
    ).toBe(1);
  });

  test("crowded bars are 3 wide below 6 px, 2 below 4", () => {
    expect([7, 6, 5.9, 4, 3.9].map(barWidth)).toEqual([5, 5, 3, 3, 2]);
  });

  test("guard band w = r U as a share of the tolerance", () => {
    expect(guardShareOf(line({}), 1)).toBeCloseTo(0.05, 12);
    expect(guardShareOf(line({}), 0)).toBeNull();
  });

  test("the mini strip keeps 3 px between bars, and the worse of two that fall together", () => {
    const marks = layoutMini(
      [
        line({ wavelengthNm: 500, errorNm: 0.1 }),
        line({ wavelengthNm: 501, errorNm: 0.3 }),
        line({ wavelengthNm: 504 }),
      ],
      scale,
      12,
    );
    expect(marks.map((mark) => mark.index)).toEqual([1, 2]);
    expect((marks[1]?.x ?? 0) - (marks[0]?.x ?? 0)).toBeGreaterThanOrEqual(3);
  });
});

describe("rulers", () => {
  test("ticks at 10, 50 and 100 nm", () => {
    const ticks = wavelengthTicks(395, 505, 1000);
    expect(ticks.filter((tick) => tick.rank === 2).map((tick) => tick.value)).toEqual([400, 500]);
    expect(ticks.filter((tick) => tick.rank === 1).map((tick) => tick.value)).toEqual([450]);
    expect(ticks).toHaveLength(11);
  });

  test("zoomed far in, ticks stay", () => {
    expect(wavelengthTicks(546.0, 546.2, 1000).length).toBeGreaterThanOrEqual(10);
  });

  test("round steps only, as many places as they need", () => {
    expect(roundTicks(200, 850, 1032, 80)).toEqual({ ticks: [200, 300, 400, 500, 600, 700, 800], decimals: 0 });
    expect(roundTicks(546, 546.5, 500, 80)).toEqual({ ticks: [546, 546.1, 546.2, 546.3, 546.4, 546.5], decimals: 1 });
  });

  test("a root scale counts in squares: 0, 2 500, 10 000 … 62 500", () => {
    expect(countsTicks("root", 65_535, 280)).toEqual([0, 2500, 10_000, 22_500, 40_000, 62_500]);
    expect(countsTransform("root")(-9)).toBe(-3);
    expect(countsTransform("log", 10)(3)).toBe(1);
  });

  test("thinning keeps every column's least and most", () => {
    const n = 100_000;
    const x = Array.from({ length: n }, (_, i) => i);
    const y = x.map((i) => Math.sin(i / 50) + ((i * 7919) % 101) / 1000);
    y[43_210] = 50;
    const kept = thinToColumns(x, y, 0, n - 1, 1000);
    expect(kept.length).toBeLessThanOrEqual(2002);
    expect(kept).toContain(43_210);
    expect(kept).toEqual([...kept].sort((a, b) => a - b));
    const column = (i: number) => Math.floor((i / (n - 1)) * 1000);
    const inColumn = x.filter((i) => column(i) === 500).map((i) => y[i] ?? 0);
    const keptInColumn = kept.filter((i) => column(i) === 500).map((i) => y[i] ?? 0);
    expect(Math.max(...keptInColumn)).toBe(Math.max(...inColumn));
    expect(Math.min(...keptInColumn)).toBe(Math.min(...inColumn));
  });

  test("few samples are all kept, with one beyond each edge", () => {
    expect(thinToColumns([0, 1, 2, 3, 4, 5], [0, 0, 0, 0, 0, 0], 2.5, 3.5, 100)).toEqual([2, 3, 4]);
  });
});
