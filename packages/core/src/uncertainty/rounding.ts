/**
 * Rounding of a result for people: U to two significant digits (JCGM 100, 7.2.6: at most two), rounded up where rounding down would
 * lose more than 5 % of it; the value to the same place. Done in decimal text, so that 0.125 is a tie and not a binary neighbour of one.
 */

export interface RoundedResult {
  value: string;
  expandedUnc: string;
  /** Digits after the decimal point, negative for tens, hundreds. */
  decimals: number;
}

const largestLoss = 0.05;

/** Round a value and its expanded uncertainty (both in the same unit). U of zero or no number rounds nothing: 6 decimals are given. */
export function roundResult(value: number, expandedUnc: number): RoundedResult {
  if (!(expandedUnc > 0) || expandedUnc === Number.POSITIVE_INFINITY) {
    return { value: plain(value, 6), expandedUnc: plain(expandedUnc, 6), decimals: 6 };
  }
  let decimals = 1 - exponentOf(expandedUnc);
  let digits = Math.round(scaled(expandedUnc, decimals));
  if (digits < scaled(expandedUnc, decimals) * (1 - largestLoss)) digits += 1;
  if (digits >= 100) {
    digits = Math.ceil(digits / 10);
    decimals -= 1;
  }
  return {
    value: plain(roundHalfEven(scaled(value, decimals)), decimals, true),
    expandedUnc: plain(digits, decimals, true),
    decimals,
  };
}

/** Decimal exponent of a positive number, from its own shortest text. */
function exponentOf(value: number): number {
  return Number(value.toExponential().split("e")[1]);
}

function scaled(value: number, decimals: number): number {
  const [digits, exponent] = value.toExponential().split("e") as [string, string];
  return Number(`${digits}e${Number(exponent) + decimals}`);
}

function roundHalfEven(value: number): number {
  const floor = Math.floor(value);
  const rest = value - floor;
  if (rest < 0.5) return floor;
  if (rest > 0.5) return floor + 1;
  return floor % 2 === 0 ? floor : floor + 1;
}

function plain(value: number, decimals: number, isScaled = false): string {
  if (!Number.isFinite(value)) return String(value);
  const number = isScaled ? Number(`${value}e${-decimals}`) : value;
  const text = number.toFixed(Math.max(0, Math.min(20, decimals)));
  return /^-0(?:\.0*)?$/.test(text) ? text.slice(1) : text;
}
