/**
 * Absorption bands: places and intervals on spectra with known truth (`support/band-generator.ts`, no code of the core), ordinates of every kind,
 * certificates that do not fit, and the published tables.
 */
import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import {
  analyseCapture,
  analyseCaptures,
  defaultSetup,
  type Analysis,
  type AnalysisSetup,
  type BandCertificate,
  type CaptureInput,
} from "../../packages/core/src/index.ts";
import {
  didymiumLike,
  holmiumCentres,
  indicated,
  makeNormal,
  plainScene,
  recordBands,
  textOf,
  trueBand,
  type BandScene,
  type RecordedBands,
} from "./support/band-generator.ts";
import { studyCase } from "./support/band-study.ts";

const capture = (text: string, name = "band.csv", part: CaptureInput["part"] = "lamp"): CaptureInput => ({
  name,
  bytes: new TextEncoder().encode(text),
  sha256: null,
  part,
});

function certificateOf(scene: BandScene, bandwidthNm: number | null = scene.bandwidthNm): BandCertificate {
  const bands = holmiumCentres.flatMap((nm) => {
    const place = trueBand(scene, nm);
    return place === null
      ? []
      : [{ wavelengthNm: Math.round(place * 1000) / 1000, expandedUncNm: 0.02, coverageFactor: 2 }];
  });
  return { material: "holmium-like solution, invented", bandwidthNm, bands };
}

const setupOf = (scene: BandScene, given: Partial<AnalysisSetup> = {}): AnalysisSetup =>
  defaultSetup({
    sampleKind: "absorption",
    spectralBandwidthNm: scene.bandwidthNm,
    bandCertificate: certificateOf(scene),
    ...given,
  });

function analyse(
  scene: BandScene,
  recorded: RecordedBands,
  headings: string,
  given: Partial<AnalysisSetup> = {},
): Analysis {
  return analyseCapture(textOf(recorded, headings), setupOf(scene, given)).analysis;
}

function errorsOf(analysis: Analysis): number[] {
  return analysis.lines.filter((line) => line.errorNm !== null).map((line) => line.errorNm!);
}

describe("places and intervals", () => {
  // 42 bands a case here; ten thousand in the full form (`runBandStudy`).
  it.each([
    ["0.2 nm steps, noise 0.0005 of T", { stepNm: 0.2 }, 0.02],
    ["0.5 nm steps, Lorentzian bands, %T", { stepNm: 0.5, shape: "lorentzian", ordinate: "%T", decimals: 3 }, 0.03],
    ["1 nm steps, 1 nm bandwidth", { stepNm: 1 }, 0.04],
    ["1 nm steps, 2 nm bandwidth", { stepNm: 1, bandwidthNm: 2 }, 0.05],
    ["0.2 nm steps smoothed over 5", { smoothedOver: 5, noise: 0.001 }, 0.04],
  ] as [string, Partial<BandScene>, number][])(
    "%s: root mean square below the limit, intervals hold",
    (name, scene, limit) => {
      const row = studyCase(name, { ...plainScene, ...scene }, 3, 71);
      expect(row.unidentified).toBe(0);
      expect(row.wrong).toBe(0);
      expect(row.measured).toBe(row.bands);
      expect(row.rmsNm).toBeLessThan(limit);
      // Four binomial standard deviations below 95.45 % of 42.
      expect(row.coverage).toBeGreaterThanOrEqual(82);
    },
  );

  it("adds the certificate's uncertainty and the lab's own to the budget, the largest named first", () => {
    const analysis = analyse(plainScene, recordBands(plainScene, 3), "nm,Abs", {
      setupReproducibility: { value: 0.05, unit: "nm", basis: "stated", degreesOfFreedom: null },
    });
    const line = analysis.lines.find((one) => one.errorNm !== null)!;
    expect(line.budget.map((entry) => entry.contribution).slice(0, 2)).toEqual(["set-up", "reference"]);
    expect(line.budget[1]!.uncNm).toBeCloseTo(0.01, 12);
    expect(line.species).toBe("holmium-like solution, invented");
  });
});

