/**
 * Forward model of an array spectrometer: the wavelength at each pixel from the geometry, with its partial derivatives.
 *
 *   m lambda = d (sin alpha + sin beta),  beta = beta0 ± theta,  beta0 = alpha - K
 *   theta    = atan2(s cos(tilt), f + s sin(tilt)),  s = (px - axisPx) pitch
 *
 * alpha     angle of incidence from the grating's normal; K included angle, between the incoming beam and the optical axis of the
 *           camera; both angles positive on the same side of the normal (signs as in equation.ts). Turning the grating changes
 *           alpha at a fixed K; moving the camera changes K at a fixed alpha
 * tilt      of the flat detector about the point where the optical axis meets it; 0 is square to the axis
 * px        counted from 0 at the centre of the first sample, fractions allowed
 * Units     degrees, mm, µm, 1/mm, nm (in the medium the grating stands in)
 * Source    the grating equation (Born and Wolf, 8.6.1) and plane trigonometry; derivatives by hand, held to differences of the
 *           model by array-spectrometer.test.ts
 * Limits    one plane: no tilt of lines (smile), no distortion by the mirrors, thin optics
 */
import { asin, atan2, cos, PI, sin } from "../numeric/elementary.ts";
import { anglesForIncludedAngle, type GratingAnswer } from "./equation.ts";

export interface ArrayGeometry {
  /** Order of diffraction, not 0. */
  order: number;
  grooveDensityPerMm: number;
  incidenceDeg: number;
  includedAngleDeg: number;
  focalLengthMm: number;
  detectorTiltDeg: number;
  pixelPitchUm: number;
  /** Pixel where the optical axis meets the detector. */
  axisPx: number;
  /** 1: the diffraction angle grows with the pixel; -1: it falls. In a positive order the wavelength then grows or falls with it. */
  direction: 1 | -1;
}

/** What can be fitted, in the order of the partial derivatives. */
export const ARRAY_PARAMETERS = [
  "grooveDensityPerMm",
  "incidenceDeg",
  "includedAngleDeg",
  "focalLengthMm",
  "detectorTiltDeg",
  "axisPx",
] as const;
export type ArrayParameter = (typeof ARRAY_PARAMETERS)[number];

const DEGREE = PI / 180;

/** @throws {RangeError} what no spectrometer has */
function checkArrayGeometry(geometry: ArrayGeometry): void {
  for (const [name, value] of Object.entries(geometry))
    if (!Number.isFinite(value)) throw new RangeError(`${name} must be a finite number; got ${value}`);
  if (geometry.order === 0 || !Number.isInteger(geometry.order))
    throw new RangeError(`The order must be a whole number other than 0; got ${geometry.order}`);
  for (const name of ["grooveDensityPerMm", "focalLengthMm", "pixelPitchUm"] as const)
    if (!(geometry[name] > 0)) throw new RangeError(`${name} must be above 0; got ${geometry[name]}`);
  if (!(Math.abs(geometry.detectorTiltDeg) < 90) || !(Math.abs(geometry.incidenceDeg) < 90))
    throw new RangeError("Tilt and incidence must lie within ±90°");
}

/**
 * The model with its sines taken once. `evaluate` leaves its results in fields, so that a spectrum's worth of pixels costs no memory.
 */
export class ArrayModel {
  /** Results of the last `evaluate`. */
  wavelengthNm = 0;
  /** d wavelength / d pixel. */
  dispersionNmPerPx = 0;
  /** Derivatives by `ARRAY_PARAMETERS`: nm per 1/mm, nm per degree (twice), nm per mm, nm per degree, nm per px. */
  readonly partials = new Float64Array(ARRAY_PARAMETERS.length);
  private readonly amplitudeNm: number;
  private readonly sineIn: number;
  private readonly cosineIn: number;
  private readonly axisRad: number;
  private readonly sineTilt: number;
  private readonly cosineTilt: number;

  /** @throws {RangeError} what no spectrometer has */
  constructor(readonly geometry: ArrayGeometry) {
    checkArrayGeometry(geometry);
    this.amplitudeNm = 1e6 / (geometry.order * geometry.grooveDensityPerMm);
    const incidence = geometry.incidenceDeg * DEGREE;
    this.sineIn = sin(incidence);
    this.cosineIn = cos(incidence);
    this.axisRad = incidence - geometry.includedAngleDeg * DEGREE;
    this.sineTilt = sin(geometry.detectorTiltDeg * DEGREE);
    this.cosineTilt = cos(geometry.detectorTiltDeg * DEGREE);
  }

