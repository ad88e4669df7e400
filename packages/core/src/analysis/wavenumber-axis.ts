/**
 * Captures on a wavenumber axis: absolute wavenumbers, or Raman shifts counted from a laser's line. Light is analysed in vacuum wavelengths, so
 * the spectrum is turned into those at the door and the result into cm-1 on the way out.
 *
 * Absolute  nu = 1e7 / lambda; error of a line (indicated - reference) in cm-1 = -1e7 (lambda_i - lambda_r) / (lambda_i lambda_r), exactly
 * Raman     shift = nu_laser - nu, so that the error has the other sign; the reference shift of a lamp's line needs the laser's own
 *           wavelength, whose uncertainty u moves every line together, by u (lambda / lambda_laser)² in nm
 * Units     nm in vacuum, cm-1; a tolerance T in cm-1 is judged as T lambda_i lambda_r / 1e7 in nm, which is the same condition
 */
import { scatteredWavelengthNm, wavelengthFromWavenumberNm, wavenumberPerCm } from "../light/quantities.ts";
import type { AnalysedCheck, AnalysisSetup, LaserLine, LineResult, Spectrum } from "./types.ts";

/** No published line of a lamp lies below this, cm-1: such an axis counts Raman shifts. */
const leastAbsolutePerCm = 3900;

/** Why a wavenumber axis can't be turned into wavelengths, or null. */
export function wavenumberProblem(spectrum: Spectrum, laser: LaserLine | null): string | null {
  const { positions } = spectrum;
  const first = positions[0]!;
  const last = positions[positions.length - 1]!;
  if (laser !== null) {
    if (!(laser.wavelengthVacuumNm > 0 && Number.isFinite(laser.wavelengthVacuumNm) && laser.uncNm >= 0)) {
      return "The laser's wavelength must be above 0 nm, its uncertainty not below 0.";
    }
    return last < wavenumberPerCm(laser.wavelengthVacuumNm)
      ? null
      : "The Raman shifts reach beyond the laser's own wavenumber. Is the laser's wavelength right, in nm?";
  }
  if (!(first > 0))
    return "Wavenumbers must be above 0 cm-1. Raman shifts need the wavelength of the laser that they count from.";
  return last < leastAbsolutePerCm
    ? `The wavenumbers end at ${last.toFixed(0)} cm-1, where no lamp has lines: they look like Raman shifts. Give the wavelength of the laser that they count from.`
    : null;
}

/** The spectrum on an axis of vacuum wavelengths, nm, rising. */
export function toVacuumWavelengths(spectrum: Spectrum, laser: LaserLine | null): Spectrum {
  const { positions, counts } = spectrum;
  const n = positions.length;
  const toNm = (perCm: number): number =>
    laser === null ? wavelengthFromWavenumberNm(perCm) : scatteredWavelengthNm(laser.wavelengthVacuumNm, perCm);
  const isTurned = laser === null;
  return {
    ...spectrum,
    axisKind: "wavelength",
    axisUnit: "nm",
    positions: Float64Array.from({ length: n }, (_, i) => toNm(positions[isTurned ? n - 1 - i : i]!)),
    counts: isTurned ? counts.slice().reverse() : counts,
    ...(laser === null ? {} : { ramanLaser: laser }),
  };
}

/** The samples' order of `toVacuumWavelengths`, for what goes with them. */
export function turnedLike<T extends Float64Array | Uint8Array>(samples: T, laser: LaserLine | null): T {
  return laser === null ? (samples.slice().reverse() as T) : samples;
}

/** The result of a converted capture as its own axis counts: positions, widths and areas in cm-1. Errors and U stay in nm, in vacuum. */
export function toWavenumbers(check: AnalysedCheck, laser: LaserLine | null): AnalysedCheck {
  const { analysis } = check;
  for (const line of analysis.lines) {
    const vacuumNm = line.position;
    const perNm = wavenumberPerCm(vacuumNm) / vacuumNm;
    line.position =
      laser === null
        ? wavenumberPerCm(vacuumNm)
        : wavenumberPerCm(laser.wavelengthVacuumNm) - wavenumberPerCm(vacuumNm);
    line.positionUnc *= perNm;
    line.fwhm *= perNm;
    line.fwhmUnc *= perNm;
    line.areaCounts *= perNm;
    if (line.backlash !== undefined) {
      // What is scanned upwards in shift is scanned upwards in wavelength; in absolute wavenumbers it is the other way.
      const sign = laser === null ? -1 : 1;
      line.backlash = { value: sign * line.backlash.value * perNm, unc: line.backlash.unc * perNm };
    }
  }
  const middle = analysis.lines[analysis.lines.length >> 1];
  return {
    ...check,
    analysis: {
      ...analysis,
      axisKind: "wavenumber",
      axisUnit: "cm-1",
      medianFwhm:
        analysis.medianFwhm === null || middle === undefined ? null : medianOf(analysis.lines.map((line) => line.fwhm)),
    },
  };
}

function medianOf(values: number[]): number {
  const sorted = values.slice().sort((a, b) => a - b);
  return sorted[sorted.length >> 1]!;
}

/** cm-1 per nm at a line, with the sign of the axis: wavenumbers fall with the wavelength, Raman shifts rise. */
function perCmPerNm(line: LineResult, laser: LaserLine | null): number | null {
  if (line.errorNm === null || line.indicatedNm === null) return null;
  const factor = 1e7 / (line.indicatedNm * (line.indicatedNm - line.errorNm));
  return laser === null ? -factor : factor;
}

/**
 * Error of a line on a wavenumber axis, cm-1, indicated minus reference; null where it has none.
 *
 * @param laser  `setup.laser` of an axis of Raman shifts; null or left out for absolute wavenumbers
 */
export function errorPerCm(line: LineResult, laser: LaserLine | null = null): number | null {
  const factor = perCmPerNm(line, laser);
  return factor === null ? null : factor * line.errorNm!;
}

/** Expanded uncertainty of that, cm-1, with the line's own coverage factor. */
export function expandedUncPerCm(line: LineResult, laser: LaserLine | null = null): number | null {
  const factor = perCmPerNm(line, laser);
  return factor === null || line.errorExpandedUncNm === null ? null : Math.abs(factor) * line.errorExpandedUncNm;
}

/** A figure of the setup's tolerance as nanometres at a line; `toleranceUnit` says what it is. */
export function toleranceInNm(
  tolerance: number,
  setup: AnalysisSetup,
  indicatedNm: number,
  referenceNm: number,
): number {
  return setup.toleranceUnit === "cm-1" ? (tolerance * indicatedNm * referenceNm) / 1e7 : tolerance;
}
