/**
 * A capture's bytes to one spectrum: text, header, columns, axis. Nothing here throws or waits on any input; what can't be read is
 * refused with a sentence, and what was guessed is said in `facts.remarks`.
 */
import type { AxisUnit, FileFacts, ReadCapture, ReadOptions, Refusal, Spectrum } from "../analysis/types.ts";
import { chooseColumns, type ColumnChoice } from "./choose-columns.ts";
import { decodeBytes, sliceText, textToBytes, type TextEncoding } from "./decode.ts";
import { findDataBlock, makeRowReader, type DataBlock } from "./find-data-block.ts";
import { readDetector, readMetadataLine } from "./headings.ts";
import { indexLines, isBlankLine, type LineIndex } from "./line-index.ts";
import { refuse } from "./refusal.ts";
import { isMissingCell, scanNumber, splitCells } from "./scan-row.ts";

/** Fewer samples than this hold no line with a baseline beside it. */
export const fewestRows = 8;
const sampledRows = 400;
const mostDamagedLines = 20;
const mostMetadata = 200;

const nmPerUnit: Partial<Record<AxisUnit, number>> = { Å: 0.1, µm: 1000 };

/**
 * Read one capture.
 *
 * @param source   the file's bytes, or its text
 * @param name     the file's name, for the facts only
 * @param options  corrections of what the reader guesses
 */
export function readCapture(source: Uint8Array | string, name: string, options: ReadOptions = {}): ReadCapture {
  if (source.length === 0)
    return refuse("empty-file", "The file is empty: it holds no bytes. Export the spectrum again.");
  const decoded = typeof source === "string" ? textOf(source) : decodeBytes(source);
  if (decoded.kind === "binary") {
    const what = decoded.looksLike === null ? "no text" : decoded.looksLike;
    return refuse(
      "binary-file",
      `The file is ${what}. Export the spectrum as text (CSV or tab-separated), then drop that file.`,
    );
  }
  const { bytes, encoding } = decoded;
  const lines = indexLines(bytes);
  if (allBlank(bytes, lines))
    return refuse("empty-file", "The file holds nothing but blank lines. Export the spectrum again.");
  if (startsWith(bytes, "##TITLE")) {
    return refuse(
      "no-numbers",
      "This is a JCAMP-DX file. Export the spectrum as two columns of text (CSV or tab-separated) instead.",
      1,
    );
  }
  const block = findDataBlock(bytes, lines, options);
  if (block === null) return refuseWithoutNumbers(bytes, lines);
  return readBlock({ bytes, encoding, lines, block, name, options });
}

function textOf(
  text: string,
): { kind: "text"; bytes: Uint8Array; encoding: TextEncoding } | { kind: "binary"; looksLike: null } {
  return text.includes("\u0000")
    ? { kind: "binary", looksLike: null }
    : { kind: "text", bytes: textToBytes(text), encoding: "utf-8" };
}

function allBlank(bytes: Uint8Array, lines: LineIndex): boolean {
  for (let line = 0; line < lines.count; line += 1) {
    if (!isBlankLine(bytes, lines.starts[line]!, lines.ends[line]!)) return false;
  }
  return true;
}

function startsWith(bytes: Uint8Array, word: string): boolean {
  for (let i = 0; i < word.length; i += 1) if (bytes[i] !== word.charCodeAt(i)) return false;
  return true;
}

function refuseWithoutNumbers(bytes: Uint8Array, lines: LineIndex): Refusal {
  let separated = false;
  for (let line = 0; line < Math.min(lines.count, 200) && !separated; line += 1) {
    for (let i = lines.starts[line]!; i < lines.ends[line]!; i += 1) {
      const byte = bytes[i]!;
      if (byte === 9 || byte === 44 || byte === 59) separated = true;
    }
  }
  return separated
    ? refuse("no-numbers", "The file holds text but no row of numbers. Drop the file that holds the recorded spectrum.")
    : refuse(
        "one-column-text",
        "The file holds text in one column and no numbers. A capture has an axis and an intensity in each row.",
      );
}

interface BlockInput {
  bytes: Uint8Array;
  encoding: TextEncoding;
  lines: LineIndex;
  block: DataBlock;
  name: string;
  options: ReadOptions;
}

