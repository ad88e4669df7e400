/**
 * Dispersion: named lines to a wavelength axis, by weighted least squares in a Chebyshev basis (QR, no normal equations).
 *
 * Weights     1/(u² + tau²), u = the line's own uncertainty as a wavelength, tau = scatter beyond the stated uncertainties,
 *             one value for all lines, chosen so that the reduced chi-squared is 1 where it would be above (R. C. Paule,
 *             J. Mandel, J. Res. NBS 87 (1982) 377; from memory). tau² is added, not multiplied: what is left over on real
 *             instruments (pixel response, line shape) does not shrink with the brightness of a line
 * Degree      given, or the lowest whose leave-one-out RMS (a rejected line counted threefold) is within 5 % of the best; at most 5, and always two lines more
 *             than coefficients. When it was chosen so, the difference to the next higher degree enters the covariance
 * Left out    a line three times less sure than the median one, or less than 15 % as bright over the noise
 * Rejection   a line whose studentised deleted residual is larger than chance allows (1 % over all lines), and than FWHM/50, is left out, one
 *             at a time, at most a fifth of the lines, each reported; never where fewer than three degrees of freedom remain
 * Refuses     too few lines, an axis that turns within the capture, values that are not finite
 */
import type { AxisMeaning, Dispersion, PixelAxis } from "../analysis/types.ts";
import {
  chebyshevArgument,
  chebyshevToPowers,
  differentiateChebyshev,
  evaluateChebyshev,
  fillChebyshevBasis,
} from "../numeric/chebyshev.ts";
import { studentQuantile } from "../numeric/distributions.ts";
import { type LinearFit, solveLeastSquares } from "../numeric/linear-least-squares.ts";
import { axisNm, axisSlope, axisUncNm, isMonotonic } from "./axis.ts";

/** Highest degree a grating instrument's axis is given (common practice, no source). */
export const highestDegree = 5;
const sparePoints = 2;
const degreeTolerance = 1.05;
const rejectionLevel = 0.01;
const rejectableShare = 0.2;
/** Share of the FWHM within which no line is called an outlier, however well the others agree. */
const unremarkableShare = 0.02;
/** A line this many times less sure than the median one (a ninth of its weight) is left out from the start. */
const vagueFactor = 3;
/** A line fainter than this share of the median one is left out where at least this many surer lines remain. */
const faintShare = 0.15;
const fewestBesideFaint = 8;
const freedomForAgreement = 6;
const leastAgreedScale = 0.1;
/** Size at which a rejected line counts when degrees are compared, in leave-one-out RMS. */
const outlierSize = 3;
const sampleCount = 11;
/** How closely the reduced chi-squared is brought to 1. */
const scatterTolerance = 1e-4;
/** Coefficients are rounded so that their sum still gives the wavelength to this, px. */
const coefficientErrorPx = 0.001;

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

  const ownUncNm = statedUncNm(points, Math.min(highest, 3));
  const used = points.map(() => true);
  const vague = setVagueAside(points, ownUncNm, used, Math.min(highest, 3), needed + 1);
  const lowest = options.degree ?? 1;
  const choices: { degree: number; used: boolean[]; cost: number }[] = [];
  for (let degree = lowest; degree <= highest; degree++) {
    const kept = used.slice();
    const fit = rejectOutliers(points, ownUncNm, kept, degree, options.fwhm);
    const spare = fit.rows.length - degree - 1;
    if (options.degree === null && degree > 1 && spare < sparePoints) break;
    choices.push({ degree, used: kept, cost: costOf(fit, countUsed(used) - fit.rows.length) });
  }
  const best = Math.min(...choices.map((choice) => choice.cost));
  const chosen = choices.find((choice) => choice.cost <= degreeTolerance * best) as (typeof choices)[number];
  return finish(points, ownUncNm, chosen.used, vague, chosen.degree, options);
}

const refuse = (reason: string): DispersionRefusal => ({ outcome: "refused", reason });
const countUsed = (used: readonly boolean[]): number => used.reduce((sum, one) => sum + (one ? 1 : 0), 0);

interface Fit {
  linear: LinearFit;
  first: number;
  last: number;
  /** Indices of the points used. */
  rows: number[];
  /** Standard uncertainties used, tau included, nm. */
  unc: Float64Array;
  excessNm: number;
}

