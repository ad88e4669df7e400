/**
 * Dispersion: named lines to a wavelength axis, by weighted least squares in a Chebyshev basis (`scatter-fit.ts`).
 *
 * Weights     1/(u² + tau²), u = the line's own uncertainty as a wavelength, tau = scatter beyond the stated uncertainties,
 *             one value for all lines. tau² is added, not multiplied: what is left over on real instruments (pixel response,
 *             line shape) does not shrink with the brightness of a line. The axis that is reported has tau only where the
 *             scatter is more than chance explains (chi-squared, 1 in 10); else every second axis would state too much
 * Degree      given, or the lowest whose leave-one-out RMS (a rejected line counted threefold) is within 5 % of the best; at most 5, and
 *             always two lines more than coefficients. When it was chosen so, the difference to the next higher degree enters the covariance
 * Lines       which are left out, and why: `choose-lines.ts`
 * Covariance  of the Chebyshev terms between the outermost lines used. Where tau had to be estimated from few lines it is grown
 *             so that twice the standard uncertainty still holds 95.45 % (Student's t over 2)
 * Refuses     too few lines, an axis that turns within the capture, values that are not finite
 */
import type { AxisMeaning, Dispersion, PixelAxis } from "../analysis/types.ts";
import {
  chebyshevToPowers,
  differentiateChebyshev,
  evaluateChebyshev,
  chebyshevArgument,
} from "../numeric/chebyshev.ts";
import { chiSquareUpperTail } from "../numeric/distributions.ts";
import { coverageFactorFor } from "../uncertainty/budget.ts";
import { isMonotonic } from "./axis.ts";
import { rejectOutliers, setVagueAside } from "./choose-lines.ts";
import { describeAxis } from "./describe-axis.ts";
import { reportedScatter, ScatterFit } from "./scatter-fit.ts";

/** Highest degree a grating instrument's axis is given (common practice, no source). */
export const highestDegree = 5;
/** Lines there must be beyond the number of coefficients. */
export const sparePoints = 2;
/** A simpler axis is taken when its leave-one-out RMS is within this factor of the best. */
export const degreeTolerance = 1.05;
/** Size at which a rejected line counts when degrees are compared, in leave-one-out RMS. */
const outlierSize = 3;
/** Scatter beyond the stated uncertainties is believed where chance alone would show it this seldom. */
export const scatterLevel = 0.1;

export interface DispersionPoint {
  /** Position of the line, px (or the unit of the axis). */
  position: number;
  /** Standard uncertainty of the position, > 0. */
  positionUnc: number;
  wavelengthNm: number;
  /** Standard uncertainty of the wavelength (reference, blend), nm; 0 is allowed. */
  wavelengthUncNm: number;
  /** Height over noise, where known: lines much fainter than the others are left out. */
  signalToNoise?: number;
}

export interface DispersionOptions {
  /** Degree kept from earlier calibrations, or null: chosen by leave-one-out. */
  degree: number | null;
  /** Cap of a chosen degree; default and most 5. */
  maxDegree?: number;
  /** First and last position of the capture: the axis must be monotonic between them. */
  firstPosition: number;
  lastPosition: number;
  meaning: AxisMeaning;
  /** Full width of a line in the unit of `position`: no line within a fiftieth of it is ever rejected. */
  fwhm: number;
}

export interface DispersionRefusal {
  outcome: "refused";
  reason: string;
}
export interface FittedDispersion {
  outcome: "fitted";
  dispersion: Dispersion;
  /** wavelength - axis, nm, per point, rejected ones included. */
  residualsNm: number[];
  /** The same for an axis fitted without that line, nm; of a rejected line its residual. */
  leaveOneOutNm: number[];
  /** Influence of each used line on its own fitted value, 0..1; 0 for rejected ones. */
  leverages: number[];
  /** Residual over its own standard deviation (that of a fit which does not know the line, for rejected ones). */
  studentisedResiduals: number[];
  /** Scatter beyond the stated uncertainties, nm; 0 where they explain all of it. */
  excessScatterNm: number;
}

/**
 * Fit an axis to named lines.
 *
 * @param points  any order, at least one more than coefficients when the degree is given, three more than the degree else
 * @returns the axis with covariance, its coefficients in ordinary powers, what was rejected and why; or a refusal
 */
