import { describe, expect, test } from "vitest";
import * as elementary from "./elementary.ts";
import reference from "./fixtures/elementary-reference.json" with { type: "json" };

type Name = Exclude<keyof typeof reference, "about">;
const functions = elementary as unknown as Record<Name, (...x: number[]) => number>;

/** Spacing of doubles at x. */
function ulp(x: number): number {
  const a = Math.abs(x);
  let spacing = 2.220446049250313e-16;
  while (spacing > 5e-324 && a < spacing / 2.220446049250313e-16) spacing /= 2;
  while (a >= (2 * spacing) / 2.220446049250313e-16) spacing *= 2;
  return Math.max(spacing, 5e-324);
}

function worst(name: Name, measure: (error: number, exact: number) => number): number {
  let largest = 0;
  for (const row of reference[name] as number[][]) {
    const [high, low] = row.slice(-2) as [number, number];
    const value = functions[name](...row.slice(0, -2));
    const error = value - high - low;
    largest = Math.max(largest, Number.isFinite(value) ? measure(Math.abs(error), Math.abs(high)) : Infinity);
  }
  return largest;
}

describe("elementary functions against mpmath at 60 digits", () => {
  test.each<[Name, number]>([
    ["exp", 1],
    ["expm1", 1],
    ["log", 1],
    ["log1p", 1],
    ["log10", 1],
    ["pow", 1.5],
    ["hypot", 1],
    ["sin", 1],
    ["cos", 1],
    ["atan", 1.5],
    ["atan2", 1.5],
    ["tan", 2.5],
    ["asin", 2.5],
    ["acos", 2.5],
    ["erf", 1],
    ["erfc", 3],
    ["erfcx", 3],
  ])("%s stays below %f ulp", (name, limit) => {
    expect(worst(name, (error, exact) => error / ulp(exact))).toBeLessThan(limit);
  });
  test("lgamma: 1e-14 absolute or 1e-15 relative", () => {
    expect(worst("lgamma", (error, exact) => error / Math.max(1e-14, 1e-15 * exact))).toBeLessThan(1);
  });
  test.each<Name>(["regularizedGammaP", "regularizedGammaQ", "regularizedBeta"])(
    "%s: 2e-13 relative where the value is above 1e-250",
    (name) => {
      expect(worst(name, (error, exact) => (exact > 1e-250 ? error / exact : 0))).toBeLessThan(2e-13);
    },
  );
});

describe("special cases", () => {
  test("exp, log and pow at the ends", () => {
    expect([elementary.exp(0), elementary.exp(-Infinity), elementary.exp(710), elementary.exp(NaN)]).toEqual([
      1,
      0,
      Infinity,
      NaN,
    ]);
    expect([elementary.log(0), elementary.log(1), elementary.log(-1), elementary.log(Infinity)]).toEqual([
      -Infinity,
      0,
      NaN,
      Infinity,
    ]);
    expect([elementary.pow(-2, 3), elementary.pow(-2, 0.5), elementary.pow(0, -1), elementary.pow(NaN, 0)]).toEqual([
      -8,
      NaN,
      Infinity,
      1,
    ]);
    expect([elementary.log10(1000), elementary.log10(1e-5), elementary.pow(10, 15)]).toEqual([3, -5, 1e15]);
  });
  test("angles beyond 1e6 rad are refused, not rounded away", () => {
    expect(() => elementary.sin(2e6)).toThrow(RangeError);
    expect(elementary.cos(NaN)).toBeNaN();
  });
  test("quadrants and signed zeros of atan2", () => {
    expect([elementary.atan2(0, 1), elementary.atan2(0, -1), elementary.atan2(-0, -1), elementary.atan2(1, 0)]).toEqual(
      [0, Math.PI, -Math.PI, Math.PI / 2],
    );
  });
});
