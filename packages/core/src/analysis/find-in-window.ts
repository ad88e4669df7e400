/**
 * The line of a window: 20 to 64 samples about one line that hardly show a baseline, so that neither baseline nor noise can be had from quiet
 * samples. One line on a straight background is fitted from its highest sample, and the noise comes from the fit: read noise from what is
 * left over where there is little light, photon noise from what is left over where there is much, both scaled so that chi-squared is its
 * degrees of freedom. Those are few, and go into the coverage factor.
 */
import { fitLines, type FittedWindowOfLines, type LineStart, type LineWindow } from "../lineshape/fit-line.ts";
import { findLines, type FindLinesOptions, type FoundLines } from "../spectrum/find-lines.ts";
import { median } from "../spectrum/median.ts";
import type { FittedLine, Spectrum } from "./types.ts";

const fewestSamples = 9;
const leastSigmas = 6;
const poorFitShare = 0.12;
/** Share of the height below which a sample tells the read noise. */
const darkShare = 0.1;
const edgeWidths = 1;

/** As `findLines`; where that finds nothing the one line of the window. */
export function findInWindow(spectrum: Spectrum, options: FindLinesOptions): FoundLines {
  const found = findLines(spectrum, options);
  if (found.lines.some(({ flags }) => !flags.includes("spike"))) return found;
  return fitOne(spectrum, options) ?? found;
}

function fitOne(spectrum: Spectrum, options: FindLinesOptions): FoundLines | null {
  const kept: number[] = [];
  for (let i = 0; i < spectrum.counts.length; i += 1) if (spectrum.counts[i] === spectrum.counts[i]) kept.push(i);
  const m = kept.length;
  if (m < fewestSamples) return null;
  const positions = Float64Array.from(kept, (i) => spectrum.positions[i]!);
  const counts = Float64Array.from(kept, (i) => spectrum.counts[i]!);
  const start = startOf(positions, counts);
  if (start === null) return null;
  const shape = options.lineShape;
  const window: LineWindow = {
    positions,
    counts,
    countsUnc: new Float64Array(m).fill(Math.max(1e-3 * start.peakHeightCounts, 1e-9)),
    pixelIntegrated: spectrum.axisKind === "pixel",
    noiseCorrelation: 0,
  };
  const named = shape === undefined || shape === "automatic" || shape === "empirical" ? "gaussian" : shape;
  const first = fitLines(window, [start], { shape: named });
  if (first.outcome === "refused") return null;
  window.countsUnc = noiseOf(first, positions, counts);
  const fit = fitLines(window, first.lines, { shape: named });
  if (fit.outcome === "refused") return null;
  const line = fit.lines[0]!;
  const noise = median(window.countsUnc);
  if (!(line.peakHeightCounts > leastSigmas * noise)) return null;
  const flags: FittedLine["flags"] = [];
  const reach = edgeWidths * line.fwhm;
  if (line.centre - positions[0]! < reach || positions[m - 1]! - line.centre < reach) flags.push("edge");
  let misfit = 0;
  for (let i = 0; i < m; i += 1) {
    const off = counts[i]! - fit.fittedCounts[i]!;
    misfit += (off * off) / m;
  }
  if (Math.sqrt(misfit) > poorFitShare * line.peakHeightCounts) flags.push("poor-fit");
  const baselineCounts = positions.map((x) => fit.baseline[0] + fit.baseline[1] * (x - fit.windowCentre));
  return {
    lines: [
      {
        position: line.centre,
        positionUnc: line.centreUnc,
        fwhm: line.fwhm,
        fwhmUnc: line.fwhmUnc,
        areaCounts: line.areaCounts,
        peakHeightCounts: line.peakHeightCounts,
        signalToNoise: line.peakHeightCounts / noise,
        reducedChiSquare: fit.reducedChiSquare,
        degreesOfFreedom: fit.degreesOfFreedom,
        positionDegreesOfFreedom: fit.degreesOfFreedom,
        windowFirst: kept[0]!,
        windowLast: kept[m - 1]!,
        group: 0,
        flags,
      },
    ],
    windows: [
      {
        first: kept[0]!,
        last: kept[m - 1]!,
        samples: Int32Array.from(kept),
        fittedCounts: fit.fittedCounts,
        baselineCounts,
        countsUnc: window.countsUnc,
      },
    ],
    baseline: spectrum.positions.map((x) => fit.baseline[0] + fit.baseline[1] * (x - fit.windowCentre)),
    noiseCounts: noise,
    noiseCorrelation: 0,
    ceilingCounts: null,
    medianFwhm: line.fwhm,
    notes: [],
  };
}

/** From the highest sample and the width at half height above the lower end; null where no sample stands out. */
function startOf(positions: Float64Array, counts: Float64Array): LineStart | null {
  const m = counts.length;
  let top = 0;
  let low = 0;
  for (let i = 1; i < m; i += 1) {
    if (counts[i]! > counts[top]!) top = i;
    if (counts[i]! < counts[low]!) low = i;
  }
  const height = counts[top]! - counts[low]!;
  if (!(height > 0) || top === 0 || top === m - 1) return null;
  let from = top;
  let to = top;
  while (from > 0 && counts[from]! - counts[low]! > height / 2) from -= 1;
  while (to < m - 1 && counts[to]! - counts[low]! > height / 2) to += 1;
  return { centre: positions[top]!, fwhm: Math.max(positions[to]! - positions[from]!, 0), peakHeightCounts: height };
}

/** Noise of each sample from what a first fit leaves over. */
function noiseOf(fit: FittedWindowOfLines, positions: Float64Array, counts: Float64Array): Float64Array {
  const m = counts.length;
  const height = fit.lines[0]!.peakHeightCounts;
  const signal = positions.map((x, i) =>
    Math.max(0, fit.fittedCounts[i]! - fit.baseline[0] - fit.baseline[1] * (x - fit.windowCentre)),
  );
  let [dark, darkCount, bright, light, all] = [0, 0, 0, 0, 0];
  for (let i = 0; i < m; i += 1) {
    const square = (counts[i]! - fit.fittedCounts[i]!) * (counts[i]! - fit.fittedCounts[i]!);
    all += square;
    if (signal[i]! < darkShare * height) {
      dark += square;
      darkCount += 1;
    } else {
      bright += square;
      light += signal[i]!;
    }
  }
  const even = all / m;
  const read = darkCount >= 5 ? Math.max(dark / darkCount, 1e-3 * even) : even;
  const gain = darkCount >= 5 && light > 0 ? Math.max(0, (bright - (m - darkCount) * read) / light) : 0;
  let chiSquare = 0;
  const variances = signal.map((value) => Math.max(read + gain * value, 1e-18));
  for (let i = 0; i < m; i += 1) {
    const off = counts[i]! - fit.fittedCounts[i]!;
    chiSquare += (off * off) / variances[i]!;
  }
  // Scaled so that what is left over is what the degrees of freedom leave of it.
  const scale = Math.max(chiSquare / Math.max(1, fit.degreesOfFreedom), 1e-18);
  return variances.map((value) => Math.max(Math.sqrt(value * scale), 1e-12));
}
