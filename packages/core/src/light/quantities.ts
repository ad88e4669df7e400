/**
 * Wavelength, wavenumber, frequency, photon energy and Raman shift. All of light in vacuum; air wavelengths go through `air.ts`.
 *
 * Constants are exact in the SI of 2019: c = 299 792 458 m/s, h = 6.626 070 15e-34 J s, e = 1.602 176 634e-19 C.
 */
import type { LaserLine } from "../analysis/types.ts";

const LIGHT_NM_THZ = 299792.458;
/** h c / e in eV nm. */
const ENERGY_EV_NM = (6.62607015e-34 * 299792458 * 1e9) / 1.602176634e-19;

function positive(value: number, what: string): number {
  if (!(value > 0 && value < Infinity)) throw new RangeError(`${what} must be above 0; got ${value}`);
  return value;
}

/** Wavenumber, cm-1, of a vacuum wavelength, nm. @throws {RangeError} not above 0 */
export function wavenumberPerCm(vacuumNm: number): number {
  return 1e7 / positive(vacuumNm, "A wavelength");
}

/** Vacuum wavelength, nm, of a wavenumber, cm-1. @throws {RangeError} not above 0 */
export function wavelengthFromWavenumberNm(perCm: number): number {
  return 1e7 / positive(perCm, "A wavenumber");
}

/** Frequency, THz, of a vacuum wavelength, nm. @throws {RangeError} not above 0 */
export function frequencyTHz(vacuumNm: number): number {
  return LIGHT_NM_THZ / positive(vacuumNm, "A wavelength");
}

/** Vacuum wavelength, nm, of a frequency, THz. @throws {RangeError} not above 0 */
export function wavelengthFromFrequencyNm(thz: number): number {
  return LIGHT_NM_THZ / positive(thz, "A frequency");
}

/** Photon energy, eV, of a vacuum wavelength, nm. @throws {RangeError} not above 0 */
export function photonEnergyEv(vacuumNm: number): number {
  return ENERGY_EV_NM / positive(vacuumNm, "A wavelength");
}

/** Vacuum wavelength, nm, of a photon energy, eV. @throws {RangeError} not above 0 */
export function wavelengthFromEnergyNm(ev: number): number {
  return ENERGY_EV_NM / positive(ev, "A photon energy");
}

/** A quantity with its standard uncertainty, both in the unit that the function names. */
export interface Quantity {
  value: number;
  unc: number;
}

/**
 * Wavenumber, frequency or photon energy of a wavelength, or the wavelength of one of these: all are inversely proportional, so the
 * relative uncertainty stays the same (JCGM 100, 5.1.6).
 *
 * @param convert  one of the functions above
 * @throws {RangeError} not above 0, a negative uncertainty
 */
export function withUncertainty(convert: (value: number) => number, of: Quantity): Quantity {
  if (!(of.unc >= 0)) throw new RangeError("An uncertainty cannot be negative");
  const value = convert(of.value);
  return { value, unc: (value * of.unc) / of.value };
}

export interface RamanShift {
  /** cm-1; positive on the Stokes side (longer wavelength). */
  shiftPerCm: number;
  /** Standard uncertainty, cm-1, laser and scattered line together. */
  shiftUncPerCm: number;
  /** d shift / d laser wavelength and d shift / d scattered wavelength, cm-1 per nm: a laser error moves every shift. */
  laserSensitivity: number;
  scatteredSensitivity: number;
}

/**
 * Raman shift of a scattered wavelength: laser wavenumber minus scattered wavenumber, both in vacuum.
 *
 * @throws {RangeError} a wavelength not above 0, or a negative uncertainty
 */
export function ramanShift(laser: LaserLine, scatteredVacuumNm: number, scatteredUncNm: number): RamanShift {
  if (!(laser.uncNm >= 0 && scatteredUncNm >= 0)) throw new RangeError("An uncertainty cannot be negative");
  const laserSensitivity = -wavenumberPerCm(laser.wavelengthVacuumNm) / laser.wavelengthVacuumNm;
  const scatteredSensitivity = wavenumberPerCm(scatteredVacuumNm) / scatteredVacuumNm;
  const fromLaser = laserSensitivity * laser.uncNm;
  const fromScattered = scatteredSensitivity * scatteredUncNm;
  return {
    shiftPerCm: wavenumberPerCm(laser.wavelengthVacuumNm) - wavenumberPerCm(scatteredVacuumNm),
    shiftUncPerCm: Math.sqrt(fromLaser * fromLaser + fromScattered * fromScattered),
    laserSensitivity,
    scatteredSensitivity,
  };
}

/** Vacuum wavelength, nm, at which a Raman shift, cm-1, of a laser is seen. @throws {RangeError} shift at or beyond the laser's wavenumber */
export function scatteredWavelengthNm(laserVacuumNm: number, shiftPerCm: number): number {
  const laser = wavenumberPerCm(laserVacuumNm);
  if (!(shiftPerCm < laser))
    throw new RangeError(`A shift must be smaller than the laser's ${laser} cm-1; got ${shiftPerCm}`);
  return 1e7 / (laser - shiftPerCm);
}

/**
 * The same with its standard uncertainty, nm: d lambda / d laser = (lambda / laser)², d lambda / d shift = lambda² / 1e7 nm per cm-1.
 *
 * @throws {RangeError} shift at or beyond the laser's wavenumber, a negative uncertainty
 */
export function scatteredWavelength(laser: LaserLine, shiftPerCm: number, shiftUncPerCm: number): Quantity {
  if (!(laser.uncNm >= 0 && shiftUncPerCm >= 0)) throw new RangeError("An uncertainty cannot be negative");
  const value = scatteredWavelengthNm(laser.wavelengthVacuumNm, shiftPerCm);
  const ratio = value / laser.wavelengthVacuumNm;
  const fromLaser = ratio * ratio * laser.uncNm;
  const fromShift = ((value * value) / 1e7) * shiftUncPerCm;
  return { value, unc: Math.sqrt(fromLaser * fromLaser + fromShift * fromShift) };
}