describe("ordinates", () => {
  const scene = { ...plainScene, stepNm: 0.5, noise: 0.0003, offsetNm: 0.3, decimals: 5 };
  const asA = analyse(scene, recordBands({ ...scene, ordinate: "A" }, 5), "Wavelength (nm),Abs");

  it.each([
    ["T", "Wavelength (nm),T", "transmittance"],
    ["%T", "Wavelength (nm),%T", "percent-transmittance"],
    ["A", "x,y", "absorbance"],
    ["T", "x,y", "transmittance"],
    ["%T", "x,y", "percent-transmittance"],
  ] as const)("%s under the heading %s is taken for %s, and says the same as absorbance", (ordinate, heading, kind) => {
    const analysis = analyse(
      scene,
      recordBands({ ...scene, ordinate, decimals: ordinate === "%T" ? 3 : 5 }, 5),
      heading,
    );
    expect(analysis.ordinate).toBe(kind);
    expect(analysis.outcome).toBe("identified");
    const expected = asA.lines.filter((line) => line.errorNm !== null);
    const found = analysis.lines.filter((line) => line.errorNm !== null);
    expect(found.map((line) => line.wavelengthNm)).toEqual(expected.map((line) => line.wavelengthNm));
    found.forEach((line, k) => {
      const both = Math.hypot(line.errorUncNm!, expected[k]!.errorUncNm!);
      expect(Math.abs(line.errorNm! - expected[k]!.errorNm!)).toBeLessThan(2.5 * both);
    });
    if (heading === "x,y") expect(analysis.warnings.map(({ code }) => code)).toContain("ordinate");
  });

  const counts = (seed: number, kind: "sample" | "blank" | "dark"): RecordedBands => {
    const clean = recordBands({ ...scene, ordinate: "T", noise: 0, decimals: 9 }, seed);
    const random = makeNormal(seed);
    const ordinate = clean.ordinate.map((t, i) => {
      const lamp = 30000 * Math.exp(-(((clean.wavelengthsNm[i]! - 480) / 260) ** 2));
      const light = kind === "dark" ? 0 : kind === "blank" ? lamp : lamp * t;
      return Math.round(900 + light + Math.sqrt(light / 20 + 9) * random.normal());
    });
    return { wavelengthsNm: clean.wavelengthsNm, ordinate };
  };

  it("takes transmittance from counts of sample, blank and dark, in files of their own or in one", () => {
    const [sample, blank, dark] = [counts(1, "sample"), counts(2, "blank"), counts(3, "dark")];
    const files = [
      capture(textOf(sample, "nm,counts"), "sample.csv"),
      capture(textOf(blank, "nm,counts"), "blank.csv", "reference"),
      capture(textOf(dark, "nm,counts"), "dark.csv", "dark"),
    ];
    const apart = analyseCaptures(files, setupOf(scene)).analysis;
    const rows = sample.wavelengthsNm.map((nm, i) => [
      nm.toFixed(3),
      sample.ordinate[i],
      blank.ordinate[i],
      dark.ordinate[i],
    ]);
    const together = analyseCapture(
      `nm,sample,reference,dark\n${rows.map((row) => row.join(",")).join("\n")}\n`,
      setupOf(scene),
    ).analysis;
    for (const analysis of [apart, together]) {
      expect(analysis.outcome).toBe("identified");
      expect(analysis.ordinate).toBe("transmittance");
      const lines = analysis.lines.filter((line) => line.errorNm !== null);
      expect(lines.length).toBeGreaterThanOrEqual(12);
      for (const line of lines) expect(Math.abs(line.errorNm! - 0.3)).toBeLessThan(2 * line.errorExpandedUncNm!);
    }
    expect(errorsOf(together)).toEqual(errorsOf(apart));
  });

  it("refuses the counts of one beam, and a certificate that is not there, in sentences", () => {
    const beam = analyseCapture(textOf(counts(1, "sample"), "nm,counts"), setupOf(scene)).analysis;
    expect([beam.outcome, beam.reason]).toEqual(["refused", expect.stringContaining("blank")]);
    const without = analyse(scene, recordBands(scene, 1), "nm,Abs", { bandCertificate: null });
    expect([without.outcome, without.reason]).toEqual(["refused", expect.stringContaining("certificate")]);
  });
});

