/** Our only mark: the lines of mercury, standing on the hairline under the name. */
import { useTheme } from "../shared/theme.ts";
import { wavelengthHue } from "../drawings/wavelength-hue.ts";

/** Air wavelengths, nm (NIST ASD 5.12), and heights, px. */
const LINES: readonly [number, number][] = [
  [404.7, 10],
  [407.8, 4],
  [435.8, 12],
  [546.1, 12],
  [577.0, 8],
  [579.1, 8],
];
const PX_PER_NM = 0.44;

export function MercuryMark({ className }: { className?: string }) {
  const theme = useTheme();
  return (
    <svg width={80} height={12} aria-hidden="true" className={className}>
      {LINES.map(([wavelengthNm, height]) => {
        const x = Math.round((wavelengthNm - 404.7) * PX_PER_NM);
        return (
          <rect
            key={wavelengthNm}
            x={x}
            y={12 - height}
            width={1}
            height={height}
            fill={wavelengthHue(wavelengthNm, theme)}
          />
        );
      })}
    </svg>
  );
}
