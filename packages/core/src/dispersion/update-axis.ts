/**
 * An earlier axis brought up to date from few lines: its offset, or offset and scale. Curvature, and its covariance, stay the earlier axis'.
 *
 * Model        what stood at pixel q stands at p now, q = p + offset + scale (p - centre), lambda(p) = earlier(q). A grating turned a little
 *              and a detector moved or stretched by temperature both do this, and the curvature moves along with the lines
 * Solution     generalised least squares: the residuals' covariance is that of the lines and of the earlier axis together, so that lines where the
 *              earlier axis was vague count less; Gauss-Newton, for a shift of many pixels meets another dispersion
 * Covariance   offset and scale are known as far as the lines tell; the part of the earlier axis' uncertainty that offset and scale take up
 *              cancels, the rest (curvature) stays. Beyond the lines it grows as it must
 * Scatter      where the lines scatter more than chance allows one variance that all share is added, as in a full fit
 * Needs        one line for the offset, two different ones for offset and scale; with fewer the scale stays too, and says so
 */
import type { Dispersion, PixelAxis } from "../analysis/types.ts";
import { chebyshevArgument, chebyshevBasis } from "../numeric/chebyshev.ts";
import { chiSquareUpperTail, studentQuantile } from "../numeric/distributions.ts";
import { axisNm, axisSlope, isMonotonic } from "./axis.ts";
import { chebyshevTerms } from "./chebyshev-terms.ts";
import { describeAxis } from "./describe-axis.ts";
import {
  type DispersionOptions,
  type DispersionPoint,
  type DispersionRefusal,
  type FittedDispersion,
  scatterLevel,
} from "./fit-dispersion.ts";

const rounds = 50;
/** Rejection: chance that any good line is rejected, share of the lines that may go, degrees of freedom there must be. */
const rejectionLevel = 0.01;
const rejectableShare = 0.2;
const leastFreedom = 3;
/** The others' variance over what is stated is taken as at least this: uncertainties that are stated too large do happen. */
const leastScatter = 1e-3;
/** Two lines tell a scale when they lie this share of the axis apart. */
const leastSpan = 0.02;

export type UpdateOptions = Pick<DispersionOptions, "firstPosition" | "lastPosition"> & {
  kind: "offset" | "offset-and-scale";
};

export interface UpdatedDispersion extends FittedDispersion {
  /** A sentence where less was updated than was asked for, or the curvature's uncertainty is not known; else null. */
  remark: string | null;
}

/**
 * Update an axis.
 *
 * @param earlier  its covariance may be unknown (null): then the curvature is taken as exact, and the result says so
 */
export function updateAxis(
  earlier: PixelAxis,
  points: readonly DispersionPoint[],
  options: UpdateOptions,
): UpdatedDispersion | DispersionRefusal {
  for (const point of points) {
    const isFinite = Number.isFinite(point.position) && Number.isFinite(point.wavelengthNm);
    if (!isFinite || !(point.positionUnc > 0) || !(point.wavelengthUncNm >= 0)) {
      return refuse("A line's position, wavelength or uncertainty is not a usable number: the axis was not updated.");
    }
  }
  if (points.length === 0) return refuse("No line can be used: the axis was not updated.");
  const used = points.map((_, i) => i);
  let solution = solve(earlier, points, used, options.kind);
  const most = Math.floor(rejectableShare * points.length);
  for (let n = 0; n < most && solution !== null; n++) {
    const worst = mostRemarkable(solution);
    if (worst < 0) break;
    used.splice(worst, 1);
    solution = solve(earlier, points, used, options.kind);
  }
  if (solution === null) {
    return refuse(
      "No shift of the earlier axis brings it to these lines: they are named wrongly, or it is another axis.",
    );
  }
  const { axis } = solution;
  const { firstPosition, lastPosition } = options;
  if (!isMonotonic(axis, Math.min(firstPosition, axis.firstPx), Math.max(lastPosition, axis.lastPx))) {
    return refuse("The updated axis would turn back within the capture, which no grating does. No axis was made.");
  }
  const described = describeAxis(points, options, {
    axis,
    family: "polynomial",
    degree: earlier.coefficients.length - 1,
    degreeChosenBy: "earlier-axis",
    kept: used,
    leverages: solution.leverages,
    unc: solution.unc,
    excessScatterNm: Math.sqrt(solution.excessSquare),
    rejectedBecause: new Map(),
  });
  described.dispersion.update = solution.update;
  return { ...described, remark: remarkOf(solution.update, options.kind) };
}

const refuse = (reason: string): DispersionRefusal => ({ outcome: "refused", reason });

