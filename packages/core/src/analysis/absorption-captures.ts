/**
 * The captures of an absorption check to one spectrum of absorbance or transmittance: repeats averaged, counts divided by those of a blank.
 *
 * The ordinate is what a heading says, else the header, else what the numbers look like (with a remark). Counts need a blank: as a file of its
 * own, or as a column of the sample's file; a dark is taken off both where there is one.
 */
import { readCapture } from "../capture/read-capture.ts";
import { refuse } from "../capture/refusal.ts";
import {
  ordinateGuessed,
  ordinateNamed,
  ordinateOf,
  ratioOf,
  turnOrdinate,
  type Ordinate,
  type OrdinateKind,
} from "../bands/ordinate.ts";
import { toVacuumWavelengths } from "./wavenumber-axis.ts";
import { meanOf, readCaptures, sameAxis, type ReadFile } from "./read-captures.ts";
import type { AnalysisSetup, CaptureInput, FileFacts, ReadOptions, Refusal, Spectrum } from "./types.ts";

export interface AbsorptionCaptures {
  outcome: "read";
  /** Positions of the spectrum, and its ordinate as recorded (a ratio of counts as transmittance). */
  spectrum: Spectrum;
  ordinate: Ordinate;
  /** Each repeat by itself; one entry where there is one. */
  repeats: Ordinate[];
  files: FileFacts[];
  remarks: string[];
}

type Refused = { outcome: "refused"; refusal: Refusal; files: FileFacts[] };

const blankWords = /^\W*(?:ref(?:erence)?|blank|baseline|empty|i\s*0|solvent)\b/i;
const darkWords = /^\W*(?:dark|zero|background)\b/i;

export function combineAbsorption(
  captures: readonly CaptureInput[],
  setup: AnalysisSetup,
): AbsorptionCaptures | Refused {
  // Bands that point down are what a transmittance shows: the reader must not turn them over.
  const reading: ReadOptions = { ...setup.reading, inverted: false };
  const all = readCaptures(captures, reading);
  if (all.outcome === "refused") return all;
  const read = all.read.map((file) => (file.input.part === "lamp" ? withNamedOrdinate(file, reading) : file));
  const files = read.map(({ facts }) => facts);
  const no = (code: Refusal["code"], reason: string): Refused => ({
    outcome: "refused",
    refusal: refuse(code, reason),
    files,
  });
  const samples = read.filter(({ input }) => input.part === "lamp");
  const blanks = read.filter(({ input }) => input.part === "reference").map(({ spectrum }) => spectrum.counts);
  const darks = read.filter(({ input }) => input.part === "dark").map(({ spectrum }) => spectrum.counts);
  const first = samples[0];
  if (first === undefined)
    return no(
      "no-lines",
      "There is no capture of the standard yet, only blanks or darks. Drop the standard's capture too.",
    );
  for (const other of read) {
    if (!sameAxis(first.spectrum, other.spectrum)) {
      return no(
        "different-axes",
        `${other.input.name} lies on another axis than ${first.input.name}. Sample, blank and dark must have the same samples.`,
      );
    }
  }
  const named = kindOf(first.facts);
  if (named === null && blanks.length === 0) {
    const beside = (words: RegExp): Float64Array[] => {
      const column = first.facts.columns.findIndex((text, k) => k !== first.facts.intensityColumn && words.test(text));
      const other = column < 0 ? null : readColumn(first, reading, column);
      return other === null ? [] : [other.spectrum.counts];
    };
    blanks.push(...beside(blankWords));
    if (blanks.length > 0 && darks.length === 0) darks.push(...beside(darkWords));
  }
  const { spectrum } = first;
  const n = spectrum.positions.length;
  const counts = meanOf(
    samples.map((one) => one.spectrum.counts),
    n,
  );
  if (blanks.length > 0) {
    if (named !== null)
      return no(
        "bad-settings",
        `${first.input.name} holds ${namesOf[named]} already: it needs no blank. Leave the blank out, or drop the counts.`,
      );
    const blank = { counts: meanOf(blanks, n) };
    const dark = darks.length === 0 ? null : { counts: meanOf(darks, n) };
    const ratio = (sample: Float64Array): Ordinate => ratioOf({ counts: sample }, blank, dark);
    const ordinate = ratio(counts);
    const known = ordinate.values.reduce((sum, value) => sum + (value === value ? 1 : 0), 0);
    if (known < n / 4)
      return no(
        "bad-settings",
        "The blank holds no more light than its noise over most of the range. Is it the blank, and the shutter open?",
      );
    return {
      outcome: "read",
      spectrum: { ...spectrum, counts: ordinate.transmittance },
      ordinate,
      repeats: samples.map((one) => ratio(one.spectrum.counts)),
      files,
      remarks: [
        `Transmittance was taken from the counts of sample and blank${dark === null ? "; no dark was taken off" : ", dark taken off both"}.`,
      ],
    };
  }
  const kind = named ?? ordinateGuessed(counts);
  if (kind === null)
    return no(
      "bad-settings",
      `${first.input.name} holds the counts of one beam. Bands are measured in absorbance or transmittance: drop the capture of the blank with it, or export one of those.`,
    );
  return {
    outcome: "read",
    spectrum: { ...spectrum, counts },
    ordinate: ordinateOf(counts, kind),
    repeats: samples.map((one) => ordinateOf(one.spectrum.counts, kind)),
    files,
    remarks: named === null ? [`The numbers look like ${namesOf[kind]}, and were taken so.`] : [],
  };
}

