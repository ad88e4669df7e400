import { expect, test } from "vitest";
import { counted, lineState, shortName, speciesWord } from "./words.ts";

test("a line's word says why it is not judged", () => {
  expect(lineState({ status: "judged", verdict: "pass", nearLimit: true, flags: [] })).toEqual({
    state: "near-limit",
    word: "near limit",
  });
  expect(lineState({ status: "refused", verdict: null, nearLimit: false, flags: ["saturated"] }).word).toBe(
    "saturated",
  );
  expect(lineState({ status: "refused", verdict: null, nearLimit: false, flags: ["blend"] }).word).toBe("refused");
  expect(lineState({ status: "left-out", verdict: null, nearLimit: false, flags: [] }).state).toBe("left-out");
});

test("the neutral atom's numeral is left off, an ion's stays", () => {
  expect(speciesWord("Hg I")).toBe("Hg");
  expect(speciesWord("Ar II")).toBe("Ar II");
});

test("names and counts", () => {
  expect(shortName("Tam Ferrule")).toBe("T. Ferrule");
  expect(shortName("Ida van der Vernier")).toBe("I. van der Vernier");
  expect(counted(1, "analysis", "analyses")).toBe("1 analysis");
  expect(counted(2, "analysis", "analyses")).toBe("2 analyses");
});
