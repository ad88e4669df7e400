/**
 * What a history shows, chosen by evidence among: stable, drift (trend of the error at mid-range), scale (trend of the scale error),
 * step, temperature, mislabelled (a check that fits neither before nor after it).
 *
 * Each kind has a few forms (which of the two series moves, from when on, together with what); a form's evidence is the product of the
 * Bayes factors of both series (evidence.ts), averaged over unknown places, times its share of the kind's prior probability below. The
 * two series are taken as independent, which they are to the extent that mid-range lies near the weighted centre of the lines.
 * A run after an adjustment has a level of its own; so has each source where sources alternate and the data say that they differ.
 */
import { exp, log } from "../numeric/elementary.ts";
import { solveLeastSquares } from "../numeric/linear-least-squares.ts";
import { logBayesFactor, logSumExp, WeightedDesign } from "./evidence.ts";
import { weightingUncs, type DriftSeries } from "./history.ts";

export type DriftKind = "stable" | "drift" | "scale" | "step" | "temperature" | "mislabelled";
export const driftKinds: readonly DriftKind[] = ["stable", "drift", "scale", "step", "temperature", "mislabelled"];

/** One column of a model. `place` is the first check that it moves (onset, step) or the check itself (odd). */
export type DriftTerm =
  { effect: "trend" | "curvature" | "temperature" } | { effect: "onset" | "step" | "odd"; place: number };

export interface DriftForm {
  kind: DriftKind;
  /** What moves the error at mid-range, and the scale error. */
  mid: readonly DriftTerm[];
  scale: readonly DriftTerm[];
  /** ln of the prior probability, with what speaks for an odd check beside its place in the series. */
  logPrior: number;
  /** ln of the Bayes factor of each series. */
  logFactor: Record<Which, number>;
  /** ln of (prior probability × Bayes factors), as far as the checks are independent. */
  logEvidence: number;
}

export type Which = "mid" | "scale";

export interface ChosenModel {
  kind: DriftKind;
  /** Posterior probability of each kind, in the order of `driftKinds`. */
  probabilities: number[];
  /** The most probable form of the chosen kind. */
  form: DriftForm;
  /** All forms, most probable first. */
  forms: DriftForm[];
  /** Whether each source has a level of its own. */
  sourceLevels: boolean;
  /** Share of the checks' information that is independent: 1, or (1 - r)/(1 + r) where neighbours' residuals correlate by r. */
  independence: Record<Which, number>;
}

/** Prior probabilities: most instruments are stable; a mislabelled check is rare and gross. Judgement, no source. */
const kindPrior: Record<DriftKind, number> = {
  stable: 0.64,
  drift: 0.09,
  scale: 0.09,
  step: 0.09,
  temperature: 0.08,
  mislabelled: 0.01,
};

/** A form that explains by two causes at once is taken to be this much rarer than by one. */
const compoundShare = 0.05;
/** A trend in both series is a scale trend where the scale's is at least this share of the other. */
const scaleShare = 0.6;
/** Longer histories are searched for places on a grid of at most this many. */
const mostPlaces = 120;

interface Bases {
  mid: WeightedDesign;
  scale: WeightedDesign;
}

type PlacelessEffect = "trend" | "curvature" | "temperature";
type PlacedEffect = "onset" | "step" | "odd";

/** A family of forms: effects without a place, and at most one with a place that is looked for. */
interface Family {
  /** `by-size`: that of the term that moves the error most. */
  kind: DriftKind | "by-size";
  /** Share of the kind's prior probability. */
  share: number;
  mid: readonly PlacelessEffect[];
  scale: readonly PlacelessEffect[];
  placed?: { effect: PlacedEffect; mid: boolean; scale: boolean };
}

