/** Geometry of the drift ribbon: what span of time and error is shown, where its ticks and the flags of events stand. Pure. */
import type { DriftReply } from "@wavekeep/api/contract";

export type RibbonSeries = "largest" | "mid" | "scale";

const DAY_MS = 86_400_000;
/** A date is drawn at its noon, so that it falls inside its day in every zone. */
export const dateMs = (on: string): number => Date.parse(`${on}T12:00:00Z`);

export interface RibbonPoint {
  /** Index into the reply's points. */
  index: number;
  atMs: number;
  error: number;
  /** Expanded. */
  unc: number;
  isAsLeft: boolean;
}

export function seriesPoints(drift: DriftReply, series: RibbonSeries): RibbonPoint[] {
  return drift.points.map((point, index) => ({
    index,
    atMs: Date.parse(point.at),
    error: series === "largest" ? point.largestErrorNm : series === "mid" ? point.midErrorNm : point.scaleErrorNm,
    unc:
      series === "largest"
        ? point.largestExpandedUncNm
        : series === "mid"
          ? point.midExpandedUncNm
          : point.scaleExpandedUncNm,
    isAsLeft: point.condition === "as-left",
  }));
}

/** Eighteen months back from today, and on to a month past the due date; a young series begins a little before its first point. */
export function timeSpan(drift: DriftReply, todayOn: string): { fromMs: number; toMs: number } {
  const today = dateMs(todayOn);
  const first = drift.points[0] === undefined ? today - 180 * DAY_MS : Date.parse(drift.points[0].at);
  const due = drift.dueOn === null ? today : dateMs(drift.dueOn);
  const fromMs = Math.max(first, today - 549 * DAY_MS) - 8 * DAY_MS;
  return { fromMs: Math.min(fromMs, today - 60 * DAY_MS), toMs: Math.max(today + 75 * DAY_MS, due + 30 * DAY_MS) };
}

export interface ErrorSpan {
  low: number;
  high: number;
  /** Labelled values: the limits and their halves inside the span, zero among them. */
  ticks: number[];
}

/**
 * Cropped to what happened: a limit is shown on the side where the series uses a fifth of it or more (both where
 * neither is, so that a quiet instrument is seen to be quiet); the other side ends at the half limit beyond the points.
 */
export function errorSpan(points: readonly RibbonPoint[], tolerance: number): ErrorSpan {
  const top = Math.max(0, ...points.map((point) => point.error + point.unc));
  const bottom = Math.min(0, ...points.map((point) => point.error - point.unc));
  const half = tolerance / 2;
  const showsUpper = top >= tolerance * 0.2;
  const showsLower = bottom <= -tolerance * 0.2;
  const both = showsUpper === showsLower;
  const headroom = tolerance * 0.15;
  const highest = both || showsUpper ? Math.max(tolerance, top) + headroom : half * Math.ceil(top / half + 1e-9);
  const lowest =
    both || showsLower ? -(Math.max(tolerance, -bottom) + headroom) : half * Math.floor(bottom / half - 1e-9);
  const low = Math.min(lowest, -half);
  const high = Math.max(highest, half);
  const ticks = [-2, -1, 0, 1, 2].map((k) => k * half).filter((value) => value >= low - 1e-12 && value <= high + 1e-12);
  return { low, high, ticks };
}

/**
 * Instants at which the series was broken: the events that moved it, and each as-left check. Where both fall on one day
 * the check's own time counts, so that the point as found stands before the adjustment and the point as left after it.
 */
export function seriesBreaks(events: DriftReply["events"], points: readonly RibbonPoint[]): number[] {
  const asLeft = points.filter((point) => point.isAsLeft).map((point) => point.atMs);
  const moved = events.filter((event) => event.breaksDrift).map((event) => dateMs(event.happenedOn));
  return [...asLeft, ...moved.filter((at) => !asLeft.some((left) => Math.abs(left - at) < DAY_MS))];
}

/** Which of two neighbouring points a line joins: none across an event that broke the series. */
export function joinedRuns(points: readonly RibbonPoint[], breaksMs: readonly number[]): RibbonPoint[][] {
  const runs: RibbonPoint[][] = [];
  let run: RibbonPoint[] = [];
  for (const point of points) {
    const before = run[run.length - 1];
    if (before !== undefined && breaksMs.some((at) => at > before.atMs && at <= point.atMs)) {
      runs.push(run);
      run = [];
    }
    run.push(point);
  }
  if (run.length > 0) runs.push(run);
  return runs;
}

export interface MonthTick {
  atMs: number;
  /** Label where there is one: the quarter's month; the year, strong, in January. */
  label: string | null;
  isYear: boolean;
}

const MONTHS = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];

/** A tick a month; labels at quarters while they have room, else at years. The first label names its year. */
export function monthTicks(fromMs: number, toMs: number, width: number): MonthTick[] {
  const perMonth = (width * 30.44 * DAY_MS) / Math.max(toMs - fromMs, 1);
  const every = perMonth * 3 >= 56 ? 3 : perMonth * 6 >= 56 ? 6 : 12;
  const ticks: MonthTick[] = [];
  const start = new Date(fromMs);
  let isFirst = true;
  for (let k = 1; ; k += 1) {
    const atMs = Date.UTC(start.getUTCFullYear(), start.getUTCMonth() + k, 1);
    if (atMs > toMs) break;
    const at = new Date(atMs);
    const month = at.getUTCMonth();
    const isYear = month === 0;
    const labelled = month % every === 0;
    ticks.push({
      atMs,
      isYear,
      label: !labelled
        ? null
        : isYear
          ? String(at.getUTCFullYear())
          : isFirst
            ? `${MONTHS[month]} ${at.getUTCFullYear()}`
            : (MONTHS[month] ?? ""),
    });
    if (labelled) isFirst = false;
  }
  return ticks;
}

export interface EventFlag {
  index: number;
  x: number;
  /** 0 upper row, 1 lower row, null: no room, read by hover or in the table. */
  tier: 0 | 1 | null;
  /** Text stands at the left of its line, near the right edge. */
  isTurned: boolean;
}

/** Rows for the names of events so that none runs into the next: the upper row first. */
export function placeEventFlags(events: readonly { x: number; textWidth: number }[], width: number): EventFlag[] {
  const ends: [number, number] = [-Infinity, -Infinity];
  return events.map(({ x, textWidth }, index) => {
    const isTurned = x + 12 + textWidth > width;
    const from = isTurned ? x - 12 - textWidth : x;
    const to = isTurned ? x : x + 12 + textWidth;
    const tier = ([0, 1] as const).find((row) => from > ends[row] + 8) ?? null;
    if (tier !== null) ends[tier] = to;
    return { index, x, tier, isTurned };
  });
}
