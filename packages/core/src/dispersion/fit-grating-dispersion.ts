/**
 * The second family of axes: the geometry of an array spectrometer, fitted to named lines (`grating/fit-array-spectrometer.ts`).
 *
 * Known      groove density, order, included angle, pixel pitch: from the instrument's data, held. The optical axis meets the middle of the
 *            capture
 * Free       angle of incidence and focal length; the detector's tilt; the included angle: two, three or four of them, the fewest whose
 *            leave-one-out RMS is within 5 % of the best, always two lines more than free parameters
 * Scatter    as for polynomials: where the stated uncertainties do not explain it, one variance that all lines share
 * Reported   as a polynomial that follows the geometry to 1e-6 px over the capture, with the covariance of its Chebyshev terms, so that
 *            everything that reads an axis reads this one
 * Lines      those the polynomial was fitted to: what it rejected stays out
 */
import type { ArrayOptics, Dispersion, PixelAxis } from "../analysis/types.ts";
import {
  ARRAY_PARAMETERS,
  arrayGeometryAtCentre,
  ArrayModel,
  type ArrayGeometry,
  type ArrayParameter,
} from "../grating/array-spectrometer.ts";
import { type ArrayFit, fitArraySpectrometer } from "../grating/fit-array-spectrometer.ts";
import { chebyshevToPowers, evaluateChebyshev, chebyshevArgument } from "../numeric/chebyshev.ts";
import { chiSquareUpperTail } from "../numeric/distributions.ts";
import { axisNm, axisSlope, isMonotonic } from "./axis.ts";
import { chebyshevTerms, covarianceOfTerms } from "./chebyshev-terms.ts";
import { describeAxis } from "./describe-axis.ts";
import {
  degreeTolerance,
  type DispersionOptions,
  type DispersionPoint,
  type DispersionRefusal,
  type FittedDispersion,
  scatterLevel,
  sparePoints,
} from "./fit-dispersion.ts";

const freeSets: readonly (readonly ArrayParameter[])[] = [
  ["incidenceDeg", "focalLengthMm"],
  ["incidenceDeg", "focalLengthMm", "detectorTiltDeg"],
  ["incidenceDeg", "focalLengthMm", "detectorTiltDeg", "includedAngleDeg"],
];
const units: Record<ArrayParameter, string> = {
  grooveDensityPerMm: "1/mm",
  incidenceDeg: "°",
  includedAngleDeg: "°",
  focalLengthMm: "mm",
  detectorTiltDeg: "°",
  axisPx: "px",
};
/** The polynomial follows the geometry to this, px, and has at most this degree (what `isMonotonic` can judge). */
const followedPx = 1e-6;
const highestFollowing = 12;
const scatterRounds = 12;

interface GratingFit {
  fit: ArrayFit;
  unc: Float64Array;
  leverages: Float64Array;
  excessNm: number;
  leaveOneOutRmsNm: number;
}

/**
 * Fit the geometry to the lines that a polynomial was fitted to.
 *
 * @param polynomial  the other family's fit of the same points; its rejected lines stay out, and it says where to start
 * @returns the axis, `families` telling how both predict lines they were not fitted to; or a refusal in a sentence
 */
