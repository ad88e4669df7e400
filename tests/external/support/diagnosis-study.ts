/**
 * Diagnosis by simulation: how often a change of pure noise is explained by something, and how often the true cause is among those named.
 *
 * Changes are made by the geometry before and after, not by the derivatives that the diagnosis uses; noise is normal. Three array
 * spectrometers and a sine drive, mercury-argon or neon lines, all of a lamp's or only five of them.
 */
import { createRandom } from "../../../packages/core/src/testing/random.ts";
import {
  ArrayModel,
  arrayModes,
  diagnoseChange,
  sineDriveModes,
  sineDriveReading,
  sineDriveWavelengthNm,
  type ArrayGeometry,
  type ErrorChange,
  type GeometryMode,
  type SineDrive,
} from "../../../packages/core/src/grating/index.ts";

export interface StudyRow {
  instrument: string;
  lines: number;
  /** `none`: pure noise; else the mode that was made to happen. */
  cause: string;
  /** Largest change over a line's uncertainty. */
  strength: number;
  runs: number;
  /** Share of runs: explained at all (cause `none`), or the true cause among those of the first group. */
  share: number;
  /** Standard uncertainty of the share where the claimed one (5 %, 95 %) is true. */
  shareUnc: number;
  /** Mean number of modes in the first group: 1 where the data can tell. */
  groupSize: number;
}

const MERCURY_ARGON = [253.65, 296.73, 334.15, 365.02, 404.66, 435.83, 546.07, 578, 696.54, 763.51, 811.53, 842.46];
const NEON = [585.25, 594.48, 607.43, 614.31, 621.73, 626.65, 633.44, 638.3, 640.22, 650.65, 653.29, 659.9];
const everySecond = (lines: number[]): number[] =>
  lines
    .filter((_, i) => i % 5 === 0 || i === lines.length - 1)
    .concat(lines[7]!)
    .sort((a, b) => a - b);

const broad: ArrayGeometry = {
  order: 1,
  grooveDensityPerMm: 600,
  incidenceDeg: 25,
  includedAngleDeg: 30,
  focalLengthMm: 75,
  detectorTiltDeg: 2,
  pixelPitchUm: 14,
  axisPx: 1023.5,
  direction: 1,
};
const raman: ArrayGeometry = {
  ...broad,
  grooveDensityPerMm: 1200,
  incidenceDeg: 37,
  focalLengthMm: 160,
  detectorTiltDeg: 0,
  direction: -1,
};
const drive: SineDrive = {
  order: 1,
  grooveDensityPerMm: 1200,
  includedAngleDeg: 20,
  stepsPerSine: 164130,
  offsetSteps: 40,
  backlashSteps: 0,
  zeroAngleDeg: 0.2,
};

interface Instrument {
  name: string;
  linesNm: number[];
  modes: GeometryMode[];
  causes: { id: string; errorsNm: number[] }[];
}

function arrayInstrument(name: string, geometry: ArrayGeometry, linesNm: number[]): Instrument {
  const old = new ArrayModel(geometry);
  const cause = (id: string, change: Partial<ArrayGeometry>): { id: string; errorsNm: number[] } => {
    const now = new ArrayModel({ ...geometry, ...change });
    return { id, errorsNm: linesNm.map((nm) => old.wavelengthAtPx(now.pxOfWavelength(nm)!) - nm) };
  };
  return {
    name,
    linesNm,
    modes: arrayModes(geometry, linesNm),
    causes: [
      cause("detector-shift", { axisPx: geometry.axisPx + 0.5 }),
      cause("grating-turned", { incidenceDeg: geometry.incidenceDeg + 0.004 }),
      cause("camera-angle", { includedAngleDeg: geometry.includedAngleDeg + 0.004 }),
      cause("focal-length", { focalLengthMm: geometry.focalLengthMm * 1.0005 }),
      cause("grating-expansion", { grooveDensityPerMm: geometry.grooveDensityPerMm / 1.0003 }),
      cause("detector-tilt", { detectorTiltDeg: geometry.detectorTiltDeg + 0.3 }),
    ],
  };
}

