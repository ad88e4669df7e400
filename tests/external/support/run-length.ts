/**
 * Average run lengths of charts with known limits for independent normal values, shift in standard deviations.
 *
 * Shewhart    1 / P(beyond the limits)
 * Rules       Markov chain over the zones of the last four values and the run on one side (C. W. Champ, W. H. Woodall, Technometrics 29 (1987) 393),
 *             with the rules written down here once more, independent of the core
 * EWMA, CUSUM integral equations on Gauss-Legendre nodes (S. V. Crowder, Technometrics 29 (1987) 401; E. S. Page 1954)
 */
import { normalCdf, normalDensity, solveLeastSquares } from "../../../packages/core/src/numeric/index.ts";

/** Solution of a square system, row-major, for a right side of ones. */
function solveForOnes(system: Float64Array, n: number): Float64Array {
  return solveLeastSquares(system, n, n, new Float64Array(n).fill(1), null).coefficients;
}

function gaussLegendre(n: number, low: number, high: number): { x: number[]; w: number[] } {
  const x: number[] = [];
  const w: number[] = [];
  for (let i = 0; i < n; i++) {
    let z = Math.cos((Math.PI * (i + 0.75)) / (n + 0.5));
    let slope = 0;
    for (let round = 0; round < 30; round++) {
      let p1 = 1;
      let p2 = 0;
      for (let j = 0; j < n; j++) [p1, p2] = [((2 * j + 1) * z * p1 - j * p2) / (j + 1), p1];
      slope = (n * (z * p1 - p2)) / (z * z - 1);
      z -= p1 / slope;
    }
    x.push(low + ((high - low) * (1 + z)) / 2);
    w.push((high - low) / ((1 - z * z) * slope * slope));
  }
  return { x, w };
}

export function shewhartRunLength(shift: number, limit = 3): number {
  return 1 / (normalCdf(-limit - shift) + normalCdf(-limit + shift));
}

/** Zero-state, exact steady-state limits ± width · sqrt(lambda/(2 - lambda)). */
export function ewmaRunLength(lambda: number, width: number, shift: number, nodes = 120): number {
  const h = width * Math.sqrt(lambda / (2 - lambda));
  const { x, w } = gaussLegendre(nodes, -h, h);
  const kernel = (from: number, j: number) =>
    (w[j]! * normalDensity((x[j]! - (1 - lambda) * from) / lambda - shift)) / lambda;
  const system = new Float64Array(nodes * nodes);
  for (let i = 0; i < nodes; i++)
    for (let j = 0; j < nodes; j++) system[i * nodes + j] = (i === j ? 1 : 0) - kernel(x[i]!, j);
  return solveForOnes(system, nodes).reduce((sum, length, j) => sum + length * kernel(0, j), 1);
}

export function cusumRunLengthOneSided(k: number, h: number, shift: number, nodes = 120): number {
  const { x, w } = gaussLegendre(nodes, 0, h);
  const n = nodes + 1;
  const system = new Float64Array(n * n);
  const fill = (row: number, from: number) => {
    for (let j = 0; j < nodes; j++)
      system[row * n + j] = (row === j ? 1 : 0) - w[j]! * normalDensity(x[j]! - from + k - shift);
    system[row * n + nodes] = (row === nodes ? 1 : 0) - normalCdf(k - from - shift);
  };
  for (let i = 0; i < nodes; i++) fill(i, x[i]!);
  fill(nodes, 0);
  return solveForOnes(system, n)[nodes]!;
}

export function cusumRunLength(k: number, h: number, shift: number): number {
  // Against a shift of 2 s and more the other side runs longer than 1e12: its system is singular to working precision.
  const other = shift >= 2 ? 0 : 1 / cusumRunLengthOneSided(k, h, -shift);
  return 1 / (1 / cusumRunLengthOneSided(k, h, shift) + other);
}

/** A value's zone: how many whole standard deviations from the centre, at most 2, and its side. */
interface State {
  /** Last four values, oldest first: 0 within one s, else signed 1 or 2. */
  zones: number[];
  side: number;
  run: number;
}

export function zoneRulesRunLength(rules: readonly number[], shift: number): number {
  const outcomes = [-2, -1, -0, 0, 1, 2].map((zone, index) => {
    const low = [-3, -2, -1, 0, 1, 2][index]!;
    const open = !rules.includes(1);
    const to = open && index === 5 ? Infinity : low + 1;
    const from = open && index === 0 ? -Infinity : low;
    return { zone, side: index < 3 ? -1 : 1, probability: normalCdf(to - shift) - normalCdf(from - shift) };
  });
  const signals = ({ zones, run }: State): boolean =>
    [1, -1].some(
      (side) =>
        (rules.includes(2) &&
          zones.at(-1)! * side >= 2 &&
          zones.slice(-3).filter((zone) => zone * side >= 2).length >= 2) ||
        (rules.includes(3) && zones.at(-1)! * side >= 1 && zones.filter((zone) => zone * side >= 1).length >= 4),
    ) ||
    (rules.includes(4) && run >= 8);
  // Five zones are judged, four are kept; of the older two only the side beyond one s matters.
  const keep = ({ zones, side, run }: State): State => ({
    zones: zones.slice(-4).map((zone, i) => (i < 2 ? Math.sign(zone) : zone)),
    side: rules.includes(4) ? side : 0,
    run: rules.includes(4) ? run : 0,
  });
  const index = new Map<string, number>();
  const states: State[] = [];
  const indexOf = (state: State): number => {
    const key = JSON.stringify(state);
    const known = index.get(key);
    if (known !== undefined) return known;
    index.set(key, states.length);
    states.push(state);
    return states.length - 1;
  };
  indexOf(keep({ zones: [0, 0, 0, 0], side: 0, run: 0 }));
  const moves: [number, number][][] = [];
  for (let s = 0; s < states.length; s++) {
    const from = states[s]!;
    const own: [number, number][] = [];
    for (const { zone, side, probability } of outcomes) {
      const next = { zones: [...from.zones, zone + 0], side, run: side === from.side ? from.run + 1 : 1 };
      if (!signals(next)) own.push([indexOf(keep(next)), probability]);
    }
    moves.push(own);
  }
  const lengths = new Float64Array(states.length).fill(1);
  for (let round = 0, change = 1; round < 20000 && change > 1e-9; round++) {
    change = 0;
    for (let s = states.length - 1; s >= 0; s--) {
      let length = 1;
      for (const [to, probability] of moves[s]!) length += probability * lengths[to]!;
      change = Math.max(change, Math.abs(length - lengths[s]!) / length);
      lengths[s] = length;
    }
  }
  return lengths[0]!;
}
