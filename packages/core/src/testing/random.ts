/**
 * Seeded random numbers for simulations: the same seed gives the same bits in every engine.
 *
 * uniform  xoshiro128** (D. Blackman, S. Vigna, ACM TOMS 47 (2021) 36), seeded by a 32-bit mixing step
 * normal   polar method (G. Marsaglia, T. A. Bray, SIAM Rev. 6 (1964) 260)
 * poisson  inversion below 30; from there transformed rejection (W. Hörmann, Insur. Math. Econ. 12 (1993) 39)
 */
import { exp, lgamma, log } from "../numeric/elementary.ts";

export interface Random {
  /** In [0, 1), 53 bits. */
  uniform(): number;
  /** Between low and high. */
  between(low: number, high: number): number;
  /** Whole number from 0 to count - 1. */
  whole(count: number): number;
  /** Mean 0, standard deviation 1. */
  normal(): number;
  /** Whole number with the given mean and variance. */
  poisson(mean: number): number;
  /** One of the items. */
  pick<T>(items: readonly T[]): T;
}

export function createRandom(seed: number): Random {
  let mixing = seed >>> 0;
  const mix = (): number => {
    mixing = (mixing + 0x9e3779b9) >>> 0;
    let z = mixing;
    z = Math.imul(z ^ (z >>> 16), 0x21f0aaad);
    z = Math.imul(z ^ (z >>> 15), 0x735a2d97);
    return (z ^ (z >>> 15)) >>> 0;
  };
  let a = mix();
  let b = mix();
  let c = mix();
  let d = mix() | 1;

  const next = (): number => {
    const scrambled = Math.imul(b, 5);
    const result = Math.imul((scrambled << 7) | (scrambled >>> 25), 9) >>> 0;
    const shifted = b << 9;
    c ^= a;
    d ^= b;
    b ^= c;
    a ^= d;
    c ^= shifted;
    d = (d << 11) | (d >>> 21);
    return result;
  };
  const uniform = (): number => ((next() >>> 5) * 67108864 + (next() >>> 6)) / 9007199254740992;

  let kept: number | null = null;
  const normal = (): number => {
    if (kept !== null) {
      const value = kept;
      kept = null;
      return value;
    }
    for (;;) {
      const x = 2 * uniform() - 1;
      const y = 2 * uniform() - 1;
      const square = x * x + y * y;
      if (square >= 1 || square === 0) continue;
      const factor = Math.sqrt((-2 * log(square)) / square);
      kept = y * factor;
      return x * factor;
    }
  };

  const poisson = (mean: number): number => {
    if (!(mean > 0)) return 0;
    if (mean < 30) {
      const limit = exp(-mean);
      let product = uniform();
      let count = 0;
      while (product > limit) {
        product *= uniform();
        count += 1;
      }
      return count;
    }
    const spread = 0.931 + 2.53 * Math.sqrt(mean);
    const skew = -0.059 + 0.02483 * spread;
    const inverse = 1.1239 + 1.1328 / (spread - 3.4);
    const inner = 0.9277 - 3.6224 / (spread - 2);
    const logMean = log(mean);
    for (;;) {
      const u = uniform() - 0.5;
      const v = uniform();
      const side = 0.5 - Math.abs(u);
      const count = Math.floor(((2 * skew) / side + spread) * u + mean + 0.43);
      if (side >= 0.07 && v <= inner) return count;
      if (count < 0 || (side < 0.013 && v > side)) continue;
      const accepted = log(v) + log(inverse) - log(skew / (side * side) + spread);
      if (accepted <= count * logMean - mean - lgamma(count + 1)) return count;
    }
  };

  return {
    uniform,
    between: (low, high) => low + (high - low) * uniform(),
    whole: (count) => Math.floor(uniform() * count),
    normal,
    poisson,
    pick: (items) => items[Math.floor(uniform() * items.length)]!,
  };
}