/** Each line's stated uncertainty as a wavelength, nm: the local dispersion comes from an unweighted fit. */
function statedUncNm(points: readonly DispersionPoint[], degree: number): Float64Array {
  let first = Number.POSITIVE_INFINITY;
  let last = Number.NEGATIVE_INFINITY;
  for (const point of points) {
    first = Math.min(first, point.position);
    last = Math.max(last, point.position);
  }
  const columns = degree + 1;
  const design = new Float64Array(points.length * columns);
  points.forEach((point, k) =>
    fillChebyshevBasis(design, k * columns, degree, chebyshevArgument(point.position, first, last)),
  );
  const wavelengths = points.map((point) => point.wavelengthNm);
  const plain = solveLeastSquares(design, points.length, columns, wavelengths, null);
  const derivative = differentiateChebyshev(plain.coefficients);
  return Float64Array.from(points, (point) => {
    const t = chebyshevArgument(point.position, first, last);
    const positionNm = (point.positionUnc * evaluateChebyshev(derivative, t) * 2) / (last - first);
    return Math.sqrt(positionNm * positionNm + point.wavelengthUncNm * point.wavelengthUncNm);
  });
}

/** Weighted fit with the scatter beyond the stated uncertainties estimated along. */
function fitOnce(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: readonly boolean[],
  degree: number,
): Fit {
  const rows: number[] = [];
  points.forEach((_, i) => {
    if (used[i]) rows.push(i);
  });
  const at = (k: number): DispersionPoint => points[rows[k] as number] as DispersionPoint;
  let first = at(0).position;
  let last = first;
  for (let k = 1; k < rows.length; k++) {
    first = Math.min(first, at(k).position);
    last = Math.max(last, at(k).position);
  }
  const columns = degree + 1;
  const design = new Float64Array(rows.length * columns);
  const wavelengths = new Float64Array(rows.length);
  const own = new Float64Array(rows.length);
  for (let k = 0; k < rows.length; k++) {
    fillChebyshevBasis(design, k * columns, degree, chebyshevArgument(at(k).position, first, last));
    wavelengths[k] = at(k).wavelengthNm;
    own[k] = ownUncNm[rows[k] as number] as number;
  }
  const unc = Float64Array.from(own);
  let linear = solveLeastSquares(design, rows.length, columns, wavelengths, unc);
  let excessSquare = 0;
  const freedom = rows.length - columns;
  if (freedom > 0) {
    // Newton's step on chi-squared(tau²) = freedom, which falls and is convex: it comes from below and never overshoots.
    for (let n = 0; n < 30; n++) {
      let surplus = -freedom;
      let slope = 0;
      for (let k = 0; k < rows.length; k++) {
        const weight = 1 / ((unc[k] as number) * (unc[k] as number));
        const part = weight * (linear.residuals[k] as number) * (linear.residuals[k] as number);
        surplus += part;
        slope += part * weight;
      }
      if (surplus <= freedom * scatterTolerance) break;
      excessSquare += surplus / slope;
      for (let k = 0; k < rows.length; k++) unc[k] = Math.sqrt((own[k] as number) * (own[k] as number) + excessSquare);
      linear = solveLeastSquares(design, rows.length, columns, wavelengths, unc);
    }
  }
  return { linear, first, last, rows, unc, excessNm: Math.sqrt(excessSquare) };
}

/** Residuals of an axis that did not know the line: r/(1 - leverage). */
function leaveOneOut(fit: Fit, k: number): number {
  return (fit.linear.residuals[k] as number) / Math.max(1 - (fit.linear.leverages[k] as number), 1e-6);
}

function leaveOneOutRms(fit: Fit): number {
  let sum = 0;
  for (let k = 0; k < fit.rows.length; k++) {
    const residual = leaveOneOut(fit, k);
    sum += residual * residual;
  }
  return Math.sqrt(sum / fit.rows.length);
}

/** Leave-one-out RMS with every rejected line counted at the size of an outlier: a degree may not buy a good fit with them. */
function costOf(fit: Fit, rejected: number): number {
  const rms = leaveOneOutRms(fit);
  const { length } = fit.rows;
  return rms * Math.sqrt((length + rejected * outlierSize * outlierSize) / (length + rejected));
}

/**
 * Lines so much less sure, or so much fainter, than the others that they would only blur the picture: left out before
 * anything is chosen. The uncertainty counts together with the scatter all lines share, so that bright lines do not crowd
 * out sound ones; the brightness counts beside it because fits on skewed or boxy lines state an uncertainty that is about
 * the same for bright lines, which share their shape and so its error, and for faint ones, which have noise on top.
 */
