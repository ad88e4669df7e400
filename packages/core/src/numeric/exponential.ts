/**
 * Exponentials, logarithms, powers: the same bits in every engine.
 *
 * Only + - * / and the exactly rounded Math functions are used, in a fixed order.
 * exp, expm1  table-driven reduction to |r| <= ln 2 / 64, then the Taylor sum (P. T. P. Tang, ACM TOMS 15 (1989) 144)
 * log, log1p  log(1 + f) = 2 atanh(f / (2 + f)), the leading terms kept apart from the rounded sum
 *             (arrangement after P. T. P. Tang, ACM TOMS 16 (1990) 378, without its table)
 * log10, pow  the same sum carried in double-double (T. J. Dekker, Numer. Math. 18 (1971) 224)
 * Errors      largest seen against mpmath over 6,000 random arguments or more each: exp 0.66, expm1 0.68, log 0.75,
 *             log1p 0.75, log10 0.50, pow 1.00, hypot 0.63 ulp; exp and pow below 2^-1022 to one unit of 2^-1074.
 *             elementary.test.ts holds them to 1 ulp, pow to 1.5, on fixtures/elementary-reference.json
 */
import { EXP2_STEP_HI, EXP2_STEP_LO } from "./elementary-tables.ts";

/** ln 2 / 32 in two parts; the first has 32 significant bits, so that k times it is exact for |k| < 2^21. */
const LN2_32_HI = 0.02166084938653512;
const LN2_32_LO = 5.9631716539705866e-12;
const INVERSE_LN2_32 = 46.16624130844683;
/** ln 2 in two parts, the first with 32 significant bits. */
const LN2_HI = 0.6931471803691238;
const LN2_LO = 1.9082149292705877e-10;
const INVERSE_LN10_HI = 0.4342944819032518;
const INVERSE_LN10_LO = 1.098319650216765e-17;
const SQRT_HALF = 0.7071067811865476;
/** 2^27 + 1: splits a double into two halves of at most 26 bits. */
const SPLITTER = 134217729;

/** 2^e for e = -1074 … 1023, made by exact halving and doubling. */
const LOWEST_EXPONENT = -1074;
const POWERS_OF_TWO = new Float64Array(1023 - LOWEST_EXPONENT + 1);
POWERS_OF_TWO[-LOWEST_EXPONENT] = 1;
for (let e = 1; e <= 1023; e++) POWERS_OF_TWO[e - LOWEST_EXPONENT] = 2 * POWERS_OF_TWO[e - 1 - LOWEST_EXPONENT]!;
for (let e = -1; e >= LOWEST_EXPONENT; e--)
  POWERS_OF_TWO[e - LOWEST_EXPONENT] = POWERS_OF_TWO[e + 1 - LOWEST_EXPONENT]! / 2;

const float = new Float64Array(1);
const words = new Uint32Array(float.buffer);
float[0] = 1;
const HIGH_WORD = words[1] === 0x3ff00000 ? 1 : 0;

/** x * 2^e without needless overflow on the way; e from -2148 to 2046. */
function scaleByPowerOfTwo(x: number, e: number): number {
  if (e > 1023) return x * POWERS_OF_TWO[1023 - LOWEST_EXPONENT]! * POWERS_OF_TWO[e - 1023 - LOWEST_EXPONENT]!;
  // Below 2^-1022 the result rounds once more; one unit of 2^-1074 is the stated error there.
  if (e < -1021) return x * POWERS_OF_TWO[e + 1000 - LOWEST_EXPONENT]! * POWERS_OF_TWO[-1000 - LOWEST_EXPONENT]!;
  return x * POWERS_OF_TWO[e - LOWEST_EXPONENT]!;
}

/** exp(x + tail) for |tail| far below |x|, finite x within the range where the result is finite. */
function expOfSum(x: number, tail: number): number {
  const k = Math.round(x * INVERSE_LN2_32);
  const r = x - k * LN2_32_HI - (k * LN2_32_LO - tail);
  const exponent = Math.floor(k / 32);
  const j = k - 32 * exponent;
  const p = r + r * r * (0.5 + r * (1 / 6 + r * (1 / 24 + r * (1 / 120 + r * (1 / 720)))));
  const high = EXP2_STEP_HI[j]!;
  return scaleByPowerOfTwo(high + (EXP2_STEP_LO[j]! + high * p), exponent);
}

/** e^x; 0 below -745.14, Infinity above 709.79. */
export function exp(x: number): number {
  if (x > 709.782712893384) return Infinity;
  if (x < -745.1332191019412) return 0;
  if (x !== x) return NaN;
  return expOfSum(x, 0);
}

