/**
 * Combined and expanded uncertainty from a budget (JCGM 100:2008, GUM): u² = sum of (sensitivity x contribution)², effective degrees
 * of freedom after Welch and Satterthwaite (G.4), coverage factor from Student's t for 95.45 %.
 */
import type { BudgetEntry } from "../analysis/types.ts";
import { studentQuantile } from "../numeric/distributions.ts";

/** Coverage probability of every expanded uncertainty: exactly that of two standard deviations of a normal distribution, 95.45 %. */
const coverageProbability = 0.954499736103642;

/** A contribution before shares are known; `uncNm` is already multiplied by its sensitivity. */
export type Contribution = Omit<BudgetEntry, "shareOfVariance">;

export interface CombinedUncertainty {
  /** Standard uncertainty, nm. */
  uncNm: number;
  expandedUncNm: number;
  coverageFactor: number;
  /** null = infinite. */
  effectiveDegreesOfFreedom: number | null;
  /** With shares, largest contribution first. */
  budget: BudgetEntry[];
}

/**
 * Combine independent contributions.
 *
 * @returns contributions of zero are kept out; an empty budget gives zero uncertainty with k = 2
 */
export function combineContributions(contributions: readonly Contribution[]): CombinedUncertainty {
  const kept = contributions.filter((entry) => entry.uncNm > 0);
  let variance = 0;
  let overDof = 0;
  for (const { uncNm, degreesOfFreedom } of kept) {
    const square = uncNm * uncNm;
    variance += square;
    if (degreesOfFreedom !== null) overDof += (square * square) / degreesOfFreedom;
  }
  const effective = overDof > 0 ? (variance * variance) / overDof : null;
  const coverageFactor = coverageFactorFor(effective);
  const uncNm = Math.sqrt(variance);
  const budget = kept
    .map((entry): BudgetEntry => ({
      contribution: entry.contribution,
      uncNm: entry.uncNm,
      degreesOfFreedom: entry.degreesOfFreedom,
      sensitivity: entry.sensitivity,
      shareOfVariance: (entry.uncNm * entry.uncNm) / variance,
      assumed: entry.assumed,
      note: entry.note,
    }))
    .sort((a, b) => b.shareOfVariance - a.shareOfVariance);
  return { uncNm, expandedUncNm: coverageFactor * uncNm, coverageFactor, effectiveDegreesOfFreedom: effective, budget };
}

/**
 * Coverage factor for 95.45 %: Student's t at the effective degrees of freedom truncated to the next lower whole number (GUM G.4.1),
 * never below one; 2 where they are infinite (or so many that it makes no difference).
 */
export function coverageFactorFor(effectiveDegreesOfFreedom: number | null): number {
  if (effectiveDegreesOfFreedom === null || effectiveDegreesOfFreedom > 1e5) return 2;
  const dof = Math.max(1, Math.floor(effectiveDegreesOfFreedom + 1e-9));
  if (dof > mostExactDof) {
    // Student's quantile from the normal one, z = 2 (Abramowitz & Stegun 26.7.5); the next term is below 1e-9 here.
    return 2 + (2.5 + (3.0625 + 2.859375 / dof) / dof) / dof;
  }
  const known = factors.get(dof);
  if (known !== undefined) return known;
  const factor = studentQuantile((1 + coverageProbability) / 2, dof);
  factors.set(dof, factor);
  return factor;
}

const mostExactDof = 400;
/** The same few degrees of freedom come up for every line. */
const factors = new Map<number, number>();
