/**
 * Fit of an array spectrometer's free parameters to identified lines (pixel, wavelength, uncertainty).
 *
 * What      least squares on wavelength residuals over their standard uncertainty; the other parameters are held. A parameter may
 *           carry what is known of it beforehand (nominal value and standard uncertainty) as one more observation
 * Source    the forward model of array-spectrometer.ts with its own derivatives; minimum by numeric/levenberg-marquardt.ts
 * Units     as in array-spectrometer.ts; covariance in the units of the parameters, as the stated uncertainties imply it (not
 *           scaled by the residuals: `chiSquare` and `degreesOfFreedom` tell whether it should be)
 * Limits    groove density and focal length are never free together: both set the scale of the axis, and what would part them is a
 *           curvature smaller than the tilt's. Other sets that the lines cannot tell apart are refused as `undetermined`
 */
import { minimise, type LeastSquaresProblem } from "../numeric/levenberg-marquardt.ts";
import { ARRAY_PARAMETERS, ArrayModel, type ArrayGeometry, type ArrayParameter } from "./array-spectrometer.ts";

export interface ArrayLine {
  px: number;
  wavelengthNm: number;
  /** Standard uncertainty of the wavelength at that pixel, nm: reference and position (times the dispersion) together. */
  uncNm: number;
}

export interface ArrayFitOptions {
  free: readonly ArrayParameter[];
  /** What is known beforehand of free parameters: standard uncertainty about the start's value. */
  priorUnc?: Partial<Record<ArrayParameter, number>>;
}

export interface ArrayFit {
  outcome: "fitted";
  geometry: ArrayGeometry;
  free: ArrayParameter[];
  /** free x free, row-major. */
  covariance: Float64Array;
  /** Of lines and prior knowledge. */
  chiSquare: number;
  /** Lines plus prior values minus free parameters. */
  degreesOfFreedom: number;
  /** Published minus fitted wavelength, nm, in the order of the lines. */
  residualsNm: Float64Array;
}

export interface ArrayFitRefusal {
  outcome: "refused";
  reason: "groove-density-and-focal-length" | "nothing-free" | "too-few-lines" | "undetermined" | "not-converged";
  /** What happened and what to do, for people. */
  detail: string;
}

const NAMES: Record<ArrayParameter, string> = {
  grooveDensityPerMm: "groove density",
  incidenceDeg: "angle of incidence",
  includedAngleDeg: "included angle",
  focalLengthMm: "focal length",
  detectorTiltDeg: "detector tilt",
  axisPx: "pixel of the optical axis",
};

/** Variance inflation beyond which a parameter is only the others' mirror: its correlation with them is above 1 - 5e-11. */
const LARGEST_INFLATION = 1e10;
/** Largest standard uncertainty at which the linear covariance still means something: angles, and lengths in their own size. */
const LARGEST_ANGLE_UNC_DEG = 10;
const LARGEST_RELATIVE_UNC = 0.25;

/**
 * Fit the free parameters, starting from `start`.
 *
 * @throws {RangeError} caller bugs: a parameter named twice, a value that is not finite, an uncertainty not above 0
 */
export function fitArraySpectrometer(
  lines: readonly ArrayLine[],
  start: ArrayGeometry,
  options: ArrayFitOptions,
): ArrayFit | ArrayFitRefusal {
  const free = [...options.free];
  const columns = free.map((name) => ARRAY_PARAMETERS.indexOf(name));
  if (new Set(free).size !== free.length || columns.includes(-1))
    throw new RangeError(`Free parameters must be named once each; got ${free.join(", ")}`);
  for (const line of lines) {
    if (!Number.isFinite(line.px) || !(line.wavelengthNm > 0 && line.wavelengthNm < Infinity))
      throw new RangeError("A line needs a finite pixel and a wavelength above 0");
    if (!(line.uncNm > 0 && line.uncNm < Infinity)) throw new RangeError("A line's uncertainty must be above 0");
  }
  if (free.length === 0)
    return refuse("nothing-free", "No parameter is free: name at least one that the lines should tell.");
  if (free.includes("grooveDensityPerMm") && free.includes("focalLengthMm")) {
    return refuse(
      "groove-density-and-focal-length",
      "Groove density and focal length both set the scale of the axis, so lines cannot tell them apart. Hold one of them.",
    );
  }
  const priors = free.flatMap((name, j) => {
    const unc = options.priorUnc?.[name];
    if (unc === undefined) return [];
    if (!(unc > 0 && unc < Infinity))
      throw new RangeError(`What is known of the ${NAMES[name]} needs an uncertainty above 0`);
    return [{ j, value: start[name], unc }];
  });
  const m = lines.length + priors.length;
  if (m < free.length) {
    return refuse(
      "too-few-lines",
      `${lines.length} lines cannot tell ${free.length} parameters. Give more lines, hold parameters, or state what is known of them.`,
    );
  }

  const n = free.length;
  const problem: LeastSquaresProblem = {
    parameterCount: n,
    residualCount: m,
    evaluate(values, residuals, jacobian) {
      const model = modelWith(start, free, values);
      if (model === null) return false;
      lines.forEach((line, i) => {
        model.evaluate(line.px);
        residuals[i] = (model.wavelengthNm - line.wavelengthNm) / line.uncNm;
        for (let j = 0; j < n; j++) jacobian[i * n + j] = model.partials[columns[j]!]! / line.uncNm;
      });
      priors.forEach((prior, k) => {
        const row = lines.length + k;
        residuals[row] = (values[prior.j]! - prior.value) / prior.unc;
        for (let j = 0; j < n; j++) jacobian[row * n + j] = j === prior.j ? 1 / prior.unc : 0;
      });
      return true;
    },
  };
  const found = minimise(
    problem,
    free.map((name) => start[name]),
    { maxIterations: 200 },
  );
  const model = modelWith(start, free, found.parameters);
  if (found.outcome === "bad-start" || found.outcome === "iterations" || model === null) {
    return refuse(
      "not-converged",
      "No geometry near the given one puts the lines where they were found. Check the optics' data and the names of the lines.",
    );
  }
  const inflated = notTold(problem, found.parameters, found.covariance, free, model);
  if (found.covariance === null || inflated.length > 0) {
    const which = (inflated.length > 0 ? inflated : free.map((_, j) => j)).map((j) => NAMES[free[j]!]);
    return refuse(
      "undetermined",
      `These lines cannot tell the ${which.join(" and the ")} apart. Hold one of them, or state what is known of it.`,
    );
  }
  return {
    outcome: "fitted",
    geometry: model.geometry,
    free,
    covariance: found.covariance,
    chiSquare: found.sumOfSquares,
    degreesOfFreedom: found.degreesOfFreedom,
    residualsNm: Float64Array.from(lines, (line) => line.wavelengthNm - model.wavelengthAtPx(line.px)),
  };
}

