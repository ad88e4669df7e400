/**
 * Control charts in their published form, for values of equal uncertainty with known or estimated centre and spread.
 *
 * Individuals     centre = mean; limits = mean ± 3 · mean moving range / d2; moving range of two: upper limit D4 · its mean
 *                 (NIST/SEMATECH e-Handbook of Statistical Methods 6.3.2.2)
 * EWMA            z = λ x + (1 - λ) z before; limits = target ± L s sqrt(λ/(2-λ) · (1 - (1-λ)^2i)), or without the last factor
 *                 (6.3.2.4; S. W. Roberts, Technometrics 1 (1959) 239)
 * CUSUM           tabular: high = max(0, x - target - k + high before), low likewise; a signal above h (6.3.2.3; E. S. Page, Biometrika 41
 *                 (1954) 100)
 * Western Electric  four zone rules, and two later additions (Western Electric, Statistical Quality Control Handbook, 1956)
 * Limits that know how few checks there are, unequal uncertainties and unequal spacing: default-rules.ts. Any unit.
 */
import { pow } from "../numeric/elementary.ts";
import { MOVING_RANGE_D2, MOVING_RANGE_D4 } from "./chart-constants.ts";

export interface IndividualsChart {
  centre: number;
  lower: number;
  upper: number;
  /** Length n - 1. */
  movingRanges: number[];
  meanMovingRange: number;
  movingRangeUpper: number;
  /** Mean moving range / d2. */
  sd: number;
  /** Indices of values beyond the limits, and of values that end a moving range beyond its limit. */
  outside: number[];
  outsideMovingRange: number[];
}

/**
 * @param values  at least two
 * @param d2      mean moving range in standard deviations; tables print 1.128
 */
export function individualsChart(values: readonly number[], d2 = MOVING_RANGE_D2): IndividualsChart {
  const n = values.length;
  let sum = 0;
  for (const value of values) sum += value;
  const centre = sum / n;
  const movingRanges = values.slice(1).map((value, i) => Math.abs(value - values[i]!));
  let ranges = 0;
  for (const range of movingRanges) ranges += range;
  const meanMovingRange = ranges / (n - 1);
  const sd = meanMovingRange / d2;
  const lower = centre - 3 * sd;
  const upper = centre + 3 * sd;
  const movingRangeUpper = MOVING_RANGE_D4 * meanMovingRange;
  return {
    centre,
    lower,
    upper,
    movingRanges,
    meanMovingRange,
    movingRangeUpper,
    sd,
    outside: indicesWhere(values, (value) => value < lower || value > upper),
    outsideMovingRange: indicesWhere(movingRanges, (range) => range > movingRangeUpper).map((i) => i + 1),
  };
}

export interface EwmaChart {
  centre: number;
  points: number[];
  lower: number[];
  upper: number[];
  outside: number[];
}

/**
 * @param sd      of one value
 * @param width   L, limits in standard deviations of the plotted statistic
 * @param limits  `exact`: narrower for the first points, as their variance is; `steady`: the width they tend to, at every point
 */
export function ewmaChart(
  values: readonly number[],
  target: number,
  sd: number,
  lambda: number,
  width: number,
  limits: "exact" | "steady" = "exact",
): EwmaChart {
  const steady = lambda / (2 - lambda);
  const points: number[] = [];
  const lower: number[] = [];
  const upper: number[] = [];
  let z = target;
  values.forEach((value, i) => {
    z = lambda * value + (1 - lambda) * z;
    const settled = limits === "exact" ? 1 - pow(1 - lambda, 2 * (i + 1)) : 1;
    const half = width * sd * Math.sqrt(steady * settled);
    points.push(z);
    lower.push(target - half);
    upper.push(target + half);
  });
  return {
    centre: target,
    points,
    lower,
    upper,
    outside: indicesWhere(points, (point, i) => point < lower[i]! || point > upper[i]!),
  };
}

export interface CusumChart {
  /** Upper and lower one-sided sums, both counted upwards from 0. */
  high: number[];
  low: number[];
  /** Plain cumulative sum of deviations from the target. */
  sums: number[];
  limit: number;
  outside: number[];
}

/** @param k  allowance and @param h decision limit, in the unit of the values; h = 0.5 s and k = 4 to 5 s are common */
export function cusumChart(values: readonly number[], target: number, k: number, h: number): CusumChart {
  const high: number[] = [];
  const low: number[] = [];
  const sums: number[] = [];
  let above = 0;
  let below = 0;
  let sum = 0;
  for (const value of values) {
    const deviation = value - target;
    above = Math.max(0, above + deviation - k);
    below = Math.max(0, below - deviation - k);
    sum += deviation;
    high.push(above);
    low.push(below);
    sums.push(sum);
  }
  return { high, low, sums, limit: h, outside: indicesWhere(high, (value, i) => value > h || low[i]! > h) };
}

/** 1 beyond 3 s; 2 two of three beyond 2 s; 3 four of five beyond 1 s; 4 eight on one side; 5 six rising or falling; 6 fourteen alternating. */
export type ZoneRule = 1 | 2 | 3 | 4 | 5 | 6;

/** @returns each value that completes a rule's pattern, with the rule, in order of index then rule */
export function westernElectricSignals(
  values: readonly number[],
  centre: number,
  sd: number,
  rules: readonly ZoneRule[] = [1, 2, 3, 4],
): { index: number; rule: ZoneRule }[] {
  const z = values.map((value) => (value - centre) / sd);
  const signals: { index: number; rule: ZoneRule }[] = [];
  for (let i = 0; i < z.length; i++)
    for (const rule of rules) if (completes(rule, z, i)) signals.push({ index: i, rule });
  return signals;
}

function completes(rule: ZoneRule, z: readonly number[], i: number): boolean {
  switch (rule) {
    case 1:
      return Math.abs(z[i]!) > 3;
    case 2:
      return manyBeyond(z, i, 3, 2, 2);
    case 3:
      return manyBeyond(z, i, 5, 4, 1);
    case 4:
      return manyBeyond(z, i, 8, 8, 0);
    case 5:
      return steadily(z, i, 6, (before, now, first) => Math.sign(now) === Math.sign(first) && before !== null);
    case 6:
      return steadily(z, i, 14, (before, now) => before === null || Math.sign(now) === -Math.sign(before));
  }
}

/** `needed` of the last `window` values beyond `limit` on the side of the last one, which is one of them. */
function manyBeyond(z: readonly number[], i: number, window: number, needed: number, limit: number): boolean {
  for (const side of [1, -1]) {
    if (!(side * z[i]! > limit)) continue;
    let count = 0;
    for (let j = Math.max(0, i - window + 1); j <= i; j++) if (side * z[j]! > limit) count += 1;
    if (count >= needed) return true;
  }
  return false;
}

/** Whether every step between the last `window` values is one and fits the one before it. */
function steadily(
  z: readonly number[],
  i: number,
  window: number,
  fits: (before: number | null, now: number, first: number) => boolean,
): boolean {
  if (i < window - 1) return false;
  const first = z[i - window + 2]! - z[i - window + 1]!;
  let before: number | null = null;
  for (let j = i - window + 2; j <= i; j++) {
    const now = z[j]! - z[j - 1]!;
    if (now === 0 || (before !== null && !fits(before, now, first))) return false;
    before = now;
  }
  return true;
}

function indicesWhere(values: readonly number[], test: (value: number, index: number) => boolean): number[] {
  const found: number[] = [];
  values.forEach((value, i) => {
    if (test(value, i)) found.push(i);
  });
  return found;
}
