/**
 * The lines before a capture's data: column headings in one or two rows, and metadata.
 */
import type { DataBlock } from "./find-data-block.ts";
import { sliceText, type TextEncoding } from "./decode.ts";
import { readHeading, readMetadataLine, unitIn } from "./headings.ts";
import { isBlankLine, type LineIndex } from "./line-index.ts";
import { makeRowReader, splitCells, type Delimiter } from "./scan-row.ts";

export interface Header {
  /** One text a column, empty where there is none. */
  headings: string[];
  metadata: Record<string, string>;
  /** Index of the line that holds the headings (the upper of two), -1 for none. */
  headingLine: number;
}

const mostMetadata = 200;
const mostHeaderLines = 5000;
const mostLineBytes = 1000;
/** Marks and rules may stand between the headings and the data: so many lines are looked past. */
const mostLinesBetween = 3;

export function lineText(bytes: Uint8Array, encoding: TextEncoding, lines: LineIndex, line: number): string {
  const from = lines.starts[line]!;
  return sliceText(bytes, from, Math.min(lines.ends[line]!, from + mostLineBytes), encoding);
}

/** Keep one line's `key: value`, where it is one and there is room. */
export function addMetadata(metadata: Record<string, string>, text: string, delimiter: Delimiter): void {
  const entry = readMetadataLine(text, delimiter);
  if (entry === null) return;
  // defineProperty, because a file may well name a key "__proto__".
  Object.defineProperty(metadata, entry.key, {
    value: entry.value,
    enumerable: true,
    configurable: true,
    writable: true,
  });
}

export function isMetadataFull(metadata: Record<string, string>): boolean {
  return Object.keys(metadata).length >= mostMetadata;
}

/** Headings and metadata of the lines from `fromLine` to the block's first data line. */
export function readHeader(
  bytes: Uint8Array,
  encoding: TextEncoding,
  lines: LineIndex,
  block: Pick<DataBlock, "delimiter" | "columns" | "firstLine">,
  fromLine = 0,
): Header {
  const { columns, firstLine, delimiter } = block;
  const metadata: Record<string, string> = {};
  let headings = Array.from({ length: columns }, () => "");
  const used = new Set<number>();
  let headingLine = -1;
  let passed = 0;
  for (let line = firstLine - 1; line >= fromLine && passed < mostLinesBetween; line -= 1) {
    if (isBlankLine(bytes, lines.starts[line]!, lines.ends[line]!)) continue;
    const cells = headingCells(bytes, encoding, lines, line, block);
    if (cells === null) {
      // A rule or a mark like "begin of data" parts headings and data; a line of metadata means that there are no headings.
      if (readMetadataLine(lineText(bytes, encoding, lines, line), delimiter) !== null) break;
      passed += 1;
      continue;
    }
    headings = cells;
    headingLine = line;
    used.add(line);
    const above = line - 1;
    if (above >= fromLine && !isBlankLine(bytes, lines.starts[above]!, lines.ends[above]!) && isUnitsRow(cells)) {
      const titles = headingCells(bytes, encoding, lines, above, block);
      if (titles !== null && !isUnitsRow(titles) && titles.some(namesAxis)) {
        headings = titles.map((title, c) => joinTitle(title, cells[c]!));
        headingLine = above;
        used.add(above);
      }
    }
    break;
  }
  for (let line = fromLine, seen = 0; line < firstLine && seen < mostHeaderLines; line += 1) {
    if (used.has(line) || isBlankLine(bytes, lines.starts[line]!, lines.ends[line]!)) continue;
    seen += 1;
    if (isMetadataFull(metadata)) break;
    addMetadata(metadata, lineText(bytes, encoding, lines, line), delimiter);
  }
  return { headings, metadata, headingLine };
}

