/**
 * The line strip: each line of light where it stands, its error as a bar in its hue, the full height its tolerance.
 * `mini` in lists, `large` in the spectrum bench, `instrument` on an instrument's page.
 */
import type { StripLine } from "@wavekeep/api/contract";
import { useTheme } from "../shared/theme.ts";
import { formatLimit, formatNumber, formatPercent, formatQuantity, MINUS } from "../ui/format.ts";
import { DrawingFrame, type DrawingHandle, type TableTwin } from "./drawing.tsx";
import { FLAG_HEIGHT, Flags, planFlags } from "./flags.tsx";
import { Hatch, useHatch } from "./hatch.tsx";
import { crisp, linearScale, wavelengthTicks, type Scale } from "./scale.ts";
import {
  guardShareOf,
  layoutMini,
  layoutStrip,
  usedOf,
  worstLine,
  type StripLayout,
  type StripMark,
} from "./strip-layout.ts";
import { useWidth } from "./use-width.ts";
import { wavelengthHue } from "./wavelength-hue.ts";

interface StripProps {
  lines: readonly StripLine[];
  fromNm: number;
  toNm: number;
  size: "mini" | "large" | "instrument";
  /** Index into `lines`. */
  chosen?: number | null;
  onChoose?: (index: number | null) => void;
  /** Enter on a line: where its check is. */
  onOpen?: (index: number) => void;
  /** r of the decision rule: guard band w = r U; 0 for simple acceptance. */
  guardFactor?: number;
  /** Width of the mini strip: 160 in lists, 116 on a phone. */
  width?: number;
  handle?: DrawingHandle;
}

/** `22 of 24 lines judged; the worst, Ar 842.46 nm, reads +0.313 ± 0.031 nm and uses 78 % of its tolerance.` */
export function stripSummary(lines: readonly StripLine[]): string {
  const judged = lines.filter((line) => line.status === "judged").length;
  if (lines.length === 0) return "No check yet: no lines.";
  const worst = lines[worstLine(lines) ?? -1];
  if (worst === undefined) return `None of ${lines.length} lines was judged.`;
  return `${judged} of ${lines.length} lines judged; the worst, ${lineName(worst)}, reads ${formatQuantity(worst.errorNm ?? 0, worst.expandedUncNm, "nm", { signed: true })} and uses ${formatPercent(usedOf(worst))} of its tolerance.`;
}

const lineName = (line: StripLine) =>
  `${(line.species ?? "unnamed").split(" ")[0]} ${formatNumber(line.wavelengthNm, { decimals: 2 })} nm`;

const STATUS_WORDS: Record<StripLine["status"], string> = {
  judged: "judged",
  "left-out": "left out",
  refused: "refused",
  "not-judged": "not judged",
  unnamed: "not named",
};
const VERDICT_WORDS = { pass: "in tolerance", inconclusive: "inconclusive", fail: "out of tolerance" } as const;

export const verdictWords = (line: StripLine): string =>
  line.status === "judged" && line.verdict !== null
    ? line.verdict === "pass" && line.nearLimit
      ? "near limit"
      : VERDICT_WORDS[line.verdict]
    : STATUS_WORDS[line.status];

/** What a screen reader hears of one line. */
export const lineSentence = (line: StripLine): string =>
  `${lineName(line)}: ${line.errorNm === null ? "no error known" : formatQuantity(line.errorNm, line.expandedUncNm, "nm", { signed: true })}, ${verdictWords(line)}.`;

export function stripTable(lines: readonly StripLine[], caption: string): TableTwin {
  return {
    caption,
    head: [
      "Reference, nm",
      "Species",
      "Error, nm",
      "U, nm",
      "Tolerance, nm",
      "Tolerance used, %",
      "Verdict",
      "Remarks",
    ],
    rows: lines.map((line) => {
      const used = usedOf(line);
      return [
        line.wavelengthNm,
        line.species,
        line.errorNm,
        line.expandedUncNm,
        line.toleranceNm,
        used === null ? null : Number((used * 100).toFixed(1)),
        verdictWords(line),
        line.flags.join(", "),
      ];
    }),
  };
}

export function LineStrip(props: StripProps) {
  return props.size === "mini" ? <MiniStrip {...props} /> : <LargeStrip {...props} />;
}

