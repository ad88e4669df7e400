/**
 * Instruments of the validation's simulator, traced from the grating equation m lambda = d (sin alpha + sin beta).
 *
 * Array spectrometer  plane grating, fixed angle between the arms, focusing optics of focal length f, flat detector tilted about the
 *                     axis; x mm from the axis on the detector is seen under atan(x cos t / (f + x sin t)). The optics' own distortion
 *                     is a cubic displacement of a few ten-thousandths of the detector.
 * Scanning drive      grating turned by a sine bar: the dial says what the drive believes; offset, scale and the screw's own period are
 *                     its errors. Or counted motor steps, in which the wavelength is nearly straight.
 *
 * Everything is wavelength in nm in standard air at the centre of a sample; a sample covers index - 1/2 to index + 1/2.
 */
import type { Random } from "./random.ts";

export interface Instrument {
  kind: "array" | "scan";
  samples: number;
  /** True wavelength at a sample index (fractions allowed). */
  wavelengthAt(index: number): number;
  /** Its inverse, within the detector and a twentieth beyond. NaN outside. */
  indexAt(wavelengthNm: number): number;
  /** FWHM of a line in samples, at an index. */
  fwhmAt(index: number): number;
  fwhmMid: number;
  spanNm: number;
  lowNm: number;
  highNm: number;
  isFalling: boolean;
  optics: { groovesPerMm: number; focalLengthMm: number; pixelPitchUm: number; includedAngleDeg: number } | null;
}

export interface InstrumentWish {
  samples: readonly number[];
  spanNm: readonly [number, number];
  fwhmPx: readonly [number, number];
  share: { scan: number; falling: number };
}

/** Monotonic inverse by bisection on a function of the index, with a margin of a twentieth on both sides. */
function inverseOf(wavelengthAt: (index: number) => number, samples: number): (wavelengthNm: number) => number {
  const margin = samples / 20;
  const from = -margin;
  const to = samples - 1 + margin;
  const sign = wavelengthAt(to) > wavelengthAt(from) ? 1 : -1;
  return (wavelengthNm) => {
    let low = from;
    let high = to;
    if (sign * (wavelengthNm - wavelengthAt(low)) < 0 || sign * (wavelengthNm - wavelengthAt(high)) > 0)
      return Number.NaN;
    for (let i = 0; i < 60; i += 1) {
      const middle = 0.5 * (low + high);
      if (sign * (wavelengthAt(middle) - wavelengthNm) < 0) low = middle;
      else high = middle;
    }
    return 0.5 * (low + high);
  };
}

function arrayWavelength(
  random: Random,
  samples: number,
  centreNm: number,
  spanNm: number,
): { wavelengthAt: (index: number) => number; optics: NonNullable<Instrument["optics"]> } | null {
  const pitchMm = random.pick([0.007, 0.008, 0.012, 0.013, 0.014, 0.02, 0.025, 0.026]);
  const widthMm = samples * pitchMm;
  const includedRad = (random.between(10, 45) * Math.PI) / 180;
  const grooves = random.pick([150, 235, 300, 400, 600, 830, 1200, 1800, 2400]);
  const spacingNm = 1e6 / grooves;
  // Grating turned so that the centre falls on the axis: sin alpha + sin beta = 2 sin((alpha + beta) / 2) cos(half the angle between).
  const half = centreNm / (2 * spacingNm * Math.cos(includedRad / 2));
  if (half > 0.85) return null;
  const middle = Math.asin(half);
  const turn = random.chance(0.5) ? 1 : -1;
  const alpha = middle + (turn * includedRad) / 2;
  const beta = middle - (turn * includedRad) / 2;
  if (Math.abs(alpha) > 1.25 || Math.abs(beta) > 1.1) return null;
  const focalMm = (widthMm * spacingNm * Math.cos(beta)) / spanNm;
  if (focalMm < 28 || focalMm > 1100 || widthMm / focalMm > 0.75) return null;
  const tilt = (random.between(-8, 8) * Math.PI) / 180;
  const axisIndex = (samples - 1) / 2 + samples * random.between(-0.06, 0.06);
  const distortion = random.normal() * 2e-4;
  return {
    wavelengthAt: (index) => {
      const u = (index - axisIndex) / samples;
      const x = widthMm * (u + distortion * u * u * u * 8);
      const angle = beta + Math.atan2(x * Math.cos(tilt), focalMm + x * Math.sin(tilt));
      return spacingNm * (Math.sin(alpha) + Math.sin(angle));
    },
    optics: {
      groovesPerMm: grooves,
      focalLengthMm: focalMm,
      pixelPitchUm: 1000 * pitchMm,
      includedAngleDeg: (turn * includedRad * 180) / Math.PI,
    },
  };
}

