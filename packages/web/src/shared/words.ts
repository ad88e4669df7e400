/** The words of states and kinds as the interface shows them: one place, so that a list, a page and a drawing agree. */
import type {
  Check,
  CheckState,
  CheckSummary,
  InstrumentKind,
  Standing,
  leaveOutReason,
  sourceKind,
  eventKind,
} from "@wavekeep/api/contract";
import type { BudgetEntry, LineFlag, LineResult, Medium } from "@wavekeep/core";
import type { z } from "zod";
import { statusWord, verdictState, type StatusState } from "../ui/status.tsx";

/** Kind of an instrument in full, as its own page says it. */
export const kindWords: Record<InstrumentKind, string> = {
  array: "Array spectrometer",
  scanning: "Scanning monochromator",
  spectrophotometer: "UV-Vis spectrophotometer",
  raman: "Raman bench",
};

/** What a configuration is called: its instrument, with its own name where it has one: `Dunlin`, `Curlew (visible)`. */
export const calledWords = (of: { instrumentName: string; configurationName: string | null }): string =>
  of.configurationName === null ? of.instrumentName : `${of.instrumentName} (${of.configurationName})`;

/** Where a configuration is looked at; a plain instrument's address stays plain. */
export const configurationPath = (of: {
  instrumentId: string;
  configurationId: string;
  configurationName: string | null;
}): string =>
  `/instruments/${of.instrumentId}${of.configurationName === null ? "" : `?configuration=${of.configurationId}`}`;

/** Kind of an instrument as a note beside its name in a row. */
export const kindNotes: Record<InstrumentKind, string> = {
  array: "array",
  scanning: "scanning",
  spectrophotometer: "UV-Vis",
  raman: "Raman",
};

export const standingWords: Record<Standing, string> = {
  "in-service": "in service",
  "on-hold": "on hold",
  restricted: "restricted",
  "out-of-service": "out of service",
  quarantined: "quarantined",
  retired: "retired",
};

export const checkStateWords: Record<CheckState, string> = {
  begun: "draft",
  "set-aside": "set aside",
  submitted: "awaits review",
  returned: "sent back",
  approved: "approved",
  void: "void",
};

export const conditionWords: Record<CheckSummary["condition"], string> = {
  "as-found": "as found",
  "as-left": "as left",
};

export const leaveOutWords: Record<z.infer<typeof leaveOutReason>, string> = {
  saturated: "saturated",
  blended: "blended",
  spike: "spike",
  "too-weak": "too weak",
  disturbed: "disturbed",
};

export const sourceKindWords: Record<z.infer<typeof sourceKind>, string> = {
  "low-pressure-lamp": "low-pressure lamp",
  "high-pressure-lamp": "high-pressure lamp",
  laser: "laser",
  "absorption-standard": "absorption standard",
  "built-in": "built in",
};

export const eventKindWords: Record<z.infer<typeof eventKind>, string> = {
  moved: "moved",
  serviced: "serviced",
  "lamp-changed": "lamp changed",
  "slit-changed": "slit changed",
  adjusted: "adjusted",
  firmware: "firmware",
  environment: "room or surroundings",
  other: "other",
};

export const checkEventWords: Record<Check["events"][number]["kind"], string> = {
  begun: "begun",
  "set-aside": "set aside",
  resumed: "taken up again",
  submitted: "submitted",
  returned: "sent back",
  approved: "approved",
  acknowledged: "acknowledged",
  void: "voided",
};

export const budgetWords: Record<BudgetEntry["contribution"], string> = {
  reference: "Reference value",
  fit: "Fit of the centre",
  repeatability: "Repeatability",
  "set-up": "Set-up reproducibility",
  resolution: "Resolution",
  dispersion: "Dispersion",
  air: "Air",
  temperature: "Temperature",
  blend: "Blend",
  laser: "Laser line",
  bandwidth: "Bandwidth",
};

export const flagWords: Record<LineFlag, string> = {
  saturated: "saturated",
  blend: "blend",
  spike: "spike",
  edge: "at the edge",
  "poor-fit": "poor fit",
  weak: "weak",
  outlier: "outlier",
  "second-order": "second order",
  smoothed: "smoothed",
  "room-light": "room light",
};

export const mediumWords: Record<Medium, string> = { air: "air", vacuum: "vacuum" };

/** Shape and word of one line of an analysis; the word of an unjudged line says why. */
export function lineState(line: Pick<LineResult, "status" | "verdict" | "nearLimit" | "flags">): {
  state: StatusState;
  word: string;
} {
  if (line.status === "judged") {
    const state = verdictState(line.verdict, line.nearLimit);
    return { state, word: statusWord(state) };
  }
  if (line.status === "left-out") return { state: "left-out", word: "left out" };
  if (line.status === "refused") {
    return line.flags.includes("saturated")
      ? { state: "saturated", word: "saturated" }
      : { state: "not-judged", word: "refused" };
  }
  return { state: "not-judged", word: line.status === "unnamed" ? "unnamed" : "not judged" };
}

/** Species as shown beside a wavelength: `Hg I` is `Hg`; the spectrum's number is kept where it is not the neutral atom. */
export function speciesWord(species: string | null): string {
  return species === null ? "" : species.replace(/ I$/, "");
}

/** `one`, `two` … `twelve`, then figures: for sentences that open with a count. */
export function countWord(count: number): string {
  const words = [
    "no",
    "one",
    "two",
    "three",
    "four",
    "five",
    "six",
    "seven",
    "eight",
    "nine",
    "ten",
    "eleven",
    "twelve",
  ];
  return words[count] ?? String(count);
}

/** `1 check`, `3 checks`; for irregular nouns the plural is given. */
export function counted(count: number, noun: string, plural = `${noun}s`): string {
  return `${count} ${count === 1 ? noun : plural}`;
}

/** First letter upper case, the rest as it is. */
export function sentenceCase(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/** `T. Ferrule` of `Tam Ferrule`; a single name stays. */
export function shortName(name: string): string {
  const parts = name.trim().split(/\s+/);
  const first = parts[0];
  if (parts.length < 2 || first === undefined) return name;
  return `${first.charAt(0)}. ${parts.slice(1).join(" ")}`;
}
