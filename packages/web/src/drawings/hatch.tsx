import { useId } from "react";

/** Id of this drawing's hatch. */
export const useHatch = (): string => `hatch-${useId().replace(/[^\w-]/g, "")}`;

/** The guard band's hatch: the one meaning it has. Lines at 45 degrees, `size` px apart. */
export function Hatch({ id, size = 4 }: { id: string; size?: number }) {
  return (
    <defs>
      <pattern id={id} width={size} height={size} patternUnits="userSpaceOnUse">
        <path
          d={`M${-size / 4},${size / 4} l${size / 2},${-size / 2} M0,${size} l${size},${-size} M${(size * 3) / 4},${(size * 5) / 4} l${size / 2},${-size / 2}`}
          stroke="var(--graph)"
          strokeWidth={size < 4 ? 0.7 : 0.8}
          fill="none"
        />
      </pattern>
    </defs>
  );
}
