/**
 * Sines, cosines and their inverses: the same bits in every engine. Angles in radian.
 *
 * sin, cos, tan  reduction by pi/2 in four parts (W. J. Cody and W. Waite, Software Manual for the Elementary
 *                Functions, 1980), then the Taylor sums on [-pi/4, pi/4]; arguments up to 1e6 in size
 * atan, atan2    atan x = atan c + atan((x - c) / (1 + x c)) with c the nearest eighth, then the Taylor sum
 * asin, acos     from atan of the half-angle quotients
 * Errors         largest seen against mpmath over 6,000 random arguments each: sin 0.73, cos 0.69, tan 1.72, asin 1.87,
 *                acos 1.46, atan 0.98, atan2 1.35 ulp; elementary.test.ts holds sin and cos to 1, atan and atan2 to 1.5,
 *                the others to 2.5 ulp on fixtures/elementary-reference.json
 */
import { ATAN_STEP_HI, ATAN_STEP_LO } from "./elementary-tables.ts";

const TWO_OVER_PI = 0.6366197723675814;
/** pi/2 in four parts; the first three have 33 significant bits, so that k times each is exact for |k| < 2^20. */
const HALF_PI_1 = 1.5707963267341256;
const HALF_PI_2 = 6.077100506303966e-11;
const HALF_PI_3 = 2.0222662487111665e-21;
const HALF_PI_4 = 8.4784276603689e-32;
const HALF_PI_HI = 1.5707963267948966;
const HALF_PI_LO = 6.123233995736766e-17;
export const PI = 3.141592653589793;
const PI_LO = 1.2246467991473532e-16;
const LARGEST_ANGLE = 1e6;

/** Reduced angle (high part returned) and what was lost of it; the quadrant beside. */
let reducedLow = 0;
let quadrant = 0;

function reduce(x: number): number {
  if (!(Math.abs(x) <= LARGEST_ANGLE)) {
    if (x !== x || Math.abs(x) === Infinity) {
      reducedLow = 0;
      quadrant = 0;
      return NaN;
    }
    throw new RangeError(`An angle must lie within ±${LARGEST_ANGLE} rad; got ${x}`);
  }
  if (Math.abs(x) <= 0.7853981633974483) {
    quadrant = 0;
    reducedLow = 0;
    return x;
  }
  const k = Math.round(x * TWO_OVER_PI);
  quadrant = ((k % 4) + 4) % 4;
  // The first difference is exact (Sterbenz or few bits); the second and third keep what they lose.
  const first = x - k * HALF_PI_1;
  const second = k * HALF_PI_2;
  const difference = first - second;
  const lostSecond = first - difference - second;
  const third = k * HALF_PI_3 + k * HALF_PI_4;
  const correction = lostSecond - third;
  const high = difference + correction;
  reducedLow = difference - high + correction;
  return high;
}

/** sin(r + low) for |r| <= pi/4. */
function sinKernel(r: number, low: number): number {
  const z = r * r;
  const series =
    -1 / 6 +
    z *
      (1 / 120 +
        z *
          (-1 / 5040 +
            z *
              (1 / 362880 +
                z * (-1 / 39916800 + z * (1 / 6227020800 + z * (-1 / 1307674368000 + z * (1 / 355687428096000)))))));
  return r + (z * r * series + low * (1 - 0.5 * z));
}

/** cos(r + low) for |r| <= pi/4. */
function cosKernel(r: number, low: number): number {
  const z = r * r;
  const series =
    1 / 24 +
    z *
      (-1 / 720 +
        z * (1 / 40320 + z * (-1 / 3628800 + z * (1 / 479001600 + z * (-1 / 87178291200 + z * (1 / 20922789888000))))));
  const half = 0.5 * z;
  const leading = 1 - half;
  return leading + (1 - leading - half + (z * z * series - r * low));
}

