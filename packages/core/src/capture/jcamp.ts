/**
 * JCAMP-DX files (IUPAC: R. S. McDonald and P. A. Wilks, Appl. Spectrosc. 42 (1988) 151; compound blocks after P. Lampen et al. 1999).
 *
 * Read are one-dimensional optical spectra: XYDATA in the form (X++(Y..Y)), plain or packed (PAC, SQZ, DIF, DUP), and XYPOINTS or XYDATA
 * in the form (XY..XY). X of sample i is FIRSTX + i (LASTX - FIRSTX) / (NPOINTS - 1), as the standard means it; the X that begins each
 * line is a check. Packed tables go through `jcamp-packed.ts`; numbers written out are read by the capture's own scanner.
 * A file whose points are not as many as it says is refused: its positions could not be trusted.
 */
import type { ReadCapture, ReadOptions, Refusal } from "../analysis/types.ts";
import { chooseColumns, type ColumnChoice } from "./choose-columns.ts";
import type { TextEncoding } from "./decode.ts";
import { finishCapture } from "./finish-capture.ts";
import { readJcampBlocks, type JcampBlock, type JcampTable } from "./jcamp-blocks.ts";
import {
  isPackedSign,
  lastDigitOf,
  notANumber,
  unpack,
  withoutComment,
  xCheckSteps,
  type Ordinates,
} from "./jcamp-packed.ts";
import type { LineIndex } from "./line-index.ts";
import { refuse } from "./refusal.ts";
import { scanNumber } from "./scan-row.ts";

/** Longest line of a data table: the standard allows 80 characters. */
const mostLineBytes = 4096;
const sampledPoints = 400;
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
  const { axis, counts, damaged, missing, lineOf } = decoded;
  const columns = [`X (${block.xUnits === "" ? "no unit" : block.xUnits})`, block.yUnits === "" ? "Y" : block.yUnits];
  const chosen = chooseAxis(columns, axis, counts, block, options);
  if ("problem" in chosen) return refuse("unsupported-content", chosen.problem, table.line);
  remarks.push(...chosen.remarks);
  if (damaged.length > 0) {
    const named = damaged.map(({ line }) => `line ${line}`).join(", ");
    remarks.push(
      `Check values of the packed table do not agree (${named}); the points of these lines and of the lines before them were left out.`,
    );
  }
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
  /** Ordinates that the file leaves open (`?`). */
  missing: number;
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

function isUnknown(bytes: Uint8Array, from: number, to: number): boolean {
  return to === from + 1 && bytes[from] === 63;
}

function readPairs({ bytes, lines }: JcampFile, block: JcampBlock, table: JcampTable): DecodedTable | Refusal {
  const axis: number[] = [];
  const counts: number[] = [];
  const lineNumbers: number[] = [];
  let missing = 0;
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
        if (value !== value) missing += 1;
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
    missing,
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
    for (let i = from; i < to && !isPacked; i += 1) isPacked = isPackedSign(bytes, i);
    if (isPacked) break;
  }
  const read = isPacked ? unpack(bytes, lines, table) : readWrittenOut(file, table);
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
  const missing = isPacked ? 0 : counts.reduce((sum, value) => sum + (value !== value ? 1 : 0), 0);
  return { axis, counts, damaged, missing, lineOf: (row) => lineNumbers[row] ?? table.line };
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
        starts.push({
          line: line + 1,
          row: ordinates.length,
          x: value,
          lastDigit: lastDigitOf(bytes, start, end),
          steps: xCheckSteps,
        });
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

function firstLineOff(
  { starts }: Ordinates,
  axis: Float64Array,
  step: number,
  xFactor: number,
): { line: number; x: number; expected: number } | null {
  for (const { line, row, x, lastDigit, steps } of starts) {
    if (row >= axis.length) continue;
    const expected = axis[row]!;
    const allowed = Math.max(steps * Math.abs(step), lastDigit * Math.abs(xFactor));
    if (!(Math.abs(x * xFactor - expected) <= allowed)) return { line, x: x * xFactor, expected };
  }
  return null;
}
