/**
 * The captures of one check brought together: each read, darks averaged and taken off, repeats averaged, exposures told apart, windows of a scan
 * put side by side.
 *
 * Same samples   repeats, or a series of exposures: told by the exposure times (as given, or in the file's header), else by the light itself
 * Other samples  short captures are windows of one scan, each about a line; longer ones are refused, they make checks of their own
 * Dark           taken off where it was recorded with the same exposure; with two exposures of darks, a straight line through them; a dark of
 *                another exposure is left off and said so: lines have a baseline of their own. Hot pixels are learned from darks
 */
import { refuse } from "../capture/refusal.ts";
import { estimateBaseline } from "../spectrum/baseline.ts";
import { median } from "../spectrum/median.ts";
import { findSaturation } from "../spectrum/saturation.ts";
import { darkFor, hotPixelsOf, type Dark } from "./darks.ts";
import { exposureOf, groupByExposure } from "./exposures.ts";
import { meanOf, readCaptures, sameAxis, type ReadFile } from "./read-captures.ts";
import type { CaptureInput, FileFacts, ReadOptions, Refusal, Spectrum } from "./types.ts";

/** Captures of one exposure on one axis. */
export interface CaptureGroup {
  names: string[];
  /** Mean of the repeats, dark taken off. */
  spectrum: Spectrum;
  /** Each repeat by itself, dark taken off. */
  repeats: Spectrum[];
  /** 1 where any repeat was at the detector's ceiling; null for a single capture as recorded, which shows its own. */
  saturated: Uint8Array | null;
  ceilingCounts: number | null;
}

export interface CombinedCaptures extends Omit<CaptureGroup, "names"> {
  outcome: "read";
  files: FileFacts[];
  darkCount: number;
  /** Plain sentences about what was done with the captures. */
  remarks: string[];
  /** Several exposures of one lamp, longest first, with the light of each over that of the first; absent = one exposure. */
  exposures?: { group: CaptureGroup; light: number }[];
  /** Windows of one scan, each file by itself; absent = captures of the whole range. `spectrum` is then the first of them. */
  windows?: CaptureGroup[];
}

/** A capture of another axis than the others is taken for a window of a scan up to this length. */
const longestWindow = 256;

/** @returns the combined spectrum, or the first refusal with the facts of the files read before it */
export function combineCaptures(
  captures: readonly CaptureInput[],
  reading: ReadOptions,
): CombinedCaptures | { outcome: "refused"; refusal: Refusal; files: FileFacts[] } {
  const all = readCaptures(captures, reading);
  if (all.outcome === "refused") return all;
  const { read } = all;
  const files = read.map(({ facts }) => facts);
  const lamps = read.filter(({ input }) => input.part === "lamp");
  const darkFiles = read.filter(({ input }) => input.part === "dark");
  const first = lamps[0];
  if (first === undefined) {
    const refusal = refuse("no-lines", "There is no capture of the lamp yet, only darks. Drop the lamp's capture too.");
    return { outcome: "refused", refusal, files };
  }
  const remarks: string[] = [];
  if (read.some(({ input }) => input.part === "reference")) {
    remarks.push("A blank is of use to absorption bands only; it was left aside.");
  }
  const other = [...lamps, ...darkFiles].find((one) => !sameAxis(first.spectrum, one.spectrum));
  if (other !== undefined) {
    if (darkFiles.length === 0 && lamps.every(({ spectrum }) => spectrum.positions.length <= longestWindow)) {
      const windows = lamps.map((lamp) => groupOf([lamp], [], null));
      return { outcome: "read", ...windows[0]!, files, darkCount: 0, remarks, windows };
    }
    const refusal = refuse(
      "different-axes",
      `${other.input.name} lies on another axis than ${first.input.name}. Captures of one check must have the same samples; make a check of its own for it.`,
    );
    return { outcome: "refused", refusal, files };
  }
  const darks = darkFiles.map((file): Dark => ({ counts: file.spectrum.counts, exposureMs: exposureOf(file) }));
  const hot = darks.length === 0 ? null : hotPixelsOf(darks);
  if (hot !== null && hot.count > 0) {
    remarks.push(
      `${hot.count} hot pixel${hot.count === 1 ? "" : "s"} learned from the dark ${hot.count === 1 ? "was" : "were"} left out.`,
    );
  }
  const series = groupByExposure(lamps);
  if (series.remark !== null) remarks.push(series.remark);
  const groups = series.groups.map(({ members, exposureMs }) => {
    const dark = darkFor(darks, exposureMs);
    if (dark.remark !== null && !remarks.includes(dark.remark)) remarks.push(dark.remark);
    return groupOf(members, dark.counts === null ? [] : [dark.counts], hot?.mask ?? null);
  });
  const longest = groups[0]!;
  const combined: CombinedCaptures = { outcome: "read", ...longest, files, darkCount: darks.length, remarks };
  if (groups.length > 1) {
    combined.exposures = groups.map((group, k) => ({ group, light: series.groups[k]!.light }));
    remarks.push(
      `${groups.length} exposures: each line is taken from the one in which it is strongest and not saturated.`,
    );
  }
  return combined;
}

/** The same with every spectrum changed, samples' order and all. */
export function mapSpectra(
  combined: CombinedCaptures,
  change: (spectrum: Spectrum) => Spectrum,
  order: (mask: Uint8Array) => Uint8Array,
): CombinedCaptures {
  const changed = <T extends Omit<CaptureGroup, "names">>(group: T): T => ({
    ...group,
    spectrum: change(group.spectrum),
    repeats: group.repeats.map(change),
    saturated: group.saturated === null ? null : order(group.saturated),
  });
  const result = changed(combined);
  if (combined.exposures !== undefined) {
    result.exposures = combined.exposures.map(({ group, light }) => ({ group: changed(group), light }));
  }
  if (combined.windows !== undefined) result.windows = combined.windows.map(changed);
  return result;
}

/** Repeats of one exposure to one spectrum; hot pixels become gaps. */
function groupOf(lamps: readonly ReadFile[], dark: readonly Float64Array[], hot: Uint8Array | null): CaptureGroup {
  const names = lamps.map(({ input }) => input.name);
  const first = lamps[0]!.spectrum;
  if (lamps.length === 1 && dark.length === 0 && hot === null) {
    return { names, spectrum: first, repeats: [first], saturated: null, ceilingCounts: null };
  }
  const n = first.positions.length;
  const saturated = new Uint8Array(n);
  let ceilingCounts: number | null = null;
  const repeats = lamps.map(({ spectrum }) => {
    const base = estimateBaseline(spectrum.counts);
    const leastFlat = median(base.baseline) + 30 * base.medianNoiseCounts;
    const found = findSaturation(spectrum.counts, spectrum.fullScaleCounts, spectrum.scansSummed, leastFlat);
    for (let i = 0; i < n; i += 1) if (found.mask[i] === 1) saturated[i] = 1;
    if (found.ceilingCounts !== null)
      ceilingCounts = Math.min(ceilingCounts ?? found.ceilingCounts, found.ceilingCounts);
    if (dark.length === 0 && hot === null) return spectrum;
    const counts = spectrum.counts.map((value, i) => (hot?.[i] === 1 ? NaN : value - (dark[0]?.[i] ?? 0)));
    return { ...spectrum, counts };
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
  return { names, spectrum, repeats, saturated, ceilingCounts };
}