function driveInstrument(linesNm: number[]): Instrument {
  const cause = (id: string, change: Partial<SineDrive>): { id: string; errorsNm: number[] } => {
    const after = { ...drive, ...change };
    return { id, errorsNm: linesNm.map((nm) => sineDriveWavelengthNm(drive, sineDriveReading(after, nm)!)! - nm) };
  };
  return {
    name: "sine drive, 1200 per mm",
    linesNm,
    modes: sineDriveModes(drive, linesNm),
    causes: [
      cause("drive-offset", { offsetSteps: 45 }),
      cause("drive-scale", { stepsPerSine: drive.stepsPerSine * 1.0001 }),
      cause("grating-on-arm", { zeroAngleDeg: 0.203 }),
    ],
  };
}

const INSTRUMENTS = [
  arrayInstrument("array 600 per mm, 75 mm", broad, MERCURY_ARGON),
  arrayInstrument("array 600 per mm, 75 mm", broad, everySecond(MERCURY_ARGON)),
  arrayInstrument("Raman 1200 per mm, 160 mm", raman, NEON),
  driveInstrument(MERCURY_ARGON),
];

/** Every instrument with noise alone (five times as many runs) and with each cause, `strength` uncertainties large at the line that shows it most. */
export function diagnosisStudy(runs: number, seed: number, strengths: readonly number[] = [8, 100]): StudyRow[] {
  const rows: StudyRow[] = [];
  const random = createRandom(seed);
  for (const { name, linesNm, modes, causes } of INSTRUMENTS) {
    const study = (cause: string, errorsNm: readonly number[], uncNm: number, strength: number, runs: number): void => {
      let counted = 0;
      let sizes = 0;
      let groups = 0;
      for (let run = 0; run < runs; run++) {
        const changes = errorsNm.map((error, i): ErrorChange => ({
          wavelengthNm: linesNm[i]!,
          changeNm: error + uncNm * random.normal(),
          uncNm,
        }));
        const first = diagnoseChange(changes, modes).causes[0];
        if (first) {
          groups++;
          sizes += first.modes.length;
        }
        if (cause === "none" ? first : first?.modes.some((mode) => mode.id === cause)) counted++;
      }
      const claimed = 0.05;
      rows.push({
        instrument: name,
        lines: linesNm.length,
        cause,
        strength,
        runs,
        share: counted / runs,
        shareUnc: Math.sqrt((claimed * (1 - claimed)) / runs),
        groupSize: groups > 0 ? sizes / groups : 0,
      });
    };
    study(
      "none",
      linesNm.map(() => 0),
      0.01,
      0,
      5 * runs,
    );
    for (const { id, errorsNm } of causes)
      for (const strength of strengths)
        study(id, errorsNm, Math.max(...errorsNm.map(Math.abs)) / strength, strength, runs);
  }
  return rows;
}

/** The study as lines of text. */
export function diagnosisStudyText(rows: readonly StudyRow[]): string {
  const lines = rows.map((row) =>
    [
      row.instrument.padEnd(26),
      `${row.lines} lines`.padEnd(9),
      row.cause.padEnd(18),
      row.cause === "none" ? "noise alone".padEnd(22) : `${row.strength} uncertainties large`.padEnd(22),
      `${row.cause === "none" ? "explained" : "true cause named"} ${(100 * row.share).toFixed(1)} % of ${row.runs} (claimed ${row.cause === "none" ? 5 : 95} ± ${(100 * row.shareUnc).toFixed(1)} %)`,
      `group of ${row.groupSize.toFixed(1)}`,
    ].join("  "),
  );
  return ["Diagnosis of simulated changes", ...lines].join("\n");
}