/** A spectrum already in columns. */
export function absorptionOf(spectrum: Spectrum): AbsorptionCaptures | Refused {
  const kind = ordinateGuessed(spectrum.counts);
  if (kind === null) {
    return {
      outcome: "refused",
      refusal: refuse(
        "bad-settings",
        "The spectrum holds the counts of one beam. Bands are measured in absorbance or transmittance.",
      ),
      files: [],
    };
  }
  const ordinate = ordinateOf(spectrum.counts, kind);
  const remarks = [`The numbers look like ${namesOf[kind]}, and were taken so.`];
  return { outcome: "read", spectrum, ordinate, repeats: [ordinate], files: [], remarks };
}

/** Captures on an axis of wavenumbers as vacuum wavelengths, which run the other way. */
export function toVacuumAbsorption(captures: AbsorptionCaptures): AbsorptionCaptures {
  return {
    ...captures,
    spectrum: toVacuumWavelengths(captures.spectrum, null),
    ordinate: turnOrdinate(captures.ordinate),
    repeats: captures.repeats.map(turnOrdinate),
  };
}

const namesOf: Record<OrdinateKind, string> = {
  absorbance: "absorbance",
  transmittance: "transmittance",
  "percent-transmittance": "transmittance in per cent",
};

/** From the chosen column's heading, else from a header line that speaks of the ordinate. */
function kindOf(facts: FileFacts): OrdinateKind | null {
  const heading = facts.columns[facts.intensityColumn];
  const named = heading === undefined ? null : ordinateNamed(heading);
  if (named !== null) return named;
  for (const [key, value] of Object.entries(facts.metadata)) {
    if (!/y.?unit|ordinate|data ?mode|y.?axis|photometric|measur\w* mode|data ?type/i.test(key)) continue;
    const told = ordinateNamed(value);
    if (told !== null) return told;
  }
  return null;
}

/** Of a file with raw counts and a finished ordinate side by side the finished one, unless a column was asked for. */
function withNamedOrdinate(file: ReadFile, reading: ReadOptions): ReadFile {
  if (reading.intensityColumn !== undefined || reading.intensityName !== undefined) return file;
  const { columns, intensityColumn, axisColumn } = file.facts;
  if (ordinateNamed(columns[intensityColumn] ?? "") !== null) return file;
  const column = columns.findIndex((text, k) => k !== axisColumn && ordinateNamed(text) !== null);
  return (column < 0 ? null : readColumn(file, reading, column)) ?? file;
}

function readColumn(file: ReadFile, reading: ReadOptions, intensityColumn: number): ReadFile | null {
  const result = readCapture(file.input.bytes, file.input.name, { ...reading, intensityColumn });
  if (result.outcome === "refused") return null;
  return { ...file, spectrum: result.spectrum, facts: { ...result.facts, sha256: file.input.sha256 } };
}
