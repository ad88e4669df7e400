/**
 * Where a configuration is heading: distribution of its error on a later day, probability of being out of tolerance, crossing date.
 *
 * State       error at mid-range m and scale error s on a day, from each form of the model (choose-model.ts) continued: Student
 *             distributed about the fitted value with the parameters' covariance. m and s are independent, as in the choice.
 * Averaged    over the forms by their posterior probability: model uncertainty. The probability of being out of tolerance takes all
 *             kinds, the crossing date those of the kind that was chosen.
 * Scatter     a later check adds what checks scatter about the fit, process and measurement together. The instrument itself adds the part
 *             that the lines' stated uncertainties do not explain, and for a temperature effect the spread of the room.
 * Out         the largest |m + x s| over a segment, at one of its ends (x = (end - mid)/range), exceeds its tolerance. s is integrated
 *             over equal shares of its distribution, m exactly.
 * Crossing    F(day) = probability that the state lies outside on that day, without scatter. Its median is the date, its tails
 *             the interval; for one straight line these are Fieller's limits. Limits: a model continues as it is; nobody adjusts.
 */
import { exp } from "../numeric/elementary.ts";
import { studentCdf, studentQuantile } from "../numeric/distributions.ts";
import { median } from "../spectrum/median.ts";
import { fitForm, type ChosenModel, type DriftForm, type DriftKind, type FormFit } from "./choose-model.ts";
import { DAYS_PER_YEAR } from "./civil-date.ts";
import type { DriftSeries } from "./history.ts";

/** A value on a day: location, standard uncertainty, degrees of freedom of a Student distribution. */
export interface Prediction {
  valueNm: number;
  uncNm: number;
  degreesOfFreedom: number;
}

/** One form of the model, ready to be continued. */
interface Member {
  weight: number;
  kind: DriftKind;
  form: DriftForm;
  fits: Record<"mid" | "scale", FormFit>;
  /** Standard deviations of a check about the fit, and of the instrument's own part of it, nm. */
  checkSdNm: Record<"mid" | "scale", number>;
  processSdNm: Record<"mid" | "scale", number>;
}

export interface Continuation {
  series: DriftSeries;
  sourceLevels: boolean;
  members: Member[];
}

/** What is asked of a day: the state alone, the instrument with its own scatter, or a check made on it. */
export type Asked = "state" | "instrument" | "check";

const leastWeight = 2e-3;
const mostMembers = 16;
/** Equal shares that the scale error's distribution is cut into. */
const shares = 12;

/** @param kind  forms of this kind only; null = all, weighted by their probability */
export function continuationOf(series: DriftSeries, model: ChosenModel, kind: DriftKind | null): Continuation {
  const forms = model.forms.filter((form) => kind === null || form.kind === kind);
  const best = forms[0]!.logEvidence;
  const kept = forms
    .map((form) => ({ form, weight: exp(form.logEvidence - best) }))
    .filter(({ weight }) => weight >= leastWeight)
    .slice(0, mostMembers);
  let total = 0;
  for (const { weight } of kept) total += weight;
  const typicalUnc = { mid: finiteMedian(series.midUncNm), scale: finiteMedian(series.scaleUncNm) };
  const spreadK = temperatureSpreadK(series);
  const members = kept.map(({ form, weight }) => {
    const fits = {
      mid: fitForm(series, form, "mid", model),
      scale: fitForm(series, form, "scale", model),
    };
    const scatter = (which: "mid" | "scale", measured: number): number => {
      const { residualSdNm, effects } = fits[which];
      const warm = form[which].findIndex((term) => term.effect === "temperature");
      const room = warm < 0 ? 0 : effects[warm]! * spreadK;
      const sd = residualSdNm === residualSdNm ? residualSdNm : 0;
      return Math.sqrt(Math.max(0, sd * sd - measured * measured) + room * room);
    };
    return {
      weight: weight / total,
      kind: form.kind,
      form,
      fits,
      checkSdNm: { mid: scatter("mid", 0), scale: scatter("scale", 0) },
      processSdNm: { mid: scatter("mid", typicalUnc.mid), scale: scatter("scale", typicalUnc.scale) },
    };
  });
  return { series, sourceLevels: model.sourceLevels, members };
}

function finiteMedian(values: Float64Array): number {
  const finite = values.filter((value) => value < Infinity);
  return finite.length === 0 ? 0 : median(finite);
}

