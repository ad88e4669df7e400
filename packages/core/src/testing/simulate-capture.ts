/**
 * Simulated captures with known truth: optics, lamp, detector, noise, and the file as an instrument would write it.
 *
 * Independent of what it tests: nothing here comes from lineshape, spectrum, identify or dispersion.
 * Order of events  light at each sample (lines integrated over the pixel on array detectors, background) -> photon noise ->
 *                  read noise -> hot pixels and spikes -> smoothing -> ceiling -> digitising -> text
 */
import type { ReferenceLine } from "../analysis/types.ts";
import { exp, log } from "../numeric/elementary.ts";
import { density, densityOverPixel, type LineShape, reach } from "./profile.ts";
import { createRandom, type Random } from "./random.ts";
import { sampleIndexOf, type TrueAxis, wavelengthAt } from "./true-axis.ts";
import { type CaptureDialect, writeCapture } from "./write-capture.ts";

export type SimulatedKind = "array-spectrometer" | "scanning-monochromator" | "spectrophotometer" | "raman";

export interface SimulatedInstrument {
  kind: SimulatedKind;
  /** What the file's first column counts. */
  fileAxis: "pixel" | "nm";
  samples: number;
  trueAxis: TrueAxis;
  /**
   * How wrong the instrument's own nm axis is: printed = true + offsetNm + scaleNm (true - middle) / range, middle and range
   * of the true axis. Does nothing on a pixel axis.
   */
  axisError: { offsetNm: number; scaleNm: number };
  /** Width of a narrow line, in samples or nm. */
  fwhm: { value: number; unit: "px" | "nm" };
  shape: LineShape;
  /** Standard deviation of the signal-free noise, counts. */
  readNoiseCounts: number;
  /** Counts a photo-electron makes; 0 = no photon noise. */
  countsPerElectron: number;
  /** Electronic offset (no photon noise), its slope over the whole capture, and a broad hump of light in the middle. */
  baseline: { offsetCounts: number; slopeCounts: number; humpCounts: number };
  /** Detector ceiling; null = none. */
  ceilingCounts: number | null;
  /** Whole counts in the file. */
  isDigitised: boolean;
  /** Running mean over so many samples, 1 = none. */
  smoothingSamples: number;
  /** Decimals of a nm axis in the file. */
  axisDecimals: number;
}

export interface SimulatedLamp {
  /** The lines it may show; those outside the range are left out. */
  lines: readonly ReferenceLine[];
  /** Height of the strongest line in range, counts above the background, before the ceiling. */
  strongestCounts: number;
  /** Each line's published intensity is multiplied by a factor between 1/f and f, even in its logarithm: lamps differ. */
  intensityScatter: number;
  /** Strength of an element beside the others, default 1: a warming lamp has little of its metal. */
  elementStrength?: Readonly<Record<string, number>>;
  /** Given heights instead of published intensities, by published wavelength (air above 200 nm) to 4 decimals. */
  heightsCounts?: Readonly<Record<string, number>>;
  /** Wavelengths of the true axis: air as published, or vacuum. Default air. */
  medium?: "air" | "vacuum";
}

export interface SimulationOptions {
  seed: number;
  instrument: SimulatedInstrument;
  lamp: SimulatedLamp;
  /** Single samples that always read high, and spikes of one or two samples; default none. */
  hotPixels?: number;
  spikes?: number;
  dialect?: CaptureDialect;
  metadata?: Readonly<Record<string, string>>;
}

export interface TrueLine {
  element: string;
  /** Published: air above 200 nm, vacuum below (vacuum throughout where the lamp's medium says so). */
  wavelengthNm: number;
  /** First moment in the file's axis unit, exact. */
  position: number;
  /** Fractional sample index, 0 = centre of the first. */
  samplePx: number;
  fwhm: number;
  /** Counts times axis unit. */
  areaCounts: number;
  peakHeightCounts: number;
  /** Height over the noise at its top. */
  signalToNoise: number;
  isSaturated: boolean;
}

export interface SimulatedCapture {
  text: string;
  /** As the file prints them, ascending. */
  positions: Float64Array;
  counts: Float64Array;
  /** Every line of the lamp in range, however weak, by rising position. */
  truth: TrueLine[];
  /** Samples that hold a hot pixel or a spike. */
  disturbedSamples: number[];
}

interface PlacedLine {
  line: ReferenceLine;
  wavelengthNm: number;
  px: number;
  fwhmPx: number;
  height: number;
}

const HOT_PIXEL_SHARE = [0.02, 0.4] as const;

