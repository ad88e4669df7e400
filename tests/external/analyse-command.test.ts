/** The command line's promise: one document a file, the published field names, sentences for what is refused. */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { main } from "../../scripts/analyse/main.ts";
import { analyseFile } from "../../scripts/analyse/analyse-file.ts";
import { readOptions } from "../../scripts/analyse/options.ts";
import { airToVacuumNm } from "../../packages/core/src/light/air.ts";
import { runCommand } from "./support/run-command.ts";
import { bestPolynomial, fileOf, loadCapture } from "./support/real-capture.ts";

let folder: string;
let prior: string;
const textFixtures = path.resolve(import.meta.dirname, "../fixtures/capture-text");
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

const run = (...argv: string[]) => runCommand(main, argv);

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

  it("says in a sentence what is missing", () => {
    const reasons = [
      [],
      ["--kind", "absorption"],
      ["--lamp", "Ne", "--range", "546:658", "--channel", "Blue"],
      ["--lamp", "Ne", "--axis", "nm", "--prior", prior],
    ].map((argv) => analyseFile(neon, readOptions([neon, ...argv])));
    for (const { outcome, reason } of reasons) {
      expect(outcome).toBe("refused");
      expect(reason).toMatch(/[.?]$/);
    }
    expect(reasons[1]!.reason).toContain("--bands");
    expect(reasons[2]!.reason).toContain("Blue");
    expect(reasons[3]!.reason).toContain("--prior");
    expect(analyseFile(path.join(folder, "none.csv"), readOptions(["none.csv"])).outcome).toBe("refused");
  });

  it("identifies with the lamp alone when neither a range nor an earlier axis is given", () => {
    const result = analyseFile(neon, readOptions([neon, "--lamp", "Ne"]));
    expect(["identified", "ambiguous"]).toContain(result.outcome);
    expect(result.lines.every((line) => line.errorNm === null)).toBe(true);
  });

  it("asks, with the readings, where two fit; the answer is an option", () => {
    const open = path.join(textFixtures, "ambiguous-thousands.csv");
    const asked = analyseFile(open, readOptions([open, "--read-only"]));
    expect(asked).toMatchObject({ outcome: "refused" });
    expect(asked.readings).toHaveLength(2);
    expect(asked.reason).toMatch(/line 2/i);
    const told = analyseFile(open, readOptions([open, "--read-only", "--decimal", "."]));
    expect(told.file).toMatchObject({ rows: 60, decimal: "." });
    expect((told.file as { intensityMax: number }).intensityMax).toBeGreaterThan(1000);
  });

  it("chooses a channel by its name, and says what nothing parts", () => {
    const titles = path.join(textFixtures, "two-row-titles.csv");
    const result = analyseFile(titles, readOptions([titles, "--read-only", "--channel", "dark"]));
    expect(result.file).toMatchObject({ channel: "Dark (counts)", intensityMax: 102, delimiter: "," });
    const packed = path.join(textFixtures, "jcamp-packed.jdx");
    expect(analyseFile(packed, readOptions([packed, "--read-only"])).file).toMatchObject({ delimiter: null, rows: 60 });
  });

  it("lets the axis be overruled, and takes full scale and scans from the command", () => {
    const asPixels = analyseFile(arc, readOptions([arc, "--read-only", "--axis", "pixel"]));
    expect(asPixels.file).toMatchObject({ axis: "pixel", axisUnit: "px", first: 0, last: 4095 });
    const asSteps = analyseFile(neon, readOptions([neon, "--read-only", "--axis", "step"]));
    expect(asSteps.file).toMatchObject({ axis: "step", axisUnit: "step", first: 0, last: 2047 });
    const top = (asPixels.file as { intensityMax: number }).intensityMax;
    const atTop = (scans: string): number =>
      analyseFile(
        arc,
        readOptions([arc, "--lamp", "Ar", "--full-scale", String(top / 4), "--scans", scans]),
      ).lines.filter((line) => line.flags.includes("saturated")).length;
    expect(atTop("4")).toBeGreaterThan(0);
    expect(atTop("4")).toBeLessThan(atTop("1"));
    expect(atTop("40")).toBe(0);
  });

  describe("on axes of other kinds", () => {
    const vacuumLinesNm = [404.6565, 435.8335, 546.075, 576.961, 579.067].map((airNm) => airToVacuumNm(airNm));
    /** Five mercury lines 0.6 nm wide on an axis that shows wavenumbers or energies a little too large: invented. */
    function write(name: string, heading: string, axis: number[], vacuumNmOf: (value: number) => number): string {
      const file = path.join(folder, name);
      const rows = axis.map((at, i) => {
        const nm = vacuumNmOf(at);
        const light = vacuumLinesNm.reduce((sum, line, k) => {
          const t = ((nm - line) / 0.6) * 2.3548;
          return sum + (Math.abs(t) < 10 ? (3000 + 1000 * k) * Math.exp(-0.5 * t * t) : 0);
        }, 0);
        return `${at},${(300 + light + 4 * Math.sin(i * i)).toFixed(2)}`;
      });
      fs.writeFileSync(file, `${heading},Signal\n${rows.join("\n")}\n`);
      return file;
    }

    it("gives positions, errors and tolerance in cm-1", () => {
      const axis = Array.from({ length: 5400 }, (_, i) => Number((26000 - 1.7 * i).toFixed(1)));
      const file = write("perCm.csv", "Wavenumber (cm^-1)", axis, (value) => 1e7 / (value - 1.5));
      const run = (tolerance: string): ReturnType<typeof analyseFile> =>
        analyseFile(file, readOptions([file, "--lamp", "Hg", "--tolerance", tolerance]));
      const result = run("3");
      expect(result).toMatchObject({ outcome: "identified", verdict: "pass" });
      expect(result.file).toMatchObject({ axis: "wavenumber", axisUnit: "cm-1", first: 26000 });
      const named = result.lines.filter((line) => line.wavelengthNm !== null);
      expect(named.length).toBeGreaterThanOrEqual(3);
      for (const line of named) {
        expect(line).not.toHaveProperty("errorNm");
        expect(line.errorPerCm!).toBeCloseTo(1.5, 0);
        expect(line.position - line.wavenumberPerCm!).toBeCloseTo(line.errorPerCm!, 6);
        expect(line.errorExpandedUncPerCm!).toBeGreaterThan(0);
      }
      expect(run("1").verdict).toBe("fail");
    });

    it("gives positions and widths in eV where the file has energies, errors in nm of vacuum", () => {
      const axis = Array.from({ length: 5000 }, (_, i) => Number((2.05 + 0.00022 * i).toFixed(5)));
      const file = write("energy.csv", "Photon energy (eV)", axis, (value) => 1239.8419843 / value + 0.02);
      const result = analyseFile(file, readOptions([file, "--lamp", "Hg", "--tolerance", "0.1"]));
      expect(result).toMatchObject({ outcome: "identified", verdict: "pass" });
      expect(result.file).toMatchObject({ axis: "wavelength", axisUnit: "eV", first: 2.05 });
      const blue = result.lines.find((line) => line.wavelengthNm === 435.8335)!;
      expect(blue.position).toBeCloseTo(1239.8419843 / (airToVacuumNm(435.8335) - 0.02), 4);
      expect(blue.errorNm!).toBeCloseTo(-0.02, 2);
      expect(blue.fwhm).toBeCloseTo((0.6 * 2.845) / 435.95, 3);
    });
  });

  it("judges the bands of an absorption standard against its certificate", () => {
    const bands = [287.2, 333.4, 360.8, 418.5, 446, 453.4, 460, 536.4, 637.5];
    const certificate = path.join(folder, "certificate.csv");
    fs.writeFileSync(
      certificate,
      `# material: invented glass\n# bandwidthNm: 1\nwavelengthNm,expandedUncNm\n${bands.map((nm) => `${nm},0.2`).join("\n")}\n`,
    );
    const spectrum = path.join(folder, "bands.csv");
    const rows = Array.from({ length: 4001 }, (_, i) => {
      const nm = 270 + 0.1 * i;
      const absorbance = bands.reduce((sum, band, k) => {
        const t = (nm - 0.15 - band) / 2.2;
        return sum + (0.4 + 0.1 * (k % 4)) / (1 + t * t);
      }, 0.08);
      return `${nm.toFixed(1)},${(absorbance + 0.0004 * Math.sin(i * i)).toFixed(5)}`;
    });
    fs.writeFileSync(spectrum, `Wavelength (nm),Absorbance\n${rows.join("\n")}\n`);
    const argv = [spectrum, "--kind", "absorption", "--bands", certificate, "--bandwidth", "1", "--tolerance", "1"];
    const result = analyseFile(spectrum, readOptions(argv));
    expect(result).toMatchObject({ outcome: "identified", verdict: "pass" });
    const named = result.lines.filter((line) => line.wavelengthNm !== null);
    expect(named.length).toBeGreaterThanOrEqual(6);
    for (const line of named) {
      if (line.errorNm === null) continue;
      expect(Math.abs(line.errorNm! - 0.15)).toBeLessThan(0.1);
      expect(line.errorExpandedUncNm!).toBeGreaterThanOrEqual(0.2);
    }
  });

  it("goes on after a file that is refused, keeps the order, and prints nothing but documents", () => {
    const files = [
      path.join(folder, "empty.csv"),
      path.join(textFixtures, "comma-twice.csv"),
      path.join(folder, "nowhere.csv"),
      path.join(textFixtures, "jcamp-nmr.jdx"),
      path.join(textFixtures, "tab-utf16le.txt"),
    ];
    const { code, out, err } = run(...files, "--read-only", "--json");
    expect(code).toBe(1);
    expect(err).toBe("");
    const documents = out
      .trimEnd()
      .split("\n")
      .map((line) => JSON.parse(line) as ReturnType<typeof analyseFile>);
    expect(documents.map(({ file }) => file.name)).toEqual(files.map((file) => path.basename(file)));
    expect(documents.map(({ outcome }) => outcome)).toEqual([
      "refused",
      "unidentified",
      "refused",
      "refused",
      "unidentified",
    ]);
    for (const { outcome, reason } of documents) if (outcome === "refused") expect(reason).toMatch(/[.)]$/);
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
    [["x", "--decimal", "dot"], "--decimal"],
    [["x", "--scans", "1.5"], "--scans"],
    [["x", "--bandwidth", "1"], "--kind absorption"],
    [["x", "--kind", "absorption", "--bands", "nowhere.csv"], "--bands"],
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
