/**
 * A line is left out for what can be seen in the data, never for its error: each reason names what must be seen.
 *
 * The limits beside flags are common practice, no source; what they let through is seen by the approver with its note.
 */
import { builtInLineList, linesOf, lineWavelengthNm, type Analysis, type LineResult } from "@wavekeep/core";
import type { StoredDraft } from "../db/schema/checks.ts";

type LeftOut = StoredDraft["leftOut"][number];

/** The same line, nm: positions are far better than this, neighbours far further apart. */
const sameLineNm = 0.02;
/** Signal over noise below which a line may be called too weak. */
const weakBelow = 10;
/** Reduced chi-squared above which a fit may be called disturbed. */
const poorAbove = 2;
/** A neighbour within so many widths stands in the wing. */
const wingWidths = 3;
/** Narrower than this share of the usual width: no line of the instrument. */
const spikeShare = 0.6;

/** The line of an analysis that a leave-out speaks of. */
export const lineAt = (analysis: Analysis, wavelengthNm: number): LineResult | undefined =>
  analysis.lines.find((line) => line.wavelengthNm !== null && Math.abs(line.wavelengthNm - wavelengthNm) <= sameLineNm);

/**
 * Whether what a leave-out states can be seen in the data.
 *
 * @returns null when it can, else the sentence against it
 */
export function leaveOutProblem(analysis: Analysis | null, left: LeftOut): string | null {
  if (analysis === null) return "Analyse the captures first: a line is left out for what is seen in them.";
  const line = lineAt(analysis, left.wavelengthNm);
  if (line === undefined) return `No line at ${left.wavelengthNm} nm was named in the last analysis.`;
  if (seen[left.reason](line, analysis)) return null;
  return `${line.species ?? "The line"} ${left.wavelengthNm} nm: ${notSeen[left.reason](line)} A line is left out for what can be seen in the data, never for its error.`;
}

const seen: Record<LeftOut["reason"], (line: LineResult, analysis: Analysis) => boolean> = {
  saturated: (line) => line.flags.includes("saturated"),
  blended: (line, analysis) =>
    line.flags.includes("blend") || line.blendOfNm.length > 1 || hasNeighbour(line, analysis),
  spike: (line, analysis) =>
    line.flags.includes("spike") || (analysis.medianFwhm !== null && line.fwhm < spikeShare * analysis.medianFwhm),
  "too-weak": (line) => line.flags.includes("weak") || line.signalToNoise < weakBelow,
  disturbed: (line) =>
    line.flags.some((flag) => flag === "poor-fit" || flag === "edge" || flag === "room-light") ||
    line.reducedChiSquare > poorAbove,
};

const notSeen: Record<LeftOut["reason"], (line: LineResult) => string> = {
  saturated: () => "it does not reach the ceiling of the detector.",
  blended: () => `no other line stands within ${wingWidths} widths of it.`,
  spike: () => "it is as wide as the other lines.",
  "too-weak": (line) => `it stands ${Math.round(line.signalToNoise)} times above the noise.`,
  disturbed: (line) => `its fit leaves a reduced chi-squared of ${line.reducedChiSquare.toFixed(1)}.`,
};

/** Another fitted line, or a published one of the same source, within the wings. */
function hasNeighbour(line: LineResult, analysis: Analysis): boolean {
  const reach = wingWidths * line.fwhm;
  if (analysis.lines.some((other) => other !== line && Math.abs(other.position - line.position) <= reach)) return true;
  const reachNm = reach * nmPerUnit(line, analysis);
  const centre = line.wavelengthNm!;
  return linesOf(builtInLineList, analysis.setup.elements, centre - reachNm, centre + reachNm).some(
    (published) => Math.abs(lineWavelengthNm(published).wavelengthNm - centre) > sameLineNm,
  );
}

/** nm per unit of the capture's axis near a line, from the named line next to it. */
function nmPerUnit(line: LineResult, analysis: Analysis): number {
  if (analysis.axisUnit === "nm") return 1;
  const others = analysis.lines.filter((other) => other !== line && other.wavelengthNm !== null);
  const nearest = others.sort((a, b) => Math.abs(a.position - line.position) - Math.abs(b.position - line.position))[0];
  if (nearest === undefined || nearest.position === line.position) return 0;
  return Math.abs((nearest.wavelengthNm! - line.wavelengthNm!) / (nearest.position - line.position));
}
