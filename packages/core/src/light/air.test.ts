import { describe, expect, test } from "vitest";
import {
  airIndex,
  airIndexWithUnc,
  airToVacuumNm,
  pressureFromAltitudePa,
  saturationVapourPressurePa,
  vacuumToAirNm,
} from "./air.ts";

describe("air", () => {
  test("Hg 546.2268 nm in vacuum is 546.0750 nm in standard air (NIST ASD)", () => {
    expect(vacuumToAirNm(546.2268)).toBeCloseTo(546.075, 4);
    expect(airToVacuumNm(546.075)).toBeCloseTo(546.2268, 4);
  });
  test("moist air refracts less than dry air, thin air less than dense air", () => {
    const dry = { temperatureC: 20, pressurePa: 101325, relativeHumidity: 0 };
    expect(airIndex(546, { ...dry, relativeHumidity: 1 })).toBeLessThan(airIndex(546, dry));
    expect(airIndex(546, { ...dry, pressurePa: 83000 })).toBeLessThan(airIndex(546, dry));
  });
  test("water boils at 101 325 Pa near 99.974 °C and its triple point has 611.657 Pa (IAPWS)", () => {
    expect(Math.abs(saturationVapourPressurePa(99.974) - 101325)).toBeLessThan(10);
    expect(saturationVapourPressurePa(0.01)).toBeCloseTo(611.657, 2);
    expect(Math.abs(saturationVapourPressurePa(-0.0001) - 611.15)).toBeLessThan(0.1);
  });
  test("sea level has the standard pressure", () => {
    expect(pressureFromAltitudePa(0).pressurePa).toBe(101325);
  });
  test("slopes at 20 °C, 101 325 Pa, 50 %: about -0.93e-6 per °C, 2.7e-9 per Pa, -8.5e-9 per 1 % (arithmetic check, from memory)", () => {
    const room = { temperatureC: 20, pressurePa: 101325, relativeHumidity: 0.5 };
    const { index, indexUnc, sensitivities } = airIndexWithUnc(633, room, {
      temperatureUncC: 1,
      pressureUncPa: 1000,
      humidityUnc: 0.1,
    });
    expect(index).toBe(airIndex(633, room));
    expect(Math.abs(sensitivities.perC / -0.93e-6 - 1)).toBeLessThan(0.05);
    expect(Math.abs(sensitivities.perPa / 2.68e-9 - 1)).toBeLessThan(0.02);
    expect(Math.abs(sensitivities.perHumidity / -8.5e-7 - 1)).toBeLessThan(0.05);
    expect(indexUnc).toBeCloseTo(
      Math.hypot(sensitivities.perC, 1000 * sensitivities.perPa, 0.1 * sensitivities.perHumidity),
      15,
    );
    // The edges of the humidity are no edges of the slope.
    for (const relativeHumidity of [0, 1])
      expect(
        airIndexWithUnc(633, { ...room, relativeHumidity }, { temperatureUncC: 0, pressureUncPa: 0, humidityUnc: 0.1 })
          .indexUnc,
      ).toBeCloseTo(0.85e-7, 8);
  });
  test("an altitude known to 100 m adds 100 m x 12.0 Pa/m = 1 201 Pa to the weather's 1 000 Pa at sea level", () => {
    // rho g = 1.225 kg/m³ x 9.80665 m/s² = 12.013 Pa/m
    expect(pressureFromAltitudePa(0, 100).pressureUncPa).toBeCloseTo(Math.hypot(1000, 1201.3), 0);
    expect(() => pressureFromAltitudePa(0, -1)).toThrow(RangeError);
  });
  test("refuses what no room has", () => {
    expect(() => airIndex(546, { temperatureC: 20, pressurePa: 1013.25, relativeHumidity: 0.5 })).not.toThrow();
    expect(() => airIndex(546, { temperatureC: 20, pressurePa: 101.3, relativeHumidity: 0.5 })).toThrow(/Pressure/);
    expect(() => airIndex(546, { temperatureC: 20, pressurePa: 101325, relativeHumidity: 50 })).toThrow(
      /share from 0 to 1/,
    );
    expect(() => airIndex(-1)).toThrow(RangeError);
    expect(() => pressureFromAltitudePa(30000)).toThrow(RangeError);
  });
});
