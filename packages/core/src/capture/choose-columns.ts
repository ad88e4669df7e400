/**
 * Which column is the axis and which the intensity, and what the axis counts: from the headings first, from the numbers where they say
 * nothing. Every guess a person should see becomes a remark; `ReadOptions` overrule all of them.
 */
import type { AxisKind, AxisUnit, ReadOptions } from "../analysis/types.ts";
import { readHeading, unitIn, type HeadingMeaning } from "./headings.ts";

export interface ColumnChoice {
  axisColumn: number | null;
  intensityColumn: number;
  axisKind: AxisKind;
  axisUnit: AxisUnit;
  remarks: string[];
}

/** Shortest and longest wavelength taken for nanometres, and shortest for angstrom, where no unit is written. Common practice, no source. */
const leastNm = 100;
const mostNm = 2600;
const leastAngstrom = 1000;

const unitOfKind: Record<AxisKind, AxisUnit> = {
  pixel: "px",
  wavelength: "nm",
  wavenumber: "cm-1",
  step: "step",
};

/** What an axis may count that is read nowhere here. */
const foreignAxis = /\b[TGMk]?Hz\b|\bfrequency\b|\b[mk]eV\b|\bm\/z\b|\btime\b|\bppm\b/i;

function isStrictlyMonotonic(values: readonly number[]): boolean {
  let direction = 0;
  for (let i = 1; i < values.length; i += 1) {
    const step = values[i]! - values[i - 1]!;
    const sign = Math.sign(step);
    if (!(sign !== 0)) return false;
    if (direction === 0) direction = sign;
    else if (sign !== direction) return false;
  }
  return direction !== 0;
}

/** Share of the steps that must go one way for a column to be an axis with faults in it. */
const leastOneWay = 0.8;

function mostlyOneWay(values: readonly number[]): boolean {
  let up = 0;
  let down = 0;
  for (let i = 1; i < values.length; i += 1) {
    const step = values[i]! - values[i - 1]!;
    if (step > 0) up += 1;
    else if (step < 0) down += 1;
  }
  return Math.max(up, down) > leastOneWay * (values.length - 1);
}

/** Whole numbers in steps of one. */
function countsSamples(values: readonly number[]): boolean {
  for (let i = 0; i < values.length; i += 1) {
    const value = values[i]!;
    if (value !== Math.floor(value)) return false;
    if (i > 0 && Math.abs(value - values[i - 1]!) !== 1) return false;
  }
  return values.length > 1;
}

/**
 * @param headings  one text a column, empty where there is none
 * @param sample    numbers of the first data rows and of the last, one array a column (NaN where missing)
 * @param metadata  may name the axis' unit
 * @returns the choice, or a sentence when the corrections ask for what is not there
 */
export function chooseColumns(
  headings: readonly string[],
  sample: readonly number[][],
  metadata: Record<string, string>,
  options: ReadOptions,
): ColumnChoice | { problem: string } {
  const columns = sample.length;
  const remarks: string[] = [];
  const meanings = headings.map(readHeading);
  const numbers = sample.map((values) => values.filter((value) => value === value));

  const outside = (column: number): boolean => !Number.isInteger(column) || column < 0 || column >= columns;
  const beyond = (column: number, as: string): { problem: string } => ({
    problem: `The file has ${columns} column${columns === 1 ? "" : "s"}; column ${column + 1} was asked for as ${as}.`,
  });
  if (typeof options.axisColumn === "number" && outside(options.axisColumn)) return beyond(options.axisColumn, "axis");
  if (options.intensityColumn !== undefined && outside(options.intensityColumn)) {
    return beyond(options.intensityColumn, "intensity");
  }
  let wanted = options.intensityColumn ?? null;
  if (wanted === null && options.intensityName !== undefined) {
    const found = columnNamed(headings, options.intensityName);
    if (typeof found !== "number") return found;
    wanted = found;
  }

  let axisColumn: number | null;
  if (options.axisColumn !== undefined) axisColumn = options.axisColumn;
  else if (columns === 1) axisColumn = null;
  else axisColumn = guessAxis({ meanings, numbers, wanted, kind: kindAsked(options), remarks });

  if (axisColumn !== null && axisColumn < 0) {
    return {
      problem: `No column but number ${(wanted ?? 0) + 1} holds numbers, so none can be the axis; without an axis the samples are counted.`,
    };
  }

  const intensityColumn = wanted ?? guessIntensity(meanings, numbers, axisColumn, headings, remarks);
  if (intensityColumn < 0) return { problem: "The file has no column of intensities." };
  if (intensityColumn === axisColumn) return { problem: "Axis and intensity can't be the same column." };

  const heading = axisColumn === null ? "" : headings[axisColumn]!;
  if (foreignAxis.test(heading) && unitIn(heading) === null && kindAsked(options) === null) {
    return {
      problem: `The axis counts "${heading}"; wavelengths, wavenumbers, energies in eV, pixels and drive steps are read. Say what it counts, if it is one of them.`,
    };
  }
  const values = axisColumn === null ? [] : numbers[axisColumn]!;
  const { kind, unit } = axisMeaning(heading, values, axisColumn, metadata, options, remarks);
  return { axisColumn, intensityColumn, axisKind: kind, axisUnit: unit, remarks };
}

