/**
 * Synthetic lists of found lines with known names, for the identification tests: no spectrum, no fit, only what a fit
 * would hand on. Seeded; shares no code with the identification but the table of published lines.
 *
 * The mix (each capture draws independently)
 *   lamp        Hg, Hg+Ar, Ne, Ar, Kr, Xe, Cd, Zn, He, Hg+Cd+Zn, Ne+Ar
 *   instrument  whole-range arrays (200-850, 340-1027, 350-1000 nm), half-range (400-700, 500-950, 240-560), Raman windows
 *               (545-658, 780-960 nm); 1,024, 2,048 or 3,648 px; FWHM 2.5-10 px, at most 2.5 nm; wavelength rising or falling
 *   axis        departs from its chord by up to 4.4 % of the span, third order up to 0.12 %
 *   brightness  published intensity to the power 0.8, times a log-normal factor of 3 (one sigma) per line and lamp, times a
 *               smooth detector response falling to 5 % at an end; strongest line at 60 to 4,000 times the noise
 *   found       lines above 6 times the noise; 4 % of them lost; closer than 0.8 FWHM: merged at their common centroid, as wide as their spread makes them
 *   strays      0.6 a capture on average, any height, anywhere but within half a FWHM of a published line of the lamp
 *               (on top of one nothing could tell them apart); room-light mercury in 5 % of captures of lamps without it
 *   saturation  in a quarter of captures the strongest one to three lines are cut off (flagged), off by 0.06 FWHM
 *   scatter     the stated uncertainty, and 0.01 FWHM more that is not stated
 */
import type { FittedLine, LineList, ReferenceLine } from "../../../packages/core/src/analysis/types.ts";

export interface TrueLine {
  components: ReferenceLine[];
  /** Wavelength that the position really stands for, nm. */
  nm: number;
}
export interface GeneratedCapture {
  elements: string[];
  lines: FittedLine[];
  /** Same order as `lines`; null for strays. */
  truth: (TrueLine | null)[];
  pixels: number;
  fwhmPx: number;
  firstNm: number;
  lastNm: number;
  /** True axis, powers of t = -1..1. */
  axis: number[];
  instrument: string;
}

export class Random {
  private state: number;
  constructor(seed: number) {
    this.state = seed >>> 0;
  }
  uniform(low = 0, high = 1): number {
    this.state = (this.state + 0x9e3779b9) >>> 0;
    let z = this.state;
    z = Math.imul(z ^ (z >>> 16), 0x85ebca6b);
    z = Math.imul(z ^ (z >>> 13), 0xc2b2ae35);
    return low + ((high - low) * ((z ^ (z >>> 16)) >>> 0)) / 4294967296;
  }
  normal(): number {
    return Math.sqrt(-2 * Math.log(1 - this.uniform())) * Math.cos(2 * Math.PI * this.uniform());
  }
  pick<T>(values: readonly T[]): T {
    return values[Math.floor(this.uniform() * values.length)] as T;
  }
  poisson(mean: number): number {
    let count = 0;
    for (let p = this.uniform(); p > Math.exp(-mean); p *= this.uniform()) count += 1;
    return count;
  }
}

export const lamps: string[][] = [
  ["Hg"],
  ["Hg", "Ar"],
  ["Ne"],
  ["Ar"],
  ["Kr"],
  ["Xe"],
  ["Cd"],
  ["Zn"],
  ["He"],
  ["Hg", "Cd", "Zn"],
  ["Ne", "Ar"],
];
const instruments = [
  { name: "200-850", from: 200, to: 850 },
  { name: "340-1027", from: 340, to: 1027 },
  { name: "350-1000", from: 350, to: 1000 },
  { name: "400-700", from: 400, to: 700 },
  { name: "500-950", from: 500, to: 950 },
  { name: "240-560", from: 240, to: 560 },
  { name: "545-658", from: 545, to: 658 },
  { name: "780-960", from: 780, to: 960 },
];

export interface GeneratorOptions {
  lamp?: string[];
  instrument?: string;
  strays?: number;
}

/** One capture; drawn anew until it has at least `fewest` lines of the lamp. */
export function generateCapture(
  list: LineList,
  random: Random,
  fewest: number,
  options: GeneratorOptions = {},
): GeneratedCapture {
  for (;;) {
    const capture = draw(list, random, options);
    if (capture.truth.filter((line) => line !== null).length >= fewest) return capture;
  }
}

