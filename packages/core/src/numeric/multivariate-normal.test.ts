/**
 * Rectangle probabilities against closed forms: independence, W. F. Sheppard's arcsine for two and three quantities, one common
 * factor (integrated along it), exactly dependent quantities.
 */
import { describe, expect, test } from "vitest";
import { asin, normalCdf, normalDensity, normalRectangleProbability, PI } from "./index.ts";

const equicorrelated = (n: number, r: number): number[] =>
  Array.from({ length: n * n }, (_, i) => (i % (n + 1) === 0 ? 1 : r));
const filled = (n: number, value: number): number[] => new Array<number>(n).fill(value);

/** P(all |sqrt(r) T + sqrt(1 - r) E_i - m_i| within limits) along the common T, trapezoid with step 1/40 over ±9. */
function alongCommonFactor(r: number, mean: number[], lower: number[], upper: number[]): number {
  let sum = 0;
  const own = Math.sqrt(1 - r);
  for (let k = -360; k <= 360; k++) {
    const t = k / 40;
    let product = normalDensity(t);
    mean.forEach((m, i) => {
      const shift = m + Math.sqrt(r) * t;
      product *= normalCdf((upper[i]! - shift) / own) - normalCdf((lower[i]! - shift) / own);
    });
    sum += product;
  }
  return sum / 40;
}

describe("closed forms", () => {
  test("independent: the product of the single probabilities", () => {
    const result = normalRectangleProbability([0, 1, -2], [1, 0, 0, 0, 4, 0, 0, 0, 0.25], [-1, -1, -3], [2, 1, -1]);
    const single = (m: number, s: number, a: number, b: number): number =>
      normalCdf((b - m) / s) - normalCdf((a - m) / s);
    const exact = single(0, 1, -1, 2) * single(1, 2, -1, 1) * single(-2, 0.5, -3, -1);
    expect(Math.abs(result.probability - exact)).toBeLessThan(1e-12);
    expect(result.errorEstimate).toBeLessThan(1e-12);
  });
  test.each([-0.95, -0.3, 0, 0.5, 0.99])("two below their means, correlation %d: 1/4 + asin(r) / (2 pi)", (r) => {
    const exact = 0.25 + asin(r) / (2 * PI);
    const result = normalRectangleProbability([3, 5], [4, 2 * r, 2 * r, 1], filled(2, -Infinity), [3, 5], {
      tolerance: 2e-6,
      maxPoints: 50000,
    });
    expect(Math.abs(result.probability - exact)).toBeLessThan(4e-6);
  });
  test("three below their means: 1/8 + (asin r12 + asin r13 + asin r23) / (4 pi)", () => {
    const [a, b, c] = [0.6, -0.2, 0.4];
    const exact = 0.125 + (asin(a) + asin(b) + asin(c)) / (4 * PI);
    const result = normalRectangleProbability(
      filled(3, 0),
      [1, a, b, a, 1, c, b, c, 1],
      filled(3, -Infinity),
      filled(3, 0),
    );
    expect(Math.abs(result.probability - exact)).toBeLessThan(1e-4);
  });
  test.each([
    [5, 0.5, 1.5],
    [20, 0.3, 2],
    [20, 0.95, 1],
    [60, 0.5, 2.5],
    [60, 0.9, 2],
  ])("%d quantities with one common factor, correlation %d, limits ±%d", (n, r, limit) => {
    const mean = Array.from({ length: n }, (_, i) => ((i % 5) - 2) / 4);
    const exact = alongCommonFactor(r, mean, filled(n, -limit), filled(n, limit));
    const result = normalRectangleProbability(mean, equicorrelated(n, r), filled(n, -limit), filled(n, limit), {
      tolerance: 1e-4,
      maxPoints: 10000,
    });
    expect(Math.abs(result.probability - exact)).toBeLessThan(Math.max(result.errorEstimate, 1e-4));
    expect(result.errorEstimate).toBeLessThan(4e-3);
  });
});

