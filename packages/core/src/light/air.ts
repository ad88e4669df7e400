/**
 * Refractive index of air; wavelengths in vacuum and in air.
 *
 * edlen-1966        B. Edlén, Metrologia 2 (1966) 71: standard air, 300 ppm CO2
 * peck-reeder-1972  E. R. Peck, K. Reeder, J. Opt. Soc. Am. 62 (1972) 958, five-parameter formula: standard air, 330 ppm CO2;
 *                   what the line tables use, and the default here
 * Ciddor            P. E. Ciddor, Appl. Opt. 35 (1996) 1566: any temperature, pressure, humidity, CO2. Dry term good from about
 *                   230 nm up (at 200 nm it is 2.7e-7 low in n, 0.05 pm)
 * modified Edlén    K. P. Birch, M. J. Downs, Metrologia 31 (1994) 315: serves validation
 * Water vapour      saturation pressure after IAPWS (W. Wagner, A. Pruss 1993), as both forms above are tabulated with it
 * Standard air      15 °C, 101 325 Pa, dry
 * Held to           published values and pairs in tests/fixtures/light (tests/external/air.test.ts): 1e-9 in n
 */
import { exp, pow } from "../numeric/elementary.ts";

/** The air of a room. */
export interface AirConditions {
  temperatureC: number;
  pressurePa: number;
  /** 0 to 1. */
  relativeHumidity: number;
  /** Default 450 (ppm by volume). */
  co2Ppm?: number;
}

export type StandardAirFormula = "edlen-1966" | "peck-reeder-1972";

/** Standard air by one of its formulas, or a room's air (Ciddor 1996). */
export type Air = StandardAirFormula | AirConditions;

const DEFAULT_CO2_PPM = 450;
const ZERO_CELSIUS_K = 273.15;

/** Square of the vacuum wavenumber in 1/µm². */
function wavenumberSquared(vacuumNm: number): number {
  const inverseUm = 1000 / vacuumNm;
  return inverseUm * inverseUm;
}

/**
 * Refractive index n of air at a vacuum wavelength.
 *
 * @throws {RangeError} a wavelength not above 0, or conditions that no room has
 */
export function airIndex(vacuumNm: number, air: Air = "peck-reeder-1972"): number {
  if (!(vacuumNm > 0 && vacuumNm < Infinity)) throw new RangeError(`A wavelength must be above 0 nm; got ${vacuumNm}`);
  const s = wavenumberSquared(vacuumNm);
  if (air === "peck-reeder-1972") return 1 + 1e-8 * (8060.51 + 2480990 / (132.274 - s) + 17455.7 / (39.32957 - s));
  if (air === "edlen-1966") return 1 + 1e-8 * (8342.13 + 2406030 / (130 - s) + 15997 / (38.9 - s));
  checkConditions(air);
  return ciddorIndex(vacuumNm, air, vapourShare(air));
}

function checkConditions(air: AirConditions): void {
  const { temperatureC, pressurePa, relativeHumidity, co2Ppm = DEFAULT_CO2_PPM } = air;
  if (!(temperatureC >= -60 && temperatureC <= 100))
    throw new RangeError(`Temperature must lie within -60 and 100 °C; got ${temperatureC}`);
  if (!(pressurePa >= 1000 && pressurePa <= 200000))
    throw new RangeError(`Pressure must lie within 1 000 and 200 000 Pa; got ${pressurePa}`);
  if (!(relativeHumidity >= 0 && relativeHumidity <= 1))
    throw new RangeError(`Relative humidity is a share from 0 to 1; got ${relativeHumidity}`);
  if (!(co2Ppm >= 0 && co2Ppm <= 100000)) throw new RangeError(`CO2 must lie within 0 and 100 000 ppm; got ${co2Ppm}`);
}

/** Saturation vapour pressure over water, below 0 °C over ice, Pa (IAPWS). */
export function saturationVapourPressurePa(temperatureC: number): number {
  const kelvin = temperatureC + ZERO_CELSIUS_K;
  if (temperatureC < 0) {
    const ratio = kelvin / 273.16;
    return 611.657 * exp(-13.928169 * (1 - pow(ratio, -1.5)) + 34.7078238 * (1 - pow(ratio, -1.25)));
  }
  const omega = kelvin - 0.238555575678 / (kelvin - 650.175348448);
  const a = omega * (omega + 1167.05214528) - 724213.167032;
  const b = omega * (-17.0738469401 * omega + 12020.8247025) - 3232555.03223;
  const c = omega * (14.9151086135 * omega - 4823.26573616) + 405113.405421;
  const root = (2 * c) / (-b + Math.sqrt(b * b - 4 * a * c));
  return 1e6 * root * root * root * root;
}

