/**
 * Naming the line of a window: a scanning instrument writes 20 to 40 samples about a line it was told to go to, so that its place on the
 * instrument's own axis is known beforehand. Where the lines of all windows together can't bear out an axis (fewer than three), each is
 * named by that place alone, and only where nothing else can be meant.
 *
 * Named    the strongest line of the stretch, within 3 widths of the one line that the procedure expects there; without a list, of the one
 *          published line that is not ten times weaker than the strongest of the stretch. Published lines nearer to it than 1.5 widths
 *          are its blend: their mean, with half their spread over the square root of 3
 */
import { identifyLines, type IdentifiedLines, type IdentifyInput, type LineName } from "../identify/identify-lines.ts";
import { nameOfReference } from "../identify/few-lines.ts";
import { linesOf, lineWavelengthNm } from "../linelist/built-in.ts";
import { isLine } from "./judge-lines.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import type { FittedLine, ReferenceLine } from "./types.ts";

/** Longest capture that is taken for a window, samples. */
export const longestAlone = 64;
const reachWidths = 3;
const blendWidths = 1.5;
const weakerThan = 0.1;
const leastSignalToNoise = 10;

/** First and last position of each stretch that was scanned. */
export type Stretch = readonly [number, number];

/** As `identifyLines`, and where that has too few lines to bear out an axis by their nominal places. */
export function identifyWindows(
  input: IdentifyInput,
  stretches: readonly Stretch[],
  axis: IndicatingAxis | null,
): IdentifiedLines {
  const together = identifyLines(input);
  if (together.outcome === "identified" || axis === null || input.mode.kind !== "earlier-axis") return together;
  const names: (LineName | null)[] = input.lines.map(() => null);
  let chance = 0;
  for (const stretch of stretches) {
    let strongest: FittedLine | null = null;
    for (const line of input.lines) {
      if (line.position < stretch[0] || line.position > stretch[1] || line.flags.includes("spike")) continue;
      if (strongest === null || line.peakHeightCounts > strongest.peakHeightCounts) strongest = line;
    }
    const name = strongest === null ? null : nameByPlace(strongest, stretch, input, axis);
    // One window that can't be named leaves the whole undecided: it may be another lamp.
    if (name === null) return together;
    names[input.lines.indexOf(strongest!)] = name;
    chance = Math.max(chance, Math.min(1, (2 * reachWidths * strongest!.fwhm) / (stretch[1] - stretch[0])));
  }
  return {
    ...together,
    outcome: "identified",
    reason: null,
    names,
    chanceProbability: chance,
    margin: 0,
    note: "windows of single lines: named by their nominal places alone",
    warnings: [
      {
        code: "nominal",
        text: "The lines were named by their nominal places alone; a wrong lamp can't be told so. Three windows or more bear each other out.",
      },
    ],
    missingLinesNm: [],
  };
}

function nameByPlace(
  line: FittedLine,
  [first, last]: Stretch,
  input: IdentifyInput,
  axis: IndicatingAxis,
): LineName | null {
  if (line.signalToNoise < leastSignalToNoise || line.flags.includes("edge")) return null;
  const fwhmNm = line.fwhm * Math.abs(axis.slopeNm(line.position));
  const placeOf = (one: ReferenceLine): number => {
    const { wavelengthNm, medium } = lineWavelengthNm(one);
    return axis.referenceNm(wavelengthNm, medium);
  };
  const ends = [axis.indicatedNm(first), axis.indicatedNm(last)];
  const reach = reachWidths * fwhmNm;
  const published = linesOf(input.lineList, input.elements, Math.min(...ends) - 1, Math.max(...ends) + 1);
  const strength = (one: ReferenceLine): number => one.relativeIntensity ?? 0;
  const inside = published.filter((one) => placeOf(one) >= Math.min(...ends) && placeOf(one) <= Math.max(...ends));
  const strongest = inside.reduce((most, one) => Math.max(most, strength(one)), 0);
  const isExpected = (one: ReferenceLine): boolean => isLine(input.expectedLinesNm, lineWavelengthNm(one).wavelengthNm);
  const expected = published.filter(isExpected);
  const candidates = (
    expected.length > 0 ? expected : published.filter((one) => strength(one) >= weakerThan * strongest)
  ).filter((one) => Math.abs(placeOf(one) - axis.indicatedNm(line.position)) <= reach);
  const main = candidates.reduce<ReferenceLine | null>(
    (a, b) => (a === null || strength(b) > strength(a) ? b : a),
    null,
  );
  if (main === null) return null;
  const isBlended = (one: ReferenceLine): boolean =>
    strength(one) >= weakerThan * strength(main) && Math.abs(placeOf(one) - placeOf(main)) < blendWidths * fwhmNm;
  if (candidates.some((one) => !isBlended(one) && one !== main)) return null;
  const parts = published.filter((one) => one === main || isBlended(one));
  const name = nameOfReference(main);
  if (parts.length < 2 || name === null) return name;
  const wavelengths = parts.map((one) => lineWavelengthNm(one).wavelengthNm);
  const spread = Math.max(...wavelengths) - Math.min(...wavelengths);
  return {
    ...name,
    wavelengthNm: wavelengths.reduce((sum, nm) => sum + nm, 0) / parts.length,
    blendOf: parts,
    blendUncNm: spread / 2 / Math.sqrt(3),
  };
}