describe("what does not fit is refused, not matched", () => {
  it("another material: didymium-like glass under the holmium certificate, eight spectra, and holmium shifted by 12 nm", () => {
    for (let seed = 0; seed < 8; seed += 1) {
      const scene: BandScene = {
        ...plainScene,
        components: didymiumLike,
        stepNm: 0.5,
        lastNm: 700 + 10 * seed,
        offsetNm: seed / 4 - 2.5,
      };
      const analysis = analyse(plainScene, recordBands(scene, seed), "nm,Abs");
      expect(analysis.outcome).toBe("unidentified");
      expect(analysis.verdict).toBeNull();
      expect(analysis.lines.every((line) => line.wavelengthNm === null)).toBe(true);
    }
    const far = { ...plainScene, offsetNm: 12 };
    expect(analyse(plainScene, recordBands(far, 1), "nm,Abs").outcome).toBe("unidentified");
  });

  it("holmium shifted by up to 6 nm is still itself", () => {
    for (const offsetNm of [-6, -2.5, 4, 6]) {
      const scene = { ...plainScene, stepNm: 0.5, offsetNm };
      const analysis = analyse(plainScene, recordBands(scene, 9), "nm,Abs");
      expect(analysis.outcome).toBe("identified");
      for (const error of errorsOf(analysis)) expect(Math.abs(error - offsetNm)).toBeLessThan(0.15);
    }
  });

  it("an empty beam and noise alone have no band", () => {
    const empty = { ...plainScene, components: [], stepNm: 0.5, noise: 0.002 };
    for (let seed = 1; seed < 6; seed += 1) {
      expect(analyse(plainScene, recordBands(empty, seed), "nm,Abs").outcome).toBe("unidentified");
    }
  });

  it("a band that is a shoulder at this bandwidth is refused with a sentence, the others are judged", () => {
    const wide = { ...plainScene, bandwidthNm: 6, stepNm: 0.5 };
    const narrow = { ...plainScene, bandwidthNm: 0.5 };
    const certificate = { ...certificateOf(narrow), bandwidthNm: null };
    const components = [...plainScene.components, [365.6, 0.3, 2]] as const;
    const shoulder = trueBand({ ...narrow, components }, 365.6);
    expect(shoulder).not.toBeNull();
    certificate.bands.push({ wavelengthNm: shoulder!, expandedUncNm: 0.02, coverageFactor: 2 });
    const analysis = analyse(wide, recordBands({ ...wide, components }, 4), "nm,Abs", { bandCertificate: certificate });
    expect(analysis.outcome).toBe("identified");
    const line = analysis.lines.find((one) => one.wavelengthNm === shoulder)!;
    expect([line.status, line.errorNm]).toEqual(["refused", null]);
    expect(line.reason).toContain("merges with the band at 361");
  });

  it("a certificate for another bandwidth: the shift to be expected is in U up to a factor of two, beyond it nothing is judged", () => {
    const tolerance = [{ fromNm: 200, toNm: 700, toleranceNm: 0.5 }];
    const at = (bandwidthNm: number): Analysis => {
      const scene = { ...plainScene, bandwidthNm, stepNm: 0.2, noise: 0.0003 };
      return analyse(scene, recordBands(scene, 8), "nm,Abs", {
        bandCertificate: certificateOf({ ...plainScene, bandwidthNm: 1 }),
        tolerance,
      });
    };
    const near = at(1.8);
    expect(near.warnings.map(({ code }) => code)).toContain("bandwidth");
    const judged = near.lines.filter((line) => line.status === "judged");
    expect(judged.length).toBeGreaterThanOrEqual(10);
    expect(judged.every((line) => line.budget.some((entry) => entry.contribution === "bandwidth"))).toBe(true);
    const held = judged.filter((line) => Math.abs(line.errorNm!) <= line.errorExpandedUncNm!).length;
    expect(held / judged.length).toBeGreaterThanOrEqual(0.85);
    const far = at(4);
    expect(far.lines.filter((line) => line.wavelengthNm !== null).every((line) => line.status === "refused")).toBe(
      true,
    );
    expect(far.lines.find((line) => line.wavelengthNm !== null)!.reason).toContain("bandwidth");
  });

  it("a band without light at its middle has a flat top and is refused", () => {
    const scene = {
      ...plainScene,
      components: plainScene.components.map(([nm, a, w]) => [nm, nm === 451.3 ? 6 : a, w] as const),
    };
    const recorded = recordBands(scene, 2);
    const clipped = { ...recorded, ordinate: recorded.ordinate.map((a) => Math.min(a, 3)) };
    const analysis = analyse(scene, clipped, "nm,Abs", { bandCertificate: certificateOf(plainScene) });
    const line = analysis.lines.find((one) => Math.abs((one.wavelengthNm ?? 0) - 451.2) < 1)!;
    expect(line.status).toBe("refused");
  });
});

