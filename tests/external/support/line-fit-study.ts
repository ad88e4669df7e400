/**
 * Line centres by simulation with known truth, for every closed shape: variance over the Cramér-Rao bound, bias, coverage of ±2 u.
 *
 * The shapes are written here a second time, by other means than the fitter's (convolutions by the trapezoidal rule, pixels by
 * quadrature), so that a mistake in one cannot hide in the other. Windows on a sloping background, white noise, the centre at eight
 * places within a pixel; every parameter is free in the fit, and in the bound (inverse of the Fisher information, derivatives taken
 * numerically). The centre is the centre of symmetry, of the skewed shape the first moment.
 */
import { fitLines } from "../../../packages/core/src/lineshape/fit-line.ts";
import { solveLeastSquares } from "../../../packages/core/src/numeric/index.ts";
import { createRandom } from "../../../packages/core/src/testing/index.ts";

export type StudiedShape =
  "gaussian" | "lorentzian" | "voigt" | "pseudo-voigt" | "exponentially-modified-gaussian" | "box";
export const studiedShapes: StudiedShape[] = [
  "gaussian",
  "lorentzian",
  "voigt",
  "pseudo-voigt",
  "exponentially-modified-gaussian",
  "box",
];

export interface LineFitCase {
  shape: StudiedShape;
  fwhmPx: number;
  samples: number;
  /** Height of the line over the noise of a sample. */
  signalToNoise: number;
}

export interface LineFitRow extends LineFitCase {
  fits: number;
  refused: number;
  varianceOverBound: number;
  /** Standard uncertainty of the ratio, from the number of fits. */
  varianceUnc: number;
  biasPx: number;
  biasUncPx: number;
  coveredPercent: number;
  /** Binomial standard uncertainty. */
  coveredUncPercent: number;
}

/** Shape parameters of the truth: Lorentz share (of the FWHM, or of the area), tail over Gaussian deviation, blur over box width. */
const parameterOf: Record<StudiedShape, number> = {
  gaussian: 0,
  lorentzian: 0,
  voigt: 0.4,
  "pseudo-voigt": 0.4,
  "exponentially-modified-gaussian": 1,
  box: 0.16,
};
const isFreeShape = (shape: StudiedShape): boolean => shape !== "gaussian" && shape !== "lorentzian";
const FWHM_OVER_STD = 2 * Math.sqrt(2 * Math.log(2));
const phases = 8;
const noiseCounts = 10;
const background = 120;
const slope = 0.4;
const gaussian = (x: number, std: number): number =>
  Math.exp((-0.5 * x * x) / (std * std)) / (std * Math.sqrt(2 * Math.PI));

/** Density of unit area about the centre (first moment), for a scale that is the FWHM or near it. */
function densityAt(shape: StudiedShape, x: number, width: number, s: number): number {
  const std = width / FWHM_OVER_STD;
  const lorentzian = (at: number, half: number): number => half / (Math.PI * (at * at + half * half));
  if (shape === "gaussian") return gaussian(x, std);
  if (shape === "lorentzian") return lorentzian(x, width / 2);
  if (shape === "pseudo-voigt") return (1 - s) * gaussian(x, std) + s * lorentzian(x, width / 2);
  if (shape === "box") {
    // Mean of a Gaussian over the box, by the trapezoidal rule.
    const blur = s * width;
    return mean(48, (t) => gaussian(x - (t - 0.5) * width, blur));
  }
  if (shape === "voigt") {
    const half = (s * width) / 2;
    const core = (1 - s) * std;
    const reach = 7;
    return (
      2 *
      reach *
      core *
      mean(80, (t) => gaussian((2 * t - 1) * reach * core, core) * lorentzian(x - (2 * t - 1) * reach * core, half))
    );
  }
  const tail = s * std;
  return 30 * tail * mean(160, (t) => (Math.exp(-30 * t) / tail) * gaussian(x + tail - 30 * t * tail, std));
}

/** Mean over 0 to 1 by Gauss-Legendre with three nodes in each panel. */
function mean(panels: number, value: (t: number) => number): number {
  let sum = 0;
  const node = 0.5 * Math.sqrt(0.6);
  for (let k = 0; k < panels; k++) {
    const middle = (k + 0.5) / panels;
    sum += 5 * value(middle - node / panels) + 8 * value(middle) + 5 * value(middle + node / panels);
  }
  return sum / (18 * panels);
}

/** Mean density over the pixel at distance x, in two panels of three nodes. */
function densityOverPixel(shape: StudiedShape, x: number, width: number, s: number): number {
  return mean(3, (t) => densityAt(shape, x + t - 0.5, width, s));
}

interface Phase {
  centre: number;
  truth: Float64Array;
  boundVariance: number;
}

