import { describe, expect, it } from "vitest";
import { builtInLineList, elementsOf, isFromMemory, lineWavelengthNm, linesOf } from "./built-in.ts";

describe("built-in line list 2026.1", () => {
  it("holds every row, each with a source and a vacuum wavelength, ascending", () => {
    const { lines, version } = builtInLineList;
    expect(version).toBe("2026.1");
    expect(lines).toHaveLength(718);
    let previous = 0;
    for (const line of lines) {
      expect(line.source).not.toBe("");
      expect(line.wavelengthVacuumNm).toBeGreaterThanOrEqual(previous);
      if (line.uncertaintyNm !== null) expect(line.uncertaintyNm).toBeGreaterThan(0);
      previous = line.wavelengthVacuumNm;
    }
    expect(elementsOf(builtInLineList)).toEqual([
      "Ar",
      "Cd",
      "D",
      "H",
      "He",
      "Hg",
      "Kr",
      "Na",
      "Ne",
      "Xe",
      "Zn",
      "laser",
    ]);
  });

  it("gives air above 200 nm and vacuum below", () => {
    for (const line of builtInLineList.lines) {
      const { medium, wavelengthNm } = lineWavelengthNm(line);
      expect(medium).toBe(line.wavelengthVacuumNm > 200 ? "air" : "vacuum");
      expect(wavelengthNm > 200).toBe(medium === "air");
    }
  });

  it("carries the pencil-lamp values of mercury (Sansonetti, Salit and Reader 1996, through NIST ASD 5.12)", () => {
    const green = builtInLineList.lines.find((line) => line.wavelengthAirNm === 546.075);
    expect(green).toMatchObject({ element: "Hg", spectrum: "Hg I", uncertaintyNm: 0.0001, source: "ASD;SSR96" });
  });

  it("leaves values from memory out of what a check may use", () => {
    const fromMemory = builtInLineList.lines.filter(isFromMemory);
    expect(fromMemory).toHaveLength(7);
    expect(fromMemory.every((line) => line.element === "laser")).toBe(true);
    expect(linesOf(builtInLineList, ["laser"]).some(isFromMemory)).toBe(false);
  });

  it("selects by element, by spectrum and by range", () => {
    expect(linesOf(builtInLineList, ["Hg II"])).toHaveLength(6);
    expect(linesOf(builtInLineList, ["Hg"], 576, 580).map((line) => line.wavelengthAirNm)).toEqual([
      576.961, 578.96805, 579.067,
    ]);
    expect(linesOf(builtInLineList, ["Xx"])).toEqual([]);
  });
});