export function fitDispersion(
  points: readonly DispersionPoint[],
  options: DispersionOptions,
): FittedDispersion | DispersionRefusal {
  for (const point of points) {
    const finite = Number.isFinite(point.position) && Number.isFinite(point.wavelengthNm);
    if (!finite || !(point.positionUnc > 0) || !(point.wavelengthUncNm >= 0)) {
      return refuse("A line's position, wavelength or uncertainty is not a usable number: no axis was fitted.");
    }
  }
  if (options.degree !== null && (!Number.isInteger(options.degree) || options.degree < 1)) {
    return refuse(`The degree of the axis must be a whole number from 1; got ${options.degree}.`);
  }
  const cap = Math.min(options.maxDegree ?? highestDegree, highestDegree);
  const highest = options.degree ?? Math.min(cap, points.length - 1 - sparePoints);
  const needed = options.degree === null ? 2 + sparePoints : options.degree + 2;
  if (highest < 1 || points.length < needed) {
    return refuse(
      `${points.length} usable ${points.length === 1 ? "line is" : "lines are"} too few for an axis` +
        (options.degree === null ? "" : ` of degree ${options.degree}`) +
        `: at least ${needed} are needed. Add lines or another lamp.`,
    );
  }
  if (new Set(points.map((point) => point.position)).size < needed) {
    return refuse("Several lines share one position: no axis was fitted.");
  }

  const degreeOfSlope = Math.min(highest, 3);
  const positions = Float64Array.from(points, (point) => point.position);
  const wavelengths = Float64Array.from(points, (point) => point.wavelengthNm);
  const ownUncNm = new Float64Array(points.length).fill(1);
  const fit = new ScatterFit(positions, wavelengths, ownUncNm, highest);
  const nmPerPx = stateUncertainties(points, fit, ownUncNm, degreeOfSlope);
  const used = points.map(() => true);
  const vague = setVagueAside(points, ownUncNm, fit, used, degreeOfSlope, needed + 1);
  const usable = countUsed(used);
  const choices: { degree: number; used: boolean[]; cost: number }[] = [];
  for (let degree = options.degree ?? 1; degree <= highest; degree++) {
    const kept = used.slice();
    rejectOutliers(fit, kept, degree, options.fwhm, nmPerPx);
    if (options.degree === null && degree > 1 && fit.degreesOfFreedom < sparePoints) break;
    choices.push({ degree, used: kept, cost: costOf(fit, usable - fit.rowCount) });
  }
  let best = Number.POSITIVE_INFINITY;
  for (const choice of choices) best = Math.min(best, choice.cost);
  const chosen = choices.find((choice) => choice.cost <= degreeTolerance * best) as (typeof choices)[number];
  return finish(points, ownUncNm, chosen.used, vague, chosen.degree, options);
}

const refuse = (reason: string): DispersionRefusal => ({ outcome: "refused", reason });

function countUsed(used: readonly boolean[]): number {
  let count = 0;
  for (const one of used) if (one) count += 1;
  return count;
}

/**
 * Fills in each line's stated uncertainty as a wavelength, nm; the local dispersion comes from an unweighted fit.
 *
 * @param ownUncNm  all ones on entry: the weights of `fit`
 * @returns mean dispersion between the outermost lines, nm per unit of position
 */
function stateUncertainties(
  points: readonly DispersionPoint[],
  fit: ScatterFit,
  ownUncNm: Float64Array,
  degree: number,
): number {
  fit.solve(ownUncNm, degree, null);
  const coefficients = fit.coefficients.slice(0, degree + 1);
  const derivative = differentiateChebyshev(coefficients);
  const perUnit = 2 / (fit.last - fit.first);
  points.forEach((point, i) => {
    const t = chebyshevArgument(point.position, fit.first, fit.last);
    const positionNm = point.positionUnc * evaluateChebyshev(derivative, t) * perUnit;
    ownUncNm[i] = Math.sqrt(positionNm * positionNm + point.wavelengthUncNm * point.wavelengthUncNm);
  });
  const ends = evaluateChebyshev(coefficients, 1) - evaluateChebyshev(coefficients, -1);
  return Math.abs(ends) / (fit.last - fit.first);
}

/** Leave-one-out RMS with every rejected line counted at the size of an outlier: a degree may not buy a good fit with them. */
function costOf(fit: ScatterFit, rejected: number): number {
  let sum = 0;
  for (let k = 0; k < fit.rowCount; k++) sum += fit.leftOut(k) * fit.leftOut(k);
  const count = fit.rowCount;
  return Math.sqrt((sum / count) * ((count + rejected * outlierSize * outlierSize) / (count + rejected)));
}

