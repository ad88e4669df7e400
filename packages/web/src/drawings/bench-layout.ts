/** Geometry of the spectrum bench: its registers top to bottom, and the counts' ruler. Pure. */
import type { StripLine } from "@wavekeep/api/contract";
import type { Analysis, LineResult, SpectrumDrawing } from "@wavekeep/core";
import { countsTicks, countsTransform, type CountsScale } from "./scale.ts";

export interface Registers {
  half: number;
  /** y of the upper limit of the strip. */
  stripTop: number;
  /** Below the strip: where leaders up end, where flags stand, where leaders down end. */
  leaderTop: number;
  flagsTop: number;
  leaderBottom: number;
  /** y of the spectrum's top and of its zero. */
  spectrumTop: number;
  zero: number;
  spectrumHeight: number;
  /** y of residual zero; null where there is no room for them (a phone). */
  residualZero: number | null;
  /** y of the wavelength ruler. */
  rulerTop: number;
  height: number;
}

/** px a standard deviation of the residuals: ±2 sigma stand 26 px apart. */
export const SIGMA_PX = 6.5;

export function benchRegisters(isNarrow: boolean): Registers {
  const half = isNarrow ? 46 : 52;
  const spectrumHeight = isNarrow ? 220 : 280;
  const stripTop = 20;
  const leaderTop = stripTop + 2 * half + 3;
  const flagsTop = leaderTop + (isNarrow ? 18 : 19);
  const leaderBottom = flagsTop + 31 + (isNarrow ? 14 : 24);
  const spectrumTop = leaderBottom;
  const zero = spectrumTop + spectrumHeight;
  const residualZero = isNarrow ? null : zero + 44;
  const rulerTop = residualZero === null ? zero + 10 : residualZero + 38;
  return {
    half,
    stripTop,
    leaderTop,
    flagsTop,
    leaderBottom,
    spectrumTop,
    zero,
    spectrumHeight,
    residualZero,
    rulerTop,
    height: rulerTop + 24,
  };
}

export interface CountsRuler {
  /** Counts to px above zero. */
  up: (counts: number) => number;
  ticks: number[];
  max: number;
}

/** The counts' ruler for one spectrum: the highest sample (and the detector's ceiling, where it is near) fits. */
export function countsRuler(
  kind: CountsScale,
  drawing: SpectrumDrawing,
  height: number,
  noiseCounts: number,
): CountsRuler {
  const top = drawing.counts.reduce((most, value) => (Number.isFinite(value) && value > most ? value : most), 0);
  const ceiling = drawing.ceilingCounts;
  const max =
    Math.max(ceiling !== null && ceiling < top * 2.5 ? Math.max(ceiling, top) : top, 1) *
    (ceiling === null ? 1.04 : 1.01);
  const floor = Math.max(noiseCounts > 0 ? noiseCounts : max / 1e5, max / 1e7);
  const transform = countsTransform(kind, floor);
  const low = kind === "log" ? transform(floor) : 0;
  const span = transform(max) - low || 1;
  return {
    up: (counts) => ((transform(counts) - low) / span) * height,
    ticks: countsTicks(kind, max, height, floor),
    max,
  };
}

/** Value of `ys` at `x` by straight lines between its ascending `xs`; the ends hold beyond them. */
function interpolate(xs: readonly number[], ys: readonly number[], x: number): number {
  let low = 0;
  let high = xs.length - 1;
  if (high < 0) return 0;
  if (x <= (xs[low] ?? 0)) return ys[low] ?? 0;
  if (x >= (xs[high] ?? 0)) return ys[high] ?? 0;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if ((xs[middle] ?? 0) <= x) low = middle;
    else high = middle;
  }
  const [x0 = 0, x1 = 0, y0 = 0, y1 = 0] = [xs[low], xs[high], ys[low], ys[high]];
  return x1 === x0 ? y0 : y0 + ((y1 - y0) * (x - x0)) / (x1 - x0);
}

