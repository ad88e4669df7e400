/**
 * The drift ribbon: every check's error with its U, the tolerance as a band on the ground, the guard band hatched, the
 * events that moved it as pennants. Chart.js draws what was measured; words and the axis are SVG over it.
 */
import type { DriftReply } from "@wavekeep/api/contract";
import type { ChartData, ChartOptions, Plugin } from "chart.js";
import { useMemo, useState } from "react";
import { Scatter } from "react-chartjs-2";
import { useToday, useZone } from "../shared/session.ts";
import {
  formatDate,
  formatDay,
  formatLimit,
  formatShortDate,
  formatNumber,
  formatQuantity,
  MINUS,
  NARROW_SPACE,
} from "../ui/format.ts";
import { bareOptions } from "./chart-setup.ts";
import { DrawingFrame, type DrawingHandle, type TableTwin } from "./drawing.tsx";
import { GutterText } from "./line-strip.tsx";
import {
  dateMs,
  errorSpan,
  joinedRuns,
  monthTicks,
  placeEventFlags,
  seriesBreaks,
  seriesPoints,
  timeSpan,
  type EventFlag,
  type RibbonPoint,
  type RibbonSeries,
} from "./ribbon-layout.ts";
import { crisp, linearScale, type Scale } from "./scale.ts";
import { usePalette, type Palette } from "./use-palette.ts";
import { useWidth } from "./use-width.ts";

const FLAGS = 56;
const PLOT = 200;
const AXIS = 40;

const SERIES_WORDS: Record<RibbonSeries, string> = {
  largest: "Largest error",
  mid: "Error at mid-range",
  scale: "Scale error",
};

export interface DriftRibbonProps {
  drift: DriftReply;
  series: RibbonSeries;
  /** Today in the lab's zone, `yyyy-mm-dd`; this device's idea of it where the page has no better. */
  todayOn?: string;
  /** Enter or a press on a point: the check it stands for. */
  onOpen?: (checkId: string) => void;
  handle?: DrawingHandle;
}

export function driftTable(drift: DriftReply): TableTwin {
  return {
    caption: "Drift of the errors, a row a check",
    head: [
      "Check",
      "Date",
      "Condition",
      "Largest error, nm",
      "U, nm",
      "at, nm",
      "Mid-range error, nm",
      "U mid, nm",
      "Scale error, nm",
      "U scale, nm",
      "Room, °C",
      "Sources",
    ],
    rows: drift.points.map((point) => [
      point.checkNumber,
      point.at,
      point.condition,
      point.largestErrorNm,
      point.largestExpandedUncNm,
      point.largestAtNm,
      point.midErrorNm,
      point.midExpandedUncNm,
      point.scaleErrorNm,
      point.scaleExpandedUncNm,
      point.temperatureC,
      point.sourceLabels.join(", "),
    ]),
  };
}

