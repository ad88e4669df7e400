/**
 * Seeded random numbers of the validation's own simulator.
 *
 * Generator  sfc32 (three words of state and a counter), seeded through a multiply-xor hash of the seed and a stream number
 * Normal     Box-Muller
 * Poisson    multiplication below 40; above, a rounded normal with the skewness corrected to first order
 */
export class Random {
  private a: number;
  private b: number;
  private c: number;
  private counter = 1;
  private spare = Number.NaN;

  constructor(seed: number, stream = 0) {
    const hash = (value: number): number => {
      let h = value | 0;
      h = Math.imul(h ^ (h >>> 16), 0x45d9f3b);
      h = Math.imul(h ^ (h >>> 13), 0x2c1b3c6d);
      return (h ^ (h >>> 16)) >>> 0;
    };
    this.a = hash(seed + 0x51ed270b);
    this.b = hash(stream * 7919 + 0x2545f491);
    this.c = hash(this.a ^ Math.imul(seed, 0x9e3779b1));
    for (let i = 0; i < 15; i += 1) this.word();
  }

  private word(): number {
    const sum = (this.a + this.b + this.counter) | 0;
    this.counter = (this.counter + 1) | 0;
    this.a = this.b ^ (this.b >>> 9);
    this.b = (this.c + (this.c << 3)) | 0;
    this.c = ((this.c << 21) | (this.c >>> 11)) + sum;
    this.c |= 0;
    return sum >>> 0;
  }

  /** In (0, 1). */
  unit(): number {
    return (this.word() + 0.5) / 4294967296;
  }

  between(low: number, high: number): number {
    return low + (high - low) * this.unit();
  }

  /** Evenly in the logarithm. */
  logBetween(low: number, high: number): number {
    return low * Math.exp(Math.log(high / low) * this.unit());
  }

  /** Whole number, both ends possible. */
  whole(low: number, high: number): number {
    return low + Math.floor((high - low + 1) * this.unit());
  }

  chance(probability: number): boolean {
    return this.unit() < probability;
  }

  pick<T>(items: readonly T[]): T {
    return items[Math.floor(this.unit() * items.length)]!;
  }

  normal(): number {
    if (!Number.isNaN(this.spare)) {
      const value = this.spare;
      this.spare = Number.NaN;
      return value;
    }
    const radius = Math.sqrt(-2 * Math.log(this.unit()));
    const angle = 2 * Math.PI * this.unit();
    this.spare = radius * Math.sin(angle);
    return radius * Math.cos(angle);
  }

  poisson(mean: number): number {
    if (!(mean > 0)) return 0;
    if (mean > 40) {
      const z = this.normal();
      return Math.max(0, Math.round(mean + Math.sqrt(mean) * z + (z * z - 1) / 6));
    }
    const limit = Math.exp(-mean);
    let count = 0;
    for (let product = this.unit(); product > limit; product *= this.unit()) count += 1;
    return count;
  }
}
