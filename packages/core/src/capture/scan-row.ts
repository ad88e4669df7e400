/**
 * The scanner of a capture's data block: cells of one line, and the number in one cell, straight from the bytes.
 *
 * A number of at most 15 significant digits and a power of ten up to 22 is computed exactly (both factors are exact in
 * double precision, so one rounding remains: W. D. Clinger, PLDI 1990); every other number goes through the language's own
 * conversion, so that both give the correctly rounded value.
 */

export type Delimiter = "," | ";" | "\t" | " ";
export type DecimalSign = "." | ",";

/** Sign that groups thousands: `any` but the decimal sign, where it can be nothing else. */
export type ThousandsSign = "," | "." | " " | "'" | "none" | "any";

export interface RowFormat {
  delimiter: Delimiter;
  decimal: DecimalSign;
  thousands: ThousandsSign;
  /** Where the comma parts columns and is the decimal sign too: pieces (1 or 2) that make each column; else null. */
  joins: readonly number[] | null;
}

/** Bounds of the cells of one line, filled by `splitCells` and `splitRow`. */
export interface RowReader {
  starts: Int32Array;
  ends: Int32Array;
}

const tab = 9;
const space = 32;
const quote = 34;
const comma = 44;
const dot = 46;

const powersOfTen = [
  1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20,
  1e21, 1e22,
] as const;

/** Most columns that are looked at; a line with more is read up to here. */
const mostColumns = 256;

/**
 * Split one line into trimmed cells (quotes taken off).
 *
 * @param starts,ends  filled with the cells' bounds, length >= mostColumns
 * @returns number of cells; an empty cell after a closing delimiter counts (blanks as delimiter make no empty cells)
 */
export function splitCells(
  bytes: Uint8Array,
  from: number,
  to: number,
  delimiter: Delimiter,
  starts: Int32Array,
  ends: Int32Array,
): number {
  const byBlanks = delimiter === " ";
  const code = delimiter.charCodeAt(0);
  let count = 0;
  let i = from;
  for (;;) {
    while (i < to && (bytes[i] === space || (bytes[i] === tab && code !== tab))) i += 1;
    if (i >= to && byBlanks) break;
    if (count === mostColumns) break;
    let start = i;
    let end: number;
    if (i < to && bytes[i] === quote) {
      start = i + 1;
      i = start;
      while (i < to && bytes[i] !== quote) i += 1;
      end = i;
      while (i < to && bytes[i] !== code && !(byBlanks && bytes[i] === tab)) i += 1;
    } else {
      while (i < to && bytes[i] !== code && !(byBlanks && bytes[i] === tab)) i += 1;
      end = i;
    }
    while (end > start && (bytes[end - 1] === space || bytes[end - 1] === tab)) end -= 1;
    starts[count] = start;
    ends[count] = end;
    count += 1;
    if (i >= to) break;
    i += 1;
  }
  return count;
}

export function makeRowReader(): RowReader {
  return { starts: new Int32Array(mostColumns), ends: new Int32Array(mostColumns) };
}

/** Split one data line into the columns of a format: `splitCells`, and pieces put together where the comma is the decimal sign too. */
export function splitRow(bytes: Uint8Array, from: number, to: number, format: RowFormat, row: RowReader): number {
  const { starts, ends } = row;
  const cells = splitCells(bytes, from, to, format.delimiter, starts, ends);
  const { joins } = format;
  if (joins === null) return cells;
  let piece = 0;
  let column = 0;
  for (; column < joins.length && piece + joins[column]! <= cells; column += 1) {
    starts[column] = starts[piece]!;
    piece += joins[column]!;
    ends[column] = ends[piece - 1]!;
  }
  return column < joins.length ? column : column + (cells - piece);
}

/** A cell of more bytes is no number of a capture; the language's own conversion would labour over it. */
const longestNumber = 400;
const apostrophe = 39;
const markCodes: Record<ThousandsSign, number> = {
  ",": comma,
  ".": dot,
  " ": space,
  "'": apostrophe,
  none: -1,
  any: 0,
};

/** The grouping mark at an offset as comma, dot, space (also the unbreakable and the thin ones) or apostrophe; 0 for none. */
function groupMark(bytes: Uint8Array, i: number): number {
  const code = bytes[i]!;
  if (code === comma || code === dot || code === space || code === apostrophe) return code;
  if (code === 0xa0 || (code === 0xc2 && bytes[i + 1] === 0xa0)) return space;
  if (code === 0xe2 && bytes[i + 1] === 0x80) {
    const last = bytes[i + 2];
    if (last === 0xaf || last === 0x89) return space;
    if (last === 0x99) return apostrophe;
  }
  return 0;
}

function markLength(code: number): number {
  return code === 0xe2 ? 3 : code === 0xc2 ? 2 : 1;
}

