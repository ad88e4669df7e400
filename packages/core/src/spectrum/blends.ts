/**
 * Two lines in one top: blends without a valley.
 *
 * Suspect   a group whose reduced chi² is six times that of the capture's strong single lines or more, while their shape fits them
 *           (three lines or more)
 * Two       the line that is worst gets a companion: from both sides and at equal heights, each line as wide as the capture's typical line;
 *           the start with the least chi² is kept
 * Kept      by BIC (G. Schwarz, Ann. Statist. 6 (1978) 461), three parameters more, samples counted less their correlation, better by 10 and with
 *           chi² at most half; both lines as wide as a line of this capture (0.75 to 1.33), each 3 % of the other and above the noise
 * Limits    two lines only; nearer than half a width, or where the companion is weaker than what the shape leaves over, one line stays
 */
import type { FittedWindowOfLines, LineStart } from "../lineshape/fit-line.ts";
import { log } from "../numeric/elementary.ts";
import { redundancyOf } from "./capture-shape.ts";
import { fitWindow, resultOf, type FitSettings, type FittedGroup } from "./fit-groups.ts";
import { windowOf, type Group, type Prepared } from "./line-groups.ts";
import { median } from "./median.ts";

/** What the capture's strong single lines are like. */
export interface TypicalFit {
  reducedChiSquare: number;
  /** Axis unit. */
  fwhm: number;
}

const strongSignalToNoise = 30;
const fewestStrong = 3;
const mostTogether = 4;
const beyondTypical = 6;
const leastImprovement = 10;
const narrowest = 0.75;
const broadest = 1.33;
const leastShare = 0.03;
const leastSigmas = 6;
/** Starts: offsets in widths of the two from the one, and their shares of its area. */
const starts: readonly [number, number, number, number][] = [
  [-0.35, 0.5, 0.35, 0.5],
  [-0.1, 0.85, 0.7, 0.15],
  [0.1, 0.85, -0.7, 0.15],
  [-0.5, 0.5, 0.5, 0.5],
];

/** Null where too few strong lines are there to say what is usual. */
export function typicalFit(fitted: readonly FittedGroup[]): TypicalFit | null {
  const strong = fitted.flatMap(({ lines }) =>
    lines.length === 1 && lines[0]!.flags.length === 0 && lines[0]!.signalToNoise > strongSignalToNoise ? lines : [],
  );
  if (strong.length < fewestStrong) return null;
  return {
    reducedChiSquare: Math.max(1, median(strong.map((line) => line.reducedChiSquare))),
    fwhm: median(strong.map((line) => line.fwhm)),
  };
}

/** The group with one line more where its samples ask for it, else null. */
export function fitBlend(
  prepared: Prepared,
  group: Group,
  one: FittedGroup,
  typical: TypicalFit,
  settings: FitSettings,
): FittedGroup | null {
  const { lines } = one;
  if (lines.length !== group.members.length || lines.length >= mostTogether || one.window === null) return null;
  if (lines.some((line) => line.flags.includes("saturated") || line.flags.includes("edge"))) return null;
  if (lines[0]!.reducedChiSquare < beyondTypical * typical.reducedChiSquare) return null;
  const window = windowOf(prepared, group, settings.gain.gain);
  const m = window.samples.length;
  const effective = m / redundancyOf(prepared);
  const before = lines[0]!.reducedChiSquare * lines[0]!.degreesOfFreedom;
  let best: { fit: FittedWindowOfLines; group: Group; starts: LineStart[]; chiSquare: number } | null = null;
  const broad = lines.reduce((worst, line, k) => (line.fwhm > lines[worst]!.fwhm ? k : worst), 0);
  const { position, peakHeightCounts, fwhm } = lines[broad]!;
  const member = group.members[broad]!;
  const total = (peakHeightCounts * fwhm) / typical.fwhm;
  for (const [firstOffset, firstShare, secondOffset, secondShare] of starts) {
    const two: LineStart[] = [
      { centre: position + firstOffset * typical.fwhm, fwhm: typical.fwhm, peakHeightCounts: firstShare * total },
      { centre: position + secondOffset * typical.fwhm, fwhm: typical.fwhm, peakHeightCounts: secondShare * total },
    ];
    const tried: LineStart[] = lines.map((line) => ({
      centre: line.position,
      fwhm: line.fwhm,
      peakHeightCounts: line.peakHeightCounts,
    }));
    tried.splice(broad, 1, ...two);
    const members = group.members.slice();
    members.splice(broad, 1, member, member);
    const changed: Group = { ...group, members };
    const fit = fitWindow(prepared, changed, window, tried, settings.shape, false, false);
    if (fit === null) continue;
    const chiSquare = fit.reducedChiSquare * fit.degreesOfFreedom;
    if (best === null || chiSquare < best.chiSquare) best = { fit, group: changed, starts: fit.lines, chiSquare };
  }
  if (best === null || best.chiSquare > 0.5 * before) return null;
  if (effective * log(before / best.chiSquare) - 3 * log(effective) < leastImprovement) return null;
  const pair = best.fit.lines.slice(broad, broad + 2);
  const noise = prepared.readNoise[member.top]!;
  const isLine = pair.every(
    (line, k) =>
      line.fwhm > narrowest * typical.fwhm &&
      line.fwhm < broadest * typical.fwhm &&
      line.peakHeightCounts > leastSigmas * noise &&
      line.peakHeightCounts > leastShare * pair[1 - k]!.peakHeightCounts,
  );
  if (!isLine) return null;
  const split = resultOf(prepared, best.group, window, best.fit, best.starts, settings);
  // Intervals of such pairs held 89 of 100 where 95 are stated: neither axis nor verdict may rest on them.
  for (const line of split.lines.slice(broad, broad + 2))
    if (!line.flags.includes("poor-fit")) line.flags.push("poor-fit");
  return split;
}
