/**
 * Global risks of a decision rule (JCGM 106:2012, clause 9): how often an item drawn from a known production is accepted though it
 * does not conform, or rejected though it does. Here: how well a tolerance, a guard band and an uncertainty serve a configuration
 * whose true errors are spread as its history shows. And the guard bands in common use.
 *
 * Model     true value normal (process mean and standard deviation), measured value normal about it with the standard uncertainty u
 * Risks     joint probabilities, not conditional ones: a share of all items measured
 * Numbers   composite Gauss-Legendre, 10 points a panel; absolute error below 1e-10 for u from 1e-4 to 1e2 of the process' deviation
 */
import { normalCdf, normalDensity } from "../numeric/distributions.ts";
import { exp, log } from "../numeric/elementary.ts";

export interface RiskSettings {
  processMean: number;
  /** Standard deviation of the true values, > 0. */
  processSd: number;
  /** Standard uncertainty of the measured value, > 0. */
  unc: number;
  toleranceFrom: number;
  toleranceTo: number;
  /** A measured value within these is accepted. */
  acceptFrom: number;
  acceptTo: number;
}

export interface GlobalRisks {
  /** Probability that the true value lies within the tolerance. */
  inTolerance: number;
  /** Accepted and not conforming. */
  falseAcceptance: number;
  /** Rejected and conforming. */
  falseRejection: number;
}

/** Abscissae and weights of the 10-point Gauss-Legendre rule on [-1, 1], positive half (Abramowitz & Stegun, table 25.4). */
const abscissae = [0.148874338981631, 0.433395394129247, 0.679409568299024, 0.865063366688985, 0.973906528517172];
const weights = [0.295524224714753, 0.269266719309996, 0.219086362515982, 0.149451349150581, 0.066671344308688];
const reach = 9;
const panelsPerReach = 40;

/** Both global risks. Lengths in one unit; the settings are taken as they are, a process wider than its tolerance too. */
export function globalRisks(settings: RiskSettings): GlobalRisks {
  const { processMean, processSd, unc, toleranceFrom, toleranceTo, acceptFrom, acceptTo } = settings;
  if (!(processSd > 0) || !(unc > 0)) throw new RangeError("processSd and unc must be above 0");
  const accepted = (value: number): number =>
    normalCdf((acceptTo - value) / unc) - normalCdf((acceptFrom - value) / unc);
  const density = (value: number): number => normalDensity((value - processMean) / processSd) / processSd;
  const lowest = processMean - reach * processSd;
  const highest = processMean + reach * processSd;
  // The probability of acceptance changes over a few u about the acceptance limits: panels are cut there and no wider than that.
  const cuts = [lowest, highest];
  for (const limit of [toleranceFrom, toleranceTo]) cuts.push(limit);
  for (const limit of [acceptFrom, acceptTo]) {
    for (let k = -reach; k <= reach; k++) cuts.push(limit + k * unc);
  }
  for (let k = 1; k < panelsPerReach; k++) cuts.push(lowest + (k * (highest - lowest)) / panelsPerReach);
  const inside = cuts.filter((cut) => cut >= lowest && cut <= highest).sort((a, b) => a - b);
  let falseAcceptance = 0;
  let falseRejection = 0;
  for (let p = 0; p + 1 < inside.length; p++) {
    const from = inside[p]!;
    const to = inside[p + 1]!;
    const middle = (from + to) / 2;
    const isConforming = middle >= toleranceFrom && middle <= toleranceTo;
    let sum = 0;
    for (let k = 0; k < abscissae.length; k++) {
      for (const side of [-1, 1]) {
        const value = middle + (side * abscissae[k]! * (to - from)) / 2;
        sum += weights[k]! * density(value) * (isConforming ? 1 - accepted(value) : accepted(value));
      }
    }
    if (isConforming) falseRejection += (sum * (to - from)) / 2;
    else falseAcceptance += (sum * (to - from)) / 2;
  }
  const inTolerance =
    normalCdf((toleranceTo - processMean) / processSd) - normalCdf((toleranceFrom - processMean) / processSd);
  return { inTolerance, falseAcceptance, falseRejection };
}

/**
 * Worst specific risk of a result on the acceptance limit T - rU of one limit, the other far away: Phi(-k r) (ILAC-G8:09/2019, 4.2).
 *
 * @param r  guard band over U; negative: acceptance beyond the limit, and the risk is that of a false rejection
 */
export function riskOnAcceptanceLimit(r: number, coverageFactor: number): number {
  return normalCdf(-coverageFactor * Math.abs(r));
}

/** Acceptance limit T sqrt(1 - (U/T)²), the root of the difference of squares; 0 where U reaches the tolerance. */
export function acceptanceLimitByRootDifference(tolerance: number, expandedUnc: number): number {
  const square = tolerance * tolerance - expandedUnc * expandedUnc;
  return square > 0 ? Math.sqrt(square) : 0;
}

/**
 * Acceptance limit that keeps the false acceptance below 2 % whatever share of the items conforms (M. Dobbert, 2008; from memory):
 * A = T - U (1.04 - exp(0.38 ln(T/U) - 0.54)).
 */
export function acceptanceLimitAfterDobbert(tolerance: number, expandedUnc: number): number {
  return tolerance - expandedUnc * (1.04 - exp(0.38 * log(tolerance / expandedUnc) - 0.54));
}
