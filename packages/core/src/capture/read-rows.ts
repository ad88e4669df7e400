/**
 * The rows of a data block to columns of numbers: one pass over all lines. Lines that are no rows are named or, where they are a second
 * header or the file's foot, told apart; tables that stand below one another are parted where the axis begins again.
 */
import { sliceText, type TextEncoding } from "./decode.ts";
import type { DataBlock } from "./find-data-block.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import { isMissingCell, makeRowReader, scanNumber, splitCells, splitRow } from "./scan-row.ts";

/** Most damaged lines that are named. */
const mostDamagedLines = 20;
/** Most lines without numbers that are kept for a closer look. */
const mostUnread = 5000;

export interface UnreadLine {
  /** 0-based. */
  line: number;
  reason: string;
  /** Holds no row's beginning: words, not a broken row. */
  isText: boolean;
  /** Rows read before it. */
  beforeRow: number;
}

export interface Rows {
  axis: Float64Array | null;
  counts: Float64Array;
  /** 1-based line of each row. */
  lineNumbers: Int32Array;
  /** Blank or NaN cells of axis and intensity. */
  missing: number;
  unread: UnreadLine[];
  unreadCount: number;
  /** Rows before which a blank or unread line stands, ascending. */
  gaps: number[];
}

export function readRows(
  bytes: Uint8Array,
  lines: LineIndex,
  block: DataBlock,
  axisColumn: number | null,
  intensityColumn: number,
): Rows {
  const room = lines.count - block.firstLine;
  const axis = axisColumn === null ? null : new Float64Array(room);
  const counts = new Float64Array(room);
  const lineNumbers = new Int32Array(room);
  const row = makeRowReader();
  const { starts, ends } = row;
  const { decimal, thousands, columns } = block;
  const byBlanks = block.delimiter === " ";
  const needed = Math.max(axisColumn ?? 0, intensityColumn) + 1;
  const unread: UnreadLine[] = [];
  const gaps: number[] = [];
  let unreadCount = 0;
  let missing = 0;
  let n = 0;
  let open = false;
  const fault = (line: number, reason: string, isText: boolean): void => {
    unreadCount += 1;
    open = true;
    if (unread.length < mostUnread) unread.push({ line, reason, isText, beforeRow: n });
  };
  for (let line = block.firstLine; line < lines.count; line += 1) {
    const from = lines.starts[line]!;
    const to = lines.ends[line]!;
    const cells =
      block.joins === null
        ? splitCells(bytes, from, to, block.delimiter, starts, ends)
        : splitRow(bytes, from, to, block, row);
    if (cells < needed || (byBlanks && cells < columns)) {
      if (isBlankLine(bytes, from, to)) open = true;
      else fault(line, widthFault(cells, columns), !startsWithNumber(bytes, from, to));
      continue;
    }
    if (cells > columns && holdsNumber(bytes, block, starts, ends, columns, cells)) {
      fault(line, widthFault(cells, columns), false);
      continue;
    }
    let at = 0;
    if (axis !== null) {
      at = scanNumber(bytes, starts[axisColumn!]!, ends[axisColumn!]!, decimal, thousands);
      if (at !== at) {
        const blank = isMissingCell(bytes, starts[axisColumn!]!, ends[axisColumn!]!);
        if (!blank) fault(line, "its axis value is no number", !startsWithNumber(bytes, from, to));
        else if (isBlankRow(starts, ends, cells)) open = true;
        else {
          missing += 1;
          fault(line, "its axis value is missing", false);
        }
        continue;
      }
    }
    const value = scanNumber(bytes, starts[intensityColumn]!, ends[intensityColumn]!, decimal, thousands);
    if (value !== value) {
      if (!isMissingCell(bytes, starts[intensityColumn]!, ends[intensityColumn]!)) {
        fault(line, "its intensity is no number", axis === null && !startsWithNumber(bytes, from, to));
        continue;
      }
      if (axis === null && isBlankRow(starts, ends, cells)) {
        open = true;
        continue;
      }
      missing += 1;
    }
    if (axis !== null) axis[n] = at;
    counts[n] = value;
    lineNumbers[n] = line + 1;
    if (open) {
      if (n > 0) gaps.push(n);
      open = false;
    }
    n += 1;
  }
  return {
    axis: axis === null ? null : axis.slice(0, n),
    counts: counts.slice(0, n),
    lineNumbers: lineNumbers.subarray(0, n),
    missing,
    unread,
    unreadCount,
    gaps,
  };
}

function widthFault(cells: number, columns: number): string {
  return `has ${cells} column${cells === 1 ? "" : "s"} where ${columns} ${columns === 1 ? "is" : "are"} expected`;
}

/** Delimiters alone: a blank row of a worksheet. */
function isBlankRow(starts: Int32Array, ends: Int32Array, cells: number): boolean {
  for (let c = 0; c < cells; c += 1) if (ends[c]! > starts[c]!) return false;
  return true;
}

/** A number beyond the last column: the row was torn or run together. Words there are a note. */
function holdsNumber(
  bytes: Uint8Array,
  block: DataBlock,
  starts: Int32Array,
  ends: Int32Array,
  from: number,
  to: number,
): boolean {
  for (let c = from; c < to; c += 1) {
    const value = scanNumber(bytes, starts[c]!, ends[c]!, block.decimal, block.thousands);
    if (value === value) return true;
  }
  return false;
}

