/**
 * Which sign is the decimal one where every number can be read with either: `1,234` is one and a bit, or one thousand and more.
 *
 * What tells them apart, in this order, each over all rows: rows that only one reading can read; an axis that only one reading keeps in
 * order; an axis that only one reading leaves within its unit's bounds; numbers elsewhere in the file that leave no doubt; a mark in every
 * cell of both columns (fixed decimals: an axis of nothing but grouped thousands is no capture's). Else the person is asked.
 */
import type { AxisUnit, PossibleReading, ReadOptions } from "../analysis/types.ts";
import type { ColumnChoice } from "./choose-columns.ts";
import type { DataBlock } from "./find-data-block.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import type { Rows } from "./read-rows.ts";
import { makeRowReader, splitRow, type DecimalSign } from "./scan-row.ts";

/** Bounds within which an axis of a unit lies: from the vacuum ultraviolet to the far infrared. */
const axisBounds: Partial<Record<AxisUnit, [number, number]>> = {
  nm: [50, 30000],
  Å: [500, 300000],
  µm: [0.05, 1000],
  "cm-1": [-5000, 200000],
  eV: [0.001, 50],
};

/** The file as one decimal sign has it. */
export interface SignReading {
  block: DataBlock;
  chosen: ColumnChoice;
  rows: Rows;
}

/** The reading that stands, with a remark where a person should see why; null: ask. */
export function settleDecimalSign(
  readings: readonly [SignReading, SignReading],
  bytes: Uint8Array,
  lines: LineIndex,
  metadata: Record<string, string>,
): { reading: SignReading; remark: string | null } | null {
  const [a, b] = readings;
  if (sameNumbers(a, b)) return { reading: a, remark: null };
  const pick = (better: boolean, other: boolean): SignReading | null => (better === other ? null : better ? a : b);
  const told =
    pick(a.rows.unreadCount < b.rows.unreadCount, b.rows.unreadCount < a.rows.unreadCount) ??
    pick(isInOrder(a.rows.axis), isInOrder(b.rows.axis)) ??
    pick(isWithinBounds(a), isWithinBounds(b));
  if (told !== null) return { reading: told, remark: null };
  const elsewhere = signInMetadata(metadata);
  const marked = elsewhere ?? markInEveryCell(a, bytes, lines);
  if (marked === null) return null;
  const reading = a.block.decimal === marked ? a : b;
  return { reading, remark: `The decimal sign was taken to be "${marked}".` };
}

/** What a person is offered, shown on the first row that the readings read differently. */
export function offeredReadings(
  readings: readonly [SignReading, SignReading],
  options: ReadOptions,
): PossibleReading[] {
  const [a, b] = readings.map(({ rows }) => rows) as [Rows, Rows];
  const differs = (row: number): boolean => a.counts[row] !== b.counts[row] || a.axis?.[row] !== b.axis?.[row];
  let row = 0;
  while (row + 1 < a.counts.length && !differs(row)) row += 1;
  return readings.map(({ block, rows }) => {
    const [sign, group] = block.decimal === "." ? ["point", "comma"] : ["comma", "point"];
    const numbersOf = (at: number): number[] =>
      rows.axis === null ? [rows.counts[at]!] : [rows.axis[at]!, rows.counts[at]!];
    return {
      options: { ...options, decimal: block.decimal },
      description: `Decimal ${sign}, a ${group} groups thousands: line ${rows.lineNumbers[row]!} is ${numbersOf(row).join(" and ")}.`,
      firstRow: numbersOf(0),
    };
  });
}

function sameNumbers(a: SignReading, b: SignReading): boolean {
  if (a.chosen.axisColumn !== b.chosen.axisColumn || a.chosen.intensityColumn !== b.chosen.intensityColumn)
    return false;
  if (a.rows.counts.length !== b.rows.counts.length) return false;
  const same = (x: Float64Array | null, y: Float64Array | null): boolean =>
    x === null || y === null ? x === y : x.every((value, i) => value === y[i] || (value !== value && y[i] !== y[i]));
  return same(a.rows.axis, b.rows.axis) && same(a.rows.counts, b.rows.counts);
}

function isInOrder(axis: Float64Array | null): boolean {
  if (axis === null || axis.length < 2) return true;
  const direction = Math.sign(axis[1]! - axis[0]!);
  if (direction === 0) return false;
  for (let i = 1; i < axis.length; i += 1) if (Math.sign(axis[i]! - axis[i - 1]!) !== direction) return false;
  return true;
}

function isWithinBounds({ chosen, rows }: SignReading): boolean {
  const { axis } = rows;
  if (axis === null || axis.length === 0) return true;
  const ends = [axis[0]!, axis[axis.length - 1]!];
  if (chosen.axisUnit === "px") return ends.every((value) => value === Math.floor(value));
  const bounds = axisBounds[chosen.axisUnit];
  return bounds === undefined || ends.every((value) => value >= bounds[0] && value <= bounds[1]);
}

/** The decimal sign of the metadata's numbers where they leave no doubt (not three digits after the mark) and agree. */
function signInMetadata(metadata: Record<string, string>): DecimalSign | null {
  let sign: DecimalSign | null = null;
  for (const value of Object.values(metadata)) {
    // A number alone or with its unit; dates, versions and lists say nothing.
    const match = /^[-+]?(\d{1,9})([.,])(\d{1,12})(?:\s*[^\d\s.,:/-][^\d.,]{0,20})?$/.exec(value);
    if (match === null || (match[3]!.length === 3 && !/^0/.test(match[1]!))) continue;
    const found = match[2] as DecimalSign;
    if (sign !== null && sign !== found) return null;
    sign = found;
  }
  return sign;
}

/** The one mark that stands once in every axis cell and every intensity cell; null where it does not. */
function markInEveryCell(
  { block, chosen, rows }: SignReading,
  bytes: Uint8Array,
  lines: LineIndex,
): DecimalSign | null {
  if (chosen.axisColumn === null) return null;
  const row = makeRowReader();
  let mark = 0;
  const first = rows.lineNumbers[0]! - 1;
  const last = rows.lineNumbers[rows.lineNumbers.length - 1]! - 1;
  for (let line = first; line <= last; line += 1) {
    const from = lines.starts[line]!;
    const to = lines.ends[line]!;
    if (isBlankLine(bytes, from, to) || splitRow(bytes, from, to, block, row) !== block.columns) continue;
    for (const column of [chosen.axisColumn, chosen.intensityColumn]) {
      if (row.ends[column] === row.starts[column]) continue;
      let seen = 0;
      for (let i = row.starts[column]!; i < row.ends[column]!; i += 1) {
        if (bytes[i] !== 44 && bytes[i] !== 46) continue;
        seen += 1;
        if (mark === 0) mark = bytes[i]!;
        if (bytes[i] !== mark) return null;
      }
      if (seen !== 1) return null;
    }
  }
  return mark === 0 ? null : mark === 44 ? "," : ".";
}
