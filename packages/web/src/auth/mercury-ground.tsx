/** Mercury's lines from the top to a ruler: the ground that the doors of Wavekeep stand on. */
import { linearScale, crisp } from "../drawings/scale.ts";
import { useWidth } from "../drawings/use-width.ts";
import { wavelengthHue } from "../drawings/wavelength-hue.ts";
import { useTheme } from "../shared/theme.ts";

const FROM_NM = 380;
const TO_NM = 720;

interface GroundLine {
  /** Air, nm (NIST ASD 5.12). */
  wavelengthNm: number;
  width: number;
  /** Share of the height from the ruler up. */
  reach: number;
  opacity: number;
  label?: "left" | "right";
}

const LINES: readonly GroundLine[] = [
  { wavelengthNm: 404.6565, width: 2, reach: 1, opacity: 1, label: "left" },
  { wavelengthNm: 407.7837, width: 1, reach: 0.62, opacity: 1 },
  { wavelengthNm: 433.9223, width: 1, reach: 0.3, opacity: 0.5 },
  { wavelengthNm: 434.7495, width: 1, reach: 0.45, opacity: 0.9 },
  { wavelengthNm: 435.8335, width: 3, reach: 1, opacity: 1, label: "right" },
  { wavelengthNm: 491.6068, width: 1, reach: 0.19, opacity: 1 },
  { wavelengthNm: 546.075, width: 3, reach: 1, opacity: 1, label: "left" },
  { wavelengthNm: 576.961, width: 2, reach: 1, opacity: 1, label: "left" },
  { wavelengthNm: 579.067, width: 2, reach: 1, opacity: 1, label: "right" },
  { wavelengthNm: 607.264, width: 1, reach: 0.16, opacity: 0.6 },
  { wavelengthNm: 623.435, width: 1, reach: 0.16, opacity: 0.6 },
  { wavelengthNm: 671.634, width: 1, reach: 0.18, opacity: 0.7 },
  { wavelengthNm: 690.746, width: 1, reach: 0.24, opacity: 1 },
  { wavelengthNm: 708.1901, width: 1, reach: 0.16, opacity: 0.6 },
];

/** Fills its box of `height` px; the ruler stands near its foot. */
export function MercuryGround({ height }: { height: number }) {
  const [ref, width] = useWidth<HTMLDivElement>(1440);
  const theme = useTheme();
  const scale = linearScale(FROM_NM, TO_NM, width);
  const isNarrow = width < 1024;
  const ruler = height - (isNarrow ? 44 : 120);
  return (
    <div ref={ref} aria-hidden="true" className="pointer-events-none absolute inset-0 overflow-hidden">
      <svg width={width} height={height} className="block">
        {LINES.map((line) => {
          const x = scale.at(line.wavelengthNm);
          return (
            <rect
              key={line.wavelengthNm}
              x={Math.round(x - line.width / 2)}
              y={ruler * (1 - line.reach)}
              width={line.width}
              height={ruler * line.reach}
              fill={wavelengthHue(line.wavelengthNm, theme)}
              opacity={line.opacity}
            />
          );
        })}
        <line x1={0} x2={width} y1={ruler + 0.5} y2={ruler + 0.5} stroke="var(--ink)" />
        {Array.from({ length: TO_NM - FROM_NM + 1 }, (_, i) => FROM_NM + i).map((nm) => {
          if (width < 768 && nm % 5 !== 0) return null;
          const x = crisp(scale.at(nm));
          const long = nm % 50 === 0 ? 14 : nm % 10 === 0 ? 9 : nm % 5 === 0 ? 7 : 4;
          return (
            <line
              key={nm}
              x1={x}
              x2={x}
              y1={ruler}
              y2={ruler + long}
              stroke={nm % 10 === 0 ? "var(--ink)" : "var(--graph)"}
            />
          );
        })}
        {[400, 450, 500, 550, 600, 650, 700].map((nm) => (
          <text key={nm} x={scale.at(nm)} y={ruler + 31} textAnchor="middle" className="mark mark-quiet">
            {nm}
          </text>
        ))}
        {!isNarrow &&
          LINES.map((line) =>
            line.label === undefined ? null : (
              <text
                key={line.wavelengthNm}
                x={scale.at(line.wavelengthNm) + (line.label === "left" ? -9 : 9)}
                y={ruler - 14}
                textAnchor={line.label === "left" ? "end" : "start"}
                className="mark mark-note"
              >
                {line.wavelengthNm.toFixed(3)}
              </text>
            ),
          )}
        {!isNarrow && (
          <text x={width - 40} y={ruler + 56} textAnchor="end" className="mark mark-quiet">
            Mercury, wavelengths in air in nm, after NIST ASD 5.12
          </text>
        )}
      </svg>
    </div>
  );
}
