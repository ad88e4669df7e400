/** The ruler of days: a tick a day, weekends heavier, flags for what is due, a triangle for today. */
import { useState } from "react";
import { useNavigate } from "react-router";
import { formatShortDate } from "../ui/format.ts";
import { DrawingFrame, type DrawingHandle } from "./drawing.tsx";
import { crisp, linearScale } from "./scale.ts";
import { spreadLabels } from "./spread.ts";
import { useWidth } from "./use-width.ts";

export interface DueItem {
  label: string;
  /** `in 6 days`, `review due`; empty for what is far away. */
  note: string;
  /** `yyyy-mm-dd` */
  on: string;
  to: string;
}

interface DaysRulerProps {
  items: readonly DueItem[];
  todayOn: string;
  /** Days shown before and after today. */
  before?: number;
  after?: number;
  handle?: DrawingHandle;
}

const DAY_MS = 86_400_000;
const noon = (on: string) => Date.parse(`${on}T12:00:00Z`);
const MONTHS = [
  "January",
  "February",
  "March",
  "April",
  "May",
  "June",
  "July",
  "August",
  "September",
  "October",
  "November",
  "December",
];

export function DaysRuler({ items, todayOn, before = 9, after = 38, handle }: DaysRulerProps) {
  const [ref, width] = useWidth<HTMLDivElement>();
  const navigate = useNavigate();
  const [chosen, setChosen] = useState<number | null>(null);
  const reach = width < 560 ? Math.round(after / 2) : after;
  const fromMs = noon(todayOn) - before * DAY_MS;
  const days = Array.from({ length: before + reach + 1 }, (_, i) => new Date(fromMs + i * DAY_MS));
  const scale = linearScale(fromMs - DAY_MS / 2, noon(todayOn) + (reach + 0.5) * DAY_MS, width);
  const shown = items
    .map((item) => ({ item, x: scale.at(noon(item.on)) }))
    .filter(({ x }) => x >= 0 && x <= width)
    .sort((a, b) => a.x - b.x);
  const centres = spreadLabels(
    shown.map(({ x }) => x),
    shown.map(({ item }) => Math.max(item.label.length * 6.2, item.note.length * 5.4, 24) + 12),
    0,
    width,
  );
  const axis = 44;
  const todayX = scale.at(noon(todayOn));
  // Where a month begins beside today, today's own label names the day instead of running into the month's.
  const isBesideMonth = days.some((day) => day.getUTCDate() === 1 && Math.abs(scale.at(day.getTime()) - todayX) <= 44);
  const today = new Date(noon(todayOn));
  const todayText = isBesideMonth ? `today, ${today.getUTCDate()} ${MONTHS[today.getUTCMonth()] ?? ""}` : "today";
  return (
    <DrawingFrame
      handle={handle}
      summary={
        shown.length === 0
          ? "Nothing is due in the days shown."
          : `Due: ${shown.map(({ item }) => `${item.label}, ${formatShortDate(item.on, todayOn)}${item.note === "" ? "" : `, ${item.note}`}`).join("; ")}.`
      }
      table={{
        caption: "What is due",
        head: ["What", "Due", "Note"],
        rows: items.map((item) => [item.label, item.on, item.note]),
      }}
      announcement={
        chosen === null
          ? undefined
          : `${shown[chosen]?.item.label ?? ""}, ${shown[chosen] === undefined ? "" : formatShortDate(shown[chosen].item.on, todayOn)}, ${shown[chosen]?.item.note ?? ""}`
      }
      keys={{
        count: shown.length,
        at: chosen,
        onMove: setChosen,
        onOpen: (place) => void navigate(shown[place]?.item.to ?? "/today"),
      }}
    >
      <div ref={ref}>
        <svg width={width} height={axis + 42} aria-hidden="true" className="block overflow-visible">
          <line x1={0} x2={width} y1={axis + 0.5} y2={axis + 0.5} stroke="var(--ink)" />
          {days.map((day) => {
            const x = crisp(scale.at(day.getTime()));
            const weekday = day.getUTCDay();
            const isFirst = day.getUTCDate() === 1;
            const isMonday = weekday === 1;
            return (
              <g key={day.getTime()}>
                {(weekday === 6 || weekday === 0) && (
                  <line
                    x1={scale.at(day.getTime() - DAY_MS / 2)}
                    x2={scale.at(day.getTime() + DAY_MS / 2)}
                    y1={axis + 0.5}
                    y2={axis + 0.5}
                    stroke="var(--graph)"
                    strokeWidth={3}
                  />
                )}
                <line
                  x1={x}
                  x2={x}
                  y1={axis}
                  y2={axis + (isMonday ? 6 : isFirst ? 18 : 3)}
                  stroke={isFirst && !isMonday ? "var(--graph)" : "var(--ink)"}
                />
                {isMonday && (
                  <text x={x} y={axis + 21} textAnchor="middle" className={`mark ${isFirst ? "" : "mark-quiet"}`}>
                    {day.getUTCDate()}
                  </text>
                )}
                {isFirst && x < width - 20 && Math.abs(x - todayX) > 44 && (
                  <text x={x} y={axis + 35} textAnchor="middle" className="mark mark-strong mark-halo">
                    {MONTHS[day.getUTCMonth()]}
                  </text>
                )}
              </g>
            );
          })}
          <TodayMark x={crisp(todayX)} y={axis} text={todayText} />
          {shown.map(({ item, x }, i) => {
            const centre = centres[i] ?? x;
            const isStraight = Math.abs(centre - x) < 3;
            return (
              <g key={`${item.label} ${item.on}`} className="cursor-pointer" onClick={() => void navigate(item.to)}>
                <path
                  d={
                    isStraight
                      ? `M${crisp(x)} ${axis - 13}V${axis}`
                      : `M${crisp(centre)} ${axis - 13}v3L${crisp(x)} ${axis - 4}V${axis}`
                  }
                  fill="none"
                  stroke="var(--ink)"
                />
                {item.note !== "" && (
                  <text
                    x={isStraight ? x : centre}
                    y={axis - 18}
                    textAnchor="middle"
                    className="mark mark-quiet mark-halo"
                  >
                    {item.note}
                  </text>
                )}
                <text
                  x={isStraight ? x : centre}
                  y={axis - (item.note === "" ? 18 : 31)}
                  textAnchor="middle"
                  className="mark mark-strong mark-halo"
                  textDecoration={i === chosen ? "underline" : undefined}
                >
                  {item.label}
                </text>
              </g>
            );
          })}
        </svg>
      </div>
    </DrawingFrame>
  );
}

function TodayMark({ x, y, text }: { x: number; y: number; text: string }) {
  return (
    <g>
      <path d={`M${x - 4.5} ${y + 9}l4.5 -7.5 4.5 7.5z`} fill="var(--ink)" />
      <text x={x} y={y + 35} textAnchor="middle" className="mark mark-strong mark-halo">
        {text}
      </text>
    </g>
  );
}
