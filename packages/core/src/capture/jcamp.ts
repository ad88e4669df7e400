/**
 * JCAMP-DX files (IUPAC: R. S. McDonald and P. A. Wilks, Appl. Spectrosc. 42 (1988) 151; compound blocks after P. Lampen et al. 1999).
 *
 * Read are one-dimensional optical spectra: XYDATA in the form (X++(Y..Y)), plain or packed (PAC, SQZ, DIF, DUP), and XYPOINTS or XYDATA
 * in the form (XY..XY). X of sample i is FIRSTX + i (LASTX - FIRSTX) / (NPOINTS - 1), as the standard means it; the X that begins each
 * line is a check. Packed tables are unpacked by `jcampconverter`; it gets whole numbers only, because it reads an exponent as a packed
 * digit and sums decimals with powers whose last digit the engine decides. Numbers written out are read by the capture's own scanner.
 * A file whose points are not as many as it says is refused: its positions could not be trusted.
 */
import { convert } from "jcampconverter";
import type { ReadCapture, ReadOptions, Refusal } from "../analysis/types.ts";
import { chooseColumns, type ColumnChoice } from "./choose-columns.ts";
import type { TextEncoding } from "./decode.ts";
import { finishCapture } from "./finish-capture.ts";
import { readJcampBlocks, type JcampBlock, type JcampTable } from "./jcamp-blocks.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import { refuse } from "./refusal.ts";
import { scanNumber } from "./scan-row.ts";

/** Longest line of a data table: the standard allows 80 characters. */
const mostLineBytes = 4096;
/** Most points that packed counts (DUP) may unfold to. */
const mostPoints = 4_000_000;
/** Longest run of digits in a packed table: 15 are exact. */
const mostDigits = 15;
const sampledPoints = 400;
/** A line's X may differ from the expected one by this share of a step (it is often rounded), or by its own last digit. */
const xCheckShare = 0.6;

export function isJcamp(bytes: Uint8Array): boolean {
  let at = 0;
  while (at < bytes.length && at < 200 && bytes[at]! <= 32) at += 1;
  let start = "";
  for (let i = at; i < at + 24 && i < bytes.length; i += 1) start += String.fromCharCode(bytes[i]!);
  return /^##\s*(?:TITLE|JCAMP)/i.test(start);
}

interface JcampFile {
  bytes: Uint8Array;
  encoding: TextEncoding;
  lines: LineIndex;
  name: string;
  options: ReadOptions;
}

export function readJcamp(file: JcampFile): ReadCapture {
  const { bytes, encoding, lines, options } = file;
  const blocks = readJcampBlocks(bytes, encoding, lines);
  const foreign = blocks.find(({ dataType }) => foreignContent.test(dataType));
  const spectra = blocks.flatMap((block) =>
    foreignContent.test(block.dataType) || block.hasNtuples ? [] : block.tables.map((table) => ({ block, table })),
  );
  if (spectra.length === 0) return refuseWithoutSpectrum(blocks, foreign);
  const remarks: string[] = [];
  const found = chooseSpectrum(spectra, options, remarks);
  if ("outcome" in found) return found;
  const { block, table } = found;

  const decoded = table.isPairs ? readPairs(file, block, table) : readOrdinates(file, block, table);
  if ("outcome" in decoded) return decoded;
  const { axis, counts, damaged, lineOf } = decoded;
  const columns = [`X (${block.xUnits === "" ? "no unit" : block.xUnits})`, block.yUnits === "" ? "Y" : block.yUnits];
  const chosen = chooseAxis(columns, axis, counts, block, options);
  if ("problem" in chosen) return refuse("unsupported-content", chosen.problem, table.line);
  remarks.push(...chosen.remarks);
  if (damaged.length > 0) {
    remarks.push(
      `Check values of the packed table do not agree: ${damaged.map(({ line }) => `line ${line}`).join(", ")}.`,
    );
  }
  let missing = 0;
  for (let i = 0; i < counts.length; i += 1) if (counts[i] !== counts[i]) missing += 1;
  return finishCapture({
    name: file.name,
    axis,
    counts,
    chosen,
    options,
    metadata: block.metadata,
    remarks,
    lineOf,
    facts: {
      format: "jcamp-dx",
      missing,
      delimiter: " ",
      decimal: ".",
      encoding,
      headerLines: table.line,
      columns,
      damagedLines: damaged,
      ...(spectra.length > 1 ? { tables: spectra.length } : {}),
    },
  });
}

