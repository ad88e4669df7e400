/**
 * How a capture's text is laid out: delimiter, decimal sign, number of columns, and the line where the data begin.
 * Each combination is tried on a sample of lines; the one that reads most lines as rows of equally many numbers is taken.
 */
import type { ReadOptions } from "../analysis/types.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import {
  isMissingCell,
  mostColumns,
  scanNumber,
  splitCells,
  type DecimalSign,
  type Delimiter,
  type RowFormat,
} from "./scan-row.ts";

export interface DataBlock extends RowFormat {
  columns: number;
  /** Index of the first data line. */
  firstLine: number;
  /** The other decimal sign reads every sampled line just as well, and the numbers' grouping leaves both open. */
  decimalIsOpen: boolean;
}

/** In the order in which ties are decided. */
const candidates: RowFormat[] = [
  { delimiter: "\t", decimal: "." },
  { delimiter: "\t", decimal: "," },
  { delimiter: ";", decimal: "." },
  { delimiter: ";", decimal: "," },
  { delimiter: ",", decimal: "." },
  { delimiter: ",", decimal: "," },
  { delimiter: " ", decimal: "." },
  { delimiter: " ", decimal: "," },
];

const sampledFromStart = 60;
const sampledAcross = 100;
/** Among the lines after the first data line, this many of the next `followers` must be data too (a header may hold a number). */
const followers = 6;
const followersWanted = 3;

export interface RowReader {
  starts: Int32Array;
  ends: Int32Array;
}

export function makeRowReader(): RowReader {
  return { starts: new Int32Array(mostColumns), ends: new Int32Array(mostColumns) };
}

/** Number of cells when every cell is a number or stands for none and at least one is a number; else 0. */
export function countNumericCells(
  bytes: Uint8Array,
  from: number,
  to: number,
  format: RowFormat,
  row: RowReader,
): number {
  const count = splitCells(bytes, from, to, format.delimiter, row.starts, row.ends);
  let numbers = 0;
  for (let c = 0; c < count; c += 1) {
    const value = scanNumber(bytes, row.starts[c]!, row.ends[c]!, format.decimal);
    if (value === value) numbers += 1;
    else if (!isMissingCell(bytes, row.starts[c]!, row.ends[c]!)) return 0;
  }
  return numbers === 0 ? 0 : count;
}

function sampleLines(bytes: Uint8Array, lines: LineIndex): number[] {
  const sample: number[] = [];
  const add = (line: number): void => {
    if (!isBlankLine(bytes, lines.starts[line]!, lines.ends[line]!)) sample.push(line);
  };
  const head = Math.min(lines.count, sampledFromStart);
  for (let line = 0; line < head; line += 1) add(line);
  const rest = lines.count - head;
  const step = Math.max(1, rest / sampledAcross);
  for (let at = head; at < lines.count; at += step) add(Math.floor(at));
  return sample;
}

/** Find the data block, or null when no line reads as numbers. */
export function findDataBlock(bytes: Uint8Array, lines: LineIndex, options: ReadOptions): DataBlock | null {
  const row = makeRowReader();
  const sample = sampleLines(bytes, lines);
  let best: { format: RowFormat; columns: number; rows: number } | null = null;
  const rowsByFormat = new Map<string, number>();
  for (const format of candidates) {
    if (options.delimiter !== undefined && options.delimiter !== format.delimiter) continue;
    if (options.decimal !== undefined && options.decimal !== format.decimal) continue;
    const byCount = new Map<number, number>();
    for (const line of sample) {
      const cells = countNumericCells(bytes, lines.starts[line]!, lines.ends[line]!, format, row);
      if (cells > 0) byCount.set(cells, (byCount.get(cells) ?? 0) + 1);
    }
    let columns = 0;
    let rows = 0;
    for (const [cells, times] of byCount) {
      if (times > rows || (times === rows && cells > columns)) {
        columns = cells;
        rows = times;
      }
    }
    if (rows === 0) continue;
    rowsByFormat.set(format.delimiter + format.decimal, rows);
    // Two columns read from nearly as many lines say more than one column read from all of them.
    const beats =
      best === null ||
      (columns > 1 === best.columns > 1 ? rows > best.rows : columns > 1 ? 2 * rows > best.rows : rows > 2 * best.rows);
    if (beats) best = { format, columns, rows };
  }
  if (best === null) return null;
  const { format, columns, rows } = best;
  const other: DecimalSign = format.decimal === "." ? "," : ".";
  const decimalIsOpen =
    options.decimal === undefined &&
    (format.delimiter as Delimiter) !== "," &&
    rowsByFormat.get(format.delimiter + other) === rows &&
    holdsMark(bytes, lines, sample);
  return { ...format, columns, firstLine: firstDataLine(bytes, lines, format, columns, row), decimalIsOpen };
}

function holdsMark(bytes: Uint8Array, lines: LineIndex, sample: number[]): boolean {
  for (const line of sample) {
    for (let i = lines.starts[line]!; i < lines.ends[line]!; i += 1) {
      const byte = bytes[i]!;
      if (byte === 44 || byte === 46) return true;
    }
  }
  return false;
}

function firstDataLine(
  bytes: Uint8Array,
  lines: LineIndex,
  format: RowFormat,
  columns: number,
  row: RowReader,
): number {
  const isRow = (line: number): boolean =>
    countNumericCells(bytes, lines.starts[line]!, lines.ends[line]!, format, row) === columns;
  let fallback = -1;
  for (let line = 0; line < lines.count; line += 1) {
    if (!isRow(line)) continue;
    if (fallback < 0) fallback = line;
    let seen = 0;
    let followed = 0;
    for (let next = line + 1; next < lines.count && seen < followers; next += 1) {
      if (isBlankLine(bytes, lines.starts[next]!, lines.ends[next]!)) continue;
      seen += 1;
      if (isRow(next)) followed += 1;
    }
    if (followed >= Math.min(followersWanted, seen)) return line;
  }
  return Math.max(fallback, 0);
}
