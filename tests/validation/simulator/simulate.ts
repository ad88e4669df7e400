/**
 * The validation's own simulator of lamp captures: written apart from the core's fitting and from the core's own simulator, so that a
 * mistake in one is not repeated in the other. Invented data throughout.
 *
 * One capture is one seed and one mix. A mix states how often each trouble occurs:
 *
 *   plain     arrays of 1,024-4,096 samples, spans of 60-800 nm, Gaussian lines 2.5-8 samples wide, white shot and read noise, no trouble
 *   main      also scanning instruments, winged, skewed and slit-shaped lines, strengths scattered by a factor of about 4 (two standard
 *             deviations), 5 % of lines missing, room light 8 %, second gas 6 %, warming lamp 15 % of those with mercury and another
 *             element, second order 6 %, hot pixels and spikes 25 %, saturated strongest lines 35 %, smoothing 25 %, resampling 10 %, fringes,
 *             fixed pattern, stray light and fluorescence as is common
 *   hard      the same troubles about twice as often, strengths scattered by a factor of 9, spans down to 40 nm
 *
 * A capture is only given out where at least `leastLines` lamp lines stand clear (20:1, alone within two widths) in it: with fewer nobody
 * can fit an axis, and refusing is right.
 *
 * Position of a line: centre of symmetry, for skewed shapes the first moment, in the unit of the file's axis. An earlier axis is wrong by
 * up to 3 FWHM in offset and 1 % in scale, a range by up to 5 % of the span at each end; both evenly drawn.
 */
import { makeDetector, record, resample, responseAt, runningMean, savitzkyGolay, type Detector } from "./detector.ts";
import { makeInstrument, type Instrument, type InstrumentWish } from "./instrument.ts";
import { lamps, phosphor, shine, type Light } from "./lamps.ts";
import { Random } from "./random.ts";
import { addLine, shapeOf, type Shape, type ShapeKind } from "./shape.ts";
import { pickManner, writeTable } from "./write.ts";

export interface Mix {
  name: "plain" | "main" | "hard";
  wish: InstrumentWish;
  lamps: string[];
  scatter: number;
  leastLines: number;
  chance: Record<
    | "oddShape"
    | "missing"
    | "warming"
    | "secondGas"
    | "roomLight"
    | "secondOrder"
    | "spikes"
    | "saturation"
    | "smoothing"
    | "resampling"
    | "fringes"
    | "hump"
    | "ownAxis",
    number
  >;
  unlisted: number;
  fixedPattern: number;
}

const usualLamps = Object.keys(lamps);
const sizes = [1024, 2048, 2048, 2048, 3648, 4096] as const;

export const mixes: Record<Mix["name"], Mix> = {
  plain: {
    name: "plain",
    wish: { samples: sizes, spanNm: [60, 800], fwhmPx: [2.5, 8], share: { scan: 0, falling: 0.2 } },
    lamps: usualLamps,
    scatter: 0.5,
    leastLines: 6,
    chance: {
      oddShape: 0,
      missing: 0,
      warming: 0,
      secondGas: 0,
      roomLight: 0,
      secondOrder: 0,
      spikes: 0,
      saturation: 0,
      smoothing: 0,
      resampling: 0,
      fringes: 0,
      hump: 0,
      ownAxis: 0,
    },
    unlisted: 0,
    fixedPattern: 0,
  },
  main: {
    name: "main",
    wish: { samples: sizes, spanNm: [50, 900], fwhmPx: [2.2, 9], share: { scan: 0.12, falling: 0.25 } },
    lamps: usualLamps,
    scatter: 0.7,
    leastLines: 5,
    chance: {
      oddShape: 0.4,
      missing: 0.05,
      warming: 0.15,
      secondGas: 0.06,
      roomLight: 0.08,
      secondOrder: 0.06,
      spikes: 0.25,
      saturation: 0.35,
      smoothing: 0.25,
      resampling: 0.1,
      fringes: 0.15,
      hump: 0.2,
      ownAxis: 0.2,
    },
    unlisted: 1,
    fixedPattern: 0.004,
  },
  hard: {
    name: "hard",
    wish: { samples: sizes, spanNm: [40, 950], fwhmPx: [2, 11], share: { scan: 0.15, falling: 0.35 } },
    lamps: usualLamps,
    scatter: 1.1,
    leastLines: 5,
    chance: {
      oddShape: 0.6,
      missing: 0.12,
      warming: 0.3,
      secondGas: 0.15,
      roomLight: 0.15,
      secondOrder: 0.12,
      spikes: 0.5,
      saturation: 0.5,
      smoothing: 0.4,
      resampling: 0.2,
      fringes: 0.3,
      hump: 0.4,
      ownAxis: 0.2,
    },
    unlisted: 3,
    fixedPattern: 0.008,
  },
};

