/**
 * Windows of a scanning monochromator: one file a line, 20 to 40 samples with hardly any baseline; both scan directions; one window alone.
 * Scans are invented (`support/scan-generator.ts`), the lines are mercury's.
 */
import { describe, expect, it } from "vitest";
import {
  analyseCapture,
  analyseCaptures,
  defaultSetup,
  type Analysis,
  type CaptureInput,
} from "../../packages/core/src/index.ts";
import { scanText, steps } from "./support/scan-generator.ts";

const lines = [253.6521, 296.7283, 365.0158, 404.6565, 435.8335, 546.075];
const errorAt = (nm: number): number => 0.12 + 2e-4 * (nm - 450);

interface WindowOptions {
  samples?: number;
  fwhm?: number;
  isDown?: boolean;
  /** Added to the upward scan's position, nm. */
  backlash?: number;
  seed?: number;
}

function windowText(nm: number, options: WindowOptions = {}): string {
  const { samples = 27, fwhm = 0.5, isDown = false, backlash = 0, seed = 1 } = options;
  const step = fwhm / 6;
  const half = (step * (samples - 1)) / 2;
  const ends = isDown ? [nm + half, nm - half] : [nm - half, nm + half];
  const shown = (one: number): number => one + errorAt(one) + (isDown ? 0 : backlash);
  return scanText(
    {
      positions: steps(ends[0]!, ends[1]!, step),
      lines: lines.map((one) => ({ position: shown(one), height: 9000 })),
      fwhm,
    },
    seed + Math.round(nm),
  );
}

const capture = (nm: number, options: WindowOptions = {}): CaptureInput => ({
  name: `${nm} ${options.isDown === true ? "down" : "up"} ${options.seed ?? 1}.csv`,
  bytes: new TextEncoder().encode(windowText(nm, options)),
  sha256: null,
  part: "lamp",
});
const setup = defaultSetup({
  elements: ["Hg"],
  expectedLinesNm: lines,
  tolerance: [{ fromNm: 200, toNm: 800, toleranceNm: 0.5 }],
});
const named = (analysis: Analysis) =>
  analysis.lines.filter((line) => line.wavelengthNm !== null && line.blendOfNm.length === 0);

describe("many windows make one check", () => {
  it.each([
    [21, 0.4],
    [27, 0.5],
    [40, 0.6],
  ])("%d samples each, FWHM %f nm: every line named once, errors within their intervals", (samples, fwhm) => {
    const { analysis } = analyseCaptures(
      lines.map((nm) => capture(nm, { samples, fwhm })),
      setup,
    );
    expect(analysis.outcome).toBe("identified");
    expect(analysis.verdict!.verdict).toBe("pass");
    for (const nm of lines) {
      const found = analysis.lines.filter((line) => line.wavelengthNm === nm || line.blendOfNm.includes(nm));
      expect(found.length, `${nm} nm`).toBe(1);
      expect(Math.abs(found[0]!.errorNm! - errorAt(found[0]!.wavelengthNm!))).toBeLessThan(4 * found[0]!.errorUncNm!);
      expect(found[0]!.takenFrom).toEqual([`${nm} up 1.csv`]);
    }
  });

  it("the order of the files does not matter", () => {
    const files = lines.map((nm) => capture(nm));
    const lineFacts = (captures: CaptureInput[]) =>
      analyseCaptures(captures, setup).analysis.lines.map((line) => [
        line.wavelengthNm,
        line.errorNm,
        line.errorExpandedUncNm,
      ]);
    expect(lineFacts(files.slice().reverse())).toEqual(lineFacts(files));
  });

  it("intervals hold: 95.45 % within three binomial standard deviations over 60 checks of six windows", () => {
    let held = 0;
    let count = 0;
    for (let seed = 0; seed < 60; seed += 1) {
      const { analysis } = analyseCaptures(
        lines.map((nm) => capture(nm, { seed: 1000 * seed })),
        setup,
      );
      for (const line of named(analysis)) {
        count += 1;
        if (Math.abs(line.errorNm! - errorAt(line.wavelengthNm!)) <= line.errorExpandedUncNm!) held += 1;
      }
    }
    expect(count).toBeGreaterThan(280);
    const share = held / count;
    expect(share).toBeGreaterThan(0.9545 - 3 * Math.sqrt((0.9545 * 0.0455) / count));
  });

  it("long captures on different axes are refused as before", () => {
    const long = (first: number): CaptureInput => ({
      name: `${first}.csv`,
      bytes: new TextEncoder().encode(scanText({ positions: steps(first, first + 60, 0.2), lines: [], fwhm: 1 }, 1)),
      sha256: null,
      part: "lamp",
    });
    const { analysis } = analyseCaptures([long(250), long(400)], setup);
    expect([analysis.outcome, analysis.warnings[0]!.code]).toEqual(["refused", "different-axes"]);
  });
});

