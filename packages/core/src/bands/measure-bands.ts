/**
 * The place of each band of an absorption spectrum, all bands of one recording together.
 *
 * Window    about 0.7 of the band's width to each side, never less than 1.5 spectral bandwidths or 4.5 steps: a stretch over which the curve
 *           is of one kind. More than 44 samples are averaged in neighbouring groups first
 * Noise     its size, its course with the light (the same everywhere, or growing as the light gets less) and over how many samples the
 *           instrument smoothed are taken as the likelihood of the bands' samples has it; a course that is known (from counts) is kept
 * Bandwidth nothing narrower than about half of it is taken for detail. What another bandwidth would move the band by, to first order:
 *           a slit of width w is a triangle of variance w²/6, which moves a maximum by -(variance / 2) f''' / f''
 * Units     nm; values as `ordinate.ts` has them
 */
import { exp, log } from "../numeric/elementary.ts";
import type { Top } from "./find-bands.ts";
import type { Ordinate } from "./ordinate.ts";
import { CurveProcess, fewestSamples, noiseLevelOf, type CurveMaximum, type CurveWindow } from "./smooth-curve.ts";

export interface MeasuredBand {
  wavelengthNm: number;
  uncNm: number;
  /** Degrees of freedom of `uncNm`. */
  degreesOfFreedom: number;
  /** Value of the smooth curve at the maximum, and standard deviation of the noise of one sample there. */
  value: number;
  noise: number;
  reducedChiSquare: number;
  /** Shift of the maximum for each nm² that the variance of the slit grows by. */
  shiftPerNm2: number;
  windowFirst: number;
  windowLast: number;
  /** Value of the smooth curve at each sample of the window. */
  curve: Float64Array;
}

/** Why a top could not be measured. */
export type BandProblem = "edge" | "flat" | "few-samples" | "no-maximum";

export interface MeasuredBands {
  /** One entry a top. */
  bands: (MeasuredBand | BandProblem)[];
  /** Samples over which the recording was smoothed; 1 = not. */
  smoothedOver: number;
  noise: number;
}

const windowWidths = 0.7;
const widestWindowNm = 8;
const windowBandwidths = 1.5;
const windowSteps = 4.5;
const mostGroups = 44;
/** Shortest scale over the spectral bandwidth. */
const scaleOfBandwidth = 0.6;
const powers: Record<Ordinate["kind"], readonly number[]> = {
  absorbance: [0, -0.5, -1],
  transmittance: [0, 0.5],
  "percent-transmittance": [0, 0.5],
};
const smoothings = [1, 2, 3, 5, 7, 10, 15, 21, 31];
/** Bands that decide over the kind of noise. */
const judges = 6;
/** Log-likelihood by which one more constant has to win (Akaike). */
const leastGain = 1;
/** Absorbance and transmittance beyond which no light is left to tell by. */
const darkestTransmittance = 0.003;
const flatSamples = 3;
const faintest = 1e-4;

interface Window {
  first: number;
  last: number;
  group: number;
  fromNm: number;
  toNm: number;
}

export function measureBands(
  wavelengthsNm: Float64Array,
  ordinate: Ordinate,
  tops: readonly Top[],
  allTops: readonly Top[],
  bandwidthNm: number | null,
): MeasuredBands {
  const n = wavelengthsNm.length;
  const step = (wavelengthsNm[n - 1]! - wavelengthsNm[0]!) / (n - 1);
  const windows = tops.map((top) => windowOf(wavelengthsNm, ordinate, top, allTops, bandwidthNm, step));
  const usable = windows.filter((one): one is Window => typeof one !== "string");
  const fewer =
    usable.length <= judges
      ? usable
      : Array.from({ length: judges }, (_, k) => usable[Math.floor((k * usable.length) / judges)]!);
  const make = (window: Window, power: number, smoothedOver: number): CurveProcess => {
    const curve = new CurveProcess(
      curveWindow(wavelengthsNm, ordinate, window, power, smoothedOver, bandwidthNm, step),
    );
    curve.explore();
    return curve;
  };
  const likelihood = (power: number, smoothedOver: number): number => {
    const curves = fewer.map((window) => make(window, power, smoothedOver));
    const { logVariance } = noiseLevelOf(curves, null);
    let sum = 0;
    for (const curve of curves) sum += curve.likelihoodOfNoise(logVariance);
    return sum;
  };
  let power = 0;
  let smoothedOver = 1;
  if (fewer.length > 0) {
    let best = likelihood(0, 1);
    for (const other of ordinate.relativeUnc === null ? powers[ordinate.kind] : []) {
      if (other === 0) continue;
      const value = likelihood(other, 1);
      if (value > best) {
        best = value;
        power = other;
      }
    }
    // Noise that is alike over much more than a bandwidth can no longer be told from the bands themselves.
    const longest = (1.5 * (bandwidthNm ?? 8 * step)) / step;
    let least = best + leastGain;
    for (const other of smoothings) {
      if (other === 1 || other > longest) continue;
      const value = likelihood(power, other);
      if (value <= least) continue;
      least = value;
      smoothedOver = other;
    }
  }
  const curves = windows.map((window) => (typeof window === "string" ? null : make(window, power, smoothedOver)));
  const known = curves.filter((curve) => curve !== null);
  const shared = known.length > 0 ? noiseLevelOf(known, null) : null;
  const bands = curves.map((curve, k): MeasuredBand | BandProblem => {
    const window = windows[k]!;
    if (curve === null || typeof window === "string") return window as BandProblem;
    const top = curve.findMaximum(
      known.length > 1 ? shared : null,
      wavelengthsNm.subarray(window.first, window.last + 1),
    );
    return top === null ? "no-maximum" : bandOf(wavelengthsNm, ordinate, window, top, power);
  });
  return { bands, smoothedOver, noise: shared === null ? 0 : exp(0.5 * shared.logVariance) };
}

