/**
 * Rules for the time between calibrations, each as plain arithmetic. Months and days are the caller's unit of time, nm that of errors.
 *
 * Staircase             ILAC-G24 / OIML D 10, method 1: inside a stated share of the limit longer, outside the limit shorter (the share of 80 % is the
 *                       document's example, from memory; the steps are common practice, no one document)
 * Time in use           the same document, method 3: hours of use instead of months on the calendar
 * Simple response       NCSLI RP-1, method A1 (from memory): interval × (1 + a) when found in tolerance, × (1 - b) when out
 * Exponential reliability  R(t) = exp(-rate t), so that the interval for a target is t ln(target) / ln(observed) (RP-1 and others)
 * Drift line            plain algebra: when offset + rate × time meets limit minus guard
 */
import { log } from "../numeric/elementary.ts";

/** How a calibration found an instrument, as the largest |error| in shares of its limit. */
export interface Finding {
  shareOfLimit: number;
}

export interface StaircaseSteps {
  /** Below this share of the limit the interval may grow; between it and the limit it is kept. */
  share: number;
  /** Factor after findings inside the share, and how many in a row it takes. */
  longer: number;
  inARow: number;
  /** Factor after a finding beyond the limit. */
  shorter: number;
}

/** 80 % of the limit; a quarter longer after three in a row; half after one beyond the limit. */
export const commonSteps: StaircaseSteps = { share: 0.8, longer: 1.25, inARow: 3, shorter: 0.5 };

export type StaircaseMove = "shorter" | "kept" | "longer";

/** @param findings  since the interval was last changed, oldest first */
export function staircase(
  interval: number,
  findings: readonly Finding[],
  steps: StaircaseSteps = commonSteps,
): { interval: number; move: StaircaseMove } {
  const last = findings.at(-1);
  if (last === undefined) return { interval, move: "kept" };
  if (last.shareOfLimit > 1) return { interval: interval * steps.shorter, move: "shorter" };
  const recent = findings.slice(-steps.inARow);
  const well = recent.length === steps.inARow && recent.every((finding) => finding.shareOfLimit <= steps.share);
  return well ? { interval: interval * steps.longer, move: "longer" } : { interval, move: "kept" };
}

/** Interval after one finding by simple response. */
export function simpleResponse(interval: number, inTolerance: boolean, a: number, b: number): number {
  return interval * (inTolerance ? 1 + a : 1 - b);
}

/** Share of findings in tolerance at which simple response neither grows nor shrinks: (1+a)^R (1-b)^(1-R) = 1. */
export function simpleResponseReliability(a: number, b: number): number {
  const down = -log(1 - b);
  return down / (log(1 + a) + down);
}

/**
 * Interval for a target reliability from the share found in tolerance at the present one.
 *
 * @param observed  share in tolerance, between 0 and 1 exclusive; where all were found in tolerance use `reliabilityFromCounts` first
 */
export function exponentialInterval(interval: number, observed: number, target: number): number {
  return (interval * log(target)) / log(observed);
}

/** Share in tolerance from counts, (found in + 1/2) / (found + 1): Jeffreys' mean, never 0 or 1. */
export function reliabilityFromCounts(inTolerance: number, found: number): number {
  return (inTolerance + 0.5) / (found + 1);
}

/**
 * Time until an error of `offset` that grows by `rate` a unit of time meets the guarded limit.
 *
 * @returns may be negative: it is met already; Infinity without a rate inside the limit, -Infinity beyond it
 */
export function driftLineInterval(limit: number, guard: number, offset: number, rate: number): number {
  const room = limit - guard;
  if (rate === 0) return Math.abs(offset) <= room ? Infinity : -Infinity;
  return (room - Math.sign(rate) * offset) / Math.abs(rate);
}

/**
 * Calendar interval from use: what is left of the allowed use, at the rate that it was used at.
 *
 * @param allowedUse  hours (or cycles) between calibrations
 * @param usedSince   since the last one
 * @param usePerDay   mean of the recent past, above 0; 0 = it is not used, and only the calendar counts
 */
export function daysOfUseLeft(allowedUse: number, usedSince: number, usePerDay: number): number {
  return usePerDay > 0 ? Math.max(0, allowedUse - usedSince) / usePerDay : Infinity;
}