function finish(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: readonly boolean[],
  vague: ReadonlyMap<number, string>,
  degree: number,
  options: DispersionOptions,
): FittedDispersion | DispersionRefusal {
  const kept = points.map((_, i) => i).filter((i) => used[i]);
  const cap = Math.min(options.maxDegree ?? highestDegree, highestDegree);
  const hasDoubt = options.degree === null && degree + 1 <= cap && kept.length >= degree + 2 + sparePoints;
  // Over the lines used alone, so that the covariance belongs to terms between the outermost of them.
  const fit = new ScatterFit(
    Float64Array.from(kept, (i) => (points[i] as DispersionPoint).position),
    Float64Array.from(kept, (i) => (points[i] as DispersionPoint).wavelengthNm),
    Float64Array.from(kept, (i) => ownUncNm[i] as number),
    hasDoubt ? degree + 1 : degree,
  );
  const all = new Uint8Array(kept.length).fill(1);
  const next = hasDoubt ? solveSparingly(fit, all, degree + 1) : null;
  const coefficients = solveSparingly(fit, all, degree);
  fit.fillLeverages();
  const covariance = Array.from(fit.covariance());
  growForFewLines(covariance, fit);
  if (next !== null) addDegreeDoubt(covariance, coefficients, next);
  const axis: PixelAxis = {
    coefficients: Array.from(chebyshevToPowers(coefficients, fit.first, fit.last)),
    firstPx: fit.first,
    lastPx: fit.last,
    chebyshevCovariance: covariance,
    degreesOfFreedom: fit.degreesOfFreedom,
    meaning: options.meaning,
  };
  const { firstPosition, lastPosition } = options;
  if (!isMonotonic(axis, Math.min(firstPosition, fit.first), Math.max(lastPosition, fit.last))) {
    return refuse(
      `The axis through these ${kept.length} lines would turn back within the capture, which no grating does: ` +
        "a line is named wrongly or too few lines hold the ends. No axis was made.",
    );
  }
  return describeAxis(points, options, {
    axis,
    family: "polynomial",
    degree,
    degreeChosenBy: options.degree === null ? "leave-one-out" : "given",
    kept,
    leverages: fit.leverages,
    unc: fit.unc,
    excessScatterNm: Math.sqrt(fit.excessSquare),
    rejectedBecause: new Map(
      [...vague].map(([line, why]) => [line, `${why}: it could add nothing to the axis and was left out of it.`]),
    ),
  });
}

/** Solves with the stated uncertainties, and with the scatter beyond them only where it is more than chance. */
function solveSparingly(fit: ScatterFit, used: Uint8Array, degree: number): Float64Array {
  fit.solve(used, degree, null);
  const freedom = fit.degreesOfFreedom;
  if (freedom > 0 && fit.statedChiSquare > freedom && chiSquareUpperTail(fit.statedChiSquare, freedom) < scatterLevel) {
    fit.solve(used, degree, reportedScatter);
  }
  return fit.coefficients.slice(0, degree + 1);
}

/** A scatter estimated with few degrees of freedom: Welch and Satterthwaite's share of it in a line's variance, then t over 2. */
function growForFewLines(covariance: number[], fit: ScatterFit): void {
  if (fit.excessSquare === 0) return;
  let share = 0;
  for (let k = 0; k < fit.rowCount; k++) {
    share += fit.excessSquare / ((fit.unc[k] as number) * (fit.unc[k] as number) * fit.rowCount);
  }
  const factor = coverageFactorFor(fit.degreesOfFreedom / (share * share)) / 2;
  for (let k = 0; k < covariance.length; k++) covariance[k] = (covariance[k] as number) * factor * factor;
}

/**
 * A degree that was chosen might as well have been the next: the change of every coefficient enters as a variance, that of
 * the highest, which has no place in this axis, as a constant.
 */
function addDegreeDoubt(covariance: number[], chosen: Float64Array, next: Float64Array): void {
  const size = chosen.length;
  const change = (j: number): number => (next[j] as number) - (j < size ? (chosen[j] as number) : 0);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++)
      covariance[i * size + j] = (covariance[i * size + j] as number) + change(i) * change(j);
  }
  covariance[0] = (covariance[0] as number) + change(size) * change(size);
}
