/** What differs between one analysis of a check and the next, in words: the approver sees it before signing. */
import type { StoredDraft } from "../db/schema/checks.ts";
import { countText, listText } from "./words.ts";

export interface AnalysedState {
  attempt: number;
  inputs: StoredDraft;
  captureIds: readonly string[];
}

const modeWords: Record<StoredDraft["mode"], string> = {
  "earlier-axis": "the axis in force",
  range: "a range",
  none: "the lamp's elements alone",
};

const words: Partial<Record<keyof StoredDraft, (value: never) => string>> = {
  minutesSinceSwitchOn: (value: number | null) =>
    value === null ? "time since switch-on not stated" : `lamp on for ${value} min`,
  temperatureC: (value: number | null) => (value === null ? "room temperature not stated" : `room at ${value} °C`),
  pressureHpa: (value: number | null) => (value === null ? "pressure not measured" : `pressure ${value} hPa`),
  relativeHumidity: (value: number | null) =>
    value === null ? "humidity not measured" : `humidity ${Math.round(value * 100)} %`,
  fullScaleCounts: (value: number | null) => (value === null ? "full scale not stated" : `full scale ${value} counts`),
  mode: (value: StoredDraft["mode"]) => `lines named by ${modeWords[value]}`,
};

/** @param previous null for the first analysis of a check */
export function describeChange(previous: AnalysedState | null, next: AnalysedState): string {
  if (previous === null) return "First analysis.";
  const parts: string[] = [];
  if (previous.attempt !== next.attempt) parts.push(`attempt ${next.attempt}`);
  else {
    const added = next.captureIds.filter((id) => !previous.captureIds.includes(id)).length;
    if (added > 0) parts.push(`${countText(added, "capture")} added`);
  }
  if (JSON.stringify(previous.inputs.sourceIds) !== JSON.stringify(next.inputs.sourceIds)) parts.push("other sources");
  for (const [key, write] of Object.entries(words) as [keyof StoredDraft, (value: never) => string][]) {
    if (previous.inputs[key] !== next.inputs[key]) parts.push(write(next.inputs[key] as never));
  }
  const { rangeFirstNm: first, rangeLastNm: last } = next.inputs;
  if (next.inputs.mode === "range" && (first !== previous.inputs.rangeFirstNm || last !== previous.inputs.rangeLastNm))
    parts.push(`range ${first} to ${last} nm`);
  const wavelengths = (inputs: StoredDraft) => inputs.leftOut.map((left) => left.wavelengthNm);
  const out = wavelengths(next.inputs).filter((nm) => !wavelengths(previous.inputs).includes(nm));
  const back = wavelengths(previous.inputs).filter((nm) => !wavelengths(next.inputs).includes(nm));
  if (out.length > 0) parts.push(`left out ${listText(out.map((nm) => `${nm} nm`))}`);
  if (back.length > 0) parts.push(`took back ${listText(back.map((nm) => `${nm} nm`))}`);
  if (parts.length === 0) return "Nothing: analysed again.";
  const text = parts.join(", ");
  return `${text[0]!.toUpperCase()}${text.slice(1)}.`;
}
