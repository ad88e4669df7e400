/** One file to one JSON document. */
import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import {
  analyseCapture,
  coreVersion,
  defaultSetup,
  readCapture,
  type Analysis,
  type AnalysisSetup,
  type AxisUnit,
  type FileFacts,
  type ReadCapture,
  type ReadOptions,
  type Spectrum,
} from "@wavekeep/core";
import type { CommandOptions } from "./options.ts";

type FileDocument = Pick<
  FileFacts,
  | "name"
  | "sha256"
  | "rows"
  | "axis"
  | "axisUnit"
  | "first"
  | "last"
  | "intensitySum"
  | "intensityMax"
  | "metadata"
  | "delimiter"
  | "decimal"
  | "missing"
> & { remarks: string[] };

export interface ResultDocument {
  file: FileDocument | { name: string; sha256: string | null };
  outcome: Analysis["outcome"];
  reason: string | null;
  verdict: "pass" | "fail" | "inconclusive" | null;
  lines: LineDocument[];
  dispersion: DispersionDocument | null;
  confidence: { chanceProbability: number; margin: number } | null;
  notIncluded: string[];
  warnings: string[];
  coreVersion: string;
  elapsedMs: number;
}

export interface LineDocument {
  position: number;
  positionUnc: number;
  wavelengthNm: number | null;
  order: number;
  medium: "air" | "vacuum";
  species: string | null;
  errorNm: number | null;
  errorExpandedUncNm: number | null;
  coverageFactor: number | null;
  fwhm: number;
  area: number;
  flags: string[];
  used: boolean;
}

interface DispersionDocument {
  family: string;
  degree: number;
  coefficients: number[];
  rmsPx: number;
  rmsNm: number;
  samples: { px: number; nm: number; uncNm: number }[];
}

/** Units of a file's axis in one nm; positions are printed in the file's own unit. */
const unitsPerNm: Partial<Record<AxisUnit, number>> = { Å: 10, µm: 0.001 };

export function analyseFile(file: string, options: CommandOptions): ResultDocument {
  const begun = performance.now();
  const name = path.basename(file);
  const empty = {
    verdict: null,
    lines: [],
    dispersion: null,
    confidence: null,
    notIncluded: [],
    warnings: [],
    coreVersion,
  };
  const refused = (facts: ResultDocument["file"], reason: string): ResultDocument => ({
    file: facts,
    outcome: "refused",
    reason,
    ...empty,
    elapsedMs: performance.now() - begun,
  });

  let bytes: Buffer;
  try {
    bytes = fs.readFileSync(file);
  } catch (error) {
    return refused(
      { name, sha256: null },
      `The file could not be opened (${(error as NodeJS.ErrnoException).code ?? "unknown"}).`,
    );
  }
  const sha256 = createHash("sha256").update(bytes).digest("hex");
  const read = readFile(bytes, name, options);
  if (read.outcome === "refused") return refused({ name, sha256 }, read.reason);
  const { spectrum, facts } = read;
  const fileDocument = documentOf(facts, sha256);
  if (options.readOnly) {
    const reason = "Only read, as asked for: no line was looked for.";
    return { file: fileDocument, outcome: "unidentified", reason, ...empty, elapsedMs: performance.now() - begun };
  }
  const setup = setupOf(spectrum, options);
  if ("problem" in setup) return refused(fileDocument, setup.problem);

  const { analysis } = analyseCapture(spectrum, setup);
  const scale = unitsPerNm[facts.axisUnit] ?? 1;
  return {
    file: fileDocument,
    outcome: analysis.outcome,
    reason: analysis.reason ?? analysis.verdict?.reasons[0] ?? null,
    verdict: analysis.verdict?.verdict ?? null,
    lines: analysis.lines.map((line) => ({
      position: line.position * scale,
      positionUnc: line.positionUnc * scale,
      wavelengthNm: line.wavelengthNm,
      order: line.order,
      medium: line.medium,
      species: line.species,
      errorNm: line.errorNm,
      errorExpandedUncNm: line.errorExpandedUncNm,
      coverageFactor: line.coverageFactor,
      fwhm: line.fwhm * scale,
      area: line.areaCounts * scale,
      flags: line.flags,
      used: line.usedInAxis,
    })),
    dispersion: dispersionOf(analysis, scale),
    confidence: { chanceProbability: analysis.confidence.chanceProbability, margin: analysis.confidence.margin },
    notIncluded: analysis.notIncluded,
    warnings: analysis.warnings.map((warning) => warning.text),
    coreVersion: analysis.coreVersion,
    elapsedMs: performance.now() - begun,
  };
}

