/** Invented emission scans with known lines: Gaussians on a flat background, photon and read noise, written as text. No code of the core. */
import { makeNormal } from "./band-generator.ts";

export interface ScanLine {
  /** Where the instrument shows it, in the unit of its axis. */
  position: number;
  /** Counts at its top for an exposure of 1. */
  height: number;
}

export interface Scan {
  /** Sample positions in file order. */
  positions: readonly number[];
  lines: readonly ScanLine[];
  fwhm: number;
  exposure?: number;
  background?: number;
  readNoise?: number;
  /** Electrons per count. */
  electronsPerCount?: number;
  /** Counts at which the detector is full. */
  fullScale?: number;
  /** Dark signal by sample, counts. */
  dark?: (index: number) => number;
}

export function scanCounts(scan: Scan, seed: number): number[] {
  const random = makeNormal(seed);
  const { exposure = 1, background = 100, readNoise = 4, electronsPerCount = 4, fullScale = 65535 } = scan;
  return scan.positions.map((x, i) => {
    let light = 0;
    for (const line of scan.lines) {
      const u = (x - line.position) / scan.fwhm;
      if (Math.abs(u) < 5) light += line.height * Math.exp(-4 * Math.LN2 * u * u);
    }
    light *= exposure;
    const noise = Math.sqrt(readNoise * readNoise + light / electronsPerCount);
    const dark = scan.dark?.(i) ?? 0;
    return Math.min(fullScale, Math.round(background + dark + light + noise * random.normal()));
  });
}

export function scanText(scan: Scan, seed: number, heading = "nm,counts", digits = 4, header = ""): string {
  const counts = scanCounts(scan, seed);
  return `${header}${heading}\n${scan.positions.map((x, i) => `${x.toFixed(digits)},${counts[i]}`).join("\n")}\n`;
}

/** Positions from first to last in equal steps, rising or falling. */
export function steps(first: number, last: number, step: number): number[] {
  const count = Math.round(Math.abs(last - first) / step);
  return Array.from({ length: count + 1 }, (_, i) => first + (Math.sign(last - first) || 1) * i * step);
}