  /** Wavelength, dispersion and partial derivatives at a pixel, into the fields. */
  evaluate(px: number): void {
    const { geometry, sineTilt, cosineTilt, amplitudeNm } = this;
    const pitchMm = geometry.pixelPitchUm / 1000;
    const f = geometry.focalLengthMm;
    const s = (px - geometry.axisPx) * pitchMm;
    const along = f + s * sineTilt;
    const across = s * cosineTilt;
    const distanceSquare = s * s + f * f + 2 * f * s * sineTilt;
    const beta = this.axisRad + geometry.direction * atan2(across, along);
    const cosineOut = cos(beta);
    this.wavelengthNm = amplitudeNm * (this.sineIn + sin(beta));
    // d lambda / d theta, then theta by each length or angle that makes it.
    const perTheta = amplitudeNm * cosineOut * geometry.direction;
    this.dispersionNmPerPx = (perTheta * f * cosineTilt * pitchMm) / distanceSquare;
    const { partials } = this;
    partials[0] = -this.wavelengthNm / geometry.grooveDensityPerMm;
    partials[1] = amplitudeNm * (this.cosineIn + cosineOut) * DEGREE;
    partials[2] = -amplitudeNm * cosineOut * DEGREE;
    partials[3] = (-perTheta * across) / distanceSquare;
    partials[4] = (-perTheta * s * (s + f * sineTilt) * DEGREE) / distanceSquare;
    partials[5] = -this.dispersionNmPerPx;
  }

  /** d wavelength / d pixel pitch (nm per µm) at the pixel evaluated last. */
  pitchPartial(px: number): number {
    return (this.dispersionNmPerPx * (px - this.geometry.axisPx)) / this.geometry.pixelPitchUm;
  }

  wavelengthAtPx(px: number): number {
    this.evaluate(px);
    return this.wavelengthNm;
  }

  /**
   * Pixel of a wavelength, exact; null where no light of it leaves the grating towards the front of the detector. The pixel may lie
   * beyond the detector's ends: the model does not know how many it has.
   */
  pxOfWavelength(wavelengthNm: number): number | null {
    const { geometry } = this;
    const sineOut = wavelengthNm / this.amplitudeNm - this.sineIn;
    if (!(Math.abs(sineOut) <= 1)) return null;
    const theta = geometry.direction * (asin(sineOut) - this.axisRad);
    // tan(theta) = s cos(tilt) / (f + s sin(tilt)), solved for s; a ray that runs along the detector or away from it has no pixel.
    const facing = cos(theta + geometry.detectorTiltDeg * DEGREE);
    if (!(facing > 0) || !(Math.abs(theta) < PI / 2)) return null;
    const s = (geometry.focalLengthMm * sin(theta)) / facing;
    return geometry.axisPx + (s * 1000) / geometry.pixelPitchUm;
  }
}

/** Wavelength, nm, at a pixel. @throws {RangeError} what no spectrometer has */
export function arrayWavelengthNm(geometry: ArrayGeometry, px: number): number {
  return new ArrayModel(geometry).wavelengthAtPx(px);
}

/** Pixel of a wavelength, or null where none receives it; inverse of `arrayWavelengthNm`. @throws {RangeError} as above */
export function arrayPixel(geometry: ArrayGeometry, wavelengthNm: number): number | null {
  return new ArrayModel(geometry).pxOfWavelength(wavelengthNm);
}

/** Optics as a data sheet has them, with the wavelength on the optical axis. */
export interface ArrayOpticsAtCentre {
  order: number;
  grooveDensityPerMm: number;
  includedAngleDeg: number;
  focalLengthMm: number;
  pixelPitchUm: number;
  /** Wavelength on the optical axis. */
  centreNm: number;
  axisPx: number;
  /** Default 0. */
  detectorTiltDeg?: number;
  /** Default 1. */
  direction?: 1 | -1;
}

/**
 * Geometry of an instrument from its optics and the wavelength on its optical axis.
 *
 * @returns refused where no angle sends that wavelength there
 * @throws {RangeError} what no spectrometer has
 */
export function arrayGeometryAtCentre(
  optics: ArrayOpticsAtCentre,
): { outcome: "solved"; geometry: ArrayGeometry } | Extract<GratingAnswer, { outcome: "refused" }> {
  const angles = anglesForIncludedAngle({ ...optics, wavelengthNm: optics.centreNm });
  if (angles.outcome === "refused") return angles;
  const geometry: ArrayGeometry = {
    order: optics.order,
    grooveDensityPerMm: optics.grooveDensityPerMm,
    incidenceDeg: angles.incidenceDeg,
    includedAngleDeg: optics.includedAngleDeg,
    focalLengthMm: optics.focalLengthMm,
    detectorTiltDeg: optics.detectorTiltDeg ?? 0,
    pixelPitchUm: optics.pixelPitchUm,
    axisPx: optics.axisPx,
    direction: optics.direction ?? 1,
  };
  checkArrayGeometry(geometry);
  return { outcome: "solved", geometry };
}
