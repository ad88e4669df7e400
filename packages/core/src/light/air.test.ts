import { describe, expect, test } from "vitest";
import { airIndex, airToVacuumNm, pressureFromAltitudePa, saturationVapourPressurePa, vacuumToAirNm } from "./air.ts";

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