export interface TrueLine {
  /** In the unit of the file's axis. */
  position: number;
  sample: number;
  wavelengthNm: number;
  trueNm: number;
  element: string;
  spectrum: string;
  order: number;
  from: Light["from"];
  /** Height above what lies beneath, counts of the file. */
  height: number;
  signalToNoise: number;
  fwhm: number;
  isSaturated: boolean;
  /** Share of other lines' light at the line's centre, relative to its own. */
  crowding: number;
}

export interface Simulated {
  seed: number;
  mix: Mix["name"];
  name: string;
  text: string;
  lamp: string;
  elements: string[];
  axisKind: "pixel" | "wavelength" | "step";
  /** Distance of two samples in the unit of the file's axis, at the middle. */
  axisPerSample: number;
  /** True wavelength at an axis position. */
  wavelengthAt(position: number): number;
  positionAt(wavelengthNm: number): number;
  first: number;
  last: number;
  samples: number;
  truth: TrueLine[];
  range: { firstNm: number; lastNm: number };
  /** nm in ascending powers of the position, wrong as stated; null where the file's axis is a wavelength: it is itself the earlier axis. */
  earlierCoefficients: number[] | null;
  /** What an earlier axis or the file's own says at a position. */
  earlierAt(position: number): number;
  fullScaleCounts: number;
  scansSummed: number;
  troubles: string[];
  instrument: Instrument;
  detector: Detector;
  shape: Shape;
  shapeKind: ShapeKind;
  fwhmAt(sample: number): number;
  /** White noise of the file's samples, counts squared; null after smoothing or resampling. */
  variance: Float64Array | null;
  counts: Float64Array;
}

export interface SimulateOptions {
  /** Arrays of this many samples only (for tests that must be quick). */
  samples?: number;
  /** Never a wavelength axis in the file: for naming by the lamp's elements alone. */
  onlyUnnamedAxes?: boolean;
}

export function simulate(seed: number, mix: Mix, options: SimulateOptions = {}): Simulated {
  for (let attempt = 0; ; attempt += 1) {
    const made = trySimulate(seed, attempt, mix, options);
    if (made !== null) return made;
  }
}

function pickShape(random: Random, mix: Mix): ShapeKind {
  const side = random.chance(0.5) ? 1 : -1;
  if (!random.chance(mix.chance.oddShape)) return { name: "gaussian", share: 0, side };
  const name = random.pick(["winged", "skewed", "slit", "trapezoid"] as const);
  return {
    name,
    share:
      name === "winged"
        ? random.between(0.1, 0.5)
        : name === "skewed"
          ? random.between(0.1, 0.6)
          : random.between(0.2, 0.9),
    side,
  };
}