function windowOf(
  wavelengthsNm: Float64Array,
  { values, transmittance }: Ordinate,
  top: Top,
  tops: readonly Top[],
  bandwidthNm: number | null,
  step: number,
): Window | BandProblem {
  const n = values.length;
  const half = Math.max(
    windowSteps * step,
    windowBandwidths * (bandwidthNm ?? 0),
    windowWidths * Math.min(top.widthNm, widestWindowNm),
  );
  let first = top.index;
  let last = top.index;
  while (first > 0 && wavelengthsNm[first - 1]! >= top.wavelengthNm - half) first -= 1;
  while (last + 1 < n && wavelengthsNm[last + 1]! <= top.wavelengthNm + half) last += 1;
  const least = Math.min(half - step, Math.max(2.5 * step, 0.5 * top.widthNm));
  if (top.wavelengthNm - wavelengthsNm[first]! < least || wavelengthsNm[last]! - top.wavelengthNm < least)
    return "edge";
  let count = 0;
  let flat = 0;
  let longest = 0;
  for (let i = first; i <= last; i += 1) {
    if (values[i] !== values[i]) continue;
    count += 1;
    flat = i > first && values[i] === values[i - 1] && transmittance[i]! < darkestTransmittance ? flat + 1 : 0;
    longest = Math.max(longest, flat + 1);
  }
  if (longest >= flatSamples) return "flat";
  if (count < fewestSamples) return "few-samples";
  let fromNm = top.wavelengthNm - Math.max(1.6 * step, 0.4 * top.widthNm);
  let toNm = top.wavelengthNm + Math.max(1.6 * step, 0.4 * top.widthNm);
  for (const other of tops) {
    if (other === top) continue;
    const between = (other.wavelengthNm + top.wavelengthNm) / 2;
    if (other.index < top.index) fromNm = Math.max(fromNm, Math.min(between, top.wavelengthNm - 1.2 * step));
    else toNm = Math.min(toNm, Math.max(between, top.wavelengthNm + 1.2 * step));
  }
  return {
    first,
    last,
    group: Math.ceil(count / mostGroups),
    fromNm: Math.max(fromNm, wavelengthsNm[first]!),
    toNm: Math.min(toNm, wavelengthsNm[last]!),
  };
}

/** Size of the noise at a sample, relative. */
function relativeUncAt({ relativeUnc, transmittance }: Ordinate, power: number, i: number): number {
  if (relativeUnc !== null) return relativeUnc[i]!;
  return power === 0 ? 1 : exp(power * log(Math.max(faintest, Math.min(1, transmittance[i]!))));
}

function curveWindow(
  wavelengthsNm: Float64Array,
  ordinate: Ordinate,
  window: Window,
  power: number,
  smoothedOver: number,
  bandwidthNm: number | null,
  step: number,
): CurveWindow {
  const { first, last, group, fromNm, toNm } = window;
  const positions: number[] = [];
  const values: number[] = [];
  const sizes: number[] = [];
  let [count, x, y, square] = [0, 0, 0, 0];
  for (let i = first; i <= last; i += 1) {
    const value = ordinate.values[i]!;
    if (value !== value) continue;
    count += 1;
    x += wavelengthsNm[i]!;
    y += value;
    const size = relativeUncAt(ordinate, power, i);
    square += size * size;
    if (count < group) continue;
    positions.push(x / count);
    values.push(y / count);
    sizes.push(Math.sqrt((square / count) * varianceOfMean(count, smoothedOver)));
    count = x = y = square = 0;
  }
  return {
    positions: Float64Array.from(positions),
    values: Float64Array.from(values),
    relativeUnc: Float64Array.from(sizes),
    smoothedOver: Math.max(1, smoothedOver / group),
    shortestScale: Math.max(scaleOfBandwidth * (bandwidthNm ?? 0), 0.5 * step * group),
    longestScale: 2 * (wavelengthsNm[last]! - wavelengthsNm[first]!),
    from: fromNm,
    to: toNm,
  };
}

/** Variance of the mean of neighbours whose noise was averaged over so many samples, over that of one. */
function varianceOfMean(count: number, smoothedOver: number): number {
  let sum = 0;
  for (let lag = 1 - count; lag < count; lag += 1) {
    sum += ((count - Math.abs(lag)) * Math.max(0, 1 - Math.abs(lag) / smoothedOver)) / (count * count);
  }
  return sum;
}

function bandOf(
  wavelengthsNm: Float64Array,
  ordinate: Ordinate,
  window: Window,
  top: CurveMaximum,
  power: number,
): MeasuredBand {
  let nearest = window.first;
  for (let i = window.first; i <= window.last; i += 1) {
    if (Math.abs(wavelengthsNm[i]! - top.position) < Math.abs(wavelengthsNm[nearest]! - top.position)) nearest = i;
  }
  return {
    wavelengthNm: top.position,
    uncNm: top.positionUnc,
    degreesOfFreedom: top.degreesOfFreedom,
    value: top.value,
    noise: top.noise * relativeUncAt(ordinate, power, nearest),
    reducedChiSquare: top.reducedChiSquare,
    shiftPerNm2: -0.5 * (top.thirdDerivative / top.curvature),
    windowFirst: window.first,
    windowLast: window.last,
    curve: top.fitted,
  };
}
