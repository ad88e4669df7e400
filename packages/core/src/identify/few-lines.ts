/**
 * Naming two lines by an earlier axis: a built-in deuterium lamp shows no more.
 *
 * Two lines can't bear out a new axis, but they can be recognised on one that is known: each within `reach` line widths of
 * one published line and of no other, both displaced alike, and nothing else in the capture. Whatever is further off needs
 * a lamp with more lines.
 *
 * Chance     each published line of the lamp opens a window of 2 reach FWHM; two lines placed evenly over the range fall into
 *            two different windows, displaced alike, with the probability stated (windows do not overlap, by the rule above)
 */
import type { FittedLine, LineList, PixelAxis, ReferenceLine } from "../analysis/types.ts";
import { axisNm, axisSlope } from "../dispersion/axis.ts";
import { assumedReferenceUncNm, linesOf, lineWavelengthNm } from "../linelist/built-in.ts";
import type { LineName } from "./identify-lines.ts";

/** Lines that this rule names: one alone could be anything. */
const fewLines = 2;
/** How far from its published line a line may be read, in line widths. Common practice, no source. */
const reach = 2;
/** How much two displacements may differ, in line widths. Common practice, no source. */
const alike = 1;
/** A lamp with more published lines in range than this is no short one: two lines of it prove nothing. */
const mostPublished = 8;
const leastSignalToNoise = 10;

export interface FewLinesInput {
  lines: readonly FittedLine[];
  firstPosition: number;
  lastPosition: number;
  medianFwhm: number;
  elements: readonly string[];
  lineList: LineList;
  axis: PixelAxis | "own";
}

export interface FewNames {
  /** Same order as the lines; null for spikes. */
  names: (LineName | null)[];
  chanceProbability: number;
}

/** Names for exactly two lines, or null where they can't be told for certain. */
export function nameFewLines(input: FewLinesInput): FewNames | null {
  const { axis, lines, medianFwhm } = input;
  const nmAt = (position: number): number => (axis === "own" ? position : axisNm(axis, position));
  const real = lines.filter((line) => !line.flags.includes("spike"));
  if (
    real.length !== fewLines ||
    real.some((line) => line.signalToNoise < leastSignalToNoise || line.flags.includes("edge"))
  )
    return null;
  const ends = [nmAt(input.firstPosition), nmAt(input.lastPosition)];
  const firstNm = Math.min(...ends);
  const lastNm = Math.max(...ends);
  const published = linesOf(input.lineList, input.elements, firstNm, lastNm);
  if (published.length < fewLines || published.length > mostPublished) return null;

  const taken = new Map<FittedLine, { reference: ReferenceLine; displacement: number; fwhmNm: number }>();
  let windows = 0;
  for (const line of real) {
    const fwhmNm = medianFwhm * (axis === "own" ? 1 : Math.abs(axisSlope(axis, line.position)));
    const near = published.filter(
      (one) => Math.abs(nmAt(line.position) - lineWavelengthNm(one).wavelengthNm) <= 2 * reach * fwhmNm,
    );
    const [reference] = near;
    if (near.length !== 1 || reference === undefined) return null;
    const displacement = nmAt(line.position) - lineWavelengthNm(reference).wavelengthNm;
    if (Math.abs(displacement) > reach * fwhmNm) return null;
    taken.set(line, { reference, displacement, fwhmNm });
    windows = Math.max(windows, (2 * reach * fwhmNm * published.length) / (lastNm - firstNm));
  }
  const [one, other] = [...taken.values()];
  if (one === undefined || other === undefined || one.reference === other.reference) return null;
  if (Math.abs(one.displacement - other.displacement) > alike * Math.max(one.fwhmNm, other.fwhmNm)) return null;
  // The second must fall into another window, and within `alike` of the first one's displacement.
  const chanceProbability =
    Math.min(1, windows) * Math.min(1, (windows * (published.length - 1) * alike) / (published.length * reach));
  return { names: lines.map((line) => nameOfReference(taken.get(line)?.reference)), chanceProbability };
}

/** Name of a plain line that was recognised by its place; null for none. */
export function nameOfReference(reference: ReferenceLine): LineName;
export function nameOfReference(reference: ReferenceLine | undefined): LineName | null;
export function nameOfReference(reference: ReferenceLine | undefined): LineName | null {
  if (reference === undefined) return null;
  return {
    ...lineWavelengthNm(reference),
    element: reference.element,
    species: reference.spectrum,
    order: 1,
    blendOf: [],
    blendUncNm: 0,
    referenceUncNm: reference.uncertaintyNm ?? assumedReferenceUncNm,
    referenceUncAssumed: reference.uncertaintyNm === null,
    referenceSource: reference.source,
    relativeIntensity: reference.relativeIntensity,
  };
}
