/**
 * Where a line is, by the instrument's own way of reading a maximum.
 *
 * highest-sample        the position of the highest sample of the line
 * three-point-parabola  the vertex of the parabola through the highest sample and its neighbours
 * Uncertainty  of what the reading says of the line's centre. Noise: each sample near the top may be the highest, with the probability that
 *              its noise makes it so; the spread of the readings over that, and of the parabola's vertex by the noise of its three samples.
 *              Sampling: where within a step the line falls moves the reading by up to half a step (uniform: step / sqrt 12), the
 *              vertex by what the fitted shape shows when it is moved over a step
 * Limits       noise of neighbours taken as independent in the choice of the highest sample: too wide where it is smoothed, never too small
 */
import type { FittedLine, PositionDefinition } from "../analysis/types.ts";
import type { FittedWindowOfLines } from "../lineshape/fit-line.ts";
import { normalCdf } from "../numeric/distributions.ts";
import type { GroupWindow, Prepared } from "./line-groups.ts";

const mostCandidates = 41;
const reachSigmas = 4.5;

/** Position and uncertainty to put in place of the fitted ones; null where the fitted ones are asked for. */
export function positionBy(
  definition: PositionDefinition,
  prepared: Prepared,
  window: GroupWindow,
  fit: FittedWindowOfLines,
  k: number,
): Pick<FittedLine, "position" | "positionUnc"> | null {
  if (definition === "fitted") return null;
  const line = fit.lines[k]!;
  const { positions, values, unc } = window;
  const near: number[] = [];
  for (let i = 0; i < positions.length; i += 1)
    if (Math.abs(positions[i]! - line.centre) <= 0.75 * line.fwhm) near.push(i);
  if (near.length === 0) return null;
  const top = near.reduce((best, i) => (values[i]! > values[best]! ? i : best));
  const step = stepAt(positions, top);
  const curve = fit.fittedCounts;
  const chances = chancesOfHighest(near, curve, unc);
  let mean = 0;
  for (const { i, chance } of chances) mean += chance * positions[i]!;
  let spread = 0;
  for (const { i, chance } of chances) spread += chance * (positions[i]! - mean) * (positions[i]! - mean);
  if (definition === "highest-sample") {
    return { position: positions[top]!, positionUnc: Math.sqrt(spread + (step * step) / 12) };
  }
  const read = vertexOf(positions, values, top);
  const byNoise = Math.min(vertexVariance(prepared, positions, values, unc, top), (step * step) / 12);
  const bySampling = samplingVariance(window, fit, k, step);
  // Where one sample is the highest for certain, the vertex moves with the noise alone; else it jumps with it.
  const jumps = Math.max(...chances.map(({ chance }) => chance)) > 0.9 ? 0 : spread;
  return { position: read, positionUnc: Math.sqrt(jumps + byNoise + bySampling) };
}

function stepAt(positions: Float64Array, i: number): number {
  const left = Math.max(0, i - 1);
  const right = Math.min(positions.length - 1, i + 1);
  return (positions[right]! - positions[left]!) / (right - left);
}

/** The chance of each sample to be the highest, given the fitted curve and the noise: integrals over the highest value, by a fixed rule. */
function chancesOfHighest(
  near: readonly number[],
  curve: Float64Array,
  unc: Float64Array,
): { i: number; chance: number }[] {
  const best = near.reduce((a, b) => (curve[b]! > curve[a]! ? b : a));
  const limit = curve[best]! - reachSigmas * unc[best]!;
  const rivals = near
    .filter((i) => curve[i]! + reachSigmas * unc[i]! > limit)
    .sort((a, b) => curve[b]! - curve[a]!)
    .slice(0, mostCandidates);
  const from = limit;
  const to = curve[best]! + (reachSigmas + 1) * unc[best]!;
  const nodes = 48;
  const chances = rivals.map((i) => ({ i, chance: 0 }));
  const below = rivals.map(() => 1);
  let total = 0;
  for (let node = 0; node < nodes; node += 1) {
    const upper = from + ((to - from) * (node + 1)) / nodes;
    const next = rivals.map((i) => normalCdf((upper - curve[i]!) / unc[i]!));
    rivals.forEach((_, a) => {
      let product = next[a]! - below[a]! * (node === 0 ? 0 : 1);
      rivals.forEach((_, b) => {
        if (b !== a) product *= node === 0 ? next[b]! : 0.5 * (below[b]! + next[b]!);
      });
      chances[a]!.chance += product;
      total += product;
    });
    next.forEach((value, a) => {
      below[a] = value;
    });
  }
  for (const one of chances) one.chance /= total > 0 ? total : 1;
  return chances;
}

