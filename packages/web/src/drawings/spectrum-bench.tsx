/**
 * The spectrum bench: registers on one wavelength axis. Errors of the lines, their flags with leaders up to the bars and
 * down to the peaks, the spectrum with what was fitted, what the fits leave below. Chart.js draws what was measured;
 * strip, flags and rulers are SVG over the same axis.
 */
import type { Analysis, SpectrumDrawing } from "@wavekeep/core";
import { useMemo, useRef, useState, type KeyboardEvent, type PointerEvent } from "react";
import { formatCount, formatNumber } from "../ui/format.ts";
import { BenchPlot } from "./bench-plot.tsx";
import {
  axisText,
  benchRegisters,
  countsRuler,
  namedLines,
  netDrawing,
  panBy,
  SIGMA_PX,
  zoomAbout,
  type Registers,
} from "./bench-layout.ts";
import { DrawingFrame, type DrawingHandle } from "./drawing.tsx";
import { Flags, planFlags, type FlagPlan } from "./flags.tsx";
import { GutterText, lineSentence, nearestMark, StripRegister, stripSummary, stripTable } from "./line-strip.tsx";
import { crisp, linearScale, roundTicks, wavelengthTicks, type CountsScale, type Scale } from "./scale.ts";
import { layoutStrip } from "./strip-layout.ts";
import { usePalette } from "./use-palette.ts";
import { useWidth } from "./use-width.ts";
import { wavelengthHue } from "./wavelength-hue.ts";

export interface SpectrumBenchProps {
  analysis: Analysis;
  drawing: SpectrumDrawing;
  /** Index into `analysis.lines`. */
  chosen: number | null;
  onChoose: (index: number | null) => void;
  scale?: CountsScale;
  /** Enter on a line. */
  onOpen?: (index: number) => void;
  /** Links of the page: table twin, PNG, CSV. */
  handle?: DrawingHandle;
}

