/**
 * Rounding of a result for print: U to two significant digits, rounded up where rounding down would lose more than 5 %
 * (GUM 7.2.6: at most two digits); the value to the same place.
 */

/**
 * @param expandedUnc  > 0, any unit
 * @returns decimals for the value, and U as text
 */
export function decimalsFor(expandedUnc: number): { decimals: number; rounded: string } {
  if (!(expandedUnc > 0) || !Number.isFinite(expandedUnc)) return { decimals: 3, rounded: String(expandedUnc) };
  const exponent = Number(expandedUnc.toExponential(1).split("e")[1]);
  const step = 10 ** (exponent - 1);
  let units = Math.round(expandedUnc / step);
  if (expandedUnc - units * step > 0.05 * expandedUnc) units = Math.ceil(expandedUnc / step);
  const decimals = Math.max(0, 1 - exponent);
  return { decimals, rounded: (units * step).toFixed(decimals) };
}