const foreignContent = /\bNMR\b|\bMASS\b|CHROMATO|\bE[SP]R\b|\bIMS\b|ION MOBILITY|DIFFRACT|\bCS\b/i;
const foreignUnits = /\bHZ\b|HERTZ|\bPPM\b|M\/Z|SECONDS?|MINUTES?|DEGREES?|GAUSS/i;

function refuseWithoutSpectrum(blocks: readonly JcampBlock[], foreign: JcampBlock | undefined): Refusal {
  if (foreign !== undefined) {
    return refuse(
      "unsupported-content",
      `This JCAMP-DX file holds "${foreign.dataType}". Only optical spectra (emission, UV/VIS, infrared, Raman, fluorescence) are read here.`,
      foreign.line,
    );
  }
  const several = blocks.find(({ hasNtuples }) => hasNtuples);
  if (several !== undefined) {
    return refuse(
      "unsupported-content",
      "This JCAMP-DX file holds NTUPLES, several variables in one table. Export a single spectrum (XYDATA or XYPOINTS) from it.",
      several.line,
    );
  }
  return blocks.some(({ hasPeaks }) => hasPeaks)
    ? refuse(
        "unsupported-content",
        "This JCAMP-DX file holds a list of peaks and no spectrum. Export the spectrum itself.",
      )
    : refuse("no-numbers", "This JCAMP-DX file holds no XYDATA and no XYPOINTS: there is no spectrum in it.");
}

interface SpectrumTable {
  block: JcampBlock;
  table: JcampTable;
}

function chooseSpectrum(
  spectra: readonly SpectrumTable[],
  options: ReadOptions,
  remarks: string[],
): SpectrumTable | Refusal {
  let best = 0;
  spectra.forEach(({ block }, index) => {
    if (block.points > spectra[best]!.block.points) best = index;
  });
  let wanted = options.table ?? best;
  if (options.table === undefined && options.intensityName !== undefined) {
    const name = options.intensityName.trim().toLowerCase();
    wanted = spectra.findIndex(
      ({ block }) => block.title.toLowerCase() === name || block.yUnits.toLowerCase() === name,
    );
  }
  const found = spectra[wanted];
  const titles = spectra.slice(0, 12).map(({ block }) => `"${block.title}"`);
  if (found === undefined) {
    return refuse(
      "no-such-column",
      `The file has no such block; it has ${titles.join(", ")}. Choose one of them by its title.`,
    );
  }
  if (spectra.length > 1)
    remarks.push(`The file holds ${spectra.length} spectra (${titles.join(", ")}); "${found.block.title}" was taken.`);
  return found;
}

function chooseAxis(
  columns: string[],
  axis: Float64Array,
  counts: Float64Array,
  block: JcampBlock,
  options: ReadOptions,
): ColumnChoice | { problem: string } {
  if (foreignUnits.test(block.xUnits) && options.axisKind === undefined && options.axisUnit === undefined) {
    return { problem: `The axis of this JCAMP-DX file is in ${block.xUnits}: it is no optical spectrum.` };
  }
  const sampleOf = (values: Float64Array): number[] => [
    ...values.subarray(0, sampledPoints),
    values[values.length - 1]!,
  ];
  return chooseColumns(
    columns,
    [sampleOf(axis), sampleOf(counts)],
    {},
    {
      axisColumn: 0,
      intensityColumn: 1,
      ...(options.axisKind === undefined ? {} : { axisKind: options.axisKind }),
      ...(options.axisUnit === undefined ? {} : { axisUnit: options.axisUnit }),
    },
  );
}

interface DecodedTable {
  axis: Float64Array;
  counts: Float64Array;
  damaged: { line: number; reason: string }[];
  lineOf: (row: number) => number;
}

