/**
 * The grating equation m lambda = d (sin alpha + sin beta), solved for each of its quantities, and what follows from it.
 *
 * Signs     alpha and beta are measured from the grating's normal and are positive on the same side, so that order 0
 *           (mirror) has beta = -alpha; orders may be negative
 * Units     wavelengths in nm (in the medium the grating stands in), angles in degrees, groove density in 1/mm (d = 1e6 nm / it)
 * Source    M. Born, E. Wolf, Principles of Optics, 7th ed., 8.6.1 (with the sign of the second angle turned)
 */
import { asin, cos, PI, sin } from "../numeric/elementary.ts";

const DEGREE = PI / 180;

/** What the equation ties together. */
export interface GratingState {
  order: number;
  wavelengthNm: number;
  grooveDensityPerMm: number;
  incidenceDeg: number;
  diffractionDeg: number;
}

export type GratingAnswer =
  | { outcome: "solved"; value: number }
  /** `evanescent`: no such angle exists. `undetermined`: the equation does not fix it (order 0, or both angles opposite). */
  | { outcome: "refused"; reason: "evanescent" | "undetermined"; detail: string };

function solved(value: number): GratingAnswer {
  return { outcome: "solved", value };
}

function checkFinite(values: readonly number[]): void {
  if (values.some((value) => !Number.isFinite(value)))
    throw new RangeError("Every quantity of the grating equation must be a finite number");
}

function checkGrooves(grooveDensityPerMm: number): void {
  if (!(grooveDensityPerMm > 0))
    throw new RangeError(`Groove density must be above 0 per mm; got ${grooveDensityPerMm}`);
}

/** sin alpha + sin beta. */
function sineSum(state: Pick<GratingState, "incidenceDeg" | "diffractionDeg">): number {
  return sin(state.incidenceDeg * DEGREE) + sin(state.diffractionDeg * DEGREE);
}

/** m lambda / d. */
function pathInGrooves(state: Pick<GratingState, "order" | "wavelengthNm" | "grooveDensityPerMm">): number {
  return (state.order * state.wavelengthNm * state.grooveDensityPerMm) / 1e6;
}

function angleOf(sine: number, what: string): GratingAnswer {
  if (Math.abs(sine) > 1) {
    return {
      outcome: "refused",
      reason: "evanescent",
      detail: `The ${what} would need a sine of ${sine.toFixed(4)}: light of this order does not leave the grating.`,
    };
  }
  return solved(asin(sine) / DEGREE);
}

/** Diffraction angle, degrees: beta = asin(m lambda / d - sin alpha). @throws {RangeError} not finite, no grooves */
export function diffractionAngleDeg(state: Omit<GratingState, "diffractionDeg">): GratingAnswer {
  checkFinite([state.order, state.wavelengthNm, state.incidenceDeg]);
  checkGrooves(state.grooveDensityPerMm);
  return angleOf(pathInGrooves(state) - sin(state.incidenceDeg * DEGREE), "diffraction angle");
}

/** Angle of incidence, degrees: alpha = asin(m lambda / d - sin beta). @throws {RangeError} not finite, no grooves */
export function incidenceAngleDeg(state: Omit<GratingState, "incidenceDeg">): GratingAnswer {
  checkFinite([state.order, state.wavelengthNm, state.diffractionDeg]);
  checkGrooves(state.grooveDensityPerMm);
  return angleOf(pathInGrooves(state) - sin(state.diffractionDeg * DEGREE), "angle of incidence");
}

/** Wavelength, nm: lambda = d (sin alpha + sin beta) / m; negative where the order lies on the other side. @throws {RangeError} not finite, no grooves */
export function gratingWavelengthNm(state: Omit<GratingState, "wavelengthNm">): GratingAnswer {
  checkFinite([state.order, state.incidenceDeg, state.diffractionDeg]);
  checkGrooves(state.grooveDensityPerMm);
  if (state.order === 0) {
    return { outcome: "refused", reason: "undetermined", detail: "Order 0 sends every wavelength to the same place." };
  }
  return solved((sineSum(state) * 1e6) / (state.order * state.grooveDensityPerMm));
}

