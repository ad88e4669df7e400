/**
 * A wavelength axis: pixel to wavelength, wavelength to pixel, and how sure either is.
 *
 * Model        lambda(p) = c0 + c1 p + c2 p^2 + ..., p in px (or in the unit of the capture's own axis), lambda in nm
 * Uncertainty  u(p)^2 = b(t)' C b(t), b_j = T_j(t), t = (2 p - first - last)/(last - first); outside the outermost lines
 *              the Chebyshev polynomials, and u with them, grow as they must
 * Inverse      Newton's step, bisection where it would leave the bracket; to the last digit
 */
import type { PixelAxis } from "../analysis/types.ts";
import { chebyshevArgument, chebyshevBasis } from "../numeric/chebyshev.ts";

const maxDegree = 12;

/** Wavelength in nm at a pixel. */
export function axisNm(axis: PixelAxis, px: number): number {
  const c = axis.coefficients;
  let value = 0;
  for (let k = c.length - 1; k >= 0; k--) value = value * px + (c[k] as number);
  return value;
}

/** Local dispersion d lambda/dp in nm per px; its sign says whether the wavelength rises or falls with the pixel. */
export function axisSlope(axis: PixelAxis, px: number): number {
  const c = axis.coefficients;
  let value = 0;
  for (let k = c.length - 1; k >= 1; k--) value = value * px + k * (c[k] as number);
  return value;
}

/**
 * Standard uncertainty of the axis in nm at a pixel (the axis alone: neither the line's own position nor the reference).
 *
 * @returns null where the covariance is not known (coefficients typed in by hand): unknown is not zero
 */
export function axisUncNm(axis: PixelAxis, px: number): number | null {
  const covariance = axis.chebyshevCovariance;
  if (covariance === null) return null;
  const size = Math.round(Math.sqrt(covariance.length));
  return quadraticRoot(covariance, chebyshevBasis(size - 1, argumentOf(axis, px)));
}

/** Standard uncertainty of the local dispersion in nm per px; null where the covariance is not known. */
export function axisSlopeUncNm(axis: PixelAxis, px: number): number | null {
  const covariance = axis.chebyshevCovariance;
  if (covariance === null || axis.lastPx === axis.firstPx) return null;
  const size = Math.round(Math.sqrt(covariance.length));
  const t = argumentOf(axis, px);
  // T_j' = j U_j-1, with U_0 = 1, U_1 = 2 t, U_j+1 = 2 t U_j - U_j-1; t runs by 2 over the length of the axis.
  const slope = new Float64Array(size);
  let before = 0;
  let current = 1;
  for (let j = 1; j < size; j++) {
    slope[j] = (j * current * 2) / (axis.lastPx - axis.firstPx);
    const next = 2 * t * current - before;
    before = current;
    current = next;
  }
  return quadraticRoot(covariance, slope);
}

function argumentOf(axis: PixelAxis, px: number): number {
  return axis.lastPx === axis.firstPx ? 0 : chebyshevArgument(px, axis.firstPx, axis.lastPx);
}

/** Root of v' C v, C row-major. */
function quadraticRoot(covariance: readonly number[], vector: Float64Array): number {
  const size = vector.length;
  let variance = 0;
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) {
      variance += (vector[i] as number) * (vector[j] as number) * (covariance[i * size + j] as number);
    }
  }
  return Math.sqrt(Math.max(variance, 0));
}

/**
 * Whether the axis rises or falls without turning between two pixels (ends included). Exact: the turning points
 * themselves are looked for, not samples.
 */
export function isMonotonic(axis: PixelAxis, fromPx: number, toPx: number): boolean {
  const c = axis.coefficients;
  if (c.length < 2 || c.length > maxDegree + 1 || c.some((value) => !Number.isFinite(value))) return false;
  const slope = derivative(c);
  const atStart = evaluate(slope, fromPx);
  const atEnd = evaluate(slope, toPx);
  if (atStart === 0 || atEnd === 0 || atStart > 0 !== atEnd > 0) return false;
  for (const turn of rootsBetween(derivative(slope), fromPx, toPx)) {
    const there = evaluate(slope, turn);
    if (there === 0 || there > 0 !== atStart > 0) return false;
  }
  return true;
}