function startsWithNumber(bytes: Uint8Array, from: number, to: number): boolean {
  for (let i = from; i < to; i += 1) {
    const byte = bytes[i]!;
    if (byte === 32 || byte === 9 || byte === 34 || byte === 43 || byte === 45 || byte === 46) continue;
    return byte >= 48 && byte <= 57;
  }
  return false;
}

/** One of the tables below one another: rows from `from` to before `to`. */
export interface TableSpan {
  from: number;
  to: number;
}

/** Parts the rows where, after a blank line or a header, the axis begins again. */
export function findTables(rows: Rows): TableSpan[] {
  const { axis, gaps, counts } = rows;
  const tables: TableSpan[] = [];
  let from = 0;
  if (axis !== null) {
    for (const gap of gaps) {
      const step = axis[gap]! - axis[gap - 1]!;
      const before = gap - from >= 2 ? axis[gap - 1]! - axis[gap - 2]! : 0;
      const after = gap + 1 < axis.length ? axis[gap + 1]! - axis[gap]! : 0;
      const direction = Math.sign(before === 0 ? after : before);
      if (direction === 0 || Math.sign(step) === direction) continue;
      tables.push({ from, to: gap });
      from = gap;
    }
  }
  tables.push({ from, to: counts.length });
  return tables;
}

/** What the lines that are no rows are. */
export interface OtherLines {
  damaged: { line: number; reason: string }[];
  damagedCount: number;
  /** 0-based lines of a header in the middle of the data. */
  headerLines: number[];
  /** 0-based lines that may hold metadata: of second headers, above a later table, and after the last row. */
  metadataLines: number[];
}

/** Sort the unread lines of one table (rows `table.from` to `table.to`) into damage, second headers and the file's foot. */
export function sortUnread(
  bytes: Uint8Array,
  encoding: TextEncoding,
  lines: LineIndex,
  block: DataBlock,
  rows: Rows,
  table: TableSpan,
  headingLine: number,
): OtherLines {
  const result: OtherLines = { damaged: [], damagedCount: 0, headerLines: [], metadataLines: [] };
  const { from: first, to: last } = table;
  const within = rows.unread.filter(({ beforeRow }) => beforeRow >= first && beforeRow <= last);
  const headingText = headingLine < 0 ? null : textOf(bytes, encoding, lines, headingLine);
  for (let i = 0; i < within.length;) {
    let end = i + 1;
    while (end < within.length && within[end]!.beforeRow === within[i]!.beforeRow) end += 1;
    const group = within.slice(i, end);
    i = end;
    const before = group[0]!.beforeRow;
    const isFoot = before === rows.counts.length;
    // What stands above a later table, or between this one and the next, is no part of this one's data.
    const isOutside = before === first || before === last;
    const words = group.filter(({ isText }) => isText);
    const isHeader =
      isOutside || words.some(({ line }) => looksLikeHeader(bytes, encoding, lines, block, line, headingText));
    for (const { line, reason, isText } of group) {
      if (!isText && before === last && !isFoot) continue;
      if (!isText || !isHeader) {
        result.damagedCount += 1;
        if (result.damaged.length < mostDamagedLines) result.damaged.push({ line: line + 1, reason });
        continue;
      }
      if (!isOutside) result.headerLines.push(line);
      if (isFoot || (before < last && isKeyValue(textOf(bytes, encoding, lines, line))))
        result.metadataLines.push(line);
    }
  }
  if (rows.unreadCount > rows.unread.length) result.damagedCount += rows.unreadCount - rows.unread.length;
  return result;
}

function textOf(bytes: Uint8Array, encoding: TextEncoding, lines: LineIndex, line: number): string {
  const from = lines.starts[line]!;
  return sliceText(bytes, from, Math.min(lines.ends[line]!, from + 1000), encoding).trim();
}

function isKeyValue(text: string): boolean {
  return /^[^:=]{1,80}[:=]/.test(text);
}

/** The headings again, a `key: value`, or words in every column. */
function looksLikeHeader(
  bytes: Uint8Array,
  encoding: TextEncoding,
  lines: LineIndex,
  block: DataBlock,
  line: number,
  headingText: string | null,
): boolean {
  const text = textOf(bytes, encoding, lines, line);
  if (text === headingText) return true;
  if (!/\p{L}/u.test(text)) return false;
  if (isKeyValue(text)) return true;
  const row = makeRowReader();
  const cells = splitRow(bytes, lines.starts[line]!, lines.ends[line]!, block, row);
  if (cells !== block.columns || cells === 1) return false;
  for (let c = 0; c < cells; c += 1) {
    const value = scanNumber(bytes, row.starts[c]!, row.ends[c]!, block.decimal, block.thousands);
    if (
      value === value ||
      !/\p{L}/u.test(sliceText(bytes, row.starts[c]!, Math.min(row.ends[c]!, row.starts[c]! + 100), encoding))
    ) {
      return false;
    }
  }
  return true;
}