function trySimulate(seed: number, attempt: number, mix: Mix, options: SimulateOptions): Simulated | null {
  const random = new Random(seed, attempt);
  const lampName = random.pick(mix.lamps);
  const lamp = lamps[lampName]!;
  const wish =
    options.samples === undefined
      ? mix.wish
      : { ...mix.wish, samples: [options.samples], share: { ...mix.wish.share, scan: 0 } };
  const instrument = makeInstrument(random, wish, 200, 1080);
  const troubles: string[] = [];
  const happens = (name: keyof Mix["chance"]): boolean => {
    const does = random.chance(mix.chance[name]);
    if (does) troubles.push(name);
    return does;
  };

  const lights = shine(
    random,
    lamp,
    {
      scatter: mix.scatter,
      missing: mix.chance.missing,
      isWarming: lamp.elements.includes("Hg") && lamp.elements.length > 1 && happens("warming"),
      secondGas: happens("secondGas")
        ? random.pick(["Ar", "Ne", "Kr", "Xe", "He", "Hg"].filter((gas) => !lamp.elements.includes(gas)))
        : null,
      hasRoomLight: !lamp.elements.includes("Hg") && happens("roomLight"),
      unlisted: random.whole(0, mix.unlisted),
      secondOrder:
        instrument.highNm > 2 * Math.max(200, instrument.lowNm) && happens("secondOrder")
          ? random.between(0.02, 0.1)
          : 0,
    },
    instrument.lowNm,
    instrument.highNm,
  );

  // Light of one scan, mean counts per sample.
  const n = instrument.samples;
  const shapeKind = pickShape(random, mix);
  if (shapeKind.name !== "gaussian") troubles.push(shapeKind.name);
  const shape = shapeOf(shapeKind);
  const best = instrument.lowNm + instrument.spanNm * random.between(0.2, 0.8);
  const width = Math.max(120, instrument.spanNm * random.between(0.4, 1.2));
  const placed = lights
    .map((light) => {
      const seenNm = light.trueNm * light.order;
      return {
        light,
        seenNm,
        sample: instrument.indexAt(seenNm),
        area: light.strength * responseAt(seenNm, best, width),
      };
    })
    .filter((one) => !Number.isNaN(one.sample));
  const light = new Float64Array(n);
  for (const one of placed) addLine(light, shape, one.sample, instrument.fwhmAt(one.sample), one.area);
  const peak = light.reduce((a, b) => Math.max(a, b), 0);
  if (!(peak > 0)) return null;
  const detector = makeDetector(random);
  const isOver = happens("saturation");
  const exposure =
    (isOver ? random.logBetween(1, 3) : random.between(0.25, 0.85)) *
    ((detector.fullScale - detector.darkCounts) / peak);
  for (let i = 0; i < n; i += 1) light[i] = light[i]! * exposure;
  for (const one of placed) one.area *= exposure;

  const total = light.reduce((a, b) => a + b, 0);
  const under = new Float64Array(n);
  const stray = random.between(0, 0.05);
  const humpHeight = happens("hump") ? detector.fullScale * random.logBetween(0.01, 0.15) : 0;
  const hump = { centre: random.between(0, n), width: n * random.between(0.1, 0.4) };
  const roomGlow = troubles.includes("roomLight") ? detector.fullScale * random.logBetween(0.003, 0.05) : 0;
  for (let i = 0; i < n; i += 1) {
    const u = (i - hump.centre) / hump.width;
    under[i] =
      (stray * total) / n +
      humpHeight * Math.exp(-0.5 * u * u) +
      (roomGlow > 0 ? roomGlow * phosphor(instrument.wavelengthAt(i)) : 0);
    light[i] = light[i]! + under[i]!;
  }
  const hasSpikes = happens("spikes");
  const recorded = record(random, light, detector, {
    fixedPattern: mix.fixedPattern,
    fringes: happens("fringes") ? random.between(0.003, 0.02) : 0,
    hotPixels: hasSpikes ? random.whole(0, 4) : 0,
    spikes: hasSpikes ? random.whole(1, 5) : 0,
    strayShare: stray,
    hump: humpHeight,
  });

  // What software does before the file is written.
  let counts = recorded.counts;
  let isWhite = true;
  if (happens("smoothing")) {
    const half = Math.max(1, Math.round((instrument.fwhmMid / 4) * random.between(0.5, 1.2)));
    counts = random.chance(0.6) ? runningMean(counts, half) : savitzkyGolay(counts, half + 1);
    isWhite = false;
  }
  const axis = makeAxis(random, instrument, mix, options, happens);
  if (axis === null) return null;
  let positions = axis.positions;
  if (axis.resampledTo !== null) {
    const order = instrument.isFalling && axis.kind === "wavelength" ? -1 : 1;
    const from = order < 0 ? positions.slice().reverse() : positions;
    const values = order < 0 ? counts.slice().reverse() : counts;
    counts = resample(from, values, axis.resampledTo, random.chance(0.5) ? "linear" : "spline");
    positions = axis.resampledTo;
    isWhite = false;
  }

  // Truth.
  const scale = detector.isSummed ? detector.scans : 1;
  const truth = placed
    .filter((one) => one.sample >= 0 && one.sample <= n - 1)
    .map(({ light: source, seenNm, sample, area }): TrueLine => {
      const fwhm = instrument.fwhmAt(sample);
      const height = (area * shape.peak) / fwhm;
      let crowding = 0;
      for (const other of placed) {
        const distance = Math.abs(other.sample - sample);
        if (other.light !== source && distance < 2.2 * fwhm) crowding += other.area / area;
      }
      const nearest = Math.round(sample);
      let isSaturated = false;
      for (let i = Math.max(0, nearest - 3); i <= Math.min(n - 1, nearest + 3); i += 1)
        isSaturated ||= recorded.isSaturated[i] === 1;
      return {
        position: axis.positionOf(seenNm, sample),
        sample,
        wavelengthNm: source.wavelengthNm,
        trueNm: source.trueNm,
        element: source.element,
        spectrum: source.spectrum,
        order: source.order,
        from: source.from,
        height: height * scale,
        signalToNoise:
          (height * scale) / Math.sqrt(recorded.variance[nearest]! + (mix.fixedPattern * height * scale) ** 2),
        fwhm: fwhm * axis.perSample,
        isSaturated,
        crowding,
      };
    })
    .sort((a, b) => a.sample - b.sample);
  const clear = truth.filter(
    (line) =>
      line.from === "lamp" && line.order === 1 && line.signalToNoise > 20 && line.crowding < 0.1 && !line.isSaturated,
  );
  if (clear.length < mix.leastLines) return null;
  // An axis needs lines over a fair part of the detector.
  if (clear.at(-1)!.sample - clear[0]!.sample < 0.25 * n) return null;

  const manner = pickManner(random, axis.kind === "pixel" && positions[0] === 0);
  const notes = {
    "recorded by": "simulated instrument",
    lamp: lampName,
    "exposure (ms)": String(random.whole(2, 900)),
    "scans averaged": String(detector.isSummed ? 1 : detector.scans),
  };
  const text = writeTable(
    manner,
    { name: axis.heading, values: positions, digits: axis.digits },
    {
      name: "Intensity (counts)",
      values: counts,
      digits: detector.isSummed && isWhite ? 0 : detector.scans > 1 || !isWhite ? 3 : 0,
    },
    notes,
  );
  const edge = (): number => instrument.spanNm * random.between(-0.05, 0.05);
  const isTurned = positions[positions.length - 1]! < positions[0]!;
  const ends = [instrument.wavelengthAt(0), instrument.wavelengthAt(n - 1)] as [number, number];
  // First and last wavelength in ascending order of the axis, as the core sorts its samples.
  const [firstTrue, lastTrue] = isTurned
    ? [ends[1], ends[0]]
    : axis.kind === "wavelength"
      ? [Math.min(...ends), Math.max(...ends)]
      : ends;
  return {
    seed,
    mix: mix.name,
    name: `simulated-${mix.name}-${seed}.txt`,
    text,
    lamp: lampName,
    elements: lamp.elements,
    axisKind: axis.kind,
    axisPerSample: axis.perSample,
    wavelengthAt: axis.wavelengthAt,
    positionAt: (nm) => axis.positionOf(nm, instrument.indexAt(nm)),
    first: Math.min(positions[0]!, positions[positions.length - 1]!),
    last: Math.max(positions[0]!, positions[positions.length - 1]!),
    samples: positions.length,
    truth,
    range: { firstNm: firstTrue + edge(), lastNm: lastTrue + edge() },
    earlierCoefficients: axis.earlierCoefficients,
    earlierAt: axis.earlierAt,
    fullScaleCounts: detector.fullScale,
    scansSummed: detector.isSummed ? detector.scans : 1,
    troubles,
    instrument,
    detector,
    shape,
    shapeKind,
    fwhmAt: instrument.fwhmAt,
    variance: isWhite ? recorded.variance : null,
    counts,
  };
}

