/**
 * From light to numbers: response of the pixels, fringes of a thin window, stray light, fluorescence, dark level, shot and read noise,
 * scans summed or averaged, hot pixels, cosmic spikes, the full scale, whole counts; then what software does before a file is written
 * (running mean, Savitzky-Golay, resampling onto an even axis).
 */
import type { Random } from "./random.ts";

export interface Detector {
  bits: 12 | 14 | 16;
  fullScale: number;
  electronsPerCount: number;
  readNoiseCounts: number;
  darkCounts: number;
  scans: number;
  isSummed: boolean;
}

export interface DetectorTroubles {
  fixedPattern: number;
  fringes: number;
  hotPixels: number;
  spikes: number;
  strayShare: number;
  hump: number;
}

export function makeDetector(random: Random): Detector {
  const bits = random.pick([12, 14, 16, 16] as const);
  const fullScale = 2 ** bits - 1;
  return {
    bits,
    fullScale,
    electronsPerCount: (random.logBetween(40_000, 300_000) / fullScale) * 1,
    readNoiseCounts:
      bits === 12 ? random.between(0.8, 3) : bits === 14 ? random.between(1.5, 6) : random.between(4, 25),
    darkCounts: fullScale * random.between(0.01, 0.05),
    scans: random.chance(0.5) ? 1 : random.pick([4, 10, 16, 50]),
    isSummed: random.chance(0.3),
  };
}

/** Response of grating and detector, 1 at its best, falling to both ends. */
export function responseAt(nm: number, bestNm: number, widthNm: number): number {
  const u = (nm - bestNm) / widthNm;
  return 0.06 + 0.94 / (1 + u * u * (1 + 0.5 * u * u));
}

export interface Recorded {
  counts: Float64Array;
  /** Variance of each sample's white noise before any smoothing, counts squared. */
  variance: Float64Array;
  isSaturated: Uint8Array;
  ceiling: number;
}

/** @param light mean counts of one scan above the dark level */
export function record(random: Random, light: Float64Array, detector: Detector, troubles: DetectorTroubles): Recorded {
  const n = light.length;
  const fringe = { period: random.between(8, 60), phase: random.between(0, 6.28) };
  const counts = new Float64Array(n);
  const variance = new Float64Array(n);
  const isSaturated = new Uint8Array(n);
  const hot = new Map<number, number>();
  for (let k = 0; k < troubles.hotPixels; k += 1)
    hot.set(random.whole(0, n - 1), detector.fullScale * random.logBetween(0.01, 0.5));
  for (let i = 0; i < n; i += 1) {
    const gain = 1 + troubles.fixedPattern * random.normal();
    const ripple = 1 + troubles.fringes * Math.sin((2 * Math.PI * i) / fringe.period + fringe.phase);
    const mean = light[i]! * gain * ripple + (hot.get(i) ?? 0);
    const readVariance = detector.readNoiseCounts ** 2 + 1 / 12;
    let sum = 0;
    for (let scan = 0; scan < Math.min(detector.scans, 4); scan += 1) {
      // More than four scans are drawn as four with the noise of all.
      const share = detector.scans / Math.min(detector.scans, 4);
      const electrons = random.poisson(Math.max(0, mean) * detector.electronsPerCount * share) / share;
      let value =
        electrons / detector.electronsPerCount +
        detector.darkCounts +
        (detector.readNoiseCounts / Math.sqrt(share)) * random.normal();
      if (value >= detector.fullScale) {
        value = detector.fullScale;
        isSaturated[i] = 1;
      }
      sum += (share === 1 ? Math.round(value) : Math.round(value * share) / share) * share;
    }
    const scale = detector.isSummed ? 1 : 1 / detector.scans;
    counts[i] = sum * scale;
    variance[i] = scale * scale * detector.scans * (Math.max(0, mean) / detector.electronsPerCount + readVariance);
  }
  for (let k = 0; k < troubles.spikes; k += 1) {
    const i = random.whole(0, n - 2);
    const height = detector.fullScale * random.logBetween(0.005, 0.4) * (detector.isSummed ? 1 : 1 / detector.scans);
    counts[i] = counts[i]! + height;
    if (random.chance(0.3)) counts[i + 1] = counts[i + 1]! + height * random.between(0.1, 0.6);
  }
  return { counts, variance, isSaturated, ceiling: detector.fullScale * (detector.isSummed ? detector.scans : 1) };
}

/** Running mean over 2 half + 1 samples; the ends keep fewer. */
export function runningMean(values: Float64Array, half: number): Float64Array {
  return values.map((_, i) => {
    const from = Math.max(0, i - half);
    const to = Math.min(values.length - 1, i + half);
    let sum = 0;
    for (let k = from; k <= to; k += 1) sum += values[k]!;
    return sum / (to - from + 1);
  });
}

/** Quadratic Savitzky-Golay over 2 half + 1 samples by its closed form; the ends are left as they are. */
export function savitzkyGolay(values: Float64Array, half: number): Float64Array {
  const m = half;
  const norm = ((2 * m - 1) * (2 * m + 1) * (2 * m + 3)) / 3;
  return values.map((value, i) => {
    if (i < m || i >= values.length - m) return value;
    let sum = 0;
    for (let k = -m; k <= m; k += 1) sum += ((3 * m * m + 3 * m - 1 - 5 * k * k) / norm) * values[i + k]!;
    return sum;
  });
}

/** Values at `at` (ascending) of samples that stand at `from` (ascending): straight between them, or a natural cubic spline. */
export function resample(
  from: Float64Array,
  values: Float64Array,
  at: Float64Array,
  kind: "linear" | "spline",
): Float64Array {
  const n = from.length;
  const second = new Float64Array(n);
  if (kind === "spline") {
    const work = new Float64Array(n);
    for (let i = 1; i < n - 1; i += 1) {
      const ratio = (from[i]! - from[i - 1]!) / (from[i + 1]! - from[i - 1]!);
      const p = ratio * second[i - 1]! + 2;
      second[i] = (ratio - 1) / p;
      const slope =
        (values[i + 1]! - values[i]!) / (from[i + 1]! - from[i]!) -
        (values[i]! - values[i - 1]!) / (from[i]! - from[i - 1]!);
      work[i] = ((6 * slope) / (from[i + 1]! - from[i - 1]!) - ratio * work[i - 1]!) / p;
    }
    second[n - 1] = 0;
    for (let i = n - 2; i >= 0; i -= 1) second[i] = second[i]! * second[i + 1]! + work[i]!;
  }
  let k = 0;
  return at.map((x) => {
    while (k < n - 2 && from[k + 1]! < x) k += 1;
    const width = from[k + 1]! - from[k]!;
    const b = (x - from[k]!) / width;
    const a = 1 - b;
    return (
      a * values[k]! +
      b * values[k + 1]! +
      (((a * a * a - a) * second[k]! + (b * b * b - b) * second[k + 1]!) * width * width) / 6
    );
  });
}
