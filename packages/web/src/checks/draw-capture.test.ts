import { describe, expect, test } from "vitest";
import { drawCapture, mostPairs, thin } from "./draw-capture.ts";

const bytes = (text: string) => new TextEncoder().encode(text);

describe("a dropped file is drawn ahead of the server", () => {
  test("thinning keeps a one-sample peak among 100 000 samples", () => {
    const x = Array.from({ length: 100_000 }, (_, index) => index);
    const counts = x.map((index) => (index === 70_001 ? 5000 : index % 7));
    const thinned = thin(x, counts, mostPairs);
    expect(thinned.x.length).toBe(2 * mostPairs);
    expect(thinned.x[thinned.counts.indexOf(5000)]).toBe(70_001);
    expect(thinned.x.every((value, index) => index === 0 || value >= (thinned.x[index - 1] ?? 0))).toBe(true);
  });
  test("pixels become wavelengths by the axis in force: 200 + 0.5 * 10 = 205 nm", () => {
    const text = `pixel,counts\n${Array.from({ length: 20 }, (_, index) => `${index},${100 + index}`).join("\n")}\n`;
    const axis = {
      coefficients: [200, 0.5],
      firstPx: 0,
      lastPx: 19,
      chebyshevCovariance: null,
      degreesOfFreedom: null,
      meaning: "standard-air" as const,
    };
    const drawn = drawCapture(bytes(text), "a.csv", axis);
    expect(drawn.outcome).toBe("drawn");
    if (drawn.outcome !== "drawn") return;
    expect(drawn.rows).toBe(20);
    expect(drawn.drawing.x[10]).toBeCloseTo(205, 9);
    expect(drawn.analysis.verdict).toBeNull();
  });
  test("what cannot be read is refused in words", () => {
    const drawn = drawCapture(new Uint8Array(0), "empty.csv", null);
    expect(drawn.outcome).toBe("refused");
    if (drawn.outcome === "refused") expect(drawn.reason.length).toBeGreaterThan(10);
  });
});
