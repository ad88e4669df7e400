/** Results of the core, which measures wavelengths in nm, in the unit that the file's own axis has. */
import { photonEnergyEv, type AxisUnit } from "@wavekeep/core";

/** Units of a file's axis in one nm. */
const unitsPerNm: Partial<Record<AxisUnit, number>> = { Å: 10, µm: 0.001 };

export interface OwnUnit {
  position(value: number): number;
  /** A width or an uncertainty at a position (as the core has it). */
  width(value: number, position: number): number;
}

export function ownUnit(unit: AxisUnit): OwnUnit {
  if (unit === "eV") {
    return {
      position: (nm) => photonEnergyEv(nm),
      width: (value, nm) => (value * photonEnergyEv(nm)) / nm,
    };
  }
  const scale = unitsPerNm[unit] ?? 1;
  return { position: (value) => value * scale, width: (value) => value * scale };
}

/** Scale from the core's positions to the file's where it is one number; an axis of energies or wavenumbers has none. */
export function scaleOf(unit: AxisUnit): number {
  return unitsPerNm[unit] ?? 1;
}
