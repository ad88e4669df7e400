/**
 * The air of the room and what is not known of it: pressure from a barometer, else from the altitude with the weather's 10 hPa;
 * humidity, where it was not measured, 50 % with a rectangular spread over all of it.
 */
import { airIndex, pressureFromAltitudePa, type AirConditions } from "../light/air.ts";
import type { RoomConditions } from "./types.ts";

export interface RoomAir {
  conditions: AirConditions;
  temperatureUncC: number;
  pressureUncPa: number;
  humidityUnc: number;
  note: string;
}

/** Where nothing was recorded: an ordinary laboratory at sea level. Common practice, no source; the spread goes into the uncertainty. */
const assumedTemperatureC = 20;
const assumedTemperatureUncC = 3;
/** A barometer of a weather station or a telephone. Common practice, no source. */
const barometerUncPa = 100;
const lowestPa = 50000;
const highestPa = 115000;

export function roomAir(room: RoomConditions | null): RoomAir {
  const notes: string[] = [];
  const measuredC = room === null ? null : room.temperatureC;
  const temperatureC = measuredC ?? assumedTemperatureC;
  const temperatureUncC = room === null || measuredC === null ? assumedTemperatureUncC : room.temperatureUncC;
  if (measuredC === null) notes.push(`temperature assumed, ${assumedTemperatureC} °C`);
  let pressurePa = room === null ? null : room.pressurePa;
  let pressureUncPa = barometerUncPa;
  if (pressurePa !== null && pressurePa >= lowestPa && pressurePa <= highestPa) notes.push("pressure measured");
  else {
    const altitudeM = room === null ? null : room.altitudeM;
    ({ pressurePa, pressureUncPa } = pressureFromAltitudePa(Math.min(11000, Math.max(-500, altitudeM ?? 0))));
    notes.push(altitudeM === null ? "pressure assumed, sea level" : `pressure from the altitude of ${altitudeM} m`);
  }
  const measured = room === null ? null : room.relativeHumidity;
  const relativeHumidity = measured === null ? 0.5 : Math.min(1, Math.max(0, measured));
  return {
    conditions: { temperatureC, pressurePa, relativeHumidity },
    temperatureUncC,
    pressureUncPa,
    humidityUnc: measured === null ? 0.5 / Math.sqrt(3) : 0.05,
    note: notes.join(", "),
  };
}

/** Standard uncertainty of a wavelength in that air, nm: temperature, pressure and humidity, each by its own small change. */
export function roomAirUncNm(air: RoomAir, vacuumNm: number): number {
  const index = airIndex(vacuumNm, air.conditions);
  const change = (changed: Partial<AirConditions>, step: number, unc: number): number =>
    ((airIndex(vacuumNm, { ...air.conditions, ...changed }) - index) / step) * unc;
  const { temperatureC, pressurePa, relativeHumidity } = air.conditions;
  const humidityStep = relativeHumidity > 0.5 ? -0.1 : 0.1;
  const parts = [
    change({ temperatureC: temperatureC + 1 }, 1, air.temperatureUncC),
    change({ pressurePa: pressurePa + 100 }, 100, air.pressureUncPa),
    change({ relativeHumidity: relativeHumidity + humidityStep }, humidityStep, air.humidityUnc),
  ];
  let variance = 0;
  for (const part of parts) variance += part * part;
  return (vacuumNm / (index * index)) * Math.sqrt(variance);
}