/** Hg 434.7506 is a second measurement of 434.7495. */
const isDuplicate = (line: ReferenceLine): boolean => line.element === "Hg" && line.wavelengthAirNm === 434.7506;

function draw(list: LineList, random: Random, options: GeneratorOptions): GeneratedCapture {
  const elements = options.lamp ?? random.pick(lamps);
  const instrument = instruments.find((one) => one.name === options.instrument) ?? random.pick(instruments);
  const pixels = random.pick([1024, 2048, 2048, 3648]);
  const falls = random.uniform() < 0.2;
  const span = instrument.to - instrument.from;
  const middle = (instrument.from + instrument.to) / 2;
  const fwhmPx = random.uniform(2.5, Math.min(10, Math.max(3, (2.5 * pixels) / span)));
  const wide = span > 200 ? 1 : 0.3;
  const bend = random.uniform(-0.022, random.uniform() < 0.3 ? 0.022 : -0.004) * span * wide;
  const cubic = random.uniform(-0.0012, 0.0012) * span * wide;
  const sign = falls ? -1 : 1;
  const straight = (sign * span) / 2;
  // bend T2 + cubic T3 in powers of t
  const axis = [middle - bend, straight - 3 * cubic, 2 * bend, 4 * cubic];
  const nmAt = (t: number): number =>
    (axis[0] as number) + t * ((axis[1] as number) + t * ((axis[2] as number) + t * (axis[3] as number)));
  const tOf = (nm: number): number => {
    let t = (nm - middle) / straight;
    for (let step = 0; step < 60; step++) {
      const slope = (axis[1] as number) + t * (2 * (axis[2] as number) + 3 * t * (axis[3] as number));
      t -= (nmAt(t) - nm) / slope;
    }
    return t;
  };
  const half = (pixels - 1) / 2;
  const low = Math.min(nmAt(-1), nmAt(1));
  const high = Math.max(nmAt(-1), nmAt(1));
  const tilt = random.uniform(-1.5, 1.5);
  const responseAt = (t: number): number =>
    Math.max(0.05, (Math.exp(tilt * t) * (1.1 - t * t)) / Math.exp(Math.abs(tilt)));

  const sources = elements.slice();
  const roomLight = !elements.includes("Hg") && random.uniform() < 0.05;
  const seen = list.lines.filter(
    (line) => sources.includes(line.element) && line.source !== "MEMORY" && !isDuplicate(line),
  );
  const strongest = new Map<string, number>();
  for (const line of seen) {
    strongest.set(line.spectrum, Math.max(strongest.get(line.spectrum) ?? 0, line.relativeIntensity ?? 0));
  }
  const mixing = new Map<string, number>();
  for (const spectrum of strongest.keys()) {
    const ion = !spectrum.endsWith(" I");
    mixing.set(spectrum, Math.exp(random.normal() * 0.8) * (ion ? 0.05 : 1));
  }
  const emitted: { line: ReferenceLine; position: number; height: number; stray: boolean }[] = [];
  for (const line of seen) {
    const nm = line.wavelengthAirNm ?? line.wavelengthVacuumNm;
    if (nm <= low || nm >= high) continue;
    const t = tOf(nm);
    const relative =
      (line.relativeIntensity ?? 0.03 * (strongest.get(line.spectrum) as number)) / (strongest.get(line.spectrum) || 1);
    const height =
      Math.min(1, Math.max(relative, 1e-6)) ** 0.8 *
      Math.exp(Math.log(3) * random.normal()) *
      (mixing.get(line.spectrum) as number) *
      responseAt(t);
    emitted.push({ line, position: half + t * half, height, stray: false });
  }
  const top = Math.max(1e-12, ...emitted.map((one) => one.height));
  const strongestRatio = 60 * Math.exp(random.uniform() * Math.log(4000 / 60));
  for (const one of emitted) one.height *= strongestRatio / top;
  if (roomLight) {
    for (const nm of [404.6565, 435.8335, 546.075, 576.961, 579.067]) {
      const line = list.lines.find(
        (candidate) => candidate.element === "Hg" && Math.abs((candidate.wavelengthAirNm ?? 0) - nm) < 0.001,
      );
      if (line === undefined || nm <= low || nm >= high) continue;
      emitted.push({ line, position: half + tOf(nm) * half, height: random.uniform(8, 60), stray: true });
    }
  }
  emitted.sort((a, b) => a.position - b.position);

  const lines: FittedLine[] = [];
  const truth: (TrueLine | null)[] = [];
  const add = (position: number, height: number, is: TrueLine | null, spreadPx = 0): void => {
    const width = Math.sqrt(fwhmPx * fwhmPx + 5.545 * spreadPx * spreadPx);
    if (height < 6 || position < 3 || position > pixels - 4) return;
    const stated = Math.max(0.004, 0.7 / height) * fwhmPx;
    lines.push({
      position: position + random.normal() * Math.sqrt(stated * stated + 0.0001 * fwhmPx * fwhmPx),
      positionUnc: stated,
      fwhm: width * (1 + 0.02 * random.normal()),
      fwhmUnc: 2 * stated,
      areaCounts: height * fwhmPx * 10.6,
      peakHeightCounts: height * 10,
      signalToNoise: height,
      reducedChiSquare: 1,
      degreesOfFreedom: 10,
      windowFirst: Math.max(0, Math.floor(position - 2 * fwhmPx)),
      windowLast: Math.min(pixels - 1, Math.ceil(position + 2 * fwhmPx)),
      group: lines.length,
      flags: [],
    });
    truth.push(is);
  };
  for (let k = 0; k < emitted.length;) {
    let end = k + 1;
    while (
      end < emitted.length &&
      (emitted[end] as { position: number }).position - (emitted[end - 1] as { position: number }).position <
        0.8 * fwhmPx
    )
      end += 1;
    const members = emitted.slice(k, end);
    k = end;
    const flux = members.reduce((sum, one) => sum + one.height, 0);
    const position = members.reduce((sum, one) => sum + one.height * one.position, 0) / flux;
    const peak = Math.max(...members.map((one) => one.height));
    if (random.uniform() < 0.04) continue;
    const counted = members.filter((one) => one.height >= 0.02 * flux);
    const spread = Math.sqrt(members.reduce((sum, one) => sum + one.height * (one.position - position) ** 2, 0) / flux);
    const isStray = counted.every((one) => one.stray);
    add(
      position,
      peak,
      isStray ? null : { components: counted.map((one) => one.line), nm: nmAt((position - half) / half) },
      spread,
    );
  }
  const strays = options.strays ?? random.poisson(0.6);
  for (let n = 0; n < strays; n++) {
    const position = random.uniform(5, pixels - 6);
    if (emitted.some((one) => one.height > 2 && Math.abs(one.position - position) < 1.2 * fwhmPx)) continue;
    const onALine = seen.some((line) => {
      const nm = line.wavelengthAirNm ?? line.wavelengthVacuumNm;
      return nm > low && nm < high && Math.abs(half + tOf(nm) * half - position) < 0.5 * fwhmPx;
    });
    if (onALine) continue;
    add(position, 6 * Math.exp(random.uniform() * Math.log(strongestRatio / 6)), null);
  }
  const order = lines
    .map((_, k) => k)
    .sort((a, b) => (lines[a] as FittedLine).position - (lines[b] as FittedLine).position);
  const sorted = order.map((k) => lines[k] as FittedLine);
  const sortedTruth = order.map((k) => truth[k] as TrueLine | null);
  if (random.uniform() < 0.25) {
    const cut = sorted
      .slice()
      .sort((a, b) => b.peakHeightCounts - a.peakHeightCounts)
      .slice(0, random.pick([1, 2, 3]));
    const ceiling = Math.min(...cut.map((line) => line.peakHeightCounts));
    for (const line of cut) {
      line.flags.push("saturated");
      line.peakHeightCounts = ceiling;
      line.fwhm *= 1.3;
      line.position += random.normal() * 0.06 * fwhmPx;
    }
  }
  return {
    elements,
    lines: sorted,
    truth: sortedTruth,
    pixels,
    fwhmPx,
    firstNm: nmAt(-1),
    lastNm: nmAt(1),
    axis,
    instrument: instrument.name,
  };
}

/** The true axis in powers of the pixel. */
export function powersOfPixel(capture: GeneratedCapture): number[] {
  const half = (capture.pixels - 1) / 2;
  // t = p/half - 1
  let result = [0];
  for (let k = capture.axis.length - 1; k >= 0; k--) {
    const next = new Array<number>(result.length + 1).fill(0);
    result.forEach((value, j) => {
      next[j] = (next[j] as number) - value;
      next[j + 1] = (next[j + 1] as number) + value / half;
    });
    next[0] = (next[0] as number) + (capture.axis[k] as number);
    result = next;
  }
  return result.slice(0, capture.axis.length);
}
