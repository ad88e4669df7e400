/**
 * Smooth functions of the pixel as Chebyshev terms: interpolation at the zeros of T_n (C. W. Clenshaw, A. R. Curtis, Numer. Math. 2 (1960)
 * 197; from memory). Exact for polynomials of that degree, to rounding.
 */
import { cos, PI } from "../numeric/elementary.ts";

/**
 * Terms of T_0 … T_degree over [first, last].
 *
 * @param functions  how many functions `fill` returns at once
 * @param fill       writes the value of each function at a pixel into `values`
 * @returns one array of degree + 1 terms a function
 */
export function chebyshevTerms(
  first: number,
  last: number,
  degree: number,
  functions: number,
  fill: (px: number, values: Float64Array) => void,
): Float64Array[] {
  const n = degree + 1;
  const terms = Array.from({ length: functions }, () => new Float64Array(n));
  const values = new Float64Array(functions);
  for (let node = 0; node < n; node++) {
    const angle = (PI * (node + 0.5)) / n;
    fill((first + last) / 2 + (cos(angle) * (last - first)) / 2, values);
    for (let k = 0; k < n; k++) {
      const share = ((k === 0 ? 1 : 2) / n) * cos(k * angle);
      for (let f = 0; f < functions; f++) {
        const term = terms[f] as Float64Array;
        term[k] = (term[k] as number) + share * (values[f] as number);
      }
    }
  }
  return terms;
}

/** J C J' for a parameter covariance C (n x n) and the terms of each parameter's partial derivative; row-major. */
export function covarianceOfTerms(partials: readonly Float64Array[], covariance: ArrayLike<number>): number[] {
  const n = partials.length;
  const size = (partials[0] as Float64Array).length;
  const result = new Array<number>(size * size).fill(0);
  for (let r = 0; r < size; r++) {
    for (let c = 0; c < size; c++) {
      let sum = 0;
      for (let a = 0; a < n; a++) {
        for (let b = 0; b < n; b++) {
          sum +=
            ((partials[a] as Float64Array)[r] as number) *
            (covariance[a * n + b] as number) *
            ((partials[b] as Float64Array)[c] as number);
        }
      }
      result[r * size + c] = sum;
    }
  }
  return result;
}