/** Simulate one capture; the same options give the same bits. @throws {RangeError} settings that no instrument has */
export function simulateCapture(options: SimulationOptions): SimulatedCapture {
  const { instrument, lamp } = options;
  if (!(instrument.samples >= 16 && Number.isInteger(instrument.samples)))
    throw new RangeError("A capture needs at least 16 samples");
  const random = createRandom(options.seed);
  const placed = placeLines(instrument, lamp, random);
  const light = lightOf(instrument, placed);
  const disturbedSamples: number[] = [];
  let counts = detect(instrument, light, random);
  disturb(counts, options, random, disturbedSamples);
  counts = smooth(counts, instrument.smoothingSamples);
  for (let i = 0; i < counts.length; i++) {
    if (instrument.ceilingCounts !== null && counts[i]! > instrument.ceilingCounts)
      counts[i] = instrument.ceilingCounts;
    if (instrument.isDigitised) counts[i] = Math.max(0, Math.round(counts[i]!));
  }
  return present(options, placed, light, counts, disturbedSamples);
}

function publishedNm(line: ReferenceLine, lamp: SimulatedLamp): number {
  return lamp.medium === "vacuum" ? line.wavelengthVacuumNm : (line.wavelengthAirNm ?? line.wavelengthVacuumNm);
}

function fwhmInSamples(instrument: SimulatedInstrument, px: number): number {
  if (instrument.fwhm.unit === "px") return instrument.fwhm.value;
  const nmPerSample = Math.abs(
    wavelengthAt(instrument.trueAxis, px + 0.5) - wavelengthAt(instrument.trueAxis, px - 0.5),
  );
  return instrument.fwhm.value / nmPerSample;
}

function placeLines(instrument: SimulatedInstrument, lamp: SimulatedLamp, random: Random): PlacedLine[] {
  const scatter = log(lamp.intensityScatter);
  const placed: PlacedLine[] = [];
  let strongest = 0;
  for (const line of lamp.lines) {
    // Drawn for every line, in range or not, so that another range keeps the same lamp.
    const factor = exp(random.between(-scatter, scatter));
    const wavelengthNm = publishedNm(line, lamp);
    const px = sampleIndexOf(instrument.trueAxis, wavelengthNm, 0, instrument.samples - 1);
    if (px === null) continue;
    const given = lamp.heightsCounts?.[wavelengthNm.toFixed(4)];
    const height = (line.relativeIntensity ?? 1) * factor * (lamp.elementStrength?.[line.element] ?? 1);
    if (given === undefined) strongest = Math.max(strongest, height);
    placed.push({ line, wavelengthNm, px, fwhmPx: fwhmInSamples(instrument, px), height: given ?? -height });
  }
  // Published intensities were kept negative until the strongest was known.
  for (const one of placed) if (one.height < 0) one.height = (-one.height / strongest) * lamp.strongestCounts;
  return placed.filter((one) => one.height > 0).sort((a, b) => a.px - b.px);
}

/** Counts of light at each sample, without offset. */
function lightOf(instrument: SimulatedInstrument, placed: readonly PlacedLine[]): Float64Array {
  const n = instrument.samples;
  const light = new Float64Array(n);
  const { humpCounts } = instrument.baseline;
  if (humpCounts !== 0) {
    for (let i = 0; i < n; i++) {
      const u = (i - 0.45 * n) / (0.25 * n);
      light[i] = humpCounts * exp(-0.5 * u * u);
    }
  }
  const isArray = instrument.kind === "array-spectrometer" || instrument.kind === "raman";
  const shapeAt = isArray ? densityOverPixel : density;
  for (const { px, fwhmPx, height } of placed) {
    const area = height / density(instrument.shape, fwhmPx, 0);
    const extent = reach(instrument.shape, fwhmPx);
    const last = Math.min(n - 1, Math.floor(px + extent));
    for (let i = Math.max(0, Math.ceil(px - extent)); i <= last; i++) {
      light[i] = light[i]! + area * shapeAt(instrument.shape, fwhmPx, i - px);
    }
  }
  return light;
}

function offsetAt(instrument: SimulatedInstrument, i: number): number {
  const { offsetCounts, slopeCounts } = instrument.baseline;
  return offsetCounts + slopeCounts * (i / (instrument.samples - 1) - 0.5);
}

function detect(instrument: SimulatedInstrument, light: Float64Array, random: Random): Float64Array {
  const { countsPerElectron, readNoiseCounts } = instrument;
  return light.map((signal, i) => {
    const seen =
      countsPerElectron > 0 ? countsPerElectron * random.poisson(Math.max(0, signal) / countsPerElectron) : signal;
    return seen + offsetAt(instrument, i) + readNoiseCounts * random.normal();
  });
}

