/** A table of past results, one row a line of a check, to checks. */
import { parse } from "csv-parse/sync";
import type { DriftCheck } from "@wavekeep/core";
import { readDate, type DateOrder, type DateReading } from "./dates.ts";
import { converterOf, fieldOf, fields, plainHeading, type Column, type Field } from "./headings.ts";
import { hasDecimalComma, isEmptyCell, readNumber } from "./numbers.ts";
import type { CommandOptions } from "./options.ts";

export interface WrongRow {
  /** 1-based line of the file. */
  line: number;
  reason: string;
}

export type ReadResults =
  | {
      outcome: "read";
      checks: DriftCheck[];
      columns: Partial<Record<Field, string>>;
      wrongRows: WrongRow[];
      remarks: string[];
    }
  | { outcome: "refused"; reason: string; wrongRows: WrongRow[] };

interface Row {
  line: number;
  cells: string[];
}

interface Result {
  line: number;
  day: number;
  temperatureC: number | null;
  source: string | null;
  wavelengthNm: number;
  errorNm: number;
  uncNm: number;
}

/** Lines that may stand above the headings. */
const mostTitleLines = 40;
/** Stands for an uncertainty that no column gives: equal weights. */
const equalUncNm = 1e-4;

export function readResults(bytes: Uint8Array, options: CommandOptions): ReadResults {
  const refuse = (reason: string, wrongRows: WrongRow[] = []): ReadResults => ({
    outcome: "refused",
    reason,
    wrongRows,
  });
  const text = decode(bytes);
  if (text === null)
    return refuse("The file is not text: numbers in columns are needed, as a table program saves them to CSV.");
  if (text.trim() === "") return refuse("The file is empty.");
  const table = findTable(text, options.columns);
  if ("problem" in table) return refuse(table.problem);
  const { columns, rows } = table;
  const remarks: string[] = [];
  if (columns.uncNm === undefined && columns.expandedUncNm === undefined)
    remarks.push("No column gives uncertainties: all lines weigh the same.");
  if (columns.expandedUncNm !== undefined && columns.uncNm === undefined)
    remarks.push(`"${columns.expandedUncNm.heading}" is read as expanded uncertainty with k = 2.`);
  if (columns.measuredNm === undefined)
    remarks.push(`"${columns.errorNm!.heading}" is read as indicated minus reference.`);

  const kept = ofOneInstrument(rows, columns, options.instrument);
  if ("problem" in kept) return refuse(kept.problem);
  const wrongRows: WrongRow[] = [];
  const readings = kept.rows.map((row) => readDate(row.cells[columns.date!.index] ?? ""));
  const order = dateOrderOf(readings, options.dateOrder);
  if ("problem" in order) return refuse(order.problem);
  if (order.remark !== null) remarks.push(order.remark);

  const numeric = [
    columns.lineNm,
    columns.measuredNm,
    columns.errorNm,
    columns.uncNm,
    columns.expandedUncNm,
    columns.temperatureC,
  ];
  const used = numeric.filter((column) => column !== undefined);
  const comma = hasDecimalComma(kept.rows.flatMap((row) => used.map((column) => row.cells[column.index] ?? "")));
  const results: Result[] = [];
  kept.rows.forEach((row, i) => {
    const result = readRow(row, readings[i]!, order.order, columns, comma);
    if (typeof result === "string") wrongRows.push({ line: row.line, reason: result });
    else results.push(result);
  });
  if (results.length === 0) return refuse("No row of the table could be read.", wrongRows.slice(0, 20));
  if (wrongRows.length > results.length) {
    const reason = `More rows are wrong (${wrongRows.length}) than could be read (${results.length}); the first: line ${wrongRows[0]!.line}, ${wrongRows[0]!.reason}`;
    return refuse(reason, wrongRows.slice(0, 20));
  }
  const headings: Partial<Record<Field, string>> = {};
  for (const field of fields) if (columns[field] !== undefined) headings[field] = columns[field].heading;
  return { outcome: "read", checks: checksOf(results), columns: headings, wrongRows, remarks };
}

/** UTF-8 and UTF-16 by their marks, UTF-8 where it is valid, else Latin-1; null for what is no text. */
function decode(bytes: Uint8Array): string | null {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return new TextDecoder("utf-16le").decode(bytes);
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return new TextDecoder("utf-16be").decode(bytes);
  if (bytes.subarray(0, 4096).includes(0)) return null;
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    return new TextDecoder("windows-1252").decode(bytes);
  }
}