/** How a column is spoken of: by its heading, else by its number. */
export function columnName(headings: readonly string[], column: number): string {
  const heading = headings[column] ?? "";
  return heading === "" ? `column ${column + 1}` : heading;
}

const plainName = (text: string): string => text.trim().toLowerCase().replace(/\s+/g, " ");
const withoutUnit = (text: string): string => plainName(text.replace(/[([{][^)\]}]*[)\]}]/g, " "));

/** The column with a heading: written the same, or the same without its unit in brackets, or the only one that holds the words. */
function columnNamed(headings: readonly string[], name: string): number | { problem: string } {
  const names = headings.map((_, column) => columnName(headings, column));
  const wanted = plainName(name);
  for (const same of [
    (heading: string): boolean => plainName(heading) === wanted,
    (heading: string): boolean => withoutUnit(heading) === wanted,
    (heading: string): boolean => plainName(heading).includes(wanted),
  ]) {
    const found = names.flatMap((heading, column) => (same(heading) ? [column] : []));
    if (found.length === 1 || (found.length > 1 && plainName(names[found[0]!]!) === wanted)) return found[0]!;
    if (found.length > 1) break;
  }
  return { problem: `The file has no column "${name}"; it has ${listed(names)}.` };
}

function listed(names: readonly string[]): string {
  const quoted = names.slice(0, 12).map((name) => `"${name}"`);
  const more = names.length > 12 ? ` and ${names.length - 12} more` : "";
  return quoted.length > 1 && more === ""
    ? `${quoted.slice(0, -1).join(", ")} and ${quoted[quoted.length - 1]!}`
    : quoted.join(", ") + more;
}

/** The column that sounds most like the signal itself; the first of several; one that is beside it (a dark) only where nothing else is. */
function guessIntensity(
  meanings: readonly HeadingMeaning[],
  numbers: readonly number[][],
  axisColumn: number | null,
  headings: readonly string[],
  remarks: string[],
): number {
  const free = numbers.flatMap((values, column) => (column !== axisColumn && values.length > 0 ? [column] : []));
  const plain = free.filter((column) => meanings[column]!.role !== "axis" && meanings[column]!.role !== "aside");
  const choice = plain.length > 0 ? plain : free;
  // Columns before the axis are seldom the signal: running numbers, times.
  const after = choice.filter((column) => axisColumn === null || column > axisColumn);
  let best = -1;
  for (const column of after.length > 0 ? after : choice) {
    if (best < 0 || meanings[column]!.rank > meanings[best]!.rank) best = column;
  }
  if (best >= 0 && free.length > 1) {
    const names = free.map((column) => columnName(headings, column));
    remarks.push(
      `${listed(names)} could be intensities; "${columnName(headings, best)}" was taken. Another can be chosen by its name.`,
    );
  }
  return best;
}