export function fitGratingDispersion(
  points: readonly DispersionPoint[],
  optics: ArrayOptics,
  options: DispersionOptions,
  polynomial: FittedDispersion,
): FittedDispersion | DispersionRefusal {
  const start = startGeometry(optics, options, polynomial.dispersion.axis);
  if (start === null) {
    return refuse(
      "The optics given do not send these wavelengths to this detector: check groove density, order and included angle.",
    );
  }
  const rejected = new Set(polynomial.dispersion.rejected.map((one) => one.line));
  const kept = points.map((_, i) => i).filter((i) => !rejected.has(i));
  const own = Float64Array.from(kept, (i) => {
    const { position, positionUnc, wavelengthUncNm } = points[i] as DispersionPoint;
    const positionNm = positionUnc * axisSlope(polynomial.dispersion.axis, position);
    return Math.sqrt(positionNm * positionNm + wavelengthUncNm * wavelengthUncNm);
  });
  const lines = kept.map((i) => points[i] as DispersionPoint);
  const fits: GratingFit[] = [];
  let why = `${lines.length} lines are too few for a geometry: at least ${2 + sparePoints} are needed.`;
  for (const free of freeSets) {
    if (lines.length < free.length + sparePoints) break;
    const fit = fitScattered(lines, own, start, free);
    if (typeof fit === "string") why = fit;
    else fits.push(fit);
  }
  if (fits.length === 0) return refuse(why);
  let best = Number.POSITIVE_INFINITY;
  for (const one of fits) best = Math.min(best, one.leaveOneOutRmsNm);
  const chosen = fits.find((one) => one.leaveOneOutRmsNm <= degreeTolerance * best) as GratingFit;
  const axis = axisOf(chosen, lines, options);
  const { firstPosition, lastPosition } = options;
  if (!isMonotonic(axis, Math.min(firstPosition, axis.firstPx), Math.max(lastPosition, axis.lastPx))) {
    return refuse("The geometry through these lines would turn back within the capture. No axis was made.");
  }
  const described = describeAxis(points, options, {
    axis,
    family: "grating",
    degree: axis.coefficients.length - 1,
    degreeChosenBy: "leave-one-out",
    kept,
    leverages: chosen.leverages,
    unc: chosen.unc,
    excessScatterNm: chosen.excessNm,
    rejectedBecause: new Map(polynomial.dispersion.rejected.map(({ line, reason }) => [line, reason])),
  });
  described.dispersion.geometry = geometryOf(chosen.fit);
  described.dispersion.families = comparedFamilies(polynomial.dispersion, described.dispersion, chosen.fit.free.length);
  return described;
}

const refuse = (reason: string): DispersionRefusal => ({ outcome: "refused", reason });

/** Optics with the wavelength that the polynomial has at the middle of the capture on the optical axis. */
function startGeometry(optics: ArrayOptics, options: DispersionOptions, axis: PixelAxis): ArrayGeometry | null {
  const axisPx = (options.firstPosition + options.lastPosition) / 2;
  const isRising = axisSlope(axis, axisPx) > 0;
  const answer = arrayGeometryAtCentre({
    order: optics.order,
    grooveDensityPerMm: optics.groovesPerMm,
    includedAngleDeg: optics.includedAngleDeg,
    focalLengthMm: optics.focalLengthMm,
    pixelPitchUm: optics.pixelPitchUm,
    centreNm: axisNm(axis, axisPx),
    axisPx,
    direction: isRising === optics.order > 0 ? 1 : -1,
  });
  return answer.outcome === "refused" ? null : answer.geometry;
}

/** A fit with the scatter beyond the stated uncertainties; a sentence where the lines can't tell the parameters. */
function fitScattered(
  lines: readonly DispersionPoint[],
  own: Float64Array,
  start: ArrayGeometry,
  free: readonly ArrayParameter[],
): GratingFit | string {
  let excessSquare = 0;
  const unc = Float64Array.from(own);
  for (let round = 0; ; round++) {
    const fit = fitArraySpectrometer(
      lines.map(({ position, wavelengthNm }, k) => ({ px: position, wavelengthNm, uncNm: unc[k] as number })),
      start,
      { free },
    );
    if (fit.outcome === "refused") return fit.detail;
    const freedom = fit.degreesOfFreedom;
    // Newton's step on chi-squared(tau²) = degrees of freedom, as for polynomials.
    let surplus = -freedom;
    let slope = 0;
    fit.residualsNm.forEach((residual, k) => {
      const weight = 1 / ((unc[k] as number) * (unc[k] as number));
      surplus += weight * residual * residual;
      slope += weight * weight * residual * residual;
    });
    const isExplained =
      round === 0 ? chiSquareUpperTail(fit.chiSquare, freedom) >= scatterLevel : surplus <= 1e-3 * freedom;
    if (isExplained || round === scatterRounds) {
      const leverages = leveragesOf(fit, lines, unc);
      let sum = 0;
      fit.residualsNm.forEach((residual, k) => {
        const left = residual / Math.max(1 - (leverages[k] as number), 1e-6);
        sum += left * left;
      });
      return {
        fit,
        unc,
        leverages,
        excessNm: Math.sqrt(excessSquare),
        leaveOneOutRmsNm: Math.sqrt(sum / lines.length),
      };
    }
    excessSquare += surplus / slope;
    for (let k = 0; k < unc.length; k++) unc[k] = Math.sqrt((own[k] as number) * (own[k] as number) + excessSquare);
  }
}