type Columns = Partial<Record<Field, Column>>;

/** The delimiter under which a row of headings is recognised best. */
function findTable(
  text: string,
  given: CommandOptions["columns"],
): { columns: Columns; rows: Row[] } | { problem: string } {
  let best: { columns: Columns; rows: Row[]; found: number } | null = null;
  let headings: string[] = [];
  for (const delimiter of [";", "\t", ",", "|"]) {
    const rows = rowsOf(text, delimiter);
    for (let i = 0; i < Math.min(rows.length, mostTitleLines); i++) {
      const columns = columnsOf(rows[i]!.cells, given);
      const found = Object.keys(columns).length;
      if (rows[i]!.cells.length > headings.length) headings = rows[i]!.cells;
      if (found > (best?.found ?? 1)) best = { columns, rows: rows.slice(i + 1), found };
    }
  }
  const missing = missingFields(best?.columns ?? {});
  if (best !== null && missing.length === 0) return { columns: best.columns, rows: best.rows };
  const seen = headings.slice(0, 12).map((heading) => `"${heading.trim()}"`);
  return {
    problem: `No heading says where to find ${missing.join(", ")}. Headings seen: ${seen.join(", ")}. Name them, for example --columns date=${headings[0]?.trim() ?? "Datum"},lineNm=….`,
  };
}

function missingFields(columns: Columns): string[] {
  const missing: string[] = [];
  if (columns.date === undefined) missing.push("date");
  if (columns.lineNm === undefined) missing.push("lineNm");
  if (columns.measuredNm === undefined && columns.errorNm === undefined) missing.push("measuredNm (or errorNm)");
  return missing;
}

function rowsOf(text: string, delimiter: string): Row[] {
  let records: { record: string[]; info: { lines: number } }[];
  try {
    records = parse(text, {
      delimiter,
      bom: true,
      info: true,
      relax_column_count: true,
      relax_quotes: true,
      skip_empty_lines: true,
      comment: "#",
      comment_no_infix: true,
    }) as unknown as typeof records;
  } catch {
    return [];
  }
  return records.map(({ record, info }) => ({ line: info.lines, cells: record }));
}

function columnsOf(cells: readonly string[], given: CommandOptions["columns"]): Columns {
  const columns: Columns = {};
  for (const field of fields) {
    const wanted = given[field];
    if (wanted === undefined) continue;
    const index = cells.findIndex((cell) => cell.trim().toLowerCase() === wanted.toLowerCase());
    const loosely = index >= 0 ? index : cells.findIndex((cell) => plainHeading(cell) === plainHeading(wanted));
    if (loosely >= 0)
      columns[field] = {
        index: loosely,
        heading: cells[loosely]!.trim(),
        convert: converterOf(field, cells[loosely]!),
      };
  }
  const taken = new Set(Object.values(columns).map((column) => column.index));
  cells.forEach((cell, index) => {
    if (taken.has(index)) return;
    const field = fieldOf(cell);
    if (field === null) return;
    if (columns[field] === undefined)
      columns[field] = { index, heading: cell.trim(), convert: converterOf(field, cell) };
    // "Line" and "reference" both: the second is the lamp.
    else if (field === "lineNm" && columns.source === undefined && /^ref/i.test(cell.trim()))
      columns.source = { index, heading: cell.trim(), convert: converterOf("source", cell) };
  });
  return columns;
}

function ofOneInstrument(rows: Row[], columns: Columns, wanted: string | null): { rows: Row[] } | { problem: string } {
  if (columns.instrument === undefined) return { rows };
  const at = columns.instrument.index;
  const names = [...new Set(rows.map((row) => (row.cells[at] ?? "").trim()).filter((name) => name !== ""))];
  if (wanted !== null) {
    const kept = rows.filter((row) => (row.cells[at] ?? "").trim().toLowerCase() === wanted.toLowerCase());
    return kept.length > 0
      ? { rows: kept }
      : { problem: `The table holds no instrument "${wanted}"; it holds ${names.slice(0, 12).join(", ")}.` };
  }
  if (names.length <= 1) return { rows };
  return {
    problem: `The table holds ${names.length} instruments (${names.slice(0, 12).join(", ")}); say which one: --instrument NAME.`,
  };
}