function temperatureSpreadK(series: DriftSeries): number {
  const known = series.temperatureC.filter((value) => value === value);
  if (known.length < 2) return 0;
  let sum = 0;
  for (const value of known) sum += value;
  const mean = sum / known.length;
  let squares = 0;
  for (const value of known) squares += (value - mean) * (value - mean);
  return Math.sqrt(squares / (known.length - 1));
}

/** Row of the design on a later day: the last run, the last check's source, the room at its mean temperature. */
function rowAt({ series, sourceLevels }: Continuation, form: DriftForm, which: "mid" | "scale", day: number): number[] {
  const last = series.count - 1;
  const row: number[] = [];
  for (let run = 0; run <= series.run[last]!; run++) row.push(run === series.run[last] ? 1 : 0);
  if (sourceLevels)
    for (let source = 1; source < series.sources.length; source++) row.push(series.source[last] === source ? 1 : 0);
  const years = (day - series.days[0]!) / DAYS_PER_YEAR;
  const middle = series.years[last]! / 2;
  for (const term of form[which]) {
    switch (term.effect) {
      case "trend":
        row.push(years);
        break;
      case "curvature":
        row.push((years - middle) * (years - middle));
        break;
      case "onset":
        row.push(Math.max(0, years - series.years[term.place]!));
        break;
      case "step":
        row.push(day >= series.days[term.place]! ? 1 : 0);
        break;
      case "temperature":
      case "odd":
        row.push(0);
        break;
    }
  }
  return row;
}

function predictMember(
  continuation: Continuation,
  member: Member,
  which: "mid" | "scale",
  day: number,
  asked: Asked,
): Prediction {
  const fit = member.fits[which];
  if (fit.degreesOfFreedom === 0) return { valueNm: 0, uncNm: 0, degreesOfFreedom: Infinity };
  const row = rowAt(continuation, member.form, which, day);
  const n = row.length;
  let valueNm = 0;
  let variance = 0;
  for (let a = 0; a < n; a++) {
    valueNm += row[a]! * (a < fit.levels.length ? fit.levels[a]! : fit.effects[a - fit.levels.length]!);
    for (let b = 0; b < n; b++)
      if (row[a] !== 0 && row[b] !== 0) variance += row[a]! * row[b]! * fit.covariance[a * n + b]!;
  }
  const scatter = asked === "state" ? 0 : asked === "check" ? member.checkSdNm[which] : member.processSdNm[which];
  return {
    valueNm,
    uncNm: Math.sqrt(Math.max(0, variance) + scatter * scatter),
    degreesOfFreedom: fit.degreesOfFreedom,
  };
}

/** Interval of the error at mid-range (or the scale error) of a check on a day, probabilistically symmetric, models averaged. */
export function predictInterval(
  continuation: Continuation,
  which: "mid" | "scale",
  day: number,
  asked: Asked,
  coverage: number,
): { valueNm: number; lowNm: number; highNm: number } {
  const parts = continuation.members.map((member) => ({
    weight: member.weight,
    prediction: predictMember(continuation, member, which, day, asked),
  }));
  let low = Infinity;
  let high = -Infinity;
  for (const { prediction } of parts) {
    const reach = prediction.uncNm * studentQuantile(1 - (1 - coverage) / 8, prediction.degreesOfFreedom);
    low = Math.min(low, prediction.valueNm - 2 * reach);
    high = Math.max(high, prediction.valueNm + 2 * reach);
  }
  const below = (x: number): number => {
    let sum = 0;
    for (const { weight, prediction } of parts) sum += weight * shareBelow(prediction, x);
    return sum;
  };
  const quantile = (p: number): number => bisect(low, high, (x) => below(x) >= p);
  return { valueNm: quantile(0.5), lowNm: quantile((1 - coverage) / 2), highNm: quantile((1 + coverage) / 2) };
}

function shareBelow({ valueNm, uncNm, degreesOfFreedom }: Prediction, x: number): number {
  if (!(uncNm > 0)) return x >= valueNm ? 1 : 0;
  return studentCdf((x - valueNm) / uncNm, degreesOfFreedom);
}

