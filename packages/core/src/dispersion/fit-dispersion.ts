/**
 * Dispersion: named lines to a wavelength axis, by weighted least squares in a Chebyshev basis (`scatter-fit.ts`).
 *
 * Weights     1/(u² + tau²), u = the line's own uncertainty as a wavelength, tau = scatter beyond the stated uncertainties,
 *             one value for all lines. tau² is added, not multiplied: what is left over on real instruments (pixel response,
 *             line shape) does not shrink with the brightness of a line. The axis that is reported has tau only where the
 *             scatter is more than chance explains (chi-squared, 1 in 10); else every second axis would state too much
 * Degree      given, or the lowest whose leave-one-out RMS (a rejected line counted threefold) is within 5 % of the best; at most 5, and
 *             always two lines more than coefficients. When it was chosen so, the difference to the next higher degree enters the covariance
 * Earlier     where an earlier axis is given the new one is that plus a correction of the chosen degree: few lines then keep its curvature
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
  chebyshevBasis,
} from "../numeric/chebyshev.ts";
import { chiSquareUpperTail } from "../numeric/distributions.ts";
import { coverageFactorFor } from "../uncertainty/budget.ts";
import { axisNm, axisSlope, isMonotonic } from "./axis.ts";
import { chebyshevTerms, covarianceOfTerms } from "./chebyshev-terms.ts";
import { rejectOutliers, setVagueAside } from "./choose-lines.ts";
import { describeAxis } from "./describe-axis.ts";
import { reportedScatter, ScatterFit } from "./scatter-fit.ts";

/** Highest degree a grating instrument's axis is given (common practice, no source). */
const highestDegree = 5;
/** Lines there must be beyond the number of coefficients. */
export const sparePoints = 2;
/** A simpler axis is taken when its leave-one-out RMS is within this factor of the best. */
export const degreeTolerance = 1.1;
/** Share of the FWHM within which no line is called an outlier, however well the others agree. */
const unremarkableShare = 0.02;
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
  /**
   * An earlier axis: with a chosen degree the new one is it plus a correction of that degree, from 0, so that what few lines can't tell
   * (curvature, when the correction is a straight line) stays as it was. Ignored with a given degree.
   */
  earlier?: PixelAxis | null;
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
  const earlier = options.degree === null ? (options.earlier ?? null) : null;
  const lowest = options.degree ?? (earlier === null ? 1 : 0);
  const cap = Math.min(options.maxDegree ?? highestDegree, highestDegree);
  const highest = options.degree ?? Math.min(cap, points.length - 1 - sparePoints);
  const needed = options.degree === null ? lowest + 1 + sparePoints : options.degree + 2;
  if (highest < lowest || points.length < needed) {
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
  const values = Float64Array.from(points, (point) => point.wavelengthNm - earlierNm(earlier, point.position));
  const ownUncNm = new Float64Array(points.length).fill(1);
  const fit = new ScatterFit(positions, values, ownUncNm, highest);
  const nmPerPx = stateUncertainties(points, fit, ownUncNm, degreeOfSlope, earlier);
  const unremarkableNm = unremarkableShare * options.fwhm * nmPerPx;
  const used = points.map(() => true);
  const vague = setVagueAside(points, ownUncNm, fit, used, degreeOfSlope, needed + 1);
  const usable = countUsed(used);
  const choices: Choice[] = [];
  for (let degree = lowest; degree <= highest; degree++) {
    const kept = used.slice();
    rejectOutliers(fit, ownUncNm, kept, degree, unremarkableNm);
    if (options.degree === null && degree > lowest && fit.degreesOfFreedom < sparePoints) break;
    choices.push(choiceOf(fit, degree, kept));
  }
  const chosen = bestOf(choices, ownUncNm, usable);
  return finish(points, ownUncNm, chosen.used, vague, chosen.degree, earlier, options);
}

const earlierNm = (earlier: PixelAxis | null, position: number): number =>
  earlier === null ? 0 : axisNm(earlier, position);

const refuse = (reason: string): DispersionRefusal => ({ outcome: "refused", reason });

function countUsed(used: readonly boolean[]): number {
  let count = 0;
  for (const one of used) if (one) count += 1;
  return count;
}

/**
 * Fills in each line's stated uncertainty as a wavelength, nm; the local dispersion comes from the earlier axis or an unweighted fit.
 *
 * @param ownUncNm  all ones on entry: the weights of `fit`
 * @returns mean dispersion between the outermost lines, nm per unit of position
 */
function stateUncertainties(
  points: readonly DispersionPoint[],
  fit: ScatterFit,
  ownUncNm: Float64Array,
  degree: number,
  earlier: PixelAxis | null,
): number {
  fit.solve(ownUncNm, degree, null);
  const coefficients = fit.coefficients.slice(0, degree + 1);
  const derivative = differentiateChebyshev(coefficients);
  const perUnit = 2 / (fit.last - fit.first);
  let sum = 0;
  points.forEach((point, i) => {
    const t = chebyshevArgument(point.position, fit.first, fit.last);
    const slope = earlier === null ? evaluateChebyshev(derivative, t) * perUnit : axisSlope(earlier, point.position);
    const positionNm = point.positionUnc * slope;
    sum += Math.abs(slope);
    ownUncNm[i] = Math.sqrt(positionNm * positionNm + point.wavelengthUncNm * point.wavelengthUncNm);
  });
  return sum / points.length;
}