describe("singular covariances", () => {
  test("the same quantity twice counts once, its mirror image too; a fixed one only decides whether it lies within", () => {
    const one = normalCdf(1.2) - normalCdf(-0.5);
    // x, x, -x with limits that leave -0.5 … 1.2 together
    const same = normalRectangleProbability([0, 0, 0], [1, 1, -1, 1, 1, -1, -1, -1, 1], [-0.5, -9, -1.2], [9, 1.2, 9]);
    expect(Math.abs(same.probability - one)).toBeLessThan(1e-12);
    const fixed = normalRectangleProbability([0, 3], [1, 0, 0, 0], [-0.5, 2], [1.2, 4]);
    expect(Math.abs(fixed.probability - one)).toBeLessThan(1e-12);
    expect(normalRectangleProbability([0, 5], [1, 0, 0, 0], [-0.5, 2], [1.2, 4]).probability).toBe(0);
  });
  test("x, y, and their sum: P(|x| < 1, |y| < 1, |x + y| < 1) from the integral over x", () => {
    let exact = 0;
    for (let k = -2000; k <= 2000; k++) {
      const x = k / 2000;
      const within = Math.max(0, normalCdf(Math.min(1, 1 - x)) - normalCdf(Math.max(-1, -1 - x)));
      exact += (normalDensity(x) * within * (Math.abs(k) === 2000 ? 0.5 : 1)) / 2000;
    }
    const result = normalRectangleProbability([0, 0, 0], [1, 0, 1, 0, 1, 1, 1, 1, 2], filled(3, -1), filled(3, 1));
    expect(Math.abs(result.probability - exact)).toBeLessThan(1e-4);
  });
  test("forty errors of an offset and a slope: the limits of a straight line at both ends decide", () => {
    // error at x in [-1, 1] is a + b x, so both ends within ±1.5 mean all within: two independent ends a ± b.
    const n = 40;
    const x = Array.from({ length: n }, (_, i) => (2 * i) / (n - 1) - 1);
    const covariance = x.flatMap((p) => x.map((q) => 0.5 + 0.5 * p * q));
    const end = normalCdf(1.5) - normalCdf(-1.5);
    const result = normalRectangleProbability(filled(n, 0), covariance, filled(n, -1.5), filled(n, 1.5));
    expect(Math.abs(result.probability - end * end)).toBeLessThan(1e-4);
  });
});

test("the stated error holds in at least 95 of 100 cases of one common factor, drawn by a fixed rule", () => {
  let state = 12345;
  const next = (): number => (state = (state * 16807) % 2147483647) / 2147483647;
  let held = 0;
  const cases = 100;
  for (let i = 0; i < cases; i++) {
    const n = 3 + Math.floor(next() * 10);
    const r = next() * 0.95;
    const mean = Array.from({ length: n }, () => next() - 0.5);
    const upper = Array.from({ length: n }, () => 0.3 + 2 * next());
    const lower = upper.map((value) => -value);
    const result = normalRectangleProbability(mean, equicorrelated(n, r), lower, upper, { tolerance: 1e-3 });
    if (Math.abs(result.probability - alongCommonFactor(r, mean, lower, upper)) <= result.errorEstimate) held++;
  }
  expect(held).toBeGreaterThanOrEqual(95);
});

test("far from mattering is left out and said; what cannot be is refused", () => {
  const easy = normalRectangleProbability(filled(30, 0), equicorrelated(30, 0.4), filled(30, -12), filled(30, 12));
  expect(easy).toMatchObject({ pointCount: 0 });
  expect(easy.probability).toBeCloseTo(1, 12);
  expect(() => normalRectangleProbability([0, 0], [1, 2, 2, 1], [0, 0], [1, 1])).toThrow(/exceeds/);
  expect(() => normalRectangleProbability([0, 0], [1, 0.5, 0.2, 1], [0, 0], [1, 1])).toThrow(/symmetric/);
  expect(() =>
    normalRectangleProbability(filled(3, 0), [1, 0.9, -0.9, 0.9, 1, 0.9, -0.9, 0.9, 1], filled(3, -1), filled(3, 1)),
  ).toThrow(/no covariance/);
  expect(() => normalRectangleProbability([0], [1, 1], [0], [1])).toThrow(RangeError);
});
