/**
 * Forward model and fit of a scanning monochromator with a sine drive: wavelength at a reading of its counter.
 *
 *   lambda = (2 d cos(K / 2) / m) sin(phi + zeroAngle),   sin phi = (reading + backlash [approached from above] - offset) / stepsPerSine
 *
 * offset        reading at which the drive's arm stands at sin phi = 0
 * stepsPerSine  steps of the counter for one unit of sin phi: the scale of the drive
 * backlash      steps that the drive turns before the grating follows when its direction is reversed; readings reached from below
 *               are the reference
 * zeroAngle     grating not parallel to the arm: adds a little cosine to the sine, the drive's only curvature
 * K             included angle between the beams; phi the grating's rotation from the position of order 0
 * Units         steps (or dial counts, or displayed nm), degrees, nm, 1/mm
 * Source        the grating equation for a fixed included angle (equation.ts, anglesForIncludedAngle); derivatives by hand
 * Limits        groove density and included angle are data: they multiply the scale of the drive, and lines cannot part them
 */
import { asin, cos, PI, sin } from "../numeric/elementary.ts";
import { minimise, type LeastSquaresProblem } from "../numeric/levenberg-marquardt.ts";

export interface SineDrive {
  order: number;
  grooveDensityPerMm: number;
  includedAngleDeg: number;
  stepsPerSine: number;
  offsetSteps: number;
  backlashSteps: number;
  zeroAngleDeg: number;
}

/** From which side a reading was reached: below (readings rising) or above. */
export type Approach = "from-below" | "from-above";

/** What can be fitted, in the order of the partial derivatives. */
export const SINE_DRIVE_PARAMETERS = ["stepsPerSine", "offsetSteps", "backlashSteps", "zeroAngleDeg"] as const;
export type SineDriveParameter = (typeof SINE_DRIVE_PARAMETERS)[number];

const DEGREE = PI / 180;

/** @throws {RangeError} what no monochromator has */
function checkSineDrive(drive: SineDrive): void {
  for (const [name, value] of Object.entries(drive))
    if (!Number.isFinite(value)) throw new RangeError(`${name} must be a finite number; got ${value}`);
  if (drive.order === 0 || !Number.isInteger(drive.order))
    throw new RangeError(`The order must be a whole number other than 0; got ${drive.order}`);
  if (!(drive.grooveDensityPerMm > 0) || drive.stepsPerSine === 0)
    throw new RangeError("Groove density must be above 0 per mm, and the drive's scale other than 0");
  if (!(Math.abs(drive.includedAngleDeg) < 180) || !(Math.abs(drive.zeroAngleDeg) < 90))
    throw new RangeError("The included angle must lie within ±180°, the zero angle within ±90°");
}

/** Sine of the arm's angle at a reading. */
function armSine(drive: SineDrive, reading: number, approach: Approach): number {
  return (reading + (approach === "from-above" ? drive.backlashSteps : 0) - drive.offsetSteps) / drive.stepsPerSine;
}

/** 2 d cos(K / 2) / m, nm. */
function amplitudeNm(drive: SineDrive): number {
  return (2e6 * cos(0.5 * drive.includedAngleDeg * DEGREE)) / (drive.order * drive.grooveDensityPerMm);
}

/**
 * Wavelength, nm, at a reading; null beyond the drive's travel.
 *
 * @param partials  filled, when given, with the derivatives by `SINE_DRIVE_PARAMETERS`: nm per step (three), nm per degree
 * @throws {RangeError} what no monochromator has
 */
export function sineDriveWavelengthNm(
  drive: SineDrive,
  reading: number,
  approach: Approach = "from-below",
  partials?: Float64Array,
): number | null {
  checkSineDrive(drive);
  const sine = armSine(drive, reading, approach);
  if (!(Math.abs(sine) < 1)) return null;
  const amplitude = amplitudeNm(drive);
  const zero = drive.zeroAngleDeg * DEGREE;
  // The sum formula keeps an exact sine where there is no zero angle.
  const cosine = Math.sqrt((1 - sine) * (1 + sine));
  if (partials) {
    const rotatedCosine = cosine * cos(zero) - sine * sin(zero);
    const perSine = (amplitude * rotatedCosine) / cosine;
    partials[0] = (-perSine * sine) / drive.stepsPerSine;
    partials[1] = -perSine / drive.stepsPerSine;
    partials[2] = approach === "from-above" ? perSine / drive.stepsPerSine : 0;
    partials[3] = amplitude * rotatedCosine * DEGREE;
  }
  return amplitude * (sine * cos(zero) + cosine * sin(zero));
}

/**
 * Reading at which a wavelength stands on the exit slit, or null where the drive cannot go; inverse of `sineDriveWavelengthNm`.
 *
 * @throws {RangeError} what no monochromator has
 */
