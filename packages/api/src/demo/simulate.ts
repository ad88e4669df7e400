/**
 * Captures of the demo lab: the core's simulator, set to an instrument of the story on one of its days.
 *
 * Demo data. The same seed, instrument and day give the same bytes.
 */
import {
  arraySpectrometer,
  createRandom,
  ramanBench,
  scanningMonochromator,
  simulateCapture,
  spectrophotometer,
  type CaptureDialect,
  type SimulatedInstrument,
  type TrueAxis,
} from "@wavekeep/core/testing";
import { lampLines } from "./lamps.ts";
import type { DemoSource } from "./cast.ts";
import { roomTemperatureC, type DemoInstrument } from "./story.ts";

/** Everything in the demo lab follows from this number and the day of the first start. */
export const DEMO_SEED = 20_270_309;

/** Counts of the strongest line at the exposure that the lab uses, above the offset. */
const EXPOSURE_COUNTS = 46_000;
/** What a capture at more than twice that exposure looks like: its strong lines are flat at the ceiling. */
const OVEREXPOSURE = 2.5;

export interface DemoCapture {
  name: string;
  bytes: Buffer;
}

const dialects: Record<DemoInstrument["kind"], CaptureDialect> = {
  array: "tab-with-metadata",
  scanning: "comma",
  spectrophotometer: "semicolon-decimal-comma",
  raman: "tab-with-metadata",
};

/** Day's room temperature as the lab's thermometer reads it, °C to a tenth. */
export function roomOn(dayOfYear: number, daysAgo: number): number {
  return Math.round((roomTemperatureC(dayOfYear) + 0.25 * createRandom(DEMO_SEED + 7 * daysAgo).normal()) * 10) / 10;
}

/** Repeats of one lamp on one day. Every repeat has its own noise; the axis stands still between them. */
export function simulateRepeats(
  instrument: DemoInstrument,
  source: DemoSource,
  day: {
    daysAgo: number;
    on: string;
    temperatureC: number;
    attempt: number;
    isOverexposed: boolean;
    ordinal: number;
    condition: "as-found" | "as-left";
  },
): DemoCapture[] {
  const seed = DEMO_SEED + 1009 * nameNumber(instrument.name) + 17 * day.daysAgo + 5 * day.attempt + 31 * day.ordinal;
  const scatterNm = instrument.scatterNm * createRandom(seed).normal();
  // As found lies before whatever was done on that day, as left after it.
  const simulated = simulatedInstrument(
    instrument,
    day.daysAgo + (day.condition === "as-found" ? 0.5 : 0),
    day.temperatureC,
    scatterNm,
  );
  const lines = lampLines(source.elements, instrument.firstNm, instrument.lastNm);
  const exposure = EXPOSURE_COUNTS * (day.isOverexposed ? OVEREXPOSURE : 1);
  const strongest = Math.max(...lines.map(({ strength }) => strength));
  // One lamp keeps its own ratios of intensities; two lamps of a kind differ.
  const lampRandom = createRandom(DEMO_SEED + 13 * nameNumber(source.label));
  const heightsCounts = Object.fromEntries(
    lines.map(({ wavelengthNm, strength }) => [
      wavelengthNm.toFixed(4),
      (exposure * strength * lampRandom.between(0.8, 1.05)) / strongest,
    ]),
  );
  return Array.from({ length: instrument.repeats }, (_, repeat) => {
    const { text } = simulateCapture({
      seed: seed + 101 * (repeat + 1),
      instrument: simulated,
      lamp: { lines: lines.map(({ line }) => line), strongestCounts: exposure, intensityScatter: 1, heightsCounts },
      dialect: dialects[instrument.kind],
      metadata: {
        Instrument: instrument.name,
        Serial: instrument.serial,
        Date: day.on,
        Source: source.label,
        ...(instrument.fullScaleCounts === null ? {} : { "Full scale": String(instrument.fullScaleCounts) }),
      },
    });
    const attempt = day.attempt > 1 ? `-b${day.attempt}` : "";
    return {
      name: `${instrument.name.toLowerCase()}-${source.label.toLowerCase()}-${day.on}${attempt}-${repeat + 1}.${instrument.kind === "array" || instrument.kind === "raman" ? "txt" : "csv"}`,
      bytes: Buffer.from(text, "utf8"),
    };
  });
}

