/**
 * What shines: lamps as sums of spectra (neutral atoms and ions apart), each line's strength taken from the published relative
 * intensity on the scale of its own spectrum and scattered from lamp to lamp; lines that fail to appear; the strongest dimmed by
 * absorption in the lamp itself; light of the room; a second gas; a lamp that is still warming.
 *
 * Wavelengths and relative intensities come from the built-in line list, nothing else does.
 */
import { builtInLineList, linesOf } from "../../../packages/core/src/index.ts";
import type { Random } from "./random.ts";

export interface Light {
  /** Published value, nm in standard air. */
  wavelengthNm: number;
  /** Where this simulated world has it: the published value missed by a draw from its stated uncertainty. */
  trueNm: number;
  strength: number;
  element: string;
  spectrum: string;
  order: number;
  from: "lamp" | "second-gas" | "room" | "unlisted";
}

/** Elements of a lamp and how bright each shines, within the bounds of a factor. */
export interface Lamp {
  elements: string[];
  parts: { element: string; low: number; high: number; ions: number }[];
}

const one = (element: string, ions = 0.1): Lamp => ({
  elements: [element],
  parts: [{ element, low: 1, high: 1, ions }],
});
const mix = (...parts: [string, number, number, number?][]): Lamp => ({
  elements: parts.map(([element]) => element),
  parts: parts.map(([element, low, high, ions]) => ({ element, low, high, ions: ions ?? 0.1 })),
});

export const lamps: Record<string, Lamp> = {
  Hg: one("Hg", 0.05),
  Ne: one("Ne"),
  Ar: one("Ar", 0.3),
  Kr: one("Kr"),
  Xe: one("Xe"),
  He: one("He"),
  Cd: one("Cd", 0.3),
  Zn: one("Zn", 0.3),
  HgAr: mix(["Hg", 1, 1], ["Ar", 0.05, 0.6, 0.05]),
  HgNe: mix(["Hg", 1, 1], ["Ne", 0.1, 1]),
  HgCd: mix(["Hg", 1, 1], ["Cd", 0.2, 1, 0.2]),
  HgCdZn: mix(["Hg", 1, 1], ["Cd", 0.3, 1, 0.2], ["Zn", 0.3, 1, 0.2]),
  HgCdHe: mix(["Hg", 1, 1], ["Cd", 0.3, 1, 0.2], ["He", 0.3, 1]),
  KrAr: mix(["Kr", 0.3, 1], ["Ar", 0.3, 1]),
  XeNe: mix(["Xe", 0.3, 1], ["Ne", 0.3, 1]),
  HeH: mix(["He", 0.5, 1], ["H", 0.3, 1]),
  NaNe: mix(["Na", 0.5, 1.5], ["Ne", 0.3, 1]),
  D2He: mix(["D", 0.5, 1], ["He", 0.3, 1]),
  HgArNe: mix(["Hg", 1, 1], ["Ar", 0.1, 0.8], ["Ne", 0.1, 0.8]),
  HgArNeKrXe: mix(["Hg", 0.5, 1], ["Ar", 0.2, 1], ["Ne", 0.2, 1], ["Kr", 0.2, 1], ["Xe", 0.2, 1]),
};

export interface LampTroubles {
  /** Standard deviation of the logarithm of a line's strength about the published one. */
  scatter: number;
  missing: number;
  isWarming: boolean;
  secondGas: string | null;
  hasRoomLight: boolean;
  unlisted: number;
  /** Share of the second order's light; 0: a filter keeps it out. */
  secondOrder: number;
}

const strongestOf = new Map<string, number>();
/** Largest published intensity of a spectrum, its own scale. */
function strongest(spectrum: string): number {
  let value = strongestOf.get(spectrum);
  if (value === undefined) {
    value = Math.max(...linesOf(builtInLineList, [spectrum]).map((line) => line.relativeIntensity ?? 0), 1);
    strongestOf.set(spectrum, value);
  }
  return value;
}

