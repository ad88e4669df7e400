/**
 * First and last wavelength that an array spectrometer can show, from its optics alone, with their uncertainties.
 *
 * For the naming of lines in the *range* mode where nobody knows the range but the data sheet gives the optics and somebody knows
 * roughly where the instrument points: the wavelength on the optical axis, or the angle of incidence.
 *
 * Source    the model of array-spectrometer.ts; uncertainties by the law of propagation (JCGM 100, 5.1.2) with its own derivatives,
 *           those of the wavelength on the axis taken through the angle that makes it
 * Units     as in array-spectrometer.ts; standard uncertainties in the unit of their quantity
 * Assumed   where no uncertainty is stated: groove density 0.1 %, focal length 1 %, included angle 0.5°, detector tilt 2°, optical
 *           axis 2 % of the pixels away from the middle (common practice, no source); such entries are listed in `assumed`
 */
import { ArrayModel, arrayGeometryAtCentre, type ArrayGeometry } from "./array-spectrometer.ts";
import type { GratingAnswer } from "./equation.ts";

export interface OpticsOfRange {
  order?: number;
  grooveDensityPerMm: number;
  grooveDensityUncPerMm?: number;
  focalLengthMm: number;
  focalLengthUncMm?: number;
  includedAngleDeg: number;
  includedAngleUncDeg?: number;
  detectorTiltDeg?: number;
  detectorTiltUncDeg?: number;
  pixelPitchUm: number;
  pixelCount: number;
  /** Default: the middle of the detector. */
  axisPx?: number;
  axisUncPx?: number;
  /** Where it points: the wavelength on the optical axis … */
  centreNm?: number;
  centreUncNm?: number;
  /** … or the angle of incidence. One of the two. */
  incidenceDeg?: number;
  incidenceUncDeg?: number;
}

export interface RangeFromOptics {
  outcome: "known";
  /** Rising; standard uncertainties and their covariance (the ends move together when the grating turns). */
  firstNm: number;
  firstUncNm: number;
  lastNm: number;
  lastUncNm: number;
  covarianceNm2: number;
  /** Mean dispersion, nm/px. */
  dispersionNmPerPx: number;
  geometry: ArrayGeometry;
  /** Quantities whose uncertainty was assumed. */
  assumed: string[];
}

export type RangeRefusal =
  | { outcome: "refused"; reason: "nowhere-pointed" | "no-light"; detail: string }
  | Extract<GratingAnswer, { outcome: "refused" }>;

/**
 * Range of an instrument.
 *
 * @throws {RangeError} what no spectrometer has; a negative uncertainty; both a centre and an angle of incidence
 */
export function rangeFromOptics(optics: OpticsOfRange): RangeFromOptics | RangeRefusal {
  if (optics.centreNm !== undefined && optics.incidenceDeg !== undefined)
    throw new RangeError("Give the wavelength on the axis or the angle of incidence, not both");
  if (!(Number.isInteger(optics.pixelCount) && optics.pixelCount >= 2))
    throw new RangeError(`A detector needs at least 2 pixels; got ${optics.pixelCount}`);
  const axisPx = optics.axisPx ?? 0.5 * (optics.pixelCount - 1);
  const common = {
    order: optics.order ?? 1,
    grooveDensityPerMm: optics.grooveDensityPerMm,
    includedAngleDeg: optics.includedAngleDeg,
    focalLengthMm: optics.focalLengthMm,
    detectorTiltDeg: optics.detectorTiltDeg ?? 0,
    pixelPitchUm: optics.pixelPitchUm,
    axisPx,
    direction: 1 as const,
  };
  let geometry: ArrayGeometry;
  if (optics.centreNm !== undefined) {
    const at = arrayGeometryAtCentre({ ...common, centreNm: optics.centreNm });
    if (at.outcome === "refused") return at;
    geometry = at.geometry;
  } else if (optics.incidenceDeg !== undefined) geometry = { ...common, incidenceDeg: optics.incidenceDeg };
  else {
    return {
      outcome: "refused",
      reason: "nowhere-pointed",
      detail:
        "The optics tell how wide the range is, not where it lies. Give the wavelength on the optical axis or the angle of incidence.",
    };
  }

  const assumed: string[] = [];
  const uncertainty = (stated: number | undefined, otherwise: number, name: string): number => {
    if (stated === undefined) {
      assumed.push(name);
      return otherwise;
    }
    if (!(stated >= 0)) throw new RangeError(`The uncertainty of the ${name} cannot be negative`);
    return stated;
  };
  const model = new ArrayModel(geometry);
  const onAxis = new ArrayModel(geometry);
  onAxis.evaluate(axisPx);
  // In the order of ARRAY_PARAMETERS; the incidence is put last, as what sets where the instrument points.
  const grooveUnc = uncertainty(optics.grooveDensityUncPerMm, 0.001 * optics.grooveDensityPerMm, "groove density");
  const angleUnc = uncertainty(optics.includedAngleUncDeg, 0.5, "included angle");
  const focalUnc = uncertainty(optics.focalLengthUncMm, 0.01 * optics.focalLengthMm, "focal length");
  const tiltUnc = uncertainty(optics.detectorTiltUncDeg, 2, "detector tilt");
  const axisUnc = uncertainty(optics.axisUncPx, 0.02 * optics.pixelCount, "pixel of the optical axis");
  const isByCentre = optics.centreNm !== undefined;
  const pointing = isByCentre
    ? uncertainty(optics.centreUncNm, 0.01 * optics.centreNm!, "wavelength on the optical axis")
    : uncertainty(optics.incidenceUncDeg, 0.5, "angle of incidence");

  const contributions = (px: number): { nm: number; each: number[] } => {
    model.evaluate(px);
    const p = model.partials;
    const a = onAxis.partials;
    // A centre held while another quantity changes is kept there by the incidence: d lambda - (d lambda / d alpha) / (d centre / d alpha) d centre.
    const turn = isByCentre ? p[1]! / a[1]! : 0;
    const each = [
      (p[0]! - turn * a[0]!) * grooveUnc,
      (p[2]! - turn * a[2]!) * angleUnc,
      (p[3]! - turn * a[3]!) * focalUnc,
      (p[4]! - turn * a[4]!) * tiltUnc,
      // The centre lies on the axis wherever the axis is: only the pixels around it move.
      p[5]! * axisUnc,
      (isByCentre ? turn : p[1]!) * pointing,
    ];
    return { nm: model.wavelengthNm, each };
  };
  const low = contributions(0);
  const high = contributions(optics.pixelCount - 1);
  const [first, last] = low.nm <= high.nm ? [low, high] : [high, low];
  if (!(first.nm > 0)) {
    return {
      outcome: "refused",
      reason: "no-light",
      detail: `With these optics one end of the detector would show ${first.nm.toFixed(1)} nm. Check order, angles and pixel pitch.`,
    };
  }
  const product = (a: number[], b: number[]): number => a.reduce((sum, value, i) => sum + value * b[i]!, 0);
  return {
    outcome: "known",
    firstNm: first.nm,
    firstUncNm: Math.sqrt(product(first.each, first.each)),
    lastNm: last.nm,
    lastUncNm: Math.sqrt(product(last.each, last.each)),
    covarianceNm2: product(first.each, last.each),
    dispersionNmPerPx: (last.nm - first.nm) / (optics.pixelCount - 1),
    geometry,
    assumed,
  };
}