export function SpectrumBench({
  analysis,
  drawing: given,
  chosen,
  onChoose,
  scale: kind = "root",
  onOpen,
  handle,
}: SpectrumBenchProps) {
  const [ref, width] = useWidth<HTMLDivElement>();
  const palette = usePalette();
  const isNarrow = width < 560;
  const registers = benchRegisters(isNarrow);
  const drawing = useMemo(() => netDrawing(given), [given]);
  const whole = useMemo<[number, number]>(() => [drawing.x[0] ?? 0, drawing.x[drawing.x.length - 1] ?? 1], [drawing]);
  const [zoomed, setZoomed] = useState<{ of: SpectrumDrawing; view: [number, number] } | null>(null);
  const view = zoomed !== null && zoomed.of === drawing ? zoomed.view : whole;
  const setView = (next: [number, number] | null) => setZoomed(next === null ? null : { of: drawing, view: next });
  const scale = useMemo(() => linearScale(view[0], view[1], width), [view, width]);
  const named = useMemo(() => namedLines(analysis), [analysis]);
  const lines = useMemo(() => named.map((entry) => entry.line), [named]);
  const layout = useMemo(() => layoutStrip(lines, scale, registers.half), [lines, scale, registers.half]);
  const ruler = useMemo(
    () => countsRuler(kind, drawing, registers.spectrumHeight, analysis.noiseCounts),
    [kind, drawing, registers.spectrumHeight, analysis.noiseCounts],
  );
  const chosenPlace = chosen === null ? -1 : named.findIndex((entry) => entry.index === chosen);
  const marked = chosenPlace >= 0 ? chosenPlace : layout.worst;
  const plan = useMemo(
    () =>
      planFlags(lines, scale, {
        most: isNarrow ? 8 : undefined,
        chosen: chosenPlace < 0 ? null : chosenPlace,
        worst: layout.worst,
        ranks: named.map((entry) => entry.peakHeightCounts),
      }),
    [lines, scale, isNarrow, chosenPlace, layout.worst, named],
  );
  const choose = (place: number | null) => {
    const entry = place === null ? undefined : named[place];
    onChoose(entry?.index ?? null);
    if (entry !== undefined && (entry.line.wavelengthNm < view[0] || entry.line.wavelengthNm > view[1])) {
      const share = (entry.line.wavelengthNm - (view[0] + view[1]) / 2) / (view[1] - view[0]);
      setView(panBy(view, whole, share));
    }
  };
  const brush = useBrush(scale, registers, setView, (px) => choose(nearestMark(layout, px)));
  const onKey = (event: KeyboardEvent): boolean => {
    const about =
      chosenPlace >= 0 ? (lines[chosenPlace]?.wavelengthNm ?? (view[0] + view[1]) / 2) : (view[0] + view[1]) / 2;
    if (event.key === "+" || event.key === "=") setView(zoomAbout(view, whole, about, 0.5));
    else if (event.key === "-" || event.key === "\u2212") setView(zoomAbout(view, whole, about, 2));
    else if (event.key === "0") setView(null);
    else if (event.shiftKey && event.key === "ArrowLeft") setView(panBy(view, whole, -0.25));
    else if (event.shiftKey && event.key === "ArrowRight") setView(panBy(view, whole, 0.25));
    else return false;
    return true;
  };
  const chosenLine = chosenPlace < 0 ? undefined : lines[chosenPlace];
  const isZoomed = view[0] !== whole[0] || view[1] !== whole[1];
  return (
    <DrawingFrame
      handle={handle}
      summary={`${stripSummary(lines)} Spectrum from ${formatNumber(whole[0], { decimals: 1 })} to ${formatNumber(whole[1], { decimals: 1 })} ${drawing.axisUnit}. Plus and minus zoom, shift with arrows moves, 0 shows the whole.`}
      table={stripTable(lines, "Errors and spectrum: the lines")}
      announcement={chosenLine === undefined ? undefined : lineSentence(chosenLine)}
      keys={{
        count: named.length,
        at: chosenPlace < 0 ? null : chosenPlace,
        onMove: choose,
        onOpen: onOpen === undefined ? undefined : (place) => onOpen(named[place]?.index ?? 0),
        onKey,
      }}
    >
      <div
        ref={ref}
        className="relative cursor-crosshair touch-pan-y select-none"
        style={{ height: registers.height }}
        {...brush.handlers}
        onDoubleClick={() => setView(null)}
      >
        <BenchPlot
          drawing={drawing}
          analysis={analysis}
          registers={registers}
          ruler={ruler}
          view={view}
          width={width}
          palette={palette}
        />
        <svg width={width} height={registers.height} aria-hidden="true" className="absolute inset-0 overflow-visible">
          <CountsAxis
            ruler={ruler}
            registers={registers}
            scale={scale}
            ceiling={drawing.ceilingCounts}
            isNarrow={isNarrow}
          />
          <StripRegister
            lines={lines}
            layout={layout}
            scale={scale}
            top={registers.stripTop}
            half={registers.half}
            marked={marked}
            guardFactor={analysis.setup.decisionRule.kind === "guarded" ? analysis.setup.decisionRule.r : 0}
            isNarrow={isNarrow}
            withRuler
          />
          <DropLines
            lines={lines}
            plan={plan}
            drawing={drawing}
            named={named}
            ruler={ruler}
            registers={registers}
            theme={palette.theme}
          />
          <Flags
            lines={lines}
            plan={plan}
            theme={palette.theme}
            top={registers.flagsTop}
            leaderTop={registers.leaderTop}
            leaderBottom={registers.leaderBottom}
            chosen={marked}
          />
          {marked !== null && lines[marked] !== undefined && (
            <ChosenLine x={crisp(scale.at(lines[marked].wavelengthNm))} registers={registers} width={width} />
          )}
          <WavelengthRuler
            scale={scale}
            top={registers.rulerTop}
            label={axisText(drawing, analysis.setup.axisMeaning)}
            isNarrow={isNarrow}
          />
          {brush.range !== null && (
            <rect
              x={brush.range[0]}
              width={brush.range[1] - brush.range[0]}
              y={registers.spectrumTop}
              height={registers.spectrumHeight}
              fill="var(--accent)"
              opacity={0.14}
            />
          )}
          {isZoomed && (
            <text x={width} y={registers.spectrumTop + 12} textAnchor="end" className="mark mark-quiet mark-halo">
              {`${formatNumber(view[0], { decimals: 1 })}–${formatNumber(view[1], { decimals: 1 })}; 0 or double click: the whole`}
            </text>
          )}
        </svg>
      </div>
    </DrawingFrame>
  );
}

/** Dragging along the spectrum zooms to what was passed over; a press without a drag chooses the nearest line. */
function useBrush(
  scale: Scale,
  registers: Registers,
  setView: (view: [number, number]) => void,
  onPress: (px: number) => void,
) {
  const start = useRef<number | null>(null);
  const [range, setRange] = useState<[number, number] | null>(null);
  const place = (event: PointerEvent<HTMLDivElement>) =>
    Math.min(Math.max(event.clientX - event.currentTarget.getBoundingClientRect().left, 0), scale.width);
  return {
    range,
    handlers: {
      onPointerDown: (event: PointerEvent<HTMLDivElement>) => {
        if (event.button !== 0) return;
        start.current = place(event);
        if (event.pointerType === "mouse") event.currentTarget.setPointerCapture(event.pointerId);
      },
      onPointerMove: (event: PointerEvent<HTMLDivElement>) => {
        if (start.current === null || event.pointerType !== "mouse") return;
        const here = place(event);
        const top = event.clientY - event.currentTarget.getBoundingClientRect().top;
        if (top < registers.spectrumTop - 40 && range === null) return;
        if (Math.abs(here - start.current) > 4)
          setRange([Math.min(start.current, here), Math.max(start.current, here)]);
      },
      onPointerUp: (event: PointerEvent<HTMLDivElement>) => {
        if (start.current === null) return;
        const from = start.current;
        start.current = null;
        if (range !== null && range[1] - range[0] > 4) setView([scale.value(range[0]), scale.value(range[1])]);
        else if (Math.abs(place(event) - from) <= 4) onPress(from);
        setRange(null);
      },
      onPointerCancel: () => {
        start.current = null;
        setRange(null);
      },
    },
  };
}

