/**
 * The built-in list of reference lines, version 2026.1: 718 lines of twelve lamp elements and common lasers.
 *
 * Wavelengths   standard air (15 °C, 101 325 Pa, dry) above 200 nm, vacuum below; both are kept where both exist
 * Uncertainty   one standard deviation as the source states it; null where it states none, never zero
 * Intensity     the source's own number: qualitative, and on a different scale for every spectrum
 * Sources       docs/line-list.md
 */
import type { LineList, Medium, ReferenceLine } from "../analysis/types.ts";
import { metalsHydrogenLasersRows } from "./data/metals-hydrogen-lasers.ts";
import { neonRows } from "./data/neon.ts";
import { nobleGasesRows } from "./data/noble-gases.ts";

/** Standard uncertainty taken where a source gives none (all of Ar I and Kr I), nm. Common practice, no source; always shown as assumed. */
export const assumedReferenceUncNm = 0.001;

/** Source key of values that were not read in any source: listed, never used to accept or reject anything. */
const memorySource = "MEMORY";

const columnCount = 9;

function parseRows(text: string): ReferenceLine[] {
  return text
    .split("\n")
    .filter((row) => row !== "")
    .map((row) => {
      const cells = row.split("|");
      if (cells.length !== columnCount) throw new RangeError(`a line-list row holds ${cells.length} cells: ${row}`);
      const [element, spectrum, air, vacuum, uncertainty, intensity, , source, note] = cells as [
        string,
        string,
        string,
        string,
        string,
        string,
        string,
        string,
        string,
      ];
      return {
        element,
        spectrum,
        wavelengthAirNm: air === "" ? null : Number(air),
        wavelengthVacuumNm: Number(vacuum),
        uncertaintyNm: uncertainty === "" ? null : Number(uncertainty),
        relativeIntensity: intensity === "" ? null : Number(intensity),
        source,
        note,
      };
    });
}

/** The list that is in force where a lab has chosen no other: sorted by vacuum wavelength. */
export const builtInLineList: LineList = {
  version: "2026.1",
  title: "Built-in line library 2026.1",
  lines: [neonRows, nobleGasesRows, metalsHydrogenLasersRows]
    .flatMap(parseRows)
    .sort((a, b) => a.wavelengthVacuumNm - b.wavelengthVacuumNm),
};

/** Wavelength by which a line is known in the lab: air above 200 nm, vacuum below, with the medium named. */
export function lineWavelengthNm(line: ReferenceLine): { wavelengthNm: number; medium: Medium } {
  return line.wavelengthAirNm === null
    ? { wavelengthNm: line.wavelengthVacuumNm, medium: "vacuum" }
    : { wavelengthNm: line.wavelengthAirNm, medium: "air" };
}

/** True for values from memory: they may be shown, never used as acceptance data. */
export function isFromMemory(line: ReferenceLine): boolean {
  return line.source === memorySource;
}

/**
 * Lines of a source inside a range, ascending, without the values from memory.
 *
 * @param elements  element symbols ("Hg"), one spectrum ("Hg II") or one laser by its name in the list ("HeNe green")
 * @param firstNm   lower end of the range, nm, in the medium each line is known by
 * @param lastNm    upper end of the range, nm
 */
export function linesOf(
  list: LineList,
  elements: readonly string[],
  firstNm = 0,
  lastNm = Number.POSITIVE_INFINITY,
): ReferenceLine[] {
  const wanted = new Set(elements);
  return list.lines.filter((line) => {
    if (isFromMemory(line) || !(wanted.has(line.element) || wanted.has(line.spectrum))) return false;
    const { wavelengthNm } = lineWavelengthNm(line);
    return wavelengthNm >= firstNm && wavelengthNm <= lastNm;
  });
}

/** Element symbols that the list knows, in the order of the alphabet. */
export function elementsOf(list: LineList): string[] {
  return [...new Set(list.lines.map((line) => line.element))].sort();
}
