/** Rulers: from values to pixels of the screen, and where their ticks stand. Pure. */

export interface Scale {
  from: number;
  to: number;
  width: number;
  /** Value to px from the left edge. */
  at: (value: number) => number;
  /** px to value. */
  value: (px: number) => number;
}

/** A straight ruler of `width` px from `from` to `to`. */
export function linearScale(from: number, to: number, width: number): Scale {
  const span = to - from === 0 ? 1 : to - from;
  return {
    from,
    to,
    width,
    at: (value) => ((value - from) / span) * width,
    value: (px) => from + (px / Math.max(width, 1)) * span,
  };
}

/** Lines lie on half pixels. */
export const crisp = (px: number): number => Math.floor(px) + 0.5;

export interface RulerTick {
  value: number;
  /** Rank: 0 smallest, 2 largest. */
  rank: 0 | 1 | 2;
}

/** Ticks of a wavelength ruler at 10, 50 and 100 nm (ranks 0, 1, 2); finer or coarser by tens where the span asks for it. */
export function wavelengthTicks(fromNm: number, toNm: number, width: number): RulerTick[] {
  const span = Math.abs(toNm - fromNm);
  if (!(span > 0) || !(width > 0)) return [];
  let step = 10;
  while ((span / step) * 4 > width) step *= 10;
  while (span / step < 8 && step > 1e-3) step /= 10;
  const first = Math.ceil(Math.min(fromNm, toNm) / step - 1e-9);
  const last = Math.floor(Math.max(fromNm, toNm) / step + 1e-9);
  const ticks: RulerTick[] = [];
  for (let i = first; i <= last; i += 1)
    ticks.push({ value: Number((i * step).toPrecision(12)), rank: i % 10 === 0 ? 2 : i % 5 === 0 ? 1 : 0 });
  return ticks;
}

/** Labelled ticks: round steps (1, 2, 5 times a power of ten) at least `leastPx` apart. */
export function roundTicks(
  from: number,
  to: number,
  width: number,
  leastPx = 80,
): { ticks: number[]; decimals: number } {
  const span = to - from;
  if (!(span > 0) || !(width > 0)) return { ticks: [], decimals: 0 };
  const raw = (span * leastPx) / width;
  const power = 10 ** Math.floor(Math.log10(raw));
  const step = [1, 2, 5, 10].map((m) => m * power).find((candidate) => candidate >= raw * (1 - 1e-9)) ?? 10 * power;
  const ticks: number[] = [];
  for (let i = Math.ceil(from / step - 1e-9); i * step <= to + step * 1e-9; i += 1)
    ticks.push(Number((i * step).toPrecision(12)));
  return { ticks, decimals: Math.max(0, -Math.floor(Math.log10(step) + 1e-9)) };
}

export type CountsScale = "root" | "linear" | "log";

/** Counts to the drawn height before it is stretched to the register: root keeps the sign, log holds at its floor. */
export function countsTransform(kind: CountsScale, logFloor = 1): (counts: number) => number {
  if (kind === "root") return (counts) => Math.sign(counts) * Math.sqrt(Math.abs(counts));
  if (kind === "log") return (counts) => Math.log10(Math.max(counts, logFloor));
  return (counts) => counts;
}

/** Ticks of the counts' ruler: squares of even steps on a root scale, decades on a log scale. */
export function countsTicks(kind: CountsScale, max: number, height: number, logFloor = 1): number[] {
  if (!(max > 0)) return [0];
  if (kind === "log") {
    const ticks: number[] = [];
    for (let power = Math.ceil(Math.log10(logFloor) - 1e-9); 10 ** power <= max; power += 1) ticks.push(10 ** power);
    return ticks;
  }
  const top = kind === "root" ? Math.sqrt(max) : max;
  const { ticks } = roundTicks(0, top, height, 44);
  return kind === "root" ? ticks.map((tick) => tick * tick) : ticks;
}

/**
 * Minimum and maximum kept per pixel column, in the order they were measured: what can be seen of a long trace at this
 * width, and no more. One sample beyond each edge is kept, so that the trace leaves the frame where it should.
 *
 * @param x ascending
 * @returns indices into `x`, ascending
 */
export function thinToColumns(
  x: readonly number[],
  y: readonly number[],
  from: number,
  to: number,
  width: number,
): number[] {
  const n = Math.min(x.length, y.length);
  if (n === 0 || !(to > from) || !(width > 0)) return [];
  let first = 0;
  while (first < n - 1 && (x[first + 1] ?? 0) < from) first += 1;
  let last = n - 1;
  while (last > 0 && (x[last - 1] ?? 0) > to) last -= 1;
  if (last - first + 1 <= width * 2) return Array.from({ length: Math.max(last - first + 1, 0) }, (_, i) => first + i);
  const kept: number[] = [];
  let column = Number.NaN;
  let low = first;
  let high = first;
  const flush = () => {
    if (Number.isNaN(column)) return;
    if (low === high) kept.push(low);
    else kept.push(Math.min(low, high), Math.max(low, high));
  };
  for (let i = first; i <= last; i += 1) {
    const here = Math.floor((((x[i] ?? 0) - from) / (to - from)) * width);
    if (here !== column) {
      flush();
      column = here;
      low = i;
      high = i;
    } else {
      if ((y[i] ?? 0) < (y[low] ?? 0)) low = i;
      if ((y[i] ?? 0) > (y[high] ?? 0)) high = i;
    }
  }
  flush();
  return kept;
}