interface AxisProps {
  ruler: ReturnType<typeof countsRuler>;
  registers: Registers;
  scale: Scale;
  ceiling: number | null;
  isNarrow: boolean;
}

/** Labels of the counts' ruler, the detector's ceiling, the residuals' own ruler. The hairlines lie below, in the canvas. */
function CountsAxis({ ruler, registers, scale, ceiling, isNarrow }: AxisProps) {
  const { zero, residualZero, spectrumTop } = registers;
  const ceilingY = ceiling === null ? null : crisp(zero - ruler.up(ceiling));
  return (
    <g>
      {ruler.ticks.map((tick) => {
        const y = crisp(zero - ruler.up(tick));
        if (isNarrow && tick === 0) return null;
        return <GutterText key={tick} x={0} y={y} isNarrow={isNarrow} text={formatCount(tick)} />;
      })}
      {ceilingY !== null && ceilingY >= spectrumTop - 2 && (
        <>
          <line x1={0} x2={scale.width} y1={ceilingY} y2={ceilingY} stroke="var(--ink)" strokeDasharray="1 2" />
          {!isNarrow && (
            <text x={3} y={ceilingY + 12} className="mark mark-quiet mark-halo">
              detector ceiling
            </text>
          )}
        </>
      )}
      {residualZero !== null && (
        <>
          <GutterText x={0} y={residualZero - 2 * SIGMA_PX} isNarrow={false} text="+2σ" />
          <GutterText x={0} y={residualZero + 2 * SIGMA_PX} isNarrow={false} text="−2σ" />
        </>
      )}
    </g>
  );
}

interface DropProps {
  lines: readonly ReturnType<typeof namedLines>[number]["line"][];
  plan: FlagPlan;
  drawing: SpectrumDrawing;
  named: ReturnType<typeof namedLines>;
  ruler: ReturnType<typeof countsRuler>;
  registers: Registers;
  theme: ReturnType<typeof usePalette>["theme"];
}

/** From each flag's leader down to its peak: .5 in its hue, broken for light nobody sees, dashed 3-2 for what was left out. */
function DropLines({ lines, plan, drawing, named, ruler, registers, theme }: DropProps) {
  return (
    <g>
      {plan.flags.map(({ index, lineX }) => {
        const line = lines[index];
        const entry = named[index];
        if (line === undefined || entry === undefined) return null;
        const fit = drawing.fits.find((candidate) => candidate.line === entry.index);
        const peak = fit === undefined || fit.counts.length === 0 ? entry.peakHeightCounts : Math.max(...fit.counts);
        const bottom = registers.zero - Math.min(ruler.up(peak), registers.spectrumHeight) - 3;
        if (bottom <= registers.leaderBottom) return null;
        const isOut = line.status === "left-out" || line.status === "refused";
        const isUnseen = line.wavelengthNm < 380 || line.wavelengthNm > 750;
        const x = crisp(lineX);
        return (
          <line
            key={index}
            x1={x}
            x2={x}
            y1={registers.leaderBottom}
            y2={bottom}
            strokeWidth={isUnseen ? 0.75 : 0.5}
            className="hue-stroke"
            style={{ stroke: wavelengthHue(line.wavelengthNm, theme) }}
            strokeDasharray={isOut ? "3 2" : isUnseen ? "2 2" : undefined}
          />
        );
      })}
    </g>
  );
}

/** The chosen line: dotted ink through all registers. */
function ChosenLine({ x, registers, width }: { x: number; registers: Registers; width: number }) {
  if (x < 0 || x > width + 1) return null;
  const { stripTop, half, leaderBottom, rulerTop } = registers;
  return (
    <path
      d={`M${x} ${stripTop + half}V${stripTop + 2 * half}M${x} ${leaderBottom}V${rulerTop}`}
      stroke="var(--ink)"
      strokeDasharray="1 2"
      fill="none"
    />
  );
}

function WavelengthRuler({
  scale,
  top,
  label,
  isNarrow,
}: {
  scale: Scale;
  top: number;
  label: string;
  isNarrow: boolean;
}) {
  const { ticks: labelled, decimals } = roundTicks(scale.from, scale.to, scale.width, isNarrow ? 46 : 72);
  return (
    <g>
      {wavelengthTicks(scale.from, scale.to, scale.width).map((tick) => {
        const x = crisp(scale.at(tick.value));
        return <line key={tick.value} x1={x} x2={x} y1={top} y2={top + [2, 4, 5][tick.rank]!} stroke="var(--ink)" />;
      })}
      {labelled.map((tick) => {
        const x = scale.at(tick);
        return x < 8 || x > scale.width - 8 ? null : (
          <text key={tick} x={x} y={top + 18} textAnchor="middle" className="mark mark-quiet">
            {formatNumber(tick, { decimals })}
          </text>
        );
      })}
      {!isNarrow && (
        <text x={-10} y={top + 18} textAnchor="end" className="mark mark-quiet">
          {label}
        </text>
      )}
    </g>
  );
}
