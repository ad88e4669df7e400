/**
 * Measured numbers and results in words, for mails, Today, alerts, the report and the trail.
 *
 * Units follow a narrow no-break space (U+202F); the minus is U+2212; errors carry their sign.
 */
import { roundResult } from "@wavekeep/core";
import type { StoredResult } from "../db/schema/analyses.ts";

export const narrowSpace = "\u202f";
const minus = "\u2212";

/** A number's text with its sign always shown, as errors are: a true minus, no sign on zero. */
export function withSign(text: string): string {
  if (Number(text) === 0) return text.replace("-", "");
  return text.startsWith("-") ? `${minus}${text.slice(1)}` : `+${text}`;
}

/** `+0.545 ± 0.037 nm`: U to two digits, the error to the same place. */
export function errorText(errorNm: number, expandedUncNm: number): string {
  const { value, expandedUnc } = roundResult(errorNm, expandedUncNm);
  return `${withSign(value)} ± ${expandedUnc}${narrowSpace}nm`;
}

/** A tolerance with its own digits, at least two decimals: `0.50 nm`. */
export function toleranceText(toleranceNm: number): string {
  const plain = String(Number(toleranceNm.toPrecision(6)));
  const decimals = Math.max(2, plain.includes(".") ? plain.length - plain.indexOf(".") - 1 : 0);
  return `${toleranceNm.toFixed(decimals)}${narrowSpace}nm`;
}

/** `78 %`, with the narrow space before the sign. */
export const percentText = (share: number): string => `${Math.round(share * 100)}${narrowSpace}%`;

/** `Ar 842.465 nm`. */
export const lineText = (species: string, wavelengthNm: number): string =>
  `${elementOf(species)} ${wavelengthNm.toFixed(3)}${narrowSpace}nm`;

/** The element of a spectrum in spectroscopic notation: `Hg I` gives `Hg`. */
export const elementOf = (species: string): string => species.split(" ")[0] ?? species;

/** `Ar 965.779 nm reads +0.545 ± 0.037 nm where 0.50 nm is allowed`; null without a judged line. */
export function worstText(result: Pick<StoredResult, "worst">): string | null {
  const { worst } = result;
  if (worst === null) return null;
  return `${lineText(worst.species, worst.wavelengthNm)} reads ${errorText(worst.errorNm, worst.expandedUncNm)} where ${toleranceText(worst.toleranceNm)} is allowed`;
}

const verdictWords = { pass: "in tolerance", inconclusive: "inconclusive", fail: "out of tolerance" } as const;

/** The verdict as people read it. */
export function verdictText(verdict: keyof typeof verdictWords | null, nearLimit: boolean): string {
  if (verdict === null) return "not judged";
  return verdict === "pass" && nearLimit ? "in tolerance, near the limit" : verdictWords[verdict];
}

export const kindWords = {
  array: "array spectrometer",
  scanning: "scanning monochromator",
  spectrophotometer: "spectrophotometer",
  raman: "Raman bench",
} as const;

export const standingWords: Record<string, string> = {
  "in-service": "in service",
  "on-hold": "on hold",
  restricted: "restricted",
  "out-of-service": "out of service",
  quarantined: "quarantined",
  retired: "retired",
};

/** `one line`, `3 lines`. */
export function countText(count: number, one: string, many = `${one}s`): string {
  return count === 1 ? `one ${one}` : `${count} ${many}`;
}

/** `a`, `a and b`, `a, b and c`. */
export function listText(parts: readonly string[]): string {
  if (parts.length < 2) return parts[0] ?? "";
  return `${parts.slice(0, -1).join(", ")} and ${parts.at(-1)}`;
}
