/**
 * Invented absorption spectra with known band positions, written without the core's code: bands are sums of Gaussian or Lorentzian
 * components in absorbance, seen through a triangular slit in transmittance; the true place is the minimum of that transmittance.
 *
 * Centres of the holmium-like spectrum follow the recalled table of `tests/fixtures/bands/absorption-bands.csv`; heights, widths and
 * companions are invented, of the size that such spectra have.
 */

/** Centre nm, height in absorbance, FWHM nm. */
export type Component = readonly [number, number, number];

export const holmiumLike: readonly Component[] = [
  [241, 0.75, 4],
  [249.8, 0.33, 2.2],
  [278.1, 0.62, 2.6],
  [287.1, 0.9, 2.6],
  [289.2, 0.3, 2.5],
  [333.4, 0.25, 2.2],
  [345.5, 0.3, 2.6],
  [359.5, 0.25, 3],
  [361.3, 0.75, 3.4],
  [382, 0.12, 5],
  [385.5, 0.35, 3],
  [388.5, 0.1, 3],
  [416.1, 0.85, 3],
  [420.5, 0.25, 4],
  [448, 0.6, 4],
  [451.3, 1.05, 5],
  [454.5, 0.3, 5],
  [467.8, 0.3, 2.6],
  [480, 0.1, 6],
  [485.3, 0.35, 3.4],
  [536.5, 0.6, 3.4],
  [541, 0.35, 4.5],
  [640.5, 0.35, 3.5],
  [644, 0.2, 5],
  [656, 0.1, 6],
];
export const holmiumCentres = [
  241, 249.8, 278.1, 287.1, 333.4, 345.5, 361.3, 385.5, 416.1, 451.3, 467.8, 485.3, 536.5, 640.5,
];

/** Invented, with the nominal places of didymium glass (Measurement Standards Laboratory of New Zealand, Technical Guide 38). */
export const didymiumLike: readonly Component[] = [
  [440.8, 0.3, 8],
  [481.2, 0.25, 8],
  [512, 0.3, 7],
  [528.8, 0.5, 9],
  [573, 0.9, 9],
  [586, 1.3, 9],
  [685, 0.15, 9],
  [741.2, 0.7, 10],
  [807.1, 1, 12],
];

export interface BandScene {
  components: readonly Component[];
  shape: "gaussian" | "lorentzian";
  bandwidthNm: number;
  stepNm: number;
  firstNm: number;
  lastNm: number;
  /** Standard deviation of the noise of transmittance between the bands. */
  noise: number;
  /** `even`: of T, the same everywhere; `photon`: grows with the root of T; `absorbance`: of A, the same everywhere. */
  noiseKind: "even" | "photon" | "absorbance";
  /** Running mean over so many samples. */
  smoothedOver: number;
  /** Indicated minus true wavelength: offset at 450 nm, and per nm. */
  offsetNm: number;
  scale: number;
  /** Background in absorbance: at 450 nm, and per nm. */
  background: readonly [number, number];
  ordinate: "A" | "T" | "%T";
  decimals: number;
}

export const plainScene: BandScene = {
  components: holmiumLike,
  shape: "gaussian",
  bandwidthNm: 1,
  stepNm: 0.2,
  firstNm: 230,
  lastNm: 680,
  noise: 0.0005,
  noiseKind: "even",
  smoothedOver: 1,
  offsetNm: 0,
  scale: 0,
  background: [0.03, 0],
  ordinate: "A",
  decimals: 4,
};

/** xorshift generator of G. Marsaglia with 32 bits, two of them; normal deviates by Box and Muller. */
export function makeNormal(seed: number): { uniform(): number; normal(): number } {
  let a = (seed * 2654435761 + 1013904223) >>> 0 || 1;
  let b = (seed * 40503 + 2654435769) >>> 0 || 2;
  const uniform = (): number => {
    a ^= a << 13;
    a ^= a >>> 17;
    a ^= a << 5;
    b = (Math.imul(b, 1664525) + 1013904223) >>> 0;
    return (((a >>> 0) ^ b) >>> 0) / 4294967296;
  };
  for (let k = 0; k < 20; k += 1) uniform();
  return { uniform, normal: () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform()) };
}

export function absorbanceAt(scene: BandScene, nm: number): number {
  let sum = scene.background[0] + scene.background[1] * (nm - 450);
  for (const [centre, height, fwhm] of scene.components) {
    const u = (nm - centre) / fwhm;
    if (scene.shape === "gaussian") {
      if (u < 4 && u > -4) sum += height * Math.exp(-4 * Math.LN2 * u * u);
    } else sum += height / (1 + 4 * u * u);
  }
  return sum;
}

