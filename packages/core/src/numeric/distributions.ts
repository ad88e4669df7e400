/**
 * Distributions: normal, Student, chi-squared, binomial and Poisson tails, and their quantiles.
 *
 * Cumulative values come from the error function and the incomplete gamma and beta functions of `elementary.ts`.
 * Quantiles start from a published approximation and are refined on the cumulative value itself, so that
 * their error is that of the cumulative function (relative 1e-12 or better, held by distributions.test.ts).
 */
import { erfc, exp, lgamma, log, log1p, regularizedBeta, regularizedGammaP, regularizedGammaQ } from "./elementary.ts";

const SQRT_HALF = 0.7071067811865476;
const INVERSE_SQRT_TWO_PI = 0.3989422804014327;
const PI = 3.141592653589793;

/** Density of the standard normal distribution. */
export function normalDensity(z: number): number {
  return INVERSE_SQRT_TWO_PI * exp(-0.5 * z * z);
}

/** P(Z <= z) of the standard normal distribution, accurate in both tails. */
export function normalCdf(z: number): number {
  return 0.5 * erfc(-z * SQRT_HALF);
}

/** z with P(Z <= z) = p, for 0 < p < 1; ±Infinity at the ends, NaN outside. */
export function normalQuantile(p: number): number {
  if (!(p >= 0 && p <= 1)) return NaN;
  if (p === 0 || p === 1) return p === 0 ? -Infinity : Infinity;
  if (p === 0.5) return 0;
  const upper = p > 0.5;
  const tail = upper ? 1 - p : p;
  // Abramowitz & Stegun 26.2.23, error below 4.5e-4, then Newton steps with Halley's correction on the tail itself.
  const t = Math.sqrt(-2 * log(tail));
  let z = t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
  for (let i = 0; i < 3; i++) {
    const step = (0.5 * erfc(z * SQRT_HALF) - tail) / normalDensity(z);
    z += step / (1 - 0.5 * z * step);
  }
  return upper ? z : -z;
}

/** Upper tail P(T > t) of Student's distribution for t >= 0. */
function studentUpperTail(t: number, dof: number): number {
  const squared = t * t;
  return 0.5 * regularizedBeta(dof / (dof + squared), dof / 2, 0.5, squared / (dof + squared));
}

/** P(T <= t) of Student's distribution; dof > 0, Infinity is the normal distribution. */
export function studentCdf(t: number, dof: number): number {
  if (!(dof > 0) || t !== t) return NaN;
  if (dof === Infinity) return normalCdf(t);
  return t > 0 ? 1 - studentUpperTail(t, dof) : studentUpperTail(-t, dof);
}

function studentDensity(t: number, dof: number): number {
  const logFront = lgamma((dof + 1) / 2) - lgamma(dof / 2) - 0.5 * log(dof * PI);
  return exp(logFront - 0.5 * (dof + 1) * log1p((t * t) / dof));
}

/**
 * t with P(T <= t) = p.
 *
 * @param p    0 < p < 1; ±Infinity at the ends, NaN outside
 * @param dof  degrees of freedom, > 0, need not be whole; Infinity is the normal distribution
 */
export function studentQuantile(p: number, dof: number): number {
  if (!(dof > 0)) return NaN;
  if (dof === Infinity || !(p > 0 && p < 1) || p === 0.5) return normalQuantile(p);
  const upper = p > 0.5;
  const tail = upper ? 1 - p : p;
  // Bracket by doubling, then Newton kept inside the bracket.
  let low = 0;
  let high = Math.max(1, -normalQuantile(tail));
  while (studentUpperTail(high, dof) > tail && high < 1e300) {
    low = high;
    high *= 2;
  }
  let t = low + 0.5 * (high - low);
  for (let i = 0; i < 200; i++) {
    const difference = studentUpperTail(t, dof) - tail;
    if (difference > 0) low = t;
    else high = t;
    let next = t + difference / studentDensity(t, dof);
    if (!(next > low && next < high)) next = low + 0.5 * (high - low);
    const done = Math.abs(next - t) <= 4e-16 * t;
    t = next;
    if (done) break;
  }
  return upper ? t : -t;
}

/** P(X <= x) of the chi-squared distribution. */
export function chiSquareCdf(x: number, dof: number): number {
  return x <= 0 ? 0 : regularizedGammaP(dof / 2, x / 2);
}

/** P(X > x) of the chi-squared distribution, accurate when small. */
export function chiSquareUpperTail(x: number, dof: number): number {
  return x <= 0 ? 1 : regularizedGammaQ(dof / 2, x / 2);
}

/** P(at least k successes in n trials of probability p), accurate when small. */
export function binomialUpperTail(k: number, n: number, p: number): number {
  if (k <= 0) return 1;
  if (k > n) return 0;
  return regularizedBeta(p, k, n - k + 1);
}

/** P(at least k events) of a Poisson distribution, accurate when small. */
export function poissonUpperTail(k: number, mean: number): number {
  if (k <= 0) return 1;
  return regularizedGammaP(k, mean);
}