/** Order, as a real number (whole where the state is possible): m = d (sin alpha + sin beta) / lambda. @throws {RangeError} not finite, no grooves */
export function gratingOrder(state: Omit<GratingState, "order">): GratingAnswer {
  checkFinite([state.wavelengthNm, state.incidenceDeg, state.diffractionDeg]);
  checkGrooves(state.grooveDensityPerMm);
  if (!(state.wavelengthNm > 0)) throw new RangeError(`A wavelength must be above 0 nm; got ${state.wavelengthNm}`);
  return solved((sineSum(state) * 1e6) / (state.wavelengthNm * state.grooveDensityPerMm));
}

/** Groove density, 1/mm: (sin alpha + sin beta) / (m lambda). @throws {RangeError} not finite */
export function grooveDensityPerMm(state: Omit<GratingState, "grooveDensityPerMm">): GratingAnswer {
  checkFinite([state.order, state.wavelengthNm, state.incidenceDeg, state.diffractionDeg]);
  const density = (sineSum(state) * 1e6) / (state.order * state.wavelengthNm);
  if (!(density > 0 && density < Infinity)) {
    return {
      outcome: "refused",
      reason: "undetermined",
      detail: "No groove density sends this order of this wavelength between these angles.",
    };
  }
  return solved(density);
}

/**
 * Both angles of a mounting with a fixed angle between the beams (alpha - beta = included), as a monochromator turns its grating:
 * m lambda / d = 2 sin phi cos(K / 2), alpha = phi + K / 2, beta = phi - K / 2.
 *
 * @throws {RangeError} not finite, no grooves
 */
export function anglesForIncludedAngle(
  state: Pick<GratingState, "order" | "wavelengthNm" | "grooveDensityPerMm"> & { includedAngleDeg: number },
):
  | { outcome: "solved"; incidenceDeg: number; diffractionDeg: number; rotationDeg: number }
  | Extract<GratingAnswer, { outcome: "refused" }> {
  checkFinite([state.order, state.wavelengthNm, state.includedAngleDeg]);
  checkGrooves(state.grooveDensityPerMm);
  const half = state.includedAngleDeg / 2;
  const rotation = angleOf(pathInGrooves(state) / (2 * cos(half * DEGREE)), "grating's rotation");
  if (rotation.outcome === "refused") return rotation;
  return {
    outcome: "solved",
    incidenceDeg: rotation.value + half,
    diffractionDeg: rotation.value - half,
    rotationDeg: rotation.value,
  };
}

/**
 * Free spectral range, nm: lambda / |m|. Light of order m from lambda to lambda + lambda / m is not met by order m + 1 of
 * wavelengths above lambda.
 *
 * @throws {RangeError} wavelength not above 0, order 0
 */
export function freeSpectralRangeNm(wavelengthNm: number, order: number): number {
  if (!(wavelengthNm > 0) || order === 0 || !Number.isFinite(order))
    throw new RangeError("Free spectral range needs a wavelength above 0 and an order other than 0");
  return wavelengthNm / Math.abs(order);
}

/** Angular dispersion d beta / d lambda at fixed alpha, rad/nm: m / (d cos beta). @throws {RangeError} not finite, no grooves */
export function angularDispersionRadPerNm(
  state: Pick<GratingState, "order" | "grooveDensityPerMm" | "diffractionDeg">,
): number {
  checkFinite([state.order, state.diffractionDeg]);
  checkGrooves(state.grooveDensityPerMm);
  return (state.order * state.grooveDensityPerMm) / (1e6 * cos(state.diffractionDeg * DEGREE));
}

/** Reciprocal linear dispersion at a detector square to the beam, nm/mm: d cos beta / (m f). @throws {RangeError} order 0, focal length not above 0 */
export function reciprocalDispersionNmPerMm(
  state: Pick<GratingState, "order" | "grooveDensityPerMm" | "diffractionDeg"> & { focalLengthMm: number },
): number {
  if (state.order === 0 || !(state.focalLengthMm > 0))
    throw new RangeError("Dispersion needs an order other than 0 and a focal length above 0");
  return 1 / (angularDispersionRadPerNm(state) * state.focalLengthMm);
}

