/**
 * A new axis from the named lines, and the names that it takes back: a line that lies a quarter of a width off the axis of all the others
 * is not the line it was taken for.
 */
import { axisNm, axisSlope } from "../dispersion/axis.ts";
import {
  type DispersionOptions,
  type DispersionPoint,
  type DispersionRefusal,
  fitDispersion,
  type FittedDispersion,
} from "../dispersion/fit-dispersion.ts";
import { fitGratingDispersion } from "../dispersion/fit-grating-dispersion.ts";
import { updateAxis } from "../dispersion/update-axis.ts";
import type { IdentifiedLines } from "../identify/identify-lines.ts";
import type { FoundLines } from "../spectrum/find-lines.ts";
import type { JudgedLineResult } from "./judge-lines.ts";
import { referenceMedium } from "./reference-medium.ts";
import type { Analysis, AnalysisSetup, AxisMeaning, Dispersion, PixelAxis, Spectrum } from "./types.ts";

/** A rejected line is called an outlier when it lies this many of its own standard uncertainties off; else it was merely not sure enough. */
const outlierSigmas = 2.5;

export interface NewAxis {
  dispersion: Dispersion | null;
  warnings: Analysis["warnings"];
}

/**
 * A new axis from the named lines: fitted anew, or the earlier one moved (`setup.axisUpdate`); of a pixel axis whose optics are known the
 * geometry as well. Marks in `lines` what was used and what was rejected.
 */
export function fitAxis(
  spectrum: Spectrum,
  found: FoundLines,
  lines: JudgedLineResult[],
  setup: AnalysisSetup,
  identified: IdentifiedLines,
): NewAxis {
  if (identified.outcome !== "identified" || spectrum.axisKind === "wavenumber")
    return { dispersion: null, warnings: [] };
  const used = lines.map((_, index) => index).filter((index) => lines[index]!.fitsAxis);
  const medium = referenceMedium(meaningOf(setup), setup.room);
  const points = used.map((index): DispersionPoint => {
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
  const warnings: NewAxis["warnings"] = [];
  const fitted = fitPoints(points, spectrum, found, setup, warnings);
  if (fitted.outcome === "refused") {
    // An instrument with an axis of its own is judged by it: that no new one can be fitted is no news.
    if (spectrum.axisKind !== "wavelength") warnings.push({ code: "no-axis", text: fitted.reason });
    return { dispersion: null, warnings };
  }
  const rejected = fitted.dispersion.rejected.map(({ line, reason }) => ({ line: used[line]!, reason }));
  used.forEach((index, point) => {
    const { result } = lines[index]!;
    const isRejected = rejected.some((one) => one.line === index);
    result.usedInAxis = !isRejected;
    result.residualNm = fitted.residualsNm[point]!;
    result.leverage = fitted.leverages[point]!;
    result.studentisedResidual = fitted.studentisedResiduals[point]!;
    if (!isRejected) return;
    const { position, positionUnc, wavelengthUncNm } = points[point]!;
    const positionUncNm = positionUnc * axisSlope(fitted.dispersion.axis, position);
    const uncNm = Math.sqrt(positionUncNm * positionUncNm + wavelengthUncNm * wavelengthUncNm);
    if (Math.abs(result.residualNm) > outlierSigmas * uncNm) result.flags.push("outlier");
  });
  return { dispersion: { ...fitted.dispersion, rejected }, warnings };
}

function fitPoints(
  points: readonly DispersionPoint[],
  spectrum: Spectrum,
  found: FoundLines,
  setup: AnalysisSetup,
  warnings: NewAxis["warnings"],
): FittedDispersion | DispersionRefusal {
  const options: DispersionOptions = {
    degree: setup.degree,
    firstPosition: spectrum.positions[0]!,
    lastPosition: spectrum.positions[spectrum.positions.length - 1]!,
    meaning: meaningOf(setup),
    fwhm: found.medianFwhm ?? 1,
    earlier: setup.axisUpdate === "fit" ? null : earlierAxisOf(spectrum, setup),
  };
  const { mode, axisUpdate, optics } = setup;
  const kind = axisUpdate ?? "fit";
  if (kind !== "fit" && mode.kind === "earlier-axis" && mode.axis !== "own") {
    const updated = updateAxis(mode.axis, points, { ...options, kind });
    if (updated.outcome === "fitted" && updated.remark !== null) {
      warnings.push({ code: "axis-update", text: updated.remark });
    }
    return updated;
  }
  const polynomial = fitDispersion(points, options);
  if (polynomial.outcome === "refused" || spectrum.axisKind !== "pixel") return polynomial;
  const isAsked = setup.axisFamily === "grating";
  if (optics === undefined || optics === null) {
    if (isAsked) {
      const text =
        "The axis was to follow the spectrometer's geometry, but its optics are not known: a polynomial was fitted.";
      warnings.push({ code: "no-optics", text });
    }
    return polynomial;
  }
  const grating = fitGratingDispersion(points, optics, options, polynomial);
  if (grating.outcome === "refused") {
    if (isAsked) warnings.push({ code: "no-optics", text: `${grating.reason} A polynomial was fitted instead.` });
    return polynomial;
  }
  if (isAsked) return grating;
  polynomial.dispersion.families = grating.dispersion.families!;
  return polynomial;
}

/** The axis that a new one starts from: an earlier one of these pixels, or the file's own wavelengths as they are. */
function earlierAxisOf({ axisKind, positions }: Spectrum, { mode }: AnalysisSetup): PixelAxis | null {
  if (mode.kind !== "earlier-axis") return null;
  if (mode.axis !== "own") return mode.axis;
  if (axisKind !== "wavelength") return null;
  return {
    coefficients: [0, 1],
    firstPx: positions[0]!,
    lastPx: positions[positions.length - 1]!,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
    meaning: "standard-air",
  };
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
