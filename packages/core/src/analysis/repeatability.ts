/**
 * Type A evaluation over repeats (JCGM 100, 4.2): every repeat is fitted by itself, and a line's standard uncertainty is the standard
 * deviation of its positions over the square root of their number.
 */
import { findLines, type FoundLines } from "../spectrum/find-lines.ts";
import type { CombinedCaptures } from "./combine-captures.ts";
import type { AnalysisSetup } from "./types.ts";

export interface Repeatability {
  unc: number;
  degreesOfFreedom: number;
}

/** A repeat's line is the same one when it lies within this share of the width. */
const sameLineWidths = 0.5;

/** One entry a line of `found`; null where fewer than two repeats show the line. */
export function repeatabilityOf(
  combined: CombinedCaptures,
  found: FoundLines,
  setup: AnalysisSetup,
): (Repeatability | null)[] {
  if (combined.repeats.length < 2) return found.lines.map(() => null);
  const each = combined.repeats.map(
    (repeat) =>
      findLines(repeat, {
        falseLinesPerCapture: setup.falseLinesPerCapture,
        ...(combined.saturated === null
          ? {}
          : { saturated: combined.saturated, ceilingCounts: combined.ceilingCounts }),
      }).lines,
  );
  return found.lines.map((line) => {
    const positions: number[] = [];
    for (const lines of each) {
      let nearest: number | null = null;
      for (const other of lines) {
        const distance = Math.abs(other.position - line.position);
        if (distance > sameLineWidths * line.fwhm) continue;
        if (nearest === null || distance < Math.abs(nearest - line.position)) nearest = other.position;
      }
      if (nearest !== null) positions.push(nearest);
    }
    const n = positions.length;
    if (n < 2) return null;
    let mean = 0;
    for (const position of positions) mean += position / n;
    let squares = 0;
    for (const position of positions) squares += (position - mean) * (position - mean);
    return { unc: Math.sqrt(squares / (n - 1) / n), degreesOfFreedom: n - 1 };
  });
}
