/**
 * The neon series, one bench on nine dates (shifts of 0.5 to 3 px, jumps of 10 and 30 px): an axis fitted on one date is brought to every other by
 * offset and scale, from all lines and from three of them, and held to the lines that were fitted by hand on that date.
 */
import { afterAll, describe, expect, it } from "vitest";
import { analyseCapture, axisNm, axisPx, defaultSetup, type PixelAxis } from "../../packages/core/src/index.ts";
import { updateAxis } from "../../packages/core/src/dispersion/update-axis.ts";
import { loadCapture, neonSeries } from "./support/real-capture.ts";

const captures = neonSeries.map((name) => loadCapture(name, ["Ne"]));
const first = captures[4]!;
const nmPerPx = 0.055;

function earlierAxis(): PixelAxis {
  const setup = defaultSetup({ elements: ["Ne"], mode: { kind: "range", firstNm: 545, lastNm: 658 }, degree: 3 });
  return analyseCapture(first.spectrum, setup).analysis.dispersion!.axis;
}
const earlier = earlierAxis();
const table: string[] = [];
afterAll(() => {
  process.stdout.write(`\nNeon series, axis of one date updated by offset and scale\n${table.join("\n")}\n`);
});

/** RMS distance, nm, of the axis from the lines fitted by hand. */
function rmsOff(axis: PixelAxis, capture: (typeof captures)[number]): number {
  const lines = capture.truth.filter((line) => line.inFit);
  let sum = 0;
  for (const { position, wavelengthNm } of lines) sum += (axisNm(axis, position) - wavelengthNm) ** 2;
  return Math.sqrt(sum / lines.length);
}

describe.each(captures)("$name", (capture) => {
  it("identified with the earlier axis and updated: within a fifth of a pixel of the hand-made lines", () => {
    const setup = defaultSetup({
      elements: ["Ne"],
      mode: { kind: "earlier-axis", axis: earlier },
      axisUpdate: "offset-and-scale",
    });
    const { analysis } = analyseCapture(capture.spectrum, setup);
    expect(analysis.outcome).toBe("identified");
    const { axis, update, degreeChosenBy } = analysis.dispersion!;
    expect(degreeChosenBy).toBe("earlier-axis");
    expect(update).toMatchObject({ kind: "offset-and-scale", isCurvatureUncKnown: true });
    const off = rmsOff(axis, capture);
    table.push(
      `${capture.name}  offset ${update!.offsetPx.toFixed(2)} px (u ${update!.offsetUncPx.toFixed(2)})  scale ${(1e4 * update!.scale).toFixed(1)}e-4  ` +
        `RMS ${off.toFixed(4)} nm, ${(off / nmPerPx).toFixed(2)} px`,
    );
    expect(off).toBeLessThan(0.2 * nmPerPx);
    expect(Math.abs(axisPx(axis, 600)! - axisPx(earlier, 600)! + update!.offsetPx)).toBeLessThan(1);
  });

  it("three of the hand-made lines are enough", () => {
    const lines = capture.truth.filter((line) => line.inFit);
    const three = [lines[1]!, lines[lines.length >> 1]!, lines[lines.length - 2]!].map((line) => ({
      position: line.position,
      positionUnc: 0.1,
      wavelengthNm: line.wavelengthNm,
      wavelengthUncNm: 0.0005,
    }));
    const ends = { firstPosition: 0, lastPosition: 2047 };
    const updated = updateAxis(earlier, three, { ...ends, kind: "offset-and-scale" });
    if (updated.outcome !== "fitted") throw new Error(updated.reason);
    expect(rmsOff(updated.dispersion.axis, capture)).toBeLessThan(0.25 * nmPerPx);
  });
});
