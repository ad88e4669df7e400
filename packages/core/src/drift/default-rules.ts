/**
 * The rules that watch a configuration unasked: an EWMA of the error at mid-range and three standard deviations on the scale error.
 * Lines alone never alert.
 *
 * Limits are prediction limits: centre and spread come from the checks before the one that is judged, at least 8 and at most the first
 * 20 of its run (a run begins at an adjustment or service); with fewer than 20 they are *provisional*. What is judged is a sum of checks with known
 * factors (a check's share in the EWMA less its share in the centre), so that its variance in units of the run's spread is exact for
 * unequal uncertainties and spacing, and Student's quantile for the checks there were takes the place of the normal one.
 *
 * EWMA      λ = 0.2 for a check at the usual spacing (the median); a gap of d usual spacings counts 1 - 0.8^d. Width 2.962, an average run of
 *           500 checks with known limits (J. M. Lucas and M. S. Saccucci, Technometrics 32 (1990) 1). Starts at the centre.
 * Alert     a signal opens one; it stays open until a check lies inside again, and signals meanwhile are the same alert.
 */
import { normalCdf, studentQuantile } from "../numeric/distributions.ts";
import { pow } from "../numeric/elementary.ts";
import { median } from "../spectrum/median.ts";
import { weightingUncs, type DriftSeries } from "./history.ts";

const leastForLimits = 8;
const settledLimits = 20;
const ewmaLambda = 0.2;
const ewmaWidth = 2.962;
const scaleWidth = 3;

export type WatchedQuantity = "ewma of error at mid-range" | "error at mid-range" | "scale error";

export interface WatchedPoint {
  /** Position in the series. */
  index: number;
  value: number;
  /** null while there are too few checks for limits. */
  centre: number | null;
  lower: number | null;
  upper: number | null;
  provisional: boolean;
  outside: boolean;
}

export interface WatchedChart {
  quantity: WatchedQuantity;
  /** Whether a point outside opens an alert. */
  alerts: boolean;
  points: WatchedPoint[];
  /** Positions at which an alert opens. */
  signals: number[];
}

interface Rule {
  quantity: WatchedQuantity;
  alerts: boolean;
  series: "mid" | "scale";
  lambda: number;
  width: number;
}

/** The two that alert, and the single errors at mid-range with 3 s limits, which are drawn and don't. */
const rules: readonly Rule[] = [
  { quantity: "ewma of error at mid-range", alerts: true, series: "mid", lambda: ewmaLambda, width: ewmaWidth },
  { quantity: "error at mid-range", alerts: false, series: "mid", lambda: 1, width: 3 },
  { quantity: "scale error", alerts: true, series: "scale", lambda: 1, width: scaleWidth },
];

/** Every point against the limits that the checks before it give. */
export function watch(series: DriftSeries): WatchedChart[] {
  return rules.map((rule) => {
    const points: WatchedPoint[] = [];
    const signals: number[] = [];
    let open = false;
    for (let i = 0; i < series.count; i++) {
      if (i > 0 && series.run[i] !== series.run[i - 1]) open = false;
      const point = pointAt(series, rule, i);
      if (point === null) continue;
      if (point.outside && !open) signals.push(i);
      open = point.outside;
      points.push(point);
    }
    return { quantity: rule.quantity, alerts: rule.alerts, points, signals };
  });
}

/** Which of the alerting rules the last check of a series breaks. */
export function brokenRules(series: DriftSeries): WatchedQuantity[] {
  return rules
    .filter((rule) => rule.alerts && pointAt(series, rule, series.count - 1)?.outside === true)
    .map((rule) => rule.quantity);
}

/** One point, from the checks up to it; null where the check says nothing of this series. */
function pointAt(series: DriftSeries, rule: Rule, index: number): WatchedPoint | null {
  const values = (rule.series === "mid" ? series.midErrorNm : series.scaleErrorNm).subarray(0, index + 1);
  const stated = (rule.series === "mid" ? series.midUncNm : series.scaleUncNm).subarray(0, index + 1);
  if (!(stated[index]! < Infinity) || (rule.series === "scale" && !(series.rangeNm > 0))) return null;
  const uncs = weightingUncs(values, stated);
  const run: number[] = [];
  for (let i = 0; i <= index; i++) if (series.run[i] === series.run[index] && uncs[i]! < Infinity) run.push(i);
  const base = run.slice(0, Math.min(run.length - 1, settledLimits));
  const judged = judge(series, values, uncs, run, base, rule.lambda, usualSpacing(series.days, index + 1));
  const provisional = base.length < settledLimits;
  if (base.length < leastForLimits) {
    return { index, value: judged.value, centre: null, lower: null, upper: null, provisional, outside: false };
  }
  const half = studentQuantile(normalCdf(rule.width), base.length - 1) * judged.sd;
  const { value, centre } = judged;
  const outside = Math.abs(value - centre) > half;
  return { index, value, centre, lower: centre - half, upper: centre + half, provisional, outside };
}

/** The statistic at the last check of `run`, the centre of the `base` checks, and the standard deviation of their difference. */
function judge(
  series: DriftSeries,
  values: Float64Array,
  uncs: Float64Array,
  run: readonly number[],
  base: readonly number[],
  lambda: number,
  usual: number,
): { value: number; centre: number; sd: number } {
  let weightSum = 0;
  let weighted = 0;
  for (const i of base) {
    const weight = 1 / (uncs[i]! * uncs[i]!);
    weightSum += weight;
    weighted += weight * values[i]!;
  }
  const centre = base.length === 0 ? values[run[0]!]! : weighted / weightSum;
  let squares = 0;
  for (const i of base) {
    const ratio = (values[i]! - centre) / uncs[i]!;
    squares += ratio * ratio;
  }
  const spread = base.length > 1 ? squares / (base.length - 1) : 0;

  // Share of each check in the statistic, from the last back to the first; what is left is the start at the centre.
  let left = 1;
  let value = 0;
  const shares = new Float64Array(run.length);
  for (let j = run.length - 1; j >= 0 && left > 1e-12; j--) {
    const gap = j > 0 ? (series.days[run[j]!]! - series.days[run[j - 1]!]!) / usual : 1;
    const own = lambda === 1 ? 1 : 1 - pow(1 - lambda, Math.min(Math.max(gap, 0.05), 20));
    shares[j] = left * own;
    value += shares[j]! * values[run[j]!]!;
    left *= 1 - own;
  }
  value += left * centre;
  let variance = 0;
  run.forEach((i, j) => {
    const inCentre = j < base.length ? ((1 - left) * (1 / (uncs[i]! * uncs[i]!))) / weightSum : 0;
    const factor = (shares[j]! - inCentre) * uncs[i]!;
    variance += factor * factor;
  });
  return { value, centre, sd: Math.sqrt(variance * spread) };
}

function usualSpacing(days: Float64Array, count: number): number {
  if (count < 2) return 1;
  const gaps = new Float64Array(count - 1);
  for (let i = 0; i < gaps.length; i++) gaps[i] = days[i + 1]! - days[i]!;
  return Math.max(median(gaps), 1e-3);
}
