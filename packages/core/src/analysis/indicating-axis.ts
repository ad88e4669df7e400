/**
 * The axis whose errors are judged: the capture's own wavelengths, or an earlier axis of the instrument's pixels (or drive steps).
 */
import { axisNm, axisSlope } from "../dispersion/axis.ts";
import { referenceMedium, type ReferenceMedium } from "./reference-medium.ts";
import type { AnalysisSetup, PixelAxis, Spectrum } from "./types.ts";

export interface IndicatingAxis extends ReferenceMedium {
  /** Wavelength the instrument indicates at a position, nm. */
  indicatedNm(position: number): number;
  /** nm per unit of position. */
  slopeNm(position: number): number;
  /** nm from one sample to the next, positive. */
  nmPerSample(position: number): number;
  /** Step in which the axis' values are written where that rounds them, nm; else 0. */
  displayStepNm: number;
}

/** @returns null where nothing says what the instrument indicated: a pixel or step axis with only a range */
export function indicatingAxisOf(spectrum: Spectrum, setup: AnalysisSetup): IndicatingAxis | null {
  const { mode } = setup;
  if (spectrum.axisKind === "wavelength") return ownAxis(spectrum, referenceMedium(setup.axisMeaning, setup.room));
  if (mode.kind !== "earlier-axis" || mode.axis === "own") return null;
  return earlierAxis(mode.axis, spectrum, referenceMedium(mode.axis.meaning, setup.room));
}

function ownAxis(spectrum: Spectrum, medium: ReferenceMedium): IndicatingAxis {
  const { positions } = spectrum;
  return {
    ...medium,
    indicatedNm: (position) => position,
    slopeNm: () => 1,
    nmPerSample: (position) => stepAt(positions, position),
    displayStepNm: displayStepOf(positions),
  };
}

function earlierAxis(axis: PixelAxis, spectrum: Spectrum, medium: ReferenceMedium): IndicatingAxis {
  return {
    ...medium,
    indicatedNm: (position) => axisNm(axis, position),
    slopeNm: (position) => axisSlope(axis, position),
    nmPerSample: (position) => Math.abs(axisSlope(axis, position)) * stepAt(spectrum.positions, position),
    displayStepNm: 0,
  };
}

/** Distance of neighbouring samples at a position. */
function stepAt(positions: Float64Array, position: number): number {
  let low = 0;
  let high = positions.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (positions[middle]! <= position) low = middle;
    else high = middle;
  }
  return positions[high]! - positions[low]!;
}

const mostDecimals = 4;

/**
 * The last written place of an unevenly spaced axis: its samples are rounded to it. An evenly spaced axis is exact as written, and an
 * axis written to more than four decimals of a nanometre loses nothing that matters.
 */
function displayStepOf(positions: Float64Array): number {
  const n = positions.length;
  const even = (positions[n - 1]! - positions[0]!) / (n - 1);
  let isEven = true;
  for (let i = 1; i < n && isEven; i += 1) isEven = Math.abs(positions[i]! - positions[i - 1]! - even) < 1e-6 * even;
  if (isEven) return 0;
  let factor = 1;
  for (let decimals = 0; decimals <= mostDecimals; decimals += 1) {
    let fits = true;
    for (let i = 0; i < n && fits; i += 1) {
      const scaled = positions[i]! * factor;
      fits = Math.abs(scaled - Math.round(scaled)) < 1e-6 * Math.max(1, Math.abs(scaled)) * 1e-3 + 1e-7;
    }
    if (fits) return 1 / factor;
    factor *= 10;
  }
  return 0;
}
