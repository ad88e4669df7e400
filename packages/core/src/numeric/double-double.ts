/**
 * Numbers of twice the precision as unevaluated sums of two doubles, where one double loses what matters.
 *
 * Source   D. E. Knuth, The Art of Computer Programming 2, 4.2.2 (sum); T. J. Dekker, Numer. Math. 18 (1971) 224 (product)
 * Limits   factors below 1e300 in size; products above 1e-290, else what is lost underflows
 */

/** 2^27 + 1: splits a double into two halves of at most 26 bits. */
const SPLITTER = 134217729;

/** Low part of the last double-double result; the high part is returned. */
export let low = 0;

/** Sum of two doubles without loss: high part returned, what rounding took in `low` (D. E. Knuth). */
export function twoSum(a: number, b: number): number {
  const s = a + b;
  const bb = s - a;
  low = a - (s - bb) + (b - bb);
  return s;
}

/** Product of two doubles in the same way, for factors below 1e300 in size (T. J. Dekker). */
export function twoProduct(a: number, b: number): number {
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
export function multiplyDouble(aHigh: number, aLow: number, bHigh: number, bLow: number): number {
  const p = twoProduct(aHigh, bHigh);
  return twoSum(p, low + (aHigh * bLow + aLow * bHigh));
}

/** A running sum of products in about 106 bits: the residuals and gradients of refined least squares. */
export class PreciseSum {
  private high = 0;
  private rest = 0;

  reset(value = 0): void {
    this.high = value;
    this.rest = 0;
  }

  add(value: number): void {
    this.high = twoSum(this.high, value);
    this.rest += low;
  }

  addProduct(a: number, b: number): void {
    const product = twoProduct(a, b);
    const lost = low;
    this.high = twoSum(this.high, product);
    this.rest += low + lost;
  }

  get value(): number {
    return this.high + this.rest;
  }
}
