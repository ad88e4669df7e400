/**
 * Control charts, their constants and run lengths, outliers, robust slopes and change-points against published examples. What was read in
 * public material is held to every printed digit; entries from memory are arithmetic checks, and their titles say so.
 */
import { describe, expect, it } from "vitest";
import { changePoints, pettitt } from "../../packages/core/src/drift/change-point.ts";
import { chartConstants, type ChartConstants } from "../../packages/core/src/drift/chart-constants.ts";
import {
  cusumChart,
  ewmaChart,
  individualsChart,
  westernElectricSignals,
} from "../../packages/core/src/drift/control-charts.ts";
import { generalizedEsd, grubbsTest } from "../../packages/core/src/drift/outliers.ts";
import { theilSenLine, weightedLine } from "../../packages/core/src/drift/trend.ts";
import { createRandom } from "../../packages/core/src/testing/index.ts";
import spc from "../fixtures/spc/spc.json" with { type: "json" };
import {
  cusumRunLength,
  cusumRunLengthOneSided,
  ewmaRunLength,
  shewhartRunLength,
  zoneRulesRunLength,
} from "./support/run-length.ts";

/** Half a unit of the last of so many significant digits. */
const ofDigits = (value: number, digits: number): number =>
  0.5001 * 10 ** (Math.floor(Math.log10(Math.abs(value))) - digits + 1);

describe("e-Handbook 6.3.2.2: individuals and moving ranges", () => {
  const { x, published, computed, movingRanges } = spc.individuals;

  it("gives the printed mean, moving range and limits with the printed d2 of 1.128", () => {
    const chart = individualsChart(x, 1.128);
    expect(chart.centre).toBeCloseTo(published.mean, 10);
    expect(chart.meanMovingRange.toFixed(4)).toBe(String(published.meanMovingRange));
    expect(chart.upper.toFixed(4)).toBe(String(published.UCL));
    expect(chart.lower.toFixed(4)).toBe(String(published.LCL));
    expect(chart.outside).toHaveLength(published.pointsOutside);
    chart.movingRanges.forEach((range, i) => expect(range).toBeCloseTo(movingRanges[i]!, 10));
    expect(chart.sd).toBeCloseTo(computed.sigma, 11);
  });

  it("uses 2/sqrt(pi) where no table is asked for", () => {
    const chart = individualsChart(x);
    expect(chart.upper.toFixed(4)).toBe("55.8024");
    expect(chart.lower.toFixed(4)).toBe("45.8176");
    expect(chart.movingRangeUpper / chart.meanMovingRange).toBeCloseTo(chartConstants(2).D4, 7);
  });
});

describe("e-Handbook 6.3.2.4: EWMA", () => {
  const { x, ewma0, s, k, lambda, published, computed } = spc.ewma;

  it("gives the printed values and limits, with the steady width that the section uses", () => {
    const chart = ewmaChart(x, ewma0, s, lambda, k, "steady");
    published.ewma.forEach((value, i) => expect(Math.abs(chart.points[i]! - value)).toBeLessThan(0.00501));
    computed.ewma.forEach((value, i) => expect(chart.points[i]).toBeCloseTo(value, 5));
    expect(chart.upper[0]!.toFixed(4)).toBe(String(published.UCL));
    // Printed cut off, not rounded.
    expect(Math.floor(chart.lower[0]! * 1e4) / 1e4).toBe(published.LCL);
    expect(chart.outside).toEqual(published.outOfControl);
  });

  it("gives the exact, time-varying limits, and no signal with them either", () => {
    const chart = ewmaChart(x, ewma0, s, lambda, k);
    computed.exactLimitsFirstFive.forEach(([low, high], i) => {
      expect(chart.lower[i]).toBeCloseTo(low!, 11);
      expect(chart.upper[i]).toBeCloseTo(high!, 11);
    });
    expect(chart.outside).toEqual([]);
  });
});