describe("the same spectrum in another form", () => {
  const scene = { ...plainScene, stepNm: 0.5, offsetNm: 0.2 };
  const recorded = recordBands(scene, 12);

  it("a descending file gives the same figures, bit for bit", () => {
    const turned = {
      wavelengthsNm: recorded.wavelengthsNm.slice().reverse(),
      ordinate: recorded.ordinate.slice().reverse(),
    };
    const [up, down] = [analyse(scene, recorded, "nm,Abs"), analyse(scene, turned, "nm,Abs")];
    expect(down.lines).toEqual(up.lines);
    expect([up.files[0]!.direction, down.files[0]!.direction]).toEqual(["up", "down"]);
  });

  it("a shift of the axis moves every error by itself, a factor on absorbance none by more than its uncertainty (fast-check)", () => {
    const base = errorsOf(analyse(scene, recorded, "nm,Abs"));
    const unc = analyse(scene, recorded, "nm,Abs").lines.flatMap((line) =>
      line.errorNm === null ? [] : [line.errorUncNm!],
    );
    fc.assert(
      fc.property(fc.integer({ min: -30, max: 30 }), fc.constantFrom(0.5, 1, 1.5), (tenths, factor) => {
        const moved = {
          wavelengthsNm: recorded.wavelengthsNm.map((nm) => nm + tenths / 10),
          ordinate: recorded.ordinate.map((a) => a * factor),
        };
        const errors = errorsOf(analyse(scene, moved, "nm,Abs"));
        expect(errors.length).toBe(base.length);
        // Another factor is another course of the noise with the light, as far as the samples can tell: a part of the uncertainty.
        const allowed = factor === 1 ? 1e-7 : 0.75;
        errors.forEach((error, k) =>
          expect(Math.abs(error - base[k]! - tenths / 10)).toBeLessThan(factor === 1 ? allowed : allowed * unc[k]!),
        );
      }),
      { numRuns: 5, seed: 3 },
    );
  });

  it("on a pixel axis with its earlier axis the errors are the same, and positions are pixels", () => {
    const rows = recorded.ordinate.map((a, i) => `${i},${a}`).join("\n");
    const axis = {
      coefficients: [recorded.wavelengthsNm[0]!, 0.5],
      firstPx: 0,
      lastPx: recorded.ordinate.length - 1,
      chebyshevCovariance: null,
      degreesOfFreedom: null,
      meaning: "standard-air" as const,
    };
    const { analysis } = analyseCapture(
      `pixel,Abs\n${rows}\n`,
      setupOf(scene, { mode: { kind: "earlier-axis", axis } }),
    );
    const expected = analyse(scene, recorded, "nm,Abs");
    const errors = errorsOf(expected);
    errorsOf(analysis).forEach((error, k) => expect(error).toBeCloseTo(errors[k]!, 6));
    expect(analysis.axisUnit).toBe("px");
    const line = analysis.lines.find((one) => one.errorNm !== null)!;
    expect(line.indicatedNm!).toBeCloseTo(axis.coefficients[0]! + 0.5 * line.position, 9);
  });

  it("repeats are averaged, and what they scatter by beyond the fit is a contribution", () => {
    const moved = [0, 0.12, -0.1, 0.05].map((offsetNm, k) =>
      capture(textOf(recordBands({ ...scene, offsetNm }, 20 + k), "nm,Abs"), `repeat ${k}.csv`),
    );
    const { analysis } = analyseCaptures(moved, setupOf(scene));
    const lines = analysis.lines.filter((line) => line.errorNm !== null);
    const repeated = lines.map(
      (line) => line.budget.find((entry) => entry.contribution === "repeatability")?.uncNm ?? 0,
    );
    // The four offsets scatter by 0.097 nm: 0.049 nm of their mean.
    for (const uncNm of repeated) expect(uncNm).toBeGreaterThan(0.03);
    for (const uncNm of repeated) expect(uncNm).toBeLessThan(0.08);
  });
});