/** The cells of a row of headings, as many as the data have columns; null when the line is no such row. */
function headingCells(
  bytes: Uint8Array,
  encoding: TextEncoding,
  lines: LineIndex,
  line: number,
  block: Pick<DataBlock, "delimiter" | "columns">,
): string[] | null {
  const { columns } = block;
  let from = lines.starts[line]!;
  const to = Math.min(lines.ends[line]!, from + 64 * mostLineBytes);
  const marked = bytes[from] === 35 || bytes[from] === 37;
  while (from < to && (bytes[from] === 35 || bytes[from] === 37 || bytes[from] === 32)) from += 1;
  const row = makeRowReader();
  const textsOf = (count: number): string[] =>
    Array.from({ length: columns }, (_, c) =>
      c < count ? sliceText(bytes, row.starts[c]!, Math.min(row.ends[c]!, row.starts[c]! + 200), encoding).trim() : "",
    );
  // Some programs part the headings by another sign than the numbers.
  for (const delimiter of [block.delimiter, "\t", ";", ","] as const) {
    let count = splitCells(bytes, from, to, delimiter, row.starts, row.ends);
    while (count > columns && row.ends[count - 1] === row.starts[count - 1]) count -= 1;
    if (count === columns || (count === columns - 1 && count > 1 && delimiter === block.delimiter)) {
      const texts = textsOf(count);
      if (areHeadings(texts, columns === 1 && !marked)) return texts;
    }
  }
  const text = sliceText(bytes, from, Math.min(to, from + mostLineBytes), encoding).trim();
  for (const words of [text.split(/[ \t]{2,}/), splitWords(text)]) {
    if (words.length === columns && areHeadings(words, columns === 1)) return words;
  }
  return null;
}

/** Words parted by blanks, a bracketed unit kept with its word: `Wavelength (nm) Intensity (counts)`. */
function splitWords(text: string): string[] {
  const cells: string[] = [];
  let open = false;
  for (const word of text.split(/[ \t]+/)) {
    if (word === "") continue;
    if (cells.length > 0 && (open || /^[([]/.test(word))) cells[cells.length - 1] += ` ${word}`;
    else cells.push(word);
    const opened = Math.max(word.lastIndexOf("("), word.lastIndexOf("["));
    const closed = Math.max(word.lastIndexOf(")"), word.lastIndexOf("]"));
    if (opened > closed) open = true;
    else if (closed >= 0) open = false;
  }
  return cells;
}

/** A number, alone or with a short unit: a value, no heading. */
const valueLike =
  /^[-+]?\d+(?:[.,]\d+)*(?:[eE][-+]?\d+)?\s*(?:[mu\u00b5n]?s|[mu\u00b5]?m|nm|ms|°?[CFK]|[mk]?V|counts?|px|x|%|bits?|[kM]?Hz)?$/;

function areHeadings(texts: readonly string[], alone: boolean): boolean {
  if (!texts.some((text) => /\p{L}/u.test(text))) return false;
  if (texts.some((text) => /[:=]$/.test(text) || valueLike.test(text))) return false;
  // One cell may be any sentence: a heading is short and no `key: value`.
  return !alone || (texts[0]!.length <= 40 && !/[:=]/.test(texts[0]!));
}

const countUnits =
  /^(?:counts?|cts|a\.?\s?u\.?|arb\.?(?:itrary)? units?|adu|dn|v|mv|volts?|%|rel\.? units?|w|uw|\u00b5w|mw|1|-|abs|counts?\/s|s|ms)$/i;

/** Every cell is a unit, bracketed or not, or empty. */
function isUnitsRow(cells: readonly string[]): boolean {
  return cells.every((cell) => {
    if (cell === "" || /^[([{].*[)\]}]$/.test(cell)) return true;
    return (
      cell.length <= 12 && (countUnits.test(cell) || cell === "A" || (unitIn(cell) !== null && !unitWords.test(cell)))
    );
  });
}

/** Words that are a heading by themselves, whatever stands above. */
const unitWords = /wave|raman|energy|pixel|index|channel|drive|dial|motor/i;

function namesAxis(title: string): boolean {
  return readHeading(title).role === "axis" || /position|abscissa|axis|shift|energy/i.test(title);
}

function joinTitle(title: string, unit: string): string {
  if (unit === "" || title === "") return title === "" ? unit : title;
  return /^[([{]/.test(unit) ? `${title} ${unit}` : `${title} (${unit})`;
}