function linesOfElement(random: Random, element: string, scale: number, ionShare: number, scatter: number): Light[] {
  const lightOfIons = ionShare * random.logBetween(0.2, 3);
  return linesOf(builtInLineList, [element])
    .filter((line) => line.wavelengthAirNm !== null)
    .map((line) => {
      const isIon = !/ I$/.test(line.spectrum);
      const published = (line.relativeIntensity ?? 0.01 * strongest(line.spectrum)) / strongest(line.spectrum);
      const unc = line.uncertaintyNm ?? 0.001;
      return {
        wavelengthNm: line.wavelengthAirNm!,
        trueNm: line.wavelengthAirNm! + unc * random.normal(),
        strength: scale * (isIon ? lightOfIons : 1) * Math.pow(published, 0.8) * Math.exp(scatter * random.normal()),
        element,
        spectrum: line.spectrum,
        order: 1,
        from: "lamp" as const,
      };
    });
}

export function shine(random: Random, lamp: Lamp, troubles: LampTroubles, lowNm: number, highNm: number): Light[] {
  const lights: Light[] = [];
  for (const part of lamp.parts) {
    let scale = random.logBetween(part.low, Math.max(part.low * 1.0001, part.high));
    if (troubles.isWarming) scale *= part.element === "Hg" ? random.logBetween(0.03, 0.3) : random.logBetween(1, 3);
    const lines = linesOfElement(random, part.element, scale, part.ions, troubles.scatter);
    const top = Math.max(...lines.map((line) => line.strength));
    for (const line of lines) {
      if (random.chance(troubles.missing)) continue;
      // Light of the strongest lines is caught again on its way through the lamp.
      if (line.strength > 0.5 * top && random.chance(0.3)) line.strength *= random.between(0.3, 0.8);
      lights.push(line);
    }
  }
  const top = Math.max(
    ...lights.filter((one) => one.wavelengthNm > lowNm && one.wavelengthNm < highNm).map((one) => one.strength),
    0,
  );
  if (troubles.secondGas !== null) {
    const scale = top * random.logBetween(0.03, 0.3);
    lights.push(
      ...linesOfElement(random, troubles.secondGas, scale, 0.05, troubles.scatter).map((one) => ({
        ...one,
        from: "second-gas" as const,
      })),
    );
  }
  if (troubles.hasRoomLight) {
    const scale = top * random.logBetween(0.02, 0.3);
    for (const nm of [404.6565, 435.8335, 546.075, 576.961, 579.067]) {
      const near = linesOf(builtInLineList, ["Hg"], nm - 0.05, nm + 0.05)[0];
      if (near === undefined) continue;
      lights.push({
        wavelengthNm: near.wavelengthAirNm!,
        trueNm: near.wavelengthAirNm!,
        strength: scale * (nm > 570 ? 0.25 : 1) * random.logBetween(0.5, 2),
        element: "Hg",
        spectrum: "Hg I",
        order: 1,
        from: "room",
      });
    }
  }
  for (let k = 0; k < troubles.unlisted; k += 1) {
    const nm = random.between(lowNm, highNm);
    lights.push({
      wavelengthNm: nm,
      trueNm: nm,
      strength: top * random.logBetween(0.003, 0.1),
      element: "?",
      spectrum: "?",
      order: 1,
      from: "unlisted",
    });
  }
  if (troubles.secondOrder > 0) {
    for (const light of [...lights])
      if (light.wavelengthNm > lowNm * 0.45 && light.wavelengthNm * 2 < highNm)
        lights.push({ ...light, strength: light.strength * troubles.secondOrder, order: 2 });
  }
  return lights;
}

/** Broad light of a fluorescent tube's phosphors, at a wavelength. */
export function phosphor(nm: number): number {
  const band = (centre: number, width: number): number => Math.exp(-0.5 * ((nm - centre) / width) ** 2);
  return (
    0.5 * band(452, 22) +
    0.7 * band(543, 4) +
    0.4 * band(489, 5) +
    band(611, 3.5) +
    0.3 * band(590, 8) +
    0.15 * band(630, 4)
  );
}
