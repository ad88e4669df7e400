/** One file to one JSON document. */
import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import {
  analyseCapture,
  analyseCaptures,
  coreVersion,
  errorPerCm,
  expandedUncPerCm,
  readCapture,
  type AnalysedCheck,
  type Analysis,
  type AxisUnit,
  type FileFacts,
  type LineResult,
  type PossibleReading,
} from "@wavekeep/core";
import { ownUnit, scaleOf } from "./axis-units.ts";
import type { CommandOptions } from "./options.ts";
import { setupOf } from "./setup-of.ts";

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
  | "decimal"
  | "missing"
  | "columns"
  | "damagedLines"
  | "remarks"
> & {
  /** null where nothing parts columns: a file of one column, a JCAMP-DX table. */
  delimiter: FileFacts["delimiter"] | null;
  /** Heading of the column of intensities that was taken. */
  channel: string;
};

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
  /** The ways to read a file that can be read in more than one; absent where there is nothing to choose. */
  readings?: PossibleReading[];
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
  errorNm?: number | null;
  errorExpandedUncNm?: number | null;
  /** On an axis of wavenumbers these three stand instead of the two above. */
  wavenumberPerCm?: number | null;
  errorPerCm?: number | null;
  errorExpandedUncPerCm?: number | null;
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

export function analyseFile(file: string, options: CommandOptions): ResultDocument {
  let begun = performance.now();
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
  const refusal = (facts: ResultDocument["file"], reason: string, readings?: PossibleReading[]): ResultDocument => ({
    file: facts,
    outcome: "refused",
    reason,
    ...empty,
    ...(readings === undefined ? {} : { readings }),
    elapsedMs: performance.now() - begun,
  });

  let bytes: Buffer;
  try {
    bytes = fs.readFileSync(file);
  } catch (error) {
    return refusal(
      { name, sha256: null },
      `The file could not be opened (${(error as NodeJS.ErrnoException).code ?? "unknown"}).`,
    );
  }
  const sha256 = createHash("sha256").update(bytes).digest("hex");
  begun = performance.now();
  // Bands of transmittance point down by nature.
  const reading = options.absorption === null ? options.reading : { inverted: false, ...options.reading };
  const read = readCapture(bytes, name, reading);
  if (read.outcome === "refused") {
    const says = read.line === null || read.reason.toLowerCase().includes(`line ${read.line}`);
    return refusal({ name, sha256 }, says ? read.reason : `${read.reason} (Line ${read.line}.)`, read.readings);
  }
  const { spectrum, facts } = read;
  const fileDocument = documentOf(facts, sha256);
  if (options.readOnly) {
    const reason = "Only read, as asked for: no line was looked for.";
    return { file: fileDocument, outcome: "unidentified", reason, ...empty, elapsedMs: performance.now() - begun };
  }
  const setup = setupOf(spectrum, facts, options);
  if ("problem" in setup) return refusal(fileDocument, setup.problem);

  // The ordinate of an absorption spectrum is told from its heading too: such a file goes in whole.
  const check: AnalysedCheck =
    options.absorption === null
      ? analyseCapture(spectrum, setup, { withDrawing: false })
      : analyseCaptures([{ name, bytes, sha256, part: "lamp" }], setup, { withDrawing: false });
  const { analysis } = check;
  return {
    file: fileDocument,
    outcome: analysis.outcome,
    reason: analysis.reason ?? analysis.verdict?.reasons[0] ?? null,
    verdict: analysis.verdict?.verdict ?? null,
    lines: analysis.lines.map((line) => lineDocumentOf(line, facts.axisUnit)),
    dispersion: dispersionOf(analysis, scaleOf(facts.axisUnit)),
    confidence: { chanceProbability: analysis.confidence.chanceProbability, margin: analysis.confidence.margin },
    notIncluded: analysis.notIncluded,
    warnings: analysis.warnings.map((warning) => warning.text),
    coreVersion: analysis.coreVersion,
    elapsedMs: performance.now() - begun,
  };
}

function documentOf(facts: FileFacts, sha256: string): FileDocument {
  const isParted = facts.columns.length > 1 && facts.format === undefined;
  return {
    name: facts.name,
    sha256,
    rows: facts.rows,
    axis: facts.axis,
    axisUnit: facts.axisUnit,
    first: facts.first,
    last: facts.last,
    intensitySum: facts.intensitySum,
    intensityMax: facts.intensityMax,
    metadata: facts.metadata,
    delimiter: isParted ? facts.delimiter : null,
    decimal: facts.decimal,
    missing: facts.missing,
    columns: facts.columns,
    channel: facts.columns[facts.intensityColumn] ?? "",
    damagedLines: facts.damagedLines,
    remarks: facts.remarks,
  };
}

/** Published wavenumber of a line, cm-1: of its wavelength in vacuum, which indicated value and error are given in on such an axis. */
function referencePerCm({ indicatedNm, errorNm }: LineResult): number | null {
  return indicatedNm === null || errorNm === null ? null : 1e7 / (indicatedNm - errorNm);
}

function lineDocumentOf(line: LineResult, axisUnit: AxisUnit): LineDocument {
  const unit = ownUnit(axisUnit);
  const { position } = line;
  const errors =
    axisUnit === "cm-1"
      ? {
          wavenumberPerCm: referencePerCm(line),
          errorPerCm: errorPerCm(line),
          errorExpandedUncPerCm: expandedUncPerCm(line),
        }
      : { errorNm: line.errorNm, errorExpandedUncNm: line.errorExpandedUncNm };
  return {
    position: unit.position(position),
    positionUnc: unit.width(line.positionUnc, position),
    wavelengthNm: line.wavelengthNm,
    order: line.order,
    medium: line.medium,
    species: line.species,
    ...errors,
    coverageFactor: line.coverageFactor,
    fwhm: unit.width(line.fwhm, position),
    area: unit.width(line.areaCounts, position),
    flags: line.flags,
    used: line.usedInAxis,
  };
}

/** The axis in powers of the file's own unit (of nm where that is an energy or a wavenumber). */
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
    samples: dispersion.samples.map(({ px, nm, uncNm }) => ({ px: px * scale, nm, uncNm })),
  };
}
