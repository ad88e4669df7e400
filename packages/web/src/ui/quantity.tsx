/** Measured numbers, typeset: the point of a column stands under the point, value and uncertainty end at one place. */
import { formatNumber, NARROW_SPACE, NO_BREAK, quantityParts, type NumberStyle } from "./format.ts";

interface DecimalProps extends NumberStyle {
  value: number | null | undefined;
  /** Most places of the column; room is kept for those this number lacks, so that points align. */
  columnDecimals?: number;
  unit?: string;
  className?: string;
}

/** Room after a number for the digits, and for the point (0.27em), that others of its column have and it has not. */
function roomFor(missing: number, hasPoint: boolean): string | undefined {
  if (missing <= 0) return undefined;
  return hasPoint ? `${missing}ch` : `calc(${missing} * 1ch + 0.27em)`;
}

/**
 * A number aligned on its decimal point: right-aligned by the cell, with room kept behind it for the places it lacks.
 * The number itself stays one piece of text, so that it is read aloud, and copied, whole.
 */
export function Decimal({ value, columnDecimals, unit, className, ...style }: DecimalProps) {
  const text = formatNumber(value, style);
  const fraction = text.split(".")[1];
  const places = columnDecimals ?? style.decimals ?? 0;
  return (
    <span className={`whitespace-nowrap ${className ?? ""}`}>
      <span style={{ paddingRight: roomFor(places - (fraction?.length ?? 0), fraction !== undefined) }}>{text}</span>
      {unit !== undefined && `${NARROW_SPACE}${unit}`}
    </span>
  );
}

interface QuantityProps extends NumberStyle {
  value: number | null | undefined;
  /** Expanded uncertainty; null is said in words, never shown as 0. Leave it out where a column of its own holds U. */
  expandedUnc?: number | null;
  unit?: string;
  className?: string;
}

/** A measured number: `+0.313 ± 0.031 nm`, U to two digits and the value to the same place. */
export function Quantity({ value, expandedUnc, unit = "", className, ...style }: QuantityProps) {
  if (value === null || value === undefined || !Number.isFinite(value)) return <span className={className}>–</span>;
  const parts = quantityParts(value, expandedUnc, unit, style);
  return (
    <span className={`whitespace-nowrap ${className ?? ""}`}>
      {parts.value}
      {parts.unc !== null && `${NO_BREAK}±${NO_BREAK}${parts.unc}`}
      {parts.unit !== "" && NARROW_SPACE}
      {parts.unit === "cm-1" ? (
        <>
          cm<sup className="text-[0.75em] leading-none">−1</sup>
        </>
      ) : (
        parts.unit
      )}
      {expandedUnc === null && <span className="type-note"> (U not estimated)</span>}
    </span>
  );
}
