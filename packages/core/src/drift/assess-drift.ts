/**
 * A configuration's history in, one plain assessment out: what it shows and why, the charts, the signals, where it is heading.
 *
 * Kind      chosen by evidence (choose-model.ts) from all checks
 * Signals   found by going through the history as it grew: after each check, only with what was known then, an alerting rule that
 *           newly breaks (default-rules.ts) or evidence of 95 % against a stable instrument gives a signal; each kind is told once. The
 *           kind of a signal is the most probable one then, which later checks may correct: a jump that goes back is first a step, then a mislabelled check.
 * Units     nm, years of 365.2425 days, K. Civil dates. `…Unc…` are standard uncertainties.
 * Limits    fewer than 6 checks are not judged. One history is one instrument and configuration, with one definition of position.
 */
import type { ToleranceSegment } from "../analysis/types.ts";
import { coreVersion } from "../version.ts";
import { chooseModel, driftKinds, fitForm, type ChosenModel, type DriftKind, type DriftTerm } from "./choose-model.ts";
import { cusumChart, individualsChart, westernElectricSignals, type ZoneRule } from "./control-charts.ts";
import { DAYS_PER_YEAR, isoDateOfDay } from "./civil-date.ts";
import { brokenRules, watch, type WatchedPoint, type WatchedQuantity } from "./default-rules.ts";
import { continuationOf, crossingOf, predictInterval, probabilityOut } from "./forecast.ts";
import { seriesOf, type DriftCheck, type DriftSeries } from "./history.ts";
import { oddEvidenceOf, type OddEvidence } from "./odd-checks.ts";
import { theilSenLine, type TheilSenLine } from "./trend.ts";
import { explain } from "./explain.ts";

/** Fewer checks are not judged. */
export const leastJudged = 6;
/** Probability of being stable below which evidence alone gives a signal. */
const stableBelow = 0.05;

export interface DriftSettings {
  tolerance: ToleranceSegment[];
  /** Coverage of the crossing date's interval; absent = 0.9. */
  crossingCoverage?: number;
  /** A crossing later than this after the last check is "not within …"; absent = 5. */
  horizonYears?: number;
  /** Days (since 1970-01-01) that the probability of being out of tolerance is asked for; absent = 3, 6, 12 and 24 months on. */
  forecastDays?: number[];
}

export interface DriftSignal {
  /** Check, 0 = first by date, at which it could first be known. */
  index: number;
  date: string;
  kind: Exclude<DriftKind, "stable">;
  /** What gave it: evidence for the kind, or a rule of the charts. */
  by: "evidence" | WatchedQuantity;
}

export interface DriftChart {
  name: string;
  unit: "nm";
  alerts: boolean;
  centre: number | null;
  limits: { lower: number | null; upper: number | null; provisional: boolean };
  points: {
    index: number;
    date: string;
    value: number;
    lower: number | null;
    upper: number | null;
    outside: boolean;
  }[];
  /** Patterns of the Western Electric rules, on the chart of single errors only. */
  patterns?: { index: number; rule: ZoneRule }[];
}

export interface SegmentForecast extends ToleranceSegment {
  /** Probability that the instrument's largest |offset + scale| is beyond the tolerance. */
  days: { date: string; probabilityOut: number }[];
  crossing: DriftCrossing;
}
export interface DriftCrossing {
  /** null = not within the horizon. */
  date: string | null;
  /** Ends of the interval; null = earlier than the history, or later than 60 years on. */
  low: string | null;
  high: string | null;
  coverage: number;
  /** Already beyond the tolerance at the last check, more probably than not. */
  past: boolean;
}

export interface DriftAssessment {
  outcome: "judged" | "too-few";
  /** Why it is not judged; null when it is. */
  reason: string | null;
  checks: number;
  kind: DriftKind | null;
  why: string | null;
  /** Posterior probability of each kind. */
  probabilities: Record<DriftKind, number> | null;
  signals: DriftSignal[];
  /** Trend of the error at mid-range, and of the scale error, after what else the model holds; the rate since its onset where it has one. */
  rateNmPerYear: number | null;
  rateUncNmPerYear: number | null;
  scaleRateNmPerYear: number | null;
  scaleRateUncNmPerYear: number | null;
  /** Median of pairwise slopes of the error at mid-range, nm a year, with 95 % limits. */
  robustRate: { slope: number; low: number | null; high: number | null } | null;
  step: { index: number; date: string; midNm: number; midUncNm: number; scaleNm: number; scaleUncNm: number } | null;
  temperature: { midNmPerK: number; midUncNmPerK: number; scaleNmPerK: number; scaleUncNmPerK: number } | null;
  odd: {
    index: number;
    date: string;
    midNm: number;
    midUncNm: number;
    fitsSource: string | null;
    fitsDate: string | null;
  } | null;
  segments: SegmentForecast[];
  /** 90 % interval of the error at mid-range of a check one year after the last. */
  nextYear: { date: string; valueNm: number; lowNm: number; highNm: number } | null;
  charts: DriftChart[];
  midNm: number | null;
  rangeNm: number | null;
  coreVersion: string;
}

