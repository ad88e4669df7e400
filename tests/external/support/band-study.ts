/**
 * Absorption bands by simulation: how far measured places lie from the true ones, and how often the stated interval holds the truth.
 * Spectra come from `band-generator.ts`, which shares no code with the core.
 */
import { analyseCapture, defaultSetup } from "@wavekeep/core";
import { holmiumCentres, indicated, plainScene, recordBands, trueBand, type BandScene } from "./band-generator.ts";

export interface BandStudyRow {
  name: string;
  spectra: number;
  /** Bands with a true place of their own, and of these how many were measured. */
  bands: number;
  measured: number;
  rmsNm: number;
  /** Share of the 95.45 % intervals that hold the true error, per cent, with its binomial standard uncertainty. */
  coverage: number;
  coverageUnc: number;
  /** Spectra that were not identified, and bands more than 1 nm off that were given as measured. */
  unidentified: number;
  wrong: number;
}

export const bandCases: readonly { name: string; scene: Partial<BandScene> }[] = [
  { name: "0.1 nm steps, 1 nm bandwidth", scene: { stepNm: 0.1, noise: 0.001 } },
  {
    name: "0.2 nm steps, 1 nm bandwidth, Lorentzian bands",
    scene: { shape: "lorentzian", ordinate: "%T", decimals: 3 },
  },
  { name: "0.2 nm steps, 1 nm bandwidth, noise 0.002 of T", scene: { noise: 0.002, noiseKind: "photon" } },
  { name: "0.5 nm steps, 0.5 nm bandwidth", scene: { stepNm: 0.5, bandwidthNm: 0.5 } },
  {
    name: "0.5 nm steps, 1 nm bandwidth, sloping background",
    scene: { stepNm: 0.5, background: [0.2, -0.001], noiseKind: "absorbance" },
  },
  { name: "0.5 nm steps, 2 nm bandwidth", scene: { stepNm: 0.5, bandwidthNm: 2, noise: 0.001 } },
  { name: "1 nm steps, 1 nm bandwidth", scene: { stepNm: 1 } },
  { name: "1 nm steps, 2 nm bandwidth", scene: { stepNm: 1, bandwidthNm: 2 } },
  { name: "0.2 nm steps, smoothed over 5", scene: { smoothedOver: 5, noise: 0.001 } },
];

/** @param runs  number of bands a case, about; each spectrum has 14 */
export function runBandStudy({ runs, seed }: { runs: number; seed: number }): BandStudyRow[] {
  return bandCases.map(({ name, scene }, k) =>
    studyCase(name, { ...plainScene, ...scene }, Math.ceil(runs / 14), seed + 1000 * k),
  );
}

const phases = 4;

export function studyCase(name: string, scene: BandScene, spectra: number, seed: number): BandStudyRow {
  const truths = holmiumCentres.map((nm) => trueBand(scene, nm));
  let [bands, measured, squares, held, unidentified, wrong] = [0, 0, 0, 0, 0, 0];
  for (let run = 0; run < spectra; run += 1) {
    const shifted = { ...scene, offsetNm: 0.8 * Math.sin(run % phases), scale: 2e-4 * Math.cos(run % phases) };
    const { wavelengthsNm, ordinate } = recordBands(shifted, seed + run, (run % phases) / phases);
    const setup = defaultSetup({
      sampleKind: "absorption",
      spectralBandwidthNm: scene.bandwidthNm,
      bandCertificate: {
        material: "holmium-like, invented",
        bandwidthNm: scene.bandwidthNm,
        bands: truths.flatMap((nm) =>
          nm === null ? [] : [{ wavelengthNm: nm, expandedUncNm: 1e-6, coverageFactor: 2 }],
        ),
      },
    });
    const { analysis } = analyseCapture(
      {
        axisKind: "wavelength",
        axisUnit: "nm",
        wasDescending: false,
        positions: Float64Array.from(wavelengthsNm),
        counts: Float64Array.from(ordinate),
        fullScaleCounts: null,
        scansSummed: 1,
      },
      setup,
      { withDrawing: false },
    );
    if (analysis.outcome !== "identified") unidentified += 1;
    for (const nm of truths) {
      if (nm === null) continue;
      bands += 1;
      const line = analysis.lines.find((one) => one.wavelengthNm === nm);
      if (line === undefined || line.errorNm === null || line.status === "refused") continue;
      measured += 1;
      const off = line.errorNm - (indicated(shifted, nm) - nm);
      squares += off * off;
      if (Math.abs(off) > 1) wrong += 1;
      if (Math.abs(off) <= line.errorExpandedUncNm!) held += 1;
    }
  }
  const share = measured === 0 ? 0 : held / measured;
  return {
    name,
    spectra,
    bands,
    measured,
    rmsNm: measured === 0 ? 0 : Math.sqrt(squares / measured),
    coverage: 100 * share,
    coverageUnc: 100 * Math.sqrt((share * (1 - share)) / Math.max(1, measured)),
    unidentified,
    wrong,
  };
}
