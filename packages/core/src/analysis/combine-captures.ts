/**
 * The captures of one check to one spectrum: each read, darks averaged and taken off, repeats averaged. All must lie on one axis.
 */
import { readCapture } from "../capture/read-capture.ts";
import { refuse } from "../capture/refusal.ts";
import { estimateBaseline } from "../spectrum/baseline.ts";
import { median } from "../spectrum/median.ts";
import { findSaturation } from "../spectrum/saturation.ts";
import type { CaptureInput, FileFacts, ReadOptions, Refusal, Spectrum } from "./types.ts";

export interface CombinedCaptures {
  outcome: "read";
  /** Mean of the repeats, dark taken off. */
  spectrum: Spectrum;
  /** Each repeat by itself, dark taken off. */
  repeats: Spectrum[];
  /** 1 where any repeat was at the detector's ceiling; null for a single capture as recorded, which shows its own. */
  saturated: Uint8Array | null;
  ceilingCounts: number | null;
  files: FileFacts[];
  darkCount: number;
}

/** Two axes are one when no sample differs by more than this share of a step. */
const sameAxisShare = 0.01;

interface Read {
  input: CaptureInput;
  spectrum: Spectrum;
}

/** @returns the combined spectrum, or the first refusal with the facts of the files read before it */
export function combineCaptures(
  captures: readonly CaptureInput[],
  reading: ReadOptions,
): CombinedCaptures | { outcome: "refused"; refusal: Refusal; files: FileFacts[] } {
  const files: FileFacts[] = [];
  const read: Read[] = [];
  for (const input of captures) {
    const result = readCapture(input.bytes, input.name, reading);
    if (result.outcome === "refused") {
      const reason = captures.length > 1 ? `${input.name}: ${result.reason}` : result.reason;
      return { outcome: "refused", refusal: { ...result, reason }, files };
    }
    files.push({ ...result.facts, sha256: input.sha256 });
    read.push({ input, spectrum: result.spectrum });
  }
  const lamps = read.filter(({ input }) => input.part === "lamp");
  const darks = read.filter(({ input }) => input.part === "dark");
  const first = lamps[0];
  if (first === undefined) {
    const refusal = refuse("no-lines", "There is no capture of the lamp yet, only darks. Drop the lamp's capture too.");
    return { outcome: "refused", refusal, files };
  }
  for (const other of read) {
    if (sameAxis(first.spectrum, other.spectrum)) continue;
    const refusal = refuse(
      "different-axes",
      `${other.input.name} lies on another axis than ${first.input.name}. Captures of one check must have the same samples; make a check of its own for it.`,
    );
    return { outcome: "refused", refusal, files };
  }
  return { outcome: "read", ...average(lamps, darks), files, darkCount: darks.length };
}

function sameAxis(a: Spectrum, b: Spectrum): boolean {
  const n = a.positions.length;
  if (a.axisKind !== b.axisKind || n !== b.positions.length) return false;
  for (let i = 0; i < n; i += 1) {
    const step = i + 1 < n ? a.positions[i + 1]! - a.positions[i]! : a.positions[i]! - a.positions[i - 1]!;
    if (Math.abs(a.positions[i]! - b.positions[i]!) > sameAxisShare * step) return false;
  }
  return true;
}

function average(
  lamps: Read[],
  darks: Read[],
): Pick<CombinedCaptures, "spectrum" | "repeats" | "saturated" | "ceilingCounts"> {
  const first = lamps[0]!.spectrum;
  if (lamps.length === 1 && darks.length === 0) {
    return { spectrum: first, repeats: [first], saturated: null, ceilingCounts: null };
  }
  const n = first.positions.length;
  const dark = meanOf(
    darks.map(({ spectrum }) => spectrum.counts),
    n,
  );
  const saturated = new Uint8Array(n);
  let ceilingCounts: number | null = null;
  const repeats = lamps.map(({ spectrum }) => {
    const base = estimateBaseline(spectrum.counts);
    const leastFlat = median(base.baseline) + 30 * base.medianNoiseCounts;
    const found = findSaturation(spectrum.counts, spectrum.fullScaleCounts, spectrum.scansSummed, leastFlat);
    for (let i = 0; i < n; i += 1) if (found.mask[i] === 1) saturated[i] = 1;
    if (found.ceilingCounts !== null)
      ceilingCounts = Math.min(ceilingCounts ?? found.ceilingCounts, found.ceilingCounts);
    if (darks.length === 0) return spectrum;
    return { ...spectrum, counts: spectrum.counts.map((value, i) => value - dark[i]!) };
  });
  const spectrum =
    repeats.length === 1
      ? repeats[0]!
      : {
          ...first,
          counts: meanOf(
            repeats.map((one) => one.counts),
            n,
          ),
        };
  return { spectrum, repeats, saturated, ceilingCounts };
}

/** Mean of several captures sample by sample, over those that have a number there; NaN where none has. */
function meanOf(captures: Float64Array[], n: number): Float64Array {
  const mean = new Float64Array(n);
  for (let i = 0; i < n; i += 1) {
    let sum = 0;
    let count = 0;
    for (const counts of captures) {
      const value = counts[i]!;
      if (value === value) {
        sum += value;
        count += 1;
      }
    }
    mean[i] = count > 0 ? sum / count : NaN;
  }
  return mean;
}
