/** Measured numbers, typeset: the point of a column stands under the point, value and uncertainty end at one place. */
import { formatNumber, NARROW_SPACE, NO_BREAK, quantityParts, type NumberStyle } from "./format.ts";

interface DecimalProps extends NumberStyle {
  value: number | null | undefined;
  /** Most places of the column; the fraction's box is as wide as they need, so that points align. */
  columnDecimals?: number;
  unit?: string;
  className?: string;
}

/**
 * A number aligned on its decimal point: integer part right-aligned by the cell, then point and fraction in a box of
 * `n * 1ch + 0.27em`, n = the most decimals in the column.
 */
export function Decimal({ value, columnDecimals, unit, className, ...style }: DecimalProps) {
  const text = formatNumber(value, style);
  const [whole = "", fraction] = text.split(".");
  const places = columnDecimals ?? style.decimals ?? 0;
  return (
    <span className={`whitespace-nowrap ${className ?? ""}`}>
      {whole}
      {places > 0 && (
        <span style={{ display: "inline-block", minWidth: `calc(${places} * 1ch + 0.27em)`, textAlign: "left" }}>
          {fraction === undefined ? "" : `.${fraction}`}
        </span>
      )}
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