interface TableRow {
  material: string;
  band: string;
  wavelengthNm: number;
  bandwidth: string;
  basis: string;
}

const table: TableRow[] = readFileSync(new URL("../fixtures/bands/absorption-bands.csv", import.meta.url), "utf8")
  .trim()
  .split("\n")
  .slice(1)
  .map((row) => {
    const cells = row.match(/("[^"]*"|[^,]*)(,|$)/g)!.map((cell) => cell.replace(/,$/, "").replace(/"/g, ""));
    return {
      material: cells[0]!,
      band: cells[1]!,
      wavelengthNm: Number(cells[2]),
      bandwidth: cells[3]!,
      basis: cells[6]!,
    };
  });

describe("tables of band positions (tests/fixtures/bands)", () => {
  const solution = table.filter((row) => row.material.includes("SRM 2034"));

  it("holds every row with its basis", () => {
    expect(table.length).toBe(113);
    expect(solution.length).toBe(81);
    expect(solution.every((row) => row.basis === "memory")).toBe(true);
  });

  it.each(["0.1", "0.25", "0.5", "1.0", "2.0", "3.0"])(
    "arithmetic check, from memory: bands laid at the table's places for %s nm are recovered to 0.05 nm RMS",
    (bandwidth) => {
      const places = solution.filter((row) => row.bandwidth === bandwidth).map((row) => row.wavelengthNm);
      expect(places.length).toBeGreaterThanOrEqual(13);
      // Widths are invented; each band symmetric, so that its place stays where the table has it at any bandwidth.
      const width = Math.max(3, Number(bandwidth) * 1.2);
      const scene: BandScene = {
        ...plainScene,
        components: places.map((nm, k) => [nm, 0.3 + 0.05 * (k % 7), width]),
        bandwidthNm: Number(bandwidth),
        stepNm: Math.min(0.5, Math.max(0.1, Number(bandwidth) / 4)),
      };
      const certificate: BandCertificate = {
        material: "holmium oxide in perchloric acid",
        bandwidthNm: Number(bandwidth),
        bands: places.map((wavelengthNm) => ({ wavelengthNm, expandedUncNm: 0.1, coverageFactor: 2 })),
      };
      const analysis = analyse(scene, recordBands(scene, 31), "nm,Abs", { bandCertificate: certificate });
      expect(analysis.outcome).toBe("identified");
      // The overlap of neighbours (241 and 250 nm) moves them a little: the truth is the simulation's own.
      const off = analysis.lines.flatMap((line) => {
        const truth = line.errorNm === null ? null : trueBand(scene, line.wavelengthNm!);
        return truth === null ? [] : [line.errorNm! - (truth - line.wavelengthNm!)];
      });
      expect(off.length).toBe(places.length);
      expect(Math.sqrt(off.reduce((sum, one) => sum + one * one, 0) / off.length)).toBeLessThan(0.05);
    },
  );

  it("arithmetic check, from memory: the table's own shifts with bandwidth are of the size that the mismatch component is there for", () => {
    const at = (band: string, bandwidth: string): number =>
      solution.find((row) => row.band === band && row.bandwidth === bandwidth)!.wavelengthNm;
    const shifts = ["1", "4", "8", "9", "13", "14"].map((band) => Math.abs(at(band, "2.0") - at(band, "1.0")));
    expect(Math.max(...shifts)).toBeCloseTo(0.34, 9);
    expect(shifts.filter((shift) => shift > 0.1).length).toBeGreaterThanOrEqual(5);
  });

  it("nominal places of holmium and didymium glass are told apart by the matcher", () => {
    const placesOf = (material: string): number[] =>
      table.filter((row) => row.material === material).map((row) => row.wavelengthNm);
    const sceneOf = (places: number[]): BandScene => ({
      ...plainScene,
      firstNm: 230,
      lastNm: 830,
      stepNm: 0.5,
      components: places.map((nm, k) => [nm, 0.3 + 0.1 * (k % 4), 4]),
    });
    const certificate = (material: string): BandCertificate => ({
      material,
      bandwidthNm: null,
      bands: placesOf(material).map((wavelengthNm) => ({ wavelengthNm, expandedUncNm: 0.2, coverageFactor: 2 })),
    });
    const outcome = (shown: string, named: string): string => {
      const scene = sceneOf(placesOf(shown));
      return analyse(scene, recordBands(scene, 6), "nm,Abs", { bandCertificate: certificate(named) }).outcome;
    };
    expect(outcome("holmium glass", "holmium glass")).toBe("identified");
    expect(outcome("didymium glass", "didymium glass")).toBe("identified");
    expect(outcome("holmium glass", "didymium glass")).toBe("unidentified");
    expect(outcome("didymium glass", "holmium glass")).toBe("unidentified");
  });
});