/** Influence of each line on its own fitted value: its partials, the covariance of the parameters, its weight. */
function leveragesOf(fit: ArrayFit, lines: readonly DispersionPoint[], unc: Float64Array): Float64Array {
  const model = new ArrayModel(fit.geometry);
  const columns = fit.free.map((name) => ARRAY_PARAMETERS.indexOf(name));
  const n = columns.length;
  return Float64Array.from(lines, (line, k) => {
    model.evaluate(line.position);
    let variance = 0;
    for (let a = 0; a < n; a++) {
      for (let b = 0; b < n; b++) {
        variance +=
          (model.partials[columns[a] as number] as number) *
          (fit.covariance[a * n + b] as number) *
          (model.partials[columns[b] as number] as number);
      }
    }
    return Math.min(variance / ((unc[k] as number) * (unc[k] as number)), 1);
  });
}

/** The geometry as a polynomial over capture and lines, its covariance in Chebyshev terms between the outermost lines. */
function axisOf({ fit }: GratingFit, lines: readonly DispersionPoint[], options: DispersionOptions): PixelAxis {
  const model = new ArrayModel(fit.geometry);
  let firstPx = Number.POSITIVE_INFINITY;
  let lastPx = Number.NEGATIVE_INFINITY;
  for (const { position } of lines) {
    firstPx = Math.min(firstPx, position);
    lastPx = Math.max(lastPx, position);
  }
  const from = Math.min(firstPx, options.firstPosition);
  const to = Math.max(lastPx, options.lastPosition);
  const columns = fit.free.map((name) => ARRAY_PARAMETERS.indexOf(name));
  const fill = (px: number, values: Float64Array): void => {
    model.evaluate(px);
    values[0] = model.wavelengthNm;
    columns.forEach((column, j) => (values[j + 1] = model.partials[column] as number));
  };
  let wide: Float64Array[] = [];
  for (let degree = 3; degree <= highestFollowing; degree++) {
    wide = chebyshevTerms(from, to, degree, columns.length + 1, fill);
    if (follows(model, wide[0] as Float64Array, from, to)) break;
  }
  const degree = (wide[0] as Float64Array).length - 1;
  const narrow = chebyshevTerms(firstPx, lastPx, degree, columns.length, (px, values) => {
    const t = chebyshevArgument(px, from, to);
    for (let j = 0; j < columns.length; j++) values[j] = evaluateChebyshev(wide[j + 1] as Float64Array, t);
  });
  return {
    coefficients: Array.from(chebyshevToPowers(wide[0] as Float64Array, from, to)),
    firstPx,
    lastPx,
    chebyshevCovariance: covarianceOfTerms(narrow, fit.covariance),
    degreesOfFreedom: fit.degreesOfFreedom,
    meaning: options.meaning,
  };
}

function follows(model: ArrayModel, terms: Float64Array, from: number, to: number): boolean {
  const checks = 40;
  for (let k = 0; k <= checks; k++) {
    const px = from + (k * (to - from)) / checks;
    model.evaluate(px);
    const off = evaluateChebyshev(terms, chebyshevArgument(px, from, to)) - model.wavelengthNm;
    if (Math.abs(off) > followedPx * Math.abs(model.dispersionNmPerPx)) return false;
  }
  return true;
}

function geometryOf(fit: ArrayFit): NonNullable<Dispersion["geometry"]> {
  return ARRAY_PARAMETERS.map((parameter) => {
    const j = fit.free.indexOf(parameter);
    const unc = j < 0 ? 0 : Math.sqrt(fit.covariance[j * fit.free.length + j] as number);
    return { parameter, value: fit.geometry[parameter], unc, unit: units[parameter] };
  });
}

/** Leave-one-out RMS of both families over the same lines, in words too. */
function comparedFamilies(polynomial: Dispersion, grating: Dispersion, free: number): Dispersion["families"] {
  const ratio = grating.leaveOneOutRmsNm / polynomial.leaveOneOutRmsNm;
  const note =
    ratio > degreeTolerance
      ? "predicts left-out lines less well than the polynomial: the optics' data may be off"
      : ratio < 1 / degreeTolerance
        ? "predicts left-out lines better than the polynomial"
        : "predicts left-out lines as well as the polynomial";
  return [
    {
      family: "polynomial",
      parameters: polynomial.degree + 1,
      leaveOneOutRmsNm: polynomial.leaveOneOutRmsNm,
      note: `degree ${polynomial.degree}`,
    },
    { family: "grating", parameters: free, leaveOneOutRmsNm: grating.leaveOneOutRmsNm, note },
  ];
}
