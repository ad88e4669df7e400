import type { Analysis, LineResult, VerdictSummary } from "@wavekeep/core";
import { describe, expect, test } from "vitest";
import { analysisState, conformanceWords, leftOutSentence, verdictSentence } from "./verdict-sentence.ts";

const line = (over: Partial<LineResult>): LineResult =>
  ({
    position: 2027.88,
    wavelengthNm: 842.4648,
    species: "Ar I",
    flags: [],
    status: "judged",
    verdict: "pass",
    errorNm: 0.3134,
    errorExpandedUncNm: 0.0308,
    toleranceNm: 0.4,
    leftOut: null,
    ...over,
  }) as LineResult;

const analysis = (
  lines: LineResult[],
  verdict: Partial<VerdictSummary> | null,
  over: Partial<Analysis> = {},
): Analysis =>
  ({
    outcome: "identified",
    reason: null,
    axisUnit: "px",
    lines,
    verdict:
      verdict === null
        ? null
        : {
            verdict: "pass",
            nearLimit: false,
            worstLine: 0,
            toleranceUsed: 0.78,
            judgedCount: 22,
            namedCount: 24,
            reasons: [],
            ...verdict,
          },
    ...over,
  }) as Analysis;

describe("the verdict as a sentence", () => {
  test("names the worst line, its error with U to two digits, and the limit", () => {
    expect(verdictSentence(analysis([line({})], { nearLimit: true }))).toBe(
      "In tolerance, near the limit: the worst of 22 lines, Ar 842.465\u202fnm, reads +0.313\u00a0±\u00a00.031\u202fnm where 0.40\u202fnm is allowed.",
    );
  });
  test("a missing required line is said before the worst line that passed", () => {
    const text = verdictSentence(
      analysis([line({})], { verdict: "inconclusive", reasons: ["Hg 546.075 nm is required and was left out."] }),
    );
    expect(text).toMatch(/^Inconclusive: Hg 546\.075 nm is required and was left out\. The worst line/);
  });
  test("a first axis has no error to judge", () => {
    expect(verdictSentence(analysis([line({ errorNm: null })], null))).toMatch(/^Not judged: no axis was in force/);
    expect(verdictSentence(analysis([line({})], null))).toBe("Not judged: no tolerance reaches these lines.");
  });
  test("a refusal is no verdict", () => {
    const refused = analysis([], null, { outcome: "refused", reason: "Empty file." });
    expect(verdictSentence(refused)).toBe("Not judged: the captures could not be analysed.");
    expect(analysisState(refused)).toBe("not-judged");
  });
  test("what was left out is counted by what was seen", () => {
    const lines = [
      line({}),
      line({ status: "refused", flags: ["saturated"] }),
      line({ status: "left-out", leftOut: { wavelengthNm: 811.53, reason: "too-weak", note: "n" } }),
    ];
    expect(leftOutSentence(analysis(lines, {}))).toBe("1 saturated, 1 too weak");
    expect(leftOutSentence(analysis([line({})], {}))).toBe("nothing");
  });
  test("a probability next to one is not written as one", () => {
    expect(conformanceWords(0.9999)).toBe("P > 99.9\u202f%");
    expect(conformanceWords(0.953)).toBe("P = 95.3\u202f%");
  });
});
