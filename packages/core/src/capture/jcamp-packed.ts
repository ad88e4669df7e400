/**
 * Packed ordinates of JCAMP-DX: PAC, SQZ, DIF and DUP (IUPAC: R. S. McDonald and P. A. Wilks, Appl. Spectrosc. 42 (1988) 151, section 5).
 *
 * Unpacked by `jcampconverter`. Each line is looked at first, so that unpacking is bounded and exact: that library reads an exponent as a
 * packed digit, sums decimals with powers whose last digit the engine decides, and repeats a value as often as it is told. It gets whole
 * numbers of at most 15 digits only. After a difference the next line repeats the last value as a check; where it does not, the points of
 * both lines are left out (NaN).
 */
import { convert } from "jcampconverter";
import type { Refusal } from "../analysis/types.ts";
import type { JcampTable } from "./jcamp-blocks.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import { refuse } from "./refusal.ts";
import { scanNumber } from "./scan-row.ts";

/** Most points that packed counts (DUP) may unfold to. */
const mostPoints = 4_000_000;
/** Longest run of digits in a packed table: 15 are exact. */
const mostDigits = 15;
const mostDamaged = 20;
/** A line's X may differ from the expected one by this share of a step (it is often rounded), or by its own last digit. */
export const xCheckSteps = 0.6;

export interface Ordinates {
  ordinates: number[];
  /** 1-based line of each ordinate. */
  lineNumbers: number[];
  firstX: number;
  /** X at the beginning of each line, the ordinate that it belongs to, and by how many steps it may differ. */
  starts: { line: number; row: number; x: number; lastDigit: number; steps: number }[];
  damaged: { line: number; reason: string }[];
}

/** End of a line without its comment. */
export function withoutComment(bytes: Uint8Array, from: number, to: number): number {
  for (let i = from; i + 1 < to; i += 1) if (bytes[i] === 36 && bytes[i + 1] === 36) return i;
  return to;
}

export function notANumber(line: number): Refusal {
  return refuse(
    "damaged-data",
    `Line ${line + 1} of the data table holds something that is no number. Export the file again.`,
    line + 1,
  );
}

/** Worth of a number's last written digit. */
export function lastDigitOf(bytes: Uint8Array, from: number, to: number): number {
  let digit = 1;
  let seenPoint = false;
  for (let i = from; i < to; i += 1) {
    if (bytes[i] === 46) seenPoint = true;
    else if ((bytes[i]! | 32) === 101) return Number.POSITIVE_INFINITY;
    else if (seenPoint) digit /= 10;
  }
  return digit;
}

/**
 * A letter or sign of the packed forms. An E between digits is none by itself: it may be an exponent, and a packed table has other letters too.
 */
export function isPackedSign(bytes: Uint8Array, i: number): boolean {
  const code = bytes[i]!;
  const isLetter = (code >= 64 && code <= 90) || (code >= 97 && code <= 115) || code === 37;
  if (!isLetter) return false;
  if ((code | 32) !== 101) return true;
  const before = bytes[i - 1] ?? 0;
  const after = bytes[i + 1] ?? 0;
  const isDigit = (byte: number): boolean => byte >= 48 && byte <= 57;
  return !((before === 46 || isDigit(before)) && (after === 43 || after === 45 || isDigit(after)));
}