/** The same per pixel, nm/px. @throws {RangeError} as above */
export function dispersionNmPerPx(
  state: Pick<GratingState, "order" | "grooveDensityPerMm" | "diffractionDeg"> & {
    focalLengthMm: number;
    pixelPitchUm: number;
  },
): number {
  return (reciprocalDispersionNmPerMm(state) * state.pixelPitchUm) / 1000;
}

/** Theoretical resolving power lambda / d lambda = |m| N of the grooves that are lit. @throws {RangeError} width or grooves not above 0 */
export function resolvingPower(order: number, grooveDensity: number, litWidthMm: number): number {
  checkGrooves(grooveDensity);
  if (!(litWidthMm > 0)) throw new RangeError(`The lit width must be above 0 mm; got ${litWidthMm}`);
  return Math.abs(order) * grooveDensity * litWidthMm;
}

/**
 * Bandwidth that a slit and pixels allow, nm FWHM. The slit's image is slit cos(alpha) / cos(beta) x focal ratio wide; a slit and an
 * exit slit or pixel of unequal widths make a trapezium, whose FWHM is the larger of the two.
 *
 * @param state.magnification  focal length of the camera over that of the collimator, default 1
 */
export function slitLimitedBandwidthNm(
  state: Pick<GratingState, "order" | "grooveDensityPerMm" | "diffractionDeg" | "incidenceDeg"> & {
    focalLengthMm: number;
    slitUm: number;
    exitUm: number;
    magnification?: number;
  },
): number {
  const anamorphic = cos(state.incidenceDeg * DEGREE) / cos(state.diffractionDeg * DEGREE);
  const imageUm = Math.abs(state.slitUm * anamorphic * (state.magnification ?? 1));
  return (Math.abs(reciprocalDispersionNmPerMm(state)) * Math.max(imageUm, state.exitUm)) / 1000;
}

/** What limits the bandwidth of an array spectrometer, nm FWHM each, at one wavelength. */
export interface BandwidthLimits {
  /** Image of the entrance slit. */
  slitNm: number;
  /** Two pixels: narrower lines are not sampled well enough to be told apart. */
  pixelNm: number;
  /** Wavelength over the resolving power of the grooves that are lit; null where their width is not known. */
  diffractionNm: number | null;
  largest: "slit" | "pixel" | "diffraction";
}

/**
 * Slit-, pixel- and diffraction-limited bandwidth. The line's own shape is none of them: imaging errors come on top.
 *
 * @param state.litWidthMm  width of the grating that is lit, or null
 * @throws {RangeError} as the functions for each
 */
export function bandwidthLimits(
  state: GratingState & {
    focalLengthMm: number;
    slitUm: number;
    pixelPitchUm: number;
    litWidthMm: number | null;
    magnification?: number;
  },
): BandwidthLimits {
  const slitNm = slitLimitedBandwidthNm({ ...state, exitUm: 0 });
  const pixelNm = 2 * Math.abs(dispersionNmPerPx(state));
  const diffractionNm =
    state.litWidthMm === null
      ? null
      : state.wavelengthNm / resolvingPower(state.order, state.grooveDensityPerMm, state.litWidthMm);
  let largest: BandwidthLimits["largest"] = slitNm >= pixelNm ? "slit" : "pixel";
  if (diffractionNm !== null && diffractionNm > Math.max(slitNm, pixelNm)) largest = "diffraction";
  return { slitNm, pixelNm, diffractionNm, largest };
}

/** Wavelengths of other orders that fall where `wavelengthNm` of `order` falls: m lambda = m' lambda', within [firstNm, lastNm]. */
export function overlappingOrders(
  wavelengthNm: number,
  order: number,
  firstNm: number,
  lastNm: number,
): { order: number; wavelengthNm: number }[] {
  if (!(wavelengthNm > 0 && firstNm > 0) || !Number.isInteger(order) || order < 1) {
    throw new RangeError("Overlapping orders need wavelengths above 0 and a whole order from 1");
  }
  const path = order * wavelengthNm;
  const found: { order: number; wavelengthNm: number }[] = [];
  for (let other = 1; path / other >= firstNm; other++) {
    const value = path / other;
    if (other !== order && value <= lastNm) found.push({ order: other, wavelengthNm: value });
  }
  return found;
}