function readFile(bytes: Uint8Array, name: string, options: CommandOptions): ReadCapture {
  const reading: ReadOptions = {};
  if (options.axisKind !== null) reading.axisKind = options.axisKind;
  if (options.fullScaleCounts !== null) reading.fullScaleCounts = options.fullScaleCounts;
  if (options.scansSummed !== null) reading.scansSummed = options.scansSummed;
  const read = readCapture(bytes, name, reading);
  if (options.channel === null || read.outcome === "refused") return read;
  const wanted = options.channel.trim().toLowerCase();
  const column = read.facts.columns.findIndex((heading) => heading.trim().toLowerCase() === wanted);
  if (column < 0) {
    const reason = `The file has no column "${options.channel}"; it has ${read.facts.columns.map((one) => `"${one}"`).join(", ")}.`;
    return { outcome: "refused", code: "no-such-column", reason, line: null };
  }
  return readCapture(bytes, name, { ...reading, intensityColumn: column });
}

function documentOf(facts: FileFacts, sha256: string): FileDocument {
  const {
    name,
    rows,
    axis,
    axisUnit,
    first,
    last,
    intensitySum,
    intensityMax,
    metadata,
    delimiter,
    decimal,
    missing,
    remarks,
  } = facts;
  return {
    name,
    sha256,
    rows,
    axis,
    axisUnit,
    first,
    last,
    intensitySum,
    intensityMax,
    metadata,
    delimiter,
    decimal,
    missing,
    remarks,
  };
}

function setupOf(spectrum: Spectrum, options: CommandOptions): AnalysisSetup | { problem: string } {
  if (options.outOfScope !== null) return { problem: options.outOfScope };
  if (options.elements.length === 0)
    return {
      problem: "Say which lamp it is, for example --lamp Hg,Ar; or --read-only to see how the file is understood.",
    };
  if (spectrum.axisKind === "wavenumber") {
    return {
      problem:
        "This version judges emission lines on pixel, step and wavelength axes; a cm-1 axis is only read (--read-only). Nothing was measured.",
    };
  }
  const last = spectrum.positions.length - 1;
  let mode: AnalysisSetup["mode"];
  if (spectrum.axisKind === "wavelength") {
    if (options.priorCoefficients !== null)
      return { problem: "The file has a wavelength axis of its own; --prior speaks of pixels. Leave one of them out." };
    mode = options.range === null ? { kind: "earlier-axis", axis: "own" } : { kind: "range", ...options.range };
  } else if (options.priorCoefficients !== null) {
    mode = {
      kind: "earlier-axis",
      axis: {
        coefficients: options.priorCoefficients,
        firstPx: spectrum.positions[0]!,
        lastPx: spectrum.positions[last]!,
        chebyshevCovariance: null,
        degreesOfFreedom: null,
        meaning: "standard-air",
      },
    };
  } else if (options.range !== null) mode = { kind: "range", ...options.range };
  else
    return {
      problem:
        "The file counts pixels or steps: give --prior COEFFS.json (an earlier axis) or --range FIRST:LAST in nm.",
    };
  return defaultSetup({
    elements: options.elements,
    mode,
    tolerance: options.tolerance === null ? [] : [{ fromNm: 0, toNm: 100000, toleranceNm: options.tolerance }],
    decisionRule: options.rule,
  });
}

/** The axis in powers of the file's own unit. */
function dispersionOf(analysis: Analysis, scale: number): DispersionDocument | null {
  const { dispersion } = analysis;
  if (dispersion === null) return null;
  let power = 1;
  const coefficients = dispersion.coefficients.map((coefficient) => {
    const scaled = coefficient / power;
    power *= scale;
    return scaled;
  });
  return {
    family: dispersion.family,
    degree: dispersion.degree,
    coefficients,
    rmsPx: dispersion.rmsPx * scale,
    rmsNm: dispersion.rmsNm,
    samples: dispersion.samples.map((sample) => ({ ...sample, px: sample.px * scale })),
  };
}
