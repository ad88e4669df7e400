/**
 * Second order: a line seen at twice its wavelength, where the capture reaches far enough.
 *
 * Grating  m lambda = d (sin alpha + sin beta): order 2 of lambda falls where order 1 of 2 lambda does, in air both
 * Claimed  only on lines without a name, only for the lamp's strongest lines, only where every other explanation is gone;
 *          at least two lines must agree, and where a first order lies in the capture it must be there and brighter
 */
import type { LineList, ReferenceLine } from "../analysis/types.ts";
import type { Naming } from "./name-lines.ts";
import type { Problem } from "./problem.ts";
import { referenceTable, wavelengthOnAxis } from "./reference-table.ts";
import { correctedNm, endNm } from "./score.ts";

/** Shortest wavelength whose second order is looked for, nm: air and fibres pass less below. */
const shortestNm = 200;
const leastStrength = 0.5;
const leastLines = 2;
const gateSds = 2.5;
const gateShare = 0.1;

export interface SecondOrderLine {
  line: number;
  reference: ReferenceLine;
}

/** Lines without a name that are a strong line's second order. */
export function findSecondOrder(
  input: { lineList: LineList; elements: readonly string[] },
  problem: Problem,
  table: { nm: Float64Array },
  naming: Naming,
): SecondOrderLine[] {
  const { fit } = naming;
  const highest = Math.max(problem.baseFirstNm, problem.baseLastNm) + problem.bounds.endNm;
  if (highest < 2 * shortestNm) return [];
  const lowest = Math.min(...[-1, 1].map((t) => endNm(problem, fit.correction, t)));
  const strong = referenceTable(input.lineList, input.elements, [], shortestNm, highest, problem.meaning);
  const found: SecondOrderLine[] = [];
  for (let i = 0; i < problem.count; i++) {
    if ((naming.reference[i] as number) >= 0 || problem.usable[i] === 0) continue;
    const nm = correctedNm(problem, fit.correction, i);
    const axis = fit.axisUncNm[i] as number;
    const own = problem.lineUncNm[i] as number;
    const sd = Math.sqrt(axis * axis + own * own + fit.scatterNm * fit.scatterNm);
    const gate = Math.min(gateSds * sd, gateShare * problem.fwhmNm);
    // A line of first order close by is the likelier explanation.
    if (table.nm.some((first) => Math.abs(first - nm) < 0.75 * problem.fwhmNm)) continue;
    const candidates = strong.lines.filter((line, j) => {
      const seenAt = 2 * wavelengthOnAxis(line, problem.meaning);
      return (strong.strength[j] as number) >= leastStrength && Math.abs(seenAt - nm) <= gate;
    });
    if (candidates.length !== 1) continue;
    const reference = candidates[0] as ReferenceLine;
    const firstOrderSeen = wavelengthOnAxis(reference, problem.meaning) >= lowest;
    if (!firstOrderSeen || firstOrderIsBrighter(problem, naming, reference, i)) found.push({ line: i, reference });
  }
  return found.length >= leastLines ? found : [];
}

/** Whether the first order was found, brighter than its second. */
function firstOrderIsBrighter(problem: Problem, naming: Naming, reference: ReferenceLine, i: number): boolean {
  const nm = wavelengthOnAxis(reference, problem.meaning);
  for (let k = 0; k < problem.count; k++) {
    if (Math.abs(correctedNm(problem, naming.fit.correction, k) - nm) > 0.3 * problem.fwhmNm) continue;
    return problem.saturated[k] === 1 || (problem.heightCounts[k] as number) > (problem.heightCounts[i] as number);
  }
  return false;
}
