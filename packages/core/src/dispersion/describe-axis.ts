/**
 * A fitted axis as it is reported: residuals of every line, leave-one-out and studentised residuals, samples with their uncertainty, and
 * coefficients written with no more digits than they need.
 */
import type { Dispersion, PixelAxis } from "../analysis/types.ts";
import { axisNm, axisSlope, axisUncNm } from "./axis.ts";
import type { DispersionOptions, DispersionPoint, FittedDispersion } from "./fit-dispersion.ts";

const sampleCount = 11;
/** Coefficients are rounded so that their sum still gives the wavelength to this, px. */
const coefficientErrorPx = 0.001;

export interface AxisParts {
  axis: PixelAxis;
  family: Dispersion["family"];
  degree: number;
  degreeChosenBy: Dispersion["degreeChosenBy"];
  /** Indices of the points used, ascending; of each of them the leverage and the standard uncertainty it was weighted with, nm. */
  kept: readonly number[];
  leverages: ArrayLike<number>;
  unc: ArrayLike<number>;
  /** Scatter beyond the stated uncertainties, nm. */
  excessScatterNm: number;
  /** Reason of each point that was left out, where it is not simply its distance from the axis. */
  rejectedBecause: ReadonlyMap<number, string>;
}

/** What is reported of an axis through `points`, those left out included. */
export function describeAxis(
  points: readonly DispersionPoint[],
  options: Pick<DispersionOptions, "firstPosition" | "lastPosition">,
  parts: AxisParts,
): FittedDispersion {
  const { axis, kept, leverages, unc } = parts;
  const residualsNm = points.map((point) => point.wavelengthNm - axisNm(axis, point.position));
  const leaveOneOutNm = residualsNm.slice();
  const leverageOf = points.map(() => 0);
  const studentised = points.map((point, i) => outsideRatio(axis, point, residualsNm[i] as number));
  let sumNm = 0;
  let sumPx = 0;
  let sumLeftOut = 0;
  kept.forEach((row, k) => {
    const residual = residualsNm[row] as number;
    const room = Math.max(1 - (leverages[k] as number), 1e-6);
    leaveOneOutNm[row] = residual / room;
    leverageOf[row] = leverages[k] as number;
    studentised[row] = residual / ((unc[k] as number) * Math.sqrt(room));
    const px = residual / axisSlope(axis, (points[row] as DispersionPoint).position);
    sumNm += residual * residual;
    sumPx += px * px;
    sumLeftOut += (residual / room) * (residual / room);
  });
  const scatter = Math.sqrt(sumNm / Math.max(axis.degreesOfFreedom ?? 1, 1));
  const isKept = new Set(kept);
  const rejected: Dispersion["rejected"] = [];
  points.forEach((_, line) => {
    if (isKept.has(line)) return;
    const off = Math.abs(residualsNm[line] as number).toFixed(4);
    const reason =
      parts.rejectedBecause.get(line) ??
      `${off} nm from the axis through the other lines, whose scatter is ${scatter.toFixed(4)} nm: more than chance ` +
        "allows, so it was left out of the axis.";
    rejected.push({ line, reason });
  });
  const { firstPosition, lastPosition } = options;
  const samples: Dispersion["samples"] = [];
  for (let k = 0; k < sampleCount; k++) {
    const px = firstPosition + (k * (lastPosition - firstPosition)) / (sampleCount - 1);
    samples.push({ px, nm: axisNm(axis, px), uncNm: axisUncNm(axis, px) ?? 0 });
  }
  return {
    outcome: "fitted",
    dispersion: {
      family: parts.family,
      degree: parts.degree,
      degreeChosenBy: parts.degreeChosenBy,
      coefficients: writtenCoefficients(axis, firstPosition, lastPosition),
      axis,
      rmsPx: Math.sqrt(sumPx / kept.length),
      rmsNm: Math.sqrt(sumNm / kept.length),
      leaveOneOutRmsNm: Math.sqrt(sumLeftOut / kept.length),
      samples,
      rejected,
    },
    residualsNm,
    leaveOneOutNm,
    leverages: leverageOf,
    studentisedResiduals: studentised,
    excessScatterNm: parts.excessScatterNm,
  };
}

/** Residual of a line that the axis does not know, over what the line and the axis together leave open. */
function outsideRatio(axis: PixelAxis, point: DispersionPoint, residualNm: number): number {
  const positionNm = point.positionUnc * axisSlope(axis, point.position);
  const axisUnc = axisUncNm(axis, point.position) ?? 0;
  const { wavelengthUncNm } = point;
  return residualNm / Math.sqrt(positionNm * positionNm + wavelengthUncNm * wavelengthUncNm + axisUnc * axisUnc);
}

/** Power coefficients with the fewest digits that keep the wavelength to a thousandth of a pixel over the capture. */
function writtenCoefficients(axis: PixelAxis, firstPosition: number, lastPosition: number): number[] {
  const { coefficients } = axis;
  let slope = Number.POSITIVE_INFINITY;
  for (let k = 0; k < sampleCount; k++) {
    const px = firstPosition + (k * (lastPosition - firstPosition)) / (sampleCount - 1);
    slope = Math.min(slope, Math.abs(axisSlope(axis, px)));
  }
  const allowed = (coefficientErrorPx * slope) / (2 * coefficients.length);
  const reach = Math.max(Math.abs(firstPosition), Math.abs(lastPosition), 1);
  let power = 1;
  return coefficients.map((value) => {
    const here = allowed / power;
    power *= reach;
    // One digit for every power of ten between what is allowed and the value: close to what is needed, then up.
    let digits = 1;
    for (let size = Math.abs(value); size > 10 * here && digits < 17; size /= 10) digits += 1;
    for (digits = Math.max(4, digits - 1); digits <= 17; digits++) {
      const rounded = Number(value.toPrecision(digits));
      if (Math.abs(rounded - value) <= here) return rounded;
    }
    return value;
  });
}