export function makeInstrument(
  random: Random,
  wish: InstrumentWish,
  lowLimitNm: number,
  highLimitNm: number,
): Instrument {
  for (;;) {
    const spanNm = Math.min(random.logBetween(wish.spanNm[0], wish.spanNm[1]), highLimitNm - lowLimitNm);
    const startNm = random.between(lowLimitNm, highLimitNm - spanNm);
    const isFalling = random.chance(wish.share.falling);
    if (random.chance(wish.share.scan)) {
      const stepNm = random.pick([0.01, 0.02, 0.05, 0.1, 0.2]);
      const samples = Math.round(spanNm / stepNm) + 1;
      if (samples < 400 || samples > 9000) continue;
      const first = Math.round(startNm / stepNm) * stepNm;
      const scale = 1 + 4e-4 * random.normal();
      const offset = 0.3 * random.normal();
      const bow = random.normal() * 0.02;
      const screw = { nm: random.between(0, 0.02), period: random.between(40, 120), phase: random.between(0, 6.28) };
      const wavelengthAt = (index: number): number => {
        const dial = first + stepNm * index;
        const u = (2 * index) / samples - 1;
        return (
          first +
          (dial - first) * scale +
          offset +
          bow * u * u +
          screw.nm * Math.sin((2 * Math.PI * dial) / screw.period + screw.phase)
        );
      };
      const fwhm = random.between(Math.max(4, wish.fwhmPx[0]), 14);
      return finish("scan", samples, wavelengthAt, fwhm, 0, random.between(0, 0.05), null);
    }
    const samples = random.pick(wish.samples);
    const made = arrayWavelength(random, samples, startNm + spanNm / 2, spanNm);
    if (made === null) continue;
    const forward = made.wavelengthAt;
    const wavelengthAt = isFalling ? (index: number): number => forward(samples - 1 - index) : forward;
    const low = Math.min(forward(0), forward(samples - 1));
    const high = Math.max(forward(0), forward(samples - 1));
    if (low < lowLimitNm - spanNm * 0.1 || low < 196 || high > highLimitNm + spanNm * 0.1) continue;
    if (!isMonotonic(wavelengthAt, samples)) continue;
    const fwhm = random.logBetween(wish.fwhmPx[0], wish.fwhmPx[1]);
    return finish(
      "array",
      samples,
      wavelengthAt,
      fwhm,
      random.between(-0.15, 0.15),
      random.between(0, 0.35),
      made.optics,
    );
  }
}

function isMonotonic(wavelengthAt: (index: number) => number, samples: number): boolean {
  const margin = samples / 20;
  let previous = wavelengthAt(-margin);
  let sign = 0;
  for (let k = 1; k <= 40; k += 1) {
    const value = wavelengthAt(-margin + (k * (samples - 1 + 2 * margin)) / 40);
    const now = Math.sign(value - previous);
    if (now === 0 || (sign !== 0 && now !== sign)) return false;
    sign = now;
    previous = value;
  }
  return true;
}

function finish(
  kind: Instrument["kind"],
  samples: number,
  wavelengthAt: (index: number) => number,
  fwhmMid: number,
  slope: number,
  bow: number,
  optics: Instrument["optics"],
): Instrument {
  const first = wavelengthAt(0);
  const last = wavelengthAt(samples - 1);
  return {
    kind,
    samples,
    wavelengthAt,
    indexAt: inverseOf(wavelengthAt, samples),
    fwhmAt: (index) => {
      const u = (2 * index) / (samples - 1) - 1;
      return fwhmMid * (1 + slope * u + bow * u * u);
    },
    fwhmMid,
    spanNm: Math.abs(last - first),
    lowNm: Math.min(first, last),
    highNm: Math.max(first, last),
    isFalling: last < first,
    optics,
  };
}