function setVagueAside(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: boolean[],
  degree: number,
  fewest: number,
): Map<number, string> {
  const vague = new Map<number, string>();
  if (points.length <= fewest) return vague;
  const unc = agreedUncNm(points, fitOnce(points, ownUncNm, used, degree));
  const usualUnc = medianOf(Array.from(unc));
  const brightness = points.map((point) => point.signalToNoise ?? Number.POSITIVE_INFINITY);
  const faintBelow = faintShare * medianOf(brightness.slice());
  const clearCount = brightness.filter((value) => value >= faintBelow).length;
  const order = points.map((_, i) => i).sort((a, b) => (unc[a] as number) - (unc[b] as number) || a - b);
  order.forEach((i, rank) => {
    if ((unc[i] as number) > vagueFactor * usualUnc && rank >= fewest) {
      const stated = (ownUncNm[i] as number).toFixed(4);
      vague.set(i, `Its uncertainty, ${stated} nm, is more than ${vagueFactor} times that of the usual line here`);
    } else if ((brightness[i] as number) < faintBelow && clearCount >= fewestBesideFaint) {
      vague.set(i, `It stands out of the noise less than ${faintShare * 100} % as far as the usual line here`);
    }
  });
  for (const i of vague.keys()) used[i] = false;
  return vague;
}

/**
 * Uncertainty of each line as the lines' own agreement shows it: where many agree better than their positions' stated
 * uncertainties, those are scaled down, while what a reference or a blend leaves open stays.
 */
function agreedUncNm(points: readonly DispersionPoint[], fit: Fit): Float64Array {
  const { residuals, degreesOfFreedom } = fit.linear;
  if (degreesOfFreedom < freedomForAgreement) return fit.unc;
  const typical =
    1.4826 * medianOf(Array.from(residuals, (residual, k) => Math.abs(residual / (fit.unc[k] as number))));
  const scale = Math.min(1, Math.max(typical, leastAgreedScale));
  return Float64Array.from(points, (point, k) => {
    const open = point.wavelengthUncNm * point.wavelengthUncNm;
    return Math.sqrt(scale * scale * ((fit.unc[k] as number) * (fit.unc[k] as number) - open) + open);
  });
}

const medianOf = (values: number[]): number => values.sort((a, b) => a - b)[(values.length - 1) >> 1] as number;

/** Takes out, one at a time, lines that the others contradict; returns the fit without them. */
function rejectOutliers(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: boolean[],
  degree: number,
  fwhm: number,
): Fit {
  const most = Math.floor(rejectableShare * points.length);
  for (let n = 0; ; n++) {
    const fit = fitOnce(points, ownUncNm, used, degree);
    if (n === most) return fit;
    const freedom = fit.linear.degreesOfFreedom;
    if (freedom < 3) return fit;
    let worst = -1;
    let largest = 0;
    let sum = 0;
    for (let k = 0; k < fit.rows.length; k++) {
      const ratio = (fit.linear.residuals[k] as number) / (fit.unc[k] as number);
      sum += ratio * ratio;
    }
    for (let k = 0; k < fit.rows.length; k++) {
      const room = Math.max(1 - (fit.linear.leverages[k] as number), 1e-6);
      const ratio = (fit.linear.residuals[k] as number) / (fit.unc[k] as number);
      // Scatter of the others alone (S. Weisberg, Applied Linear Regression: deleted residual). With few lines never below
      // what is stated; with more their own agreement tells, since fits on skewed or boxy lines state too much.
      const least = fit.excessNm > 0 || freedom >= freedomForAgreement ? 1e-12 : 1;
      const others = Math.max((sum - (ratio * ratio) / room) / (freedom - 1), least);
      const studentised = Math.abs(ratio) / Math.sqrt(room * others);
      if (studentised > largest) {
        largest = studentised;
        worst = k;
      }
    }
    if (worst < 0 || largest <= studentQuantile(1 - rejectionLevel / (2 * fit.rows.length), freedom - 1)) return fit;
    const nmPerPx =
      Math.abs(evaluateChebyshev(fit.linear.coefficients, 1) - evaluateChebyshev(fit.linear.coefficients, -1)) /
      (fit.last - fit.first);
    if (Math.abs(leaveOneOut(fit, worst)) < unremarkableShare * fwhm * nmPerPx) return fit;
    used[fit.rows[worst] as number] = false;
  }
}

