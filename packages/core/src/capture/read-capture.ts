/**
 * A capture's bytes to one spectrum: text, header, columns, axis. Nothing here throws or waits on any input; what can't be read is
 * refused with a sentence, and what was guessed is said in `facts.remarks`. Where two readings fit alike, the refusal carries both.
 */
import type { PossibleReading, ReadCapture, ReadOptions, Refusal } from "../analysis/types.ts";
import { chooseColumns, columnName } from "./choose-columns.ts";
import { fittingJoins, mostPieces, partByCommaAndBlank, type PieceTable } from "./comma-twice.ts";
import { offeredReadings, settleDecimalSign, type SignReading } from "./decimal-sign.ts";
import { decodeBytes, textToBytes, type TextEncoding } from "./decode.ts";
import { findDataBlock, type DataBlock } from "./find-data-block.ts";
import { finishCapture } from "./finish-capture.ts";
import { isJcamp, readJcamp } from "./jcamp.ts";
import { indexLines, isBlankLine, type LineIndex } from "./line-index.ts";
import { addMetadata, isMetadataFull, lineText, readHeader, type Header } from "./read-header.ts";
import { findTables, readRows, sortUnread, type Rows, type TableSpan } from "./read-rows.ts";
import { refuse } from "./refusal.ts";
import { isMissingCell, makeRowReader, scanNumber, splitCells, splitRow } from "./scan-row.ts";

const sampledRows = 400;
/** Share of unread lines above which the layout is decided anew, from every line. */
const mostUnreadShare = 0.05;
/** Damaged lines per good one above which a file is refused: it was understood wrongly, or it is no capture. */
const mostDamagedShare = 0.3;

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
  if (isJcamp(bytes)) return readJcamp({ bytes, encoding, lines, name, options });
  // `400,5, 1234,5`: with its blank the comma parts the columns, without it is the decimal sign.
  const mayBeCommas = options.delimiter === undefined || options.delimiter === ",";
  const parted = mayBeCommas && options.cellsPerColumn === undefined ? partByCommaAndBlank(bytes, lines) : null;
  const block = findDataBlock(parted ?? bytes, lines, parted === null ? options : { ...options, delimiter: ";" });
  if (block === null) return refuseWithoutNumbers(bytes, lines);
  const file: TextFile = { bytes: parted ?? bytes, original: bytes, encoding, lines, name, options };
  const read = readTable(file, block);
  if ("outcome" in read) return read;
  const tables = findTables(read.rows);
  const table = chooseTable(tables, read.rows, options, read.remarks);
  if ("outcome" in table) return table;
  if (table.from === 0) return finishTable(file, read, table, tables.length);
  // A later table has headings of its own, which may say another thing of its columns.
  const later = readWithBlock(file, { ...block, firstLine: read.rows.lineNumbers[table.from]! - 1 });
  if ("outcome" in later) return later;
  later.remarks.push(...read.remarks);
  return finishTable(file, later, findTables(later.rows)[0]!, tables.length);
}