/** Ordinates of a packed table, as whole numbers. */
export function unpack(bytes: Uint8Array, lines: LineIndex, table: JcampTable): Ordinates | Refusal {
  let text = "##TITLE=\n##JCAMP-DX=4.24\n##DATA TYPE=\n##FIRSTX=0\n##LASTX=1\n##NPOINTS=2\n##XYDATA=(X++(Y..Y))\n";
  const starts: Ordinates["starts"] = [];
  const lineNumbers: number[] = [];
  let endsInDifference = false;
  for (let line = table.firstLine; line < table.endLine; line += 1) {
    const from = lines.starts[line]!;
    const to = withoutComment(bytes, from, lines.ends[line]!);
    if (isBlankLine(bytes, from, to)) continue;
    const packed = readPackedLine(bytes, from, to, line, lineNumbers.length);
    if ("outcome" in packed) return packed;
    // After a difference a line begins with the last value once more.
    const row = lineNumbers.length - (endsInDifference ? 1 : 0);
    const x = scanNumber(bytes, packed.xFrom, packed.xTo, ".", "none");
    // Some programs write the X of the first new point there, others that of the repeated one.
    const steps = xCheckSteps + (endsInDifference ? 1 : 0);
    starts.push({ line: line + 1, row, x, lastDigit: lastDigitOf(bytes, packed.xFrom, packed.xTo), steps });
    for (let i = endsInDifference ? 1 : 0; i < packed.values; i += 1) lineNumbers.push(line + 1);
    endsInDifference = packed.endsInDifference;
    // The line's own X is only a check and may hold decimals: a whole number stands for it.
    text += `0${packed.rest}\n`;
  }
  const failing: number[] = [];
  const hear = (message: unknown): void => {
    const match = /^Data line (\d+): After a duplicate/.exec(String(message));
    if (match !== null) failing.push(Number(match[1]));
  };
  const quiet = (): void => undefined;
  const logger = { trace: hear, debug: quiet, info: quiet, warn: quiet, error: quiet, fatal: quiet };
  const ordinates = convert(text, { logger: logger as never }).flatten[0]?.spectra[0]?.data["y"] ?? [];
  if (ordinates.length === 0 || ordinates.length !== lineNumbers.length) {
    return refuse("damaged-data", "The packed data table of this JCAMP-DX file could not be unpacked.", table.line);
  }
  for (const at of failing) {
    const lost = [starts[at - 1]?.line, starts[at]?.line];
    for (let row = 0; row < ordinates.length; row += 1) if (lost.includes(lineNumbers[row]!)) ordinates[row] = NaN;
  }
  return {
    ordinates,
    lineNumbers,
    firstX: starts[0]!.x,
    starts,
    damaged: failing.slice(0, mostDamaged).map((at) => ({
      line: starts[at]!.line,
      reason: "its check value does not repeat the last value of the line before",
    })),
  };
}

/** One line of a packed table: bounds of its X, the text of the rest, the values it unfolds to, and whether the last is a difference. */
interface PackedLine {
  xFrom: number;
  xTo: number;
  rest: string;
  values: number;
  endsInDifference: boolean;
}

function readPackedLine(
  bytes: Uint8Array,
  from: number,
  to: number,
  line: number,
  before: number,
): PackedLine | Refusal {
  let i = from;
  while (i < to && (bytes[i] === 32 || bytes[i] === 9)) i += 1;
  const xFrom = i;
  while (i < to && isNumberByte(bytes[i]!) && !(i > xFrom && (bytes[i] === 43 || bytes[i] === 45))) i += 1;
  const xTo = i;
  if (xTo === xFrom || xTo - xFrom > 2 * mostDigits) return notANumber(line);
  let rest = "";
  let values = 0;
  let endsInDifference = false;
  let digits = 0;
  /** Count of a DUP that is being read; -1 outside of one. */
  let times = -1;
  let inValue = false;
  const closeCount = (): void => {
    if (times > 1) values += times - 1;
    times = -1;
  };
  for (; i < to; i += 1) {
    const code = bytes[i]!;
    rest += String.fromCharCode(code);
    if (code >= 48 && code <= 57) {
      digits += 1;
      if (digits > mostDigits) return notANumber(line);
      if (times >= 0) times = times * 10 + (code - 48);
      else if (!inValue) {
        values += 1;
        endsInDifference = false;
        inValue = true;
      }
      continue;
    }
    closeCount();
    digits = 0;
    inValue = false;
    if (code === 46) {
      return refuse(
        "damaged-data",
        `Line ${line + 1} holds a decimal point within packed numbers, which are whole.`,
        line + 1,
      );
    }
    const isDup = (code >= 83 && code <= 90) || code === 115;
    const isDif = code === 37 || (code >= 74 && code <= 82) || (code >= 106 && code <= 114);
    const isSqz = (code >= 64 && code <= 73) || (code >= 97 && code <= 105);
    if (isDup) times = code === 115 ? 9 : code - 82;
    else if (isDif || isSqz) {
      values += 1;
      endsInDifference = isDif;
      inValue = true;
    } else if (!isBetween(code)) return notANumber(line);
    if (before + values > mostPoints) return tooManyPoints(line);
  }
  closeCount();
  if (before + values > mostPoints) return tooManyPoints(line);
  return { xFrom, xTo, rest, values, endsInDifference };
}

function tooManyPoints(line: number): Refusal {
  return refuse(
    "damaged-data",
    `The packed table unfolds to more than ${mostPoints} points at line ${line + 1}.`,
    line + 1,
  );
}

/** Signs and blanks between packed numbers. */
function isBetween(code: number): boolean {
  return code === 43 || code === 45 || code === 44 || code === 32 || code === 9;
}

function isNumberByte(code: number): boolean {
  return (code >= 48 && code <= 57) || code === 46 || code === 43 || code === 45;
}