/** e^x - 1 without cancellation near 0. */
export function expm1(x: number): number {
  if (x !== x || x === 0) return x;
  if (x > 709.782712893384) return Infinity;
  if (x < -40) return -1;
  if (x > 40) return exp(x);
  if (Math.abs(x) < 0.35) {
    const tail =
      1 / 6 +
      x *
        (1 / 24 +
          x *
            (1 / 120 +
              x *
                (1 / 720 +
                  x *
                    (1 / 5040 +
                      x *
                        (1 / 40320 +
                          x *
                            (1 / 362880 +
                              x * (1 / 3628800 + x * (1 / 39916800 + x * (1 / 479001600 + x / 6227020800)))))))));
    return x + (0.5 * x * x + x * x * x * tail);
  }
  const k = Math.round(x * INVERSE_LN2_32);
  const r = x - k * LN2_32_HI - k * LN2_32_LO;
  const exponent = Math.floor(k / 32);
  const j = k - 32 * exponent;
  const p = r + r * r * (0.5 + r * (1 / 6 + r * (1 / 24 + r * (1 / 120 + r * (1 / 720)))));
  const scale = POWERS_OF_TWO[exponent - LOWEST_EXPONENT]!;
  const leading = scale * EXP2_STEP_HI[j]!;
  const low = scale * (EXP2_STEP_LO[j]! + EXP2_STEP_HI[j]! * p);
  const difference = leading - 1;
  const lost = leading >= 1 ? leading - difference - 1 : leading - (difference + 1);
  return difference + (lost + low);
}

/** Splits positive finite x into 2^exponent * fraction with fraction in [sqrt(1/2), sqrt(2)); leaves them in these two. */
let splitExponent = 0;
function splitFraction(x: number): number {
  let extra = 0;
  if (x < 2.2250738585072014e-308) {
    x *= 18014398509481984;
    extra = -54;
  }
  float[0] = x;
  const high = words[HIGH_WORD]!;
  words[HIGH_WORD] = (high & 0x000fffff) | 0x3ff00000;
  let fraction = float[0]!;
  splitExponent = (high >>> 20) - 1023 + extra;
  if (fraction >= 2 * SQRT_HALF) {
    fraction /= 2;
    splitExponent += 1;
  }
  return fraction;
}

/** k ln 2 + log(1 + f) + tail, for f in [sqrt(1/2) - 1, sqrt(2) - 1]. */
function logOfSum(k: number, f: number, tail: number): number {
  const s = f / (2 + f);
  const z = s * s;
  const series =
    z *
    (2 / 3 +
      z *
        (2 / 5 +
          z *
            (2 / 7 +
              z *
                (2 / 9 +
                  z *
                    (2 / 11 +
                      z * (2 / 13 + z * (2 / 15 + z * (2 / 17 + z * (2 / 19 + z * (2 / 21 + z * (2 / 23)))))))))));
  const half = 0.5 * f * f;
  if (k === 0) return f - (half - (s * (half + series) + tail));
  return k * LN2_HI - (half - (s * (half + series) + (k * LN2_LO + tail)) - f);
}

/** Natural logarithm; NaN below 0, -Infinity at 0. */
export function log(x: number): number {
  if (!(x > 0)) return x === 0 ? -Infinity : NaN;
  if (x === Infinity) return Infinity;
  const fraction = splitFraction(x);
  return logOfSum(splitExponent, fraction - 1, 0);
}

/** log(1 + x) without cancellation near 0. */
export function log1p(x: number): number {
  if (!(x > -1)) return x === -1 ? -Infinity : NaN;
  if (x === Infinity || x === 0) return x;
  if (x > -0.29 && x < 0.41) return logOfSum(0, x, 0);
  const sum = 1 + x;
  const lost = x > 1 ? 1 - (sum - x) : x - (sum - 1);
  const fraction = splitFraction(sum);
  return logOfSum(splitExponent, fraction - 1, lost / sum);
}

/** Low part of the last double-double result; the high part is returned. */
let low = 0;

function twoSum(a: number, b: number): number {
  const s = a + b;
  const bb = s - a;
  low = a - (s - bb) + (b - bb);
  return s;
}

function twoProduct(a: number, b: number): number {
  const p = a * b;
  const aa = SPLITTER * a;
  const aHigh = aa - (aa - a);
  const aLow = a - aHigh;
  const bb = SPLITTER * b;
  const bHigh = bb - (bb - b);
  const bLow = b - bHigh;
  low = aLow * bLow - (p - aHigh * bHigh - aLow * bHigh - aHigh * bLow);
  return p;
}

/** (aHigh + aLow) * (bHigh + bLow). */
function multiplyDouble(aHigh: number, aLow: number, bHigh: number, bLow: number): number {
  const p = twoProduct(aHigh, bHigh);
  return twoSum(p, low + (aHigh * bLow + aLow * bHigh));
}

