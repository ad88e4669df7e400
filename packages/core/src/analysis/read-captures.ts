/** The files of one check, read one by one, and what they have in common: the same samples or not, their mean. */
import { readCapture } from "../capture/read-capture.ts";
import type { CaptureInput, FileFacts, ReadOptions, Refusal, Spectrum } from "./types.ts";

export interface ReadFile {
  input: CaptureInput;
  spectrum: Spectrum;
  facts: FileFacts;
}

export type FilesRead =
  { outcome: "read"; read: ReadFile[] } | { outcome: "refused"; refusal: Refusal; files: FileFacts[] };

/** @returns all captures, or the first refusal with the facts of the files read before it */
export function readCaptures(captures: readonly CaptureInput[], reading: ReadOptions): FilesRead {
  const read: ReadFile[] = [];
  for (const input of captures) {
    const result = readCapture(input.bytes, input.name, reading);
    if (result.outcome === "refused") {
      const reason = captures.length > 1 ? `${input.name}: ${result.reason}` : result.reason;
      return { outcome: "refused", refusal: { ...result, reason }, files: read.map(({ facts }) => facts) };
    }
    const direction = result.facts.last < result.facts.first ? "down" : "up";
    read.push({ input, spectrum: result.spectrum, facts: { ...result.facts, sha256: input.sha256, direction } });
  }
  return { outcome: "read", read };
}

/** Two axes are one when no sample differs by more than this share of a step. */
const sameAxisShare = 0.01;

export function sameAxis(a: Spectrum, b: Spectrum): boolean {
  const n = a.positions.length;
  if (a.axisKind !== b.axisKind || n !== b.positions.length) return false;
  for (let i = 0; i < n; i += 1) {
    const step = i + 1 < n ? a.positions[i + 1]! - a.positions[i]! : a.positions[i]! - a.positions[i - 1]!;
    if (Math.abs(a.positions[i]! - b.positions[i]!) > sameAxisShare * step) return false;
  }
  return true;
}

/** Mean of several captures sample by sample, over those that have a number there; NaN where none has. */
export function meanOf(captures: readonly Float64Array[], n: number): Float64Array {
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
