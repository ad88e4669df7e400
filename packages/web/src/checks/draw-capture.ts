/**
 * Draws a dropped file ahead of the server: read and thin, nothing judged. Pure; runs in the draw worker.
 */
import {
  axisNm,
  coreVersion,
  defaultSetup,
  readCapture,
  type Analysis,
  type PixelAxis,
  type SpectrumDrawing,
} from "@wavekeep/core";

export type DrawnCapture =
  | { outcome: "drawn"; analysis: Analysis; drawing: SpectrumDrawing; rows: number }
  | { outcome: "refused"; reason: string };

/** Most minimum/maximum pairs that are kept, as the server's own drawings do. */
export const mostPairs = 4096;

/** Keeps the least and the greatest of each of at most `pairs` equal runs, in their order: no peak is lost. */
export function thin(
  x: readonly number[],
  counts: readonly number[],
  pairs: number,
): { x: number[]; counts: number[] } {
  if (x.length <= 2 * pairs) return { x: [...x], counts: [...counts] };
  const kept: { x: number[]; counts: number[] } = { x: [], counts: [] };
  for (let pair = 0; pair < pairs; pair++) {
    const first = Math.floor((pair * x.length) / pairs);
    const end = Math.floor(((pair + 1) * x.length) / pairs);
    let least = first;
    let most = first;
    for (let index = first; index < end; index++) {
      const value = counts[index] ?? Number.NaN;
      if (!(value >= (counts[least] ?? Number.NaN))) least = index;
      if (!(value <= (counts[most] ?? Number.NaN))) most = index;
    }
    for (const index of least <= most ? [least, most] : [most, least]) {
      kept.x.push(x[index] ?? 0);
      kept.counts.push(counts[index] ?? 0);
    }
  }
  return kept;
}

/**
 * @param bytes  the file as it was dropped
 * @param axis   nm, ascending powers of the pixel: the axis in force of a pixel instrument; null leaves pixels
 */
export function drawCapture(bytes: Uint8Array, name: string, axis: PixelAxis | null): DrawnCapture {
  const read = readCapture(bytes, name);
  if (read.outcome === "refused") return { outcome: "refused", reason: read.reason };
  const { spectrum, facts } = read;
  const isPixel = spectrum.axisKind === "pixel";
  const x: number[] = [];
  const counts: number[] = [];
  spectrum.positions.forEach((position, index) => {
    const value = spectrum.counts[index] ?? Number.NaN;
    if (Number.isNaN(value)) return;
    x.push(isPixel && axis !== null ? axisNm(axis, position) : position);
    counts.push(value);
  });
  const drawn = thin(x, counts, mostPairs);
  const axisUnit = isPixel && axis !== null ? "nm" : spectrum.axisUnit;
  return {
    outcome: "drawn",
    rows: facts.rows,
    drawing: {
      ...drawn,
      // Counts as written: what lies under the lines is the analysis's to say.
      baseline: drawn.x.map(() => 0),
      axisLabel: axisUnit === "nm" ? "nm, not yet checked" : axisUnit,
      axisUnit,
      ceilingCounts: spectrum.fullScaleCounts,
      fits: [],
      residuals: [],
    },
    analysis: {
      format: 1,
      coreVersion,
      outcome: "unidentified",
      reason: null,
      setup: defaultSetup(),
      files: [facts],
      axisKind: spectrum.axisKind,
      axisUnit: spectrum.axisUnit,
      noiseCounts: 0,
      noiseCorrelation: 0,
      medianFwhm: null,
      lines: [],
      missingLinesNm: [],
      verdict: null,
      verdictWithEveryLine: null,
      segments: [],
      dispersion: null,
      driftPoint: null,
      confidence: { chanceProbability: 1, margin: 0, note: "" },
      notIncluded: [],
      warnings: [],
    },
  };
}