const families: readonly Family[] = [
  { kind: "drift", share: 0.94, mid: ["trend"], scale: [] },
  { kind: "drift", share: 0.01, mid: ["trend", "curvature"], scale: [] },
  { kind: "drift", share: 0.05, mid: [], scale: [], placed: { effect: "onset", mid: true, scale: false } },
  { kind: "scale", share: 0.94, mid: [], scale: ["trend"] },
  { kind: "scale", share: 0.01, mid: [], scale: ["trend", "curvature"] },
  { kind: "scale", share: 0.05, mid: [], scale: [], placed: { effect: "onset", mid: false, scale: true } },
  { kind: "by-size", share: 0.2, mid: ["trend"], scale: ["trend"] },
  { kind: "step", share: 0.55, mid: [], scale: [], placed: { effect: "step", mid: true, scale: false } },
  { kind: "step", share: 0.15, mid: [], scale: [], placed: { effect: "step", mid: false, scale: true } },
  { kind: "step", share: 0.3, mid: [], scale: [], placed: { effect: "step", mid: true, scale: true } },
  { kind: "temperature", share: 0.6, mid: ["temperature"], scale: [] },
  { kind: "temperature", share: 0.15, mid: [], scale: ["temperature"] },
  { kind: "temperature", share: 0.25, mid: ["temperature"], scale: ["temperature"] },
  { kind: "mislabelled", share: 0.4, mid: [], scale: [], placed: { effect: "odd", mid: true, scale: false } },
  { kind: "mislabelled", share: 0.5, mid: [], scale: [], placed: { effect: "odd", mid: true, scale: true } },
  { kind: "mislabelled", share: 0.1, mid: [], scale: [], placed: { effect: "odd", mid: false, scale: true } },
  { kind: "mislabelled", share: 0.2, mid: ["trend"], scale: [], placed: { effect: "odd", mid: true, scale: true } },
  { kind: "mislabelled", share: 0.1, mid: [], scale: ["trend"], placed: { effect: "odd", mid: true, scale: true } },
  {
    kind: "mislabelled",
    share: 0.1,
    mid: ["temperature"],
    scale: [],
    placed: { effect: "odd", mid: true, scale: true },
  },
  { kind: "by-size", share: compoundShare, mid: ["trend", "temperature"], scale: [] },
  { kind: "by-size", share: compoundShare, mid: ["trend"], scale: ["temperature"] },
  { kind: "by-size", share: compoundShare, mid: ["temperature"], scale: ["trend"] },
  {
    kind: "by-size",
    share: compoundShare,
    mid: ["temperature"],
    scale: [],
    placed: { effect: "step", mid: true, scale: false },
  },
  {
    kind: "by-size",
    share: compoundShare,
    mid: ["trend"],
    scale: [],
    placed: { effect: "step", mid: true, scale: false },
  },
];

/** A step needs this many checks on either side, or it can't be told from an odd check. */
const leastBesideStep = 2;

/**
 * @param series       at least one check
 * @param oddEvidence  for each check, ln of further evidence that it is odd: its lines' scatter, another source's lines
 */
export function chooseModel(series: DriftSeries, oddEvidence: ArrayLike<number>): ChosenModel {
  const { bases, sourceLevels } = basesOf(series);
  const search = new Search(series, bases);
  const forms = [formOf("stable", [], [], log(kindPrior.stable), 0, 0)];
  for (const family of families) forms.push(...formsOf(family, search, sourceLevels, oddEvidence));
  forms.sort((a, b) => b.logEvidence - a.logEvidence);
  const independence = {
    mid: independenceOf(series, forms[0]!, "mid", sourceLevels),
    scale: independenceOf(series, forms[0]!, "scale", sourceLevels),
  };
  if (independence.mid < 1 || independence.scale < 1) {
    for (const form of forms) {
      const { logPrior, logFactor } = form;
      // One odd check stands out of its neighbours all the more when they follow one another.
      if (
        form.mid.length + form.scale.length > 0 &&
        [...form.mid, ...form.scale].every((term) => term.effect === "odd")
      )
        continue;
      form.logEvidence = logPrior + independence.mid * logFactor.mid + independence.scale * logFactor.scale;
    }
    forms.sort((a, b) => b.logEvidence - a.logEvidence);
  }
  const total = logSumExp(forms.map((form) => form.logEvidence));
  const probabilities = driftKinds.map((kind) =>
    exp(logSumExp(forms.filter((form) => form.kind === kind).map((form) => form.logEvidence)) - total),
  );
  let best = 0;
  probabilities.forEach((probability, i) => {
    if (probability > probabilities[best]!) best = i;
  });
  const kind = driftKinds[best]!;
  return { kind, probabilities, form: forms.find((form) => form.kind === kind)!, forms, sourceLevels, independence };
}

