/**
 * Labels as near their marks as their order and widths allow: the least sum of squared shifts, found by pooling
 * adjacent violators (isotonic regression, weights equal), then held between the edges.
 */

/**
 * @param targets wanted centres, px, ascending
 * @param widths width of each label with its spacing, px; one number for all
 * @param from left edge that no label may cross; `to` the right one
 * @returns centres, ascending, at least half of both widths apart; when they cannot all fit they are squeezed evenly
 */
export function spreadLabels(
  targets: readonly number[],
  widths: number | readonly number[],
  from: number,
  to: number,
): number[] {
  const n = targets.length;
  if (n === 0) return [];
  const widthOf = (i: number) => (typeof widths === "number" ? widths : (widths[i] ?? 0));
  // Offsets of the centres when all labels stand shoulder to shoulder; shifting by them turns spacing into order.
  const offsets: number[] = [widthOf(0) / 2];
  for (let i = 1; i < n; i += 1) offsets.push((offsets[i - 1] ?? 0) + (widthOf(i - 1) + widthOf(i)) / 2);
  const total = (offsets[n - 1] ?? 0) + widthOf(n - 1) / 2;
  const room = to - from;
  if (total > room) return offsets.map((offset) => from + (offset * room) / total);

  const blocks: { sum: number; count: number }[] = [];
  for (let i = 0; i < n; i += 1) {
    blocks.push({ sum: (targets[i] ?? 0) - (offsets[i] ?? 0), count: 1 });
    while (blocks.length > 1) {
      const last = blocks[blocks.length - 1];
      const before = blocks[blocks.length - 2];
      if (last === undefined || before === undefined || before.sum / before.count <= last.sum / last.count) break;
      before.sum += last.sum;
      before.count += last.count;
      blocks.pop();
    }
  }
  const centres: number[] = [];
  for (const block of blocks) {
    const shift = Math.min(Math.max(block.sum / block.count, from), to - total);
    for (let k = 0; k < block.count; k += 1) centres.push(shift + (offsets[centres.length] ?? 0));
  }
  return centres;
}

/**
 * Which lines keep flags where there are more than fit: first those that must (the chosen, the worst), then by rank.
 *
 * @param ranks higher keeps its flag sooner
 * @returns indices, ascending
 */
export function chooseFlagged(
  count: number,
  most: number,
  always: readonly number[],
  ranks: readonly number[],
): number[] {
  const all = Array.from({ length: count }, (_, i) => i);
  if (count <= most) return all;
  const must = new Set(always.filter((i) => i >= 0 && i < count));
  const rest = all.filter((i) => !must.has(i)).sort((a, b) => (ranks[b] ?? 0) - (ranks[a] ?? 0) || a - b);
  return [...must, ...rest].slice(0, Math.max(most, 0)).sort((a, b) => a - b);
}

/** A leader from a flag to its line: a little on, across, on. Points for an SVG polyline. */
export function leaderPoints(flagX: number, flagY: number, lineX: number, lineY: number, stub = 5): string {
  const way = Math.sign(lineY - flagY);
  return `${flagX},${flagY} ${flagX},${flagY + way * stub} ${lineX},${lineY - way * stub} ${lineX},${lineY}`;
}