interface Choice {
  degree: number;
  used: boolean[];
  /** Residual of each line used against a fit that did not know it, nm; NaN of the others. */
  leftOutNm: Float64Array;
  excessSquare: number;
}

function choiceOf(fit: ScatterFit, degree: number, used: boolean[]): Choice {
  const leftOutNm = new Float64Array(fit.pointCount).fill(Number.NaN);
  for (let k = 0; k < fit.rowCount; k++) leftOutNm[fit.rows[k] as number] = fit.leftOut(k);
  return { degree, used, leftOutNm, excessSquare: fit.excessSquare };
}

/**
 * The simplest choice whose weighted leave-one-out RMS is within a few per cent of the best. Weights are the same for all: the lines' own
 * uncertainties and the least scatter that any of them needs, so that sharp lines tell more than blends. A rejected line counts at
 * the size of an outlier: a degree may not buy a good fit with them.
 */
function bestOf(choices: readonly Choice[], ownUncNm: Float64Array, usable: number): Choice {
  let leastSquare = Number.POSITIVE_INFINITY;
  for (const { excessSquare } of choices) leastSquare = Math.min(leastSquare, excessSquare);
  let best = Number.POSITIVE_INFINITY;
  const costs = choices.map(({ leftOutNm }) => {
    let sum = 0;
    let weights = 0;
    let count = 0;
    for (let i = 0; i < leftOutNm.length; i++) {
      const left = leftOutNm[i] as number;
      if (left !== left) continue;
      const weight = 1 / ((ownUncNm[i] as number) * (ownUncNm[i] as number) + leastSquare);
      sum += weight * left * left;
      weights += weight;
      count += 1;
    }
    const rejected = usable - count;
    const cost = Math.sqrt((sum / weights) * ((count + rejected * outlierSize * outlierSize) / usable));
    best = Math.min(best, cost);
    return cost;
  });
  return choices[costs.findIndex((cost) => cost <= degreeTolerance * best)] as Choice;
}

function finish(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: readonly boolean[],
  vague: ReadonlyMap<number, string>,
  degree: number,
  earlier: PixelAxis | null,
  options: DispersionOptions,
): FittedDispersion | DispersionRefusal {
  const kept = points.map((_, i) => i).filter((i) => used[i]);
  const cap = Math.min(options.maxDegree ?? highestDegree, highestDegree);
  const hasDoubt = options.degree === null && degree + 1 <= cap && kept.length >= degree + 2 + sparePoints;
  // Over the lines used alone, so that the covariance belongs to terms between the outermost of them.
  const fit = new ScatterFit(
    Float64Array.from(kept, (i) => (points[i] as DispersionPoint).position),
    Float64Array.from(kept, (i) => {
      const { wavelengthNm, position } = points[i] as DispersionPoint;
      return wavelengthNm - earlierNm(earlier, position);
    }),
    Float64Array.from(kept, (i) => ownUncNm[i] as number),
    hasDoubt ? degree + 1 : degree,
  );
  const all = new Uint8Array(kept.length).fill(1);
  const next = hasDoubt ? solveSparingly(fit, all, degree + 1) : null;
  const coefficients = solveSparingly(fit, all, degree);
  fit.fillLeverages();
  let covariance = Array.from(fit.covariance());
  growForFewLines(covariance, fit);
  if (next !== null) addDegreeDoubt(covariance, coefficients, next);
  let powers = Array.from(chebyshevToPowers(coefficients, fit.first, fit.last));
  if (earlier !== null) {
    powers = addedPowers(powers, earlier.coefficients);
    covariance = withEarlierCovariance(covariance, degree, earlier, powers.length, fit);
  }
  const axis: PixelAxis = {
    coefficients: powers,
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
    degree: axis.coefficients.length - 1,
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

function addedPowers(a: readonly number[], b: readonly number[]): number[] {
  return Array.from({ length: Math.max(a.length, b.length) }, (_, k) => (a[k] ?? 0) + (b[k] ?? 0));
}

/**
 * Covariance of earlier axis and correction together, as terms between the outermost lines: of the earlier one what lies above the
 * correction's degree, for what lies below is corrected. Unknown, it adds nothing; the doubt about the degree then has to do.
 */
function withEarlierCovariance(
  correction: readonly number[],
  degree: number,
  earlier: PixelAxis,
  coefficientCount: number,
  fit: ScatterFit,
): number[] {
  const known = earlier.chebyshevCovariance;
  const earlierSize = known === null ? 0 : Math.round(Math.sqrt(known.length));
  const size = Math.max(coefficientCount, earlierSize);
  const result = new Array<number>(size * size).fill(0);
  for (let i = 0; i <= degree; i++) {
    for (let j = 0; j <= degree; j++) result[i * size + j] = correction[i * (degree + 1) + j] as number;
  }
  if (known === null || earlier.lastPx === earlier.firstPx) return result;
  const moved = chebyshevTerms(fit.first, fit.last, size - 1, earlierSize, (px, values) =>
    values.set(chebyshevBasis(earlierSize - 1, chebyshevArgument(px, earlier.firstPx, earlier.lastPx))),
  );
  for (const terms of moved) terms.fill(0, 0, degree + 1);
  return covarianceOfTerms(moved, known).map((value, k) => value + (result[k] as number));
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
