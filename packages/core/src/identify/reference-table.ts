/**
 * The published lines that may be seen: one sorted table per question asked, in the medium of the axis.
 *
 * Strength  each line's published intensity over that of the third strongest of its spectrum in the window, at most 1.
 *           Published scales differ between spectra and lamps scatter by a factor of three and more, so a strength is
 *           only ever compressed into odds (see `oddsOf`): evidence, never proof. Lines of ions count less beside
 *           their neutral atom (low-pressure lamps; common practice, no source).
 * Medium    wavelengths as the axis means them: vacuum, or air with vacuum below 200 nm. The air of the room differs
 *           from standard air by less than the offset that is searched for anyway.
 * Kept      the sorted lines of a lamp are kept from one question to the next, by content: the same question gives the
 *           same bits, kept or not
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
/** Lamps whose sorted lines are kept. */
const mostKept = 48;

/** All published lines of a lamp, ascending on the axis' medium. */
export interface LampTable {
  nm: Float64Array;
  lines: readonly ReferenceLine[];
  /** Published intensity; NaN where there is none. */
  intensity: Float64Array;
  /** Number of each line's spectrum, and of its element. */
  spectrum: Int32Array;
  element: Int32Array;
  /** 1 for lines of ions. */
  ion: Uint8Array;
  /** Spectra and elements in all. */
  spectra: number;
  elements: number;
}

export interface ReferenceTable {
  /** Ascending, nm, in the medium of the axis. */
  nm: Float64Array;
  /** 0..1, see the module's header. */
  strength: Float64Array;
  /** Published intensity on one scale a spectrum, not cut at 1: for comparing neighbours. */
  brightness: Float64Array;
  /** Number of each line's spectrum, and of its element. */
  spectrum: Int32Array;
  element: Int32Array;
  /** Elements of the lamp. */
  elements: number;
  /** 1 for lines of ions. */
  ion: Uint8Array;
  lines: readonly ReferenceLine[];
  /** 1 for a procedure's own lines. */
  expected: Uint8Array;
}

/** Wavelength of a published line as the axis means wavelengths, nm. */
export function wavelengthOnAxis(line: ReferenceLine, meaning: AxisMeaning): number {
  return meaning === "vacuum" ? line.wavelengthVacuumNm : lineWavelengthNm(line).wavelengthNm;
}

const keptTables = new WeakMap<LineList, Map<string, LampTable>>();

/** The lines of some elements, sorted and without doubles. */
export function lampTable(list: LineList, elements: readonly string[], meaning: AxisMeaning): LampTable {
  let tables = keptTables.get(list);
  if (tables === undefined) {
    tables = new Map();
    keptTables.set(list, tables);
  }
  const key = `${meaning === "vacuum" ? "vacuum" : "air"}|${elements.join("|")}`;
  const known = tables.get(key);
  if (known !== undefined) return known;
  const made = makeLampTable(list, elements, meaning);
  if (tables.size >= mostKept) tables.clear();
  tables.set(key, made);
  return made;
}