function disturb(counts: Float64Array, options: SimulationOptions, random: Random, disturbed: number[]): void {
  const { strongestCounts } = options.lamp;
  const count = (options.hotPixels ?? 0) + (options.spikes ?? 0);
  for (let k = 0; k < count; k++) {
    const i = 2 + random.whole(counts.length - 5);
    const height = random.between(...HOT_PIXEL_SHARE) * strongestCounts;
    counts[i] = counts[i]! + height;
    disturbed.push(i);
    if (k >= (options.hotPixels ?? 0) && random.uniform() < 0.4) {
      counts[i + 1] = counts[i + 1]! + height * random.between(0.2, 0.7);
      disturbed.push(i + 1);
    }
  }
}

/** Running mean over `width` samples; shorter at the ends. An even width is centred by halving its outermost samples. */
function smooth(counts: Float64Array, width: number): Float64Array {
  if (width <= 1) return counts;
  const half = Math.floor(width / 2);
  const edge = width % 2 === 0 ? 0.5 : 1;
  return counts.map((_, i) => {
    let sum = 0;
    let weights = 0;
    for (let k = -half; k <= half; k++) {
      const value = counts[i + k];
      if (value === undefined) continue;
      const weight = Math.abs(k) === half ? edge : 1;
      sum += weight * value;
      weights += weight;
    }
    return sum / weights;
  });
}

/** What the file prints for a fractional sample index, before rounding. */
export function printedPosition(instrument: SimulatedInstrument, px: number): number {
  if (instrument.fileAxis === "pixel") return px;
  const first = wavelengthAt(instrument.trueAxis, 0);
  const last = wavelengthAt(instrument.trueAxis, instrument.samples - 1);
  const trueNm = wavelengthAt(instrument.trueAxis, px);
  const { offsetNm, scaleNm } = instrument.axisError;
  return trueNm + offsetNm + (scaleNm * (trueNm - 0.5 * (first + last))) / Math.abs(last - first);
}

function present(
  options: SimulationOptions,
  placed: readonly PlacedLine[],
  light: Float64Array,
  counts: Float64Array,
  disturbedSamples: number[],
): SimulatedCapture {
  const { instrument, lamp } = options;
  const n = instrument.samples;
  const decimals = instrument.fileAxis === "pixel" ? 0 : instrument.axisDecimals;
  let positions = new Float64Array(n);
  for (let i = 0; i < n; i++) positions[i] = Number(printedPosition(instrument, i).toFixed(decimals));
  const isFalling = positions[n - 1]! < positions[0]!;
  const truth = placed.map(({ line, wavelengthNm, px, fwhmPx, height }): TrueLine => {
    const unit = Math.abs(printedPosition(instrument, px + 0.5) - printedPosition(instrument, px - 0.5));
    const top = light[Math.round(px)]!;
    const noise = Math.sqrt(
      instrument.readNoiseCounts * instrument.readNoiseCounts + instrument.countsPerElectron * top,
    );
    const ceiling = instrument.ceilingCounts ?? Infinity;
    return {
      element: line.element,
      wavelengthNm,
      position: printedPosition(instrument, px),
      samplePx: px,
      fwhm: fwhmPx * unit,
      areaCounts: (height / density(instrument.shape, fwhmPx, 0)) * unit,
      peakHeightCounts: height,
      signalToNoise: noise > 0 ? height / noise : Infinity,
      isSaturated: top + offsetAt(instrument, px) >= ceiling,
    };
  });
  const table = {
    axisHeading:
      instrument.fileAxis === "pixel"
        ? "Pixel"
        : lamp.medium === "vacuum"
          ? "Vacuum wavelength (nm)"
          : "Wavelength (nm)",
    axisDecimals: decimals,
    positions,
    countsDecimals: instrument.isDigitised ? 0 : 3,
    counts,
    metadata: options.metadata ?? {},
  };
  const text = writeCapture(table, options.dialect ?? "comma");
  if (isFalling) {
    // The file keeps the instrument's order; the columns handed back rise.
    positions = positions.slice().reverse();
    counts = counts.slice().reverse();
    truth.reverse();
    for (let k = 0; k < disturbedSamples.length; k++) disturbedSamples[k] = n - 1 - disturbedSamples[k]!;
  }
  return { text, positions, counts, truth, disturbedSamples };
}