/**
 * Net counts: trace, fits and ceiling less the baseline under them, the same baseline for all three, so that a fit lies
 * on its trace. The ceiling, one height for the whole spectrum, is lowered by the baseline's median.
 */
export function netDrawing(drawing: SpectrumDrawing): SpectrumDrawing {
  // A drawing stored before baselines were kept with it has none: it is drawn as it was counted.
  const baseline = (drawing.baseline as number[] | undefined) ?? drawing.counts.map(() => 0);
  const sorted = [...baseline].sort((a, b) => a - b);
  const median = sorted[sorted.length >> 1] ?? 0;
  return {
    ...drawing,
    counts: drawing.counts.map((counts, i) => counts - (baseline[i] ?? 0)),
    baseline: baseline.map(() => 0),
    ceilingCounts: drawing.ceilingCounts === null ? null : drawing.ceilingCounts - median,
    fits: drawing.fits.map((fit) => {
      const under = fit.x.map((x) => interpolate(drawing.x, baseline, x));
      return {
        ...fit,
        counts: fit.counts.map((counts, i) => counts - (under[i] ?? 0)),
        baseline: fit.baseline.map((counts, i) => counts - (under[i] ?? 0)),
      };
    }),
  };
}

/** `air, nm`, `vacuum, nm`, `px`: what the ruler of the bench counts. */
export function axisText(drawing: SpectrumDrawing, meaning: Analysis["setup"]["axisMeaning"]): string {
  // A drawing made ahead of the server says itself what its axis is worth.
  if (!["Wavelength", "Pixel", "Drive step"].includes(drawing.axisLabel)) return drawing.axisLabel;
  if (drawing.axisUnit !== "nm") return drawing.axisUnit === "cm-1" ? "cm\u207b\u00b9" : drawing.axisUnit;
  return meaning === "vacuum" ? "vacuum, nm" : "air, nm";
}

/** A line of an analysis as the strip draws it; null where it has no name and so no place among published lines. */
export function stripLineOf(line: LineResult): StripLine | null {
  if (line.wavelengthNm === null) return null;
  return {
    wavelengthNm: line.wavelengthNm,
    species: line.species,
    errorNm: line.errorNm,
    expandedUncNm: line.errorExpandedUncNm,
    toleranceNm: line.toleranceNm,
    status: line.status,
    verdict: line.verdict,
    nearLimit: line.nearLimit,
    flags: line.flags,
    blend: line.blendOfNm.length > 1 || line.flags.includes("blend"),
  };
}

/** The named lines of an analysis in order of wavelength; `index` counts in `analysis.lines`. */
export function namedLines(analysis: Analysis): { index: number; line: StripLine; peakHeightCounts: number }[] {
  return analysis.lines
    .map((line, index) => ({ index, line: stripLineOf(line), peakHeightCounts: line.peakHeightCounts }))
    .filter((entry): entry is { index: number; line: StripLine; peakHeightCounts: number } => entry.line !== null)
    .sort((a, b) => a.line.wavelengthNm - b.line.wavelengthNm);
}

/** Zooms about a place that stays where it is; never beyond the whole, never below a thousandth of it. */
export function zoomAbout(
  view: [number, number],
  whole: [number, number],
  about: number,
  factor: number,
): [number, number] {
  const least = (whole[1] - whole[0]) / 1000;
  const span = Math.min(Math.max((view[1] - view[0]) * factor, least), whole[1] - whole[0]);
  const share = (about - view[0]) / (view[1] - view[0] || 1);
  const from = Math.min(Math.max(about - share * span, whole[0]), whole[1] - span);
  return [from, from + span];
}

/** Moves the view by a share of its span, held within the whole. */
export function panBy(view: [number, number], whole: [number, number], share: number): [number, number] {
  const span = view[1] - view[0];
  const from = Math.min(Math.max(view[0] + share * span, whole[0]), whole[1] - span);
  return [from, from + span];
}
