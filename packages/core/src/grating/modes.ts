/**
 * Modes of an instrument: the curve of wavelength error that each change of its geometry makes.
 *
 * Error     indicated minus reference: the axis of before says one wavelength, the changed geometry sends another to that place. A
 *           parameter that grew by delta makes the error -(d wavelength / d parameter) delta
 * Source    partial derivatives of array-spectrometer.ts and scanning-monochromator.ts
 * Units     nm of error per unit of the parameter; thermal growth per ppm of length
 */
import { ARRAY_PARAMETERS, ArrayModel, type ArrayGeometry } from "./array-spectrometer.ts";
import {
  SINE_DRIVE_PARAMETERS,
  sineDriveReading,
  sineDriveWavelengthNm,
  type SineDrive,
} from "./scanning-monochromator.ts";

export interface GeometryMode {
  id: string;
  /** What happened, as half a sentence: "the detector shifted along the spectrum". */
  words: string;
  /** Unit of its amplitude. */
  unit: string;
  /** Error, nm, at each wavelength, for an amplitude of 1. */
  curveNm: Float64Array;
}

/**
 * Modes of an array spectrometer at the wavelengths of its lines.
 *
 * @throws {RangeError} what no spectrometer has; a wavelength that its geometry sends nowhere
 */
export function arrayModes(geometry: ArrayGeometry, wavelengthsNm: ArrayLike<number>): GeometryMode[] {
  const model = new ArrayModel(geometry);
  const n = wavelengthsNm.length;
  const by = ARRAY_PARAMETERS.map(() => new Float64Array(n));
  for (let i = 0; i < n; i++) {
    const px = model.pxOfWavelength(wavelengthsNm[i]!);
    if (px === null) throw new RangeError(`This geometry sends ${wavelengthsNm[i]} nm nowhere`);
    model.evaluate(px);
    by.forEach((curve, j) => (curve[i] = -model.partials[j]!));
  }
  const [groove, incidence, included, focal, tilt, axis] = by as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  const scaled = (curve: Float64Array, factor: number): Float64Array => curve.map((value) => value * factor);
  return [
    { id: "detector-shift", words: "the detector shifted along the spectrum", unit: "px", curveNm: axis },
    { id: "grating-turned", words: "the grating turned", unit: "deg", curveNm: incidence },
    { id: "camera-angle", words: "the angle between collimator and camera changed", unit: "deg", curveNm: included },
    { id: "focal-length", words: "the focal length changed", unit: "mm", curveNm: focal },
    {
      id: "grating-expansion",
      words: "the grating grew or shrank with temperature",
      unit: "ppm",
      // Grooves that lie further apart are fewer per mm.
      curveNm: scaled(groove, -1e-6 * geometry.grooveDensityPerMm),
    },
    { id: "detector-tilt", words: "the detector tilted", unit: "deg", curveNm: tilt },
  ];
}

/**
 * Modes of a scanning monochromator at the wavelengths of its lines, all reached from below.
 *
 * @throws {RangeError} what no monochromator has; a wavelength beyond its travel
 */
export function sineDriveModes(drive: SineDrive, wavelengthsNm: ArrayLike<number>): GeometryMode[] {
  const n = wavelengthsNm.length;
  const partials = new Float64Array(SINE_DRIVE_PARAMETERS.length);
  const scale = new Float64Array(n);
  const offset = new Float64Array(n);
  const zero = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const reading = sineDriveReading(drive, wavelengthsNm[i]!);
    if (reading === null) throw new RangeError(`This drive cannot go to ${wavelengthsNm[i]} nm`);
    sineDriveWavelengthNm(drive, reading, "from-below", partials);
    scale[i] = -partials[0]! * drive.stepsPerSine * 1e-6;
    offset[i] = -partials[1]!;
    zero[i] = -partials[3]!;
  }
  return [
    { id: "drive-offset", words: "the drive's counter shifted", unit: "steps", curveNm: offset },
    { id: "drive-scale", words: "the scale of the sine drive changed", unit: "ppm", curveNm: scale },
    { id: "grating-on-arm", words: "the grating turned on its arm", unit: "deg", curveNm: zero },
  ];
}