/** Transmittance through the slit: triangle of the bandwidth's full width at half height, trapezoidal rule. */
export function transmittanceAt(scene: BandScene, nm: number): number {
  const parts = 16;
  let sum = 0;
  let weights = 0;
  for (let k = 1 - parts; k < parts; k += 1) {
    const weight = 1 - Math.abs(k) / parts;
    sum += weight * Math.pow(10, -absorbanceAt(scene, nm + (k / parts) * scene.bandwidthNm));
    weights += weight;
  }
  return sum / weights;
}

/** True place of the band about a wavelength, or null where it has no minimum of its own. */
export function trueBand(scene: BandScene, nm: number): number | null {
  let best = nm;
  let lowest = Infinity;
  const reach = 1.5;
  for (let x = nm - reach; x <= nm + reach; x += 0.02) {
    const t = transmittanceAt(scene, x);
    if (t < lowest) {
      lowest = t;
      best = x;
    }
  }
  if (best < nm - reach + 0.03 || best > nm + reach - 0.03) return null;
  let low = best - 0.03;
  let high = best + 0.03;
  for (let k = 0; k < 50; k += 1) {
    const a = low + (high - low) / 3;
    const b = high - (high - low) / 3;
    if (transmittanceAt(scene, a) < transmittanceAt(scene, b)) high = b;
    else low = a;
  }
  return (low + high) / 2;
}

export interface RecordedBands {
  wavelengthsNm: number[];
  ordinate: number[];
}

const cache = new Map<string, number[]>();

/** The spectrum without noise, kept: many recordings are made of one scene. */
function cleanTransmittance(scene: BandScene, wavelengthsNm: number[]): number[] {
  const {
    noise: _noise,
    noiseKind: _kind,
    smoothedOver: _over,
    ordinate: _ordinate,
    decimals: _decimals,
    ...rest
  } = scene;
  const key = JSON.stringify([rest, wavelengthsNm[0]]);
  let clean = cache.get(key);
  if (clean === undefined) {
    clean = wavelengthsNm.map((nm) =>
      transmittanceAt(scene, (nm - scene.offsetNm + scene.scale * 450) / (1 + scene.scale)),
    );
    if (cache.size > 200) cache.clear();
    cache.set(key, clean);
  }
  return clean;
}

/** What the instrument writes. `phase` (0 to 1) places the samples within a step. */
export function recordBands(scene: BandScene, seed: number, phase = 0): RecordedBands {
  const random = makeNormal(seed);
  const count = Math.floor((scene.lastNm - scene.firstNm) / scene.stepNm) + 1;
  const wavelengthsNm = Array.from({ length: count }, (_, i) => scene.firstNm + (i + phase) * scene.stepNm);
  const clean = cleanTransmittance(scene, wavelengthsNm);
  // A running mean makes the noise alike; the curve itself is meant as the instrument shows it.
  const reach = scene.smoothedOver;
  const raw = Array.from({ length: count + reach }, () => random.normal());
  const normals = Array.from({ length: count }, (_, i) => {
    let sum = 0;
    for (let k = 0; k < reach; k += 1) sum += raw[i + k]!;
    return sum / Math.sqrt(reach);
  });
  const factor = Math.pow(10, scene.decimals);
  const ordinate = clean.map((t, i) => {
    const z = scene.noise * normals[i]!;
    const noisy =
      scene.noiseKind === "absorbance"
        ? t * Math.pow(10, -z)
        : t + z * (scene.noiseKind === "photon" ? Math.sqrt(t) : 1);
    const value =
      scene.ordinate === "A" ? -Math.log10(Math.max(noisy, 1e-6)) : scene.ordinate === "T" ? noisy : 100 * noisy;
    return Math.round(value * factor) / factor;
  });
  return { wavelengthsNm, ordinate };
}

/** Indicated place of a true wavelength. */
export function indicated(scene: BandScene, nm: number): number {
  return nm + scene.offsetNm + scene.scale * (nm - 450);
}

export function textOf({ wavelengthsNm, ordinate }: RecordedBands, headings: string, digits = 3): string {
  return `${headings}\n${wavelengthsNm.map((nm, i) => `${nm.toFixed(digits)},${ordinate[i]}`).join("\n")}\n`;
}