/** Molar share of water vapour that a partial pressure makes, with the enhancement factor of moist air. */
export function vapourShareOf(vapourPressurePa: number, temperatureC: number, pressurePa: number): number {
  const enhancement = 1.00062 + 3.14e-8 * pressurePa + 5.6e-7 * temperatureC * temperatureC;
  return (enhancement * vapourPressurePa) / pressurePa;
}

function vapourShare(air: AirConditions): number {
  return vapourShareOf(
    air.relativeHumidity * saturationVapourPressurePa(air.temperatureC),
    air.temperatureC,
    air.pressurePa,
  );
}

/** Moles per volume times the gas constant: p / (Z T), with Ciddor's compressibility Z; the constant cancels in his ratios. */
function molarDensity(pressurePa: number, temperatureC: number, share: number): number {
  const kelvin = temperatureC + ZERO_CELSIUS_K;
  const t = temperatureC;
  const ratio = pressurePa / kelvin;
  const first =
    1.58123e-6 +
    t * (-2.9331e-8 + 1.1043e-10 * t) +
    (5.707e-6 - 2.051e-8 * t) * share +
    (1.9898e-4 - 2.376e-6 * t) * share * share;
  const z = 1 - ratio * first + ratio * ratio * (1.83e-11 - 0.765e-8 * share * share);
  return pressurePa / (z * kelvin);
}

/**
 * Ciddor's index: dry air and vapour each by its density over that of its standard state (15 °C, 101 325 Pa; 20 °C, 1 333 Pa).
 * The molar masses cancel, that of dry air too: its CO2 is the same on both sides.
 *
 * For a molar share of water vapour given as such (his own tables state a vapour pressure).
 *
 * @param share  0 to 1, from `vapourShareOf`
 */
export function ciddorIndex(vacuumNm: number, air: Omit<AirConditions, "relativeHumidity">, share: number): number {
  const s = wavenumberSquared(vacuumNm);
  const co2Ppm = air.co2Ppm ?? DEFAULT_CO2_PPM;
  const standardDry = 1e-8 * (5792105 / (238.0185 - s) + 167917 / (57.362 - s)) * (1 + 0.534e-6 * (co2Ppm - 450));
  const standardVapour = 1.022e-8 * (295.235 + s * (2.6422 + s * (-0.03238 + s * 0.004028)));
  const moles = molarDensity(air.pressurePa, air.temperatureC, share);
  const dryDensities = ((1 - share) * moles) / molarDensity(101325, 15, 0);
  const vapourDensities = (share * moles) / molarDensity(1333, 20, 1);
  return 1 + dryDensities * standardDry + vapourDensities * standardVapour;
}

/** The modified Edlén formula of Birch and Downs 1994, for comparison with Ciddor's; CO2 is fixed at 450 ppm. */
export function modifiedEdlenIndex(vacuumNm: number, air: Omit<AirConditions, "co2Ppm">): number {
  checkConditions(air);
  const s = wavenumberSquared(vacuumNm);
  const { temperatureC: t, pressurePa: p } = air;
  const standard = 1e-8 * (8342.54 + 2406147 / (130 - s) + 15998 / (38.9 - s));
  const density = (1 + 1e-8 * (0.601 - 0.00972 * t) * p) / (1 + 0.003661 * t);
  const dry = (p * standard * density) / 96095.43;
  const vapourPa = air.relativeHumidity * saturationVapourPressurePa(t);
  return 1 + dry - (1e-10 * 292.75 * (3.7345 - 0.0401 * s) * vapourPa) / (t + ZERO_CELSIUS_K);
}

/** Wavelength in air of a line known by its vacuum wavelength, nm. */
export function vacuumToAirNm(vacuumNm: number, air: Air = "peck-reeder-1972"): number {
  return vacuumNm / airIndex(vacuumNm, air);
}

/** Wavelength in vacuum of a line known by its wavelength in air, nm; inverse of `vacuumToAirNm` to rounding. */
export function airToVacuumNm(airNm: number, air: Air = "peck-reeder-1972"): number {
  // n changes by less than 1e-5 of itself over the 0.1 nm between the two, so each round gains four digits or more.
  let vacuumNm = airNm;
  for (let i = 0; i < 6; i++) vacuumNm = airNm * airIndex(vacuumNm, air);
  return vacuumNm;
}