/**
 * Pixel of a wavelength: the exact inverse of `axisNm`.
 *
 * @param reach how far beyond the outermost lines is searched, in px each way (default: the axis' own length)
 * @returns null where the axis does not take that wavelength on its monotonic stretch around the lines
 */
export function axisPx(axis: PixelAxis, nm: number, reach: number = axis.lastPx - axis.firstPx): number | null {
  const middle = (axis.firstPx + axis.lastPx) / 2;
  const bounds = monotonicStretch(axis, axis.firstPx - reach, axis.lastPx + reach, middle);
  if (bounds === null) return null;
  let [low, high] = bounds;
  const rising = axisNm(axis, high) > axisNm(axis, low);
  const atLow = axisNm(axis, low) - nm;
  const atHigh = axisNm(axis, high) - nm;
  if (atLow === 0) return low;
  if (atHigh === 0) return high;
  if (atLow > 0 === atHigh > 0) return null;
  let px = low + ((high - low) * atLow) / (atLow - atHigh);
  for (let step = 0; step < 200; step++) {
    const miss = axisNm(axis, px) - nm;
    if (miss === 0) return px;
    if (miss > 0 === rising) high = px;
    else low = px;
    const slope = axisSlope(axis, px);
    let next = px - miss / slope;
    if (!(next > low && next < high)) next = low + (high - low) / 2;
    if (next === px || next === low || next === high) return next;
    px = next;
  }
  return px;
}

/** The monotonic stretch around `inside`, cut to [from, to]; null where the axis turns at `inside` or has no slope. */
function monotonicStretch(axis: PixelAxis, from: number, to: number, inside: number): [number, number] | null {
  if (axis.coefficients.length < 2) return null;
  let low = from;
  let high = to;
  for (const turn of rootsBetween(derivative(axis.coefficients), from, to)) {
    if (turn === inside) return null;
    if (turn < inside) low = Math.max(low, turn);
    else high = Math.min(high, turn);
  }
  return high > low ? [low, high] : null;
}

function derivative(coefficients: readonly number[]): number[] {
  const slope: number[] = [];
  for (let k = 1; k < coefficients.length; k++) slope.push(k * (coefficients[k] as number));
  return slope;
}

function evaluate(coefficients: readonly number[], x: number): number {
  let value = 0;
  for (let k = coefficients.length - 1; k >= 0; k--) value = value * x + (coefficients[k] as number);
  return value;
}

/** Real roots of a polynomial in [from, to], ascending: between two roots of the derivative there is at most one. */
function rootsBetween(coefficients: readonly number[], from: number, to: number): number[] {
  let length = coefficients.length;
  while (length > 0 && coefficients[length - 1] === 0) length -= 1;
  if (length <= 1) return [];
  const polynomial = coefficients.slice(0, length);
  if (length === 2) {
    const root = -(polynomial[0] as number) / (polynomial[1] as number);
    return root >= from && root <= to ? [root] : [];
  }
  const cuts = [from, ...rootsBetween(derivative(polynomial), from, to), to];
  const roots: number[] = [];
  for (let k = 0; k + 1 < cuts.length; k++) {
    let low = cuts[k] as number;
    let high = cuts[k + 1] as number;
    const atLow = evaluate(polynomial, low);
    const atHigh = evaluate(polynomial, high);
    if (atLow === 0) {
      if (roots[roots.length - 1] !== low) roots.push(low);
      continue;
    }
    if (atHigh === 0) {
      roots.push(high);
      continue;
    }
    if (atLow > 0 === atHigh > 0) continue;
    for (let step = 0; step < 200; step++) {
      const middle = low + (high - low) / 2;
      if (middle <= low || middle >= high) break;
      if (evaluate(polynomial, middle) > 0 === atLow > 0) low = middle;
      else high = middle;
    }
    roots.push(low + (high - low) / 2);
  }
  return roots;
}
