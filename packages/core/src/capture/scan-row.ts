/**
 * The scanner of a capture's data block: cells of one line, and the number in one cell, straight from the bytes.
 *
 * A number of at most 15 significant digits and a power of ten up to 22 is computed exactly (both factors are exact in
 * double precision, so one rounding remains: W. D. Clinger, PLDI 1990); every other number goes through the language's own
 * conversion, so that both give the correctly rounded value.
 */

export type Delimiter = "," | ";" | "\t" | " ";
export type DecimalSign = "." | ",";

export interface RowFormat {
  delimiter: Delimiter;
  decimal: DecimalSign;
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
export const mostColumns = 256;

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

/**
 * The number written in a cell, or NaN when the cell holds none (ask `isMissingCell` whether it was blank).
 * Grouping marks are taken only where they can be nothing else: `1,234.5` with a decimal point, `1.234,5` with a decimal comma.
 */
export function scanNumber(bytes: Uint8Array, from: number, to: number, decimal: DecimalSign): number {
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
  const groupCode = decimal === "." ? comma : dot;
  let mantissa = 0;
  let significant = 0;
  let digits = 0;
  let exponent = 0;
  let seenDecimal = false;
  let sinceGroup = -1;
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
    } else if (code === groupCode && !seenDecimal && digits > 0) {
      if (sinceGroup < 0 ? digits > 3 || significant === 0 : sinceGroup !== 3) return NaN;
      sinceGroup = 0;
    } else break;
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
    value = Math.abs(convertSlowly(bytes, from, to, groupCode));
    if (value === Number.POSITIVE_INFINITY) return NaN;
  }
  return negative ? -value : value;
}

function convertSlowly(bytes: Uint8Array, from: number, to: number, groupCode: number): number {
  let text = "";
  for (let k = from; k < to; k += 1) {
    const code = bytes[k]!;
    if (code === groupCode || code >= 0x80 || code === 43 || code === 45) {
      const before = k > from ? bytes[k - 1]! | 32 : 0;
      if (code === 45 && (before === 101 || before === 100)) text += "-";
      continue;
    }
    text += code === comma ? "." : (code | 32) === 100 ? "e" : String.fromCharCode(code);
  }
  return Number(text);
}

/** True for a cell that stands for "no value": empty, `NaN`, `NA`, `N/A`, `null`, `inf`, dashes. */
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
]);