function formOf(
  kind: DriftKind,
  mid: readonly DriftTerm[],
  scale: readonly DriftTerm[],
  logPrior: number,
  midFactor: number,
  scaleFactor: number,
): DriftForm {
  const logFactor = { mid: midFactor, scale: scaleFactor };
  return { kind, mid, scale, logPrior, logFactor, logEvidence: logPrior + midFactor + scaleFactor };
}

/**
 * Checks whose residuals follow their neighbours' tell less than as many independent ones: with the correlation r of neighbours
 * (first-order autoregression) their sum is worth (1 - r)/(1 + r) of them. r is taken from the residuals of the most
 * probable form where it is positive; what a fitted line takes from it, about (2 + 4 r)/n, is given back (F. H. C. Marriott, J. A. Pope,
 * Biometrika 41 (1954) 390, for a mean; a trend takes about twice that), and it is shrunk as far as chance could have made it.
 */
function independenceOf(series: DriftSeries, form: DriftForm, which: Which, sourceLevels: boolean): number {
  const { residualsNm } = fitForm(series, form, which, { sourceLevels, independence: { mid: 1, scale: 1 } });
  let squares = 0;
  let products = 0;
  let count = 0;
  let before = NaN;
  for (const residual of residualsNm) {
    if (residual !== residual) continue;
    squares += residual * residual;
    if (before === before) products += before * residual;
    before = residual;
    count += 1;
  }
  if (count < 8 || !(squares > 0)) return 1;
  const r = products / squares;
  if (r <= 0) return 1;
  const corrected = r + (2 + 4 * r) / count;
  const signal = count * corrected * corrected;
  const shrunk = Math.min(0.9, corrected * (signal / (1 + signal)));
  return (1 - shrunk) / (1 + shrunk);
}

/** Designs and gains that families share, each made once. */
class Search {
  private readonly designs = new Map<string, WeightedDesign | null>();
  private readonly gains = new Map<string, Float64Array>();
  private readonly columns = new Map<string, Float64Array>();

  constructor(
    readonly series: DriftSeries,
    readonly bases: Bases,
  ) {}

  design(which: Which, effects: readonly PlacelessEffect[]): WeightedDesign | null {
    const key = `${which} ${effects.join(" ")}`;
    let design = this.designs.get(key);
    if (design !== undefined) return design;
    design = this.bases[which];
    for (const effect of effects) design = design?.with(columnOf({ effect }, this.series)) ?? null;
    this.designs.set(key, design);
    return design;
  }

  /** What each place's column takes off the sum of squares, in the order of `placesOf`; NaN where it says nothing new. */
  gainsOf(which: Which, effects: readonly PlacelessEffect[], effect: PlacedEffect): Float64Array {
    const key = `${which} ${effects.join(" ")} ${effect}`;
    let gains = this.gains.get(key);
    if (gains !== undefined) return gains;
    const design = this.design(which, effects);
    gains = Float64Array.from(placesOf(effect, this.series.count), (place) => {
      return design?.gainOf(this.column(effect, place)) ?? NaN;
    });
    this.gains.set(key, gains);
    return gains;
  }