describe("e-Handbook 6.3.2.3: CUSUM", () => {
  const { x, target, k, h, published, table } = spc.cusum;

  it("signals at the printed groups, with every tabulated sum", () => {
    const chart = cusumChart(x, target, k, h);
    expect(chart.outside.map((i) => i + 1)).toEqual(published.signals);
    table.forEach((row, i) => {
      expect(chart.high[i]).toBeCloseTo(row.high, 9);
      expect(chart.low[i]).toBeCloseTo(row.low, 9);
      expect(chart.sums[i]).toBeCloseTo(row.cusum, 9);
    });
  });
});

describe("constants of control charts, n = 2 to 10", () => {
  it.each(spc.constants.rows)(
    "n = $n: integrals to 1e-7, printed digits (three decimals: arithmetic check, from memory)",
    (row) => {
      const constants = chartConstants(row.n);
      for (const name of Object.keys(row.computed) as (keyof ChartConstants)[]) {
        expect(Math.abs(constants[name] - row.computed[name])).toBeLessThan(1e-7);
        const decimals = name === "c4" ? 4 : 3;
        // E2(2) and D4(3) carry the rounding of d2 in print, D4(5) another one; named beside the data.
        const slack = (name === "E2" && row.n === 2) || (name === "D4" && (row.n === 3 || row.n === 5)) ? 1.4e-3 : 0;
        expect(Math.abs(constants[name] - row.published[name])).toBeLessThan(0.5001 * 10 ** -decimals + slack);
      }
    },
  );
});

describe("average run lengths", () => {
  const lengths = spc.averageRunLengths;

  it("Shewhart, 3 s: 370.4 and 43.9 as printed; the others arithmetic checks, from memory", () => {
    const { shift, published, computed } = lengths.shewhart3sigma;
    shift.forEach((at, i) => {
      const length = shewhartRunLength(at);
      expect(Math.abs(length - computed[i]!)).toBeLessThan(1e-4 * 0.51);
      expect(Math.abs(length - published[i]!)).toBeLessThan(at === 0 || at === 1 ? 0.0501 : 0.00501);
    });
  });

  it("CUSUM: the printed columns to their three digits (465 and about 10 were read; the rest arithmetic checks, from memory)", () => {
    for (const column of lengths.cusum_k05_twoSided) {
      column.shift.forEach((at, i) => {
        const length = cusumRunLength(0.5, column.h, at);
        expect(Math.abs(length / column.computed[i]! - 1)).toBeLessThan(5e-5);
        expect(Math.abs(length - column.published[i]!)).toBeLessThan(ofDigits(column.published[i]!, 3));
      });
    }
    for (const column of lengths.cusum_k05_oneSided) {
      column.shift.forEach((at, i) =>
        expect(Math.abs(cusumRunLengthOneSided(0.5, column.h, at) / column.computed[i]! - 1)).toBeLessThan(5e-5),
      );
    }
  });

  it("EWMA: printed columns within 0.1 of their Markov-chain approximation (arithmetic check, from memory; the pairs for 500 were read)", () => {
    for (const column of [...lengths.ewma, ...lengths.ewmaOwn]) {
      column.shift.forEach((at, i) => {
        const length = ewmaRunLength(column.lambda, column.L, at);
        expect(Math.abs(length - column.computed[i]!)).toBeLessThan(1e-3 * Math.max(1, column.computed[i]! / 10));
        if (column.published !== null) {
          const value = column.published[i]!;
          // Three entries named beside the data differ by up to 0.1; 18.2 stands against 18.1496.
          const slack = [48.2, 15.9, 84.1, 18.2].includes(value) ? 0.06 : 0;
          expect(Math.abs(length - value)).toBeLessThan((value >= 100 ? 0.5001 : 0.0501) + slack);
        }
      });
    }
  });

  it("Western Electric rules: 91.75 as printed, and every combination recomputed for the data", () => {
    for (const row of spc.westernElectricRules.averageRunLength.computed) {
      for (const [name, value] of Object.entries(row)) {
        if (name === "rules" || typeof value !== "number") continue;
        const shift = Number(
          name
            .replace("shift", "")
            .replace(/^0(\d)$/, "0.$1")
            .replace("15", "1.5"),
        );
        expect(Math.abs(zoneRulesRunLength(row.rules, shift) - value)).toBeLessThan(0.00501);
      }
    }
    expect(zoneRulesRunLength([1, 2, 3, 4], 0).toFixed(2)).toBe("91.75");
  });

  it("the core's rules themselves run as long: 91.75 within three standard errors of 3,000 simulated runs", () => {
    const random = createRandom(1956);
    const runs = 3000;
    let sum = 0;
    let squares = 0;
    for (let run = 0; run < runs; run++) {
      const values: number[] = [];
      let length = 0;
      while (length === 0) {
        values.push(random.normal());
        const recent = values.slice(-8);
        if (westernElectricSignals(recent, 0, 1).some((signal) => signal.index === recent.length - 1))
          length = values.length;
      }
      sum += length;
      squares += length * length;
    }
    const mean = sum / runs;
    const error = Math.sqrt((squares / runs - mean * mean) / runs);
    console.log(`Western Electric rules: average run ${mean.toFixed(2)} ± ${error.toFixed(2)} (published 91.75)`);
    expect(Math.abs(mean - 91.75)).toBeLessThan(3 * error);
  });

  it("knows the two later rules", () => {
    expect(
      westernElectricSignals(
        [0, 1, 2, 3, 4, 5, 4].map((v) => v / 10),
        0,
        1,
        [5],
      ),
    ).toEqual([{ index: 5, rule: 5 }]);
    const alternating = Array.from({ length: 15 }, (_, i) => (i % 2 === 0 ? 0.5 : -0.5));
    expect(westernElectricSignals(alternating, 0, 1, [6])).toEqual([
      { index: 13, rule: 6 },
      { index: 14, rule: 6 },
    ]);
  });
});

