/**
 * The demo lab's lamps as lights: which published lines each one sends out, and how strongly.
 *
 * Demo data, invented: the wavelengths are the line library's, the strengths are made up in the manner of the lamps
 * (areas in counts x px at full exposure, before the scatter from lamp to lamp that the simulator adds).
 */
import { builtInLineList, lineWavelengthNm, type ReferenceLine } from "@wavekeep/core";

export interface LampLine {
  line: ReferenceLine;
  wavelengthNm: number;
  /** Share of the strongest line. */
  strength: number;
}

/** Air wavelength (vacuum below 200 nm) to strength; matched to the library within 0.002 nm of these rounded figures. */
const mercury: Record<string, number> = {
  "253.652": 1,
  "296.728": 0.055,
  "302.15": 0.035,
  "312.567": 0.06,
  "313.156": 0.05,
  "313.184": 0.06,
  "334.148": 0.03,
  "365.016": 0.42,
  "365.484": 0.08,
  "366.328": 0.045,
  "404.656": 0.4,
  "407.784": 0.05,
  "435.834": 0.82,
  "546.075": 0.95,
  "576.961": 0.16,
  "579.067": 0.165,
};
const argon: Record<string, number> = {
  "696.543": 0.2,
  "706.722": 0.13,
  "714.704": 0.04,
  "727.294": 0.08,
  "738.398": 0.15,
  "750.387": 0.24,
  "751.465": 0.15,
  "763.511": 0.36,
  "772.376": 0.09,
  "772.421": 0.09,
  "794.818": 0.15,
  "800.616": 0.11,
  "801.479": 0.12,
  "810.369": 0.17,
  "811.531": 0.36,
  "826.452": 0.16,
  "840.821": 0.15,
  "842.465": 0.2,
  "852.144": 0.09,
  "866.794": 0.05,
  "912.297": 0.22,
  "922.45": 0.1,
  "965.779": 0.12,
};
const neon: Record<string, number> = {
  "540.056": 0.2,
  "576.442": 0.1,
  "582.016": 0.08,
  "585.249": 0.6,
  "588.19": 0.35,
  "594.483": 0.42,
  "597.553": 0.12,
  "603": 0.28,
  "607.434": 0.42,
  "609.616": 0.55,
  "612.845": 0.06,
  "614.306": 0.75,
  "616.359": 0.35,
  "621.728": 0.25,
  "626.65": 0.5,
  "630.479": 0.2,
  "633.443": 0.62,
  "638.299": 0.7,
  "640.225": 1,
  "650.653": 0.66,
  "653.288": 0.3,
  "659.895": 0.36,
  "667.828": 0.5,
  "671.704": 0.3,
  "692.947": 0.45,
  "703.241": 0.8,
  "717.394": 0.18,
};
const deuterium: Record<string, number> = { "486.001": 0.45, "656.1": 1 };

const tables: Record<string, Record<string, number>> = { Hg: mercury, Ar: argon, Ne: neon, D: deuterium };

/** Lines that a lamp of these elements sends into a range. */
export function lampLines(elements: readonly string[], firstNm: number, lastNm: number): LampLine[] {
  const found: LampLine[] = [];
  for (const element of elements) {
    for (const [text, strength] of Object.entries(tables[element] ?? {})) {
      const rounded = Number(text);
      if (rounded < firstNm || rounded > lastNm) continue;
      const line = nearestLine(element, rounded);
      found.push({ line, wavelengthNm: lineWavelengthNm(line).wavelengthNm, strength });
    }
  }
  return found.sort((a, b) => a.wavelengthNm - b.wavelengthNm);
}

function nearestLine(element: string, roundedNm: number): ReferenceLine {
  const near = builtInLineList.lines.filter(
    (line) => line.element === element && Math.abs(lineWavelengthNm(line).wavelengthNm - roundedNm) < 0.002,
  );
  // Two entries for one line (an older and a newer measurement) stand within a picometre: the one with an intensity is the lamp's.
  const line = near.find((candidate) => candidate.relativeIntensity !== null) ?? near[0];
  if (!line) throw new Error(`The line library has no ${element} line at ${roundedNm} nm.`);
  return line;
}