describe("acceptance figures of documents (tests/fixtures/bands/acceptance.json)", () => {
  const { wavelength } = JSON.parse(
    readFileSync(new URL("../fixtures/bands/acceptance.json", import.meta.url), "utf8"),
  ) as { wavelength: { document: string; fromNm: number; toNm: number; toleranceNm: number; basis: string }[] };

  it.each(wavelength)(
    "$document, $fromNm to $toNm nm, $toleranceNm nm ($basis)",
    ({ fromNm, toNm, toleranceNm, basis }) => {
      expect(basis).toMatch(/^(read|memory)/);
      const verdictAt = (offsetNm: number): string | undefined => {
        const scene = { ...plainScene, stepNm: 0.5, offsetNm };
        const analysis = analyse(plainScene, recordBands(scene, 14), "nm,Abs", {
          decisionRule: { kind: "simple" },
          tolerance: [{ fromNm, toNm, toleranceNm }],
        });
        return analysis.verdict?.verdict;
      };
      expect(verdictAt(toleranceNm - 0.15)).toBe("pass");
      expect(verdictAt(toleranceNm + 0.15)).toBe("fail");
      expect(indicated({ ...plainScene, offsetNm: toleranceNm }, 500)).toBe(500 + toleranceNm);
    },
  );
});
