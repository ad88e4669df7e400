/**
 * The blocks of a JCAMP-DX file and their labelled records, line by line: what each data table is about, before it is decoded.
 */
import { sliceText, type TextEncoding } from "./decode.ts";
import type { LineIndex } from "./line-index.ts";

export interface JcampTable {
  /** 1-based line of its label. */
  line: number;
  /** 0-based lines of its data, the last excluded. */
  firstLine: number;
  endLine: number;
  /** (XY..XY): positions and ordinates in pairs; else (X++(Y..Y)). */
  isPairs: boolean;
}

export interface JcampBlock {
  title: string;
  /** 1-based line of its title. */
  line: number;
  dataType: string;
  xUnits: string;
  yUnits: string;
  /** Not a number where the file does not say. */
  firstX: number;
  lastX: number;
  deltaX: number;
  points: number;
  xFactor: number;
  yFactor: number;
  metadata: Record<string, string>;
  tables: JcampTable[];
  hasPeaks: boolean;
  hasNtuples: boolean;
}

const mostBlocks = 1000;
const mostRecords = 200;

function newBlock(title: string, line: number): JcampBlock {
  return {
    title,
    line,
    dataType: "",
    xUnits: "",
    yUnits: "",
    firstX: NaN,
    lastX: NaN,
    deltaX: NaN,
    points: NaN,
    xFactor: 1,
    yFactor: 1,
    metadata: {},
    tables: [],
    hasPeaks: false,
    hasNtuples: false,
  };
}

/** The file's blocks in order, a link block (which only holds others) among them. */
export function readJcampBlocks(bytes: Uint8Array, encoding: TextEncoding, lines: LineIndex): JcampBlock[] {
  const blocks: JcampBlock[] = [];
  const open: JcampBlock[] = [];
  let table: JcampTable | null = null;
  for (let line = 0; line < lines.count; line += 1) {
    const from = lines.starts[line]!;
    const to = lines.ends[line]!;
    if (bytes[from] !== 35 || bytes[from + 1] !== 35) continue;
    if (table !== null) table.endLine = line;
    table = null;
    const record = recordOf(sliceText(bytes, from, Math.min(to, from + 1000), encoding));
    if (record === null) continue;
    if (record.label === "TITLE" || blocks.length === 0) {
      if (blocks.length === mostBlocks) break;
      const block = newBlock(record.label === "TITLE" ? record.value : "", line + 1);
      blocks.push(block);
      open.push(block);
    }
    const block = open[open.length - 1] ?? blocks[blocks.length - 1]!;
    if (record.label === "END") {
      open.pop();
      continue;
    }
    if (record.label === "XYDATA" || record.label === "XYPOINTS") {
      table = {
        line: line + 1,
        firstLine: line + 1,
        endLine: lines.count,
        isPairs:
          /\(XY/i.test(record.value.replaceAll(" ", "")) ||
          (record.label === "XYPOINTS" && !record.value.includes("++")),
      };
      block.tables.push(table);
      continue;
    }
    keepRecord(block, record);
  }
  return blocks;
}

interface JcampRecord {
  /** In capitals, without blanks and signs. */
  label: string;
  key: string;
  value: string;
}

function recordOf(text: string): JcampRecord | null {
  const equals = text.indexOf("=");
  if (equals < 0) return null;
  const key = text.slice(2, equals).trim();
  const label = key.toUpperCase().replace(/[ \-/_]/g, "");
  const comment = text.indexOf("$$");
  const value = text.slice(equals + 1, comment > equals ? comment : text.length).trim();
  return label === "" ? null : { label, key, value };
}

function keepRecord(block: JcampBlock, { label, key, value }: JcampRecord): void {
  const number = value === "" ? NaN : Number(value.split(/[\s,]/)[0]);
  const factor = (now: number): number => (number !== 0 && Number.isFinite(number) ? number : now);
  if (label === "DATATYPE") block.dataType = value;
  else if (label === "XUNITS") block.xUnits = value;
  else if (label === "YUNITS") block.yUnits = value;
  else if (label === "FIRSTX") block.firstX = finite(number);
  else if (label === "LASTX") block.lastX = finite(number);
  else if (label === "DELTAX") block.deltaX = finite(number);
  else if (label === "NPOINTS") block.points = finite(number);
  else if (label === "XFACTOR") block.xFactor = factor(block.xFactor);
  else if (label === "YFACTOR") block.yFactor = factor(block.yFactor);
  else if (label === "NTUPLES") block.hasNtuples = true;
  else if (label === "PEAKTABLE" || label === "PEAKASSIGNMENTS") block.hasPeaks = true;
  if (label === "" || Object.keys(block.metadata).length >= mostRecords) return;
  // defineProperty, because a file may well name a key "__proto__".
  Object.defineProperty(block.metadata, key, { value, enumerable: true, configurable: true, writable: true });
}

function finite(value: number): number {
  return Number.isFinite(value) ? value : NaN;
}