/** Slope and offset of an error that is straight over the range. */
function straightError(
  instrument: DemoInstrument,
  daysAgo: number,
  temperatureC: number,
): { atFirst: number; atLast: number } {
  return {
    atFirst: instrument.errorNm(instrument.firstNm, daysAgo, temperatureC),
    atLast: instrument.errorNm(instrument.lastNm, daysAgo, temperatureC),
  };
}

function simulatedInstrument(
  instrument: DemoInstrument,
  daysAgo: number,
  temperatureC: number,
  scatterNm: number,
): SimulatedInstrument {
  const { atFirst, atLast } = straightError(instrument, daysAgo, temperatureC);
  const isPixel = instrument.axisKind === "pixel";
  const changes: Partial<SimulatedInstrument> = {
    fileAxis: isPixel ? "pixel" : "nm",
    samples: instrument.samples,
    trueAxis: isPixel
      ? { kind: "polynomial", coefficients: withoutError(instrument, atFirst, atLast, scatterNm) }
      : nmAxis(instrument),
    axisError: isPixel
      ? { offsetNm: 0, scaleNm: 0 }
      : { offsetNm: 0.5 * (atFirst + atLast) + scatterNm, scaleNm: atLast - atFirst },
    fwhm: { value: instrument.fwhmNm, unit: "nm" },
    axisDecimals: instrument.kind === "spectrophotometer" || instrument.kind === "scanning" ? 2 : 4,
  };
  if (instrument.kind === "array") return arraySpectrometer(changes);
  if (instrument.kind === "raman") return ramanBench(changes);
  if (instrument.kind === "scanning") return scanningMonochromator(changes);
  return spectrophotometer(changes);
}

/** The instrument's own nm axis: a gently bent one for arrays, equal steps for those that scan. */
function nmAxis(instrument: DemoInstrument): TrueAxis {
  const { firstNm, lastNm, samples } = instrument;
  if (instrument.kind === "array" || instrument.kind === "raman")
    return { kind: "polynomial", coefficients: bentAxis(firstNm, lastNm, samples) };
  return { kind: "stepped", firstNm, stepNm: (lastNm - firstNm) / (samples - 1) };
}

/** Cubic from first to last wavelength that bends by 2.4 % of the span and, a little, back: as fixed gratings do. */
export function bentAxis(firstNm: number, lastNm: number, samples: number): number[] {
  const span = lastNm - firstNm;
  const last = samples - 1;
  const bend = 0.096;
  const twist = -0.012;
  // In u = p / last: first + span (u + bend u (1 - u) + twist u (1 - u) (1 - 2 u))
  const inU = [firstNm, span * (1 + bend + twist), span * (-bend - 3 * twist), span * 2 * twist];
  return inU.map((coefficient, power) => coefficient / Math.pow(last, power));
}

/** The true axis behind an axis in force that errs: solved from indicated = true + error(true), a straight line in the true wavelength. */
function withoutError(instrument: DemoInstrument, atFirst: number, atLast: number, scatterNm: number): number[] {
  const slope = (atLast - atFirst) / (instrument.lastNm - instrument.firstNm);
  const offset = atFirst + scatterNm - slope * instrument.firstNm;
  return bentAxis(instrument.firstNm, instrument.lastNm, instrument.samples).map(
    (coefficient, power) => (coefficient - (power === 0 ? offset : 0)) / (1 + slope),
  );
}

function nameNumber(name: string): number {
  let sum = 0;
  for (const letter of name) sum = (sum * 31 + letter.charCodeAt(0)) % 99_991;
  return sum;
}