/**
 * @param history  checks of one configuration in any order; checks without a line or a point are passed over
 * @returns JSON-able; `too-few` with a reason instead of a guess
 */
export function assessDrift(history: readonly DriftCheck[], settings: DriftSettings): DriftAssessment {
  const ordered = byDate(history);
  const series = seriesOf(ordered);
  if (series === null || series.count < leastJudged) return tooFew(series);
  const odd = oddEvidenceOf(series, ordered);
  const model = chooseModel(series, odd.logFactor);
  const found = effectsOf(series, model, odd);
  const trend = trendOf(series, model);
  const probabilities = Object.fromEntries(driftKinds.map((kind, i) => [kind, model.probabilities[i]!]));
  const sen = theilSenLine(series.years, series.midErrorNm, 0.95);
  const assessment: DriftAssessment = {
    outcome: "judged",
    reason: null,
    checks: series.count,
    kind: model.kind,
    why: null,
    probabilities: probabilities as Record<DriftKind, number>,
    signals: signalsOf(ordered),
    ...trend,
    robustRate: sen === null ? null : robustOf(sen),
    ...found,
    segments: forecastsOf(series, model, settings),
    nextYear: nextYearOf(series, model),
    charts: chartsOf(series),
    midNm: series.midNm,
    rangeNm: series.rangeNm,
    coreVersion,
  };
  assessment.why = explain(assessment, series, model);
  return assessment;
}

function tooFew(series: DriftSeries | null): DriftAssessment {
  const checks = series?.count ?? 0;
  return {
    outcome: "too-few",
    reason: `There ${checks === 1 ? "is 1 check" : `are ${checks} checks`}; a history is judged from ${leastJudged} on. The values are kept; add checks.`,
    checks,
    kind: null,
    why: null,
    probabilities: null,
    signals: [],
    rateNmPerYear: null,
    rateUncNmPerYear: null,
    scaleRateNmPerYear: null,
    scaleRateUncNmPerYear: null,
    robustRate: null,
    step: null,
    temperature: null,
    odd: null,
    segments: [],
    nextYear: null,
    charts: [],
    midNm: series?.midNm ?? null,
    rangeNm: series?.rangeNm ?? null,
    coreVersion,
  };
}

/** Checks that hold something, by date; those of one day stay in the order they were given. */
function byDate(history: readonly DriftCheck[]): DriftCheck[] {
  return history
    .filter((check) => check.lines.length > 0 || check.point !== undefined)
    .map((check, i) => ({ check, i }))
    .sort((a, b) => a.check.day - b.check.day || a.i - b.i)
    .map(({ check }) => check);
}

/**
 * Signals of a history as it grew: each check is judged with nothing of what came after it.
 *
 * @param history  in any order; indices count by date
 */
export function signalsOf(history: readonly DriftCheck[]): DriftSignal[] {
  const ordered = byDate(history);
  const signals: DriftSignal[] = [];
  const told = new Set<DriftKind>();
  let open: WatchedQuantity[] = [];
  for (let count = leastJudged; count <= ordered.length; count++) {
    const known = ordered.slice(0, count);
    const series = seriesOf(known)!;
    const index = count - 1;
    const broken = brokenRules(series);
    const opened = broken.find((rule) => !open.includes(rule));
    open = broken;
    const model = chooseModel(series, oddEvidenceOf(series, known).logFactor);
    const kind = kindNow(series, model, opened !== undefined);
    if (kind === "stable" || told.has(kind)) continue;
    const byEvidence = model.probabilities[0]! < stableBelow;
    if (!byEvidence && opened === undefined) continue;
    told.add(kind);
    signals.push({
      index,
      date: isoDateOfDay(series.days[index]!),
      kind,
      by: byEvidence ? "evidence" : opened!,
    });
  }
  return signals;
}

/** Standard deviations beyond which a check that has just jumped is taken as mislabelled rather than as the first after a step. */
const grossJump = 15;