function readBlock({ bytes, encoding, lines, block, name, options }: BlockInput): ReadCapture {
  const header = readHeader(bytes, encoding, lines, block);
  const sample = sampleColumns(bytes, lines, block, block.decimal);
  const chosen = chooseColumns(header.headings, sample, header.metadata, options);
  if ("problem" in chosen) return refuse("no-such-column", `${chosen.problem} Choose the columns again.`);
  const remarks = [...chosen.remarks];

  let decimal = block.decimal;
  if (block.decimalIsOpen) {
    const settled = settleDecimal(bytes, lines, block, chosen);
    if (settled === null) {
      return refuse(
        "ambiguous-number-format",
        "The numbers can be read in two ways: a mark before three digits may be a decimal sign or group thousands. Say which sign is the decimal one.",
        block.firstLine + 1,
      );
    }
    decimal = settled;
    remarks.push(`The decimal sign was taken to be "${decimal}".`);
  } else if (looksLikeSplitDecimals(block, sample)) {
    return refuse(
      "ambiguous-number-format",
      "The comma seems to be both the decimal sign and what parts the columns. Export with another separator (semicolon or tab) or with decimal points.",
      block.firstLine + 1,
    );
  }

  const rows = readRows(bytes, lines, { ...block, decimal }, chosen.axisColumn, chosen.intensityColumn);
  collectFooter(rows.trailing, bytes, encoding, lines, header.metadata);
  const { axis, counts } = rows;
  const n = counts.length;
  if (chosen.axisColumn === null && block.columns === 1) {
    if (n > 2 && onlyRisesOrFalls(counts)) {
      return refuse(
        "no-such-column",
        "The file holds one column whose numbers only rise or fall: an axis without intensities. Export both columns.",
      );
    }
    remarks.push("The file holds one column of numbers; they were read as intensities, one a pixel, counted from 0.");
  }
  if (n < fewestRows) {
    return refuse(
      "too-few-rows",
      `The file holds ${n} row${n === 1 ? "" : "s"} of numbers; a capture needs at least ${fewestRows}.`,
      block.firstLine + 1,
    );
  }
  if (rows.damaged.length > 0) {
    remarks.push(
      `${rows.damagedCount} line${rows.damagedCount === 1 ? "" : "s"} could not be read and ${rows.damagedCount === 1 ? "was" : "were"} left out.`,
    );
  }

  const positions = new Float64Array(n);
  const asWritten = axis ?? Float64Array.from({ length: n }, (_, i) => i);
  const descending = asWritten[n - 1]! < asWritten[0]!;
  const wrong = checkAxis(asWritten, descending, rows.lineNumbers);
  if (wrong !== null) return wrong;
  fillPositions(positions, asWritten, chosen, remarks);
  if (descending) {
    positions.reverse();
    remarks.push("The axis runs downwards in the file; the samples were turned round.");
  }

  const facts = describe({ name, rows, asWritten, header, block: { ...block, decimal }, chosen, encoding, remarks });
  if (facts.missing === n)
    return refuse("no-numbers", "The intensity column holds no number at all. Choose another column.");
  const detector = readDetector(header.metadata);
  const spectrum: Spectrum = {
    axisKind: chosen.axisKind,
    axisUnit: chosen.axisKind === "wavelength" ? "nm" : chosen.axisUnit,
    wasDescending: descending,
    positions,
    counts: descending ? counts.reverse() : counts,
    fullScaleCounts: options.fullScaleCounts ?? detector.fullScaleCounts,
    scansSummed: options.scansSummed ?? detector.scansSummed ?? 1,
  };
  return { outcome: "read", spectrum, facts };
}

interface Header {
  headings: string[];
  metadata: Record<string, string>;
}