  private column(effect: PlacedEffect, place: number): Float64Array {
    const key = `${effect} ${place}`;
    const column = this.columns.get(key) ?? columnOf({ effect, place }, this.series);
    this.columns.set(key, column);
    return column;
  }
}

function formsOf(family: Family, search: Search, sourceLevels: boolean, oddEvidence: ArrayLike<number>): DriftForm[] {
  const { series, bases } = search;
  const mid = search.design("mid", family.mid);
  const scale = search.design("scale", family.scale);
  if (mid === null || scale === null) return [];
  const midTerms: DriftTerm[] = family.mid.map((effect) => ({ effect }));
  const scaleTerms: DriftTerm[] = family.scale.map((effect) => ({ effect }));
  const prior = log(family.share * kindPrior[family.kind === "by-size" ? "drift" : family.kind]);
  const { placed } = family;
  if (placed === undefined) {
    const midFactor = factor(bases.mid, mid, 0);
    const form = formOf("drift", midTerms, scaleTerms, prior, midFactor, factor(bases.scale, scale, 0));
    return [named(family, form, series, sourceLevels)];
  }
  const places = placesOf(placed.effect, series.count);
  const midGains = placed.mid ? search.gainsOf("mid", family.mid, placed.effect) : null;
  const scaleGains = placed.scale ? search.gainsOf("scale", family.scale, placed.effect) : null;
  const forms: DriftForm[] = [];
  places.forEach((place, j) => {
    const midGain = midGains === null ? 0 : midGains[j]!;
    const scaleGain = scaleGains === null ? 0 : scaleGains[j]!;
    if (midGain !== midGain || scaleGain !== scaleGain) return;
    const term: DriftTerm = { effect: placed.effect, place };
    const odd = placed.effect === "odd" ? oddEvidence[place]! : 0;
    forms.push(
      formOf(
        family.kind === "by-size" ? "drift" : family.kind,
        placed.mid ? [...midTerms, term] : midTerms,
        placed.scale ? [...scaleTerms, term] : scaleTerms,
        prior - log(places.length) + odd,
        factor(bases.mid, mid, midGain, placed.mid ? 1 : 0),
        factor(bases.scale, scale, scaleGain, placed.scale ? 1 : 0),
      ),
    );
  });
  if (family.kind !== "by-size" || forms.length === 0) return forms;
  // Which term is larger is asked once, at the best place.
  const best = forms.reduce((a, b) => (b.logEvidence > a.logEvidence ? b : a));
  const { kind } = named(family, best, series, sourceLevels);
  return forms.map((form) => ({ ...form, kind }));
}

function placesOf(effect: PlacedEffect, count: number): number[] {
  const first = effect === "step" ? leastBesideStep : effect === "onset" ? 1 : 0;
  const last = effect === "step" ? count - leastBesideStep : effect === "onset" ? count - 3 : count - 1;
  const stride = effect === "odd" ? 1 : Math.max(1, Math.ceil(count / mostPlaces));
  const places: number[] = [];
  for (let place = first; place <= last; place += stride) places.push(place);
  return places;
}

/** ln Bayes factor of a fuller design against its base, a further column's gain taken off its sum of squares. */
function factor(base: WeightedDesign, full: WeightedDesign, gain: number, extra = 0): number {
  const added = base.degreesOfFreedom - full.degreesOfFreedom + extra;
  if (added === 0) return 0;
  const sum = Math.max(0, full.residualSumOfSquares - gain);
  return logBayesFactor(base.residualSumOfSquares, sum, added, base.degreesOfFreedom);
}