describe("both directions", () => {
  const backlash = 0.06;

  it("the position is the mean of both, the difference is the backlash, per line and overall", () => {
    const files = lines.flatMap((nm) => [capture(nm, { backlash }), capture(nm, { backlash, isDown: true, seed: 7 })]);
    const { analysis } = analyseCaptures(files, setup);
    expect(analysis.outcome).toBe("identified");
    expect(Math.abs(analysis.backlashNm!.value - backlash)).toBeLessThan(4 * analysis.backlashNm!.unc);
    expect(analysis.backlashNm!.unc).toBeLessThan(0.002);
    for (const line of named(analysis)) {
      expect(Math.abs(line.backlash!.value - backlash)).toBeLessThan(4.5 * line.backlash!.unc);
      expect(Math.abs(line.errorNm! - errorAt(line.wavelengthNm!) - backlash / 2)).toBeLessThan(4 * line.errorUncNm!);
    }
    expect(analysis.files.map((file) => file.direction).slice(0, 2)).toEqual(["up", "down"]);
  });

  it("one direction alone has none", () => {
    const { analysis } = analyseCaptures(
      lines.map((nm) => capture(nm)),
      setup,
    );
    expect(analysis.backlashNm).toBeUndefined();
    expect(analysis.lines.every((line) => line.backlash === undefined)).toBe(true);
  });

  it("repeats of each direction give a repeatability that the backlash is no part of", () => {
    const jitter = [0, 0.02, -0.015];
    const files = lines.flatMap((nm) =>
      jitter.flatMap((extra, k) => [
        capture(nm, { backlash: backlash + extra, seed: 10 * k }),
        capture(nm, { backlash, isDown: true, seed: 10 * k + 5 }),
      ]),
    );
    const { analysis } = analyseCaptures(files, setup);
    for (const line of named(analysis)) {
      const entry = line.budget.find(({ contribution }) => contribution === "repeatability");
      expect(entry?.uncNm ?? 0).toBeGreaterThan(0.001);
      expect(entry?.uncNm ?? 0).toBeLessThan(0.02);
    }
  });

  it("the whole range scanned upwards and downwards on the same samples", () => {
    const whole = (isDown: boolean): CaptureInput => {
      const positions = isDown ? steps(600, 250, 0.1) : steps(250, 600, 0.1);
      const shift = isDown ? 0 : backlash;
      const scan = {
        positions,
        lines: lines.map((nm) => ({ position: nm + errorAt(nm) + shift, height: 9000 })),
        fwhm: 0.6,
      };
      return {
        name: isDown ? "down.csv" : "up.csv",
        bytes: new TextEncoder().encode(scanText(scan, isDown ? 3 : 4)),
        sha256: null,
        part: "lamp",
      };
    };
    const { analysis } = analyseCaptures([whole(false), whole(true)], setup);
    expect(analysis.outcome).toBe("identified");
    expect(Math.abs(analysis.backlashNm!.value - backlash)).toBeLessThan(4 * analysis.backlashNm!.unc);
  });
});

describe("one window alone", () => {
  it("is named by its nominal place, and that is said", () => {
    for (const nm of [253.6521, 435.8335, 546.075]) {
      const { analysis } = analyseCapture(windowText(nm), defaultSetup({ elements: ["Hg"] }));
      expect(analysis.outcome).toBe("identified");
      const line = analysis.lines.find((one) => one.wavelengthNm === nm)!;
      expect(Math.abs(line.errorNm! - errorAt(nm))).toBeLessThan(4 * line.errorUncNm!);
      expect(analysis.warnings.map(({ code }) => code)).toContain("nominal");
    }
  });

  it("stays without a name where no line of the lamp is near", () => {
    const { analysis } = analyseCapture(windowText(435.8335), defaultSetup({ elements: ["He"] }));
    expect(analysis.outcome).toBe("unidentified");
    expect(analysis.lines.every((line) => line.wavelengthNm === null)).toBe(true);
  });

  it("a descending file gives the same figures", () => {
    const rows = windowText(546.075).trim().split("\n");
    const turned = [rows[0]!, ...rows.slice(1).reverse()].join("\n");
    const [up, down] = [windowText(546.075), `${turned}\n`].map(
      (text) => analyseCapture(text, defaultSetup({ elements: ["Hg"] })).analysis,
    );
    expect(down!.lines).toEqual(up!.lines);
  });
});
