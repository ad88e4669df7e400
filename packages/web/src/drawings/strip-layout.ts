/**
 * Geometry of the line strip: each line's error as a bar, the full height its tolerance. Pure.
 */
import type { StripLine } from "@wavekeep/api/contract";
import type { Scale } from "./scale.ts";
import { isUnseen } from "./wavelength-hue.ts";

export interface StripMark {
  /** Index into the lines given. */
  index: number;
  /** Centre, px from the left. */
  x: number;
  /** `bar`: judged. `hollow`: left out or refused. `tick`: nothing to show but where it is. */
  kind: "bar" | "hollow" | "tick";
  width: number;
  /** Signed height of the bar in px, up positive, held at the limit; 0 for hollow and tick. */
  height: number;
  /** Signed ends of +-U, px, up positive; null without one. */
  whisker: [number, number] | null;
  /** Error beyond the limit: a square stands there. */
  isBeyond: boolean;
  isUnseen: boolean;
}

export interface StripLayout {
  marks: StripMark[];
  /** Index of the worst judged line; null when none was judged. */
  worst: number | null;
  /** First and last px between which a line judges; null when none does. */
  judged: [number, number] | null;
}

/** |error| over tolerance; null where either is absent. */
export function usedOf(line: StripLine): number | null {
  if (line.errorNm === null || line.toleranceNm === null || line.toleranceNm <= 0) return null;
  return Math.abs(line.errorNm) / line.toleranceNm;
}

/** Index of the judged line that uses most of its tolerance. */
export function worstLine(lines: readonly StripLine[]): number | null {
  let worst: number | null = null;
  let most = -1;
  lines.forEach((line, index) => {
    const used = line.status === "judged" ? usedOf(line) : null;
    if (used !== null && used > most) {
      most = used;
      worst = index;
    }
  });
  return worst;
}

/** Share of the tolerance that a line's guard band takes: w = r U. Null where it cannot be said. */
export function guardShareOf(line: StripLine | undefined, guardFactor: number): number | null {
  if (
    line === undefined ||
    guardFactor <= 0 ||
    line.expandedUncNm === null ||
    line.toleranceNm === null ||
    line.toleranceNm <= 0
  )
    return null;
  return Math.min((guardFactor * line.expandedUncNm) / line.toleranceNm, 1);
}

/** A bar's width: 5, or 3 or 2 where the next is nearer than 6 or 4 px. */
export function barWidth(gapPx: number): number {
  if (gapPx < 4) return 2;
  if (gapPx < 6) return 3;
  return 5;
}

/**
 * @param lines in any order; marks come back in the order of wavelength
 * @param half full height of one side, px: the tolerance
 */
export function layoutStrip(lines: readonly StripLine[], scale: Scale, half: number): StripLayout {
  const shown = lines
    .map((line, index) => ({ line, index, x: scale.at(line.wavelengthNm) }))
    .filter(({ x }) => x >= -0.5 && x <= scale.width + 0.5)
    .sort((a, b) => a.x - b.x);
  const marks = shown.map(({ line, index, x }, i): StripMark => {
    const gap = Math.min(x - (shown[i - 1]?.x ?? -Infinity), (shown[i + 1]?.x ?? Infinity) - x);
    const isHollow = line.status === "left-out" || line.status === "refused";
    const hasError =
      line.status === "judged" && line.errorNm !== null && line.toleranceNm !== null && line.toleranceNm > 0;
    const ratio = hasError ? (line.errorNm ?? 0) / (line.toleranceNm ?? 1) : 0;
    const unc = hasError && line.expandedUncNm !== null ? line.expandedUncNm / (line.toleranceNm ?? 1) : null;
    return {
      index,
      x,
      kind: hasError ? "bar" : isHollow ? "hollow" : "tick",
      width: barWidth(gap),
      height: Math.min(Math.max(ratio, -1), 1) * half,
      whisker: unc === null ? null : [(ratio - unc) * half, (ratio + unc) * half],
      isBeyond: Math.abs(ratio) > 1,
      isUnseen: isUnseen(line.wavelengthNm),
    };
  });
  const bars = marks.filter((mark) => mark.kind === "bar");
  const first = bars[0];
  const last = bars[bars.length - 1];
  return {
    marks,
    worst: worstLine(lines),
    judged: first === undefined || last === undefined ? null : [first.x, last.x],
  };
}

/**
 * The mini strip thins to what 2 px bars at least 3 px apart can show: of lines that fall together the one that uses
 * most of its tolerance stays.
 */
export function layoutMini(lines: readonly StripLine[], scale: Scale, half: number, leastGap = 3): StripMark[] {
  const rank = (index: number) => {
    const line = lines[index];
    if (line === undefined) return -1;
    return line.status === "judged" ? 1 + (usedOf(line) ?? 0) : 0;
  };
  const kept: StripMark[] = [];
  for (const mark of layoutStrip(lines, scale, half).marks) {
    const before = kept[kept.length - 1];
    if (before === undefined || mark.x - before.x >= leastGap) kept.push({ ...mark, width: 2 });
    else if (rank(mark.index) > rank(before.index)) kept[kept.length - 1] = { ...mark, x: before.x, width: 2 };
  }
  return kept;
}