/** The kind of a form with two causes: that of the one that moves the error most over the history. */
function named(family: Family, form: DriftForm, series: DriftSeries, sourceLevels: boolean): DriftForm {
  if (family.kind !== "by-size") return { ...form, kind: family.kind };
  let kind: DriftKind = "drift";
  let largest = 0;
  for (const which of ["mid", "scale"] as const) {
    const fit = fitForm(series, form, which, { sourceLevels, independence: { mid: 1, scale: 1 } });
    form[which].forEach((term, j) => {
      const column = columnOf(term, series);
      let low = Infinity;
      let high = -Infinity;
      for (const value of column) {
        low = Math.min(low, value);
        high = Math.max(high, value);
      }
      const share = which === "scale" ? 1 / scaleShare : 1;
      const size = share * Math.abs(fit.effects[j]!) * (high - low);
      if (size <= largest) return;
      largest = size;
      if (term.effect === "temperature" || term.effect === "step") kind = term.effect;
      else kind = which === "scale" ? "scale" : "drift";
    });
  }
  return { ...form, kind };
}

export interface FormFit {
  /** Of the terms, in the form's order; nm, nm a year, nm a year², nm/K. */
  effects: Float64Array;
  /** Level of each run, then each source but the first less the first. */
  levels: Float64Array;
  /** Of levels, then effects, row-major; scaled by the residuals, and by what they follow one another. Infinity on the diagonal where nothing is known. */
  covariance: Float64Array;
  degreesOfFreedom: number;
  /** Standard deviation of one check of typical weight about the fit, nm. */
  residualSdNm: number;
  /** Observed minus fitted, nm, one a check; NaN where the check says nothing of this series. */
  residualsNm: Float64Array;
  /** Factor that the stated and scattered uncertainties were grown by. */
  varianceFactor: number;
}

/** Weighted least-squares fit of a form to one of the two series. */
export function fitForm(
  series: DriftSeries,
  form: { mid: readonly DriftTerm[]; scale: readonly DriftTerm[] },
  which: Which,
  { sourceLevels, independence }: Pick<ChosenModel, "sourceLevels" | "independence">,
): FormFit {
  const values = which === "mid" ? series.midErrorNm : series.scaleErrorNm;
  const uncs = weightingUncs(values, which === "mid" ? series.midUncNm : series.scaleUncNm);
  const levels = levelColumns(series, sourceLevels);
  const columns = [...levels, ...form[which].map((term) => columnOf(term, series))];
  const rows: number[] = [];
  uncs.forEach((unc, i) => {
    if (unc < Infinity) rows.push(i);
  });
  const m = rows.length;
  const n = columns.length;
  const residualsNm = new Float64Array(series.count).fill(NaN);
  if (m < n) {
    const nothing = new Float64Array(n * n);
    for (let j = 0; j < n; j++) nothing[j * n + j] = Infinity;
    return {
      effects: new Float64Array(form[which].length),
      levels: new Float64Array(levels.length),
      covariance: nothing,
      degreesOfFreedom: 0,
      residualSdNm: NaN,
      residualsNm,
      varianceFactor: NaN,
    };
  }
  const design = new Float64Array(m * n);
  rows.forEach((row, i) => columns.forEach((column, j) => (design[i * n + j] = column[row]!)));
  const usedUncs = rows.map((row) => uncs[row]!);
  const fit = solveLeastSquares(
    design,
    m,
    n,
    rows.map((row) => values[row]!),
    usedUncs,
  );
  rows.forEach((row, i) => (residualsNm[row] = fit.residuals[i]!));
  const varianceFactor = fit.residualSd === null ? 1 : fit.residualSd * fit.residualSd;
  let weightSum = 0;
  for (const unc of usedUncs) weightSum += 1 / (unc * unc);
  return {
    effects: fit.coefficients.slice(levels.length),
    levels: fit.coefficients.slice(0, levels.length),
    covariance: fit.covariance.map((value) => (value * varianceFactor) / independence[which]),
    degreesOfFreedom: fit.degreesOfFreedom,
    residualSdNm: Math.sqrt(varianceFactor / (weightSum / m)),
    residualsNm,
    varianceFactor,
  };
}

