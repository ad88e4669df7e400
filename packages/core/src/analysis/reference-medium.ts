/**
 * A published wavelength as the instrument's axis means wavelengths: vacuum, standard air, or the air of the room. Below 200 nm every
 * axis means vacuum (small-lab practice, as the line lists print it).
 */
import { airToVacuumNm, vacuumToAirNm } from "../light/air.ts";
import { roomAir, roomAirUncNm, type RoomAir } from "./room-air.ts";
import type { AxisMeaning, Medium, RoomConditions } from "./types.ts";

const vacuumBelowNm = 200;

export interface ReferenceMedium {
  meaning: AxisMeaning;
  /** Wavelength on the axis of a line known as `wavelengthNm` in `medium`. */
  referenceNm(wavelengthNm: number, medium: Medium): number;
  /** Standard uncertainty of that from what is not known of the room's air; 0 unless the axis means it. */
  airUncNm(wavelengthNm: number, medium: Medium): number;
  airNote: string;
}

export function referenceMedium(meaning: AxisMeaning, room: RoomConditions | null): ReferenceMedium {
  const air: RoomAir | null = meaning === "room-air" ? roomAir(room) : null;
  const inVacuum = (wavelengthNm: number, medium: Medium): number =>
    medium === "vacuum" ? wavelengthNm : airToVacuumNm(wavelengthNm);
  return {
    meaning,
    referenceNm(wavelengthNm, medium) {
      if (wavelengthNm < vacuumBelowNm && medium === "vacuum") return wavelengthNm;
      if (meaning === "vacuum") return inVacuum(wavelengthNm, medium);
      if (air === null) return medium === "air" ? wavelengthNm : vacuumToAirNm(wavelengthNm);
      return vacuumToAirNm(inVacuum(wavelengthNm, medium), air.conditions);
    },
    airUncNm(wavelengthNm, medium) {
      if (air === null || (wavelengthNm < vacuumBelowNm && medium === "vacuum")) return 0;
      return roomAirUncNm(air, inVacuum(wavelengthNm, medium));
    },
    airNote: air?.note ?? "",
  };
}
