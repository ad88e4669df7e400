import { describe, expect, test } from "vitest";
import { erfcx, exp, faddeeva, voigtFunction, voigtWithGradient } from "./index.ts";
import reference from "./fixtures/faddeeva-reference.json" with { type: "json" };

const out = new Float64Array(4);

/** Largest error over the reference rows of one of K, L, dK/dx, dK/dy. */
function worst(column: 0 | 1 | 2 | 3, isCounted: (size: number) => boolean, isRelative: boolean): number {
  let largest = 0;
  for (const [x, y, ...exact] of reference.rows as [number, number, ...number[]][]) {
    if (!isCounted(x * x + y * y)) continue;
    voigtWithGradient(x, y, out);
    const error = Math.abs(out[column]! - exact[column]!);
    largest = Math.max(largest, !isRelative ? error : error === 0 ? 0 : error / Math.abs(exact[column]!));
  }
  return largest;
}

describe("Faddeeva function against mpmath", () => {
  test("Voigt's function K and its companion L to 5e-14 relative, down to y = 1e-30 and on the real axis", () => {
    expect(worst(0, () => true, true)).toBeLessThan(5e-14);
    expect(worst(1, () => true, true)).toBeLessThan(5e-14);
  });
  test("derivatives to 1e-13: absolute below |z| = 10, relative beyond", () => {
    for (const column of [2, 3] as const) {
      expect(worst(column, (square) => square < 100, false)).toBeLessThan(1e-13);
      expect(worst(column, (square) => square >= 100, true)).toBeLessThan(1e-13);
    }
  });
  test("the real axis is a Gaussian, the imaginary axis erfcx", () => {
    for (const x of [0, 0.1, 1.3, 4, 9.99, 10.01, 20])
      expect(Math.abs(voigtFunction(x, 0) / exp(-x * x) - 1)).toBeLessThan(5e-14);
    for (const y of [0, 1e-9, 0.3, 1, 3, 6.2, 9.99, 10.01, 1e5])
      expect(Math.abs(voigtFunction(0, y) / erfcx(y) - 1)).toBeLessThan(5e-14);
  });
  test("K is even and L odd in x; nothing below the real axis; 0 at infinity", () => {
    faddeeva(-1.7, 0.4, out);
    const [k, l] = out;
    faddeeva(1.7, 0.4, out);
    expect([out[0], out[1]]).toEqual([k, -l!]);
    expect(voigtFunction(1, -1)).toBeNaN();
    expect([voigtFunction(Infinity, 1), voigtFunction(1, Infinity)]).toEqual([0, 0]);
    expect(Math.abs(voigtFunction(1e250, 1e250) / (0.5 * 5.641895835477563e-251) - 1)).toBeLessThan(1e-14);
  });
});
