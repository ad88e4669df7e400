/** The command line's words. */
import { parseArgs } from "node:util";
import { fields, type Field } from "./headings.ts";
import type { DateOrder } from "./dates.ts";

export interface CommandOptions {
  file: string;
  toleranceNm: number | null;
  /** Heading as written in the file for a field. */
  columns: Partial<Record<Field, string>>;
  dateOrder: DateOrder | null;
  instrument: string | null;
  json: boolean;
}

/** A sentence for the person at the terminal. */
export class UsageError extends Error {}

export const usage =
  "npm run -s drift -- RESULTS.csv --tolerance 0.5 [--columns date=Datum,lineNm=Linie] [--dates dmy|mdy] [--instrument NAME] [--json]";

export function readOptions(argv: string[]): CommandOptions {
  const { values, positionals } = parse(argv);
  if (positionals.length !== 1) throw new UsageError(`Name one table of results.\n${usage}`);
  if (values.dates !== undefined && values.dates !== "dmy" && values.dates !== "mdy") {
    throw new UsageError(`--dates is dmy (day first) or mdy (month first); got "${values.dates}".`);
  }
  return {
    file: positionals[0]!,
    toleranceNm: readTolerance(values.tolerance),
    columns: readColumns(values.columns),
    dateOrder: values.dates ?? null,
    instrument: values.instrument ?? null,
    json: values.json === true,
  };
}

function parse(argv: string[]) {
  try {
    return parseArgs({
      args: argv,
      allowPositionals: true,
      options: {
        tolerance: { type: "string" },
        columns: { type: "string" },
        dates: { type: "string" },
        instrument: { type: "string" },
        json: { type: "boolean" },
      },
    });
  } catch (error) {
    throw new UsageError(`${(error as Error).message}\n${usage}`);
  }
}

function readTolerance(text: string | undefined): number | null {
  if (text === undefined) return null;
  const value = Number(text.replace(",", "."));
  if (!(value > 0) || !Number.isFinite(value)) {
    throw new UsageError(`--tolerance is a number of nm above 0; got "${text}".`);
  }
  return value;
}

function readColumns(text: string | undefined): CommandOptions["columns"] {
  const columns: CommandOptions["columns"] = {};
  if (text === undefined) return columns;
  for (const pair of text.split(",")) {
    const at = pair.indexOf("=");
    const field = pair.slice(0, at).trim() as Field;
    const heading = pair.slice(at + 1).trim();
    if (at < 1 || heading === "" || !fields.includes(field)) {
      throw new UsageError(
        `--columns is FIELD=HEADING,…, with the fields ${fields.join(", ")}; "${pair}" is not one of them.`,
      );
    }
    columns[field] = heading;
  }
  return columns;
}
