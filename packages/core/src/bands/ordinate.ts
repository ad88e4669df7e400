/**
 * What the ordinate of an absorption spectrum is, and the same spectrum turned so that every band points up.
 *
 * Absorbance A = -log10 T, transmittance T and %T say the same of a band's place: A falls strictly with T, so that the maximum of one is the
 * minimum of the others. Each is therefore measured as recorded; nothing is converted, and no noise is changed by converting.
 * From counts: T = (S - D) / (R - D) with sample S, blank or empty beam R, dark D; its uncertainty, from the noise of the three,
 * u(T)² = (u(S)² + T² u(R)² + (1 - T)² u(D)²) / (R - D)², is used relative from sample to sample.
 */
import { median } from "../spectrum/median.ts";
import { exp } from "../numeric/elementary.ts";

export type OrdinateKind = "absorbance" | "transmittance" | "percent-transmittance";

export interface Ordinate {
  kind: OrdinateKind;
  /** Bands point up: absorbance as it is, transmittance as 1 - T. */
  values: Float64Array;
  /** T at each sample where it can be told, else 1: how much light there was. */
  transmittance: Float64Array;
  /** Relative size of the noise at each sample where it is known (a ratio of counts), else null. */
  relativeUnc: Float64Array | null;
}

const ln10 = 2.302585092994046;
/** Absorbance is not recorded above this by any instrument; counts of a single beam are. */
const mostAbsorbance = 12;
const mostPercent = 200;

const absorbanceWords =
  /\babs(?:orb\w*|\.)?(?:\b|$)|^\s*a\s*(?:[([].*)?$|\ba\.?u\.?\b|extin[ck]tion|optical dens|\bo\.?d\.?\b/i;
const percentWords = /%\s*-?\s*t\b|%\s*trans|trans\w*\s*[([,]?\s*(?:%|percent)|percent\s+trans|%\s*r\b/i;
const transmittanceWords = /\btrans\w*|^\s*t\s*(?:[([].*)?$/i;

/** What a heading says the ordinate is, or null. */
export function ordinateNamed(text: string): OrdinateKind | null {
  if (percentWords.test(text)) return "percent-transmittance";
  if (transmittanceWords.test(text)) return "transmittance";
  return absorbanceWords.test(text) ? "absorbance" : null;
}

/**
 * What the numbers themselves say: counts have no upper bound, %T lies about 100 between the bands and T about 1.
 *
 * @returns null where they are the counts of a single beam
 */
export function ordinateGuessed(counts: Float64Array): OrdinateKind | null {
  const known = Float64Array.from(counts.filter((value) => value === value)).sort();
  const n = known.length;
  const middle = known[n >> 1]!;
  const low = known[Math.floor(0.02 * (n - 1))]!;
  const high = known[Math.ceil(0.98 * (n - 1))]!;
  if (high > mostPercent) return null;
  // Between bands a filter or solution lets most light through: T and %T lie at the top of their range, absorbance at its bottom.
  const pointsDown = high - middle < middle - low;
  if (high > mostAbsorbance) return "percent-transmittance";
  return pointsDown && high <= 1.2 && low >= -0.1 ? "transmittance" : "absorbance";
}

/** @param counts  as recorded, NaN for gaps */
export function ordinateOf(counts: Float64Array, kind: OrdinateKind): Ordinate {
  const scale = kind === "percent-transmittance" ? 0.01 : 1;
  const isAbsorbance = kind === "absorbance";
  return {
    kind,
    values: counts.map((value) => (isAbsorbance ? value : 1 - scale * value)),
    transmittance: counts.map((value) => (isAbsorbance ? exp(-ln10 * value) : scale * value)),
    relativeUnc: null,
  };
}

/** The same spectrum read from its other end. */
export function turnOrdinate({ kind, values, transmittance, relativeUnc }: Ordinate): Ordinate {
  return {
    kind,
    values: values.slice().reverse(),
    transmittance: transmittance.slice().reverse(),
    relativeUnc: relativeUnc === null ? null : relativeUnc.slice().reverse(),
  };
}

/** One beam: its counts, averaged over its captures. */
export interface Beam {
  counts: Float64Array;
}

/**
 * Transmittance from counts.
 *
 * @returns gaps (NaN) where the blank holds no more light than the noise, or a capture has a gap
 */
export function ratioOf(sample: Beam, blank: Beam, dark: Beam | null): Ordinate {
  const n = sample.counts.length;
  const noise = {
    sample: beamNoise(sample.counts),
    blank: beamNoise(blank.counts),
    dark: dark === null ? 0 : beamNoise(dark.counts),
  };
  const values = new Float64Array(n);
  const transmittance = new Float64Array(n);
  const relativeUnc = new Float64Array(n);
  for (let i = 0; i < n; i += 1) {
    const d = dark === null ? 0 : dark.counts[i]!;
    const light = blank.counts[i]! - d;
    const t = (sample.counts[i]! - d) / light;
    const known = t === t && light > 10 * noise.blank;
    const size =
      noise.sample * noise.sample + t * t * noise.blank * noise.blank + (1 - t) * (1 - t) * noise.dark * noise.dark;
    values[i] = known ? 1 - t : NaN;
    transmittance[i] = known ? t : NaN;
    relativeUnc[i] = known ? Math.sqrt(size) / light : 1;
  }
  return { kind: "transmittance", values, transmittance, relativeUnc };
}

/** Standard deviation of the noise from second differences, robust against bands; never 0. */
export function beamNoise(counts: Float64Array): number {
  const differences: number[] = [];
  let largest = 0;
  for (let i = 1; i + 1 < counts.length; i += 1) {
    const value = Math.abs(counts[i - 1]! - 2 * counts[i]! + counts[i + 1]!);
    if (value === value) differences.push(value);
    const size = Math.abs(counts[i]!);
    if (size > largest) largest = size;
  }
  const spread = differences.length === 0 ? 0 : (1.4826 * median(differences)) / Math.sqrt(6);
  return Math.max(spread, 1e-9 * largest, 1e-300);
}