export function DriftRibbon({ drift, series, todayOn: givenToday, onOpen, handle }: DriftRibbonProps) {
  const [ref, width] = useWidth<HTMLDivElement>();
  const palette = usePalette();
  const zone = useZone();
  const todayOn = useToday(givenToday);
  const [chosen, setChosen] = useState<number | null>(null);
  const isNarrow = width < 560;
  const points = useMemo(() => seriesPoints(drift, series), [drift, series]);
  const span = useMemo(() => timeSpan(drift, todayOn), [drift, todayOn]);
  const errors = useMemo(() => errorSpan(points, drift.toleranceNm), [points, drift.toleranceNm]);
  const time = linearScale(span.fromMs, span.toMs, width);
  const y = linearScale(errors.high, errors.low, PLOT);
  const inView = points.filter((point) => point.atMs >= span.fromMs);
  const events = drift.events
    .map((event, index) => ({ event, index, x: time.at(dateMs(event.happenedOn)) }))
    .filter(({ x }) => x >= 0 && x <= width);
  const flags = placeEventFlags(
    events.map(({ event, x }) => ({ x, textWidth: Math.max(event.title.length * 5.9, eventNote(event).length * 5.2) })),
    width,
  );
  const last = drift.points[drift.points.length - 1];
  const lastPoint = points[points.length - 1];
  const summary =
    last === undefined || lastPoint === undefined
      ? "No check stands in this series yet."
      : `${SERIES_WORDS[series]} of ${points.length} checks, from ${formatDay(drift.points[0]?.at ?? last.at, zone)} to ${formatDay(last.at, zone)}. The last, ${last.checkNumber}, is ${formatQuantity(lastPoint.error, lastPoint.unc, "nm", { signed: true })}; the tolerance is ±${formatLimit(drift.toleranceNm)}.${drift.dueOn === null ? "" : ` Next due on ${formatDate(drift.dueOn)}.`}`;
  const place = chosen === null ? -1 : inView.findIndex((point) => point.index === chosen);
  const chosenPoint = chosen === null ? undefined : drift.points[chosen];
  const sayPoint = (point: RibbonPoint) =>
    `${drift.points[point.index]?.checkNumber ?? ""}, ${formatDay(new Date(point.atMs), zone)}: ${formatQuantity(point.error, point.unc, "nm", { signed: true })}${point.isAsLeft ? ", as left" : ""}.`;
  const nearest = (clientX: number, box: DOMRect) => {
    const px = clientX - box.left;
    return inView.reduce<RibbonPoint | null>(
      (best, point) =>
        best === null || Math.abs(time.at(point.atMs) - px) < Math.abs(time.at(best.atMs) - px) ? point : best,
      null,
    );
  };
  return (
    <DrawingFrame
      handle={handle}
      summary={summary}
      table={driftTable(drift)}
      announcement={place < 0 || inView[place] === undefined ? undefined : sayPoint(inView[place])}
      keys={{
        count: inView.length,
        at: place < 0 ? null : place,
        onMove: (to) => setChosen(to === null ? null : (inView[to]?.index ?? null)),
        onOpen: onOpen === undefined ? undefined : (to) => onOpen(drift.points[inView[to]?.index ?? 0]?.checkId ?? ""),
      }}
    >
      <div
        ref={ref}
        className={onOpen === undefined ? "relative" : "relative cursor-pointer"}
        style={{ height: FLAGS + PLOT + AXIS }}
        onPointerMove={(event) =>
          setChosen(nearest(event.clientX, event.currentTarget.getBoundingClientRect())?.index ?? null)
        }
        onPointerLeave={() => setChosen(null)}
        onClick={() => {
          if (chosenPoint !== undefined && onOpen !== undefined) onOpen(chosenPoint.checkId);
        }}
      >
        <div className="absolute left-0" style={{ top: FLAGS, height: PLOT, width }}>
          <RibbonPlot drift={drift} points={inView} span={span} errors={errors} palette={palette} width={width} />
        </div>
        <svg
          width={width}
          height={FLAGS + PLOT + AXIS}
          aria-hidden="true"
          className="absolute inset-0 overflow-visible"
        >
          <g transform={`translate(0 ${FLAGS})`}>
            {errors.ticks.map((tick) => (
              <GutterText
                key={tick}
                x={0}
                y={crisp(y.at(tick))}
                isNarrow={isNarrow}
                text={tickText(tick, drift.toleranceNm)}
              />
            ))}
            <path d={`M0 ${crisp(y.at(0))}H${width}M0 ${PLOT + 0.5}H${width}`} stroke="var(--ink)" />
            <TimeAxis span={span} time={time} width={width} todayOn={todayOn} dueOn={drift.dueOn} />
          </g>
          {events.map(({ event, index, x }, i) => (
            <EventLine key={event.id} event={event} flag={flags[i]} x={x} isFirst={index === 0} />
          ))}
          {chosenPoint !== undefined && place >= 0 && (
            <PointLabel
              point={inView[place]}
              text={
                inView[place] === undefined
                  ? ""
                  : `${chosenPoint.checkNumber} · ${formatQuantity(inView[place].error, inView[place].unc, "nm", { signed: true })}`
              }
              time={time}
              y={y}
              width={width}
            />
          )}
        </svg>
      </div>
    </DrawingFrame>
  );
}

function tickText(tick: number, tolerance: number): string {
  if (tick === 0) return "0";
  const limit = formatLimit(tolerance).replace(/\u202fnm$/, "");
  const decimals = Math.max((limit.split(".")[1] ?? "").length, 2);
  const text = `${tick > 0 ? "+" : MINUS}${formatNumber(Math.abs(tick), { decimals })}`;
  return Math.abs(tick - tolerance) < 1e-12 ? `${text}${NARROW_SPACE}nm` : text;
}

/** `12 Feb 2026 · +0.16 nm`, or `· no step` where nothing moved. */
function eventNote(event: DriftReply["events"][number]): string {
  const isStill = !event.breaksDrift || (event.stepNm !== null && Math.abs(event.stepNm) < 0.0005);
  const step = isStill
    ? " · no step"
    : event.stepNm === null
      ? ""
      : ` · ${formatNumber(event.stepNm, { decimals: 2, signed: true })}${NARROW_SPACE}nm`;
  return `${formatDate(event.happenedOn)}${step}`;
}

