/** The words after `npm run -s analyse --`, parsed into what the core is told. */
import fs from "node:fs";
import { parseArgs } from "node:util";
import type { AnalysisSetup, AxisKind, AxisUnit, IdentificationMode, ReadOptions } from "@wavekeep/core";
import { z } from "zod";

/** A sentence for the person at the terminal. */
export class UsageError extends Error {}

export interface AnalyseOptions {
  files: string[];
  readOnly: boolean;
  json: boolean;
  help: boolean;
  /** Column heading (or its number from 1) of the intensities; null: the reader chooses. */
  channel: string | null;
  reading: ReadOptions;
  /** What replaces the core's defaults. `mode` is left to the file where neither a range nor an earlier axis is given. */
  setup: Pick<AnalysisSetup, "elements" | "tolerance" | "decisionRule"> & { mode: IdentificationMode | null };
}

export const usage = `npm run -s analyse -- FILE... [options]

  --lamp Hg,Ar            elements of the lamp, by symbol
  --range 200:850         first and last wavelength of a pixel axis, nm, each good to 5 % of the span
  --prior COEFFS.json     an earlier axis: {"coefficients":[c0,c1,...]}, nm in ascending powers of the pixel
  --axis pixel|nm|cm-1|step   what the first column counts, where the file does not say
  --channel NAME          heading of the intensity column, or its number from 1
  --full-scale 65535      full scale of the detector, counts a scan
  --scans 1               scans summed into each sample
  --tolerance 0.5         largest error allowed, nm; gives a verdict
  --rule simple|guarded   decision rule (default guarded, guard band = U)
  --read-only             stop after reading: how the file is understood
  --json                  one JSON document a file, one a line

Reads emission spectra. Refused files end the command with exit code 1; the other files go on.`;

const axes: Record<string, { axisKind: AxisKind; axisUnit: AxisUnit }> = {
  pixel: { axisKind: "pixel", axisUnit: "px" },
  nm: { axisKind: "wavelength", axisUnit: "nm" },
  "cm-1": { axisKind: "wavenumber", axisUnit: "cm-1" },
  step: { axisKind: "step", axisUnit: "step" },
};

const priorFile = z.object({ coefficients: z.array(z.number()).min(2).max(12) });

/** Longest wavelength a tolerance for the whole axis reaches to, nm. */
const everywhereNm = 1_000_000;

/**
 * Parse the command line.
 *
 * @throws {UsageError} naming the option and its value
 */
export function parseOptions(args: readonly string[]): AnalyseOptions {
  const { values, positionals } = parse(args);
  const reading: ReadOptions = {};
  if (values.axis !== undefined) Object.assign(reading, chosen("--axis", values.axis, axes));
  if (values["full-scale"] !== undefined) reading.fullScaleCounts = positive("--full-scale", values["full-scale"]);
  if (values.scans !== undefined) reading.scansSummed = wholeFromOne("--scans", values.scans);
  if (values.range !== undefined && values.prior !== undefined) {
    throw new UsageError("--range and --prior say the same thing twice. Give one of them.");
  }
  return {
    files: positionals,
    readOnly: values["read-only"] ?? false,
    json: values.json ?? false,
    help: values.help ?? false,
    channel: values.channel ?? null,
    reading,
    setup: {
      elements: elementsOf(values.lamp),
      tolerance:
        values.tolerance === undefined
          ? []
          : [{ fromNm: 0, toNm: everywhereNm, toleranceNm: positive("--tolerance", values.tolerance) }],
      decisionRule: chosen("--rule", values.rule ?? "guarded", {
        guarded: { kind: "guarded", r: 1 },
        simple: { kind: "simple" },
      }),
      mode: modeOf(values.range, values.prior),
    },
  };
}

function parse(args: readonly string[]) {
  try {
    return parseArgs({
      args: [...args],
      allowPositionals: true,
      options: {
        lamp: { type: "string" },
        range: { type: "string" },
        prior: { type: "string" },
        axis: { type: "string" },
        channel: { type: "string" },
        "full-scale": { type: "string" },
        scans: { type: "string" },
        tolerance: { type: "string" },
        rule: { type: "string" },
        "read-only": { type: "boolean" },
        json: { type: "boolean" },
        help: { type: "boolean", short: "h" },
      },
    });
  } catch (error) {
    throw new UsageError(`${(error as Error).message.replace(/\. To specify.*/s, ".")}\n\n${usage}`);
  }
}

function elementsOf(text: string | undefined): string[] {
  if (text === undefined) return [];
  const elements = text.split(",").map((part) => part.trim());
  for (const element of elements) {
    if (!/^[A-Z][a-z]?$/.test(element)) {
      throw new UsageError(`--lamp takes element symbols with commas between, like Hg,Ar; got ${text}.`);
    }
  }
  return elements;
}

function modeOf(range: string | undefined, prior: string | undefined): IdentificationMode | null {
  if (range !== undefined) {
    const [firstNm, lastNm, ...more] = range.split(":").map(Number);
    if (more.length > 0 || !(firstNm! > 0) || !(lastNm! > 0) || firstNm === lastNm) {
      throw new UsageError(`--range takes two different wavelengths in nm, like 200:850; got ${range}.`);
    }
    return { kind: "range", firstNm: firstNm!, lastNm: lastNm! };
  }
  if (prior === undefined) return null;
  return {
    kind: "earlier-axis",
    axis: {
      coefficients: readPrior(prior),
      // Where its lines lay is not known: set to the whole capture when that is read.
      firstPx: 0,
      lastPx: 0,
      chebyshevCovariance: null,
      degreesOfFreedom: null,
      meaning: "standard-air",
    },
  };
}

function readPrior(file: string): number[] {
  try {
    return priorFile.parse(JSON.parse(fs.readFileSync(file, "utf8"))).coefficients;
  } catch (error) {
    const why =
      error instanceof z.ZodError || error instanceof SyntaxError ? "it is not such a file" : (error as Error).message;
    throw new UsageError(`--prior takes a JSON file like {"coefficients":[c0,c1]}; ${file} could not be used: ${why}.`);
  }
}

function positive(option: string, text: string): number {
  const value = Number(text);
  if (!(value > 0) || !Number.isFinite(value)) throw new UsageError(`${option} must be a number above 0; got ${text}.`);
  return value;
}

function wholeFromOne(option: string, text: string): number {
  const value = Number(text);
  if (!Number.isInteger(value) || value < 1) {
    throw new UsageError(`${option} must be a whole number from 1; got ${text}.`);
  }
  return value;
}

function chosen<T>(option: string, text: string, choices: Record<string, T>): T {
  const choice = Object.hasOwn(choices, text) ? choices[text] : undefined;
  if (choice === undefined) {
    throw new UsageError(`${option} must be one of ${Object.keys(choices).join(", ")}; got ${text}.`);
  }
  return choice;
}