function remarkOf(update: NonNullable<Dispersion["update"]>, asked: UpdateOptions["kind"]): string | null {
  const remarks: string[] = [];
  if (update.kind !== asked)
    remarks.push("The lines lie too close together to tell the scale: only the offset was updated.");
  if (!update.isCurvatureUncKnown) {
    remarks.push(
      "The earlier axis came without its covariance: its curvature was taken as exact, and the stated uncertainty does not hold what is not known of it.",
    );
  }
  return remarks.length > 0 ? remarks.join(" ") : null;
}

interface Solution {
  axis: PixelAxis;
  update: NonNullable<Dispersion["update"]>;
  /** Of each line used. */
  residuals: Float64Array;
  leverages: Float64Array;
  /** Standard uncertainty of each residual before the fit: line, earlier axis and scatter. */
  unc: Float64Array;
  excessSquare: number;
}

/** Gauss-Newton with the scatter found along; null where it does not come to rest on the earlier axis' monotonic part. */
function solve(
  earlier: PixelAxis,
  points: readonly DispersionPoint[],
  used: readonly number[],
  asked: UpdateOptions["kind"],
): Solution | null {
  const m = used.length;
  const centrePx = (earlier.firstPx + earlier.lastPx) / 2;
  const lengthPx = Math.max(earlier.lastPx - earlier.firstPx, 1);
  const at = (k: number): DispersionPoint => points[used[k] as number] as DispersionPoint;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let k = 0; k < m; k++) {
    low = Math.min(low, at(k).position);
    high = Math.max(high, at(k).position);
  }
  const kind = asked === "offset" || high - low < leastSpan * lengthPx ? "offset" : "offset-and-scale";
  const n = kind === "offset" ? 1 : 2;
  const parameters = [0, 0];
  const axisCovariance = earlier.chebyshevCovariance;
  const size = axisCovariance === null ? 1 : Math.round(Math.sqrt(axisCovariance.length));
  const jacobian = new Float64Array(m * n);
  const residuals = new Float64Array(m);
  const bases = new Float64Array(m * size);
  const own = new Float64Array(m);
  let excessSquare = 0;
  let gls: Gls | null = null;
  let isScatterAsked = false;
  for (let round = 0; round < rounds; round++) {
    for (let k = 0; k < m; k++) {
      const { position, wavelengthNm, positionUnc, wavelengthUncNm } = at(k);
      const q = position + (parameters[0] as number) + (parameters[1] as number) * (position - centrePx);
      const slope = axisSlope(earlier, q);
      residuals[k] = wavelengthNm - axisNm(earlier, q);
      jacobian[k * n] = slope;
      if (n === 2) jacobian[k * n + 1] = slope * (position - centrePx);
      const positionNm = positionUnc * slope * (1 + (parameters[1] as number));
      own[k] = positionNm * positionNm + wavelengthUncNm * wavelengthUncNm;
      bases.set(chebyshevBasis(size - 1, argumentOf(earlier, q)), k * size);
    }
    gls = generalised(jacobian, residuals, covarianceOfLines(own, excessSquare, bases, axisCovariance, m, size), m, n);
    if (gls === null) return null;
    let moved = 0;
    for (let j = 0; j < n; j++) {
      parameters[j] = (parameters[j] as number) + (gls.step[j] as number);
      moved = Math.max(moved, Math.abs(gls.step[j] as number) * (j === 0 ? 1 : lengthPx));
    }
    if (!(Math.abs(parameters[0] as number) < 2 * lengthPx) || !(Math.abs(parameters[1] as number) < 0.5)) return null;
    if (moved > 1e-9) continue;
    const freedom = m - n;
    const isBeyond: boolean =
      freedom > 0 &&
      gls.chiSquare > freedom * (1 + 1e-3) &&
      (isScatterAsked || chiSquareUpperTail(gls.chiSquare, freedom) < scatterLevel);
    if (!isBeyond) break;
    // Newton's step on chi-squared(tau²) = degrees of freedom.
    isScatterAsked = true;
    excessSquare += (gls.chiSquare - freedom) / gls.chiSquareSlope;
  }
  if (gls === null) return null;
  const [offsetPx, scale] = parameters as [number, number];
  const axis = movedAxis(earlier, gls, own, excessSquare, bases, size, { offsetPx, scale, centrePx, n, m });
  const unc = Float64Array.from(own, (value, k) => Math.sqrt(Math.max(gls.covariance[k * m + k] as number, value)));
  return {
    axis,
    update: {
      kind,
      offsetPx,
      offsetUncPx: Math.sqrt(gls.parameterCovariance[0] as number),
      centrePx,
      scale,
      scaleUnc: n === 2 ? Math.sqrt(gls.parameterCovariance[3] as number) : 0,
      isCurvatureUncKnown: axisCovariance !== null,
    },
    residuals: Float64Array.from(residuals),
    leverages: gls.leverages,
    unc,
    excessSquare,
  };
}

