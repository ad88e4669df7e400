/** The command line's promise: one document a file, the published field names, sentences for what is refused. */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { afterAll, beforeAll, describe, expect, it, vi } from "vitest";
import { main } from "../../scripts/analyse/main.ts";
import { analyseFile } from "../../scripts/analyse/analyse-file.ts";
import { readOptions } from "../../scripts/analyse/options.ts";
import { bestPolynomial, fileOf, loadCapture } from "./support/real-capture.ts";

let folder: string;
let prior: string;
const neon = fileOf("ne-raman-bench.csv");
const arc = fileOf("ar-arc-angstrom.csv");

beforeAll(() => {
  folder = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-analyse-"));
  prior = path.join(folder, "coeffs.json");
  const { coefficients } = bestPolynomial(loadCapture("ne-raman-bench.csv", ["Ne"]).truth.filter((line) => line.inFit));
  fs.writeFileSync(prior, JSON.stringify({ coefficients }));
  fs.writeFileSync(path.join(folder, "empty.csv"), "");
});
afterAll(() => fs.rmSync(folder, { recursive: true, force: true }));

function run(...argv: string[]): { code: number; out: string; err: string } {
  let out = "";
  let err = "";
  const stdout = vi.spyOn(process.stdout, "write").mockImplementation((chunk) => (out += String(chunk)) !== "");
  const stderr = vi.spyOn(process.stderr, "write").mockImplementation((chunk) => (err += String(chunk)) !== "");
  try {
    return { code: main(argv), out, err };
  } finally {
    stdout.mockRestore();
    stderr.mockRestore();
  }
}

describe("npm run -s analyse", () => {
  it("prints one JSON document a file, one a line, and exits 1 when one of them was refused", () => {
    const { code } = run(neon, "--lamp", "Ne", "--prior", prior, "--json");
    expect(code).toBe(0);
    const two = run(
      path.join(folder, "empty.csv"),
      neon,
      "--lamp",
      "Ne",
      "--prior",
      prior,
      "--tolerance",
      "0.1",
      "--json",
    );
    expect(two.code).toBe(1);
  });

  it("gives the fields and units that are promised", () => {
    const result = analyseFile(
      neon,
      readOptions([neon, "--lamp", "ne", "--prior", prior, "--tolerance", "0.1", "--json"]),
    );
    expect(Object.keys(result.file)).toEqual(
      expect.arrayContaining([
        "name",
        "sha256",
        "rows",
        "axis",
        "axisUnit",
        "first",
        "last",
        "intensitySum",
        "intensityMax",
        "metadata",
        "delimiter",
        "decimal",
        "missing",
      ]),
    );
    expect(result).toMatchObject({ outcome: "identified", verdict: "pass", notIncluded: ["set-up reproducibility"] });
    const line = result.lines.find(
      (one) => one.wavelengthNm !== null && Math.abs(one.wavelengthNm - 626.6495) < 0.001,
    )!;
    expect(Object.keys(line).sort()).toEqual(
      [
        "position",
        "positionUnc",
        "wavelengthNm",
        "order",
        "medium",
        "species",
        "errorNm",
        "errorExpandedUncNm",
        "coverageFactor",
        "fwhm",
        "area",
        "flags",
        "used",
      ].sort(),
    );
    expect(line).toMatchObject({ order: 1, medium: "air", species: "Ne I" });
    expect(line.position).toBeCloseTo(1474.3, 0);
    expect(result.dispersion!.samples).toHaveLength(11);
    expect(result.dispersion!.samples[10]!.px).toBe(2047);
  });

  it("prints positions of an angstrom axis in angstrom, and the axis in its powers", () => {
    const result = analyseFile(arc, readOptions([arc, "--lamp", "Ar"]));
    expect(result.file).toMatchObject({ axisUnit: "Å", axis: "wavelength", first: 9623.977323684081 });
    const line = result.lines.find((one) => one.wavelengthNm === 763.5106)!;
    expect(line.position).toBeCloseTo(7635.1, 0);
    const { coefficients } = result.dispersion!;
    const nm = coefficients.reduceRight((sum, coefficient) => sum * line.position + coefficient, 0);
    expect(nm).toBeCloseTo(763.51, 1);
  });

  it("states no error without an earlier axis", () => {
    const result = analyseFile(neon, readOptions([neon, "--lamp", "Ne", "--range", "546:658", "--tolerance", "0.1"]));
    expect(result.outcome).toBe("identified");
    expect(result.verdict).toBeNull();
    expect(result.lines.every((line) => line.errorNm === null && line.errorExpandedUncNm === null)).toBe(true);
    expect(result.dispersion!.degree).toBeGreaterThan(1);
  });

  it("says in a sentence what is missing or out of its reach", () => {
    const reasons = [
      ["--lamp", "Ne"],
      [],
      ["--lamp", "Ne", "--kind", "absorption"],
      ["--lamp", "Ne", "--range", "546:658", "--channel", "Blue"],
      ["--lamp", "Ne", "--axis", "cm-1"],
    ].map((argv) => analyseFile(neon, readOptions([neon, ...argv])));
    for (const { outcome, reason } of reasons) {
      expect(outcome).toBe("refused");
      expect(reason).toMatch(/[.?]$/);
    }
    expect(reasons[2]!.reason).toContain("absorption");
    expect(reasons[3]!.reason).toContain("Blue");
    expect(analyseFile(path.join(folder, "none.csv"), readOptions(["none.csv"])).outcome).toBe("refused");
  });

  it("stops after reading when asked", () => {
    const result = analyseFile(neon, readOptions([neon, "--read-only"]));
    expect(result.file).toMatchObject({ rows: 2048, axis: "pixel", first: 0, last: 2047 });
    expect(result.lines).toEqual([]);
  });

  it.each([
    [["--lamp", "Ne"], "Name at least one file"],
    [["x", "--lamp", "Xx"], "Xx"],
    [["x", "--range", "5"], "--range"],
    [["x", "--axis", "furlong"], "--axis"],
    [["x", "--tolerance", "-1"], "--tolerance"],
    [["x", "--prior", "nowhere.json"], "--prior"],
    [["x", "--nonsense"], "nonsense"],
  ])("answers %j with a sentence and exit code 2", (argv, word) => {
    const { code, out, err } = run(...argv);
    expect(code).toBe(2);
    expect(out).toBe("");
    expect(err).toContain(word);
  });
});