function makePhase(one: LineFitCase, phase: number): Phase {
  const { shape, fwhmPx, samples, signalToNoise } = one;
  const s = parameterOf[shape];
  const middle = (samples - 1) / 2;
  const centre = middle + (phase + 0.5) / phases - 0.5;
  const area =
    (signalToNoise * noiseCounts) /
    Math.max(...[-0.3, -0.2, -0.1, 0].map((x) => densityAt(shape, x * fwhmPx, fwhmPx, s)));
  const at = (i: number, c: number, w: number, p: number): number => area * densityOverPixel(shape, i - c, w, p);
  const n = isFreeShape(shape) ? 6 : 5;
  const design = new Float64Array(samples * n);
  const truth = new Float64Array(samples);
  const h = 1e-4;
  for (let i = 0; i < samples; i++) {
    const value = at(i, centre, fwhmPx, s);
    truth[i] = background + slope * (i - middle) + value;
    const row = [
      (at(i, centre + h, fwhmPx, s) - at(i, centre - h, fwhmPx, s)) / (2 * h),
      (at(i, centre, fwhmPx + h, s) - at(i, centre, fwhmPx - h, s)) / (2 * h),
      value / area,
      1,
      i - middle,
    ];
    if (n === 6) row.push((at(i, centre, fwhmPx, s + h) - at(i, centre, fwhmPx, s - h)) / (2 * h));
    design.set(row, n * i);
  }
  const unc = new Float64Array(samples).fill(noiseCounts);
  const { covariance } = solveLeastSquares(design, samples, n, new Float64Array(samples), unc);
  return { centre, truth, boundVariance: covariance[0]! };
}

/** Cases of the study: two widths and two signal-to-noise ratios a shape; the skewed shape's tail needs more signal to be told. */
export function studiedCases(shapes: readonly StudiedShape[] = studiedShapes): LineFitCase[] {
  return shapes.flatMap((shape) =>
    [
      { fwhmPx: shape === "box" ? 6 : 2.4, signalToNoise: 30 },
      { fwhmPx: shape === "box" ? 9.5 : 5, signalToNoise: 30 },
      { fwhmPx: shape === "box" ? 9.5 : 3.6, signalToNoise: 300 },
    ].map(({ fwhmPx, signalToNoise }) => ({
      shape,
      fwhmPx,
      signalToNoise,
      samples: 2 * Math.ceil((shape === "gaussian" || shape === "box" ? 2.2 : 4) * fwhmPx) + 5,
    })),
  );
}

export interface LineFitStudy {
  /** Fits a case. */
  fits: number;
  seed: number;
  shapes?: readonly StudiedShape[];
  cases?: readonly LineFitCase[];
}

/** Run the study. The full form has 20,000 fits a case or more; the rows say how sure their figures are. */
export function runLineFitStudy({ fits, seed, shapes, cases }: LineFitStudy): LineFitRow[] {
  return (cases ?? studiedCases(shapes)).map((one, number) => runCase(one, fits, seed + number));
}

function runCase(one: LineFitCase, fits: number, seed: number): LineFitRow {
  const { shape, fwhmPx, samples, signalToNoise } = one;
  const random = createRandom(seed);
  const places = Array.from({ length: phases }, (_, k) => makePhase(one, k));
  const positions = Float64Array.from({ length: samples }, (_, i) => i);
  const countsUnc = new Float64Array(samples).fill(noiseCounts);
  const counts = new Float64Array(samples);
  let [done, refused, covered, bias, ratio, fourth, square] = [0, 0, 0, 0, 0, 0, 0];
  for (let k = 0; k < fits; k++) {
    const { centre, truth, boundVariance } = places[k % phases]!;
    for (let i = 0; i < samples; i++) counts[i] = truth[i]! + noiseCounts * random.normal();
    const start = {
      centre: centre + random.between(-0.1, 0.1) * fwhmPx,
      fwhm: fwhmPx * random.between(0.75, 1.3),
      peakHeightCounts: signalToNoise * noiseCounts * random.between(0.8, 1.2),
    };
    const fit = fitLines({ positions, counts, countsUnc, pixelIntegrated: true, noiseCorrelation: 0 }, [start], {
      shape,
    });
    if (fit.outcome === "refused") {
      refused += 1;
      continue;
    }
    done += 1;
    const error = fit.lines[0]!.centre - centre;
    const scaled = (error * error) / boundVariance;
    bias += error;
    square += error * error;
    ratio += scaled;
    fourth += scaled * scaled;
    if (Math.abs(error) <= 2 * fit.lines[0]!.centreUnc) covered += 1;
  }
  const share = covered / done;
  return {
    ...one,
    fits,
    refused,
    varianceOverBound: ratio / done,
    varianceUnc: Math.sqrt(Math.max(0, fourth / done - (ratio / done) ** 2) / done),
    biasPx: bias / done,
    biasUncPx: Math.sqrt(square / done / done),
    coveredPercent: 100 * share,
    coveredUncPercent: 100 * Math.sqrt((share * (1 - share)) / done),
  };
}

/** One row as a line of text. */
export function describeRow(row: LineFitRow): string {
  return (
    `${row.shape} FWHM ${row.fwhmPx} px ${row.signalToNoise}:1, ${row.fits} fits${row.refused > 0 ? ` (${row.refused} refused)` : ""}: ` +
    `variance / bound ${row.varianceOverBound.toFixed(3)} ± ${row.varianceUnc.toFixed(3)}, bias ${row.biasPx.toExponential(1)} ± ${row.biasUncPx.toExponential(1)} px, ` +
    `covered by ±2 u ${row.coveredPercent.toFixed(2)} ± ${row.coveredUncPercent.toFixed(2)} %`
  );
}