/** Values of a term at the checks of a series. */
export function columnOf(term: DriftTerm, series: DriftSeries): Float64Array {
  const { count, years } = series;
  const column = new Float64Array(count);
  const middle = years[count - 1]! / 2;
  const meanC = term.effect === "temperature" ? meanTemperatureC(series) : NaN;
  for (let i = 0; i < count; i++) {
    switch (term.effect) {
      case "trend":
        column[i] = years[i]!;
        break;
      case "curvature":
        column[i] = (years[i]! - middle) * (years[i]! - middle);
        break;
      case "temperature":
        // A check without a temperature is taken to have been at the mean, which says nothing of the effect.
        column[i] = series.temperatureC[i] === series.temperatureC[i] ? series.temperatureC[i]! - meanC : 0;
        break;
      case "onset":
        column[i] = i > term.place ? years[i]! - years[term.place]! : 0;
        break;
      case "step":
        column[i] = i >= term.place ? 1 : 0;
        break;
      case "odd":
        column[i] = i === term.place ? 1 : 0;
        break;
    }
  }
  return column;
}

/** Mean of the recorded temperatures, °C; NaN for none. */
function meanTemperatureC(series: DriftSeries): number {
  let sum = 0;
  let known = 0;
  for (const value of series.temperatureC) {
    if (value !== value) continue;
    sum += value;
    known += 1;
  }
  return known === 0 ? NaN : sum / known;
}

/** Indicator columns of the levels: one a run, and one a source (but the first) where sources differ. */
function levelColumns(series: DriftSeries, sourceLevels: boolean): Float64Array[] {
  const columns: Float64Array[] = [];
  const runs = series.run[series.count - 1]! + 1;
  for (let run = 0; run < runs; run++) columns.push(Float64Array.from(series.run, (one) => (one === run ? 1 : 0)));
  if (sourceLevels) {
    for (let source = 1; source < series.sources.length; source++) {
      columns.push(Float64Array.from(series.source, (one) => (one === source ? 1 : 0)));
    }
  }
  return columns;
}

function basesOf(series: DriftSeries): { bases: Bases; sourceLevels: boolean } {
  const raw = {
    mid: WeightedDesign.of(series.midErrorNm, rootWeights(series.midErrorNm, series.midUncNm)),
    scale: WeightedDesign.of(series.scaleErrorNm, rootWeights(series.scaleErrorNm, series.scaleUncNm)),
  };
  const runs = levelColumns(series, false);
  const plain = { mid: raw.mid.withAll(runs), scale: raw.scale.withAll(runs) };
  if (!sourcesAlternate(series)) return { bases: plain, sourceLevels: false };
  const both = levelColumns(series, true);
  const levelled = { mid: raw.mid.withAll(both), scale: raw.scale.withAll(both) };
  const trend = columnOf({ effect: "trend" }, series);
  // With and without a trend beside: a trend must not hide that sources differ, nor pretend it.
  const gains = [[], [trend]].map((beside) => {
    const without = { mid: plain.mid.withAll(beside), scale: plain.scale.withAll(beside) };
    const withSources = { mid: levelled.mid.withAll(beside), scale: levelled.scale.withAll(beside) };
    return factor(without.mid, withSources.mid, 0) + factor(without.scale, withSources.scale, 0);
  });
  const differ = Math.max(...gains) + log(0.1) > 0;
  return { bases: differ ? levelled : plain, sourceLevels: differ };
}

/** Three changes of source at least: one change alone can't be told from a step. */
function sourcesAlternate(series: DriftSeries): boolean {
  let changes = 0;
  for (let i = 1; i < series.count; i++) if (series.source[i] !== series.source[i - 1]) changes += 1;
  return changes >= 3 && series.sources.length < series.count / 4 + 1;
}

export function rootWeights(values: Float64Array, uncs: Float64Array): Float64Array {
  return weightingUncs(values, uncs).map((unc) => (unc < Infinity ? 1 / unc : 0));
}
