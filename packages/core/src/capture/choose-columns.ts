/**
 * Which column is the axis and which the intensity, and what the axis counts: from the headings first, from the numbers where they say
 * nothing. Every guess a person should see becomes a remark; `ReadOptions` overrule all of them.
 */
import type { AxisKind, AxisUnit, ReadOptions } from "../analysis/types.ts";
import { readHeading, unitIn } from "./headings.ts";

export interface ColumnChoice {
  axisColumn: number | null;
  intensityColumn: number;
  axisKind: AxisKind;
  axisUnit: AxisUnit;
  remarks: string[];
}

/** Longest wavelength taken for nanometres, and shortest for angstrom, where no unit is written. Common practice, no source. */
const mostNm = 2600;
const leastAngstrom = 1000;

export const unitOfKind: Record<AxisKind, AxisUnit> = {
  pixel: "px",
  wavelength: "nm",
  wavenumber: "cm-1",
  step: "step",
};

function isStrictlyMonotonic(values: number[]): boolean {
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

function mostlyOneWay(values: number[]): boolean {
  let up = 0;
  let down = 0;
  for (let i = 1; i < values.length; i += 1) {
    const step = values[i]! - values[i - 1]!;
    if (step > 0) up += 1;
    else if (step < 0) down += 1;
  }
  return Math.max(up, down) > 0.8 * (values.length - 1);
}

/** Whole numbers in steps of one. */
function countsSamples(values: number[]): boolean {
  for (let i = 0; i < values.length; i += 1) {
    const value = values[i]!;
    if (value !== Math.floor(value)) return false;
    if (i > 0 && Math.abs(value - values[i - 1]!) !== 1) return false;
  }
  return values.length > 1;
}

/**
 * @param headings  one text a column, empty where there is none
 * @param sample    numbers of the first data rows, one array a column (NaN where missing)
 * @param metadata  may name the axis' unit
 * @returns the choice, or a sentence when the corrections ask for what is not there
 */
export function chooseColumns(
  headings: string[],
  sample: number[][],
  metadata: Record<string, string>,
  options: ReadOptions,
): ColumnChoice | { problem: string } {
  const columns = sample.length;
  const remarks: string[] = [];
  const meanings = headings.map(readHeading);
  const monotonic = sample.map((values) => isStrictlyMonotonic(values.filter((value) => value === value)));
  const hasNumbers = sample.map((values) => values.some((value) => value === value));

  const outside = (column: number): boolean => !Number.isInteger(column) || column < 0 || column >= columns;
  if (typeof options.axisColumn === "number" && outside(options.axisColumn)) {
    return {
      problem: `The file has ${columns} column${columns === 1 ? "" : "s"}; column ${options.axisColumn + 1} was asked for as axis.`,
    };
  }
  if (options.intensityColumn !== undefined && outside(options.intensityColumn)) {
    return {
      problem: `The file has ${columns} column${columns === 1 ? "" : "s"}; column ${options.intensityColumn + 1} was asked for as intensity.`,
    };
  }

  let axisColumn: number | null;
  if (options.axisColumn !== undefined) axisColumn = options.axisColumn;
  else if (columns === 1) axisColumn = null;
  else
    axisColumn = guessAxis(
      meanings.map((m) => m.role === "axis" && m.kind !== "pixel"),
      meanings.map((m) => m.role === "axis"),
      monotonic,
      sample,
      options,
      remarks,
    );

  let intensityColumn = options.intensityColumn ?? -1;
  if (intensityColumn < 0) {
    const free = sample.map((_, column) => column).filter((column) => column !== axisColumn && hasNumbers[column]);
    const plain = free.filter((column) => meanings[column]!.role !== "axis" && meanings[column]!.role !== "aside");
    intensityColumn =
      plain.find((column) => meanings[column]!.role === "intensity") ??
      plain.find((column) => axisColumn === null || column > axisColumn) ??
      plain[0] ??
      free[0] ??
      -1;
    if (intensityColumn < 0) return { problem: "The file has no column of intensities." };
    if (plain.length > 1) {
      remarks.push(`${plain.length} columns could be intensities; column ${intensityColumn + 1} was taken.`);
    }
  }
  if (intensityColumn === axisColumn) return { problem: "Axis and intensity can't be the same column." };

  const heading = axisColumn === null ? "" : headings[axisColumn]!;
  const values = axisColumn === null ? [] : sample[axisColumn]!.filter((value) => value === value);
  const { kind, unit } = axisMeaning(heading, values, axisColumn, metadata, options, remarks);
  return { axisColumn, intensityColumn, axisKind: kind, axisUnit: unit, remarks };
}

function guessAxis(
  namedOther: boolean[],
  named: boolean[],
  monotonic: boolean[],
  sample: number[][],
  options: ReadOptions,
  remarks: string[],
): number | null {
  const free = (column: number): boolean => column !== options.intensityColumn;
  // A wavelength beside a running number says more than the running number.
  const wanted = options.axisKind === "pixel" ? named : namedOther;
  const byName = wanted.findIndex((is, column) => is && free(column));
  if (byName >= 0) return byName;
  const byAnyName = named.findIndex((is, column) => is && free(column));
  if (byAnyName >= 0) return byAnyName;
  const rising = monotonic.map((is, column) => (is && free(column) ? column : -1)).filter((column) => column >= 0);
  if (rising.length === 0) return free(0) ? 0 : 1;
  // An axis with a few values out of order is refused later, by its line; no other column takes its place.
  if (rising[0] !== 0 && free(0) && mostlyOneWay(sample[0]!)) return 0;
  if (
    rising.length > 1 &&
    countsSamples(sample[rising[0]!]!.slice(0, -1)) &&
    sample.length > 2 &&
    rising[1]! < sample.length - 1
  ) {
    remarks.push(`Column ${rising[0]! + 1} only numbers the rows; column ${rising[1]! + 1} was taken as axis.`);
    return rising[1]!;
  }
  return rising[0]!;
}

function axisMeaning(
  heading: string,
  values: number[],
  axisColumn: number | null,
  metadata: Record<string, string>,
  options: ReadOptions,
  remarks: string[],
): { kind: AxisKind; unit: AxisUnit } {
  if (options.axisUnit !== undefined) {
    const kind = kindOfUnit(options.axisUnit);
    return { kind: options.axisKind ?? kind, unit: options.axisUnit };
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
  if (!wavelength && countsSamples(values.slice(0, -1))) return { kind: "pixel", unit: "px" };
  const low = Math.min(...values.slice(0, 1), ...values.slice(-1));
  const high = Math.max(...values.slice(0, 1), ...values.slice(-1));
  if (wavelength || (low >= 100 && high <= 12000)) {
    const unit: AxisUnit = high > mostNm && low >= leastAngstrom ? "Å" : high < 30 ? "µm" : "nm";
    remarks.push(
      wavelength
        ? `The axis names no unit; its values from ${low} to ${high} were taken as ${unit === "Å" ? "angstrom" : unit}.`
        : `The axis has no heading; its values from ${low} to ${high} were taken as wavelengths in ${unit === "Å" ? "angstrom" : unit}.`,
    );
    return { kind: "wavelength", unit };
  }
  remarks.push("The axis has no heading and its values are no wavelengths; they were taken as drive steps.");
  return { kind: "step", unit: "step" };
}

function unitFromMetadata(metadata: Record<string, string>): { kind: AxisKind; unit: AxisUnit } | null {
  for (const [key, value] of Object.entries(metadata)) {
    if (!/(?:x|axis|abscissa|wave ?length).*unit|unit.*(?:x|axis|wave ?length)|^x ?axis$|^axis$/i.test(key)) continue;
    const named = unitIn(value);
    if (named !== null) return named;
  }
  return null;
}

function kindOfUnit(unit: AxisUnit): AxisKind {
  if (unit === "px") return "pixel";
  if (unit === "cm-1") return "wavenumber";
  return unit === "step" ? "step" : "wavelength";
}