export function sineDriveReading(
  drive: SineDrive,
  wavelengthNm: number,
  approach: Approach = "from-below",
): number | null {
  checkSineDrive(drive);
  const rotated = wavelengthNm / amplitudeNm(drive);
  if (!(Math.abs(rotated) <= 1)) return null;
  const angle = asin(rotated) - drive.zeroAngleDeg * DEGREE;
  if (!(Math.abs(angle) < PI / 2)) return null;
  return drive.offsetSteps + drive.stepsPerSine * sin(angle) - (approach === "from-above" ? drive.backlashSteps : 0);
}

export interface SineDriveLine {
  reading: number;
  wavelengthNm: number;
  /** Standard uncertainty of the wavelength at that reading, nm. */
  uncNm: number;
  approach?: Approach;
}

export interface SineDriveFit {
  outcome: "fitted";
  drive: SineDrive;
  free: SineDriveParameter[];
  /** free x free, row-major, as the stated uncertainties imply it. */
  covariance: Float64Array;
  chiSquare: number;
  degreesOfFreedom: number;
  /** Published minus fitted wavelength, nm. */
  residualsNm: Float64Array;
}

export interface SineDriveRefusal {
  outcome: "refused";
  reason: "nothing-free" | "too-few-lines" | "one-approach" | "undetermined" | "not-converged";
  detail: string;
}

/**
 * Fit of the free parameters to identified lines by least squares, starting from `start`.
 *
 * @throws {RangeError} caller bugs: a parameter named twice, a value that is not finite, an uncertainty not above 0
 */
export function fitSineDrive(
  lines: readonly SineDriveLine[],
  start: SineDrive,
  freeParameters: readonly SineDriveParameter[],
): SineDriveFit | SineDriveRefusal {
  checkSineDrive(start);
  const free = [...freeParameters];
  const columns = free.map((name) => SINE_DRIVE_PARAMETERS.indexOf(name));
  if (new Set(free).size !== free.length || columns.includes(-1))
    throw new RangeError(`Free parameters must be named once each; got ${free.join(", ")}`);
  for (const line of lines)
    if (
      !Number.isFinite(line.reading) ||
      !Number.isFinite(line.wavelengthNm) ||
      !(line.uncNm > 0 && line.uncNm < Infinity)
    )
      throw new RangeError("A line needs a finite reading and wavelength, and an uncertainty above 0");
  if (free.length === 0)
    return refuse("nothing-free", "No parameter is free: name at least one that the lines should tell.");
  if (lines.length < free.length)
    return refuse(
      "too-few-lines",
      `${lines.length} lines cannot tell ${free.length} parameters. Give more lines or hold parameters.`,
    );
  const approaches = new Set(lines.map((line) => line.approach ?? "from-below"));
  if (free.includes("backlashSteps") && approaches.size < 2) {
    return refuse(
      "one-approach",
      "Backlash shows only between readings reached from below and from above. Measure some lines each way.",
    );
  }
  const n = free.length;
  const partials = new Float64Array(SINE_DRIVE_PARAMETERS.length);
  const driveWith = (values: ArrayLike<number>): SineDrive => {
    const drive = { ...start };
    free.forEach((name, j) => (drive[name] = values[j]!));
    return drive;
  };
  const isPossible = (drive: SineDrive): boolean => drive.stepsPerSine !== 0 && Math.abs(drive.zeroAngleDeg) < 89;
  const problem: LeastSquaresProblem = {
    parameterCount: n,
    residualCount: lines.length,
    evaluate(values, residuals, jacobian) {
      const drive = driveWith(values);
      if (!isPossible(drive)) return false;
      return lines.every((line, i) => {
        const nm = sineDriveWavelengthNm(drive, line.reading, line.approach, partials);
        if (nm === null) return false;
        residuals[i] = (nm - line.wavelengthNm) / line.uncNm;
        for (let j = 0; j < n; j++) jacobian[i * n + j] = partials[columns[j]!]! / line.uncNm;
        return true;
      });
    },
  };
  const found = minimise(
    problem,
    free.map((name) => start[name]),
    { maxIterations: 200 },
  );
  if (found.outcome === "bad-start" || found.outcome === "iterations") {
    return refuse(
      "not-converged",
      "No drive near the given one puts the lines where they were read. Check scale, offset and names.",
    );
  }
  if (found.covariance === null) {
    return refuse("undetermined", `These lines cannot tell ${free.join(" and ")} apart. Hold one of them.`);
  }
  const drive = driveWith(found.parameters);
  return {
    outcome: "fitted",
    drive,
    free,
    covariance: found.covariance,
    chiSquare: found.sumOfSquares,
    degreesOfFreedom: found.degreesOfFreedom,
    residualsNm: Float64Array.from(
      lines,
      (line) => line.wavelengthNm - sineDriveWavelengthNm(drive, line.reading, line.approach)!,
    ),
  };
}

function refuse(reason: SineDriveRefusal["reason"], detail: string): SineDriveRefusal {
  return { outcome: "refused", reason, detail };
}