/** One number written out, `+` and `-` parting numbers without a blank; `?` stands for none. Calls back with bounds. */
function forEachToken(bytes: Uint8Array, from: number, to: number, take: (from: number, to: number) => void): void {
  let i = from;
  while (i < to) {
    const byte = bytes[i]!;
    if (byte === 32 || byte === 9 || byte === 44 || byte === 59) {
      i += 1;
      continue;
    }
    const start = i;
    i += 1;
    for (; i < to; i += 1) {
      const code = bytes[i]!;
      if (code === 32 || code === 9 || code === 44 || code === 59) break;
      if ((code === 43 || code === 45) && (bytes[i - 1]! | 32) !== 101) break;
    }
    take(start, i);
  }
}

/** End of a line without its comment. */
function withoutComment(bytes: Uint8Array, from: number, to: number): number {
  for (let i = from; i + 1 < to; i += 1) if (bytes[i] === 36 && bytes[i + 1] === 36) return i;
  return to;
}

function isUnknown(bytes: Uint8Array, from: number, to: number): boolean {
  return to === from + 1 && bytes[from] === 63;
}

function notANumber(line: number): Refusal {
  return refuse(
    "damaged-data",
    `Line ${line + 1} of the data table holds something that is no number. Export the file again.`,
    line + 1,
  );
}

function readPairs({ bytes, lines }: JcampFile, block: JcampBlock, table: JcampTable): DecodedTable | Refusal {
  const axis: number[] = [];
  const counts: number[] = [];
  const lineNumbers: number[] = [];
  for (let line = table.firstLine; line < table.endLine; line += 1) {
    const from = lines.starts[line]!;
    const to = withoutComment(bytes, from, lines.ends[line]!);
    let isX = true;
    let wrong = false;
    forEachToken(bytes, from, to, (start, end) => {
      const value = scanNumber(bytes, start, end, ".", "none");
      if (value !== value && (isX || !isUnknown(bytes, start, end))) wrong = true;
      if (isX) axis.push(value * block.xFactor);
      else {
        counts.push(value * block.yFactor);
        lineNumbers.push(line + 1);
      }
      isX = !isX;
    });
    if (wrong) return notANumber(line);
    if (!isX)
      return refuse("damaged-data", `Line ${line + 1} of the data table ends after an X without its Y.`, line + 1);
  }
  const wrong = wrongCount(block, table, counts.length);
  if (wrong !== null) return wrong;
  return {
    axis: Float64Array.from(axis),
    counts: Float64Array.from(counts),
    damaged: [],
    lineOf: (row) => lineNumbers[row] ?? table.line,
  };
}

function wrongCount(block: JcampBlock, table: JcampTable, found: number): Refusal | null {
  if (Number.isNaN(block.points) || block.points === found) return null;
  return refuse(
    "damaged-data",
    `The file says that it holds ${block.points} points (NPOINTS), and ${found} are there: a line is missing or damaged, so positions can't be trusted. Export the file again.`,
    table.line,
  );
}

function readOrdinates(file: JcampFile, block: JcampBlock, table: JcampTable): DecodedTable | Refusal {
  const { bytes, lines } = file;
  let isPacked = false;
  for (let line = table.firstLine; line < table.endLine; line += 1) {
    const from = lines.starts[line]!;
    const to = withoutComment(bytes, from, lines.ends[line]!);
    if (to - from > mostLineBytes) {
      return refuse(
        "damaged-data",
        `Line ${line + 1} is longer than any line of a JCAMP-DX table (80 characters).`,
        line + 1,
      );
    }
    for (let i = from; i < to && !isPacked; i += 1) isPacked = isPackedSign(bytes, i, to);
    if (isPacked) break;
  }
  const read = isPacked ? unpack(file, table) : readWrittenOut(file, table);
  if ("outcome" in read) return read;
  const { ordinates, lineNumbers, firstX, damaged } = read;
  const n = ordinates.length;
  const wrong = wrongCount(block, table, n);
  if (wrong !== null) return wrong;
  const firstPosition = Number.isNaN(block.firstX) ? firstX * block.xFactor : block.firstX;
  const step = Number.isNaN(block.lastX) || n < 2 ? block.deltaX : (block.lastX - firstPosition) / (n - 1);
  if (Number.isNaN(firstPosition) || Number.isNaN(step)) {
    return refuse(
      "damaged-data",
      "The file gives neither LASTX nor DELTAX: where its points lie is not known.",
      table.line,
    );
  }
  const axis = Float64Array.from({ length: n }, (_, i) => firstPosition + i * step);
  if (!Number.isNaN(block.lastX) && n > 1) axis[n - 1] = block.lastX;
  const off = firstLineOff(read, axis, step, block.xFactor);
  if (off !== null) {
    return refuse(
      "damaged-data",
      `Line ${off.line} begins with X = ${off.x}, where ${off.expected} is due: a line before it is missing or damaged. Export the file again.`,
      off.line,
    );
  }
  const counts = Float64Array.from(ordinates, (value) => value * block.yFactor);
  return { axis, counts, damaged, lineOf: (row) => lineNumbers[row] ?? table.line };
}

