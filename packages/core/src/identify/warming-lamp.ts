/**
 * A mercury lamp that is still warming up: its filling gas is bright, its metal faint.
 *
 * A low-pressure lamp starts on its filling gas; mercury takes over as it evaporates, within minutes. What is compared is the brightest of
 * mercury's three strong visible lines with the brightest line of the gas, where the capture reaches two of the three.
 *
 * Source  common practice, no source: in a warm lamp the three are seldom below a fifth of the gas; a twentieth is said
 */
import type { FittedLine, PixelAxis } from "../analysis/types.ts";
import { axisNm } from "../dispersion/axis.ts";
import type { LineName } from "./identify-lines.ts";
import { nameOfElement } from "./other-lamps.ts";

/** Air wavelengths, nm. */
const strongMercuryNm = [404.6565, 435.8335, 546.075] as const;
const fillingGases = ["Ar", "Ne", "Kr", "Xe"] as const;
const leastInRange = 2;
const faintShare = 0.05;
const sameLineNm = 0.1;

/** @returns the sentence, or null where the lamp has no mercury, nothing can be told, or mercury is as bright as it should be */
export function warmingLampText(
  elements: readonly string[],
  lines: readonly FittedLine[],
  names: readonly (LineName | null)[],
  axis: PixelAxis | null,
  firstPosition: number,
  lastPosition: number,
): string | null {
  if (!elements.includes("Hg")) return null;
  const ends =
    axis === null ? [firstPosition, lastPosition] : [axisNm(axis, firstPosition), axisNm(axis, lastPosition)];
  const low = Math.min(ends[0]!, ends[1]!);
  const high = Math.max(ends[0]!, ends[1]!);
  if (strongMercuryNm.filter((nm) => nm > low && nm < high).length < leastInRange) return null;
  let [mercury, gas] = [0, 0];
  let gasElement = "";
  names.forEach((name, i) => {
    if (name === null || name.order !== 1) return;
    const height = lines[i]!.peakHeightCounts;
    const isMercury = name.element === "Hg";
    if (isMercury && strongMercuryNm.some((nm) => Math.abs(nm - name.wavelengthNm) < sameLineNm))
      mercury = Math.max(mercury, height);
    if (!isMercury && fillingGases.some((one) => one === name.element) && height > gas) {
      gas = height;
      gasElement = name.element;
    }
  });
  if (gas === 0 || mercury >= faintShare * gas) return null;
  return (
    `The ${nameOfElement(gasElement)} of the lamp is bright and its mercury faint: the lamp may still have been warming up. ` +
    "Let it burn for the time the procedure asks, and record again."
  );
}
