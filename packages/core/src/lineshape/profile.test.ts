import { describe, expect, test } from "vitest";
import type { LineShapeName } from "../analysis/types.ts";
import { measureProfile, profileOf } from "./profile.ts";
import { TabulatedProfile } from "./tabulated.ts";

const cases: [LineShapeName, number[]][] = [
  ["gaussian", [0]],
  ["lorentzian", [0]],
  ["pseudo-voigt", [0, 0.3, 1]],
  ["voigt", [0.05, 0.5, 0.97]],
  ["exponentially-modified-gaussian", [-0.9, -0.3, -1e-3, 0, 1e-6, 0.01, 0.3, 0.9]],
  ["box", [0, 1e-4, 0.01, 0.5, 0.97]],
];

describe.each(cases)("%s", (name, parameters) => {
  const profile = profileOf(name);
  const [middle, below, above] = [new Float64Array(3), new Float64Array(3), new Float64Array(3)];

  test.each(parameters)("derivatives are those of the values, parameter %d", (s) => {
    const h = 1e-5;
    const hs = 1e-6;
    const [lowS, highS] = [Math.max(profile.least, s - hs), Math.min(profile.most, s + hs)];
    for (let u = -6; u <= 6; u += 0.0731) {
      profile.setParameter(s);
      profile.point(u, middle);
      profile.point(u + h, above);
      profile.point(u - h, below);
      expect(Math.abs((above[0]! - below[0]!) / (2 * h) - middle[1]!)).toBeLessThan(1e-8);
      const density = middle[0]!;
      if (profile.hasClosedIntegral) {
        profile.edge(u, middle);
        profile.edge(u + h, above);
        profile.edge(u - h, below);
        expect(Math.abs(middle[1]! - density)).toBeLessThan(1e-9);
        expect(Math.abs((above[0]! - below[0]!) / (2 * h) - density)).toBeLessThan(1e-8);
      }
      if (!profile.hasParameter) continue;
      profile.setParameter(s);
      profile.point(u, middle);
      profile.setParameter(highS);
      profile.point(u, above);
      profile.setParameter(lowS);
      profile.point(u, below);
      expect(Math.abs((above[0]! - below[0]!) / (highS - lowS) - middle[2]!)).toBeLessThan(1e-6);
    }
  });

  test.each(parameters)("area one, first moment zero, half height at the FWHM, parameter %d", (s) => {
    profile.setParameter(s);
    if (name !== "lorentzian" && name !== "voigt" && name !== "pseudo-voigt") {
      let [area, moment] = [0, 0];
      for (let u = -30; u <= 30; u += 0.01) {
        profile.point(u, middle);
        area += 0.01 * middle[0]!;
        moment += 0.01 * u * middle[0]!;
      }
      expect(Math.abs(area - 1)).toBeLessThan(1e-6);
      expect(Math.abs(moment)).toBeLessThan(1e-6);
    }
    const { fwhm, height, top } = measureProfile(profile, s);
    profile.point(top, middle);
    expect(Math.abs(middle[0]! - height)).toBeLessThan(1e-12);
    let [left, right] = [top, top];
    const valueAt = (u: number): number => {
      profile.point(u, middle);
      return middle[0]!;
    };
    while (valueAt(right) > height / 2) right += 1e-4;
    while (valueAt(left) > height / 2) left -= 1e-4;
    expect(Math.abs(right - left - fwhm)).toBeLessThan(3e-4);
  });
});

test("a held Voigt shape in a table is the shape itself to a millionth of its top", () => {
  const voigt = profileOf("voigt");
  const [exact, near] = [new Float64Array(3), new Float64Array(3)];
  for (const s of [0.02, 0.4, 0.9]) {
    const table = new TabulatedProfile(voigt, s);
    let integral = 0;
    for (let u = 0; u < 30; u += 0.01) {
      table.point(u, near);
      voigt.setParameter(s);
      voigt.point(u, exact);
      expect(Math.abs(near[0]! - exact[0]!)).toBeLessThan(2e-6);
      voigt.point(u + 0.005, exact);
      integral += 0.01 * exact[0]!;
      table.edge(u + 0.01, near);
      if (u < 19) expect(Math.abs(near[0]! - integral)).toBeLessThan(3e-5);
    }
  }
});
