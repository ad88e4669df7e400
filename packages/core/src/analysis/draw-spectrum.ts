/**
 * What the screen draws of a capture: the spectrum thinned so that every column of the screen keeps its lowest and highest sample, the
 * fitted curves, and the residuals over their uncertainties.
 */
import { axisNm } from "../dispersion/axis.ts";
import type { FoundLines } from "../spectrum/find-lines.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import type { Dispersion, Spectrum, SpectrumDrawing } from "./types.ts";

const mostPairs = 4096;

/** What of the lines found is drawn. */
export type DrawnLines = Pick<FoundLines, "lines" | "windows" | "baseline" | "ceilingCounts">;

/** @param axis,dispersion  the wavelength scale to draw on: the axis that indicates, else the new one, else the positions as they are */
export function drawSpectrum(
  spectrum: Spectrum,
  found: DrawnLines,
  axis: IndicatingAxis | null,
  dispersion: Dispersion | null,
): SpectrumDrawing {
  const newAxis = dispersion?.axis ?? null;
  const toX = (position: number): number =>
    axis !== null ? axis.indicatedNm(position) : newAxis !== null ? axisNm(newAxis, position) : position;
  const inNm = axis !== null || newAxis !== null;
  const fits: SpectrumDrawing["fits"] = [];
  const residuals: SpectrumDrawing["residuals"] = [];
  found.lines.forEach((line, index) => {
    const fit = { line: index, x: [] as number[], counts: [] as number[], baseline: [] as number[] };
    fits.push(fit);
    const window = found.windows[line.group] ?? null;
    if (window === null) return;
    const neighbours = found.lines.filter((other) => other.group === line.group && other !== line);
    for (let k = 0; k < window.samples.length; k += 1) {
      const sample = window.samples[k]!;
      const position = spectrum.positions[sample]!;
      if (neighbours.length > 0 && isNearerToAnother(position, line.position, neighbours)) continue;
      const x = toX(position);
      const fitted = window.fittedCounts[k]!;
      fit.x.push(x);
      fit.counts.push(fitted);
      fit.baseline.push(window.baselineCounts[k]!);
      residuals.push({ x, ratio: (spectrum.counts[sample]! - fitted) / window.countsUnc[k]!, line: index });
    }
  });
  const thinned = thin(spectrum.counts);
  const x = new Array<number>(thinned.length);
  const counts = new Array<number>(thinned.length);
  const baseline = new Array<number>(thinned.length);
  for (let k = 0; k < thinned.length; k += 1) {
    const sample = thinned[k]!;
    x[k] = toX(spectrum.positions[sample]!);
    counts[k] = spectrum.counts[sample]!;
    baseline[k] = found.baseline[sample]!;
  }
  return {
    x,
    counts,
    baseline,
    axisLabel: inNm ? "Wavelength" : spectrum.axisKind === "step" ? "Drive step" : "Pixel",
    axisUnit: inNm ? "nm" : spectrum.axisUnit,
    ceilingCounts: found.ceilingCounts,
    fits,
    residuals,
  };
}

/** Samples of a shared window belong to the nearest of its lines. */
function isNearerToAnother(position: number, centre: number, others: DrawnLines["lines"]): boolean {
  const distance = Math.abs(position - centre);
  for (const other of others) if (Math.abs(position - other.position) < distance) return true;
  return false;
}

/** Indices of the samples to draw, ascending; gaps are left out. */
function thin(counts: Float64Array): number[] {
  const n = counts.length;
  const kept: number[] = [];
  if (n <= 2 * mostPairs) {
    for (let i = 0; i < n; i += 1) if (counts[i] === counts[i]) kept.push(i);
    return kept;
  }
  for (let column = 0; column < mostPairs; column += 1) {
    let low = -1;
    let high = -1;
    for (let i = Math.floor((column * n) / mostPairs); i < Math.floor(((column + 1) * n) / mostPairs); i += 1) {
      if (counts[i] !== counts[i]) continue;
      if (low < 0 || counts[i]! < counts[low]!) low = i;
      if (high < 0 || counts[i]! > counts[high]!) high = i;
    }
    if (low < 0) continue;
    if (low === high) kept.push(low);
    else kept.push(Math.min(low, high), Math.max(low, high));
  }
  return kept;
}
