/**
 * Uncertainty budget of one line's error, indicated - reference (JCGM 100). Everything in nm; what is measured in positions is multiplied
 * with the local dispersion, its sensitivity coefficient.
 *
 * reference    the published wavelength; 0.001 nm, marked *assumed*, where the source states none
 * fit          the centre of the line, from the noise of its samples
 * blend        half the spread of the components over the square root of 3
 * repeatability  type A over repeats, as far as it goes beyond the fit
 * resolution   rounding of the axis as written, or the display's or drive's resolution
 * dispersion   the local dispersion that positions are multiplied with, where the axis' covariance is known
 * set-up       what the position moves when the instrument is set up anew: history, stated or assumed
 * temperature, air, laser  as the setup says
 *
 * The last four and a display's resolution move all lines together: they are returned by cause as well, signed, so that the covariance of the
 * errors of two lines is known. What is not known is left out and named in `notIncluded`.
 */
import type { LineName } from "../identify/identify-lines.ts";
import { isBeyondChance } from "../lineshape/fit-line.ts";
import type { Contribution } from "../uncertainty/budget.ts";
import type { IndicatingAxis } from "./indicating-axis.ts";
import type { AnalysisSetup, FittedLine } from "./types.ts";

/** Causes that move all lines together, in the order of `sharedByCauseNm`. */
export const sharedCauses = ["resolution", "set-up", "temperature", "air", "laser"] as const;

export interface LineRepeatability {
  /** Standard uncertainty of the mean position beyond the fit's own, axis units. */
  beyondUnc: number;
  /** Such that `beyondUnc` has the weight in Welch and Satterthwaite's formula that its estimate deserves. */
  degreesOfFreedom: number;
  note: string;
}

/** Where a display's resolution is not stated it is taken as no coarser than this share of the sample step (common practice, no source). */
const assumedStepShare = 0.1;
const sqrt12 = Math.sqrt(12);
/**
 * Independent rounding of single sample positions averages out over a line: the variance of a Gaussian's fitted centre is this number of
 * samples over the FWHM in samples times that of one (sum of y'^4 over the square of the sum of y'^2).
 */
const averagedSamples = 0.705;

export function budgetOfLine(
  line: FittedLine,
  name: LineName,
  repeatability: LineRepeatability | null,
  axis: IndicatingAxis,
  setup: AnalysisSetup,
): { contributions: Contribution[]; sharedByCauseNm: number[] } {
  const slopeNm = axis.slopeNm(line.position);
  const nmPerUnit = Math.abs(slopeNm);
  const isScaled = isBeyondChance(line.reducedChiSquare, line.degreesOfFreedom);
  const contributions: Contribution[] = [
    {
      contribution: "reference",
      uncNm: name.referenceUncNm,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: name.referenceUncAssumed,
      note: name.referenceUncAssumed
        ? "the source states none: 0.001 nm assumed"
        : `published (${name.referenceSource})`,
    },
    {
      contribution: "fit",
      uncNm: line.positionUnc * nmPerUnit,
      degreesOfFreedom: line.positionDegreesOfFreedom ?? (isScaled ? line.degreesOfFreedom : null),
      sensitivity: nmPerUnit,
      assumed: line.flags.includes("poor-fit") && line.degreesOfFreedom === 0,
      note: isScaled ? "centre of the line, scaled by the scatter about the fit" : "centre of the line, from the noise",
    },
  ];
  if (name.blendUncNm > 0) {
    contributions.push({
      contribution: "blend",
      uncNm: name.blendUncNm,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: true,
      note: "half the spread of the blend's components over the square root of 3",
    });
  }
  if (repeatability !== null && repeatability.beyondUnc > 0) {
    contributions.push({
      contribution: "repeatability",
      uncNm: repeatability.beyondUnc * nmPerUnit,
      degreesOfFreedom: repeatability.degreesOfFreedom,
      sensitivity: nmPerUnit,
      assumed: false,
      note: repeatability.note,
    });
  }
  if (axis.roundingStepNm > 0) {
    const fwhmSamples = (line.fwhm * nmPerUnit) / axis.nmPerSample(line.position);
    contributions.push({
      contribution: "resolution",
      uncNm: (axis.roundingStepNm / sqrt12) * Math.sqrt(Math.min(1, averagedSamples / fwhmSamples)),
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: false,
      note: "rounding of the axis as written, rectangular, averaged over the samples of the line",
    });
  }
  const slopeUncNm = axis.slopeUncNm?.(line.position) ?? 0;
  if (slopeUncNm > 0) {
    // Second order: both factors of position uncertainty x dispersion are uncertain, and what the first is multiplied with is only known so well.
    contributions.push({
      contribution: "dispersion",
      uncNm: line.positionUnc * slopeUncNm,
      degreesOfFreedom: null,
      sensitivity: line.positionUnc,
      assumed: false,
      note: "local dispersion of the earlier axis, from its covariance",
    });
  }
  const shared = sharedContributions(line, name, axis, setup);
  const sharedByCauseNm = sharedCauses.map((cause) => {
    const entry = shared.find((one) => one.contribution === cause);
    // A position moves the indicated wavelength by the dispersion's sign; nanometres move it as they are.
    const sign = cause === "set-up" && setup.setupReproducibility?.unit === "px" && slopeNm < 0 ? -1 : 1;
    return entry === undefined ? 0 : sign * (entry.sensitivity < 0 ? -entry.uncNm : entry.uncNm);
  });
  return { contributions: [...contributions, ...shared], sharedByCauseNm };
}

