/**
 * What else it may be: another lamp altogether, or a second gas between the lamp's own lines.
 *
 * Another lamp is looked for with the same search, each element of the line list alone. A second gas is looked for on the
 * axis already found: prominent lines of another element on lines left without a name, scored as in `score`.
 */
import type { LineList } from "../analysis/types.ts";
import { elementsOf } from "../linelist/built-in.ts";
import { log } from "../numeric/elementary.ts";
import type { Naming } from "./name-lines.ts";
import type { Problem } from "./problem.ts";
import { lowerBound, referenceTable, type ReferenceTable, roomLightOn } from "./reference-table.ts";
import { correctedNm, strongCount } from "./score.ts";

const names: Record<string, string> = {
  Ar: "argon",
  Cd: "cadmium",
  D: "deuterium",
  H: "hydrogen",
  He: "helium",
  Hg: "mercury",
  Kr: "krypton",
  Na: "sodium",
  Ne: "neon",
  Xe: "xenon",
  Zn: "zinc",
};

/** Plain English name of an element symbol; the symbol itself where it is none of a lamp. */
export const nameOfElement = (symbol: string): string => names[symbol] ?? symbol;

/** Elements that lamps are filled with, without the lamp's own. */
function otherElements(list: LineList, own: readonly string[]): string[] {
  return elementsOf(list).filter((element) => element !== "laser" && !own.includes(element));
}

export interface LampAnswer {
  evidence: number;
  /** Usable lines in all. */
  lines: number;
  explained: number;
  strong: number;
}

interface Asked {
  lineList: LineList;
  elements: readonly string[];
}

/**
 * The sentence that names another lamp, or null where none fits.
 *
 * @param tryLamp answer for one set of elements, null where it does not convince
 */
export function findOtherLamp(input: Asked, tryLamp: (elements: string[]) => LampAnswer | null): string | null {
  let best: { element: string; answer: LampAnswer } | null = null;
  for (const element of otherElements(input.lineList, input.elements)) {
    const answer = tryLamp([element]);
    if (answer === null || answer.explained < 3 || answer.explained < 0.4 * answer.strong) continue;
    if (best === null || answer.evidence > best.answer.evidence) best = { element, answer };
  }
  if (best === null) return null;
  const { explained, strong, lines } = best.answer;
  const own = input.elements.map(nameOfElement).join(" and ");
  const other = nameOfElement(best.element);
  return (
    `${explained} of ${strong} strong lines belong to ${other}, not ${own}. ` +
    `Is the lamp ${other}, or does it hold ${other} as well? Nothing was named; choose the right lamp and analyse again. ` +
    (lines > strong ? `${lines} lines were found in all.` : "")
  ).trim();
}

export interface OtherGas {
  element: string;
  /** Indices of the lines that belong to it, and how many of them are among the capture's strong lines. */
  lines: number[];
  strongLines: number;
  /** Lines named as the lamp's that may as well be this gas's. */
  disputed: number[];
  text: string;
}

const prominent = 0.05;
const isProminent = (table: ReferenceTable, j: number): boolean =>
  (table.strength[j] as number) >= prominent && table.ion[j] === 0;
const nearShare = 0.2;
const disputedShare = 0.5;
/** ln of the odds that a second gas must reach: several prominent lines, each on an unnamed line. */
const leastEvidence = 10;

/** Second gases on the axis found, strongest evidence first. */
export function findOtherGases(input: Asked, problem: Problem, naming: Naming): OtherGas[] {
  const unnamed: number[] = [];
  for (const i of problem.byHeight) if ((naming.reference[i] as number) < 0) unnamed.push(i);
  if (unnamed.length < 2) return [];
  const gases: (OtherGas & { evidence: number })[] = [];
  const { correction } = naming.fit;
  const low = Math.min(problem.baseFirstNm, problem.baseLastNm) - problem.bounds.endNm;
  const high = Math.max(problem.baseFirstNm, problem.baseLastNm) + problem.bounds.endNm;
  const room = roomLightOn(input.lineList, input.elements, problem.meaning);
  const asked = otherElements(input.lineList, input.elements).map((element) => ({ element, isRoom: false }));
  // Of room light only its few lines in the visible are seen: asked about apart from mercury in the lamp.
  if (room.length > 0) asked.push({ element: "Hg", isRoom: true });
  for (const { element, isRoom } of asked) {
    const table = referenceTable(input.lineList, [element], [], low, high, problem.meaning);
    const counts = (j: number): boolean => (isRoom ? room.includes(table.nm[j] as number) : isProminent(table, j));
    const strongest: number[] = [];
    for (let j = 0; j < table.nm.length; j++) if (counts(j)) strongest.push(j);
    if (strongest.length < 2) continue;
    const width = nearShare * problem.fwhmNm;
    const gain = log(problem.spanNm / (strongest.length * 2 * width));
    const lines: number[] = [];
    for (const i of unnamed) {
      const nm = correctedNm(problem, correction, i);
      for (
        let j = lowerBound(table.nm, nm - width);
        j < table.nm.length && (table.nm[j] as number) <= nm + width;
        j++
      ) {
        if (!counts(j)) continue;
        lines.push(i);
        break;
      }
    }
    const evidence =
      lines.length * gain -
      Math.min((strongest.length - lines.length) * 0.3, 3) -
      (unnamed.length - lines.length) * 0.7;
    if (lines.length < 2 || evidence < leastEvidence) continue;
    const disputed: number[] = [];
    for (let i = 0; i < problem.count; i++) {
      if ((naming.reference[i] as number) < 0) continue;
      const nm = correctedNm(problem, correction, i);
      const reach = disputedShare * problem.fwhmNm;
      for (
        let j = lowerBound(table.nm, nm - reach);
        j < table.nm.length && (table.nm[j] as number) <= nm + reach;
        j++
      ) {
        if (counts(j)) disputed.push(i);
      }
    }
    const places = lines.map((i) => correctedNm(problem, correction, i).toFixed(1)).sort();
    const text =
      element === "Hg"
        ? `Lines at ${places.join(", ")} nm are mercury's: light from the room, or mercury in the lamp. They were left without a name.`
        : `Lines at ${places.join(", ")} nm belong to ${nameOfElement(element)}: the lamp holds a second gas, or another lamp was on. They were left without a name.`;
    const strongLines = lines.filter((i) => problem.byHeight.indexOf(i) < strongCount(problem)).length;
    gases.push({ element, lines, strongLines, disputed, text, evidence });
  }
  gases.sort((a, b) => b.evidence - a.evidence);
  const taken = new Set<number>();
  return gases
    .filter((gas) => {
      const free = gas.lines.filter((i) => !taken.has(i));
      if (free.length < 2) return false;
      for (const i of free) taken.add(i);
      return true;
    })
    .map(({ evidence: _evidence, ...gas }) => gas);
}