function finish(
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: readonly boolean[],
  vague: ReadonlyMap<number, string>,
  degree: number,
  options: DispersionOptions,
): FittedDispersion | DispersionRefusal {
  const fit = fitOnce(points, ownUncNm, used, degree);
  const coefficients = Array.from(chebyshevToPowers(fit.linear.coefficients, fit.first, fit.last));
  const covariance = Array.from(fit.linear.covariance);
  if (options.degree === null) addDegreeDoubt(covariance, points, ownUncNm, used, fit, options);
  const axis: PixelAxis = {
    coefficients,
    firstPx: fit.first,
    lastPx: fit.last,
    chebyshevCovariance: covariance,
    degreesOfFreedom: fit.linear.degreesOfFreedom,
    meaning: options.meaning,
  };
  const { firstPosition, lastPosition } = options;
  if (!isMonotonic(axis, Math.min(firstPosition, fit.first), Math.max(lastPosition, fit.last))) {
    return refuse(
      `The axis through these ${fit.rows.length} lines would turn back within the capture, which no grating does: ` +
        "a line is named wrongly or too few lines hold the ends. No axis was made.",
    );
  }
  const residualsNm = points.map((point) => point.wavelengthNm - axisNm(axis, point.position));
  const leaveOneOutNm = residualsNm.slice();
  const leverages = points.map(() => 0);
  let sumNm = 0;
  let sumPx = 0;
  fit.rows.forEach((row, k) => {
    const residual = residualsNm[row] as number;
    leaveOneOutNm[row] = leaveOneOut(fit, k);
    leverages[row] = fit.linear.leverages[k] as number;
    const px = residual / axisSlope(axis, (points[row] as DispersionPoint).position);
    sumNm += residual * residual;
    sumPx += px * px;
  });
  const scatter = Math.sqrt(sumNm / Math.max(fit.linear.degreesOfFreedom, 1));
  const samples = Array.from({ length: sampleCount }, (_, k) => {
    const px = firstPosition + (k * (lastPosition - firstPosition)) / (sampleCount - 1);
    return { px, nm: axisNm(axis, px), uncNm: axisUncNm(axis, px) as number };
  });
  return {
    outcome: "fitted",
    dispersion: {
      family: "polynomial",
      degree,
      degreeChosenBy: options.degree === null ? "leave-one-out" : "given",
      coefficients: roundedCoefficients(axis, firstPosition, lastPosition),
      axis,
      rmsPx: Math.sqrt(sumPx / fit.rows.length),
      rmsNm: Math.sqrt(sumNm / fit.rows.length),
      leaveOneOutRmsNm: leaveOneOutRms(fit),
      samples,
      rejected: points.flatMap((_, line) =>
        used[line]
          ? []
          : [
              {
                line,
                reason: vague.has(line)
                  ? `${vague.get(line)}: it could add nothing to the axis and was left out of it.`
                  : `${Math.abs(residualsNm[line] as number).toFixed(4)} nm from the axis through the other lines, whose ` +
                    `scatter is ${scatter.toFixed(4)} nm: more than chance allows, so it was left out of the axis.`,
              },
            ],
      ),
    },
    residualsNm,
    leaveOneOutNm,
    leverages,
    excessScatterNm: fit.excessNm,
  };
}

/**
 * A degree that was chosen might as well have been the next: the change of every coefficient enters as a variance, that of
 * the highest, which has no place in this axis, as a constant.
 */
function addDegreeDoubt(
  covariance: number[],
  points: readonly DispersionPoint[],
  ownUncNm: Float64Array,
  used: readonly boolean[],
  fit: Fit,
  options: DispersionOptions,
): void {
  const degree = fit.linear.coefficients.length - 1;
  if (degree + 1 > (options.maxDegree ?? highestDegree) || fit.rows.length < degree + 2 + sparePoints) return;
  const next = fitOnce(points, ownUncNm, used, degree + 1);
  const size = degree + 1;
  const change = (j: number): number =>
    (next.linear.coefficients[j] as number) - (j < size ? (fit.linear.coefficients[j] as number) : 0);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++)
      covariance[i * size + j] = (covariance[i * size + j] as number) + change(i) * change(j);
  }
  covariance[0] = (covariance[0] as number) + change(size) * change(size);
}

/** Power coefficients with the fewest digits that keep the wavelength to a thousandth of a pixel over the capture. */
function roundedCoefficients(axis: PixelAxis, firstPosition: number, lastPosition: number): number[] {
  const { coefficients } = axis;
  let slope = Number.POSITIVE_INFINITY;
  for (let k = 0; k < sampleCount; k++) {
    const px = firstPosition + (k * (lastPosition - firstPosition)) / (sampleCount - 1);
    slope = Math.min(slope, Math.abs(axisSlope(axis, px)));
  }
  const allowed = (coefficientErrorPx * slope) / (2 * coefficients.length);
  const reach = Math.max(Math.abs(firstPosition), Math.abs(lastPosition), 1);
  let power = 1;
  return coefficients.map((value) => {
    const here = allowed / power;
    power *= reach;
    for (let digits = 4; digits <= 17; digits++) {
      const rounded = Number(value.toPrecision(digits));
      if (Math.abs(rounded - value) <= here) return rounded;
    }
    return value;
  });
}