function MiniStrip({ lines, fromNm, toNm, width = 160 }: StripProps) {
  const theme = useTheme();
  const inset = 6;
  const scale = linearScale(fromNm, toNm, width - 2 * inset);
  const marks = layoutMini(lines, scale, 12);
  const mid = 14;
  const first = marks[0];
  const last = marks[marks.length - 1];
  const summary = stripSummary(lines);
  if (first === undefined || last === undefined) {
    return (
      <svg width={width} height={28} role="img" aria-label={summary} className="block">
        <path d={`M0.5 10.5v8M${width - 0.5} 10.5v8M0.5 14.5h${width - 1}`} stroke="var(--graph)" fill="none" />
      </svg>
    );
  }
  return (
    <svg width={width} height={28} role="img" aria-label={summary} className="block overflow-visible">
      <path d={`M3.5 2.5h-3v24h3M${width - 3.5} 2.5h3v24h-3`} stroke="var(--graph)" fill="none" />
      <line x1={inset + first.x} x2={inset + last.x} y1={mid + 0.5} y2={mid + 0.5} stroke="var(--graph)" />
      {marks.map((mark) => (
        <MiniMark
          key={mark.index}
          mark={mark}
          x={Math.round(inset + mark.x)}
          mid={mid + 0.5}
          hue={wavelengthHue(lines[mark.index]?.wavelengthNm ?? 0, theme)}
        />
      ))}
    </svg>
  );
}

function MiniMark({ mark, x, mid, hue }: { mark: StripMark; x: number; mid: number; hue: string }) {
  if (mark.kind === "hollow")
    return (
      <rect
        x={x - 1.5}
        y={mid - 3}
        width={3}
        height={6}
        fill="var(--ground)"
        className="hue-stroke"
        style={{ stroke: hue }}
      />
    );
  const up = mark.height >= 0;
  const tip = mid - mark.height;
  return (
    <>
      <line
        x1={x}
        x2={x}
        y1={mid + (up ? 2.5 : -2.5)}
        y2={up ? Math.min(tip, mid - 2.5) : Math.max(tip, mid + 2.5)}
        strokeWidth={2}
        className="hue-stroke"
        style={{ stroke: hue }}
        strokeDasharray={mark.isUnseen ? "2 1" : undefined}
      />
      {mark.isBeyond && <rect x={x - 2} y={up ? mid - 14 : mid + 10} width={4} height={4} fill="var(--out)" />}
    </>
  );
}

function LargeStrip({
  lines,
  fromNm,
  toNm,
  size,
  chosen = null,
  onChoose,
  onOpen,
  guardFactor = 1,
  handle,
}: StripProps) {
  const [ref, width] = useWidth<HTMLDivElement>();
  const theme = useTheme();
  const isNarrow = width < 560;
  const half = isNarrow ? 46 : size === "instrument" ? 72 : 52;
  const scale = linearScale(fromNm, toNm, width);
  const layout = layoutStrip(lines, scale, half);
  const top = 20;
  const flagsTop = top + 2 * half + 20;
  const marked = chosen ?? layout.worst;
  const plan = planFlags(lines, scale, { most: isNarrow ? 8 : undefined, chosen, worst: layout.worst });
  const order = layout.marks.map((mark) => mark.index);
  const at = chosen === null ? -1 : order.indexOf(chosen);
  const chosenLine = chosen === null ? undefined : lines[chosen];
  return (
    <DrawingFrame
      handle={handle}
      summary={stripSummary(lines)}
      table={stripTable(lines, "Errors of the lines")}
      announcement={chosenLine === undefined ? undefined : lineSentence(chosenLine)}
      keys={
        onChoose === undefined
          ? undefined
          : {
              count: order.length,
              at: at < 0 ? null : at,
              onMove: (place) => onChoose(place === null ? null : (order[place] ?? null)),
              onOpen: onOpen === undefined ? undefined : (place) => onOpen(order[place] ?? 0),
            }
      }
    >
      <div
        ref={ref}
        className={onChoose === undefined ? "" : "cursor-crosshair"}
        onClick={
          onChoose === undefined
            ? undefined
            : (event) => onChoose(nearestMark(layout, event.clientX - event.currentTarget.getBoundingClientRect().left))
        }
      >
        <svg width={width} height={flagsTop + FLAG_HEIGHT + 2} aria-hidden="true" className="block overflow-visible">
          <StripRegister
            lines={lines}
            layout={layout}
            scale={scale}
            top={top}
            half={half}
            marked={marked}
            guardFactor={guardFactor}
            isNarrow={isNarrow}
            withRuler
          />
          <Flags
            lines={lines}
            plan={plan}
            theme={theme}
            top={flagsTop}
            leaderTop={top + 2 * half + 3}
            chosen={marked}
          />
        </svg>
      </div>
    </DrawingFrame>
  );
}

/** Index of the line nearest to a place on the strip; null when it is empty. */
export function nearestMark(layout: StripLayout, px: number): number | null {
  let nearest: StripMark | undefined;
  for (const mark of layout.marks)
    if (nearest === undefined || Math.abs(mark.x - px) < Math.abs(nearest.x - px)) nearest = mark;
  return nearest?.index ?? null;
}

