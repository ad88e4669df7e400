/**
 * Instruments to simulate with: one plausible example of each kind, to be changed where a simulation needs it.
 *
 * The figures are typical of small-laboratory instruments (common practice, no source).
 */
import type { SimulatedInstrument } from "./simulate-capture.ts";
import { focalLengthForRange, type GratingOptics } from "./true-axis.ts";

type Changes = Partial<SimulatedInstrument>;

/** Optics of a fixed grating that spread [firstNm, lastNm] over so many pixels. */
export function opticsForRange(
  firstNm: number,
  lastNm: number,
  samples: number,
  grooveDensityPerMm: number,
  pixelPitchUm = 14,
): GratingOptics {
  const geometry = {
    grooveDensityPerMm,
    incidenceDeg: 12,
    pixelPitchUm,
    centreNm: 0.5 * (firstNm + lastNm),
    centrePx: 0.5 * (samples - 1),
  };
  return { kind: "grating", ...geometry, focalLengthMm: focalLengthForRange(geometry, lastNm - firstNm, samples) };
}

/** Fibre array spectrometer, 2,048 pixels, about 200 to 850 nm, 16 bit. */
export function arraySpectrometer(changes: Changes = {}): SimulatedInstrument {
  return {
    kind: "array-spectrometer",
    fileAxis: "pixel",
    samples: 2048,
    trueAxis: opticsForRange(200, 850, 2048, 600),
    axisError: { offsetNm: 0, scaleNm: 0 },
    fwhm: { value: 3.6, unit: "px" },
    shape: { kind: "gaussian" },
    readNoiseCounts: 18,
    countsPerElectron: 0.6,
    baseline: { offsetCounts: 900, slopeCounts: 30, humpCounts: 0 },
    ceilingCounts: 65535,
    isDigitised: true,
    smoothingSamples: 1,
    axisDecimals: 3,
    ...changes,
  };
}

/** Scanning monochromator, 0.05 nm steps. */
export function scanningMonochromator(changes: Changes = {}): SimulatedInstrument {
  return {
    ...arraySpectrometer(),
    kind: "scanning-monochromator",
    fileAxis: "nm",
    samples: 6001,
    trueAxis: { kind: "stepped", firstNm: 400, stepNm: 0.05 },
    fwhm: { value: 0.3, unit: "nm" },
    readNoiseCounts: 4,
    countsPerElectron: 1,
    baseline: { offsetCounts: 20, slopeCounts: 0, humpCounts: 0 },
    ceilingCounts: 1_000_000,
    axisDecimals: 2,
    ...changes,
  };
}

/** Spectrophotometer in its emission mode, 1 nm bandwidth, 0.1 nm steps. */
export function spectrophotometer(changes: Changes = {}): SimulatedInstrument {
  return {
    ...scanningMonochromator(),
    kind: "spectrophotometer",
    samples: 6101,
    trueAxis: { kind: "stepped", firstNm: 190, stepNm: 0.1 },
    fwhm: { value: 1, unit: "nm" },
    axisDecimals: 1,
    ...changes,
  };
}

/** 532 nm Raman bench with a cooled array of 1,024 pixels, about 540 to 660 nm. */
export function ramanBench(changes: Changes = {}): SimulatedInstrument {
  return {
    ...arraySpectrometer(),
    kind: "raman",
    samples: 1024,
    trueAxis: opticsForRange(540, 660, 1024, 1200, 26),
    fwhm: { value: 3.2, unit: "px" },
    readNoiseCounts: 6,
    countsPerElectron: 1,
    baseline: { offsetCounts: 600, slopeCounts: 0, humpCounts: 40 },
    ...changes,
  };
}