describe("outliers", () => {
  it("e-Handbook 1.3.5.17.1: Grubbs (critical value: arithmetic check, from memory)", () => {
    const { x, published, computed } = spc.grubbs;
    const test = grubbsTest(x, 0.05, 1);
    // Printed cut off: 2.46876.
    expect(Math.floor(test.statistic * 1e4) / 1e4).toBe(published.G);
    expect(test.statistic).toBeCloseTo(computed.G, 7);
    expect(test.critical.toFixed(3)).toBe(String(published.criticalOneSided05));
    expect(test.critical).toBeCloseTo(computed.criticalOneSided05, 5);
    expect(grubbsTest(x, 0.05, 2).critical).toBeCloseTo(computed.criticalTwoSided05, 6);
    expect(x[test.index]).toBe(published.outlier);
    expect(test.isOutlier).toBe(true);
  });

  it("e-Handbook 1.3.5.17.3: generalised ESD, three outliers (printed figures partly cut off: 0.0015)", () => {
    const { x, maxOutliers, alpha, published, computed } = spc.generalizedESD;
    const test = generalizedEsd(x, maxOutliers, alpha);
    test.statistics.forEach((value, i) => {
      expect(Math.abs(value - published.R[i]!)).toBeLessThan(0.0015);
      expect(Math.abs(value - computed.R[i]!)).toBeLessThan(0.00051);
    });
    test.criticals.forEach((value, i) => {
      expect(Math.abs(value - published.critical[i]!)).toBeLessThan(0.0015);
      expect(Math.abs(value - computed.critical[i]!)).toBeLessThan(0.00051);
    });
    expect(test.outliers).toHaveLength(published.outliers);
    expect(test.outliers.map((i) => x[i])).toEqual([6.01, 5.42, 5.34]);
  });
});