/** What moves all lines together. */
function sharedContributions(
  line: FittedLine,
  name: LineName,
  axis: IndicatingAxis,
  setup: AnalysisSetup,
): Contribution[] {
  const shared: Contribution[] = [];
  const resolution = displayResolution(axis, setup);
  if (resolution !== null) {
    shared.push({
      contribution: "resolution",
      uncNm: resolution.stepNm / sqrt12,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: resolution.isAssumed,
      note: resolution.isAssumed
        ? "last place of the evenly spaced axis, at most a tenth of its step, rectangular: common practice, no source"
        : "resolution of the display or drive as stated, rectangular",
    });
  }
  if (setup.setupReproducibility !== null) {
    const { value, unit, basis, degreesOfFreedom } = setup.setupReproducibility;
    const perUnit = unit === "px" ? axis.nmPerSample(line.position) : 1;
    shared.push({
      contribution: "set-up",
      uncNm: value * perUnit,
      degreesOfFreedom,
      sensitivity: perUnit,
      assumed: basis === "assumed",
      note:
        basis === "history"
          ? "scatter between this configuration's own checks"
          : basis === "stated"
            ? "stated by the lab"
            : "assumed: common practice, no source",
    });
  }
  if (setup.temperatureEffect !== null) {
    const { coefficientNmPerK, spreadK } = setup.temperatureEffect;
    shared.push({
      contribution: "temperature",
      uncNm: Math.abs(coefficientNmPerK) * spreadK,
      degreesOfFreedom: null,
      sensitivity: coefficientNmPerK,
      assumed: false,
      note: `standard spread of the room, ${spreadK} K`,
    });
  }
  const airUncNm = axis.airUncNm(name.wavelengthNm, name.medium);
  if (airUncNm > 0) {
    shared.push({
      contribution: "air",
      uncNm: airUncNm,
      degreesOfFreedom: null,
      sensitivity: 1,
      assumed: false,
      note: axis.airNote,
    });
  }
  const laser = axis.laserUncNm?.(line.position) ?? 0;
  if (laser !== 0) {
    shared.push({
      contribution: "laser",
      uncNm: Math.abs(laser),
      degreesOfFreedom: null,
      sensitivity: laser < 0 ? -1 : 1,
      assumed: false,
      note: "wavelength of the laser that the shifts count from",
    });
  }
  return shared;
}

/**
 * Resolution of the display or drive, nm: stated; else, with a set-up reproducibility in the budget, assumed on an evenly spaced axis; else
 * null. Where samples are rounded one by one the rounding is seen in the axis and is no resolution of the display's.
 */
function displayResolution(axis: IndicatingAxis, setup: AnalysisSetup): { stepNm: number; isAssumed: boolean } | null {
  const stated = setup.displayResolutionNm ?? null;
  if (stated !== null && stated > 0) return { stepNm: stated, isAssumed: false };
  const { evenAxis } = axis;
  if (evenAxis === null || setup.setupReproducibility === null) return null;
  return { stepNm: Math.min(evenAxis.lastPlaceNm, assumedStepShare * evenAxis.stepNm), isAssumed: true };
}

/** What U does not hold, as words. */
export function notIncludedIn(axis: IndicatingAxis | null, setup: AnalysisSetup): string[] {
  if (axis === null || setup.setupReproducibility !== null) return [];
  const hasResolution = axis.evenAxis === null || (setup.displayResolutionNm ?? null) !== null;
  return hasResolution ? ["set-up reproducibility"] : ["set-up reproducibility", "resolution of the display or drive"];
}
