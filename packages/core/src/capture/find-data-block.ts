/**
 * How a capture's text is laid out: delimiter, decimal sign, number of columns, and the line where the data begin.
 *
 * Each combination is tried on a sample of lines; the one that reads most lines as rows of equally many numbers is taken. Where rows of
 * the whole file then can't be read, or the sample held few rows, all combinations are counted on every line (`everyLine`), so that
 * what decides is the whole file.
 */
import type { ReadOptions } from "../analysis/types.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import {
  isMissingCell,
  makeRowReader,
  scanNumber,
  splitRow,
  type DecimalSign,
  type Delimiter,
  type RowFormat,
  type RowReader,
} from "./scan-row.ts";

export interface DataBlock extends RowFormat {
  columns: number;
  /** Index of the first data line. */
  firstLine: number;
  /** The other decimal sign reads every line that was looked at just as well, and numbers hold a mark that both could own. */
  decimalIsOpen: boolean;
  /** 1 for a column of words (times, flags) that stands beside the numbers; null where every column holds numbers. */
  wordColumns: Uint8Array | null;
}

/** In the order in which ties are decided. */
const candidates: { delimiter: Delimiter; decimal: DecimalSign }[] = [
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
/** Columns of words are looked for among the first of a row only. */
const mostMaskedColumns = 30;
/** So many rows with words in the same columns are a table; fewer may be a header. */
const fewestWordRows = 8;

/** Number of cells when every cell that should be is a number or stands for none, and at least one is a number; else 0. */
function countNumericCells(
  bytes: Uint8Array,
  from: number,
  to: number,
  format: RowFormat,
  row: RowReader,
  wordColumns: Uint8Array | null = null,
): number {
  const count = splitRow(bytes, from, to, format, row);
  let numbers = 0;
  for (let c = 0; c < count; c += 1) {
    if (wordColumns !== null && wordColumns[c] === 1) continue;
    const value = scanNumber(bytes, row.starts[c]!, row.ends[c]!, format.decimal, format.thousands);
    if (value === value) numbers += 1;
    else if (!isMissingCell(bytes, row.starts[c]!, row.ends[c]!)) return 0;
  }
  return numbers === 0 ? 0 : count;
}

/** Indices of the lines that are not blank: all of them, or the first 60 and 100 spread over the rest. */
function linesToLookAt(bytes: Uint8Array, lines: LineIndex, skip: number, every: boolean): number[] {
  const chosen: number[] = [];
  const add = (line: number): void => {
    if (!isBlankLine(bytes, lines.starts[line]!, lines.ends[line]!)) chosen.push(line);
  };
  const head = every ? lines.count : Math.min(lines.count, skip + sampledFromStart);
  for (let line = skip; line < head; line += 1) add(line);
  const rest = lines.count - head;
  const step = Math.max(1, rest / sampledAcross);
  for (let at = head; at < lines.count; at += step) add(Math.floor(at));
  return chosen;
}

interface Best {
  format: RowFormat;
  columns: number;
  rows: number;
  wordColumns: Uint8Array | null;
}

/**
 * Find the data block, or null when no line reads as numbers.
 *
 * @param everyLine  judge by every line of the file instead of a sample
 */
export function findDataBlock(
  bytes: Uint8Array,
  lines: LineIndex,
  options: ReadOptions,
  everyLine = false,
): DataBlock | null {
  const row = makeRowReader();
  const skip = Math.min(Math.max(0, Math.floor(options.skipLines ?? 0)), lines.count);
  const looked = linesToLookAt(bytes, lines, skip, everyLine);
  const thousands = options.thousands ?? "any";
  const formats = candidates
    .filter(({ delimiter }) => options.delimiter === undefined || options.delimiter === delimiter)
    .filter(({ decimal }) => options.decimal === undefined || options.decimal === decimal)
    .map((one): RowFormat => ({ ...one, thousands, joins: null }));
  if (options.cellsPerColumn !== undefined) {
    const joins = options.cellsPerColumn;
    formats.splice(0, formats.length, { delimiter: ",", decimal: ",", thousands, joins });
  }
  let best: Best | null = null;
  const rowsByFormat = new Map<string, number>();
  for (const format of formats) {
    const found = mostCommonWidth(bytes, lines, looked, format, row);
    if (found.rows === 0) continue;
    rowsByFormat.set(format.delimiter + format.decimal, found.rows);
    // Two columns read from nearly as many lines say more than one column read from all of them.
    const beats =
      best === null ||
      (found.columns > 1 === best.columns > 1
        ? found.rows > best.rows
        : found.columns > 1
          ? 2 * found.rows > best.rows
          : found.rows > 2 * best.rows);
    if (beats) best = { format, ...found, wordColumns: null };
  }
  if (best === null || best.rows < fewestWordRows) {
    const withWords = findRowsWithWords(bytes, lines, looked, formats, row);
    if (withWords !== null && (best === null || withWords.rows > 2 * best.rows)) best = withWords;
  }
  if (best === null) return null;
  if (!everyLine && 2 * best.rows < looked.length) return findDataBlock(bytes, lines, options, true);
  const { format, columns, rows, wordColumns } = best;
  const firstLine = firstDataLine(bytes, lines, skip, { ...format, columns, wordColumns }, row);
  const other: DecimalSign = format.decimal === "." ? "," : ".";
  const decimalIsOpen =
    options.decimal === undefined &&
    options.thousands === undefined &&
    format.joins === null &&
    (wordColumns !== null || rowsByFormat.get(format.delimiter + other) === rows) &&
    holdsMark(bytes, lines.starts[firstLine]!, format.delimiter);
  return { ...format, columns, firstLine, decimalIsOpen, wordColumns };
}

/** The number of columns that most lines have when read so, and how many lines. */
function mostCommonWidth(
  bytes: Uint8Array,
  lines: LineIndex,
  looked: readonly number[],
  format: RowFormat,
  row: RowReader,
): { columns: number; rows: number } {
  const byCount = new Map<number, number>();
  for (const line of looked) {
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
  return { columns, rows };
}

/** Rows in which some columns are always words, at least two always numbers: a time or a flag beside each sample. */
function findRowsWithWords(
  bytes: Uint8Array,
  lines: LineIndex,
  looked: readonly number[],
  formats: readonly RowFormat[],
  row: RowReader,
): Best | null {
  let best: Best | null = null;
  for (const format of formats) {
    const byShape = new Map<string, number>();
    for (const line of looked) {
      const cells = splitRow(bytes, lines.starts[line]!, lines.ends[line]!, format, row);
      if (cells < 2 || cells > mostMaskedColumns) continue;
      let shape = "";
      let numbers = 0;
      for (let c = 0; c < cells; c += 1) {
        const value = scanNumber(bytes, row.starts[c]!, row.ends[c]!, format.decimal, format.thousands);
        const isNumber = value === value || isMissingCell(bytes, row.starts[c]!, row.ends[c]!);
        if (isNumber) numbers += 1;
        shape += isNumber ? "n" : "w";
      }
      if (numbers >= 2) byShape.set(shape, (byShape.get(shape) ?? 0) + 1);
    }
    for (const [shape, rows] of byShape) {
      if (rows < fewestWordRows || (best !== null && rows <= best.rows)) continue;
      const wordColumns = Uint8Array.from(shape, (letter) => (letter === "w" ? 1 : 0));
      best = { format, columns: shape.length, rows, wordColumns };
    }
  }
  return best;
}

/** A comma or a point in the data that could be a decimal sign or group thousands; where commas part the columns, one within quotes. */
function holdsMark(bytes: Uint8Array, from: number, delimiter: Delimiter): boolean {
  let quoted = false;
  for (let i = from; i < bytes.length; i += 1) {
    const byte = bytes[i]!;
    if (byte === 34) quoted = !quoted;
    else if ((byte === 44 || byte === 46) && (delimiter !== "," || (quoted && byte === 44))) return true;
  }
  return false;
}

function firstDataLine(
  bytes: Uint8Array,
  lines: LineIndex,
  skip: number,
  shape: RowFormat & { columns: number; wordColumns: Uint8Array | null },
  row: RowReader,
): number {
  const isRow = (line: number): boolean =>
    countNumericCells(bytes, lines.starts[line]!, lines.ends[line]!, shape, row, shape.wordColumns) === shape.columns;
  let fallback = -1;
  for (let line = skip; line < lines.count; line += 1) {
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