/** Most probable kind after the last check of a series; with an open alert, the most probable that is not stable. */
function kindNow(series: DriftSeries, model: ChosenModel, alert: boolean): DriftKind {
  let form = model.form;
  if (model.kind === "stable" && alert) form = model.forms.find((one) => one.kind !== "stable") ?? form;
  if (form.kind !== "mislabelled") return form.kind;
  const last = series.count - 1;
  const place = placeOf([...form.mid, ...form.scale], "odd");
  if (place !== last) return form.kind;
  const { residualSdNm, effects } = fitForm(series, form, "mid", model);
  const jump = form.mid.length === 0 ? 0 : Math.abs(effects[form.mid.length - 1]!);
  return jump > grossJump * residualSdNm ? "mislabelled" : "step";
}

function placeOf(terms: readonly DriftTerm[], effect: "step" | "odd"): number | null {
  for (const term of terms) if (term.effect === effect) return term.place;
  return null;
}

type Effects = Pick<DriftAssessment, "step" | "temperature" | "odd">;

/** Size of what the chosen form holds, from the fit of both series. */
function effectsOf(series: DriftSeries, model: ChosenModel, evidence: OddEvidence): Effects {
  const { form } = model;
  const sizes = (effect: DriftTerm["effect"]): { mid: number; midUnc: number; scale: number; scaleUnc: number } => {
    const of = (which: "mid" | "scale"): [number, number] => {
      const at = form[which].findIndex((term) => term.effect === effect);
      if (at < 0) return [0, 0];
      const fit = fitForm(series, form, which, model);
      const n = fit.levels.length + fit.effects.length;
      const j = fit.levels.length + at;
      return [fit.effects[at]!, Math.sqrt(fit.covariance[j * n + j]!)];
    };
    const [mid, midUnc] = of("mid");
    const [scale, scaleUnc] = of("scale");
    return { mid, midUnc, scale, scaleUnc };
  };
  const all = [...form.mid, ...form.scale];
  const stepAt = placeOf(all, "step");
  const oddAt = placeOf(all, "odd");
  const step = sizes("step");
  const warm = sizes("temperature");
  const odd = sizes("odd");
  return {
    step:
      stepAt === null
        ? null
        : {
            index: stepAt,
            date: isoDateOfDay(series.days[stepAt]!),
            midNm: step.mid,
            midUncNm: step.midUnc,
            scaleNm: step.scale,
            scaleUncNm: step.scaleUnc,
          },
    temperature: all.some((term) => term.effect === "temperature")
      ? { midNmPerK: warm.mid, midUncNmPerK: warm.midUnc, scaleNmPerK: warm.scale, scaleUncNmPerK: warm.scaleUnc }
      : null,
    odd:
      oddAt === null
        ? null
        : {
            index: oddAt,
            date: isoDateOfDay(series.days[oddAt]!),
            midNm: odd.mid,
            midUncNm: odd.midUnc,
            fitsSource: evidence.fitsSource[oddAt]!,
            fitsDate: fittingDate(series, model, oddAt, odd.mid),
          },
  };
}

/** Where a trend stands beside an odd check: the date at which the trend has the check's value, if that is within the history. */
function fittingDate(series: DriftSeries, model: ChosenModel, place: number, jumpNm: number): string | null {
  const at = model.form.mid.findIndex((term) => term.effect === "trend");
  if (at < 0) return null;
  const slope = fitForm(series, model.form, "mid", model).effects[at]!;
  const day = series.days[place]! + (jumpNm / slope) * DAYS_PER_YEAR;
  return day >= series.days[0]! && day <= series.days[series.count - 1]! ? isoDateOfDay(day) : null;
}

type Trend = Pick<
  DriftAssessment,
  "rateNmPerYear" | "rateUncNmPerYear" | "scaleRateNmPerYear" | "scaleRateUncNmPerYear"
>;

function trendOf(series: DriftSeries, model: ChosenModel): Trend {
  const of = (which: "mid" | "scale"): [number | null, number | null] => {
    const slopes = ["trend", "onset"];
    let terms = model.form[which].filter((term) => term.effect !== "curvature");
    if (!terms.some((term) => slopes.includes(term.effect))) terms = [...terms, { effect: "trend" }];
    const fit = fitForm(series, { ...model.form, [which]: terms }, which, model);
    const at = terms.findIndex((term) => slopes.includes(term.effect));
    const n = fit.levels.length + fit.effects.length;
    const j = fit.levels.length + at;
    const unc = Math.sqrt(fit.covariance[j * n + j]!);
    return unc < Infinity && fit.degreesOfFreedom > 0 ? [fit.effects[at]!, unc] : [null, null];
  };
  const [rateNmPerYear, rateUncNmPerYear] = of("mid");
  const [scaleRateNmPerYear, scaleRateUncNmPerYear] = series.rangeNm > 0 ? of("scale") : [null, null];
  return { rateNmPerYear, rateUncNmPerYear, scaleRateNmPerYear, scaleRateUncNmPerYear };
}

