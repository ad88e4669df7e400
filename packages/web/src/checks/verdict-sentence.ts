/** The verdict of an analysis as a sentence: worst line, value, U, limit. */
import type { Analysis, LineResult, VerdictSummary } from "@wavekeep/core";
import { counted, speciesWord } from "../shared/words.ts";
import { formatLimit, formatNumber, formatQuantity, NARROW_SPACE } from "../ui/format.ts";
import { verdictState, type StatusState } from "../ui/status.tsx";

/** `Ar 842.465 nm`; an unnamed line by its place on the axis. */
export function lineName(line: Pick<LineResult, "species" | "wavelengthNm" | "position">, axisUnit = "px"): string {
  if (line.wavelengthNm === null)
    return `the line at ${formatNumber(line.position, { decimals: 1 })}${NARROW_SPACE}${axisUnit}`;
  return `${speciesWord(line.species)} ${formatNumber(line.wavelengthNm, { decimals: 3 })}${NARROW_SPACE}nm`;
}

/** The line that decided a verdict. */
export function worstOf(analysis: Analysis, summary: VerdictSummary | null = analysis.verdict): LineResult | null {
  return summary === null || summary.worstLine === null ? null : (analysis.lines[summary.worstLine] ?? null);
}

const verdictHeads: Record<"in-tolerance" | "near-limit" | "out-of-tolerance" | "inconclusive", string> = {
  "in-tolerance": "In tolerance",
  "near-limit": "In tolerance, near the limit",
  "out-of-tolerance": "Out of tolerance",
  inconclusive: "Inconclusive",
};

const notIdentified: Record<Exclude<Analysis["outcome"], "identified">, string> = {
  ambiguous: "Inconclusive: the lines can be named in more than one way.",
  unidentified: "Not judged: the lines could not be named.",
  refused: "Not judged: the captures could not be analysed.",
};

/** True where nothing said before what the instrument indicates, so that no line can have an error: a first check. */
export const hasNoEarlierAxis = (analysis: Analysis): boolean =>
  analysis.outcome === "identified" && analysis.lines.every((line) => line.errorNm === null);

/** Shape of an analysis's verdict. */
export const analysisState = (analysis: Analysis): StatusState =>
  analysis.verdict === null
    ? analysis.outcome === "ambiguous"
      ? "inconclusive"
      : "not-judged"
    : verdictState(analysis.verdict.verdict, analysis.verdict.nearLimit);

/** A sentence to stand after a colon; `Hg` and its kin keep their capital. */
const afterColon = (sentence: string) => {
  const text = sentence.replace(/\.$/, "");
  return /^[A-Z][a-z]?\b/.test(text) && !/^A\b/.test(text) ? text : `${text.charAt(0).toLowerCase()}${text.slice(1)}`;
};

/**
 * `In tolerance, near the limit: the worst of 22 lines, Ar 842.465 nm, reads +0.313 ± 0.031 nm where 0.40 nm is allowed.`
 *
 * @param qualifier  what stands behind the verdict's word, e.g. ` as it stands` for a draft
 */
export function verdictSentence(analysis: Analysis, qualifier = ""): string {
  const { verdict } = analysis;
  if (verdict === null) {
    if (analysis.outcome !== "identified") return notIdentified[analysis.outcome];
    return hasNoEarlierAxis(analysis)
      ? "Not judged: no axis was in force that could err. This one is the first."
      : "Not judged: no tolerance reaches these lines.";
  }
  const state = verdictState(verdict.verdict, verdict.nearLimit);
  const head = `${verdictHeads[state as keyof typeof verdictHeads]}${qualifier}`;
  const worst = worstOf(analysis, verdict);
  if (worst === null || worst.errorNm === null || worst.toleranceNm === null) {
    const why = verdict.reasons[0] ?? analysis.reason ?? "no line could be judged";
    return `${head}: ${afterColon(why)}.`;
  }
  const reading = `reads ${formatQuantity(worst.errorNm, worst.errorExpandedUncNm, "nm", { signed: true })} where ${formatLimit(worst.toleranceNm)} is allowed`;
  const name = lineName(worst, analysis.axisUnit);
  // A missing required line makes the verdict inconclusive although every line passes: the reason goes first.
  if (verdict.verdict === "inconclusive" && worst.verdict === "pass" && verdict.reasons[0] !== undefined) {
    return `${head}: ${afterColon(verdict.reasons[0])}. The worst line, ${name}, ${reading}.`;
  }
  const count =
    verdict.judgedCount === 1
      ? `the one line, ${name},`
      : `the worst of ${counted(verdict.judgedCount, "line")}, ${name},`;
  return `${head}: ${count} ${reading}.`;
}

/** `1 blended, 1 saturated`: what a person left out and what the core refused. */
export function leftOutSentence(analysis: Analysis): string {
  const counts = new Map<string, number>();
  for (const line of analysis.lines) {
    const word =
      line.status === "left-out"
        ? (line.leftOut?.reason ?? "left out").replace("too-weak", "too weak")
        : line.status === "refused"
          ? line.flags.includes("saturated")
            ? "saturated"
            : "refused"
          : null;
    if (word !== null) counts.set(word, (counts.get(word) ?? 0) + 1);
  }
  return counts.size === 0 ? "nothing" : [...counts].map(([word, count]) => `${count} ${word}`).join(", ");
}

/** `P > 99.9 %`, or the probability with one decimal. */
export function conformanceWords(probability: number | null): string {
  if (probability === null) return "–";
  if (probability > 0.999) return `P > 99.9${NARROW_SPACE}%`;
  if (probability < 0.001) return `P < 0.1${NARROW_SPACE}%`;
  return `P = ${formatNumber(probability * 100, { decimals: 1 })}${NARROW_SPACE}%`;
}