function makeLampTable(list: LineList, elements: readonly string[], meaning: AxisMeaning): LampTable {
  const sorted = linesOf(list, elements)
    .map((line) => ({ line, nm: wavelengthOnAxis(line, meaning) }))
    .sort((a, b) => a.nm - b.nm);
  const kept: { line: ReferenceLine; nm: number }[] = [];
  for (const entry of sorted) {
    const { line, nm } = entry;
    const before = kept[kept.length - 1];
    if (before !== undefined && before.line.spectrum === line.spectrum && nm - before.nm < sameLineNm) {
      // Two measurements of one line: the one with the smaller stated uncertainty, the stronger intensity of the two.
      const better = uncertaintyOf(line) < uncertaintyOf(before.line) ? line : before.line;
      const intensity = line.relativeIntensity ?? before.line.relativeIntensity;
      before.line = {
        ...better,
        relativeIntensity: better.relativeIntensity ?? intensity,
      };
      before.nm = wavelengthOnAxis(before.line, meaning);
      continue;
    }
    kept.push(entry);
  }
  kept.sort((a, b) => a.nm - b.nm);
  const lines = kept.map((entry) => entry.line);
  const spectra = [...new Set(lines.map((line) => line.spectrum))];
  const names = [...new Set(lines.map((line) => line.element))];
  return {
    nm: Float64Array.from(kept, (entry) => entry.nm),
    lines,
    intensity: Float64Array.from(lines, (line) => line.relativeIntensity ?? Number.NaN),
    spectrum: Int32Array.from(lines, (line) => spectra.indexOf(line.spectrum)),
    element: Int32Array.from(lines, (line) => names.indexOf(line.element)),
    ion: Uint8Array.from(lines, (line) => (isIon(line) ? 1 : 0)),
    spectra: spectra.length,
    elements: names.length,
  };
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
  const lamp = lampTable(list, elements, meaning);
  const first = lowerBound(lamp.nm, fromNm);
  let last = lowerBound(lamp.nm, toNm);
  while (last < lamp.nm.length && (lamp.nm[last] as number) <= toNm) last += 1;
  const count = Math.max(0, last - first);
  const scale = thirdStrongest(lamp, first, last);
  const hasNeutral = new Uint8Array(lamp.elements);
  for (let j = first; j < last; j++) if (lamp.ion[j] === 0) hasNeutral[lamp.element[j] as number] = 1;
  const table: ReferenceTable = {
    nm: lamp.nm.subarray(first, first + count),
    strength: new Float64Array(count),
    brightness: new Float64Array(count),
    spectrum: lamp.spectrum.subarray(first, first + count),
    element: lamp.element.subarray(first, first + count),
    elements: lamp.elements,
    ion: lamp.ion.subarray(first, first + count),
    lines: lamp.lines.slice(first, first + count),
    expected: new Uint8Array(count),
  };
  for (let k = 0; k < count; k++) {
    const j = first + k;
    const unit = scale[lamp.spectrum[j] as number] as number;
    const intensity = lamp.intensity[j] as number;
    let value = unit === 0 ? 1 : Number.isNaN(intensity) ? strengthWithoutIntensity : intensity / unit;
    const isRare = lamp.ion[j] === 1 && hasNeutral[lamp.element[j] as number] === 1;
    table.brightness[k] = isRare ? value * ionBrightness : value;
    if (isRare) value = Math.min(1, value) * ionOdds;
    if (expectedLinesNm.length > 0) {
      const known = lineWavelengthNm(lamp.lines[j] as ReferenceLine).wavelengthNm;
      if (expectedLinesNm.some((wanted) => Math.abs(wanted - known) <= expectedWithinNm)) {
        value = Math.max(value, expectedStrength);
        table.expected[k] = 1;
      }
    }
    table.strength[k] = Math.min(1, value);
  }
  return table;
}

/** What fluorescent room light shows of mercury, air nm. */
const roomLight = [404.6565, 435.8335, 546.075, 576.961, 579.067] as const;

/** Mercury's lines of room light on the axis' medium, nm; none for a lamp that holds mercury itself. */
export function roomLightOn(list: LineList, elements: readonly string[], meaning: AxisMeaning): readonly number[] {
  if (elements.some((element) => element.startsWith("Hg"))) return [];
  const mercury = lampTable(list, ["Hg"], meaning);
  const found: number[] = [];
  mercury.lines.forEach((line, j) => {
    const air = line.wavelengthAirNm ?? 0;
    if (roomLight.some((nm) => Math.abs(nm - air) < expectedWithinNm)) found.push(mercury.nm[j] as number);
  });
  return found;
}

/** Whether a line belongs to an ion rather than to the neutral atom. */
export const isIon = (line: ReferenceLine): boolean => !line.spectrum.endsWith(" I") && line.spectrum.includes(" ");
const uncertaintyOf = (line: ReferenceLine): number => line.uncertaintyNm ?? Number.POSITIVE_INFINITY;

/** Third-strongest published intensity of each spectrum among some lines (the strongest where there are fewer than three; 0: none stated). */
export function thirdStrongest(lamp: LampTable, first: number, last: number): Float64Array {
  const top = new Float64Array(3 * lamp.spectra);
  for (let j = first; j < last; j++) {
    const value = lamp.intensity[j] as number;
    if (Number.isNaN(value)) continue;
    const k = 3 * (lamp.spectrum[j] as number);
    if (value > (top[k] as number)) {
      top[k + 2] = top[k + 1] as number;
      top[k + 1] = top[k] as number;
      top[k] = value;
    } else if (value > (top[k + 1] as number)) {
      top[k + 2] = top[k + 1] as number;
      top[k + 1] = value;
    } else if (value > (top[k + 2] as number)) top[k + 2] = value;
  }
  const scale = new Float64Array(lamp.spectra);
  for (let s = 0; s < lamp.spectra; s++) scale[s] = (top[3 * s + 2] as number) || (top[3 * s] as number);
  return scale;
}

/** Strength of one line in a window whose scales are known (`thirdStrongest`); ions as beside their neutral atom. */
export function strengthIn(lamp: LampTable, scale: Float64Array, j: number): number {
  const unit = scale[lamp.spectrum[j] as number] as number;
  const intensity = lamp.intensity[j] as number;
  const value = unit === 0 ? 1 : Number.isNaN(intensity) ? strengthWithoutIntensity : Math.min(1, intensity / unit);
  return lamp.ion[j] === 1 ? value * ionOdds : value;
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