/** log(x) as high + low to about 2^-68 of max(1, |log x|), for positive finite x. */
function logDouble(x: number): number {
  const fraction = splitFraction(x);
  const k = splitExponent;
  const f = fraction - 1;
  // s = f / (2 + f) with its remainder; 2 + f is carried as a pair.
  const sumHigh = twoSum(2, f);
  const sumLow = low;
  const sHigh = f / sumHigh;
  const product = twoProduct(sHigh, sumHigh);
  const sLow = (f - product - low - sHigh * sumLow) / sumHigh;
  const zHigh = multiplyDouble(sHigh, sLow, sHigh, sLow);
  const zLow = low;
  const cubeHigh = multiplyDouble(zHigh, zLow, sHigh, sLow);
  const cubeLow = low;
  const thirdHigh = multiplyDouble(cubeHigh, cubeLow, 2 / 3, 3.700743415417188e-17);
  const thirdLow = low;
  const z = zHigh;
  const rest =
    cubeHigh *
    z *
    (2 / 5 +
      z *
        (2 / 7 +
          z *
            (2 / 9 +
              z * (2 / 11 + z * (2 / 13 + z * (2 / 15 + z * (2 / 17 + z * (2 / 19 + z * (2 / 21 + z * (2 / 23))))))))));
  let high = twoSum(2 * sHigh, thirdHigh);
  let rounded = low + (2 * sLow + thirdLow + rest);
  high = twoSum(k * LN2_HI, high);
  rounded += low + k * LN2_LO;
  return twoSum(high, rounded);
}

/** exp(-x²) with x² kept whole, for |x| up to 27.3: what the error function needs. */
export function expOfNegativeSquare(x: number): number {
  const square = twoProduct(x, x);
  return expOfSum(-square, -low);
}

/** Decimal logarithm; exact for powers of ten. */
export function log10(x: number): number {
  if (!(x > 0)) return x === 0 ? -Infinity : NaN;
  if (x === Infinity) return Infinity;
  const high = logDouble(x);
  return multiplyDouble(high, low, INVERSE_LN10_HI, INVERSE_LN10_LO);
}

/** x^y with the special cases of IEEE 754 pow (pow(x, 0) = 1 for every x). */
export function pow(x: number, y: number): number {
  if (y === 0 || x === 1) return 1;
  if (x !== x || y !== y) return NaN;
  if (y === 1) return x;
  const isInteger = Math.floor(y) === y;
  const isOdd = isInteger && Math.abs(y) < 9007199254740992 && y % 2 !== 0;
  const magnitude = Math.abs(x);
  const negative = (x < 0 || (x === 0 && 1 / x < 0)) && isOdd;
  if (y === Infinity || y === -Infinity) return magnitude === 1 ? 1 : magnitude > 1 === y > 0 ? Infinity : 0;
  if (magnitude === 0 || magnitude === Infinity) {
    const result = (magnitude === 0) === y > 0 ? 0 : Infinity;
    return negative ? -result : result;
  }
  if (x < 0 && !isInteger) return NaN;
  if (y === 2) return x * x;
  const logHigh = logDouble(magnitude);
  const logLow = low;
  let result: number;
  if (Math.abs(y * logHigh) > 1000) result = y * logHigh > 0 ? Infinity : 0;
  else {
    const exponentHigh = multiplyDouble(logHigh, logLow, y, 0);
    const exponentLow = low;
    if (exponentHigh > 709.782712893384 || exponentHigh < -745.1332191019412) result = exponentHigh > 0 ? Infinity : 0;
    else result = expOfSum(exponentHigh, exponentLow);
  }
  return negative ? -result : result;
}

/** sqrt(x² + y²) without overflow or underflow on the way. */
export function hypot(x: number, y: number): number {
  const a = Math.abs(x);
  const b = Math.abs(y);
  if (a === Infinity || b === Infinity) return Infinity;
  const large = Math.max(a, b);
  const small = Math.min(a, b);
  if (large === 0 || large !== large) return large;
  let scale = 1;
  if (large > 1e150) scale = POWERS_OF_TWO[-600 - LOWEST_EXPONENT]!;
  else if (large < 1e-140) scale = POWERS_OF_TWO[600 - LOWEST_EXPONENT]!;
  const l = large * scale;
  const s = small * scale;
  const squared = twoProduct(l, l);
  const squaredLow = low;
  const root = Math.sqrt(squared + s * s);
  const rootSquared = twoProduct(root, root);
  // One Newton step with the remainder: squared - rootSquared is exact where it matters.
  const remainder = squared - rootSquared + s * s + (squaredLow - low);
  return (root + remainder / (2 * root)) / scale;
}