function EventLine({
  event,
  flag,
  x,
  isFirst,
}: {
  event: DriftReply["events"][number];
  flag: EventFlag | undefined;
  x: number;
  isFirst: boolean;
}) {
  const tier = flag?.tier ?? null;
  const top = tier === 1 ? 28 : tier === 0 ? 2 : FLAGS - 6;
  const at = crisp(x);
  const anchor =
    flag?.isTurned === true
      ? ({ x: at - 8, textAnchor: "end" } as const)
      : ({ x: at + 12, textAnchor: "start" } as const);
  return (
    <g data-first={isFirst || undefined}>
      <title>{`${event.title}, ${eventNote(event)}`}</title>
      <line
        x1={at}
        x2={at}
        y1={top}
        y2={FLAGS + PLOT}
        stroke="var(--ink)"
        strokeDasharray={event.breaksDrift ? undefined : "1 2"}
      />
      <path d={`M${at} ${top + 1}h7l-2 3 2 3h-7z`} fill="var(--ink)" />
      {tier !== null && (
        <>
          <text {...anchor} y={top + 9} className="mark mark-strong mark-halo">
            {event.title}
          </text>
          <text {...anchor} y={top + 22} className="mark mark-quiet mark-halo">
            {eventNote(event)}
          </text>
        </>
      )}
    </g>
  );
}

function TimeAxis({
  span,
  time,
  width,
  todayOn,
  dueOn,
}: {
  span: { fromMs: number; toMs: number };
  time: Scale;
  width: number;
  todayOn: string;
  dueOn: string | null;
}) {
  const today = crisp(time.at(dateMs(todayOn)));
  const due = dueOn === null ? null : crisp(time.at(dateMs(dueOn)));
  const dueAnchor = due === null || (due > 36 && due < width - 36) ? "middle" : due < 36 ? "start" : "end";
  return (
    <g>
      {monthTicks(span.fromMs, span.toMs, width).map((tick) => {
        const x = crisp(time.at(tick.atMs));
        return (
          <g key={tick.atMs}>
            <line x1={x} x2={x} y1={PLOT} y2={PLOT + (tick.label === null ? 3 : 6)} stroke="var(--ink)" />
            {tick.label !== null && x > 14 && x < width - 10 && (
              <text
                x={x}
                y={PLOT + 19}
                textAnchor="middle"
                className={`mark ${tick.isYear ? "mark-strong" : "mark-quiet"}`}
              >
                {tick.label}
              </text>
            )}
          </g>
        );
      })}
      <line x1={today} x2={today} y1={0} y2={PLOT} stroke="var(--graph)" strokeDasharray="1 2" />
      <text x={today - 5} y={PLOT - 8} textAnchor="end" className="mark mark-quiet mark-halo">
        today
      </text>
      {due !== null && dueOn !== null && (
        <>
          <path d={`M${due - 4.5} ${PLOT + 9}l4.5 -7.5 4.5 7.5z`} fill="var(--ink)" />
          <text x={due} y={PLOT + 33} textAnchor={dueAnchor} className="mark mark-strong">
            {`due ${formatShortDate(dueOn, todayOn)}`}
          </text>
        </>
      )}
    </g>
  );
}

function PointLabel({
  point,
  text,
  time,
  y,
  width,
}: {
  point: RibbonPoint | undefined;
  text: string;
  time: Scale;
  y: Scale;
  width: number;
}) {
  if (point === undefined) return null;
  const x = time.at(point.atMs);
  const top = FLAGS + y.at(point.error);
  const isRight = x > width - 170;
  return (
    <g>
      <circle cx={x} cy={top} r={6} fill="none" stroke="var(--accent)" />
      <text
        x={isRight ? x - 10 : x + 10}
        y={top - 10}
        textAnchor={isRight ? "end" : "start"}
        className="mark mark-halo"
      >
        {text}
      </text>
    </g>
  );
}

interface PlotProps {
  drift: DriftReply;
  points: readonly RibbonPoint[];
  span: { fromMs: number; toMs: number };
  errors: { low: number; high: number };
  palette: Palette;
  width: number;
}