/**
 * Wavelength at a pixel by a fitted geometry and its standard uncertainty from the fit's covariance.
 *
 * @param model  `new ArrayModel(fit.geometry)`, made once by the caller for many pixels
 */
export function fittedWavelength(fit: ArrayFit, model: ArrayModel, px: number): { nm: number; uncNm: number } {
  model.evaluate(px);
  const n = fit.free.length;
  let variance = 0;
  for (let a = 0; a < n; a++) {
    const left = model.partials[ARRAY_PARAMETERS.indexOf(fit.free[a]!)]!;
    for (let b = 0; b < n; b++)
      variance += left * fit.covariance[a * n + b]! * model.partials[ARRAY_PARAMETERS.indexOf(fit.free[b]!)]!;
  }
  return { nm: model.wavelengthNm, uncNm: Math.sqrt(Math.max(variance, 0)) };
}

/** The model with the free parameters set; null where no spectrometer has them. */
function modelWith(
  start: ArrayGeometry,
  free: readonly ArrayParameter[],
  values: ArrayLike<number>,
): ArrayModel | null {
  const geometry = { ...start };
  free.forEach((name, j) => (geometry[name] = values[j]!));
  const isPossible =
    geometry.grooveDensityPerMm > 0 &&
    geometry.focalLengthMm > 0 &&
    Math.abs(geometry.detectorTiltDeg) < 89 &&
    Math.abs(geometry.incidenceDeg) < 90;
  return isPossible ? new ArrayModel(geometry) : null;
}

/** Parameters that others can stand in for, or that the lines leave open beyond what a linear covariance can state. */
function notTold(
  problem: LeastSquaresProblem,
  values: Float64Array,
  covariance: Float64Array | null,
  free: readonly ArrayParameter[],
  model: ArrayModel,
): number[] {
  if (covariance === null) return [];
  const n = problem.parameterCount;
  const jacobian = new Float64Array(problem.residualCount * n);
  problem.evaluate(values, new Float64Array(problem.residualCount), jacobian);
  const { focalLengthMm, grooveDensityPerMm, pixelPitchUm } = model.geometry;
  const largestUnc: Record<ArrayParameter, number> = {
    grooveDensityPerMm: LARGEST_RELATIVE_UNC * grooveDensityPerMm,
    incidenceDeg: LARGEST_ANGLE_UNC_DEG,
    includedAngleDeg: LARGEST_ANGLE_UNC_DEG,
    focalLengthMm: LARGEST_RELATIVE_UNC * focalLengthMm,
    detectorTiltDeg: LARGEST_ANGLE_UNC_DEG,
    axisPx: (LARGEST_RELATIVE_UNC * focalLengthMm * 1000) / pixelPitchUm,
  };
  const found: number[] = [];
  for (let j = 0; j < n; j++) {
    let information = 0;
    for (let i = 0; i < problem.residualCount; i++) information += jacobian[i * n + j]! * jacobian[i * n + j]!;
    const variance = covariance[j * n + j]!;
    if (!(variance * information < LARGEST_INFLATION) || Math.sqrt(variance) > largestUnc[free[j]!]) found.push(j);
  }
  return found;
}

function refuse(reason: ArrayFitRefusal["reason"], detail: string): ArrayFitRefusal {
  return { outcome: "refused", reason, detail };
}
