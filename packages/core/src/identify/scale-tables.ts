/**
 * A lamp's published lines as a search without any belief about the range needs them: once for each half octave of the span that a
 * capture may have.
 *
 * What is a strong line depends on what else is in the window, and how exactly a place must be met depends on the span: each scale
 * has its own strengths (local, see `reference-table`), its own pool of lines that a strong found line may be, and its own kernel
 * table (`score`). Spans of 36 to 1,150 nm within 150 to 1,250 nm: what array spectrometers show.
 */
import type { AxisMeaning, LineList } from "../analysis/types.ts";
import { lampTable, lowerBound, oddsOf, strengthIn, thirdStrongest, type LampTable } from "./reference-table.ts";
import { coarsePowers } from "./score.ts";

export const shortestNm = 150;
export const longestNm = 1250;
export const leastSpanNm = 36;
export const mostSpanNm = 1150;
const scales = 10;
const halfOctave = Math.sqrt(2);
/** Strongest lines of each element, and of its ions, that an anchor may be in any window of one span: few at first, then more. */
const poolPerElement = [13, 28, 70] as const;
const ionsInPool = [5, 9, 14] as const;
const poolLevels = poolPerElement.length;

/** Half width of the kernel, share of the span: what third order and the width of a line leave open. */
const kernelShare = 0.0027;
const cellsPerHalfWidth = 4;

export interface Scale {
  /** Spans from this one to sqrt 2 times as much. */
  fromSpanNm: number;
  toSpanNm: number;
  /** Lines an anchor may be, ascending, nm; for each level. */
  pools: Float64Array[];
  cellsPerNm: number;
  /** Sum of the odds of the lines near, times the kernel, for each cell from `shortestNm` on. */
  strong: Float64Array;
  weak: Float64Array;
  /** Sum of the odds of all lines below each whole nm from `shortestNm` on. */
  strongBelow: Float64Array;
  weakBelow: Float64Array;
}

const keptScales = new WeakMap<LampTable, Scale[]>();

/** The scales of a lamp; kept from one question to the next like its lines. */
export function scalesOf(list: LineList, elements: readonly string[], meaning: AxisMeaning): Scale[] {
  const lamp = lampTable(list, elements, meaning);
  let known = keptScales.get(lamp);
  if (known === undefined) {
    known = [];
    let span = leastSpanNm;
    for (let k = 0; k < scales; k++) {
      known.push(makeScale(lamp, span));
      span *= halfOctave;
    }
    keptScales.set(lamp, known);
  }
  return known;
}

function makeScale(lamp: LampTable, fromSpanNm: number): Scale {
  const toSpanNm = fromSpanNm * halfOctave;
  const middleSpan = Math.sqrt(fromSpanNm * toSpanNm);
  const halfWidth = kernelShare * middleSpan;
  const cellsPerNm = cellsPerHalfWidth / halfWidth;
  const cells = Math.ceil((longestNm - shortestNm) * cellsPerNm) + 2;
  const scale: Scale = {
    fromSpanNm,
    toSpanNm,
    pools: [],
    cellsPerNm,
    strong: new Float64Array(cells),
    weak: new Float64Array(cells),
    strongBelow: new Float64Array(longestNm - shortestNm + 2),
    weakBelow: new Float64Array(longestNm - shortestNm + 2),
  };
  const first = lowerBound(lamp.nm, shortestNm);
  const last = lowerBound(lamp.nm, longestNm);
  const strength = new Float64Array(last);
  let windowFirst = first;
  let windowLast = first;
  for (let j = first; j < last; j++) {
    const nm = lamp.nm[j] as number;
    while ((lamp.nm[windowFirst] as number) < nm - middleSpan / 2) windowFirst += 1;
    while (windowLast < last && (lamp.nm[windowLast] as number) <= nm + middleSpan / 2) windowLast += 1;
    strength[j] = strengthIn(lamp, thirdStrongest(lamp, windowFirst, windowLast), j);
  }
  const pools = poolPerElement.map((): number[] => []);
  for (let j = first; j < last; j++) {
    const nm = lamp.nm[j] as number;
    const stronger = strongerNear(lamp, strength, j, first, last, middleSpan / 2);
    const most = lamp.ion[j] === 1 ? ionsInPool : poolPerElement;
    for (let level = 0; level < poolLevels; level++) if (stronger < (most[level] as number)) pools[level]?.push(nm);
    const strong = oddsOf(strength[j] as number, coarsePowers.strong);
    const weak = oddsOf(strength[j] as number, coarsePowers.weak);
    const low = Math.max(0, Math.ceil((nm - halfWidth - shortestNm) * cellsPerNm));
    const high = Math.min(cells - 1, Math.floor((nm + halfWidth - shortestNm) * cellsPerNm));
    for (let cell = low; cell <= high; cell++) {
      const u = (shortestNm + cell / cellsPerNm - nm) / halfWidth;
      const value = (15 / 16 / halfWidth) * (1 - u * u) * (1 - u * u);
      scale.strong[cell] = (scale.strong[cell] as number) + value * strong;
      scale.weak[cell] = (scale.weak[cell] as number) + value * weak;
    }
    const bin = Math.floor(nm - shortestNm) + 1;
    scale.strongBelow[bin] = (scale.strongBelow[bin] as number) + strong;
    scale.weakBelow[bin] = (scale.weakBelow[bin] as number) + weak;
  }
  for (let bin = 1; bin < scale.strongBelow.length; bin++) {
    scale.strongBelow[bin] = (scale.strongBelow[bin] as number) + (scale.strongBelow[bin - 1] as number);
    scale.weakBelow[bin] = (scale.weakBelow[bin] as number) + (scale.weakBelow[bin - 1] as number);
  }
  scale.pools = pools.map((pool) => Float64Array.from(pool));
  return scale;
}

/** Lines of the same element, ions apart, that are stronger within half a span either way. */
function strongerNear(
  lamp: LampTable,
  strength: Float64Array,
  j: number,
  first: number,
  last: number,
  half: number,
): number {
  const nm = lamp.nm[j] as number;
  const own = strength[j] as number;
  // Equal strengths (several reach the cap) are told apart by intensity.
  const intensity = lamp.intensity[j] as number;
  let stronger = 0;
  for (let k = j - 1; k >= first && (lamp.nm[k] as number) >= nm - half; k--) stronger += isStronger(k);
  for (let k = j + 1; k < last && (lamp.nm[k] as number) <= nm + half; k++) stronger += isStronger(k);
  return stronger;

  function isStronger(k: number): number {
    if (lamp.element[k] !== lamp.element[j] || lamp.ion[k] !== lamp.ion[j]) return 0;
    const other = strength[k] as number;
    return other > own || (other === own && (lamp.intensity[k] as number) > intensity) ? 1 : 0;
  }
}
