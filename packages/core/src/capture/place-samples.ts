/**
 * Axis values as written to sample positions: units, pixels from 0, order, positions that stand twice.
 */
import type { AxisUnit, Refusal } from "../analysis/types.ts";
import { wavelengthFromEnergyNm } from "../light/quantities.ts";
import type { ColumnChoice } from "./choose-columns.ts";
import { refuse } from "./refusal.ts";

/** Above this share of rows (and above `fewRepeats`), positions that stand twice are an axis written too coarsely. */
const repeatedShare = 0.01;
const fewRepeats = 2;

export interface PlacedSamples {
  positions: Float64Array;
  counts: Float64Array;
  wasDescending: boolean;
  /** Axis values of the first and last row in the file's own unit and order. */
  first: number;
  last: number;
  axisColumn: number | null;
  remarks: string[];
}

/**
 * @param written  axis values in file order; null: the samples are counted from 0
 * @param counts   intensities in file order; may be reversed in place
 * @param lineOf   1-based line of a row, for sentences
 */
export function placeSamples(
  written: Float64Array | null,
  counts: Float64Array,
  chosen: Pick<ColumnChoice, "axisKind" | "axisUnit" | "axisColumn">,
  lineOf: (row: number) => number,
): PlacedSamples | Refusal {
  const n = counts.length;
  const remarks: string[] = [];
  let axis = written;
  let axisColumn = chosen.axisColumn;
  if (axis !== null && chosen.axisKind === "pixel" && !arePixels(axis)) {
    remarks.push("The axis column holds no pixel numbers; the samples were counted from 0 instead.");
    axis = null;
    axisColumn = null;
  }
  if (axis === null) {
    const positions = Float64Array.from({ length: n }, (_, i) => i);
    return { positions, counts, wasDescending: false, first: 0, last: n - 1, axisColumn, remarks };
  }
  const first = axis[0]!;
  const last = axis[n - 1]!;
  const merged = mergeRepeats(axis, counts, lineOf);
  if ("outcome" in merged) return merged;
  if (merged.remark !== null) remarks.push(merged.remark);
  const positions = convert(merged.axis, chosen, remarks, lineOf);
  if ("outcome" in positions) return positions;
  const kept = merged.counts;
  const wasDescending = positions.length > 1 && positions[positions.length - 1]! < positions[0]!;
  if (wasDescending) {
    positions.reverse();
    kept.reverse();
    if (chosen.axisUnit !== "eV") remarks.push("The axis runs downwards in the file; the samples were turned round.");
  }
  return { positions, counts: kept, wasDescending, first, last, axisColumn, remarks };
}

/** Whole numbers, or as many samples as numbers from end to end (pixel centres given at halves). */
function arePixels(axis: Float64Array): boolean {
  const n = axis.length;
  if (Math.abs(axis[n - 1]! - axis[0]!) === n - 1) return true;
  for (let i = 0; i < n; i += 1) if (axis[i] !== Math.floor(axis[i]!)) return false;
  return true;
}

/** Strict order, or a refusal with its line; a few neighbouring rows with one position are averaged. */
function mergeRepeats(
  axis: Float64Array,
  counts: Float64Array,
  lineOf: (row: number) => number,
): { axis: Float64Array; counts: Float64Array; remark: string | null } | Refusal {
  const n = axis.length;
  const direction = axis[n - 1]! < axis[0]! ? -1 : 1;
  const repeats: number[] = [];
  for (let i = 1; i < n; i += 1) {
    const step = (axis[i]! - axis[i - 1]!) * direction;
    if (step > 0) continue;
    const line = lineOf(i);
    if (step < 0) {
      return refuse(
        "non-monotonic-axis",
        `The axis turns back at line ${line} (${axis[i - 1]!}, then ${axis[i]!}). Drop one spectrum a file, its axis only rising or only falling.`,
        line,
      );
    }
    repeats.push(i);
  }
  if (repeats.length === 0) return { axis, counts, remark: null };
  const line = lineOf(repeats[0]!);
  if (repeats.length > Math.max(fewRepeats, repeatedShare * n)) {
    return refuse(
      "duplicate-positions",
      `The axis value ${axis[repeats[0]!]!} stands twice (line ${line}), and ${repeats.length - 1} more do. Each sample needs its own place on the axis; export it with more digits.`,
      line,
    );
  }
  const keptAxis = new Float64Array(n - repeats.length);
  const keptCounts = new Float64Array(n - repeats.length);
  let at = -1;
  let sum = 0;
  let numbers = 0;
  for (let i = 0; i < n; i += 1) {
    if (i === 0 || axis[i] !== axis[i - 1]) {
      at += 1;
      sum = 0;
      numbers = 0;
    }
    const value = counts[i]!;
    if (value === value) {
      sum += value;
      numbers += 1;
    }
    keptAxis[at] = axis[i]!;
    keptCounts[at] = numbers > 0 ? sum / numbers : NaN;
  }
  const named = repeats.slice(0, 5).map((i) => `${axis[i]!} (line ${lineOf(i)})`);
  const more = repeats.length > 5 ? ` and ${repeats.length - 5} more` : "";
  return {
    axis: keptAxis,
    counts: keptCounts,
    remark: `Axis values that stand twice: ${named.join(", ")}${more}. Their intensities were averaged.`,
  };
}

/** Positions in file order: nm, pixels from 0, or as written. */
function convert(
  axis: Float64Array,
  chosen: { axisKind: string; axisUnit: AxisUnit },
  remarks: string[],
  lineOf: (row: number) => number,
): Float64Array | Refusal {
  const n = axis.length;
  const positions = Float64Array.from(axis);
  if (chosen.axisKind === "pixel") {
    if (Math.min(axis[0]!, axis[n - 1]!) === 1) {
      remarks.push("The file counts its pixels from 1; Wavekeep counts them from 0.");
      for (let i = 0; i < n; i += 1) positions[i] = axis[i]! - 1;
    }
  } else if (chosen.axisUnit === "Å") for (let i = 0; i < n; i += 1) positions[i] = axis[i]! / 10;
  else if (chosen.axisUnit === "µm") for (let i = 0; i < n; i += 1) positions[i] = axis[i]! * 1000;
  else if (chosen.axisUnit === "eV") {
    for (let i = 0; i < n; i += 1) {
      if (!(axis[i]! > 0)) {
        return refuse("damaged-data", `A photon energy is above 0 eV; line ${lineOf(i)} has ${axis[i]!}.`, lineOf(i));
      }
      positions[i] = wavelengthFromEnergyNm(axis[i]!);
    }
    remarks.push("The axis is photon energy in eV; it was turned into wavelengths in vacuum (hc/E).");
  }
  return positions;
}