function robustOf(line: TheilSenLine): DriftAssessment["robustRate"] {
  const finite = (value: number): number | null => (Math.abs(value) < Infinity ? value : null);
  return { slope: line.slope, low: finite(line.slopeLow), high: finite(line.slopeHigh) };
}

function forecastsOf(series: DriftSeries, model: ChosenModel, settings: DriftSettings): SegmentForecast[] {
  const last = series.days[series.count - 1]!;
  const days = settings.forecastDays ?? [0.25, 0.5, 1, 2].map((years) => Math.round(last + years * DAYS_PER_YEAR));
  const all = continuationOf(series, model, null);
  const own = continuationOf(series, model, model.kind);
  const horizon = settings.horizonYears ?? 5;
  return settings.tolerance.map((segment) => {
    const crossing = crossingOf(own, segment, settings.crossingCoverage ?? 0.9, horizon);
    const date = (day: number | null): string | null => (day === null ? null : isoDateOfDay(day));
    return {
      ...segment,
      days: days.map((day) => ({
        date: isoDateOfDay(day),
        probabilityOut: probabilityOut(all, segment, day, "instrument"),
      })),
      crossing: {
        date: date(crossing.day),
        low: date(crossing.lowDay),
        high: date(crossing.highDay),
        coverage: crossing.coverage,
        past: crossing.day !== null && crossing.day <= last,
      },
    };
  });
}

function nextYearOf(series: DriftSeries, model: ChosenModel): DriftAssessment["nextYear"] {
  const day = Math.round(series.days[series.count - 1]! + DAYS_PER_YEAR);
  const all = continuationOf(series, model, null);
  return { date: isoDateOfDay(day), ...predictInterval(all, "mid", day, "check", 0.9) };
}

/** The watched charts, moving ranges and CUSUM of the error at mid-range. Limits stated for a chart are those of its last point. */
function chartsOf(series: DriftSeries): DriftChart[] {
  const date = (index: number): string => isoDateOfDay(series.days[index]!);
  const charts = watch(series)
    .filter((chart) => chart.points.length > 0)
    .map((chart): DriftChart => {
      const last = chart.points.at(-1)!;
      return {
        name: chart.quantity,
        unit: "nm",
        alerts: chart.alerts,
        centre: last.centre,
        limits: { lower: last.lower, upper: last.upper, provisional: last.provisional },
        points: chart.points.map((point: WatchedPoint) => ({
          index: point.index,
          date: date(point.index),
          value: point.value,
          lower: point.lower,
          upper: point.upper,
          outside: point.outside,
        })),
      };
    });
  const first = lastRunStart(series);
  const values = [...series.midErrorNm.subarray(first)];
  if (values.length < 2) return charts;
  const single = individualsChart(values);
  charts[1]!.patterns = westernElectricSignals(values, single.centre, single.sd || 1e-12).map(({ index, rule }) => ({
    index: index + first,
    rule,
  }));
  const provisional = values.length < 20;
  charts.push({
    name: "moving range of error at mid-range",
    unit: "nm",
    alerts: false,
    centre: single.meanMovingRange,
    limits: { lower: 0, upper: single.movingRangeUpper, provisional },
    points: single.movingRanges.map((value, i) => ({
      index: first + i + 1,
      date: date(first + i + 1),
      value,
      lower: 0,
      upper: single.movingRangeUpper,
      outside: value > single.movingRangeUpper,
    })),
  });
  const sums = cusumChart(values, single.centre, 0.5 * single.sd, 5 * single.sd);
  charts.push({
    name: "cusum of error at mid-range",
    unit: "nm",
    alerts: false,
    centre: 0,
    limits: { lower: -sums.limit, upper: sums.limit, provisional },
    points: values.map((_, i) => ({
      index: first + i,
      date: date(first + i),
      value: sums.high[i]! >= sums.low[i]! ? sums.high[i]! : -sums.low[i]!,
      lower: -sums.limit,
      upper: sums.limit,
      outside: sums.high[i]! > sums.limit || sums.low[i]! > sums.limit,
    })),
  });
  return charts;
}

function lastRunStart(series: DriftSeries): number {
  let first = series.count - 1;
  while (first > 0 && series.run[first - 1] === series.run[series.count - 1]) first -= 1;
  return first;
}
