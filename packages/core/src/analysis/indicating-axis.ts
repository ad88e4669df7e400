/**
 * The axis whose errors are judged: the capture's own wavelengths, or an earlier axis of the instrument's pixels (or drive steps).
 */
import { axisNm, axisSlope, axisSlopeUncNm } from "../dispersion/axis.ts";
import { referenceMedium, type ReferenceMedium } from "./reference-medium.ts";
import type { AnalysisSetup, PixelAxis, Spectrum } from "./types.ts";

export interface IndicatingAxis extends ReferenceMedium {
  /** Wavelength the instrument indicates at a position, nm. */
  indicatedNm(position: number): number;
  /** nm per unit of position. */
  slopeNm(position: number): number;
  /** nm from one sample to the next, positive. */
  nmPerSample(position: number): number;
  /** Step that the axis' values are rounded to one by one, nm; 0 where rounding them loses nothing. */
  roundingStepNm: number;
  /** Of an evenly spaced wavelength axis its step and the last place it is written to, nm; else null. */
  evenAxis: { stepNm: number; lastPlaceNm: number } | null;
  /** Standard uncertainty of `slopeNm`, where the axis' covariance is known, nm per unit of position. */
  slopeUncNm?(position: number): number;
  /** Signed standard uncertainty that the laser of a Raman axis gives every line, nm. */
  laserUncNm?(position: number): number;
}

/** @returns null where nothing says what the instrument indicated: a pixel or step axis with only a range */
export function indicatingAxisOf(spectrum: Spectrum, setup: AnalysisSetup): IndicatingAxis | null {
  const { mode } = setup;
  if (spectrum.axisKind === "wavelength") return ownAxis(spectrum, referenceMedium(setup.axisMeaning, setup.room));
  if (mode.kind !== "earlier-axis" || mode.axis === "own") return null;
  return earlierAxis(mode.axis, spectrum, referenceMedium(mode.axis.meaning, setup.room));
}

function ownAxis(spectrum: Spectrum, medium: ReferenceMedium): IndicatingAxis {
  const { positions, ramanLaser } = spectrum;
  return {
    ...medium,
    ...(ramanLaser === undefined
      ? {}
      : {
          laserUncNm: (position: number): number => {
            const ratio = position / ramanLaser.wavelengthVacuumNm;
            return ramanLaser.uncNm * ratio * ratio;
          },
        }),
    indicatedNm: (position) => position,
    slopeNm: () => 1,
    nmPerSample: (position) => stepAt(positions, position),
    ...roundingOf(positions),
  };
}

function earlierAxis(axis: PixelAxis, spectrum: Spectrum, medium: ReferenceMedium): IndicatingAxis {
  return {
    ...medium,
    indicatedNm: (position) => axisNm(axis, position),
    slopeNm: (position) => axisSlope(axis, position),
    nmPerSample: (position) => Math.abs(axisSlope(axis, position)) * stepAt(spectrum.positions, position),
    slopeUncNm: (position) => axisSlopeUncNm(axis, position) ?? 0,
    roundingStepNm: 0,
    evenAxis: null,
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
 * How an axis is written. An unevenly spaced one has each sample rounded by itself to the last place; an evenly spaced one is exact as far as
 * its step goes, and its last place says how finely the display or drive can tell. More than four decimals of a nanometre lose
 * nothing that matters.
 */
function roundingOf(positions: Float64Array): Pick<IndicatingAxis, "roundingStepNm" | "evenAxis"> {
  const n = positions.length;
  const stepNm = (positions[n - 1]! - positions[0]!) / (n - 1);
  let isEven = true;
  for (let i = 1; i < n && isEven; i += 1) {
    isEven = Math.abs(positions[i]! - positions[i - 1]! - stepNm) < 1e-6 * stepNm;
  }
  const lastPlaceNm = lastPlaceOf(positions);
  return isEven
    ? { roundingStepNm: 0, evenAxis: lastPlaceNm > 0 ? { stepNm, lastPlaceNm } : null }
    : { roundingStepNm: lastPlaceNm, evenAxis: null };
}

/** The last written place of all samples, nm; 0 beyond four decimals. */
function lastPlaceOf(positions: Float64Array): number {
  let factor = 1;
  for (let decimals = 0; decimals <= mostDecimals; decimals += 1) {
    let fits = true;
    for (let i = 0; i < positions.length && fits; i += 1) {
      const scaled = positions[i]! * factor;
      fits = Math.abs(scaled - Math.round(scaled)) < 1e-9 * Math.max(1, Math.abs(scaled)) + 1e-7;
    }
    if (fits) return 1 / factor;
    factor *= 10;
  }
  return 0;
}
