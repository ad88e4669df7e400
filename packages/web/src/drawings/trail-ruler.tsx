/** The ruler of the trail: a stroke a day by its entries, the span shown bracketed. Dragging or the arrows choose a span. */
import { useState, type PointerEvent } from "react";
import { useToday } from "../shared/session.ts";
import { formatDate } from "../ui/format.ts";
import { DrawingFrame, type DrawingHandle } from "./drawing.tsx";
import { dateMs, monthTicks } from "./ribbon-layout.ts";
import { crisp, linearScale } from "./scale.ts";
import { useWidth } from "./use-width.ts";

interface TrailRulerProps {
  days: readonly { on: string; count: number }[];
  /** Span shown below, dates; null for open ends. */
  fromOn: string | null;
  toOn: string | null;
  /** Today in the lab's zone; this device's idea of it where the page has no better. */
  todayOn?: string;
  onSpan?: (fromOn: string, toOn: string) => void;
  handle?: DrawingHandle;
}

const DAY_MS = 86_400_000;
const dateOf = (ms: number) => new Date(ms).toISOString().slice(0, 10);

export function TrailRuler({ days, fromOn, toOn, todayOn: givenToday, onSpan, handle }: TrailRulerProps) {
  const [ref, width] = useWidth<HTMLDivElement>();
  const todayOn = useToday(givenToday);
  const [drag, setDrag] = useState<[number, number] | null>(null);
  const [chosen, setChosen] = useState<number | null>(null);
  const firstOn = days[0]?.on ?? todayOn;
  const scale = linearScale(dateMs(firstOn) - DAY_MS, dateMs(todayOn) + DAY_MS, width);
  const shownFrom = fromOn ?? firstOn;
  const shownTo = toOn ?? todayOn;
  const most = Math.max(1, ...days.map((day) => day.count));
  const total = days.reduce((sum, day) => sum + day.count, 0);
  const axis = 48;
  const left = drag === null ? scale.at(dateMs(shownFrom)) - 2 : Math.min(...drag);
  const right = drag === null ? scale.at(dateMs(shownTo)) + 2 : Math.max(...drag);
  const label =
    drag === null
      ? `shown: ${formatDate(shownFrom)} to ${shownTo === todayOn ? "today" : formatDate(shownTo)}`
      : `${formatDate(dateOf(scale.value(left)))} to ${formatDate(dateOf(scale.value(right)))}`;
  const fitsLeft = left > label.length * 5.6;
  const place = (event: PointerEvent<HTMLDivElement>) =>
    Math.min(Math.max(event.clientX - event.currentTarget.getBoundingClientRect().left, 0), width);
  const day = chosen === null ? undefined : days[chosen];
  return (
    <DrawingFrame
      handle={handle}
      summary={`${total} entries since ${formatDate(firstOn)}, at most ${most} a day; ${label}.`}
      table={{ caption: "Entries a day", head: ["Day", "Entries"], rows: days.map((entry) => [entry.on, entry.count]) }}
      announcement={
        day === undefined ? undefined : `${formatDate(day.on)}: ${day.count} entries. Enter shows this day.`
      }
      keys={
        onSpan === undefined
          ? undefined
          : {
              count: days.length,
              at: chosen,
              onMove: setChosen,
              onOpen: (at) => onSpan(days[at]?.on ?? firstOn, days[at]?.on ?? todayOn),
            }
      }
    >
      <div
        ref={ref}
        className={onSpan === undefined ? "" : "cursor-crosshair touch-pan-y select-none"}
        onPointerDown={(event) => {
          if (onSpan === undefined || event.button !== 0) return;
          event.currentTarget.setPointerCapture(event.pointerId);
          setDrag([place(event), place(event)]);
        }}
        onPointerMove={(event) => drag !== null && setDrag([drag[0], place(event)])}
        onPointerUp={() => {
          if (drag !== null && onSpan !== undefined && Math.abs(drag[1] - drag[0]) > 3)
            onSpan(dateOf(scale.value(Math.min(...drag))), dateOf(scale.value(Math.max(...drag))));
          setDrag(null);
        }}
        onPointerCancel={() => setDrag(null)}
      >
        <svg width={width} height={axis + 22} aria-hidden="true" className="block overflow-visible">
          {days.map((entry, index) => {
            const x = crisp(scale.at(dateMs(entry.on)));
            const isShown = entry.on >= shownFrom && entry.on <= shownTo;
            const height = Math.max(2, Math.sqrt(entry.count / most) * 38);
            return (
              <line
                key={entry.on}
                x1={x}
                x2={x}
                y1={axis - height}
                y2={axis}
                stroke={index === chosen ? "var(--accent)" : isShown ? "var(--ink)" : "var(--graph)"}
                strokeWidth={index === chosen ? 2 : 1}
              />
            );
          })}
          <line x1={0} x2={width} y1={axis + 0.5} y2={axis + 0.5} stroke="var(--ink)" />
          {monthTicks(scale.from, scale.to, width).map((tick) => (
            <g key={tick.atMs}>
              <line
                x1={crisp(scale.at(tick.atMs))}
                x2={crisp(scale.at(tick.atMs))}
                y1={axis}
                y2={axis + (tick.label === null ? 3 : 6)}
                stroke="var(--ink)"
              />
              {tick.label !== null && scale.at(tick.atMs) > 14 && scale.at(tick.atMs) < width - 14 && (
                <text
                  x={scale.at(tick.atMs)}
                  y={axis + 19}
                  textAnchor="middle"
                  className={`mark ${tick.isYear ? "mark-strong" : "mark-quiet"}`}
                >
                  {tick.label}
                </text>
              )}
            </g>
          ))}
          <path
            d={`M${crisp(Math.max(left, 0))} ${axis}V8.5H${crisp(Math.min(right, width - 1))}V${axis}`}
            fill="none"
            stroke="var(--ink)"
          />
          <text
            x={fitsLeft ? left - 7 : Math.max(left, 0) + 6}
            y={fitsLeft ? 16 : 4}
            textAnchor={fitsLeft ? "end" : "start"}
            className="mark mark-strong mark-halo"
          >
            {label}
          </text>
        </svg>
      </div>
    </DrawingFrame>
  );
}
