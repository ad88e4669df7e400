/**
 * A new axis from the named lines, and the names that it takes back: a line that lies a quarter of a width off the axis of all the others
 * is not the line it was taken for.
 */
import { axisNm, axisSlope } from "../dispersion/axis.ts";
import { fitDispersion } from "../dispersion/fit-dispersion.ts";
import type { IdentifiedLines } from "../identify/identify-lines.ts";
import type { FoundLines } from "../spectrum/find-lines.ts";
import type { JudgedLineResult } from "./judge-lines.ts";
import { referenceMedium } from "./reference-medium.ts";
import type { AnalysisSetup, AxisMeaning, Dispersion, Spectrum } from "./types.ts";

/** A rejected line is called an outlier when it lies this many of its own standard uncertainties off; else it was merely not sure enough. */
const outlierSigmas = 2.5;

/** A new axis from the named lines of a pixel or step axis; marks what was used and what was rejected. */
export function fitAxis(
  spectrum: Spectrum,
  found: FoundLines,
  lines: JudgedLineResult[],
  setup: AnalysisSetup,
  identified: IdentifiedLines,
): Dispersion | null {
  if (identified.outcome !== "identified" || spectrum.axisKind === "wavenumber") return null;
  const used = lines.map((_, index) => index).filter((index) => lines[index]!.fitsAxis);
  const meaning = meaningOf(setup);
  const medium = referenceMedium(meaning, setup.room);
  const points = used.map((index) => {
    const name = identified.names[index]!;
    const line = found.lines[index]!;
    return {
      position: line.position,
      positionUnc: line.positionUnc,
      wavelengthNm: medium.referenceNm(name.wavelengthNm, name.medium),
      signalToNoise: line.signalToNoise,
      wavelengthUncNm: Math.sqrt(name.referenceUncNm * name.referenceUncNm + name.blendUncNm * name.blendUncNm),
    };
  });
  const fitted = fitDispersion(points, {
    degree: setup.degree,
    firstPosition: spectrum.positions[0]!,
    lastPosition: spectrum.positions[spectrum.positions.length - 1]!,
    meaning,
    fwhm: found.medianFwhm ?? 1,
  });
  if (fitted.outcome === "refused") {
    // An instrument with an axis of its own is judged by it: that no new one can be fitted is no news.
    if (spectrum.axisKind === "wavelength") return null;
    identified.warnings.push({ code: "no-axis", text: fitted.reason });
    return null;
  }
  const rejected = fitted.dispersion.rejected.map(({ line, reason }) => ({ line: used[line]!, reason }));
  used.forEach((index, point) => {
    const { result } = lines[index]!;
    const isRejected = rejected.some((one) => one.line === index);
    result.usedInAxis = !isRejected;
    result.residualNm = fitted.residualsNm[point]!;
    if (!isRejected) return;
    const { position, positionUnc, wavelengthUncNm } = points[point]!;
    const positionUncNm = positionUnc * axisSlope(fitted.dispersion.axis, position);
    const uncNm = Math.sqrt(positionUncNm * positionUncNm + wavelengthUncNm * wavelengthUncNm);
    if (Math.abs(result.residualNm) > outlierSigmas * uncNm) result.flags.push("outlier");
  });
  return { ...fitted.dispersion, rejected };
}

function meaningOf({ mode, axisMeaning }: AnalysisSetup): AxisMeaning {
  return mode.kind === "earlier-axis" && mode.axis !== "own" ? mode.axis.meaning : axisMeaning;
}

/** The same for a line that the axis fit rejected: nothing speaks for its name any more. */
const farthestRejected = 0.1;
/** Shares of the width off the axis at which a plain line, a saturated one and a blend lose their names. */
const farthestPlain = 0.25;
const farthestSaturated = 0.5;
const farthestBlend = 0.75;
/** When more of the lines are off, the axis is in doubt and not the names. */
const mostMisplaced = 0.2;
const leastToTell = 6;

export const misplacedReason =
  "Its place does not fit the axis of the other lines, so it has no name. It may belong to another gas.";

/** Lines whose names the fitted axis does not bear out. */
export function findMisplaced(
  found: FoundLines,
  dispersion: Dispersion | null,
  setup: AnalysisSetup,
  identified: IdentifiedLines,
): number[] {
  if (dispersion === null || setup.degree !== null) return [];
  const medium = referenceMedium(meaningOf(setup), setup.room);
  const misplaced: number[] = [];
  let named = 0;
  identified.names.forEach((name, index) => {
    if (name === null || name.order !== 1) return;
    named += 1;
    const { position, fwhm, flags } = found.lines[index]!;
    const fwhmNm = fwhm * Math.abs(axisSlope(dispersion.axis, position));
    const off = Math.abs(axisNm(dispersion.axis, position) - medium.referenceNm(name.wavelengthNm, name.medium));
    const isRejected = dispersion.rejected.some((one) => one.line === index);
    const share = isRejected
      ? farthestRejected
      : name.blendOf.length > 1
        ? farthestBlend
        : flags.includes("saturated")
          ? farthestSaturated
          : farthestPlain;
    if (off > share * fwhmNm) misplaced.push(index);
  });
  return named >= leastToTell && misplaced.length <= mostMisplaced * named ? misplaced : [];
}
