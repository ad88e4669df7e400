/**
 * A history of checks as two series over time: error at mid-range and scale error, both over one common range.
 *
 * Each check's weighted line of error against wavelength is read at the middle of the range that the whole history has in common, so
 * that checks with other lines, or fewer, stand in the same series with the uncertainty they deserve. The uncertainties here are those
 * that the lines state; what a configuration scatters beyond them is estimated from the series itself (`scatterBetweenChecks`).
 * Units: nm, days (see civil-date.ts), years of 365.2425 days counted from the first check.
 */
import type { DriftPoint } from "../analysis/types.ts";
import { median } from "../spectrum/median.ts";
import { DAYS_PER_YEAR } from "./civil-date.ts";
import { errorLineOf, type DriftLine } from "./drift-point.ts";

/** One check of a configuration. */
export interface DriftCheck {
  /** Days since 1970-01-01; a fraction is the time of day. */
  day: number;
  temperatureC: number | null;
  /** Label of the reference source; null when it was not recorded. */
  source: string | null;
  /** Judged lines; may be empty where only `point` was kept. */
  lines: readonly DriftLine[];
  /** The check's point as it was stored, used when there are no lines; absent = none. */
  point?: DriftPoint;
  /** Standard uncertainty that moves all lines together, nm; absent = 0. */
  sharedUncNm?: number;
  /** True when an adjustment, a service or anything else that breaks the series lies before this check; absent = no. */
  startsRun?: boolean;
}

export interface DriftSeries {
  /** Number of checks. */
  count: number;
  /** For each check, in order of time: its index in the history as it was given. */
  order: Int32Array;
  days: Float64Array;
  /** Years since the first check. */
  years: Float64Array;
  midNm: number;
  /** Range of the scale error, nm; 0 = no check has two different wavelengths, and the scale error is not known. */
  rangeNm: number;
  midErrorNm: Float64Array;
  midUncNm: Float64Array;
  scaleErrorNm: Float64Array;
  /** Infinity where the check alone can't tell it. */
  scaleUncNm: Float64Array;
  covarianceNm2: Float64Array;
  /** Sum of squared line residuals over their stated variance, and its degrees of freedom. */
  chiSquare: Float64Array;
  chiSquareDof: Int32Array;
  /** NaN where it was not recorded. */
  temperatureC: Float64Array;
  /** Number of the run (0 = first), growing after each adjustment. */
  run: Int32Array;
  /** Index into `sources`; -1 when not recorded. */
  source: Int32Array;
  sources: string[];
}

/** @returns null when no check holds a line or a point */
export function seriesOf(history: readonly DriftCheck[]): DriftSeries | null {
  const usable = history
    .map((check, index) => ({ check, index }))
    .filter(({ check }) => check.lines.length > 0 || check.point !== undefined)
    .sort((a, b) => a.check.day - b.check.day || a.index - b.index);
  if (usable.length === 0) return null;
  const count = usable.length;
  const range = commonRange(usable.map(({ check }) => check));
  const midNm = (range.firstNm + range.lastNm) / 2;
  const rangeNm = range.lastNm - range.firstNm;
  const series: DriftSeries = {
    count,
    order: new Int32Array(count),
    days: new Float64Array(count),
    years: new Float64Array(count),
    midNm,
    rangeNm,
    midErrorNm: new Float64Array(count),
    midUncNm: new Float64Array(count),
    scaleErrorNm: new Float64Array(count),
    scaleUncNm: new Float64Array(count),
    covarianceNm2: new Float64Array(count),
    chiSquare: new Float64Array(count),
    chiSquareDof: new Int32Array(count),
    temperatureC: new Float64Array(count),
    run: new Int32Array(count),
    source: new Int32Array(count),
    sources: [],
  };
  let run = 0;
  usable.forEach(({ check, index }, i) => {
    series.order[i] = index;
    series.days[i] = check.day;
    series.years[i] = (check.day - usable[0]!.check.day) / DAYS_PER_YEAR;
    if (check.startsRun === true && i > 0) run += 1;
    series.run[i] = run;
    series.temperatureC[i] = check.temperatureC ?? NaN;
    series.source[i] = sourceIndex(series.sources, check.source);
    placeCheck(series, i, check);
  });
  return series;
}

