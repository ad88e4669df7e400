/** Tolerance used: per cent, then a meter 64 x 12 that ends at the limit. */
import type { StatusState } from "../ui/status.tsx";
import { formatPercent } from "../ui/format.ts";
import { Hatch, useHatch } from "./hatch.tsx";

interface ToleranceUsedProps {
  /** |error| over tolerance; null: nothing was judged. */
  used: number | null;
  /** Share of the tolerance that the guard band takes; null or 0 for simple acceptance. */
  guardShare: number | null;
  /** Its colour: near and out in theirs, everything else ink. */
  state?: StatusState;
  /** The meter without its number. */
  bare?: boolean;
}

export function ToleranceUsed({ used, guardShare, state, bare = false }: ToleranceUsedProps) {
  const hatch = useHatch();
  if (used === null) return <span className="text-quiet">none yet</span>;
  const isOver = used > 1;
  const colour =
    isOver || state === "out-of-tolerance"
      ? "var(--out)"
      : state === "near-limit" || state === "inconclusive"
        ? "var(--near)"
        : "var(--ink)";
  const guard = Math.min(Math.max(guardShare ?? 0, 0), 1) * 64;
  return (
    <span className="inline-flex items-center whitespace-nowrap">
      {!bare && <span className="w-[38px] text-right">{formatPercent(used)}</span>}
      <svg
        width={76}
        height={12}
        className={`flex-none ${bare ? "" : "ml-[10px]"}`}
        aria-hidden={bare ? undefined : true}
        role={bare ? "img" : undefined}
        aria-label={bare ? `${formatPercent(used)} of the tolerance used` : undefined}
      >
        <Hatch id={hatch} size={3} />
        {guard > 0 && <rect x={64 - guard} y={1.5} width={guard} height={9} fill={`url(#${hatch})`} />}
        <line x1={0} x2={64} y1={6} y2={6} stroke="var(--graph)" strokeWidth={1} shapeRendering="crispEdges" />
        <rect x={0} y={4.5} width={Math.min(used, 1) * 64} height={3} fill={colour} />
        <rect x={63} y={0.5} width={1} height={11} fill="var(--ink)" />
        {isOver && <rect x={68} y={2.5} width={7} height={7} fill="var(--out)" />}
      </svg>
    </span>
  );
}
