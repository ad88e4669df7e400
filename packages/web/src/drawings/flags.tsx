/** Flags of lines: wavelength over species, with leaders to where the line stands. */
import type { StripLine } from "@wavekeep/api/contract";
import type { ThemeName } from "../shared/theme.ts";
import { formatNumber } from "../ui/format.ts";
import type { Scale } from "./scale.ts";
import { chooseFlagged, leaderPoints, spreadLabels } from "./spread.ts";
import { usedOf } from "./strip-layout.ts";
import { wavelengthHue } from "./wavelength-hue.ts";

export const FLAG_PITCH = 43;
export const FLAG_HEIGHT = 31;

/** What stands under a flag's wavelength: `Hg`, `Hg blend`, `Hg sat.`; where the next is as long, `Hg bl.`. */
export function flagSpecies(line: StripLine, isTight = false): string {
  const species = line.species ?? "";
  const element = species.split(" ")[0] ?? "";
  if (line.blend || line.flags.includes("blend")) return isTight ? `${element} bl.` : `${element} blend`;
  if (line.flags.includes("saturated")) return `${element} sat.`;
  return element;
}

export interface Flag {
  index: number;
  /** Centre of the flag and of its line, px. */
  x: number;
  lineX: number;
}

export interface FlagPlan {
  flags: Flag[];
  /** Lines that only keep a bare leader. */
  bare: { index: number; lineX: number }[];
}

/**
 * Flags that fit, spread as near their lines as their order allows.
 *
 * @param ranks how strongly each line asks for a flag, by index; without them the share of its tolerance
 */
export function planFlags(
  lines: readonly StripLine[],
  scale: Scale,
  options: { most?: number; chosen: number | null; worst: number | null; ranks?: readonly number[] },
): FlagPlan {
  const inside = lines
    .map((line, index) => ({ line, index, lineX: scale.at(line.wavelengthNm) }))
    .filter(({ lineX }) => lineX >= -0.5 && lineX <= scale.width + 0.5)
    .sort((a, b) => a.lineX - b.lineX);
  const most = Math.min(options.most ?? Infinity, Math.floor(scale.width / FLAG_PITCH + 0.05));
  const place = (index: number | null) => (index === null ? -1 : inside.findIndex((entry) => entry.index === index));
  const kept = new Set(
    chooseFlagged(
      inside.length,
      most,
      [place(options.chosen), place(options.worst)],
      inside.map(({ line, index }) => options.ranks?.[index] ?? usedOf(line) ?? 0),
    ),
  );
  const flagged = inside.filter((_, i) => kept.has(i));
  const centres = spreadLabels(
    flagged.map((entry) => entry.lineX),
    FLAG_PITCH,
    0,
    scale.width,
  );
  return {
    flags: flagged.map(({ index, lineX }, i) => ({ index, lineX, x: centres[i] ?? lineX })),
    bare: inside.filter((_, i) => !kept.has(i)).map(({ index, lineX }) => ({ index, lineX })),
  };
}

interface FlagsProps {
  lines: readonly StripLine[];
  plan: FlagPlan;
  theme: ThemeName;
  /** Top of the flags, px. */
  top: number;
  /** Where the leaders up end (the strip), and the ones down (the spectrum). */
  leaderTop: number;
  leaderBottom?: number;
  chosen: number | null;
  onChoose?: (index: number) => void;
}

export function Flags({ lines, plan, theme, top, leaderTop, leaderBottom, chosen, onChoose }: FlagsProps) {
  // Two long words side by side would run together at this pitch.
  const isLong = (flag: Flag | undefined) => {
    const line = flag === undefined ? undefined : lines[flag.index];
    return line !== undefined && flagSpecies(line).length > 7;
  };
  const isTight = (place: number) =>
    [place - 1, place + 1].some(
      (beside) =>
        isLong(plan.flags[beside]) &&
        Math.abs((plan.flags[beside]?.x ?? 0) - (plan.flags[place]?.x ?? 0)) < FLAG_PITCH + 6,
    );
  return (
    <g>
      {plan.bare.map(({ index, lineX }) => {
        const line = lines[index];
        return line === undefined ? null : (
          <line
            key={index}
            x1={lineX}
            x2={lineX}
            y1={leaderTop}
            y2={leaderTop + 8}
            className="hue-stroke"
            style={{ stroke: wavelengthHue(line.wavelengthNm, theme) }}
            opacity={0.75}
          />
        );
      })}
      {plan.flags.map(({ index, x, lineX }, place) => {
        const line = lines[index];
        if (line === undefined) return null;
        const isOut = line.status === "left-out" || line.status === "refused";
        const isChosen = index === chosen;
        const hue = wavelengthHue(line.wavelengthNm, theme);
        return (
          <g
            key={index}
            className={onChoose === undefined ? "" : "cursor-pointer"}
            onClick={onChoose === undefined ? undefined : () => onChoose(index)}
          >
            <polyline
              points={leaderPoints(x, top, lineX, leaderTop)}
              fill="none"
              className="hue-stroke"
              style={{ stroke: hue }}
              opacity={0.75}
            />
            {leaderBottom !== undefined && (
              <polyline
                points={leaderPoints(x, top + FLAG_HEIGHT, lineX, leaderBottom)}
                fill="none"
                className="hue-stroke"
                style={{ stroke: hue }}
                opacity={0.75}
              />
            )}
            <rect
              x={x - FLAG_PITCH / 2 + 0.5}
              y={top + 0.5}
              width={FLAG_PITCH - 1}
              height={FLAG_HEIGHT - 1}
              fill="var(--ground)"
              stroke={isChosen ? "var(--ink)" : "none"}
              fillOpacity={isChosen ? 1 : 0}
            />
            <text
              x={x}
              y={top + 13}
              textAnchor="middle"
              className={`mark ${isChosen ? "mark-strong" : ""} ${isOut ? "mark-out" : ""}`}
            >
              {formatNumber(line.wavelengthNm, { decimals: 2 })}
            </text>
            <text x={x} y={top + 25} textAnchor="middle" className="mark mark-quiet">
              {flagSpecies(line, isTight(place))}
            </text>
          </g>
        );
      })}
    </g>
  );
}