function sourceIndex(sources: string[], label: string | null): number {
  if (label === null || label === "") return -1;
  const known = sources.indexOf(label);
  if (known >= 0) return known;
  sources.push(label);
  return sources.length - 1;
}

/**
 * The range that the history has in common: from the shortest to the longest wavelength that at least two checks hold, so that one
 * strange line of one check does not stretch it.
 */
function commonRange(checks: readonly DriftCheck[]): { firstNm: number; lastNm: number } {
  const all: number[] = [];
  for (const check of checks) {
    if (check.lines.length > 0) for (const line of check.lines) all.push(line.wavelengthNm);
    else all.push(check.point!.midNm - check.point!.rangeNm / 2, check.point!.midNm + check.point!.rangeNm / 2);
  }
  all.sort((a, b) => a - b);
  const shared = all.filter(
    (value, i) => (i > 0 && value - all[i - 1]! < 0.1) || (i + 1 < all.length && all[i + 1]! - value < 0.1),
  );
  const kept = shared.length >= 2 ? shared : all;
  return { firstNm: kept[0]!, lastNm: kept.at(-1)! };
}

function placeCheck(series: DriftSeries, i: number, check: DriftCheck): void {
  const shared = (check.sharedUncNm ?? 0) * (check.sharedUncNm ?? 0);
  const line = check.lines.length > 0 ? errorLineOf(check.lines)! : null;
  const point = check.point;
  const own = line ?? {
    midNm: point!.midNm,
    rangeNm: point!.rangeNm,
    midErrorNm: point!.midErrorNm,
    scaleErrorNm: point!.scaleErrorNm,
    midVarianceNm2: point!.midErrorUncNm * point!.midErrorUncNm,
    scaleVarianceNm2: point!.scaleErrorUncNm * point!.scaleErrorUncNm,
    covarianceNm2: point!.covarianceNm2,
    hasSlope: point!.rangeNm > 0,
  };
  series.chiSquare[i] = line?.chiSquare ?? 0;
  series.chiSquareDof[i] = line?.degreesOfFreedom ?? 0;
  if (!own.hasSlope) {
    series.midErrorNm[i] = own.midErrorNm;
    series.midUncNm[i] = Math.sqrt(own.midVarianceNm2 + shared);
    series.scaleUncNm[i] = Infinity;
    return;
  }
  const x = (series.midNm - own.midNm) / own.rangeNm;
  const stretch = series.rangeNm / own.rangeNm;
  series.midErrorNm[i] = own.midErrorNm + x * own.scaleErrorNm;
  const midVariance = own.midVarianceNm2 + 2 * x * own.covarianceNm2 + x * x * own.scaleVarianceNm2;
  series.midUncNm[i] = Math.sqrt(Math.max(0, midVariance) + shared);
  series.scaleErrorNm[i] = own.scaleErrorNm * stretch;
  series.scaleUncNm[i] = Math.sqrt(own.scaleVarianceNm2) * stretch;
  series.covarianceNm2[i] = (own.covarianceNm2 + x * own.scaleVarianceNm2) * stretch;
}

/**
 * Standard deviation from check to check that neither a trend nor a single step or outlier can pretend: from the median of successive
 * differences (median |N(0, 2 s²)| = 0.9539 s).
 */
function scatterBetweenChecks(values: ArrayLike<number>): number {
  if (values.length < 2) return 0;
  const differences = new Float64Array(values.length - 1);
  for (let i = 0; i < differences.length; i++) differences[i] = Math.abs(values[i + 1]! - values[i]!);
  return median(differences) / 0.9538726;
}

/**
 * Relative standard uncertainties of a series' points for weighting: the stated one and, in square, what the series scatters beyond it.
 * Only their ratios matter to the fits, whose scale comes from the residuals.
 */
export function weightingUncs(values: Float64Array, uncs: Float64Array): Float64Array {
  const finite = values.filter((_, i) => uncs[i]! < Infinity);
  const scatter = scatterBetweenChecks(finite);
  const typical = median(uncs.filter((unc) => unc < Infinity)) || 0;
  const beyond = Math.max(0, scatter * scatter - typical * typical);
  const floor = Math.max(1e-12, 1e-3 * scatter);
  return uncs.map((unc) => (unc < Infinity ? Math.sqrt(unc * unc + beyond + floor * floor) : Infinity));
}
