/**
 * A running sum of products in about 106 bits: the residuals and gradients of refined least squares, where one double loses what
 * matters.
 *
 * Source   D. E. Knuth, The Art of Computer Programming 2, 4.2.2 (sum without loss); T. J. Dekker, Numer. Math. 18 (1971) 224
 *          (product without loss)
 * Limits   factors below 1e300 in size; products above 1e-290, else what is lost underflows
 * Kept apart from the same steps in exponential.ts: a low part shared between modules costs the exponentials half of their speed
 */

/** 2^27 + 1: splits a double into two halves of at most 26 bits. */
const SPLITTER = 134217729;

export class PreciseSum {
  private high = 0;
  private rest = 0;

  reset(value = 0): void {
    this.high = value;
    this.rest = 0;
  }

  add(value: number): void {
    const sum = this.high + value;
    const added = sum - this.high;
    this.rest += this.high - (sum - added) + (value - added);
    this.high = sum;
  }

  addProduct(a: number, b: number): void {
    const product = a * b;
    const aa = SPLITTER * a;
    const aHigh = aa - (aa - a);
    const aLow = a - aHigh;
    const bb = SPLITTER * b;
    const bHigh = bb - (bb - b);
    const bLow = b - bHigh;
    this.rest += aLow * bLow - (product - aHigh * bHigh - aLow * bHigh - aHigh * bLow);
    this.add(product);
  }

  get value(): number {
    return this.high + this.rest;
  }
}