const argumentOf = (axis: PixelAxis, px: number): number =>
  axis.lastPx === axis.firstPx ? 0 : chebyshevArgument(px, axis.firstPx, axis.lastPx);

/** Covariance of the lines' residuals: their own, the shared scatter, and the earlier axis'. */
function covarianceOfLines(
  own: Float64Array,
  excessSquare: number,
  bases: Float64Array,
  axisCovariance: readonly number[] | null,
  m: number,
  size: number,
): Float64Array {
  const covariance = new Float64Array(m * m);
  for (let i = 0; i < m; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = i === j ? (own[i] as number) + excessSquare : 0;
      if (axisCovariance !== null) {
        for (let a = 0; a < size; a++) {
          for (let b = 0; b < size; b++) {
            sum +=
              (bases[i * size + a] as number) *
              (axisCovariance[a * size + b] as number) *
              (bases[j * size + b] as number);
          }
        }
      }
      covariance[i * m + j] = sum;
      covariance[j * m + i] = sum;
    }
  }
  return covariance;
}

interface Gls {
  step: Float64Array;
  /** n x m: the parameters as weighted sums of the residuals. */
  gain: Float64Array;
  parameterCovariance: Float64Array;
  covariance: Float64Array;
  chiSquare: number;
  /** - d chi-squared / d tau². */
  chiSquareSlope: number;
  leverages: Float64Array;
}

/** Generalised least squares by whitening with the Cholesky factor of the covariance; one or two parameters. */
function generalised(
  jacobian: Float64Array,
  residuals: Float64Array,
  covariance: Float64Array,
  m: number,
  n: number,
): Gls | null {
  const factor = new Float64Array(m * m);
  for (let i = 0; i < m; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = covariance[i * m + j] as number;
      for (let k = 0; k < j; k++) sum -= (factor[i * m + k] as number) * (factor[j * m + k] as number);
      if (i === j) {
        if (!(sum > 0)) return null;
        factor[i * m + i] = Math.sqrt(sum);
      } else factor[i * m + j] = sum / (factor[j * m + j] as number);
    }
  }
  // Inverse covariance times each column, by forward and backward substitution.
  const solved = (column: (i: number) => number): Float64Array => {
    const x = new Float64Array(m);
    for (let i = 0; i < m; i++) {
      let sum = column(i);
      for (let k = 0; k < i; k++) sum -= (factor[i * m + k] as number) * (x[k] as number);
      x[i] = sum / (factor[i * m + i] as number);
    }
    for (let i = m - 1; i >= 0; i--) {
      let sum = x[i] as number;
      for (let k = i + 1; k < m; k++) sum -= (factor[k * m + i] as number) * (x[k] as number);
      x[i] = sum / (factor[i * m + i] as number);
    }
    return x;
  };
  const weighted = Array.from({ length: n }, (_, j) => solved((i) => jacobian[i * n + j] as number));
  const normal = new Float64Array(4);
  for (let a = 0; a < n; a++) {
    for (let b = 0; b < n; b++) {
      for (let i = 0; i < m; i++) {
        normal[a * 2 + b] =
          (normal[a * 2 + b] as number) +
          (jacobian[i * n + a] as number) * ((weighted[b] as Float64Array)[i] as number);
      }
    }
  }
  const parameterCovariance = new Float64Array(4);
  if (n === 1) {
    if (!((normal[0] as number) > 0)) return null;
    parameterCovariance[0] = 1 / (normal[0] as number);
  } else {
    const [aa, ab, , bb] = normal as unknown as [number, number, number, number];
    const determinant = aa * bb - ab * ab;
    if (!(determinant > 1e-12 * aa * bb)) return null;
    parameterCovariance.set([bb / determinant, -ab / determinant, -ab / determinant, aa / determinant]);
  }
  const gain = new Float64Array(n * m);
  const step = new Float64Array(n);
  for (let a = 0; a < n; a++) {
    for (let i = 0; i < m; i++) {
      let sum = 0;
      for (let b = 0; b < n; b++) {
        sum += (parameterCovariance[a * 2 + b] as number) * ((weighted[b] as Float64Array)[i] as number);
      }
      gain[a * m + i] = sum;
      step[a] = (step[a] as number) + sum * (residuals[i] as number);
    }
  }
  const left = new Float64Array(m);
  const leverages = new Float64Array(m);
  for (let i = 0; i < m; i++) {
    let fitted = 0;
    for (let j = 0; j < n; j++) {
      fitted += (jacobian[i * n + j] as number) * (step[j] as number);
      leverages[i] = (leverages[i] as number) + (jacobian[i * n + j] as number) * (gain[j * m + i] as number);
    }
    left[i] = (residuals[i] as number) - fitted;
  }
  const whitened = solved((i) => left[i] as number);
  let chiSquare = 0;
  let chiSquareSlope = 0;
  for (let i = 0; i < m; i++) {
    chiSquare += (left[i] as number) * (whitened[i] as number);
    chiSquareSlope += (whitened[i] as number) * (whitened[i] as number);
  }
  return { step, gain, parameterCovariance, covariance, chiSquare, chiSquareSlope, leverages };
}

