/**
 * Exposure series: which captures of one lamp were exposed alike, and how much more light one has than another.
 *
 * Time     as the caller says, else from the file's header ("Integration time: 100 ms", "Exposure [s]; 0.5"), times the scans summed
 * Light    ratio of two captures, the slope of one's counts against the other's over all samples that neither has full (median of the
 *          ratios of what stands above the baselines). Where both are known and differ, that is said: a detector that is not linear, or
 *          a lamp that was not steady
 */
import { estimateBaseline } from "../spectrum/baseline.ts";
import { findSaturation } from "../spectrum/saturation.ts";
import { median } from "../spectrum/median.ts";
import { isSameExposure } from "./darks.ts";
import type { ReadFile } from "./read-captures.ts";
import type { Spectrum } from "./types.ts";

/** Without exposure times, captures whose light differs by less than this factor are repeats. */
const sameLightFactor = 1.25;
/** Light and exposure time may differ by so much before it is said. */
const disagreeShare = 0.15;
const brightSigmas = 15;
const leastBright = 5;

const timeKeys = /(?:exposure|integration|int\.?)[ _-]*(?:time|t\b)?|^(?:shutter|gate)[ _-]*(?:time|speed)?$/i;

/** Milliseconds, of one scan times the scans summed; null where nothing says it. */
export function exposureOf({ input, facts, spectrum }: ReadFile): number | null {
  const once = input.exposureMs ?? exposureInMetadata(facts.metadata);
  return once === null ? null : once * spectrum.scansSummed;
}

/** Exposure time of one scan, ms, from header lines; null where none says it, or none says a unit. */
function exposureInMetadata(metadata: Record<string, string>): number | null {
  for (const [key, value] of Object.entries(metadata)) {
    if (!timeKeys.test(key)) continue;
    const number = /[-+]?\d+(?:[.,]\d+)?(?:e[-+]?\d+)?/i.exec(value);
    if (number === null) continue;
    const unit = /\b(?:(ms|msec|millisec\w*)|([uµμ]s|usec|microsec\w*)|(s|sec|seconds?))\b/i.exec(
      `${value.slice(number.index + number[0].length)} ${key}`,
    );
    const size = Number(number[0].replace(",", "."));
    if (unit === null || !(size > 0)) continue;
    return unit[1] !== undefined ? size : unit[2] !== undefined ? size / 1000 : size * 1000;
  }
  return null;
}

export interface ExposureGroup {
  members: ReadFile[];
  exposureMs: number | null;
  /** Light over that of the first group. */
  light: number;
}

/** Groups of repeats, most light first. */
export function groupByExposure(lamps: readonly ReadFile[]): { groups: ExposureGroup[]; remark: string | null } {
  const times = lamps.map(exposureOf);
  const areKnown = times.every((time) => time !== null);
  if (lamps.length === 1) return { groups: [{ members: [...lamps], exposureMs: times[0]!, light: 1 }], remark: null };
  const known = lamps.map((lamp, k) => (areKnown ? times[k]! : 1 / lightRatio(lamps[0]!.spectrum, lamp.spectrum)));
  const isSame = (a: number, b: number): boolean =>
    areKnown ? isSameExposure(a, b) : Math.max(a, b) < sameLightFactor * Math.min(a, b);
  const groups: { members: ReadFile[]; size: number }[] = [];
  const order = lamps.map((_, k) => k).sort((a, b) => known[b]! - known[a]! || a - b);
  for (const k of order) {
    const group = groups.find((one) => isSame(one.size, known[k]!));
    if (group === undefined) groups.push({ members: [lamps[k]!], size: known[k]! });
    else group.members.push(lamps[k]!);
  }
  const longest = groups[0]!;
  let remark: string | null = null;
  const result = groups.map(({ members, size }): ExposureGroup => {
    const seen = groups.length === 1 ? 1 : 1 / lightRatio(longest.members[0]!.spectrum, members[0]!.spectrum);
    const stated = size / longest.size;
    if (areKnown && Math.abs(seen / stated - 1) > disagreeShare) {
      remark = `${members[0]!.input.name} holds ${seen.toPrecision(2)} of the light of ${longest.members[0]!.input.name}, by its exposure it should be ${stated.toPrecision(2)}: was the lamp steady, and is the detector linear?`;
    }
    return { members, exposureMs: areKnown ? size : null, light: seen };
  });
  return { groups: result, remark };
}

/** Light of a over that of b; 1 where too few bright samples are common to both. */
function lightRatio(a: Spectrum, b: Spectrum): number {
  if (a === b) return 1;
  const [first, second] = [aboveBaseline(a), aboveBaseline(b)];
  const ratios: number[] = [];
  for (let i = 0; i < a.counts.length; i += 1) {
    if (first.full[i] === 1 || second.full[i] === 1) continue;
    const x = first.net[i]!;
    const y = second.net[i]!;
    // Bright in either and seen in the other: asking both to be bright would leave out what a short exposure hardly shows.
    if (
      x > 3 * first.noise &&
      y > 3 * second.noise &&
      (x > brightSigmas * first.noise || y > brightSigmas * second.noise)
    ) {
      ratios.push(x / y);
    }
  }
  return ratios.length < leastBright ? 1 : median(ratios);
}

function aboveBaseline(spectrum: Spectrum): { net: Float64Array; noise: number; full: Uint8Array } {
  const { baseline, medianNoiseCounts } = estimateBaseline(spectrum.counts);
  const leastFlat = median(baseline) + 30 * medianNoiseCounts;
  const { mask } = findSaturation(spectrum.counts, spectrum.fullScaleCounts, spectrum.scansSummed, leastFlat);
  const full = mask.slice();
  // Charge that spills over stands beside what is full.
  for (let i = 0; i < mask.length; i += 1) {
    if (mask[i] !== 1) continue;
    for (let k = Math.max(0, i - 2); k <= Math.min(mask.length - 1, i + 2); k += 1) full[k] = 1;
  }
  return { net: spectrum.counts.map((value, i) => value - baseline[i]!), noise: medianNoiseCounts, full };
}