describe("slopes", () => {
  it("Sen 1968: 4, with 93 % limits 26/7 and 35/8 (arithmetic check, from memory)", () => {
    const { x, y, computed } = spc.theilSen;
    const line = theilSenLine(x, y, 0.93)!;
    expect(line.slope).toBe(4);
    expect(line.slopeLow).toBe(26 / 7);
    expect(line.slopeHigh).toBe(35 / 8);
    expect(line.pairs).toBe(computed.pairwiseSlopes);
    expect(line.intercept).toBe(computed.interceptMedianOfResiduals);
  });

  it("is the median also of an even number of slopes: mirrored data give the mirrored slope", () => {
    const t = [0, 1, 2, 3.5];
    const y = [0, 1.3, 1.1, 4];
    const line = theilSenLine(t, y, 0.9)!;
    const mirrored = theilSenLine(
      t,
      y.map((value) => -value),
      0.9,
    )!;
    const slopes = t
      .flatMap((a, i) => t.slice(i + 1).map((b, j) => (y[i + 1 + j]! - y[i]!) / (b - a)))
      .sort((a, b) => a - b);
    expect(line.slope).toBeCloseTo((slopes[2]! + slopes[3]!) / 2, 14);
    expect(mirrored.slope).toBe(-line.slope);
  });

  it("holds its confidence: 93 % limits over 2,000 simulated lines within three standard errors", () => {
    const random = createRandom(1968);
    const t = Array.from({ length: 15 }, (_, i) => i + 0.3 * random.uniform());
    let inside = 0;
    for (let run = 0; run < 2000; run++) {
      const y = t.map((at) => 0.3 * at + random.normal());
      const line = theilSenLine(t, y, 0.93)!;
      if (line.slopeLow <= 0.3 && 0.3 <= line.slopeHigh) inside += 1;
    }
    expect(Math.abs(inside / 2000 - 0.93)).toBeLessThan(3 * Math.sqrt((0.93 * 0.07) / 2000) + 0.01);
  });

  it("weighted least squares is ordinary least squares where weights are equal, on Sen's data", () => {
    const { x, y } = spc.theilSen;
    const line = weightedLine(x, y, null);
    expect(line.slope).toBeCloseTo(4.0213523, 7);
    expect(line.intercept).toBeCloseTo(5.7046263, 7);
  });
});

describe("change-point: the Nile at Aswan", () => {
  const { x, published, computed, firstYear } = spc.changePoint;

  it("finds one step after 1898, with the published levels (sums of squares and BIC: arithmetic checks, from memory)", () => {
    const { segmentations, best } = changePoints(x, 5, 15);
    expect(best).toBe(1);
    const [none, one] = segmentations;
    expect(one!.breaks).toEqual([published.breakAfterObservation]);
    expect(firstYear + one!.breaks[0]! - 1).toBe(published.breakYear);
    expect(one!.levels[0]).toBeCloseTo(published.meanBefore, 10);
    expect(one!.levels[1]!.toFixed(2)).toBe(String(published.meanAfter));
    expect(none!.sumOfSquares).toBeCloseTo(computed.rssNoBreak, 6);
    expect(one!.sumOfSquares).toBeCloseTo(computed.rssOneBreak, 5);
    expect(none!.bic).toBeCloseTo(computed.bicNoBreak, 4);
    expect(one!.bic).toBeCloseTo(computed.bicOneBreak, 4);
    expect(((none!.sumOfSquares - one!.sumOfSquares) / one!.sumOfSquares) * 98).toBeCloseTo(computed.F_at_break, 5);
  });

  it("agrees with the rank test", () => {
    const test = pettitt(x);
    expect(test.k).toBe(computed.pettittK);
    expect(test.breakAfter).toBe(computed.pettittBreak);
    expect(Math.abs(test.probability / computed.pettittApproxP - 1)).toBeLessThan(5e-4);
  });

  it("CUSUM of deviations is farthest out at the same place", () => {
    const mean = computed.sum / x.length;
    const { sums } = cusumChart(x, mean, 0, Infinity);
    const extreme = sums.reduce((at, sum, i) => (Math.abs(sum) > Math.abs(sums[at]!) ? i : at), 0);
    expect(extreme + 1).toBe(computed.cusumOfDeviationsExtremeAt);
    expect(Math.abs(sums[extreme]!)).toBeCloseTo(computed.cusumExtreme, 4);
  });
});
