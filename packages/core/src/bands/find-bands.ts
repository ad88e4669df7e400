/**
 * Tops of an absorption spectrum, strong and weak: what a certificate's bands are looked for among.
 *
 * Smoothed  by a local parabola over about the spectral bandwidth (A. Savitzky, M. J. E. Golay, Anal. Chem. 36 (1964) 1627), where there are
 *           samples enough
 * Top       higher than its neighbours, and above the valleys on both sides (prominence) by more than the noise makes
 */
import { solveLeastSquares } from "../numeric/linear-least-squares.ts";
import { beamNoise } from "./ordinate.ts";

export interface Top {
  /** Index of the sample. */
  index: number;
  wavelengthNm: number;
  /** Height above the higher of the two valleys beside it. */
  prominence: number;
  /** Width at half of the prominence, nm. */
  widthNm: number;
}

const leastSigmas = 6;
/** Share of the spectrum's height below which a top is no band. */
const leastShare = 0.003;

/**
 * @param wavelengthsNm  increasing
 * @param values         bands up, NaN for gaps
 * @returns tops in order of wavelength, and the smoothed spectrum
 */
export function findTops(
  wavelengthsNm: Float64Array,
  values: Float64Array,
  bandwidthNm: number | null,
): { tops: Top[]; smooth: Float64Array; noise: number } {
  const n = values.length;
  const step = (wavelengthsNm[n - 1]! - wavelengthsNm[0]!) / (n - 1);
  const reach = Math.min(50, Math.floor((0.5 * (bandwidthNm ?? 4 * step)) / step));
  const filled = fillGaps(values);
  const noise = beamNoise(filled);
  const weights = parabolaWeights(reach);
  const smooth = reach < 2 ? filled : convolve(filled, weights, reach);
  let size = 0;
  for (const weight of weights) size += weight * weight;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of smooth) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  const least = Math.max(leastSigmas * noise * Math.sqrt(reach < 2 ? 1 : size), leastShare * (high - low));
  const tops: Top[] = [];
  for (let i = 1; i + 1 < n; i += 1) {
    if (!(smooth[i]! > smooth[i - 1]! && smooth[i]! >= smooth[i + 1]!)) continue;
    const left = valley(smooth, i, -1);
    const right = valley(smooth, i, 1);
    const prominence = smooth[i]! - Math.max(left, right);
    if (prominence < least) continue;
    const half = smooth[i]! - prominence / 2;
    let from = i;
    let to = i;
    while (from > 0 && smooth[from - 1]! > half) from -= 1;
    while (to + 1 < n && smooth[to + 1]! > half) to += 1;
    const widthNm = Math.max(wavelengthsNm[to]! - wavelengthsNm[from]!, step);
    tops.push({ index: i, wavelengthNm: wavelengthsNm[i]!, prominence, widthNm });
  }
  return { tops, smooth, noise };
}

/** Lowest value on the way to higher ground, or to the end of the spectrum. */
function valley(smooth: Float64Array, top: number, direction: 1 | -1): number {
  let low = smooth[top]!;
  for (let i = top + direction; i >= 0 && i < smooth.length; i += direction) {
    if (smooth[i]! > smooth[top]!) break;
    if (smooth[i]! < low) low = smooth[i]!;
  }
  return low;
}

/** Gaps become straight lines between their neighbours. */
function fillGaps(values: Float64Array): Float64Array {
  const filled = values.slice();
  let before = -1;
  for (let i = 0; i <= filled.length; i += 1) {
    const isKnown = i < filled.length && filled[i] === filled[i];
    if (!isKnown && i < filled.length) continue;
    const left = before < 0 ? (i < filled.length ? filled[i]! : 0) : filled[before]!;
    const right = i < filled.length ? filled[i]! : left;
    for (let k = before + 1; k < i; k += 1) filled[k] = left + ((k - before) / (i - before)) * (right - left);
    before = i;
  }
  return filled;
}

/** Weights of the value at the middle of a parabola fitted to 2 reach + 1 equidistant samples. */
function parabolaWeights(reach: number): Float64Array {
  const m = 2 * reach + 1;
  if (reach < 2) return Float64Array.of(1);
  const design = new Float64Array(m * 3);
  for (let i = 0; i < m; i += 1) {
    const t = (i - reach) / reach;
    design[3 * i] = 1;
    design[3 * i + 1] = t;
    design[3 * i + 2] = t * t;
  }
  const weights = new Float64Array(m);
  const unit = new Float64Array(m);
  for (let i = 0; i < m; i += 1) {
    unit.fill(0);
    unit[i] = 1;
    weights[i] = solveLeastSquares(design, m, 3, unit, null).coefficients[0]!;
  }
  return weights;
}

function convolve(values: Float64Array, weights: Float64Array, reach: number): Float64Array {
  const n = values.length;
  const out = values.slice();
  for (let i = reach; i + reach < n; i += 1) {
    let sum = 0;
    for (let k = -reach; k <= reach; k += 1) sum += weights[k + reach]! * values[i + k]!;
    out[i] = sum;
  }
  return out;
}
