/**
 * The last steps that all kinds of files share: positions, the signal's direction, full scale and summed scans, and the facts shown.
 */
import type { FileFacts, ReadCapture, ReadOptions, Spectrum } from "../analysis/types.ts";
import type { ColumnChoice } from "./choose-columns.ts";
import { isPhotometric, readDetector } from "./headings.ts";
import { placeSamples } from "./place-samples.ts";
import { refuse } from "./refusal.ts";
import { pointsDown, turnOver } from "./signal-direction.ts";

/** Fewer samples than this hold no line with a baseline beside it. */
const fewestRows = 8;
/** Counts above a ceiling from the metadata by more than this share show that the ceiling means something else. */
const mostAboveCeiling = 0.01;

export interface UnfinishedCapture {
  name: string;
  /** Axis values in file order; null: the samples are counted. */
  axis: Float64Array | null;
  counts: Float64Array;
  chosen: ColumnChoice;
  options: ReadOptions;
  metadata: Record<string, string>;
  remarks: string[];
  /** 1-based line of a row. */
  lineOf: (row: number) => number;
  facts: Pick<
    FileFacts,
    "missing" | "delimiter" | "decimal" | "encoding" | "headerLines" | "columns" | "damagedLines" | "tables" | "format"
  >;
}

export function finishCapture(input: UnfinishedCapture): ReadCapture {
  const { name, axis, counts, chosen, options, metadata, remarks, lineOf, facts } = input;
  const n = counts.length;
  if (n < fewestRows) {
    return refuse(
      "too-few-rows",
      `The file holds ${n} row${n === 1 ? "" : "s"} of numbers; a capture needs at least ${fewestRows}.${n > 0 && facts.columns.length >= fewestRows ? " Positions and intensities seem to stand in rows; export them as columns." : ""}`,
      n === 0 ? null : lineOf(0),
    );
  }
  const { sum, max, numbers } = sumUp(counts);
  if (numbers === 0) {
    return refuse("no-numbers", "The intensity column holds no number at all. Choose another column.");
  }
  const placed = placeSamples(axis, counts, chosen, lineOf);
  if ("outcome" in placed) return placed;
  remarks.push(...placed.remarks);

  const heading = facts.columns[chosen.intensityColumn] ?? "";
  const inverted = options.inverted ?? (!isPhotometric(heading) && pointsDown(placed.counts));
  if (inverted && options.inverted === undefined) {
    remarks.push("The lines point down in the file; the signal was turned over. It can be kept as written.");
  }

  const detector = readDetector(metadata);
  const scansSummed = options.scansSummed ?? detector.scansSummed ?? 1;
  let fullScaleCounts = options.fullScaleCounts ?? detector.fullScaleCounts;
  if (options.scansSummed === undefined && detector.scansSummed !== null && detector.scansSummed > 1) {
    remarks.push(`The file says that ${detector.scansSummed} scans were summed.`);
  }
  if (options.fullScaleCounts === undefined && fullScaleCounts !== null) {
    if (max > fullScaleCounts * scansSummed * (1 + mostAboveCeiling)) {
      remarks.push(
        `The file's header gives ${fullScaleCounts} as the detector's full scale, but counts reach ${max}; it was not used. State full scale and summed scans.`,
      );
      fullScaleCounts = null;
    } else remarks.push(`Full scale of the detector, from the file's header: ${fullScaleCounts} counts.`);
  }
  const spectrum: Spectrum = {
    axisKind: chosen.axisKind,
    axisUnit: chosen.axisKind === "wavelength" ? "nm" : chosen.axisUnit,
    wasDescending: placed.wasDescending,
    positions: placed.positions,
    counts: inverted ? turnOver(placed.counts) : Float64Array.from(placed.counts),
    fullScaleCounts,
    scansSummed,
  };
  return {
    outcome: "read",
    spectrum,
    facts: {
      name,
      sha256: null,
      rows: n,
      axis: chosen.axisKind,
      axisUnit: chosen.axisUnit,
      first: placed.first,
      last: placed.last,
      intensitySum: sum,
      intensityMax: max,
      metadata,
      ...facts,
      axisColumn: placed.axisColumn,
      intensityColumn: chosen.intensityColumn,
      remarks,
      ...(inverted ? { inverted } : {}),
    },
  };
}

/** Sum (with Neumaier's compensation: that of the numbers as written) and largest of the numbers that are there. */
function sumUp(counts: Float64Array): { sum: number; max: number; numbers: number } {
  let sum = 0;
  let lost = 0;
  let max = Number.NEGATIVE_INFINITY;
  let numbers = 0;
  for (let i = 0; i < counts.length; i += 1) {
    const value = counts[i]!;
    if (value !== value) continue;
    numbers += 1;
    const next = sum + value;
    lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
    sum = next;
    if (value > max) max = value;
  }
  return { sum: sum + lost, max, numbers };
}