/** Canvas part: band, limits, guard band, whiskers, joined points. */
function RibbonPlot({ drift, points, span, errors, palette, width }: PlotProps) {
  const { colour } = palette;
  const data = useMemo<ChartData<"scatter">>(() => {
    const breaks = seriesBreaks(drift.events, points);
    return {
      datasets: joinedRuns(points, breaks).map((run) => ({
        data: run.map((point) => ({ x: point.atMs, y: point.error })),
        showLine: true,
        borderColor: colour.ink,
        borderWidth: 1,
        pointRadius: 3,
        pointBorderWidth: run.map((point) => (point.isAsLeft ? 1.25 : 0)),
        pointBorderColor: colour.ink,
        pointBackgroundColor: run.map((point) => (point.isAsLeft ? colour.ground : colour.ink)),
      })),
    };
  }, [drift.events, points, colour]);
  const options = useMemo<ChartOptions<"scatter">>(
    () => bareOptions({ min: span.fromMs, max: span.toMs }, { min: errors.low, max: errors.high }),
    [span, errors],
  );
  const plugins = useMemo(
    () => [ribbonPlugin(drift.toleranceNm, drift.guardBandNm, points, palette)],
    [drift.toleranceNm, drift.guardBandNm, points, palette],
  );
  // Chart.js takes its plugins when it is made: a new band asks for a new chart.
  const key = `${palette.theme} ${palette.isPrint} ${width} ${drift.toleranceNm} ${drift.guardBandNm} ${points.length} ${points[0]?.error ?? 0}`;
  return <Scatter key={key} data={data} options={options} plugins={plugins} aria-hidden="true" />;
}

function hatchPattern(context: CanvasRenderingContext2D, colour: string): CanvasPattern | string {
  const tile = document.createElement("canvas");
  const density = window.devicePixelRatio || 1;
  tile.width = 4 * density;
  tile.height = 4 * density;
  const pen = tile.getContext("2d");
  if (pen === null) return "transparent";
  pen.scale(density, density);
  pen.strokeStyle = colour;
  pen.lineWidth = 0.8;
  pen.beginPath();
  for (const shift of [-4, 0, 4]) {
    pen.moveTo(shift - 1, 5);
    pen.lineTo(shift + 5, -1);
  }
  pen.stroke();
  const pattern = context.createPattern(tile, "repeat");
  pattern?.setTransform(new DOMMatrix().scale(1 / density));
  return pattern ?? "transparent";
}

/** Tolerance band on the ground, limits in graph, guard band hatched, below the points; whiskers of U in quiet above the line. */
function ribbonPlugin(
  tolerance: number,
  guardBand: number | null,
  points: readonly RibbonPoint[],
  { colour }: Palette,
): Plugin<"scatter"> {
  return {
    id: "wavekeep-ribbon",
    beforeDatasetsDraw(chart) {
      const { ctx, chartArea } = chart;
      const y = chart.scales["y"];
      if (y === undefined) return;
      const at = (value: number) => Math.min(Math.max(y.getPixelForValue(value), chartArea.top), chartArea.bottom);
      ctx.save();
      ctx.fillStyle = colour.band;
      ctx.fillRect(chartArea.left, at(tolerance), chartArea.width, at(-tolerance) - at(tolerance));
      if (guardBand !== null && guardBand > 0) {
        ctx.fillStyle = hatchPattern(ctx, colour.graph);
        ctx.fillRect(chartArea.left, at(tolerance), chartArea.width, at(tolerance - guardBand) - at(tolerance));
        ctx.fillRect(
          chartArea.left,
          at(-tolerance + guardBand),
          chartArea.width,
          at(-tolerance) - at(-tolerance + guardBand),
        );
      }
      ctx.strokeStyle = colour.graph;
      ctx.lineWidth = 1;
      for (const limit of [tolerance, -tolerance]) {
        const px = y.getPixelForValue(limit);
        if (px < chartArea.top || px > chartArea.bottom) continue;
        ctx.beginPath();
        ctx.moveTo(chartArea.left, crisp(px));
        ctx.lineTo(chartArea.right, crisp(px));
        ctx.stroke();
      }
      ctx.strokeStyle = colour.quiet;
      const x = chart.scales["x"];
      for (const point of points) {
        const px = crisp(x?.getPixelForValue(point.atMs) ?? 0);
        ctx.beginPath();
        ctx.moveTo(px, y.getPixelForValue(point.error - point.unc));
        ctx.lineTo(px, y.getPixelForValue(point.error + point.unc));
        ctx.stroke();
      }
      ctx.restore();
    },
  };
}