/**
 * The number written in a cell, or NaN when the cell holds none (ask `isMissingCell` whether it was blank).
 * Grouping marks are taken only where they can be nothing else: `1,234.5` with a decimal point, `1.234,5` with a decimal comma,
 * one kind of mark in a number.
 */
export function scanNumber(
  bytes: Uint8Array,
  from: number,
  to: number,
  decimal: DecimalSign,
  thousands: ThousandsSign = "any",
): number {
  if (to - from > longestNumber) return NaN;
  let i = from;
  let negative = false;
  const first = bytes[i];
  if (i < to && (first === 43 || first === 45)) {
    negative = first === 45;
    i += 1;
  } else if (i + 2 < to && first === 0xe2 && bytes[i + 1] === 0x88 && bytes[i + 2] === 0x92) {
    negative = true; // the typographic minus sign
    i += 3;
  }
  const decimalCode = decimal === "." ? dot : comma;
  let mantissa = 0;
  let significant = 0;
  let digits = 0;
  let exponent = 0;
  let seenDecimal = false;
  let sinceGroup = -1;
  let mark = markCodes[thousands];
  for (; i < to; i += 1) {
    const code = bytes[i]!;
    if (code >= 48 && code <= 57) {
      digits += 1;
      if (significant > 0 || code !== 48) significant += 1;
      if (significant <= 15) mantissa = mantissa * 10 + (code - 48);
      if (seenDecimal) exponent -= 1;
      else if (sinceGroup >= 0) sinceGroup += 1;
    } else if (code === decimalCode && !seenDecimal) {
      if (sinceGroup >= 0 && sinceGroup !== 3) return NaN;
      seenDecimal = true;
    } else {
      const found = seenDecimal || digits === 0 || mark < 0 ? 0 : groupMark(bytes, i);
      if (found === 0 || (mark !== 0 && found !== mark)) break;
      if (sinceGroup < 0 ? digits > 3 || significant === 0 : sinceGroup !== 3) return NaN;
      mark = found;
      sinceGroup = 0;
      i += markLength(code) - 1;
    }
  }
  if (digits === 0 || (!seenDecimal && sinceGroup >= 0 && sinceGroup !== 3)) return NaN;
  let power = 0;
  if (i < to) {
    const code = bytes[i]! | 32;
    if (code !== 101 && code !== 100) return NaN; // e, or d as some Fortran programs write it
    i += 1;
    let powerNegative = false;
    if (i < to && (bytes[i] === 43 || bytes[i] === 45)) {
      powerNegative = bytes[i] === 45;
      i += 1;
    }
    if (i >= to) return NaN;
    for (; i < to; i += 1) {
      const digit = bytes[i]! - 48;
      if (digit < 0 || digit > 9) return NaN;
      if (power < 10000) power = power * 10 + digit;
    }
    if (powerNegative) power = -power;
  }
  const scale = exponent + power;
  let value: number;
  if (significant <= 15 && scale >= -22 && scale <= 22) {
    value = scale < 0 ? mantissa / powersOfTen[-scale]! : mantissa * powersOfTen[scale]!;
  } else {
    value = Math.abs(convertSlowly(bytes, from, to, decimalCode));
    if (value === Number.POSITIVE_INFINITY) return NaN;
  }
  return negative ? -value : value;
}

/** Digits, decimal sign and exponent handed to the language's own conversion; marks and the number's sign are left off. */
function convertSlowly(bytes: Uint8Array, from: number, to: number, decimalCode: number): number {
  let text = "";
  let inExponent = false;
  for (let k = from; k < to; k += 1) {
    const code = bytes[k]!;
    if (code >= 48 && code <= 57) text += String.fromCharCode(code);
    else if ((code | 32) === 101 || (code | 32) === 100) {
      inExponent = true;
      text += "e";
    } else if (code === 45 && inExponent) text += "-";
    else if (code === decimalCode) text += ".";
  }
  return Number(text);
}

/** True for a cell that stands for "no value": empty, `NaN`, `NA`, `N/A`, `null`, `inf`, dashes, a worksheet's error words, asterisks. */
export function isMissingCell(bytes: Uint8Array, from: number, to: number): boolean {
  if (to <= from) return true;
  if (to - from > 9) return false;
  let word = "";
  for (let i = from; i < to; i += 1) word += String.fromCharCode(bytes[i]!);
  word = word.toLowerCase();
  if (word.startsWith("+") || (word.startsWith("-") && word.length > 1 && word !== "--" && word !== "---")) {
    word = word.slice(1);
  }
  return missingWords.has(word);
}

const missingWords = new Set([
  "nan",
  "na",
  "n/a",
  "null",
  "none",
  "inf",
  "infinity",
  "-",
  "--",
  "---",
  "1.#qnan",
  "1.#inf",
  "1.#ind",
  "nan(ind)",
  "n.a.",
  "#n/a",
  "#na",
  "#nan",
  "#num!",
  "#value!",
  "#div/0!",
  "missing",
  "?",
  "*",
  "**",
  "***",
  "****",
  "*****",
  "******",
]);