/** The earlier axis at q(p), as powers of p, with its covariance in terms over the earlier lines' places now. */
function movedAxis(
  earlier: PixelAxis,
  gls: Gls,
  own: Float64Array,
  excessSquare: number,
  bases: Float64Array,
  size: number,
  { offsetPx, scale, centrePx, n, m }: { offsetPx: number; scale: number; centrePx: number; n: number; m: number },
): PixelAxis {
  const shift = offsetPx - scale * centrePx;
  const stretch = 1 + scale;
  // Horner's scheme on polynomials: earlier(shift + stretch p).
  let coefficients: number[] = [];
  for (let k = earlier.coefficients.length - 1; k >= 0; k--) {
    const next = new Array<number>(coefficients.length + 1).fill(0);
    coefficients.forEach((value, power) => {
      next[power] = (next[power] as number) + shift * value;
      next[power + 1] = (next[power + 1] as number) + stretch * value;
    });
    next[0] = (next[0] as number) + (earlier.coefficients[k] as number);
    coefficients = next;
  }
  coefficients = coefficients.slice(0, earlier.coefficients.length);
  const firstPx = (earlier.firstPx - shift) / stretch;
  const lastPx = (earlier.lastPx - shift) / stretch;
  const terms = Math.max(size, coefficients.length);
  // What a change of each parameter does to the axis, in the same terms.
  const partials = chebyshevTerms(firstPx, lastPx, terms - 1, n, (px, values) => {
    const slope = axisSlope(earlier, shift + stretch * px);
    values[0] = slope;
    if (n === 2) values[1] = slope * (px - centrePx);
  });
  // Error of the new terms: (I - P G B) error of the earlier terms + P G error of the lines.
  const kept = new Float64Array(terms * size);
  const covariance = new Array<number>(terms * terms).fill(0);
  for (let r = 0; r < terms; r++) {
    for (let c = 0; c < size; c++) {
      let sum = r === c ? 1 : 0;
      for (let j = 0; j < n; j++) {
        for (let i = 0; i < m; i++) {
          sum -=
            ((partials[j] as Float64Array)[r] as number) *
            (gls.gain[j * m + i] as number) *
            (bases[i * size + c] as number);
        }
      }
      kept[r * size + c] = sum;
    }
  }
  for (let r = 0; r < terms; r++) {
    for (let c = 0; c < terms; c++) {
      let sum = 0;
      const axisCovariance = earlier.chebyshevCovariance;
      if (axisCovariance !== null) {
        for (let a = 0; a < size; a++) {
          for (let b = 0; b < size; b++) {
            sum +=
              (kept[r * size + a] as number) *
              (axisCovariance[a * size + b] as number) *
              (kept[c * size + b] as number);
          }
        }
      }
      for (let i = 0; i < m; i++) {
        let left = 0;
        let right = 0;
        for (let j = 0; j < n; j++) {
          left += ((partials[j] as Float64Array)[r] as number) * (gls.gain[j * m + i] as number);
          right += ((partials[j] as Float64Array)[c] as number) * (gls.gain[j * m + i] as number);
        }
        sum += left * ((own[i] as number) + excessSquare) * right;
      }
      covariance[r * terms + c] = sum;
    }
  }
  return {
    coefficients,
    firstPx,
    lastPx,
    chebyshevCovariance: covariance,
    degreesOfFreedom: Math.max(m - n, 0) || null,
    meaning: earlier.meaning,
  };
}

/** Row whose studentised deleted residual is larger than chance allows over all lines, the largest of them; else -1. */
function mostRemarkable({ residuals, leverages, unc, update }: Solution): number {
  const freedom = residuals.length - (update.kind === "offset" ? 1 : 2);
  if (freedom < leastFreedom) return -1;
  const room = Float64Array.from(leverages, (leverage) => Math.max(1 - leverage, 1e-6));
  let sum = 0;
  residuals.forEach((residual, k) => {
    const ratio = residual / (unc[k] as number);
    sum += ratio * ratio;
  });
  let worst = -1;
  let largest = 0;
  residuals.forEach((residual, k) => {
    const ratio = residual / (unc[k] as number);
    const others = (sum - (ratio * ratio) / (room[k] as number)) / (freedom - 1);
    const studentised = Math.abs(ratio) / Math.sqrt((room[k] as number) * Math.max(others, leastScatter));
    if (studentised > largest) {
      largest = studentised;
      worst = k;
    }
  });
  return largest > studentQuantile(1 - rejectionLevel / (2 * residuals.length), freedom - 1) ? worst : -1;
}