function readHeader(bytes: Uint8Array, encoding: TextEncoding, lines: LineIndex, block: DataBlock): Header {
  const metadata: Record<string, string> = {};
  let headings = Array.from({ length: block.columns }, () => "");
  const row = makeRowReader();
  let last = block.firstLine - 1;
  while (last >= 0 && isBlankLine(bytes, lines.starts[last]!, lines.ends[last]!)) last -= 1;
  if (last >= 0) {
    let from = lines.starts[last]!;
    const to = lines.ends[last]!;
    while (from < to && (bytes[from] === 35 || bytes[from] === 37 || bytes[from] === 32)) from += 1;
    // Some programs part the headings by another sign than the numbers.
    let cells = 0;
    for (const delimiter of [block.delimiter, "\t", ";", ","] as const) {
      cells = splitCells(bytes, from, to, delimiter, row.starts, row.ends);
      if (cells === block.columns) break;
    }
    const named =
      cells === block.columns || (cells === block.columns + 1 && row.ends[cells - 1] === row.starts[cells - 1]);
    const texts = headings.map((_, c) =>
      c < cells ? sliceText(bytes, row.starts[c]!, row.ends[c]!, encoding).trim() : "",
    );
    if (named && texts.every((text) => !/[:=]$/.test(text)) && texts.some((text) => /\p{L}/u.test(text)))
      headings = texts;
    else last += 1;
  } else last = 0;
  for (let line = 0; line < Math.min(last, block.firstLine); line += 1) {
    addMetadata(
      metadata,
      sliceText(bytes, lines.starts[line]!, Math.min(lines.ends[line]!, lines.starts[line]! + 1000), encoding),
    );
  }
  return { headings, metadata };
}

function addMetadata(metadata: Record<string, string>, text: string): void {
  const entry = readMetadataLine(text);
  if (entry === null || Object.keys(metadata).length >= mostMetadata) return;
  // defineProperty, because a file may well name a key "__proto__".
  Object.defineProperty(metadata, entry.key, {
    value: entry.value,
    enumerable: true,
    configurable: true,
    writable: true,
  });
}

function sampleColumns(
  bytes: Uint8Array,
  lines: LineIndex,
  block: DataBlock,
  decimal: DataBlock["decimal"],
): number[][] {
  const sample: number[][] = Array.from({ length: block.columns }, () => []);
  const row = makeRowReader();
  const take = (line: number): boolean => {
    const cells = splitCells(bytes, lines.starts[line]!, lines.ends[line]!, block.delimiter, row.starts, row.ends);
    if (cells < block.columns) return false;
    for (let c = 0; c < block.columns; c += 1)
      sample[c]!.push(scanNumber(bytes, row.starts[c]!, row.ends[c]!, decimal));
    return true;
  };
  let line = block.firstLine;
  for (let taken = 0; line < lines.count && taken < sampledRows; line += 1) if (take(line)) taken += 1;
  // The last row too: the range of the axis tells its unit.
  for (let last = lines.count - 1; last >= line; last -= 1) {
    if (take(last) && sample.some((values) => values[values.length - 1] === values[values.length - 1])) break;
  }
  return sample;
}

/** Where both decimal signs read every number: the sign that keeps the axis in order, or that every axis value carries; else null. */
function settleDecimal(
  bytes: Uint8Array,
  lines: LineIndex,
  block: DataBlock,
  chosen: ColumnChoice,
): DataBlock["decimal"] | null {
  const other = block.decimal === "." ? "," : ".";
  const column = chosen.axisColumn ?? chosen.intensityColumn;
  if (chosen.axisColumn !== null) {
    const inOrder = (decimal: DataBlock["decimal"]): boolean =>
      onlyRisesOrFalls(sampleColumns(bytes, lines, block, decimal)[column]!);
    const here = inOrder(block.decimal);
    const there = inOrder(other);
    if (here !== there) return here ? block.decimal : other;
  }
  const row = makeRowReader();
  const marks = { ",": 0, ".": 0 };
  const plain = { axis: 0, intensity: 0 };
  let rows = 0;
  for (let line = block.firstLine; line < lines.count && rows < sampledRows; line += 1) {
    const cells = splitCells(bytes, lines.starts[line]!, lines.ends[line]!, block.delimiter, row.starts, row.ends);
    if (cells < block.columns) continue;
    rows += 1;
    for (const [name, c] of [
      ["axis", chosen.axisColumn],
      ["intensity", chosen.intensityColumn],
    ] as const) {
      if (c === null) continue;
      let mark: "," | "." | null = null;
      for (let i = row.starts[c]!; i < row.ends[c]!; i += 1) {
        if (bytes[i] === 44) mark = ",";
        else if (bytes[i] === 46) mark = ".";
      }
      if (mark === null) plain[name] += 1;
      else marks[mark] += 1;
    }
  }
  // A column of fixed decimals carries its sign in every cell; grouped thousands are missing from the small numbers.
  const steady = (count: number): boolean => count === 0 || count === rows;
  if (!steady(plain.axis) || !steady(plain.intensity)) return null;
  return marks[","] > 0 ? "," : ".";
}

