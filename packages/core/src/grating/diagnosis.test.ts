/**
 * Diagnosis against changes made by the models themselves: the geometry before and after, not its derivatives, plus noise.
 * Rates over instruments and strengths: tests/external/diagnosis.test.ts.
 */
import { describe, expect, test } from "vitest";
import { createRandom } from "../testing/random.ts";
import {
  ArrayModel,
  arrayModes,
  diagnoseChange,
  sineDriveModes,
  sineDriveReading,
  sineDriveWavelengthNm,
  type ArrayGeometry,
  type Diagnosis,
  type ErrorChange,
  type SineDrive,
} from "./index.ts";

const geometry: ArrayGeometry = {
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
const linesNm = [253.65, 296.73, 334.15, 365.02, 404.66, 435.83, 546.07, 578, 696.54, 763.51, 811.53, 842.46];

/** Errors that the old axis shows once the geometry has become another. */
function errorsNm(before: ArrayGeometry, after: ArrayGeometry): number[] {
  const [old, now] = [new ArrayModel(before), new ArrayModel(after)];
  return linesNm.map((nm) => old.wavelengthAtPx(now.pxOfWavelength(nm)!) - nm);
}
function changes(errors: readonly number[], uncNm: number, noise: () => number): ErrorChange[] {
  return errors.map((error, i) => ({ wavelengthNm: linesNm[i]!, changeNm: error + uncNm * noise(), uncNm }));
}
const ids = (diagnosis: Diagnosis): string[][] => diagnosis.causes.map((cause) => cause.modes.map((mode) => mode.id));
const modes = arrayModes(geometry, linesNm);

/** Single causes, each some 0.3 nm at its largest. */
const causes: [string, Partial<ArrayGeometry>, number][] = [
  ["detector-shift", { axisPx: 1024.5 }, 1],
  ["grating-turned", { incidenceDeg: 25.005 }, 0.005],
  ["camera-angle", { includedAngleDeg: 30.01 }, 0.01],
  ["focal-length", { focalLengthMm: 75.05 }, 0.05],
  ["grating-expansion", { grooveDensityPerMm: 600 / 1.0004 }, 400],
  ["detector-tilt", { detectorTiltDeg: 2.4 }, 0.4],
];

describe("single causes on an array spectrometer", () => {
  test.each(causes)("%s is found, with its amplitude, where lines are good to 0.2 pm", (id, change, amplitude) => {
    const random = createRandom(7);
    const uncNm = 2e-4;
    const diagnosis = diagnoseChange(
      changes(errorsNm(geometry, { ...geometry, ...change }), uncNm, random.normal),
      modes,
    );
    const first = diagnosis.causes[0]!;
    expect(first.modes[0]!.id).toBe(id);
    expect(first.share).toBeGreaterThan(0.999);
    // Changes are finite: the second order of a step this large is some per mille.
    expect(Math.abs(first.modes[0]!.amplitude / amplitude - 1)).toBeLessThan(0.02);
  });
  test("a shifted detector and a turned grating look alike to ordinary lines, and the sentence says so", () => {
    const random = createRandom(3);
    const errors = errorsNm(geometry, { ...geometry, axisPx: 1024.2 });
    const diagnosis = diagnoseChange(changes(errors, 0.02, random.normal), modes);
    expect(ids(diagnosis)[0]).toEqual(expect.arrayContaining(["detector-shift", "grating-turned"]));
    expect(diagnosis.sentence).toMatch(/the data cannot tell/);
    expect(diagnosis.outcome).toBe("explained");
  });
  test("two causes at once: shift and focal length, the first explaining most", () => {
    const random = createRandom(5);
    const errors = errorsNm(geometry, { ...geometry, axisPx: 1025.5, focalLengthMm: 75.08 });
    const diagnosis = diagnoseChange(changes(errors, 0.005, random.normal), modes);
    expect(diagnosis.causes.length).toBe(2);
    expect(diagnosis.outcome).not.toBe("none");
    expect(diagnosis.causes[0]!.share + diagnosis.causes[1]!.share).toBeGreaterThan(0.99);
  });
});

describe("sine drive", () => {
  const drive: SineDrive = {
    order: 1,
    grooveDensityPerMm: 1200,
    includedAngleDeg: 20,
    stepsPerSine: 164130,
    offsetSteps: 40,
    backlashSteps: 0,
    zeroAngleDeg: 0.2,
  };
  const driveModes = sineDriveModes(drive, linesNm);
  test.each<[string, Partial<SineDrive>, number]>([
    ["drive-offset", { offsetSteps: 60 }, 20],
    ["drive-scale", { stepsPerSine: 164130 * 1.0003 }, 300],
    ["grating-on-arm", { zeroAngleDeg: 0.21 }, 0.01],
  ])("%s is found with its amplitude", (id, change, amplitude) => {
    const random = createRandom(9);
    const after = { ...drive, ...change };
    const errors = linesNm.map((nm) => sineDriveWavelengthNm(drive, sineDriveReading(after, nm)!)! - nm);
    const diagnosis = diagnoseChange(changes(errors, 0.002, random.normal), driveModes);
    expect(ids(diagnosis)[0]).toEqual([id]);
    expect(Math.abs(diagnosis.causes[0]!.modes[0]!.amplitude / amplitude - 1)).toBeLessThan(0.03);
    expect(diagnosis.outcome).toBe("explained");
  });
});

describe("noise and what the geometry does not do", () => {
  test("noise with a part that all lines share is explained in 5 % of 400 changes (known to 1.1 %)", () => {
    const shared = 0.01;
    const random = createRandom(17);
    const own = 0.01;
    const n = linesNm.length;
    const covarianceNm2 = Float64Array.from(
      { length: n * n },
      (_, i) => shared * shared + (i % (n + 1) === 0 ? own * own : 0),
    );
    let found = 0;
    for (let run = 0; run < 400; run++) {
      const together = shared * random.normal();
      const noise = changes(
        linesNm.map(() => together),
        own,
        random.normal,
      );
      if (diagnoseChange(noise, modes, { covarianceNm2 }).outcome !== "none") found++;
    }
    expect(found / 400).toBeGreaterThan(0.05 - 2.5 * 0.011);
    expect(found / 400).toBeLessThan(0.05 + 2.5 * 0.011);
  });
  test("where lines scatter by three times what they state, the scatter is the noise: no more is found than 10 % of 200 changes", () => {
    const random = createRandom(19);
    let found = 0;
    for (let run = 0; run < 200; run++) {
      const noise = changes(
        linesNm.map(() => 0),
        0.01,
        () => 3 * random.normal(),
      );
      if (diagnoseChange(noise, modes).outcome !== "none") found++;
    }
    expect(found / 200).toBeLessThan(0.1);
  });
  test("one line far off is nothing the geometry does", () => {
    const errors = linesNm.map((_, i) => (i === 6 ? 0.5 : 0));
    const diagnosis = diagnoseChange(
      changes(errors, 0.01, () => 0),
      modes,
    );
    expect(diagnosis.outcome).toBe("none");
    expect(diagnosis.noiseFrom).toBe("scatter");
    expect(diagnosis.sentence).toMatch(/not in a way/);
  });
  test("no change at all says so; too little to judge is a caller's mistake", () => {
    const still = diagnoseChange(
      changes(
        linesNm.map(() => 0),
        0.01,
        () => 0,
      ),
      modes,
    );
    expect(still.sentence).toBe("The error has not changed by more than its uncertainty.");
    expect(() => diagnoseChange([], modes)).toThrow(RangeError);
    expect(() =>
      diagnoseChange(
        changes([0, 0], 0.01, () => 0),
        modes,
      ),
    ).toThrow(/points for 2 lines/);
  });
});