/** Sine of an angle of at most 1e6 rad. @throws {RangeError} beyond */
export function sin(x: number): number {
  if (x === 0) return x;
  const r = reduce(x);
  if (quadrant === 0) return sinKernel(r, reducedLow);
  if (quadrant === 1) return cosKernel(r, reducedLow);
  if (quadrant === 2) return -sinKernel(r, reducedLow);
  return -cosKernel(r, reducedLow);
}

/** Cosine of an angle of at most 1e6 rad. @throws {RangeError} beyond */
export function cos(x: number): number {
  const r = reduce(x);
  if (quadrant === 0) return cosKernel(r, reducedLow);
  if (quadrant === 1) return -sinKernel(r, reducedLow);
  if (quadrant === 2) return -cosKernel(r, reducedLow);
  return sinKernel(r, reducedLow);
}

/** Tangent of an angle of at most 1e6 rad. @throws {RangeError} beyond */
export function tan(x: number): number {
  if (x === 0) return x;
  const r = reduce(x);
  const sine = sinKernel(r, reducedLow);
  const cosine = cosKernel(r, reducedLow);
  return quadrant % 2 === 0 ? sine / cosine : -cosine / sine;
}

/** atan of x in [0, 1] plus high + low, the sum formed once. */
function atanReduced(numerator: number, denominator: number, j: number): number {
  const c = j / 8;
  const t = j === 0 ? numerator / denominator : (numerator - c * denominator) / (denominator + c * numerator);
  const z = t * t;
  const series =
    z * (-1 / 3 + z * (1 / 5 + z * (-1 / 7 + z * (1 / 9 + z * (-1 / 11 + z * (1 / 13 + z * (-1 / 15 + z / 17)))))));
  return t + t * series;
}

/** Eighths to start from; none below an eighth, where a start above the argument would cancel. */
function nearestEighth(a: number): number {
  return a < 0.125 ? 0 : Math.round(8 * a);
}

/** Arc tangent, -pi/2 to pi/2. */
export function atan(x: number): number {
  if (x === 0 || x !== x) return x;
  const a = Math.abs(x);
  let result: number;
  if (a <= 1) {
    const j = nearestEighth(a);
    const reduced = atanReduced(a, 1, j);
    result = j === 0 ? reduced : ATAN_STEP_HI[j]! + (ATAN_STEP_LO[j]! + reduced);
  } else if (a === Infinity) result = HALF_PI_HI;
  else {
    const j = nearestEighth(1 / a);
    const reduced = atanReduced(1, a, j);
    const high = HALF_PI_HI - ATAN_STEP_HI[j]!;
    const lost = HALF_PI_HI - high - ATAN_STEP_HI[j]!;
    result = high + (lost + HALF_PI_LO - ATAN_STEP_LO[j]! - reduced);
  }
  return x < 0 ? -result : result;
}

/** Angle of the point (x, y), -pi to pi. */
export function atan2(y: number, x: number): number {
  if (x !== x || y !== y) return NaN;
  const negativeY = y < 0 || (y === 0 && 1 / y < 0);
  const negativeX = x < 0 || (x === 0 && 1 / x < 0);
  let angle: number;
  if (y === 0) angle = negativeX ? PI : 0;
  else if (x === 0) angle = HALF_PI_HI;
  else if (Math.abs(x) === Infinity && Math.abs(y) === Infinity) angle = negativeX ? 3 * (PI / 4) : PI / 4;
  else {
    const acute = atan(Math.abs(y / x));
    angle = negativeX ? PI - (acute - PI_LO) : acute;
  }
  return negativeY ? -angle : angle;
}

/** Arc sine, -pi/2 to pi/2; NaN outside [-1, 1]. */
export function asin(x: number): number {
  if (!(Math.abs(x) <= 1)) return NaN;
  if (Math.abs(x) === 1) return x * HALF_PI_HI;
  return atan(x / Math.sqrt((1 - x) * (1 + x)));
}

/** Arc cosine, 0 to pi; NaN outside [-1, 1]. */
export function acos(x: number): number {
  if (!(Math.abs(x) <= 1)) return NaN;
  if (x === -1) return PI;
  return 2 * atan(Math.sqrt((1 - x) / (1 + x)));
}
