/** The published JSON of `npm run -s analyse`: one document a file. Its names are fixed; people's scripts read them. */
import { coreVersion, type Analysis, type AxisUnit, type FileFacts, type LineResult } from "@wavekeep/core";

/** What is said about a file that could not even be read: its name and hash. */
export type UnreadFile = Pick<FileFacts, "name" | "sha256">;

/** Positions are printed in the file's own unit; the core works in nm. */
const fileUnitsPerNm: Partial<Record<AxisUnit, number>> = { Å: 10, µm: 0.001 };

/** How the file was understood. */
export function fileDocument(facts: FileFacts) {
  const { name, sha256, rows, axis, axisUnit, first, last, intensitySum, intensityMax } = facts;
  const { metadata, delimiter, decimal, missing } = facts;
  return {
    ...{ name, sha256, rows, axis, axisUnit, first, last, intensitySum, intensityMax },
    ...{ metadata, delimiter, decimal, missing },
  };
}

/** A file that was only read. */
export function readDocument(facts: FileFacts, elapsedMs: number) {
  return { file: fileDocument(facts), outcome: "read" as const, reason: null, coreVersion, elapsedMs };
}

/** A file that was refused, with the sentence why. */
export function refusedDocument(file: UnreadFile | FileFacts, reason: string, elapsedMs: number) {
  return {
    file: "rows" in file ? fileDocument(file) : { name: file.name, sha256: file.sha256 },
    outcome: "refused" as const,
    reason,
    verdict: null,
    lines: [],
    dispersion: null,
    confidence: null,
    coreVersion,
    elapsedMs,
  };
}

/** A whole analysis. */
export function analysisDocument(facts: FileFacts, analysis: Analysis, elapsedMs: number) {
  const { outcome, reason, dispersion, confidence, notIncluded, verdict } = analysis;
  const scale = fileUnitsPerNm[facts.axisUnit] ?? 1;
  const nothingJudged = verdict === null || (verdict.judgedCount === 0 && outcome !== "ambiguous");
  return {
    file: fileDocument(facts),
    outcome,
    reason,
    verdict: nothingJudged ? null : verdict.verdict,
    lines: analysis.lines.map((line) => lineDocument(line, scale)),
    dispersion:
      dispersion === null
        ? null
        : {
            family: dispersion.family,
            degree: dispersion.degree,
            coefficients: dispersion.coefficients,
            rmsPx: dispersion.rmsPx,
            rmsNm: dispersion.rmsNm,
            samples: dispersion.samples,
          },
    confidence: { chanceProbability: confidence.chanceProbability, margin: confidence.margin },
    notIncluded,
    coreVersion: analysis.coreVersion,
    elapsedMs,
  };
}

function lineDocument(line: LineResult, scale: number) {
  const { wavelengthNm, order, medium, species, errorNm, errorExpandedUncNm, coverageFactor, flags } = line;
  return {
    position: line.position * scale,
    positionUnc: line.positionUnc * scale,
    ...{ wavelengthNm, order, medium, species, errorNm, errorExpandedUncNm, coverageFactor },
    fwhm: line.fwhm * scale,
    // Counts times the axis unit.
    area: line.areaCounts * scale,
    flags,
    used: line.usedInAxis || line.status === "judged",
  };
}

export type AnalyseDocument = ReturnType<typeof analysisDocument | typeof refusedDocument | typeof readDocument>;

/** A document as a few lines of text, for reading at the terminal without `--json`. */
export function documentText(document: AnalyseDocument): string {
  const head = `${document.file.name}: ${document.outcome}${document.reason === null ? "" : `. ${document.reason}`}`;
  const facts =
    "rows" in document.file
      ? [
          `  ${document.file.rows} rows, ${document.file.axis} axis from ${document.file.first} to ${document.file.last} ${document.file.axisUnit}`,
        ]
      : [];
  if (!("lines" in document) || document.lines.length === 0) return [head, ...facts].join("\n");
  const rows = document.lines.map((line) => {
    const error = line.errorNm === null ? "" : `${line.errorNm.toFixed(4)} ± ${line.errorExpandedUncNm?.toFixed(4)}`;
    return `  ${line.position.toFixed(3).padStart(10)} ${(line.wavelengthNm?.toFixed(4) ?? "unnamed").padStart(10)} ${(line.species ?? "").padEnd(6)} ${error.padEnd(20)} ${line.flags.join(", ")}`.trimEnd();
  });
  const verdict = document.verdict === null ? [] : [`  verdict: ${document.verdict}`];
  return [head, ...facts, "    position         nm         error and U, nm", ...rows, ...verdict].join("\n");
}
