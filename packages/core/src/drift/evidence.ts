/**
 * Evidence for what a series shows: by how much a few extra columns make the data more probable than a constant level does.
 *
 * Model      y = level(s) + columns · effects + noise, noise independent, its variance known up to one common factor.
 * Evidence   Bayes factor against the levels alone with Zellner's g-prior on the effects and the scale-free prior on levels and variance
 *            (F. Liang et al., J. Am. Stat. Assoc. 103 (2008) 410, eq. 6):
 *            ln BF = ((d - p) ln(1 + g) - d ln(1 + g R)) / 2, R = residual / level-only sum of squares, d = degrees of freedom of the
 *            level-only fit, p = number of columns. g is the unit information (d) or the local empirical value F - 1, whichever is
 *            wider, so that two models that both fit well are still told apart. With many checks ln BF goes over into half the
 *            difference of the Bayesian information criterion; with few it is the exact integral, Student tails included.
 * Places     a step, an onset or an odd check whose place is not known beforehand takes the mean of exp(ln BF) over all places.
 */
import { exp, log } from "../numeric/elementary.ts";

/** Shorter than this share of its own length after projection, a column says nothing that is not said already. */
const collinear = 1e-6;

/** A weighted response with the columns already accounted for taken out of it; immutable. */
export class WeightedDesign {
  private constructor(
    readonly rootWeights: Float64Array,
    private readonly basis: readonly Float64Array[],
    /** Weighted residual. */
    private readonly residual: Float64Array,
    readonly residualSumOfSquares: number,
    /** Points with a weight, less the columns accounted for. */
    readonly degreesOfFreedom: number,
  ) {}

  /** @param rootWeights  1/u of each point; 0 leaves it out */
  static of(y: ArrayLike<number>, rootWeights: Float64Array): WeightedDesign {
    const residual = new Float64Array(rootWeights.length);
    let sum = 0;
    let points = 0;
    for (let i = 0; i < residual.length; i++) {
      if (rootWeights[i]! > 0) {
        residual[i] = y[i]! * rootWeights[i]!;
        points += 1;
      }
      sum += residual[i]! * residual[i]!;
    }
    return new WeightedDesign(rootWeights, [], residual, sum, points);
  }

  /** Accounts for one more column, or null where it can't be told from those already in. */
  with(column: ArrayLike<number>): WeightedDesign | null {
    const unit = this.project(column);
    if (unit === null) return null;
    let dot = 0;
    for (let i = 0; i < unit.length; i++) dot += unit[i]! * this.residual[i]!;
    const residual = new Float64Array(unit.length);
    let sum = 0;
    for (let i = 0; i < unit.length; i++) {
      residual[i] = this.residual[i]! - dot * unit[i]!;
      sum += residual[i]! * residual[i]!;
    }
    return new WeightedDesign(
      this.rootWeights,
      [...this.basis, unit],
      residual,
      Math.min(sum, this.residualSumOfSquares),
      this.degreesOfFreedom - 1,
    );
  }

  /** Accounts for every column that can be told from the others. */
  withAll(columns: readonly ArrayLike<number>[]): WeightedDesign {
    return columns.reduce<WeightedDesign>((design, column) => design.with(column) ?? design, this);
  }

  /** By how much the residual sum of squares would fall; null where the column says nothing new. */
  gainOf(column: ArrayLike<number>): number | null {
    const unit = this.project(column);
    if (unit === null) return null;
    let dot = 0;
    for (let i = 0; i < unit.length; i++) dot += unit[i]! * this.residual[i]!;
    return dot * dot;
  }

  private project(column: ArrayLike<number>): Float64Array | null {
    const unit = new Float64Array(this.rootWeights.length);
    let before = 0;
    for (let i = 0; i < unit.length; i++) {
      unit[i] = column[i]! * this.rootWeights[i]!;
      before += unit[i]! * unit[i]!;
    }
    if (!(before > 0)) return null;
    for (const one of this.basis) {
      let dot = 0;
      for (let i = 0; i < unit.length; i++) dot += one[i]! * unit[i]!;
      for (let i = 0; i < unit.length; i++) unit[i] = unit[i]! - dot * one[i]!;
    }
    let after = 0;
    for (let i = 0; i < unit.length; i++) after += unit[i]! * unit[i]!;
    if (!(after > collinear * before)) return null;
    const scale = 1 / Math.sqrt(after);
    for (let i = 0; i < unit.length; i++) unit[i] = unit[i]! * scale;
    return unit;
  }
}

/**
 * ln of the Bayes factor of p extra columns against the level-only fit.
 *
 * @param levelSum  residual sum of squares of the level-only fit
 * @param sum       that of the fit with the columns
 * @param p         number of columns, at least 1
 * @param d         degrees of freedom of the level-only fit; 0 is returned where fewer than 2 would be left
 */
export function logBayesFactor(levelSum: number, sum: number, p: number, d: number): number {
  const left = d - p;
  if (left < 2 || !(levelSum > 0)) return 0;
  const ratio = Math.max(sum / levelSum, 1e-12);
  const f = ((1 - ratio) / p / ratio) * left;
  const g = Math.max(d, f - 1);
  return 0.5 * (left * log(1 + g) - d * log(1 + g * ratio));
}

/** ln of the sum of exp of each, without overflow; -Infinity for none. */
export function logSumExp(values: readonly number[]): number {
  let largest = -Infinity;
  for (const value of values) if (value > largest) largest = value;
  if (largest === -Infinity) return -Infinity;
  let sum = 0;
  for (const value of values) sum += exp(value - largest);
  return largest + log(sum);
}
