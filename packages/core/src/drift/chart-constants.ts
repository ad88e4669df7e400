/**
 * Constants of control charts for normal samples of n, from their definitions.
 *
 * d2, d3   mean and standard deviation of the range of n standard normal values (L. H. C. Tippett, Biometrika 17 (1925) 364):
 *          the range has the distribution G(w) = n ∫ φ(x) (Φ(x + w) - Φ(x))^(n-1) dx; mean = ∫ (1 - G), second moment = 2 ∫ w (1 - G)
 * c4       mean of the standard deviation, sqrt(2/(n-1)) Γ(n/2) / Γ((n-1)/2)
 * others   A2 = 3/(d2 √n), A3 = 3/(c4 √n), E2 = 3/d2, D3/D4 = 1 ∓ 3 d3/d2, B3/B4 = 1 ∓ 3 sqrt(1 - c4²)/c4, none below 0
 * Integrals on steps of 1/32: over x by the trapezium rule, whose error for so smooth and fast falling an integrand is below the last
 * digit; over w, which begins at 0 with a slope, by Simpson's. Held to 1e-7 by the published tables' recomputed digits.
 */
import { exp, lgamma } from "../numeric/elementary.ts";
import { normalCdf, normalDensity } from "../numeric/distributions.ts";

export interface ChartConstants {
  d2: number;
  d3: number;
  c4: number;
  A2: number;
  A3: number;
  D3: number;
  D4: number;
  B3: number;
  B4: number;
  E2: number;
}

/** Mean range of two normal values in units of their standard deviation, 2/sqrt(pi). */
export const MOVING_RANGE_D2 = 1.1283791670955126;
/** D4 of two values, 1 + 3 sqrt(pi/2 - 1). */
export const MOVING_RANGE_D4 = 3.2665319192886013;

const step = 1 / 32;
const reach = 9;

/** @param n  sample size, 2 to 25 */
export function chartConstants(n: number): ChartConstants {
  let mean = 0;
  let second = 0;
  for (let i = 0; i * step <= 2 * reach; i++) {
    const w = i * step;
    const weight = i === 0 ? 1 : i % 2 === 1 ? 4 : 2;
    const tail = weight * (1 - rangeCdf(w, n));
    mean += tail;
    second += 2 * w * tail;
  }
  const d2 = (mean * step) / 3;
  const d3 = Math.sqrt((second * step) / 3 - d2 * d2);
  const c4 = Math.sqrt(2 / (n - 1)) * exp(lgamma(n / 2) - lgamma((n - 1) / 2));
  const root = Math.sqrt(n);
  const spread = (3 * Math.sqrt(1 - c4 * c4)) / c4;
  return {
    d2,
    d3,
    c4,
    A2: 3 / (d2 * root),
    A3: 3 / (c4 * root),
    D3: Math.max(0, 1 - (3 * d3) / d2),
    D4: 1 + (3 * d3) / d2,
    B3: Math.max(0, 1 - spread),
    B4: 1 + spread,
    E2: 3 / d2,
  };
}

function rangeCdf(w: number, n: number): number {
  let sum = 0;
  for (let x = -reach; x <= reach; x += step) {
    const between = normalCdf(x + w) - normalCdf(x);
    let power = 1;
    for (let i = 1; i < n; i++) power *= between;
    sum += normalDensity(x) * power;
  }
  return Math.min(1, n * sum * step);
}
