/**
 * Type A evaluation over repeats (JCGM 100, 4.2): every repeat is fitted by itself, and a line's standard uncertainty is the standard
 * deviation of its positions over the square root of their number.
 *
 * The repeats scatter by their noise too, which the fit of their sum already holds: only what goes beyond it is a contribution of its own,
 * and only where it is more than chance (chi-squared, 1 in 100), else half of all lines would carry one for nothing. What is beyond in all lines
 * together (the instrument moved between repeats) is taken from all of them; what is beyond in one line is that line's.
 */
import { chiSquareUpperTail } from "../numeric/distributions.ts";
import { findLines, type FoundLines } from "../spectrum/find-lines.ts";
import { median } from "../spectrum/median.ts";
import type { CaptureGroup } from "./combine-captures.ts";
import type { LineRepeatability } from "./line-budget.ts";
import type { AnalysisSetup } from "./types.ts";

/** A repeat's line is the same one when it lies within this share of the width. */
const sameLineWidths = 0.5;
const chanceLevel = 0.01;
/** A line whose variance is so many times what the others show moves by itself. */
const oddFactor = 9;

/** Scatter of one line over repeats. */
export interface RepeatedLine {
  /** Standard uncertainty of the line's position in the sum of all repeats, from the fit. */
  fitUnc: number;
  /** Position in each repeat that shows the line. */
  positions: readonly number[];
}

/** One entry a line of `found`; null where fewer than two repeats show the line. */
export function repeatabilityOf(
  combined: Omit<CaptureGroup, "names">,
  found: FoundLines,
  setup: AnalysisSetup,
): (LineRepeatability | null)[] {
  if (combined.repeats.length < 2) return found.lines.map(() => null);
  const each = combined.repeats.map(
    (repeat) =>
      findLines(repeat, {
        falseLinesPerCapture: setup.falseLinesPerCapture,
        lineShape: setup.lineShape ?? "gaussian",
        positionDefinition: setup.positionDefinition ?? "fitted",
        ...(combined.saturated === null
          ? {}
          : { saturated: combined.saturated, ceilingCounts: combined.ceilingCounts }),
      }).lines,
  );
  return repeatabilityFrom(
    found.lines.map((line) => {
      const positions: number[] = [];
      for (const lines of each) {
        let nearest: number | null = null;
        for (const other of lines) {
          // A repeat that does not resolve what the sum resolves, or the reverse, measures another top.
          if (other.flags.includes("blend") !== line.flags.includes("blend")) continue;
          const distance = Math.abs(other.position - line.position);
          if (distance > sameLineWidths * line.fwhm) continue;
          if (nearest === null || distance < Math.abs(nearest - line.position)) nearest = other.position;
        }
        if (nearest !== null) positions.push(nearest);
      }
      return { fitUnc: line.positionUnc, positions };
    }),
  );
}

/** What repeats show beyond the fits; one entry a line, null where fewer than two repeats show it. */
export function repeatabilityFrom(lines: readonly RepeatedLine[]): (LineRepeatability | null)[] {
  const each = lines.map(({ positions, fitUnc }) => {
    const n = positions.length;
    if (n < 2) return null;
    let mean = 0;
    for (const position of positions) mean += position / n;
    let squares = 0;
    for (const position of positions) squares += (position - mean) * (position - mean);
    // Variance of the mean over repeats, and what the fit says of it.
    return { n, meanVariance: squares / (n - 1) / n, fitVariance: fitUnc * fitUnc };
  });
  // A line that one repeat resolves and another does not says nothing of the instrument's movement, which all lines share.
  const known = each.filter((one) => one !== null);
  const typical = known.length === 0 ? 0 : Math.max(0, median(known.map((one) => one.meanVariance - one.fitVariance)));
  let chiSquare = 0;
  let freedom = 0;
  let beyondSum = 0;
  let most = 0;
  for (const one of each) {
    if (one === null || one.fitVariance === 0) continue;
    if (one.meanVariance > oddFactor * (one.fitVariance + typical)) continue;
    chiSquare += ((one.n - 1) * one.meanVariance) / one.fitVariance;
    freedom += one.n - 1;
    beyondSum += (one.n - 1) * (one.meanVariance - one.fitVariance);
    most = Math.max(most, one.n);
  }
  const isCommon = freedom > 0 && chiSquareUpperTail(chiSquare, freedom) < chanceLevel && beyondSum > 0;
  const common = isCommon ? beyondSum / freedom : 0;
  return each.map((one) => {
    if (one === null) return null;
    const { n, meanVariance, fitVariance } = one;
    const expected = fitVariance + common;
    const isOwn = chiSquareUpperTail(((n - 1) * meanVariance) / expected, n - 1) < chanceLevel;
    const beyond = isOwn ? meanVariance - fitVariance : common;
    // The movement of the instrument is one value a repeat, however many lines show it. A difference of variances is as uncertain as its
    // larger term.
    const ratio = isOwn ? beyond / meanVariance : beyond / (beyond + beyondNoise(fitVariance, freedom, n));
    return {
      beyondUnc: Math.sqrt(Math.max(beyond, 0)),
      degreesOfFreedom: Math.max((isOwn ? n - 1 : most - 1) * ratio * ratio, 1e-3),
      note: isOwn
        ? `standard deviation of the mean of this line over ${n} repeats, beyond the fit's own`
        : `movement of all lines over ${n} repeats, standard deviation of the mean, beyond the fits' own`,
    };
  });
}

/** Noise of the common part: the fits' share of the pooled variance, averaged over all lines. */
function beyondNoise(fitVariance: number, freedom: number, n: number): number {
  return fitVariance * Math.sqrt(Math.max(n - 1, 1) / Math.max(freedom, 1));
}