/** @returns -1 where no column but the intensities holds numbers */
function guessAxis(input: {
  meanings: readonly HeadingMeaning[];
  numbers: readonly number[][];
  wanted: number | null;
  kind: AxisKind | null;
  remarks: string[];
}): number {
  const { meanings, numbers, wanted, remarks } = input;
  const free = (column: number): boolean => column !== wanted && numbers[column]!.length > 0;
  const byName = (wants: (meaning: HeadingMeaning) => boolean): number =>
    meanings.findIndex((meaning, column) => meaning.role === "axis" && wants(meaning) && free(column));
  // A wavelength beside a running number says more than the running number.
  const order: AxisKind[] = input.kind === "pixel" ? ["pixel"] : ["wavelength", "wavenumber", "step"];
  for (const kind of input.kind === null ? order : [input.kind, ...order]) {
    const found = byName((meaning) => meaning.kind === kind);
    if (found >= 0) return found;
  }
  const named = byName(() => true);
  if (named >= 0) return named;
  const rising = numbers.flatMap((values, column) => (free(column) && isStrictlyMonotonic(values) ? [column] : []));
  if (rising.length === 0) return free(0) ? 0 : numbers.findIndex((_, column) => free(column));
  // An axis with a few values out of order is refused later, by its line; no other column takes its place.
  if (rising[0] !== 0 && free(0) && mostlyOneWay(numbers[0]!)) return 0;
  const [first, second] = rising;
  if (second !== undefined && second < numbers.length - 1 && countsSamples(numbers[first!]!.slice(0, -1))) {
    remarks.push(`Column ${first! + 1} only numbers the rows; column ${second + 1} was taken as axis.`);
    return second;
  }
  return first!;
}

function axisMeaning(
  heading: string,
  values: readonly number[],
  axisColumn: number | null,
  metadata: Record<string, string>,
  options: ReadOptions,
  remarks: string[],
): { kind: AxisKind; unit: AxisUnit } {
  if (options.axisUnit !== undefined) {
    return { kind: options.axisKind ?? kindOfUnit(options.axisUnit), unit: options.axisUnit };
  }
  if (options.axisKind !== undefined && options.axisKind !== "wavelength") {
    return { kind: options.axisKind, unit: unitOfKind[options.axisKind] };
  }
  if (axisColumn === null) return { kind: "pixel", unit: "px" };
  const said = readHeading(heading);
  if (said.unit !== null && (options.axisKind === undefined || said.kind === options.axisKind)) {
    return { kind: said.kind!, unit: said.unit };
  }
  const wavelength = options.axisKind === "wavelength" || said.kind === "wavelength";
  const fromMetadata = unitFromMetadata(metadata);
  if (fromMetadata !== null && (!wavelength || fromMetadata.kind === "wavelength")) return fromMetadata;
  const ends = [values[0] ?? NaN, values[values.length - 1] ?? NaN];
  const low = Math.min(...ends);
  const high = Math.max(...ends);
  // Whole steps of one are pixels where they begin like a count; from 200 to 800 they are a scan in nanometres.
  const counts = !wavelength && countsSamples(values.slice(0, -1));
  if (counts && (low <= 1 || low < leastNm || high > mostNm)) return { kind: "pixel", unit: "px" };
  if (wavelength || (low >= leastNm && high <= 12000)) {
    const unit: AxisUnit = high > mostNm && low >= leastAngstrom ? "Å" : high < 30 ? "µm" : "nm";
    const word = unit === "Å" ? "angstrom" : unit;
    remarks.push(
      wavelength
        ? `The axis names no unit; its values from ${low} to ${high} were taken as ${word}.`
        : `The axis has no heading that says what it counts; its values from ${low} to ${high} were taken as wavelengths in ${word}.`,
    );
    return { kind: "wavelength", unit };
  }
  remarks.push("The axis has no heading and its values are no wavelengths; they were taken as drive steps.");
  return { kind: "step", unit: "step" };
}

function unitFromMetadata(metadata: Record<string, string>): { kind: AxisKind; unit: AxisUnit } | null {
  for (const [key, value] of Object.entries(metadata)) {
    if (!axisKeys.test(key)) continue;
    const named = unitIn(value) ?? unitIn(`(${value.trim()})`);
    if (named !== null) return named;
  }
  return null;
}

const axisKeys =
  /(?:\bx|axis|abscissa|wave ?length).{0,40}unit|unit.{0,40}(?:\bx\b|axis|abscissa|wave ?length)|^x[ -]?(?:axis|label)?$|^axis|^abscissa|^units?$/i;

/** The kind of axis that a correction asks for, or null. */
function kindAsked({ axisKind, axisUnit }: ReadOptions): AxisKind | null {
  return axisKind ?? (axisUnit === undefined ? null : kindOfUnit(axisUnit));
}

function kindOfUnit(unit: AxisUnit): AxisKind {
  if (unit === "px") return "pixel";
  if (unit === "cm-1") return "wavenumber";
  return unit === "step" ? "step" : "wavelength";
}