interface FileAxis {
  kind: Simulated["axisKind"];
  heading: string;
  digits: number;
  positions: Float64Array;
  resampledTo: Float64Array | null;
  perSample: number;
  positionOf(nm: number, sample: number): number;
  wavelengthAt(position: number): number;
  earlierCoefficients: number[] | null;
  earlierAt(position: number): number;
}

function makeAxis(
  random: Random,
  instrument: Instrument,
  mix: Mix,
  options: SimulateOptions,
  happens: (name: keyof Mix["chance"]) => boolean,
): FileAxis | null {
  const n = instrument.samples;
  const centre = (n - 1) / 2;
  const offset = random.between(-3, 3) * instrument.fwhmMid;
  const stretch = random.between(-0.01, 0.01);
  // A line that stands at sample p is believed to stand where the axis was made for.
  const believed = (sample: number): number =>
    instrument.wavelengthAt(centre + (sample - centre) * (1 + stretch) + offset);
  const stepped = instrument.kind === "scan" && random.chance(0.3);
  const ownAxis = options.onlyUnnamedAxes !== true && !stepped && (instrument.kind === "scan" || happens("ownAxis"));
  if (!ownAxis) {
    const firstStep = stepped ? random.whole(0, 20_000) : 0;
    const stepSize = stepped ? random.pick([1, 2, 5, 10]) : 1;
    const toSample = (position: number): number => (position - firstStep) / stepSize;
    const positions = Float64Array.from({ length: n }, (_, i) => firstStep + i * stepSize);
    const earlier = powersThrough((position) => believed(toSample(position)), positions[0]!, positions[n - 1]!, 4);
    return {
      kind: stepped ? "step" : "pixel",
      heading: stepped ? "Motor steps" : "Pixel",
      digits: 0,
      positions,
      resampledTo: null,
      perSample: stepSize,
      positionOf: (_nm, sample) => firstStep + sample * stepSize,
      wavelengthAt: (position) => instrument.wavelengthAt(toSample(position)),
      earlierCoefficients: earlier,
      earlierAt: (position) => earlier.reduceRight((sum, c) => sum * position + c, 0),
    };
  }
  // The file says wavelengths: true at the day of its own calibration, wrong by as much today.
  const positions = Float64Array.from({ length: n }, (_, i) => believed(i));
  const low = Math.min(positions[0]!, positions[n - 1]!);
  const high = Math.max(positions[0]!, positions[n - 1]!);
  const isMonotonic = positions.every(
    (value, i) => i === 0 || (value - positions[i - 1]!) * (positions[n - 1]! - positions[0]!) > 0,
  );
  if (!isMonotonic || low < 150) return null;
  const sampleOf = (position: number): number => {
    let a = 0;
    let b = n - 1;
    const rising = positions[n - 1]! > positions[0]!;
    for (let i = 0; i < 60; i += 1) {
      const middle = 0.5 * (a + b);
      if (believed(middle) < position === rising) a = middle;
      else b = middle;
    }
    return 0.5 * (a + b);
  };
  const perSample = (high - low) / (n - 1);
  let resampledTo: Float64Array | null = null;
  if (happens("resampling")) {
    const step = perSample * random.between(0.6, 1.1);
    resampledTo = Float64Array.from({ length: Math.floor((high - low) / step) }, (_, i) => low + (i + 0.5) * step);
  }
  return {
    kind: "wavelength",
    heading: "Wavelength (nm)",
    digits: 4,
    positions,
    resampledTo,
    perSample,
    positionOf: (_nm, sample) => believed(sample),
    wavelengthAt: (position) => instrument.wavelengthAt(sampleOf(position)),
    earlierCoefficients: null,
    earlierAt: (position) => position,
  };
}