interface RegisterProps {
  lines: readonly StripLine[];
  layout: StripLayout;
  scale: Scale;
  /** y of the upper limit. */
  top: number;
  half: number;
  /** The line whose guard band and tolerance are drawn: the chosen one, else the worst. */
  marked: number | null;
  guardFactor: number;
  isNarrow: boolean;
  withRuler: boolean;
}

/** The strip itself, for the bench and for the page of an instrument. */
export function StripRegister({
  lines,
  layout,
  scale,
  top,
  half,
  marked,
  guardFactor,
  isNarrow,
  withRuler,
}: RegisterProps) {
  const theme = useTheme();
  const hatch = useHatch();
  const zero = crisp(top + half);
  const upper = crisp(top);
  const lower = crisp(top + 2 * half);
  const markedLine = marked === null ? undefined : lines[marked];
  const guard = (guardShareOf(markedLine, guardFactor) ?? 0) * half;
  const tolerance = markedLine?.toleranceNm ?? lines.find((line) => line.toleranceNm !== null)?.toleranceNm ?? null;
  const limit = tolerance === null ? null : formatLimit(tolerance);
  const bareLimit = limit?.replace(/\u202fnm$/, "") ?? "";
  const ticks = wavelengthTicks(scale.from, scale.to, scale.width);
  return (
    <g>
      <Hatch id={hatch} />
      {guard > 0 && (
        <>
          <rect x={0} y={upper} width={scale.width} height={guard} fill={`url(#${hatch})`} />
          <rect x={0} y={lower - guard} width={scale.width} height={guard} fill={`url(#${hatch})`} />
        </>
      )}
      <path d={`M0 ${upper}H${scale.width}M0 ${lower}H${scale.width}`} stroke="var(--graph)" />
      {limit !== null && (
        <>
          <GutterText x={0} y={upper} isNarrow={isNarrow} text={`+${limit}`} />
          {!isNarrow && <GutterText x={0} y={zero} isNarrow={false} text="0" />}
          {!isNarrow && <GutterText x={0} y={lower} isNarrow={false} text={`${MINUS}${bareLimit}`} />}
        </>
      )}
      {withRuler &&
        ticks.map((tick) => (
          <line
            key={tick.value}
            x1={crisp(scale.at(tick.value))}
            x2={crisp(scale.at(tick.value))}
            y1={zero}
            y2={zero + [2, 4, 5][tick.rank]!}
            stroke="var(--ink)"
            opacity={tick.rank === 0 ? 0.7 : 1}
          />
        ))}
      {layout.judged !== null && (
        <line x1={layout.judged[0]} x2={layout.judged[1]} y1={zero} y2={zero} stroke="var(--ink)" />
      )}
      {layout.marks.map((mark) => (
        <Mark
          key={mark.index}
          mark={mark}
          zero={zero}
          hue={wavelengthHue(lines[mark.index]?.wavelengthNm ?? 0, theme)}
        />
      ))}
    </g>
  );
}

/** A label that hangs in the gutter, right-aligned at body - 10; on a phone it stands inside, above its line. */
export function GutterText({ x, y, text, isNarrow }: { x: number; y: number; text: string; isNarrow: boolean }) {
  return isNarrow ? (
    <text x={x} y={y - 4} className="mark mark-quiet mark-halo">
      {text}
    </text>
  ) : (
    <text x={x - 10} y={y + 4} textAnchor="end" className="mark mark-quiet">
      {text}
    </text>
  );
}

function Mark({ mark, zero, hue }: { mark: StripMark; zero: number; hue: string }) {
  const x = mark.width % 2 === 1 ? crisp(mark.x) : Math.round(mark.x);
  if (mark.kind === "hollow")
    return (
      <rect
        x={x - 2}
        y={zero - 4}
        width={4}
        height={8}
        fill="var(--ground)"
        className="hue-stroke"
        style={{ stroke: hue }}
      />
    );
  const up = mark.height >= 0;
  const tip = zero - mark.height;
  const foot = up ? zero + 3.5 : zero - 3.5;
  const head = up ? Math.min(tip, zero - 3.5) : Math.max(tip, zero + 3.5);
  return (
    <g>
      <g className="strip-bar" style={{ transformOrigin: `0 ${zero}px` }}>
        <line
          x1={x}
          x2={x}
          y1={head}
          y2={foot}
          strokeWidth={mark.width}
          className="hue-stroke"
          style={{ stroke: hue }}
          strokeDasharray={mark.isUnseen ? "2 2" : undefined}
        />
      </g>
      {mark.whisker !== null && (
        <line x1={x} x2={x} y1={zero - mark.whisker[0]} y2={zero - mark.whisker[1]} stroke="var(--ink)" />
      )}
      {mark.isBeyond && <rect x={x - 3.5} y={up ? tip - 7 : tip} width={7} height={7} fill="var(--out)" />}
    </g>
  );
}
