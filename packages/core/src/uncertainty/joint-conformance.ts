/**
 * Probability that the true errors of several lines lie within their tolerances together (JCGM 106:2012, 7.4, for several quantities).
 *
 * Covariance  of two lines' errors: the product of what they share (set-up, temperature, air, display, laser), each cause by itself; what
 *             belongs to a line alone is on the diagonal only
 * One cause   given the shared deviation the lines are independent: a product of probabilities, integrated over the normal shared one
 * Several     causes that move all lines in the same proportion are one cause; else the rectangle of a multivariate normal distribution
 *             (`numeric/multivariate-normal.ts`)
 * Student     an error of few degrees of freedom has wider tails than a normal one: the answer is never above what the least
 *             likely line has by itself
 */
import { normalCdf, normalDensity } from "../numeric/distributions.ts";
import { normalRectangleProbability } from "../numeric/multivariate-normal.ts";

export interface JointError {
  errorNm: number;
  toleranceNm: number;
  /** Standard uncertainty of the line alone, nm. */
  ownUncNm: number;
  /** Signed share of each cause in this line's error, nm; the same causes in the same places for every line. */
  sharedUncNm: readonly number[];
  /** The line's own probability of conformance. */
  conformanceProbability: number;
}

/** A line whose own risk is below this changes nothing that could be shown. */
const negligibleRisk = 1e-12;
/** Causes count as proportional when they differ from it by less than this share of the largest. */
const proportionTolerance = 1e-6;

/** @returns null without errors; 1 where no line has any risk */
export function jointConformanceProbability(errors: readonly JointError[]): number | null {
  if (errors.length === 0) return null;
  let least = 1;
  for (const { conformanceProbability } of errors) least = Math.min(least, conformanceProbability);
  const risky = errors.filter((one) => 1 - one.conformanceProbability > negligibleRisk);
  if (risky.length === 0) return 1;
  if (risky.length === 1) return least;
  const causes = commonDirection(risky);
  const joint = causes === null ? byRectangle(risky) : byOneCause(risky, causes);
  return Math.max(0, Math.min(joint, least));
}

/** One signed share a line that stands for all causes together; null where they are not proportional. */
function commonDirection(errors: readonly JointError[]): Float64Array | null {
  const count = errors[0]!.sharedUncNm.length;
  const result = new Float64Array(errors.length);
  let main = -1;
  let largest = 0;
  for (let c = 0; c < count; c++) {
    for (const one of errors) {
      if (Math.abs(one.sharedUncNm[c]!) > largest) {
        largest = Math.abs(one.sharedUncNm[c]!);
        main = c;
      }
    }
  }
  if (main < 0) return result;
  let square = 0;
  for (let c = 0; c < count; c++) {
    let product = 0;
    let norm = 0;
    for (const one of errors) {
      product += one.sharedUncNm[c]! * one.sharedUncNm[main]!;
      norm += one.sharedUncNm[main]! * one.sharedUncNm[main]!;
    }
    const factor = product / norm;
    for (const one of errors) {
      if (Math.abs(one.sharedUncNm[c]! - factor * one.sharedUncNm[main]!) > proportionTolerance * largest) return null;
    }
    square += factor * factor;
  }
  errors.forEach((one, i) => (result[i] = one.sharedUncNm[main]! * Math.sqrt(square)));
  return result;
}

const reach = 8.5;
const panels = 64;
const deepest = 22;
const panelTolerance = 1e-11;

/** Simpson's rule over the shared deviation, panels halved until both halves agree with the whole. */
function byOneCause(errors: readonly JointError[], shared: Float64Array): number {
  if (shared.every((value) => value === 0)) return givenShared(errors, shared, 0);
  const at = (z: number): number => normalDensity(z) * givenShared(errors, shared, z);
  const refine = (a: number, fa: number, b: number, fb: number, fm: number, depth: number): number => {
    const middle = (a + b) / 2;
    const whole = ((b - a) / 6) * (fa + 4 * fm + fb);
    const left = at((a + middle) / 2);
    const right = at((middle + b) / 2);
    const halves = ((b - a) / 12) * (fa + 4 * left + 2 * fm + 4 * right + fb);
    if (depth === deepest || Math.abs(halves - whole) < panelTolerance) return halves + (halves - whole) / 15;
    return refine(a, fa, middle, fm, left, depth + 1) + refine(middle, fm, b, fb, right, depth + 1);
  };
  let sum = 0;
  let from = -reach;
  let atFrom = at(from);
  for (let k = 1; k <= panels; k++) {
    const to = -reach + (2 * reach * k) / panels;
    const atTo = at(to);
    sum += refine(from, atFrom, to, atTo, at((from + to) / 2), 0);
    from = to;
    atFrom = atTo;
  }
  return sum;
}

function givenShared(errors: readonly JointError[], shared: Float64Array, z: number): number {
  let product = 1;
  for (let i = 0; i < errors.length; i++) {
    const { errorNm, toleranceNm, ownUncNm } = errors[i]!;
    const mean = errorNm + shared[i]! * z;
    if (ownUncNm > 0) {
      product *= normalCdf((toleranceNm - mean) / ownUncNm) - normalCdf((-toleranceNm - mean) / ownUncNm);
    } else if (Math.abs(mean) > toleranceNm) product = 0;
    if (product === 0) return 0;
  }
  return product;
}

function byRectangle(errors: readonly JointError[]): number {
  const n = errors.length;
  const covariance = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let sum = i === j ? errors[i]!.ownUncNm * errors[i]!.ownUncNm : 0;
      errors[i]!.sharedUncNm.forEach((share, c) => (sum += share * errors[j]!.sharedUncNm[c]!));
      covariance[i * n + j] = sum;
    }
  }
  const mean = Float64Array.from(errors, (one) => one.errorNm);
  const upper = Float64Array.from(errors, (one) => one.toleranceNm);
  const lower = Float64Array.from(errors, (one) => -one.toleranceNm);
  return normalRectangleProbability(mean, covariance, lower, upper).probability;
}