/** Powers of the position of the polynomial that meets a smooth function at Chebyshev's points. */
function powersThrough(f: (x: number) => number, first: number, last: number, degree: number): number[] {
  const nodes = Array.from({ length: degree + 1 }, (_, k) => {
    const t = Math.cos((Math.PI * (k + 0.5)) / (degree + 1));
    return { t, value: f(first + ((t + 1) / 2) * (last - first)) };
  });
  // Newton's divided differences in t, unrolled into powers of t, then of the position.
  const difference = nodes.map((one) => one.value);
  for (let k = 1; k <= degree; k += 1)
    for (let i = degree; i >= k; i -= 1)
      difference[i] = (difference[i]! - difference[i - 1]!) / (nodes[i]!.t - nodes[i - k]!.t);
  const scale = 2 / (last - first);
  const shift = -1 - scale * first;
  let powers = [difference[degree]!];
  for (let i = degree - 1; i >= 0; i -= 1) {
    // powers * (scale x + shift - t_i) + difference_i
    const next = new Array<number>(powers.length + 1).fill(0);
    powers.forEach((c, k) => {
      next[k] = next[k]! + c * (shift - nodes[i]!.t);
      next[k + 1] = next[k + 1]! + c * scale;
    });
    next[0] = next[0]! + difference[i]!;
    powers = next;
  }
  return powers;
}
