/**
 * Files in which the comma parts the columns and is the decimal sign too: `400,25,1234,5`.
 *
 * Every way to make columns of one or two pieces is held against all rows. A way fits when whole parts begin with no needless zero, the
 * pieces that would be decimals are written as decimals are (equally many in every row, or never ending in a needless zero), and a first
 * column results that is an axis: strictly rising or falling in steps of about one size. The number of headings decides where there are some.
 *
 * Where the parting commas have a blank behind them (`400,5, 1234,5`) and the others none, that tells them apart.
 */
import type { LineIndex } from "./line-index.ts";
import { scanNumber } from "./scan-row.ts";

/** More pieces than this are not tried: a plain table of numbers. */
export const mostPieces = 8;
/** Share of the steps that must be of about one size (within a factor 3 of the median). */
const evenShare = 0.95;
const evenFactor = 3;

export interface PieceTable {
  bytes: Uint8Array;
  /** Bounds of piece p of row r at r * pieces + p. */
  starts: Int32Array;
  ends: Int32Array;
  rows: number;
  pieces: number;
}

/** Ways to put the pieces together that fit, each as pieces a column; the plain one (all 1) first where it fits. */
export function fittingJoins(table: PieceTable, headingCount: number | null): number[][] {
  const { pieces } = table;
  const facts = Array.from({ length: pieces }, (_, p) => pieceFacts(table, p));
  const counted = countsRows(columnOf(table, 0, 1));
  const ways = compositions(pieces).filter((way) => way.length >= 2);
  const byHeadings = headingCount === null ? [] : ways.filter((way) => way.length === headingCount);
  return (byHeadings.length > 0 ? byHeadings : ways).filter((way) => {
    let piece = 0;
    for (const width of way) {
      if (facts[piece]!.hasNeedlessZero) return false;
      if (width === 2 && !facts[piece + 1]!.canBeDecimals) return false;
      piece += width;
    }
    // A first piece that counts the rows is a number by itself, unless it carries the same decimals throughout (`400,00`).
    if (way[0] === 2 && counted && !facts[1]!.isConstant) return false;
    return isEvenAxis(columnOf(table, 0, way[0]!));
  });
}

/** All sequences of ones and twos with a given sum, fewest twos first. */
function compositions(sum: number): number[][] {
  const found: number[][] = [];
  const extend = (way: number[], left: number): void => {
    if (left === 0) found.push(way);
    if (left >= 1) extend([...way, 1], left - 1);
    if (left >= 2) extend([...way, 2], left - 2);
  };
  extend([], sum);
  return found.sort((a, b) => b.length - a.length);
}

function countsRows(values: Float64Array): boolean {
  for (let i = 1; i < values.length; i += 1) if (Math.abs(values[i]! - values[i - 1]!) !== 1) return false;
  return true;
}

interface PieceFacts {
  hasNeedlessZero: boolean;
  canBeDecimals: boolean;
  isConstant: boolean;
}

function pieceFacts(table: PieceTable, piece: number): PieceFacts {
  const { bytes, starts, ends, rows, pieces } = table;
  let hasNeedlessZero = false;
  let onlyDigits = true;
  let width = -1;
  let sameWidth = true;
  let endsInZero = false;
  for (let r = 0; r < rows; r += 1) {
    const from = starts[r * pieces + piece]!;
    const to = ends[r * pieces + piece]!;
    const first = bytes[from]! === 45 || bytes[from]! === 43 ? from + 1 : from;
    if (to - first > 1 && bytes[first] === 48) hasNeedlessZero = true;
    for (let i = from; i < to && onlyDigits; i += 1) onlyDigits = bytes[i]! >= 48 && bytes[i]! <= 57;
    if (width < 0) width = to - from;
    else if (to - from !== width) sameWidth = false;
    if (to - from > 1 && bytes[to - 1] === 48) endsInZero = true;
  }
  const values = columnOf(table, piece, 1);
  const isConstant = values.every((value) => value === values[0]);
  return { hasNeedlessZero, isConstant, canBeDecimals: onlyDigits && width > 0 && (sameWidth || !endsInZero) };
}

/** Numbers of the column that begins at a piece and takes one or two of them. */
function columnOf(table: PieceTable, piece: number, width: number): Float64Array {
  const { bytes, starts, ends, rows, pieces } = table;
  const values = new Float64Array(rows);
  for (let r = 0; r < rows; r += 1) {
    const at = r * pieces + piece;
    values[r] = scanNumber(bytes, starts[at]!, ends[at + width - 1]!, ",", "none");
  }
  return values;
}

function isEvenAxis(values: Float64Array): boolean {
  const n = values.length;
  if (n < 3) return false;
  const steps = new Float64Array(n - 1);
  const direction = Math.sign(values[1]! - values[0]!);
  for (let i = 1; i < n; i += 1) {
    const step = (values[i]! - values[i - 1]!) * direction;
    if (!(step > 0)) return false;
    steps[i - 1] = step;
  }
  const middle = Float64Array.from(steps).sort()[(n - 1) >> 1]!;
  let even = 0;
  for (const step of steps) if (step <= evenFactor * middle && evenFactor * step >= middle) even += 1;
  return even >= evenShare * (n - 1);
}

const looked = 60;
const mostPlainShare = 0.1;

/**
 * Text in which commas with a blank behind part the columns and commas between digits are decimal signs: the same bytes with a semicolon for
 * each parting comma of its data lines, so that every offset stays. Null where the text is not so.
 */
export function partByCommaAndBlank(bytes: Uint8Array, lines: LineIndex): Uint8Array | null {
  const from = Math.max(0, (lines.count >> 1) - looked);
  let parted = 0;
  let both = 0;
  let seen = 0;
  for (let line = from; line < lines.count && seen < looked; line += 1) {
    if (lines.ends[line] === lines.starts[line]) continue;
    seen += 1;
    const commas = commasOf(bytes, lines.starts[line]!, lines.ends[line]!);
    if (commas === null || commas.parting === 0) continue;
    parted += 1;
    if (commas.within > 0) both += 1;
  }
  if (both === 0 || parted < (1 - mostPlainShare) * seen) return null;
  const copy = bytes.slice();
  for (let line = 0; line < lines.count; line += 1) {
    const to = lines.ends[line]!;
    if (commasOf(bytes, lines.starts[line]!, to) === null) continue;
    for (let i = lines.starts[line]!; i + 1 < to; i += 1) if (bytes[i] === 44 && bytes[i + 1] === 32) copy[i] = 59;
  }
  return copy;
}

/** Commas of a line of numbers: with a blank behind, and between two digits; null for a line that holds anything else. */
function commasOf(bytes: Uint8Array, from: number, to: number): { parting: number; within: number } | null {
  let parting = 0;
  let within = 0;
  let digits = 0;
  for (let i = from; i < to; i += 1) {
    const byte = bytes[i]!;
    if (byte >= 48 && byte <= 57) digits += 1;
    else if (byte === 44) {
      const next = i + 1 < to ? bytes[i + 1]! : 0;
      if (next === 32) parting += 1;
      else if (digits > 0 && next >= 48 && next <= 57) within += 1;
      else return null;
    } else if (byte !== 32 && byte !== 43 && byte !== 45 && (byte | 32) !== 101) return null;
  }
  return digits === 0 ? null : { parting, within };
}
