/**
 * Exact arithmetic on printed decimals: fitted values and residual standard deviation of certified estimates without rounding.
 *
 * Numbers are fractions of BigInts; a decimal as the source prints it (15 digits or fewer) is its own shortest form as a double.
 */

interface Fraction {
  top: bigint;
  /** A power of ten. */
  bottom: bigint;
}

function decimal(value: number): Fraction {
  const [mantissa, exponent = "0"] = String(value).split("e");
  const [whole, fraction = ""] = mantissa!.split(".");
  const shift = Number(exponent) - fraction.length;
  const digits = BigInt(whole + fraction);
  return shift >= 0
    ? { top: digits * 10n ** BigInt(shift), bottom: 1n }
    : { top: digits, bottom: 10n ** BigInt(-shift) };
}

const times = (a: Fraction, b: Fraction): Fraction => ({ top: a.top * b.top, bottom: a.bottom * b.bottom });
const plus = (a: Fraction, b: Fraction): Fraction => {
  // Denominators are powers of ten, so the larger one is common to both.
  if (a.bottom >= b.bottom) return { top: a.top + b.top * (a.bottom / b.bottom), bottom: a.bottom };
  return plus(b, a);
};
const minus = (a: Fraction, b: Fraction): Fraction => plus(a, { top: -b.top, bottom: b.bottom });

/** The double nearest to a fraction, to 20 digits before the last rounding. */
function nearest({ top, bottom }: Fraction): number {
  if (top === 0n) return 0;
  const negative = top < 0n;
  const size = negative ? -top : top;
  // Scale so that the quotient has at least 25 digits.
  const shift = Math.max(0, bottom.toString().length - size.toString().length + 25);
  const quotient = (size * 10n ** BigInt(shift)) / bottom;
  return Number(`${negative ? "-" : ""}${quotient}e-${shift}`);
}

function squareRoot(value: bigint): bigint {
  if (value < 2n) return value;
  let root = 10n ** BigInt(Math.ceil(value.toString().length / 2));
  for (;;) {
    const next = (root + value / root) / 2n;
    if (next >= root) return root;
    root = next;
  }
}

/**
 * Fitted values of estimates on 1, x, x², … (x a number) or 1, x1, x2, … (x a row), and the standard deviation of what is left.
 */
export function exactPolynomialFit(
  x: readonly (number | readonly number[])[],
  y: readonly number[],
  estimates: readonly number[],
): { fitted: number[]; residualSd: number } {
  const coefficients = estimates.map(decimal);
  let sum: Fraction = { top: 0n, bottom: 1n };
  const fitted = x.map((at, i) => {
    let value: Fraction = { top: 0n, bottom: 1n };
    if (typeof at === "number") {
      const point = decimal(at);
      for (let j = coefficients.length - 1; j >= 0; j--) value = plus(times(value, point), coefficients[j]!);
    } else {
      value = at.reduce((total, cell, j) => plus(total, times(coefficients[j + 1]!, decimal(cell))), coefficients[0]!);
    }
    const left = minus(decimal(y[i]!), value);
    sum = plus(sum, times(left, left));
    return nearest(value);
  });
  const degreesOfFreedom = BigInt(y.length - estimates.length);
  // sqrt(top / (bottom dof)) to 30 digits: the root of the fraction scaled by 10^60.
  const scaled = (sum.top * 10n ** 60n) / (sum.bottom * degreesOfFreedom);
  return { fitted, residualSd: nearest({ top: squareRoot(scaled), bottom: 10n ** 30n }) };
}

/**
 * Least squares on 1, x, x², … solved exactly: normal equations in integers, eliminated without fractions (E. H. Bareiss, 1968).
 *
 * @returns the fitted value at each x, rounded once
 */
export function exactLeastSquares(x: readonly number[], y: readonly number[], n: number): number[] {
  const powers = x.map((at) => {
    const point = decimal(at);
    const row: Fraction[] = [{ top: 1n, bottom: 1n }];
    for (let j = 1; j < n; j++) row.push(times(row[j - 1]!, point));
    return row;
  });
  const zero: Fraction = { top: 0n, bottom: 1n };
  const system = Array.from({ length: n }, (_, j) => [
    ...Array.from({ length: n }, (_unused, k) => powers.reduce((sum, row) => plus(sum, times(row[j]!, row[k]!)), zero)),
    y.reduce((sum, value, i) => plus(sum, times(powers[i]![j]!, decimal(value))), zero),
  ]);
  const common = system.flat().reduce((largest, { bottom }) => (bottom > largest ? bottom : largest), 1n);
  const a = system.map((row) => row.map(({ top, bottom }) => top * (common / bottom)));
  let before = 1n;
  for (let k = 0; k < n; k++) {
    for (let i = 0; i < n; i++) {
      if (i === k) continue;
      for (let j = n; j >= 0; j--) if (j !== k) a[i]![j] = (a[i]![j]! * a[k]![k]! - a[i]![k]! * a[k]![j]!) / before;
      a[i]![k] = 0n;
    }
    before = a[k]![k]!;
  }
  // Every diagonal element has become the determinant.
  return powers.map((row) => {
    const top = row.reduce((sum, power, j) => plus(sum, times({ top: a[j]![n]!, bottom: 1n }, power)), zero);
    return nearest({ top: before < 0n ? -top.top : top.top, bottom: top.bottom * (before < 0n ? -before : before) });
  });
}
