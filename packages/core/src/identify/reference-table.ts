/**
 * The published lines that may be seen: one sorted table per question asked, in the medium of the axis.
 *
 * Strength  each line's published intensity over that of the third strongest of its spectrum in the window, at most 1.
 *           Published scales differ between spectra and lamps scatter by a factor of three and more, so a strength is
 *           only ever compressed into odds (see `oddsOf`): evidence, never proof. Lines of ions count less beside
 *           their neutral atom (low-pressure lamps; common practice, no source).
 * Medium    wavelengths as the axis means them: vacuum, or air with vacuum below 200 nm. The air of the room differs
 *           from standard air by less than the offset that is searched for anyway.
 */
import type { AxisMeaning, LineList, ReferenceLine } from "../analysis/types.ts";
import { lineWavelengthNm, linesOf } from "../linelist/built-in.ts";
import { exp, log } from "../numeric/elementary.ts";

/** Lines of one spectrum closer than this are one line measured twice, nm (Hg 434.7495 / 434.7506 in the built-in list). */
const sameLineNm = 0.0015;
const strengthWithoutIntensity = 0.1;
/** Ions beside their neutral atom: in the odds of the search, and in what they may carry of a blend. */
const ionOdds = 0.3;
const ionBrightness = 0.03;
/** An expected line of a procedure is taken to be well visible. */
const expectedStrength = 0.5;
const expectedWithinNm = 0.01;

export interface ReferenceTable {
  /** Ascending, nm, in the medium of the axis. */
  nm: Float64Array;
  /** 0..1, see the module's header. */
  strength: Float64Array;
  /** Published intensity on one scale a spectrum, not cut at 1: for comparing neighbours. */
  brightness: Float64Array;
  lines: ReferenceLine[];
  expected: boolean[];
}

/** Wavelength of a published line as the axis means wavelengths, nm. */
export function wavelengthOnAxis(line: ReferenceLine, meaning: AxisMeaning): number {
  return meaning === "vacuum" ? line.wavelengthVacuumNm : lineWavelengthNm(line).wavelengthNm;
}

/**
 * Lines of some elements between two wavelengths.
 *
 * @param expectedLinesNm a procedure's own lines (air above 200 nm, vacuum below); they are taken to be well visible
 */
export function referenceTable(
  list: LineList,
  elements: readonly string[],
  expectedLinesNm: readonly number[],
  fromNm: number,
  toNm: number,
  meaning: AxisMeaning,
): ReferenceTable {
  const kept: { line: ReferenceLine; nm: number }[] = [];
  for (const line of linesOf(list, elements)) {
    const nm = wavelengthOnAxis(line, meaning);
    if (nm < fromNm || nm > toNm) continue;
    const before = kept[kept.length - 1];
    if (before !== undefined && before.line.spectrum === line.spectrum && nm - before.nm < sameLineNm) {
      // Two measurements of one line: the one with the smaller stated uncertainty, the stronger intensity of the two.
      const better = uncertaintyOf(line) < uncertaintyOf(before.line) ? line : before.line;
      const intensity = line.relativeIntensity ?? before.line.relativeIntensity;
      before.line = { ...better, relativeIntensity: better.relativeIntensity ?? intensity };
      before.nm = wavelengthOnAxis(before.line, meaning);
      continue;
    }
    kept.push({ line, nm });
  }
  kept.sort((a, b) => a.nm - b.nm);
  const scale = scaleBySpectrum(kept.map((entry) => entry.line));
  const neutral = new Set(kept.filter((entry) => !isIon(entry.line)).map((entry) => entry.line.element));
  const nm = new Float64Array(kept.length);
  const strength = new Float64Array(kept.length);
  const brightness = new Float64Array(kept.length);
  const expected: boolean[] = [];
  kept.forEach((entry, k) => {
    const { line } = entry;
    nm[k] = entry.nm;
    const unit = scale.get(line.spectrum);
    let value =
      unit === undefined
        ? 1
        : line.relativeIntensity === null
          ? strengthWithoutIntensity
          : line.relativeIntensity / unit;
    const isRare = isIon(line) && neutral.has(line.element);
    brightness[k] = isRare ? value * ionBrightness : value;
    if (isRare) value = Math.min(1, value) * ionOdds;
    const known = lineWavelengthNm(line).wavelengthNm;
    const isExpected = expectedLinesNm.some((wanted) => Math.abs(wanted - known) <= expectedWithinNm);
    if (isExpected) value = Math.max(value, expectedStrength);
    strength[k] = Math.min(1, value);
    expected.push(isExpected);
  });
  return { nm, strength, brightness, lines: kept.map((entry) => entry.line), expected };
}

/** Whether a line belongs to an ion rather than to the neutral atom. */
export const isIon = (line: ReferenceLine): boolean => !line.spectrum.endsWith(" I") && line.spectrum.includes(" ");
const uncertaintyOf = (line: ReferenceLine): number => line.uncertaintyNm ?? Number.POSITIVE_INFINITY;

/** Third-strongest published intensity of each spectrum (the strongest where there are fewer than three). */
function scaleBySpectrum(lines: readonly ReferenceLine[]): Map<string, number> {
  const bySpectrum = new Map<string, number[]>();
  for (const line of lines) {
    if (line.relativeIntensity === null) continue;
    const values = bySpectrum.get(line.spectrum);
    if (values === undefined) bySpectrum.set(line.spectrum, [line.relativeIntensity]);
    else values.push(line.relativeIntensity);
  }
  const scale = new Map<string, number>();
  for (const [spectrum, values] of bySpectrum) {
    values.sort((a, b) => b - a);
    scale.set(spectrum, (values.length >= 3 ? values[2] : values[0]) as number);
  }
  return scale;
}

/** Odds, up to a factor, that a found line is this one: strength to a power below 1, with a floor. */
export function oddsOf(strength: number, power: number): number {
  return exp(power * log(Math.max(strength, 0.001)));
}

/** Index of the first reference at or above a wavelength (length when there is none). */
export function lowerBound(nm: Float64Array, wanted: number): number {
  let low = 0;
  let high = nm.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((nm[middle] as number) < wanted) low = middle + 1;
    else high = middle;
  }
  return low;
}