/** Vertex of the parabola through sample `top` and its neighbours; the sample itself where they show none. */
function vertexOf(positions: Float64Array, values: Float64Array, top: number): number {
  if (top < 1 || top + 1 >= positions.length) return positions[top]!;
  const left = positions[top - 1]! - positions[top]!;
  const right = positions[top + 1]! - positions[top]!;
  const risesLeft = (values[top - 1]! - values[top]!) / left;
  const risesRight = (values[top + 1]! - values[top]!) / right;
  const bend = (risesRight - risesLeft) / (right - left);
  if (!(bend < 0)) return positions[top]!;
  const vertex = -(risesLeft - bend * left) / (2 * bend);
  return positions[top]! + Math.max(left, Math.min(right, vertex));
}

/** Of the vertex by the noise of its samples, their correlation by lag included. */
function vertexVariance(
  prepared: Prepared,
  positions: Float64Array,
  values: Float64Array,
  unc: Float64Array,
  top: number,
): number {
  if (top < 1 || top + 1 >= positions.length) return Infinity;
  const moved = values.slice(top - 1, top + 2);
  const at = positions.subarray(top - 1, top + 2);
  const slopes = [0, 1, 2].map((j) => {
    const h = 1e-3 * unc[top]!;
    const keep = moved[j]!;
    moved[j] = keep + h;
    const up = vertexOf(at, moved, 1);
    moved[j] = keep - h;
    const down = vertexOf(at, moved, 1);
    moved[j] = keep;
    return ((up - down) / (2 * h)) * unc[top - 1 + j]!;
  });
  let variance = 0;
  for (let a = 0; a < 3; a += 1) {
    for (let b = 0; b < 3; b += 1) {
      const lag = Math.abs(a - b);
      variance += slopes[a]! * slopes[b]! * (lag === 0 ? 1 : (prepared.autocorrelation[lag - 1] ?? 0));
    }
  }
  return Math.max(0, variance);
}

/** How far the vertex strays from the centre of the fitted curve when the line is moved over one step; about its mean. */
function samplingVariance(window: GroupWindow, fit: FittedWindowOfLines, k: number, step: number): number {
  const { positions } = window;
  const centre = fit.lines[k]!.centre;
  const phases = 8;
  const at = new Float64Array(3);
  const values = new Float64Array(3);
  const off = new Float64Array(phases);
  for (let phase = 0; phase < phases; phase += 1) {
    const shift = ((phase + 0.5) / phases - 0.5) * step;
    let middle = centre + shift;
    // The sample that is highest at this phase.
    for (const other of [middle - step, middle + step])
      if (curveAt(positions, fit.fittedCounts, other) > curveAt(positions, fit.fittedCounts, middle)) middle = other;
    for (let j = 0; j < 3; j += 1) {
      at[j] = middle + (j - 1) * step;
      values[j] = curveAt(positions, fit.fittedCounts, at[j]!);
    }
    off[phase] = vertexOf(at, values, 1) - centre;
  }
  let mean = 0;
  for (const value of off) mean += value / phases;
  let variance = 0;
  for (const value of off) variance += ((value - mean) * (value - mean)) / phases;
  return variance;
}

/** The fitted curve between its samples, by the cubic through four of them. */
function curveAt(positions: Float64Array, curve: Float64Array, at: number): number {
  let i = 1;
  while (i + 3 < positions.length && positions[i + 1]! < at) i += 1;
  i = Math.max(0, Math.min(positions.length - 4, i - 1));
  let sum = 0;
  for (let a = i; a < i + 4; a += 1) {
    let weight = 1;
    for (let b = i; b < i + 4; b += 1) if (b !== a) weight *= (at - positions[b]!) / (positions[a]! - positions[b]!);
    sum += weight * curve[a]!;
  }
  return sum;
}