/** Smallest x between low and high where `reached` holds, `reached` rising; 40 halvings. */
function bisect(low: number, high: number, reached: (x: number) => boolean): number {
  for (let i = 0; i < 40; i++) {
    const middle = low + 0.5 * (high - low);
    if (reached(middle)) high = middle;
    else low = middle;
  }
  return high;
}

/** A part of the range with its tolerance; clipped to what the checks cover. */
export interface ForecastSegment {
  fromNm: number;
  toNm: number;
  toleranceNm: number;
}

const quantiles = new Map<number, Float64Array>();
/** Middles of equal shares of a Student distribution. */
function shareMiddles(degreesOfFreedom: number): Float64Array {
  let middles = quantiles.get(degreesOfFreedom);
  if (middles === undefined) {
    middles = Float64Array.from({ length: shares }, (_, j) => studentQuantile((j + 0.5) / shares, degreesOfFreedom));
    if (quantiles.size > 500) quantiles.clear();
    quantiles.set(degreesOfFreedom, middles);
  }
  return middles;
}

/** Probability that the largest |m + x s| of a segment exceeds its tolerance on a day. */
export function probabilityOut(
  continuation: Continuation,
  segment: ForecastSegment,
  day: number,
  asked: Asked,
): number {
  const { series } = continuation;
  const ends = endsOf(series, segment);
  let total = 0;
  for (const member of continuation.members) {
    const m = predictMember(continuation, member, "mid", day, asked);
    const s = predictMember(continuation, member, "scale", day, asked);
    const middles = s.uncNm > 0 ? shareMiddles(s.degreesOfFreedom) : [0];
    let out = 0;
    for (const z of middles) {
      const scale = s.valueNm + z * s.uncNm;
      let low = -Infinity;
      let high = Infinity;
      for (const x of ends) {
        low = Math.max(low, -segment.toleranceNm - x * scale);
        high = Math.min(high, segment.toleranceNm - x * scale);
      }
      out += high <= low ? 1 : 1 - (shareBelow(m, high) - shareBelow(m, low));
    }
    total += member.weight * (out / middles.length);
  }
  return Math.min(1, Math.max(0, total));
}

/** Both ends of a segment in units of the range from mid-range; a segment wholly outside the lines keeps its own ends. */
function endsOf(series: DriftSeries, segment: ForecastSegment): [number, number] {
  if (!(series.rangeNm > 0)) return [0, 0];
  const at = (nm: number): number => (nm - series.midNm) / series.rangeNm;
  const low = Math.max(at(segment.fromNm), -0.5);
  const high = Math.min(at(segment.toNm), 0.5);
  return low <= high ? [low, high] : [at(segment.fromNm), at(segment.toNm)];
}

export interface Crossing {
  /** Day numbers; null = not within the horizon. */
  day: number | null;
  lowDay: number | null;
  highDay: number | null;
  coverage: number;
}

/** The interval's ends are looked for this far; a date beyond it says nothing that anyone can use. */
const farthestYears = 60;

/**
 * When the state leaves the tolerance.
 *
 * @param horizonYears  after the last check: a date beyond is null ("not within …"); the interval's ends may lie further
 */
export function crossingOf(
  continuation: Continuation,
  segment: ForecastSegment,
  coverage: number,
  horizonYears: number,
): Crossing {
  const { series } = continuation;
  const first = series.days[0]!;
  const last = series.days[series.count - 1]!;
  const out = (day: number): number => probabilityOut(continuation, segment, day, "state");
  const end = last + farthestYears * DAYS_PER_YEAR;
  // A step outwards in time that grows: fine where the checks lie, coarse where the answer is "decades".
  const days: number[] = [];
  const span = Math.max(last - first, 30);
  for (let i = 0; i < 20; i++) days.push(first + ((last - first) * i) / 20);
  for (let ahead = 0; last + ahead <= end; ahead += Math.max(span / 20, ahead * 0.1)) days.push(last + ahead);
  const values = days.map(out);
  const reach = (p: number): number | null => {
    const at = values.findIndex((value) => value >= p);
    if (at < 0) return null;
    if (at === 0) return days[0]!;
    return bisect(days[at - 1]!, days[at]!, (day) => out(day) >= p);
  };
  const day = reach(0.5);
  return {
    day: day !== null && day <= last + horizonYears * DAYS_PER_YEAR ? day : null,
    lowDay: reach((1 - coverage) / 2),
    highDay: reach((1 + coverage) / 2),
    coverage,
  };
}