/** A letter or sign of the packed forms; an exponent's E is none. */
function isPackedSign(bytes: Uint8Array, i: number, to: number): boolean {
  const code = bytes[i]!;
  const isLetter = (code >= 64 && code <= 90) || (code >= 97 && code <= 115) || code === 37;
  if (!isLetter) return false;
  if ((code | 32) !== 101) return true;
  const before = bytes[i - 1] ?? 0;
  const after = i + 1 < to ? bytes[i + 1]! : 0;
  return !((before === 46 || (before >= 48 && before <= 57)) && (after === 43 || after === 45));
}

interface Ordinates {
  ordinates: ArrayLike<number> & Iterable<number>;
  /** 1-based line of each ordinate; empty where it is not known. */
  lineNumbers: number[];
  firstX: number;
  /** Where a line's X is known to belong to an ordinate. */
  starts: { line: number; row: number; x: number; lastDigit: number }[];
  damaged: { line: number; reason: string }[];
}

function readWrittenOut({ bytes, lines }: JcampFile, table: JcampTable): Ordinates | Refusal {
  const ordinates: number[] = [];
  const lineNumbers: number[] = [];
  const starts: Ordinates["starts"] = [];
  for (let line = table.firstLine; line < table.endLine; line += 1) {
    const from = lines.starts[line]!;
    const to = withoutComment(bytes, from, lines.ends[line]!);
    let isX = true;
    let wrong = false;
    forEachToken(bytes, from, to, (start, end) => {
      const value = scanNumber(bytes, start, end, ".", "none");
      if (value !== value && (isX || !isUnknown(bytes, start, end))) wrong = true;
      if (isX)
        starts.push({ line: line + 1, row: ordinates.length, x: value, lastDigit: lastDigitOf(bytes, start, end) });
      else {
        ordinates.push(value);
        lineNumbers.push(line + 1);
      }
      isX = false;
    });
    if (wrong) return notANumber(line);
  }
  return { ordinates, lineNumbers, firstX: starts[0]?.x ?? NaN, starts, damaged: [] };
}

/** Worth of a number's last written digit. */
function lastDigitOf(bytes: Uint8Array, from: number, to: number): number {
  let digit = 1;
  let seenPoint = false;
  for (let i = from; i < to; i += 1) {
    if (bytes[i] === 46) seenPoint = true;
    else if ((bytes[i]! | 32) === 101) return Number.POSITIVE_INFINITY;
    else if (seenPoint) digit /= 10;
  }
  return digit;
}

function firstLineOff(
  { starts }: Ordinates,
  axis: Float64Array,
  step: number,
  xFactor: number,
): { line: number; x: number; expected: number } | null {
  for (const { line, row, x, lastDigit } of starts) {
    if (row >= axis.length) continue;
    const expected = axis[row]!;
    const allowed = Math.max(xCheckShare * Math.abs(step), lastDigit * Math.abs(xFactor));
    if (!(Math.abs(x * xFactor - expected) <= allowed)) return { line, x: x * xFactor, expected };
  }
  return null;
}

