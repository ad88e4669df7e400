/**
 * The axis that a simulated instrument really has: wavelength at each sample, and back.
 *
 * A polynomial of the pixel, or the optics of a fixed grating: m lambda = d (sin alpha + sin beta), the detector at the focal
 * length and tilted about the pixel of the optical axis. The simulator's own, so that it shares nothing with what it tests.
 */
import { asin, cos, PI, sin, tan, atan2 } from "../numeric/elementary.ts";

export interface GratingOptics {
  kind: "grating";
  grooveDensityPerMm: number;
  /** Angle of incidence. */
  incidenceDeg: number;
  focalLengthMm: number;
  pixelPitchUm: number;
  /** Wavelength on the optical axis and the pixel where that axis meets the detector. */
  centreNm: number;
  centrePx: number;
  /** Detector turned about that pixel; default 0. */
  tiltDeg?: number;
  /** Default 1. */
  order?: number;
  /** True: wavelength falls with the pixel. Default false. */
  isReversed?: boolean;
}

export interface PolynomialAxis {
  kind: "polynomial";
  /** nm, ascending powers of the pixel. */
  coefficients: readonly number[];
}

/** Equal steps, as a scanning instrument drives them. */
export interface SteppedAxis {
  kind: "stepped";
  firstNm: number;
  stepNm: number;
}

export type TrueAxis = GratingOptics | PolynomialAxis | SteppedAxis;

const RADIAN = PI / 180;

/** Wavelength, nm, at a fractional sample index. @throws {RangeError} where the optics send no light there */
export function wavelengthAt(axis: TrueAxis, px: number): number {
  if (axis.kind === "stepped") return axis.firstNm + axis.stepNm * px;
  if (axis.kind === "polynomial") {
    let sum = 0;
    for (let i = axis.coefficients.length - 1; i >= 0; i--) sum = sum * px + axis.coefficients[i]!;
    return sum;
  }
  const grooveNm = 1e6 / axis.grooveDensityPerMm;
  const order = axis.order ?? 1;
  const sineIn = sin(axis.incidenceDeg * RADIAN);
  const centreSine = (order * axis.centreNm) / grooveNm - sineIn;
  if (!(Math.abs(centreSine) < 1)) throw new RangeError(`These optics cannot send ${axis.centreNm} nm anywhere`);
  const tilt = (axis.tiltDeg ?? 0) * RADIAN;
  const alongMm = ((px - axis.centrePx) * axis.pixelPitchUm * (axis.isReversed ? -1 : 1)) / 1000;
  const away = atan2(alongMm * cos(tilt), axis.focalLengthMm + alongMm * sin(tilt));
  return (grooveNm / order) * (sineIn + sin(asin(centreSine) + away));
}

/** Fractional sample index of a wavelength by bisection, or null where it falls outside [first, last]. */
export function sampleIndexOf(axis: TrueAxis, wavelengthNm: number, first: number, last: number): number | null {
  let low = first;
  let high = last;
  const rising = wavelengthAt(axis, high) > wavelengthAt(axis, low);
  const side = (px: number): boolean => wavelengthAt(axis, px) < wavelengthNm === rising;
  if (!side(low) || side(high)) return null;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (side(middle)) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

/** Focal length, mm, that spreads a range over the samples: for building optics that fit a wanted range. */
export function focalLengthForRange(
  optics: Omit<GratingOptics, "focalLengthMm" | "kind">,
  rangeNm: number,
  samples: number,
): number {
  const grooveNm = 1e6 / optics.grooveDensityPerMm;
  const order = optics.order ?? 1;
  const sine = (order * optics.centreNm) / grooveNm - sin(optics.incidenceDeg * RADIAN);
  // Half the range on each side in angle; exact for a symmetric spread, near enough for any other.
  const half =
    0.5 *
    (asin(Math.min(0.999, sine + (order * rangeNm) / (2 * grooveNm))) -
      asin(Math.max(-0.999, sine - (order * rangeNm) / (2 * grooveNm))));
  return (samples * optics.pixelPitchUm) / 2000 / tan(half);
}
