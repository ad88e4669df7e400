/**
 * Chebyshev polynomials of the first kind T_j(t): values, sums, derivative, conversion to ordinary powers.
 *
 * t = (2x - first - last) / (last - first), so that [first, last] becomes [-1, 1].
 * Sums by C. W. Clenshaw's recurrence (Math. Tables Aids Comput. 9 (1955) 118).
 */

/** Position x as t in [-1, 1] over [first, last]; linear beyond. */
export function chebyshevArgument(x: number, first: number, last: number): number {
  return (2 * x - first - last) / (last - first);
}

/** Fills values[offset + j] with T_j(t) for j = 0 … degree. */
export function fillChebyshevBasis(values: Float64Array, offset: number, degree: number, t: number): void {
  values[offset] = 1;
  if (degree > 0) values[offset + 1] = t;
  for (let j = 2; j <= degree; j++) values[offset + j] = 2 * t * values[offset + j - 1]! - values[offset + j - 2]!;
}

/** T_0(t) … T_degree(t). */
export function chebyshevBasis(degree: number, t: number): Float64Array {
  const values = new Float64Array(degree + 1);
  fillChebyshevBasis(values, 0, degree, t);
  return values;
}

/** Sum of coefficients[j] T_j(t). */
export function evaluateChebyshev(coefficients: ArrayLike<number>, t: number): number {
  let next = 0;
  let afterNext = 0;
  for (let j = coefficients.length - 1; j >= 1; j--) {
    const current = 2 * t * next - afterNext + coefficients[j]!;
    afterNext = next;
    next = current;
  }
  return t * next - afterNext + (coefficients[0] ?? 0);
}

/** Coefficients of the derivative with respect to t. */
export function differentiateChebyshev(coefficients: ArrayLike<number>): Float64Array {
  const degree = coefficients.length - 1;
  if (degree < 1) return new Float64Array(1);
  const derivative = new Float64Array(degree);
  for (let j = degree; j >= 1; j--) derivative[j - 1] = 2 * j * coefficients[j]! + (derivative[j + 1] ?? 0);
  derivative[0] = derivative[0]! / 2;
  return derivative;
}

/**
 * The same polynomial in ascending powers of x: c0 + c1 x + c2 x² + …
 *
 * @param coefficients  of T_j(t), t over [first, last]
 * @returns as many coefficients as came in
 */
export function chebyshevToPowers(coefficients: ArrayLike<number>, first: number, last: number): Float64Array {
  const length = coefficients.length;
  const scale = 2 / (last - first);
  const shift = -(first + last) / (last - first);
  // Clenshaw's recurrence on polynomials in x instead of numbers.
  let next = new Float64Array(length);
  let afterNext = new Float64Array(length);
  for (let j = length - 1; j >= 0; j--) {
    const factor = j === 0 ? 1 : 2;
    const current = new Float64Array(length);
    for (let i = 0; i < length; i++) {
      const shifted = i > 0 ? next[i - 1]! : 0;
      current[i] = factor * (shift * next[i]! + scale * shifted) - afterNext[i]! + (i === 0 ? coefficients[j]! : 0);
    }
    afterNext = next;
    next = current;
  }
  return next;
}
