/**
 * Further evidence that a check is not what its label says, beside its place in the series: lines that scatter as those of no other
 * check do, wavelengths that belong to another source of the same history, and, once it is found odd, the date or source that it fits.
 *
 * Scatter   F test of a check's chi-squared about its own straight line against that of all other checks together; what counts is the
 *           probability times the number of checks (Bonferroni). Lines misnamed by one, or of another lamp, do this.
 * Source    a source is known by the set of wavelengths that most of its checks hold. A check under its label that holds
 *           another source's set (or, where the history knows no such source, the published lines of an element and none of its own), or
 *           whose readings lie on another source's lines and not on its own, is taken as good as certain.
 */
import { builtInLineList, elementsOf, lineWavelengthNm } from "../linelist/built-in.ts";
import { log, regularizedBeta } from "../numeric/elementary.ts";
import { median } from "../spectrum/median.ts";
import type { DriftLine } from "./drift-point.ts";
import type { DriftCheck, DriftSeries } from "./history.ts";

export interface OddEvidence {
  /** ln of the factor by which each check is more probably odd, in the order of the series; 0 = nothing beside its place. */
  logFactor: Float64Array;
  /** Source whose lines a check holds instead of its own; null = its own, or none known. */
  fitsSource: (string | null)[];
}

/** ln of the factor for lines of another source: no instrument does this, only a label. */
const certain = 25;
/** Scatter alone is given at most this. */
const mostByScatter = 20;

/** @param history  the checks that the series was made of, in their own order */
export function oddEvidenceOf(series: DriftSeries, history: readonly DriftCheck[]): OddEvidence {
  const logFactor = new Float64Array(series.count);
  const fitsSource = new Array<string | null>(series.count).fill(null);
  let chiSquare = 0;
  let dof = 0;
  for (let i = 0; i < series.count; i++) {
    chiSquare += series.chiSquare[i]!;
    dof += series.chiSquareDof[i]!;
  }
  const sets = wavelengthSets(series, history);
  for (let i = 0; i < series.count; i++) {
    logFactor[i] = scatterFactor(series, i, chiSquare, dof);
    const check = history[series.order[i]!]!;
    const other = otherSourceOf(check, series.source[i]!, series.sources, sets);
    if (other === null) continue;
    logFactor[i] = certain;
    fitsSource[i] = other;
  }
  return { logFactor, fitsSource };
}

function scatterFactor(series: DriftSeries, i: number, chiSquare: number, dof: number): number {
  const own = series.chiSquareDof[i]!;
  const others = dof - own;
  if (own < 1 || others < 5) return 0;
  const rest = Math.max((chiSquare - series.chiSquare[i]!) / others, 1e-12);
  const f = series.chiSquare[i]! / own / rest;
  const ratio = (own * f) / (own * f + others);
  const probability = Math.max(regularizedBeta(1 - ratio, others / 2, own / 2, ratio), 1e-300);
  // A thousandth, by chance alone, in the whole history is where it begins to count.
  return Math.min(mostByScatter, Math.max(0, -log(probability * series.count) - 6.9));
}

/** For each source, the wavelengths that at least half of its checks hold; empty where fewer than two checks carry the label. */
function wavelengthSets(series: DriftSeries, history: readonly DriftCheck[]): number[][] {
  return series.sources.map((_, source) => {
    const checks = [...series.order].filter((__, i) => series.source[i] === source).map((index) => history[index]!);
    if (checks.length < 2) return [];
    const all = checks.flatMap((check) => check.lines.map((line) => line.wavelengthNm)).sort((a, b) => a - b);
    const kept: number[] = [];
    let from = 0;
    for (let i = 1; i <= all.length; i++) {
      if (i < all.length && all[i]! - all[i - 1]! < sameLineNm) continue;
      if (i - from >= checks.length / 2) kept.push(all[from]!);
      from = i;
    }
    return kept;
  });
}

const sameLineNm = 0.05;

function otherSourceOf(check: DriftCheck, own: number, sources: string[], sets: number[][]): string | null {
  if (own < 0 || check.lines.length < 2 || sets[own]!.length === 0) return null;
  const held = shareOnLines(
    check.lines.map((line) => line.wavelengthNm),
    sets[own]!,
    sameLineNm,
  );
  for (let other = 0; other < sets.length; other++) {
    if (other === own || sets[other]!.length < 2) continue;
    const ofOther = shareOnLines(
      check.lines.map((line) => line.wavelengthNm),
      sets[other]!,
      sameLineNm,
    );
    if (held < 0.34 && ofOther > 0.8) return sources[other]!;
    if (readsAs(check.lines, sets[own]!, sets[other]!)) return sources[other]!;
  }
  // A source that the history does not know otherwise: all lines are strange to the label, and one element has them.
  return held === 0 ? elementOf(check.lines.map((line) => line.wavelengthNm)) : null;
}

/** Element whose published lines four in five of the wavelengths are, to 0.02 nm; null for none, or fewer than three wavelengths. */
function elementOf(wavelengths: readonly number[]): string | null {
  if (wavelengths.length < 3) return null;
  let best: string | null = null;
  let most = 0.8;
  for (const element of elementsOf(builtInLineList)) {
    const lines = builtInLineList.lines
      .filter((line) => line.element === element)
      .map((line) => lineWavelengthNm(line).wavelengthNm);
    const share = shareOnLines(wavelengths, lines, 0.02);
    if (share < most || (share === most && best !== null)) continue;
    most = share;
    best = element;
  }
  return best;
}

/** Readings that lie ten times nearer to another source's lines than to those they are listed under, which are a nanometre off or more. */
function readsAs(lines: readonly DriftLine[], own: readonly number[], other: readonly number[]): boolean {
  const readings = lines.map((line) => line.wavelengthNm + line.errorNm);
  const errors = median(lines.map((line) => Math.abs(line.errorNm)));
  const nearest = (set: readonly number[]): number =>
    median(readings.map((nm) => set.reduce((least, line) => Math.min(least, Math.abs(nm - line)), Infinity)));
  return errors > 1 && nearest(other) < 0.1 * errors && nearest(other) < nearest(own);
}

function shareOnLines(wavelengths: readonly number[], set: readonly number[], withinNm: number): number {
  let found = 0;
  for (const nm of wavelengths) if (set.some((line) => Math.abs(line - nm) < withinNm)) found += 1;
  return found / wavelengths.length;
}
