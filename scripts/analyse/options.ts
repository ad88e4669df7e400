/** The command line's words to what the core is told. */
import fs from "node:fs";
import { parseArgs } from "node:util";
import {
  builtInLineList,
  elementsOf,
  type AxisUnit,
  type BandCertificate,
  type DecisionRule,
  type ReadOptions,
} from "@wavekeep/core";
import { readCertificate } from "./read-certificate.ts";
import { usage, UsageError } from "./usage.ts";

export interface CommandOptions {
  files: string[];
  elements: string[];
  range: { firstNm: number; lastNm: number } | null;
  priorCoefficients: number[] | null;
  /** Axis, full scale, summed scans, channel, decimal sign and direction, where they were given. */
  reading: ReadOptions;
  /** Not null: the bands of an absorption standard are measured. */
  absorption: { certificate: BandCertificate | null; bandwidthNm: number | null } | null;
  tolerance: number | null;
  rule: DecisionRule;
  readOnly: boolean;
  json: boolean;
}

const axisWords: Record<string, AxisUnit> = { pixel: "px", nm: "nm", "cm-1": "cm-1", step: "step" };

export function readOptions(argv: string[]): CommandOptions {
  const { values, positionals } = parse(argv);
  if (positionals.length === 0) throw new UsageError(`Name at least one file.\n${usage}`);
  const isOneOf = (name: string, value: string | undefined, words: readonly string[]): void => {
    if (value === undefined || words.includes(value)) return;
    throw new UsageError(
      `--${name} is ${words.slice(0, -1).join(", ")} or ${words[words.length - 1]!}; got "${value}".`,
    );
  };
  isOneOf("axis", values.axis, Object.keys(axisWords));
  isOneOf("rule", values.rule, ["simple", "guarded"]);
  isOneOf("kind", values.kind, ["emission", "absorption"]);
  isOneOf("decimal", values.decimal, [".", ","]);
  isOneOf("inverted", values.inverted, ["yes", "no"]);
  const isAbsorption = values.kind === "absorption";
  if (!isAbsorption && (values.bands !== undefined || values.bandwidth !== undefined)) {
    throw new UsageError("--bands and --bandwidth belong to --kind absorption.");
  }
  return {
    files: positionals,
    elements: readLamp(values.lamp),
    range: readRange(values.range),
    priorCoefficients: values.prior === undefined ? null : readPrior(values.prior),
    reading: readingOf(values),
    absorption: isAbsorption
      ? {
          certificate: values.bands === undefined ? null : readCertificate(values.bands),
          bandwidthNm: readPositive("--bandwidth", values.bandwidth),
        }
      : null,
    tolerance: readPositive("--tolerance", values.tolerance),
    rule: values.rule === "simple" ? { kind: "simple" } : { kind: "guarded", r: 1 },
    readOnly: values["read-only"] === true,
    json: values.json === true,
  };
}

type Words = ReturnType<typeof parse>["values"];

function readingOf(values: Words): ReadOptions {
  const fullScaleCounts = readPositive("--full-scale", values["full-scale"]);
  const scansSummed = readPositive("--scans", values.scans);
  if (scansSummed !== null && scansSummed !== Math.round(scansSummed)) {
    throw new UsageError(`--scans is the whole number of scans summed; got "${values.scans!}".`);
  }
  return {
    ...(values.axis === undefined ? {} : { axisUnit: axisWords[values.axis]! }),
    ...(fullScaleCounts === null ? {} : { fullScaleCounts }),
    ...(scansSummed === null ? {} : { scansSummed }),
    ...(values.channel === undefined ? {} : { intensityName: values.channel }),
    ...(values.decimal === undefined ? {} : { decimal: values.decimal as "." | "," }),
    ...(values.inverted === undefined ? {} : { inverted: values.inverted === "yes" }),
  };
}

function parse(argv: string[]) {
  try {
    return parseArgs({
      args: argv,
      allowPositionals: true,
      options: {
        lamp: { type: "string" },
        range: { type: "string" },
        prior: { type: "string" },
        axis: { type: "string" },
        "full-scale": { type: "string" },
        scans: { type: "string" },
        channel: { type: "string" },
        decimal: { type: "string" },
        inverted: { type: "string" },
        kind: { type: "string" },
        bands: { type: "string" },
        bandwidth: { type: "string" },
        tolerance: { type: "string" },
        rule: { type: "string" },
        "read-only": { type: "boolean" },
        json: { type: "boolean" },
      },
    });
  } catch (error) {
    throw new UsageError(`${(error as Error).message}\n${usage}`);
  }
}

function readLamp(text: string | undefined): string[] {
  if (text === undefined) return [];
  const known = elementsOf(builtInLineList);
  return text
    .split(",")
    .map((word) => word.trim())
    .filter((word) => word !== "")
    .map((word) => {
      const element = known.find((one) => one.toLowerCase() === word.toLowerCase());
      if (element === undefined)
        throw new UsageError(`--lamp: the line library has no "${word}". It has ${known.join(", ")}.`);
      return element;
    });
}

function readRange(text: string | undefined): CommandOptions["range"] {
  if (text === undefined) return null;
  const parts = text.split(":").map((part) => (part.trim() === "" ? NaN : Number(part)));
  const [firstNm, lastNm] = parts;
  if (parts.length !== 2 || !(firstNm! > 0) || !(lastNm! > 0) || firstNm === lastNm) {
    throw new UsageError(`--range is FIRST:LAST in nm, for example 200:850; got "${text}".`);
  }
  return { firstNm: firstNm!, lastNm: lastNm! };
}

function readPositive(name: string, text: string | undefined): number | null {
  if (text === undefined) return null;
  const value = Number(text);
  if (!(value > 0) || !Number.isFinite(value)) throw new UsageError(`${name} is a number above 0; got "${text}".`);
  return value;
}

function readPrior(file: string): number[] {
  let parsed: unknown;
  try {
    parsed = JSON.parse(fs.readFileSync(file, "utf8"));
  } catch (error) {
    throw new UsageError(`--prior: ${file} could not be read as JSON (${(error as Error).message}).`);
  }
  const coefficients = (parsed as { coefficients?: unknown } | null)?.coefficients;
  const usable =
    Array.isArray(coefficients) &&
    coefficients.length >= 2 &&
    coefficients.every((one) => typeof one === "number" && Number.isFinite(one));
  if (!usable) {
    throw new UsageError(
      `--prior: ${file} must hold {"coefficients":[c0,c1,...]}, nm in ascending powers of the pixel.`,
    );
  }
  return coefficients as number[];
}
