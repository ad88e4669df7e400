/** The command line's words to what the core is told. */
import fs from "node:fs";
import { parseArgs } from "node:util";
import { builtInLineList, elementsOf, type AxisKind, type DecisionRule } from "@wavekeep/core";

export interface CommandOptions {
  files: string[];
  elements: string[];
  range: { firstNm: number; lastNm: number } | null;
  priorCoefficients: number[] | null;
  axisKind: AxisKind | null;
  fullScaleCounts: number | null;
  scansSummed: number | null;
  channel: string | null;
  tolerance: number | null;
  rule: DecisionRule;
  readOnly: boolean;
  json: boolean;
  /** Asked for, and not what this command does: said for every file, nothing is measured. */
  outOfScope: string | null;
}

/** A sentence for the person at the terminal. */
export class UsageError extends Error {}

export const usage =
  "npm run -s analyse -- FILE... --lamp Hg,Ar [--range 200:850] [--prior COEFFS.json] [--axis pixel|nm|cm-1|step] " +
  "[--full-scale 65535] [--scans 1] [--channel NAME] [--tolerance 0.5] [--rule simple|guarded] [--read-only] [--json]";

const axisWords: Record<string, AxisKind> = { pixel: "pixel", nm: "wavelength", "cm-1": "wavenumber", step: "step" };

export function readOptions(argv: string[]): CommandOptions {
  const { values, positionals } = parse(argv);
  if (positionals.length === 0) throw new UsageError(`Name at least one file.\n${usage}`);
  const axisKind = values.axis === undefined ? null : (axisWords[values.axis] ?? null);
  if (values.axis !== undefined && axisKind === null) {
    throw new UsageError(`--axis is pixel, nm, cm-1 or step; got "${values.axis}".`);
  }
  if (values.rule !== undefined && values.rule !== "simple" && values.rule !== "guarded") {
    throw new UsageError(`--rule is simple or guarded; got "${values.rule}".`);
  }
  if (values.kind !== undefined && values.kind !== "emission" && values.kind !== "absorption") {
    throw new UsageError(`--kind is emission or absorption; got "${values.kind}".`);
  }
  return {
    files: positionals,
    elements: readLamp(values.lamp),
    range: readRange(values.range),
    priorCoefficients: values.prior === undefined ? null : readPrior(values.prior),
    axisKind,
    fullScaleCounts: readPositive("--full-scale", values["full-scale"]),
    scansSummed: readPositive("--scans", values.scans),
    channel: values.channel ?? null,
    tolerance: readPositive("--tolerance", values.tolerance),
    rule: values.rule === "simple" ? { kind: "simple" } : { kind: "guarded", r: 1 },
    readOnly: values["read-only"] === true,
    json: values.json === true,
    outOfScope: outOfScope(values),
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

function outOfScope(values: { kind?: string; bands?: string; bandwidth?: string }): string | null {
  if (values.kind === "absorption" || values.bands !== undefined || values.bandwidth !== undefined) {
    return "This version measures emission lines only: absorption bands (--kind absorption, --bands, --bandwidth) are not judged. Nothing was measured.";
  }
  return null;
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