interface TextFile {
  /** As it is read: delimiters may have been made plain. */
  bytes: Uint8Array;
  original: Uint8Array;
  encoding: TextEncoding;
  lines: LineIndex;
  name: string;
  options: ReadOptions;
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

function refuseWithoutNumbers(bytes: Uint8Array, lines: LineIndex): Refusal {
  let separated = false;
  for (let line = 0; line < Math.min(lines.count, 200) && !separated; line += 1) {
    for (let i = lines.starts[line]!; i < lines.ends[line]! && !separated; i += 1) {
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

interface ReadTable extends SignReading {
  header: Header;
  remarks: string[];
}

/** Dialect, columns and rows; the layout is decided again from every line where many rows can't be read. */
function readTable(file: TextFile, found: DataBlock): ReadTable | Refusal {
  const first = readWithBlock(file, found);
  if ("outcome" in first) return first;
  const { rows } = first;
  if (rows.unreadCount <= mostUnreadShare * rows.counts.length || file.bytes !== file.original) return first;
  const again = findDataBlock(file.bytes, file.lines, file.options, true);
  if (again === null) return first;
  const second = readWithBlock(file, again);
  return "outcome" in second || second.rows.counts.length <= rows.counts.length ? first : second;
}

function readWithBlock(file: TextFile, found: DataBlock): ReadTable | Refusal {
  const { bytes, encoding, lines, options } = file;
  const joined = joinCommas(file, found);
  if ("outcome" in joined) return joined;
  const { block } = joined;
  const header = readHeader(bytes, encoding, lines, block, Math.min(options.skipLines ?? 0, block.firstLine));
  const readAs = (as: DataBlock): SignReading | Refusal => {
    const chosen = chooseColumns(header.headings, sampleColumns(bytes, lines, as), header.metadata, options);
    if ("problem" in chosen) return refuse("no-such-column", `${chosen.problem} Choose the columns again.`);
    return { block: as, chosen, rows: readRows(bytes, lines, as, chosen.axisColumn, chosen.intensityColumn) };
  };
  const here = readAs(block);
  if ("outcome" in here) return here;
  const remarks = joined.remark === null ? [] : [joined.remark];
  const plain = { ...here, header, remarks };
  const mayDiffer = options.decimal === undefined && options.thousands === undefined && block.joins === null;
  const brokenRows = here.rows.unread.some(({ isText }) => !isText);
  if (!block.decimalIsOpen && !(mayDiffer && brokenRows)) return plain;
  const there = readAs({ ...block, decimal: block.decimal === "." ? "," : "." });
  if ("outcome" in there) return plain;
  if (!block.decimalIsOpen) {
    const better = there.rows.unreadCount < here.rows.unreadCount && there.rows.counts.length > here.rows.counts.length;
    return better ? { ...there, header, remarks } : plain;
  }
  const settled = settleDecimalSign([here, there], bytes, lines, header.metadata);
  if (settled === null) {
    return {
      ...refuse(
        "ambiguous-number-format",
        "The numbers can be read in two ways: a mark before three digits may be a decimal sign or group thousands. Say which sign is the decimal one.",
        block.firstLine + 1,
      ),
      readings: offeredReadings([here, there], options),
    };
  }
  if (settled.remark !== null) remarks.push(settled.remark);
  return { ...settled.reading, header, remarks };
}

/** Where commas part the columns and nothing but whole numbers stands between them, the comma may be the decimal sign as well. */
function joinCommas(file: TextFile, block: DataBlock): { block: DataBlock; remark: string | null } | Refusal {
  const { bytes, encoding, lines, options } = file;
  const keep = { block, remark: null };
  const { columns } = block;
  if (block.delimiter !== "," || block.joins !== null || block.wordColumns !== null) return keep;
  if (columns < 3 || columns > mostPieces || (options.decimal === "." && options.delimiter === ",")) return keep;
  const table = piecesOf(bytes, lines, block);
  if (table === null || table.rows < 3) return keep;
  const headingCount = countHeadings(file, block);
  const ways = fittingJoins(table, headingCount).filter(
    (way) => options.decimal === undefined || way.length < columns === (options.decimal === ","),
  );
  const [way] = ways;
  const as = (joins: readonly number[]): DataBlock => ({
    ...block,
    decimal: ",",
    columns: joins.length,
    joins,
    decimalIsOpen: false,
  });
  if (ways.length > 1) {
    const offered = ways.map((joins): PossibleReading => {
      const isPlain = joins.length === columns;
      const shown = isPlain ? block : as(joins);
      const header = readHeader(bytes, encoding, lines, shown);
      const firstRow = sampleColumns(bytes, lines, shown, 1).map((values) => values[0] ?? NaN);
      const names = joins.map((_, column) => columnName(header.headings, column)).join(", ");
      return {
        options: isPlain ? { ...options, delimiter: ",", decimal: "." } : { ...options, cellsPerColumn: [...joins] },
        description: isPlain
          ? `Commas only part the columns: ${columns} columns (${names}), the first row is ${firstRow.join(" and ")}.`
          : `Commas part the columns and are the decimal sign too: ${joins.length} columns (${names}), the first row is ${firstRow.join(" and ")}.`,
        firstRow,
      };
    });
    return {
      ...refuse(
        "ambiguous-number-format",
        "The comma may part the columns, or be the decimal sign as well; the numbers fit more than one way. Say which, or export with another separator (semicolon or tab).",
        block.firstLine + 1,
      ),
      readings: offered,
    };
  }
  if (way === undefined) {
    if (!looksLikeSplitDecimals(table)) return keep;
    return refuse(
      "ambiguous-number-format",
      "The comma seems to be both the decimal sign and what parts the columns. Export with another separator (semicolon or tab) or with decimal points.",
      block.firstLine + 1,
    );
  }
  if (way.length === columns) return keep;
  return {
    block: as(way),
    remark: "The comma parts the columns and is the decimal sign as well; the numbers were put together so.",
  };
}

/** Number of headings, parted by commas, in the line above the data; null where there are none. */
function countHeadings(file: TextFile, block: DataBlock): number | null {
  const { bytes, encoding, lines } = file;
  for (let columns = block.columns; columns >= 2; columns -= 1) {
    const { headings } = readHeader(bytes, encoding, lines, { ...block, columns });
    const named = headings.filter((heading) => heading !== "").length;
    if (named === columns) return columns;
  }
  return null;
}

/** Bounds of all pieces of all rows; null when one holds a point, a quote or anything but a whole number. */
function piecesOf(bytes: Uint8Array, lines: LineIndex, block: DataBlock): PieceTable | null {
  const pieces = block.columns;
  const starts = new Int32Array((lines.count - block.firstLine) * pieces);
  const ends = new Int32Array(starts.length);
  const row = makeRowReader();
  let rows = 0;
  for (let line = block.firstLine; line < lines.count; line += 1) {
    const from = lines.starts[line]!;
    const to = lines.ends[line]!;
    if (splitCells(bytes, from, to, ",", row.starts, row.ends) !== pieces) continue;
    let isRow = true;
    for (let p = 0; p < pieces; p += 1) {
      const start = row.starts[p]!;
      const end = row.ends[p]!;
      if (bytes[start - 1] === 34) return null;
      let digits = 0;
      for (let i = start; i < end; i += 1) {
        const byte = bytes[i]!;
        if (byte >= 48 && byte <= 57) digits += 1;
        else if (byte === 46) return null;
        else if (i > start || (byte !== 45 && byte !== 43)) isRow = false;
      }
      if (digits === 0) isRow = false;
      starts[rows * pieces + p] = start;
      ends[rows * pieces + p] = end;
    }
    if (isRow) rows += 1;
  }
  return { bytes, starts, ends, rows, pieces };
}

/** `200,00,1234,56`: an even number of pieces, the first standing still while the second counts. */
function looksLikeSplitDecimals({ bytes, starts, ends, rows, pieces }: PieceTable): boolean {
  if (pieces !== 4) return false;
  for (let r = 1; r < rows; r += 1) {
    const [before, here] = [r - 1, r].map((one) =>
      scanNumber(bytes, starts[one * pieces]!, ends[one * pieces]!, ".", "none"),
    );
    if (before === here) return true;
  }
  return false;
}

/** Numbers of the first rows, and of the last: the range of the axis tells its unit. */
function sampleColumns(bytes: Uint8Array, lines: LineIndex, block: DataBlock, most = sampledRows): number[][] {
  const sample: number[][] = Array.from({ length: block.columns }, () => []);
  const row = makeRowReader();
  const take = (line: number): boolean => {
    const cells = splitRow(bytes, lines.starts[line]!, lines.ends[line]!, block, row);
    if (cells < block.columns) return false;
    let numbers = 0;
    for (let c = 0; c < block.columns; c += 1) {
      const value = scanNumber(bytes, row.starts[c]!, row.ends[c]!, block.decimal, block.thousands);
      if (value === value) numbers += 1;
      else if (block.wordColumns?.[c] !== 1 && !isMissingCell(bytes, row.starts[c]!, row.ends[c]!)) return false;
    }
    if (numbers === 0) return false;
    for (let c = 0; c < block.columns; c += 1)
      sample[c]!.push(scanNumber(bytes, row.starts[c]!, row.ends[c]!, block.decimal, block.thousands));
    return true;
  };
  let line = block.firstLine;
  for (let taken = 0; line < lines.count && taken < most; line += 1) if (take(line)) taken += 1;
  if (most < sampledRows) return sample;
  for (let last = lines.count - 1; last >= line; last -= 1) if (take(last)) break;
  return sample;
}

function finishTable(file: TextFile, read: ReadTable, table: TableSpan, tableCount: number): ReadCapture {
  const { bytes, encoding, lines, name, options } = file;
  const { block, chosen, rows, header } = read;
  const remarks = [...read.remarks, ...chosen.remarks];
  const other = sortUnread(bytes, encoding, lines, block, rows, table, header.headingLine);
  for (const line of other.metadataLines) {
    if (isMetadataFull(header.metadata)) break;
    addMetadata(header.metadata, lineText(bytes, encoding, lines, line), block.delimiter);
  }
  if (other.headerLines.length > 0) {
    const from = other.headerLines[0]! + 1;
    remarks.push(`A second header stands in the middle of the data (line ${from}); its lines were passed over.`);
  }
  const counts = rows.counts.subarray(table.from, table.to);
  const axis = rows.axis === null ? null : rows.axis.subarray(table.from, table.to);
  const oneColumn = chosen.axisColumn === null && block.columns === 1;
  if (oneColumn) {
    if (counts.length > 2 && onlyRisesOrFalls(counts)) {
      return refuse(
        "no-such-column",
        "The file holds one column whose numbers only rise or fall: an axis without intensities. Export both columns.",
      );
    }
    remarks.push("The file holds one column of numbers; they were read as intensities, one a pixel, counted from 0.");
  }
  if (other.damagedCount > mostDamagedShare * counts.length) {
    const { line, reason } = other.damaged[0]!;
    const commas =
      block.delimiter === ","
        ? " Is the comma also the decimal sign? Export with decimal points, or with semicolons."
        : "";
    return refuse(
      "damaged-data",
      `${other.damagedCount} lines could not be read beside ${counts.length} that could; the first, line ${line}, ${reason}. So much was not left out.${commas}`,
      line,
    );
  }
  if (other.damagedCount > 0) {
    const named = other.damaged.slice(0, 5).map(({ line, reason }) => `line ${line} ${reason}`);
    const more = other.damagedCount > 5 ? `, and ${other.damagedCount - 5} more` : "";
    const one = other.damagedCount === 1;
    remarks.push(
      `${other.damagedCount} line${one ? "" : "s"} could not be read and ${one ? "was" : "were"} left out: ${named.join(", ")}${more}.`,
    );
  }
  const missing = table.to === rows.counts.length ? rows.missing : countMissing(counts);
  return finishCapture({
    name,
    axis,
    counts,
    chosen,
    options,
    metadata: header.metadata,
    remarks,
    lineOf: (row) => rows.lineNumbers[table.from + row]!,
    facts: {
      missing,
      delimiter: bytes === file.original ? block.delimiter : ",",
      decimal: block.decimal,
      encoding,
      headerLines: block.firstLine,
      columns: header.headings.map((_, column) => columnName(header.headings, column)),
      damagedLines: other.damaged,
      ...(tableCount > 1 ? { tables: tableCount } : {}),
    },
  });
}

/** The table asked for, else the longest, the first among equals. */
function chooseTable(
  tables: readonly TableSpan[],
  rows: Rows,
  options: ReadOptions,
  remarks: string[],
): TableSpan | Refusal {
  const lengthOf = ({ from, to }: TableSpan): number => to - from;
  let best = 0;
  tables.forEach((table, index) => {
    if (lengthOf(table) > lengthOf(tables[best]!)) best = index;
  });
  const wanted = options.table ?? best;
  const table = tables[wanted];
  if (table === undefined) {
    return refuse(
      "no-such-column",
      `The file holds ${tables.length} table${tables.length === 1 ? "" : "s"}; table ${wanted + 1} was asked for. Choose again.`,
    );
  }
  if (tables.length > 1) {
    const line = rows.lineNumbers[table.from]!;
    remarks.push(
      `The file holds ${tables.length} tables below one another; the one from line ${line}${options.table === undefined ? ", the longest," : ""} was read.`,
    );
  }
  return table;
}

function countMissing(counts: Float64Array): number {
  let missing = 0;
  for (let i = 0; i < counts.length; i += 1) if (counts[i] !== counts[i]) missing += 1;
  return missing;
}

function onlyRisesOrFalls(values: ArrayLike<number>): boolean {
  const direction = Math.sign(values[1]! - values[0]!);
  if (direction === 0) return false;
  for (let i = 1; i < values.length; i += 1) if (Math.sign(values[i]! - values[i - 1]!) !== direction) return false;
  return true;
}
