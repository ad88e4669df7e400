/**
 * Conformity of an error with a tolerance. Acceptance with a guard band w: pass e <= T - w, inconclusive T - w < e <= T, fail e > T, with
 * e = |error|; simple acceptance has w = 0, guarded acceptance w = r U of that line. The probability of conformance is that of the
 * true error lying within +-T, given the measured error and its uncertainty (JCGM 106:2012, 7.4).
 */
import type { DecisionRule, ToleranceSegment, Verdict, VerdictSummary } from "../analysis/types.ts";
import { normalCdf, studentCdf } from "../numeric/distributions.ts";

export interface Judgement {
  toleranceNm: number;
  guardBandNm: number;
  /** |error| / tolerance. */
  toleranceUsed: number;
  conformanceProbability: number;
  /** Of a line out of tolerance the probability that its true error lies inside, else that it lies outside (JCGM 106:2012, 9.3.2). */
  specificRisk: number;
  verdict: Verdict;
  /** A pass above the warning share of the tolerance. */
  nearLimit: boolean;
}

export interface JudgedError {
  errorNm: number;
  uncNm: number;
  expandedUncNm: number;
  effectiveDegreesOfFreedom: number | null;
}

export function judgeError(
  error: JudgedError,
  toleranceNm: number,
  rule: DecisionRule,
  warningShare: number,
): Judgement {
  const size = Math.abs(error.errorNm);
  const guardBandNm = rule.kind === "simple" ? 0 : rule.r * error.expandedUncNm;
  const verdict: Verdict = size > toleranceNm ? "fail" : size > toleranceNm - guardBandNm ? "inconclusive" : "pass";
  const probability = conformanceProbability(error, toleranceNm);
  return {
    toleranceNm,
    guardBandNm,
    toleranceUsed: size / toleranceNm,
    conformanceProbability: probability,
    specificRisk: verdict === "fail" ? probability : 1 - probability,
    verdict,
    nearLimit: verdict === "pass" && size > warningShare * toleranceNm,
  };
}

/** P(-T <= true error <= T), with Student's t where the degrees of freedom are finite. */
export function conformanceProbability(error: JudgedError, toleranceNm: number): number {
  if (!(error.uncNm > 0)) return Math.abs(error.errorNm) <= toleranceNm ? 1 : 0;
  const dof = error.effectiveDegreesOfFreedom;
  const below = (x: number): number => {
    const z = (x - error.errorNm) / error.uncNm;
    return dof === null || dof > 1e5 ? normalCdf(z) : studentCdf(z, Math.max(1, dof));
  };
  return Math.min(1, Math.max(0, below(toleranceNm) - below(-toleranceNm)));
}

/**
 * Tolerance at a wavelength: that of the segment it lies in, the tighter one on a shared edge; null outside all segments.
 */
export function toleranceAt(segments: readonly ToleranceSegment[], wavelengthNm: number): number | null {
  let tolerance: number | null = null;
  for (const segment of segments) {
    if (wavelengthNm < segment.fromNm || wavelengthNm > segment.toNm) continue;
    if (tolerance === null || segment.toleranceNm < tolerance) tolerance = segment.toleranceNm;
  }
  return tolerance;
}

export interface JudgedLine {
  /** Index in the analysis' lines. */
  line: number;
  judgement: Judgement;
}

/**
 * Verdict of a check: its worst line's; inconclusive instead of pass when a required line is missing or the naming is not certain.
 * A line out of tolerance stays a fail whatever is missing.
 *
 * @param missing  sentences that stand in the way of a pass
 */
export function summarise(
  judged: readonly JudgedLine[],
  namedCount: number,
  missing: readonly string[],
): VerdictSummary {
  const rank: Record<Verdict, number> = { pass: 0, inconclusive: 1, fail: 2 };
  let worst: JudgedLine | null = null;
  for (const one of judged) {
    const ahead =
      worst === null ||
      rank[one.judgement.verdict] > rank[worst.judgement.verdict] ||
      (rank[one.judgement.verdict] === rank[worst.judgement.verdict] &&
        one.judgement.toleranceUsed > worst.judgement.toleranceUsed);
    if (ahead) worst = one;
  }
  const reasons = [...missing];
  if (worst === null) reasons.push("No line could be judged.");
  const own = worst?.judgement.verdict ?? "inconclusive";
  const verdict: Verdict = own === "pass" && reasons.length > 0 ? "inconclusive" : own;
  return {
    verdict,
    nearLimit: verdict === "pass" && judged.some((one) => one.judgement.nearLimit),
    worstLine: worst?.line ?? null,
    toleranceUsed: worst?.judgement.toleranceUsed ?? null,
    judgedCount: judged.length,
    namedCount,
    reasons,
  };
}