/** `200,00,1234,56`: pairs of whole numbers whose first stands still while the second counts. */
function looksLikeSplitDecimals(block: DataBlock, sample: number[][]): boolean {
  if (block.delimiter !== "," || block.columns !== 4) return false;
  const [whole, part] = [sample[0]!, sample[1]!];
  let repeats = 0;
  for (let i = 0; i < whole.length; i += 1) {
    if (whole[i] !== Math.floor(whole[i]!) || part[i] !== Math.floor(part[i]!) || part[i]! < 0) return false;
    if (i > 0 && whole[i] === whole[i - 1]) repeats += 1;
  }
  return repeats > 0 && !onlyRisesOrFalls(part);
}

function onlyRisesOrFalls(values: ArrayLike<number>): boolean {
  if (values.length < 2) return true;
  const direction = Math.sign(values[1]! - values[0]!);
  if (direction === 0) return false;
  for (let i = 1; i < values.length; i += 1) if (Math.sign(values[i]! - values[i - 1]!) !== direction) return false;
  return true;
}

interface Rows {
  axis: Float64Array | null;
  counts: Float64Array;
  lineNumbers: Int32Array;
  missing: number;
  damaged: { line: number; reason: string }[];
  damagedCount: number;
  trailing: number[];
}

function readRows(
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
  const needed = Math.max(axisColumn ?? 0, intensityColumn) + 1;
  let n = 0;
  let missing = 0;
  let unread: { line: number; reason: string; text: boolean }[] = [];
  const damaged: { line: number; reason: string }[] = [];
  let damagedCount = 0;
  let lastRead = -1;
  const fault = (line: number, reason: string): void => {
    damagedCount += 1;
    if (unread.length >= mostDamagedLines) return;
    unread.push({ line, reason, text: !startsWithDigit(bytes, lines.starts[line]!, lines.ends[line]!) });
  };
  for (let line = block.firstLine; line < lines.count; line += 1) {
    const from = lines.starts[line]!;
    const to = lines.ends[line]!;
    if (isBlankLine(bytes, from, to)) continue;
    const cells = splitCells(bytes, from, to, block.delimiter, row.starts, row.ends);
    if (cells < needed) {
      fault(line, `has ${cells} column${cells === 1 ? "" : "s"} where ${needed} are needed`);
      continue;
    }
    const value = scanNumber(bytes, row.starts[intensityColumn]!, row.ends[intensityColumn]!, block.decimal);
    if (value !== value && !isMissingCell(bytes, row.starts[intensityColumn]!, row.ends[intensityColumn]!)) {
      fault(line, "its intensity is no number");
      continue;
    }
    if (axis !== null) {
      const at = scanNumber(bytes, row.starts[axisColumn!]!, row.ends[axisColumn!]!, block.decimal);
      if (at !== at) {
        if (isMissingCell(bytes, row.starts[axisColumn!]!, row.ends[axisColumn!]!)) missing += 1;
        fault(line, "its axis value is no number");
        continue;
      }
      axis[n] = at;
    }
    if (value !== value) missing += 1;
    counts[n] = value;
    lineNumbers[n] = line + 1;
    n += 1;
    lastRead = line;
    if (unread.length > 0) {
      for (const one of unread)
        if (damaged.length < mostDamagedLines) damaged.push({ line: one.line + 1, reason: one.reason });
      unread = [];
    }
  }
  // Words after the last row are the file's foot, not damage.
  const trailing: number[] = [];
  for (const one of unread) {
    if (one.line > lastRead && one.text) {
      trailing.push(one.line);
      damagedCount -= 1;
    } else if (damaged.length < mostDamagedLines) damaged.push({ line: one.line + 1, reason: one.reason });
  }
  return {
    axis: axis === null ? null : axis.slice(0, n),
    counts: counts.slice(0, n),
    lineNumbers: lineNumbers.subarray(0, n),
    missing,
    damaged,
    damagedCount,
    trailing,
  };
}