function unpack({ bytes, lines }: JcampFile, table: JcampTable): Ordinates | Refusal {
  let text = "##TITLE=\n##JCAMP-DX=4.24\n##DATA TYPE=\n##FIRSTX=0\n##LASTX=1\n##NPOINTS=2\n##XYDATA=(X++(Y..Y))\n";
  const fileLines: number[] = [];
  let firstX = NaN;
  let unfolded = 0;
  for (let line = table.firstLine; line < table.endLine; line += 1) {
    const from = lines.starts[line]!;
    const to = withoutComment(bytes, from, lines.ends[line]!);
    if (isBlankLine(bytes, from, to)) continue;
    const checked = checkPackedLine(bytes, from, to, line);
    if ("outcome" in checked) return checked;
    unfolded += checked.unfolded;
    if (unfolded > mostPoints) {
      return refuse(
        "damaged-data",
        `The packed table unfolds to more than ${mostPoints} points at line ${line + 1}.`,
        line + 1,
      );
    }
    if (fileLines.length === 0) firstX = scanNumber(bytes, checked.xFrom, checked.xTo, ".", "none");
    fileLines.push(line + 1);
    // The line's own X is only a check and may hold decimals: a whole number stands for it.
    text += `0${checked.rest}\n`;
  }
  const damaged: { line: number; reason: string }[] = [];
  const hear = (message: unknown): void => {
    const match = /^Data line (\d+): After a duplicate/.exec(String(message));
    const line = match === null ? undefined : fileLines[Number(match[1])];
    if (line !== undefined && damaged.length < 20) {
      damaged.push({ line, reason: "its check value does not repeat the last value of the line before" });
    }
  };
  const quiet = (): void => undefined;
  const logger = { trace: hear, debug: quiet, info: quiet, warn: quiet, error: quiet, fatal: quiet };
  const { flatten } = convert(text, { logger: logger as never });
  const ordinates = flatten[0]?.spectra[0]?.data["y"];
  if (ordinates === undefined || ordinates.length === 0) {
    return refuse("no-numbers", "The data table of this JCAMP-DX file holds no point.", table.line);
  }
  return { ordinates, lineNumbers: [], firstX, starts: [], damaged };
}

/**
 * A line of a packed table, checked so that unpacking is bounded and exact.
 *
 * @returns bounds of its X, the rest of its text, and at most how many points it unfolds to
 */
function checkPackedLine(
  bytes: Uint8Array,
  from: number,
  to: number,
  line: number,
): { xFrom: number; xTo: number; rest: string; unfolded: number } | Refusal {
  let i = from;
  while (i < to && (bytes[i] === 32 || bytes[i] === 9)) i += 1;
  const xFrom = i;
  while (i < to && isNumberByte(bytes[i]!)) {
    if (i > xFrom && (bytes[i] === 43 || bytes[i] === 45)) break;
    i += 1;
  }
  const xTo = i;
  if (xTo === xFrom || xTo - xFrom > 2 * mostDigits) return notANumber(line);
  let rest = "";
  let digits = 0;
  let unfolded = 0;
  let times = -1;
  for (; i < to; i += 1) {
    const code = bytes[i]!;
    const isDigit = code >= 48 && code <= 57;
    if (isDigit) {
      digits += 1;
      if (digits > mostDigits) return notANumber(line);
      if (times >= 0) times = times * 10 + (code - 48);
    } else {
      if (times > 0) unfolded += times;
      times = -1;
      digits = 0;
      if (code === 46) {
        return refuse(
          "damaged-data",
          `Line ${line + 1} holds a decimal point within packed numbers, which are whole.`,
          line + 1,
        );
      }
      const isLetter = (code >= 64 && code <= 90) || (code >= 97 && code <= 115) || code === 37;
      const isSign = code === 43 || code === 45 || code === 44 || code === 32 || code === 9;
      if (!isLetter && !isSign) return notANumber(line);
      if (isLetter) unfolded += 1;
      if (code >= 83 && code <= 90) times = code - 82;
      else if (code === 115) times = 9;
    }
    rest += String.fromCharCode(code);
  }
  if (times > 0) unfolded += times;
  return { xFrom, xTo, rest, unfolded };
}

function isNumberByte(code: number): boolean {
  return (code >= 48 && code <= 57) || code === 46 || code === 43 || code === 45;
}