function dateOrderOf(
  readings: readonly DateReading[],
  told: DateOrder | null,
): { order: DateOrder; remark: string | null } | { problem: string } {
  if (told !== null) return { order: told, remark: null };
  const open = readings.filter((reading) => reading !== null && "dmy" in reading) as {
    dmy: number | null;
    mdy: number | null;
  }[];
  if (open.length === 0) return { order: "dmy", remark: null };
  const dmy = open.every((reading) => reading.dmy !== null);
  const mdy = open.every((reading) => reading.mdy !== null);
  if (dmy && mdy) {
    return {
      problem:
        "Dates such as 03/04/2024 can be read day first or month first, and no row tells which. Say --dates dmy or --dates mdy.",
    };
  }
  if (!dmy && !mdy)
    return {
      problem:
        "Some dates can only have the day first, others only the month first. Write all in one way, best as 2024-04-03.",
    };
  const order = dmy ? "dmy" : "mdy";
  return { order, remark: `Dates are read ${dmy ? "day" : "month"} first: other rows allow nothing else.` };
}

/** @returns a sentence where the row is wrong */
function readRow(row: Row, reading: DateReading, order: DateOrder, columns: Columns, comma: boolean): Result | string {
  const cell = (field: Field): string =>
    columns[field] === undefined ? "" : (row.cells[columns[field].index] ?? "").trim();
  const number = (field: Field): number => {
    const text = cell(field);
    return isEmptyCell(text) ? NaN : columns[field]!.convert(readNumber(text, comma));
  };
  const day = reading === null ? null : "day" in reading ? reading.day : reading[order];
  if (day === null) return `"${cell("date")}" is no date.`;
  const wavelengthNm = number("lineNm");
  if (!(wavelengthNm > 10 && wavelengthNm < 100000)) return `lineNm "${cell("lineNm")}" is no wavelength in nm.`;
  let errorNm = NaN;
  if (columns.measuredNm !== undefined) errorNm = number("measuredNm") - wavelengthNm;
  if (errorNm !== errorNm && columns.errorNm !== undefined) errorNm = number("errorNm");
  if (!(Math.abs(errorNm) < 1000)) {
    const field = columns.measuredNm === undefined ? "errorNm" : "measuredNm";
    return `${field} "${cell(field)}" is no result for ${wavelengthNm} nm.`;
  }
  let uncNm = equalUncNm;
  const uncField = columns.uncNm !== undefined ? "uncNm" : columns.expandedUncNm !== undefined ? "expandedUncNm" : null;
  if (uncField !== null) {
    uncNm = number(uncField) / (uncField === "uncNm" ? 1 : 2);
    if (!(uncNm > 0 && uncNm < 1000)) return `${uncField} "${cell(uncField)}" is no uncertainty above 0.`;
  }
  const temperatureC = number("temperatureC" in columns ? "temperatureC" : "lineNm");
  return {
    line: row.line,
    day,
    temperatureC: columns.temperatureC === undefined || temperatureC !== temperatureC ? null : temperatureC,
    source: cell("source") === "" ? null : cell("source"),
    wavelengthNm,
    errorNm,
    uncNm,
  };
}

/**
 * Rows of one date and source are one check, or as many as a line is repeated. Where most dates carry the same two or more sources, they belong
 * to one check.
 */
function checksOf(results: readonly Result[]): DriftCheck[] {
  const together = sourcesTogether(results);
  const groups = new Map<string, Result[][]>();
  for (const result of results) {
    const key = `${result.day} ${together ? "" : (result.source ?? "")}`;
    const group = groups.get(key) ?? [];
    groups.set(key, group);
    const free = group.find((check) => !check.some((one) => Math.abs(one.wavelengthNm - result.wavelengthNm) < 1e-6));
    if (free === undefined) group.push([result]);
    else free.push(result);
  }
  return [...groups.values()].flat().map((rows): DriftCheck => {
    const temperatures = rows.map((row) => row.temperatureC).filter((value) => value !== null);
    const sources = [...new Set(rows.map((row) => row.source).filter((value) => value !== null))];
    return {
      day: rows[0]!.day,
      temperatureC: temperatures.length === 0 ? null : temperatures.reduce((a, b) => a + b, 0) / temperatures.length,
      source: sources.length === 0 ? null : sources.join(" + "),
      lines: rows.map(({ wavelengthNm, errorNm, uncNm }) => ({ wavelengthNm, errorNm, ownUncNm: uncNm })),
    };
  });
}

function sourcesTogether(results: readonly Result[]): boolean {
  const perDay = new Map<number, Set<string>>();
  for (const { day, source } of results) perDay.set(day, (perDay.get(day) ?? new Set()).add(source ?? ""));
  const several = [...perDay.values()].filter((sources) => sources.size > 1).length;
  return several > perDay.size / 2;
}