function startsWithDigit(bytes: Uint8Array, from: number, to: number): boolean {
  for (let i = from; i < to; i += 1) {
    const byte = bytes[i]!;
    if (byte === 32 || byte === 9 || byte === 34 || byte === 43 || byte === 45) continue;
    return byte >= 48 && byte <= 57;
  }
  return false;
}

function collectFooter(
  trailing: number[],
  bytes: Uint8Array,
  encoding: TextEncoding,
  lines: LineIndex,
  metadata: Record<string, string>,
): void {
  for (const line of trailing)
    addMetadata(
      metadata,
      sliceText(bytes, lines.starts[line]!, Math.min(lines.ends[line]!, lines.starts[line]! + 1000), encoding),
    );
}

function checkAxis(axis: Float64Array, descending: boolean, lineNumbers: Int32Array): Refusal | null {
  const direction = descending ? -1 : 1;
  for (let i = 1; i < axis.length; i += 1) {
    const step = (axis[i]! - axis[i - 1]!) * direction;
    if (step > 0) continue;
    const line = lineNumbers[i]!;
    return step === 0
      ? refuse(
          "duplicate-positions",
          `The axis value ${axis[i]!} stands twice (line ${line}). Each sample needs its own place on the axis.`,
          line,
        )
      : refuse(
          "non-monotonic-axis",
          `The axis turns back at line ${line} (${axis[i - 1]!}, then ${axis[i]!}). Drop one spectrum a file, its axis only rising or only falling.`,
          line,
        );
  }
  return null;
}

/** Positions in file order: nm, pixels from 0, or as written. */
function fillPositions(positions: Float64Array, axis: Float64Array, chosen: ColumnChoice, remarks: string[]): void {
  const n = axis.length;
  if (chosen.axisKind === "pixel" && chosen.axisColumn !== null) {
    let whole = true;
    for (let i = 0; i < n && whole; i += 1) whole = axis[i] === Math.floor(axis[i]!);
    if (!whole && Math.abs(axis[n - 1]! - axis[0]!) !== n - 1) {
      remarks.push("The axis column holds no pixel numbers; the samples were counted from 0 instead.");
      for (let i = 0; i < n; i += 1) positions[i] = i;
      return;
    }
    const first = Math.min(axis[0]!, axis[n - 1]!);
    if (first === 1) remarks.push("The file counts its pixels from 1; Wavekeep counts them from 0.");
    const offset = first === 1 ? 1 : 0;
    for (let i = 0; i < n; i += 1) positions[i] = axis[i]! - offset;
    return;
  }
  const factor = nmPerUnit[chosen.axisUnit];
  if (chosen.axisUnit === "Å") for (let i = 0; i < n; i += 1) positions[i] = axis[i]! / 10;
  else if (factor !== undefined) for (let i = 0; i < n; i += 1) positions[i] = axis[i]! * factor;
  else positions.set(axis);
}

function describe(input: {
  name: string;
  rows: Rows;
  asWritten: Float64Array;
  header: Header;
  block: DataBlock;
  chosen: ColumnChoice;
  encoding: TextEncoding;
  remarks: string[];
}): FileFacts {
  const { rows, asWritten, header, block, chosen } = input;
  let sum = 0;
  let lost = 0; // Neumaier's compensation: the sum is that of the numbers as written
  let max = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < rows.counts.length; i += 1) {
    const value = rows.counts[i]!;
    if (value !== value) continue;
    const next = sum + value;
    lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
    sum = next;
    if (value > max) max = value;
  }
  return {
    name: input.name,
    sha256: null,
    rows: rows.counts.length,
    axis: chosen.axisKind,
    axisUnit: chosen.axisUnit,
    first: asWritten[0]!,
    last: asWritten[asWritten.length - 1]!,
    intensitySum: sum + lost,
    intensityMax: max,
    metadata: header.metadata,
    delimiter: block.delimiter,
    decimal: block.decimal,
    missing: rows.missing,
    encoding: input.encoding,
    headerLines: block.firstLine,
    columns: header.headings.map((heading, column) => (heading === "" ? `column ${column + 1}` : heading)),
    axisColumn: chosen.axisColumn,
    intensityColumn: chosen.intensityColumn,
    damagedLines: rows.damaged,
    remarks: input.remarks,
  };
}