/** A room's air as far as it is known: standard uncertainties, 0 where exact. */
export interface AirUncertainty {
  temperatureUncC: number;
  pressureUncPa: number;
  humidityUnc: number;
  co2UncPpm?: number;
}

export interface AirIndexWithUnc {
  index: number;
  indexUnc: number;
  /** dn per °C, Pa, unit of relative humidity, and ppm of CO2. */
  sensitivities: { perC: number; perPa: number; perHumidity: number; perPpm: number };
}

/**
 * Index of a room's air with its standard uncertainty (JCGM 100, 5.1.2): temperature, pressure, humidity and CO2 each by the slope of
 * Ciddor's index there. The formula's own uncertainty, some 1e-8, is not in it.
 *
 * @throws {RangeError} as `airIndex`; a negative uncertainty
 */
export function airIndexWithUnc(vacuumNm: number, air: AirConditions, unc: AirUncertainty): AirIndexWithUnc {
  const { temperatureUncC, pressureUncPa, humidityUnc, co2UncPpm = 0 } = unc;
  if (!(temperatureUncC >= 0 && pressureUncPa >= 0 && humidityUnc >= 0 && co2UncPpm >= 0))
    throw new RangeError("An uncertainty cannot be negative");
  const index = airIndex(vacuumNm, air);
  // Half-steps to both sides; the share of vapour, not the humidity, is moved, so that 0 and 1 are no edges.
  const share = vapourShare(air);
  const slope = (low: [AirConditions, number], high: [AirConditions, number], step: number): number =>
    (ciddorIndex(vacuumNm, ...high) - ciddorIndex(vacuumNm, ...low)) / step;
  const { temperatureC, pressurePa } = air;
  const co2Ppm = air.co2Ppm ?? DEFAULT_CO2_PPM;
  const moved = (change: Partial<AirConditions>): [AirConditions, number] => {
    const there = { ...air, ...change };
    return [there, vapourShare(there)];
  };
  const perC = slope(moved({ temperatureC: temperatureC - 0.05 }), moved({ temperatureC: temperatureC + 0.05 }), 0.1);
  const perPa = slope(moved({ pressurePa: pressurePa - 5 }), moved({ pressurePa: pressurePa + 5 }), 10);
  const saturated = vapourShare({ ...air, relativeHumidity: 1 });
  const perHumidity = slope([air, share], [air, share + 0.01 * saturated], 0.01);
  const perPpm = slope(moved({ co2Ppm: co2Ppm - 5 }), moved({ co2Ppm: co2Ppm + 5 }), 10);
  const parts = [perC * temperatureUncC, perPa * pressureUncPa, perHumidity * humidityUnc, perPpm * co2UncPpm];
  let variance = 0;
  for (const part of parts) variance += part * part;
  return { index, indexUnc: Math.sqrt(variance), sensitivities: { perC, perPa, perHumidity, perPpm } };
}

/** Weather about the standard atmosphere, standard uncertainty, Pa (common practice, no source). */
const WEATHER_UNC_PA = 1000;

/**
 * Pressure where none was measured: standard atmosphere (ISO 2533:1975, troposphere) at an altitude.
 *
 * @param altitudeM     -500 to 11 000 m above sea level
 * @param altitudeUncM  standard uncertainty of the altitude; default 0
 * @returns pressure, and its standard uncertainty: 10 hPa for the weather (common practice, no source), and what the altitude leaves open
 * @throws {RangeError} an altitude outside that range, a negative uncertainty
 */
export function pressureFromAltitudePa(
  altitudeM: number,
  altitudeUncM = 0,
): { pressurePa: number; pressureUncPa: number } {
  if (!(altitudeM >= -500 && altitudeM <= 11000))
    throw new RangeError(`Altitude must lie within -500 and 11 000 m; got ${altitudeM}`);
  if (!(altitudeUncM >= 0)) throw new RangeError("An uncertainty cannot be negative");
  // p = 101325 (1 - L h / T0)^(g / (R L)), L = 6.5 K/km, T0 = 288.15 K, g = 9.80665 m/s², R = 287.05287 J/(kg K)
  const exponent = 9.80665 / (287.05287 * 0.0065);
  const ratio = 1 - (0.0065 * altitudeM) / 288.15;
  const pressurePa = 101325 * pow(ratio, exponent);
  // dp/dh = -p g / (R T)
  const fromAltitude = ((pressurePa * 9.80665) / (287.05287 * 288.15 * ratio)) * altitudeUncM;
  return { pressurePa, pressureUncPa: Math.sqrt(WEATHER_UNC_PA * WEATHER_UNC_PA + fromAltitude * fromAltitude) };
}
