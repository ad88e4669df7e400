/**
 * Line fit: one Gaussian, or neighbours together, on a straight background, weighted least squares.
 *
 * Model     y(x) = b0 + b1 (x - x0) + sum of h exp(-(x - c)² / (2 s²)); averaged over x - 1/2 … x + 1/2 when the samples are
 *           pixels; fwhm = 2 sqrt(2 ln 2) s; x0 the middle of the window
 * Axes      positions in the axis unit, sample centres; y in counts
 * Weights   1/u², u = standard uncertainty of each sample in counts
 * Noise     correlated between neighbours when `noiseCorrelation` says so: the covariance is then that of the weighted fit
 *           under noise averaged over 1 / (1 - correlation) samples (running mean), and chi-squared is compared with its
 *           expectation under it, degrees of freedom by matching two moments (F. E. Satterthwaite, Biometrics 2 (1946) 110)
 * Scatter   uncertainties grow by sqrt(reduced chi²) where that exceeds 1 by more than its own standard deviation
 *           sqrt(2 / degrees of freedom): below that it is chance, and growing only upwards would overstate every interval
 * Refuses   too few samples, no convergence, a centre outside the window, a width that is no line's
 * Source    solver `numeric/levenberg-marquardt.ts`, held to NIST StRD; intervals and variance held by simulation in
 *           tests/external/line-fit.test.ts
 */
import { minimise, type LeastSquaresProblem } from "../numeric/levenberg-marquardt.ts";
import { FWHM_PER_STD, gaussian, gaussianIntegral, SQRT_TWO_PI } from "./gaussian.ts";
import { correlatedCovariance } from "./correlated-noise.ts";

export interface LineWindow {
  /** Sample centres in the axis unit, strictly increasing; gaps are allowed. */
  positions: Float64Array;
  counts: Float64Array;
  /** Standard uncertainty of each sample, counts, > 0. */
  countsUnc: Float64Array;
  /** True where each sample is the mean over one pixel and positions count pixels. */
  pixelIntegrated: boolean;
  /** Lag-one correlation of the noise, 0 for white noise. */
  noiseCorrelation: number;
}

export interface LineStart {
  /** Axis unit. */
  centre: number;
  /** Axis unit. */
  fwhm: number;
  peakHeightCounts: number;
}

export interface FittedShape {
  centre: number;
  centreUnc: number;
  fwhm: number;
  fwhmUnc: number;
  peakHeightCounts: number;
  /** Counts times axis unit. */
  areaCounts: number;
}

export interface FitLinesOptions {
  /** Default 60. */
  maxIterations?: number;
}

export type LineFitRefusal = "too-few-samples" | "not-converged" | "centre-outside-window" | "not-a-line";

export type LineFit =
  | {
      outcome: "fitted";
      /** In the order of the starts. */
      lines: FittedShape[];
      /** Counts at `windowCentre`, and counts per axis unit. */
      baseline: [number, number];
      windowCentre: number;
      /** Near 1 when the shape and the stated noise hold. */
      reducedChiSquare: number;
      /** Not whole under correlated noise. */
      degreesOfFreedom: number;
      /** The fitted curve at each sample. */
      fittedCounts: Float64Array;
    }
  | { outcome: "refused"; reason: LineFitRefusal; detail: string };

const PER_LINE = 3;
/** Noise correlation that changes no interval by more than a hundredth. */
const NEGLIGIBLE_CORRELATION = 0.01;

/**
 * Fit the lines of one window together.
 *
 * @returns a fit, or a refusal with its reason; never NaN, never a zero uncertainty
 * @throws {RangeError} caller bugs only: lengths differ, no start, a value is not finite, positions not increasing
 */
export function fitLines(window: LineWindow, starts: readonly LineStart[], options: FitLinesOptions = {}): LineFit {
  checkWindow(window, starts);
  const m = window.positions.length;
  const n = PER_LINE * starts.length + 2;
  if (m < n + 1) {
    return {
      outcome: "refused",
      reason: "too-few-samples",
      detail: `${m} samples cannot show ${starts.length} line(s): at least ${n + 1} are needed.`,
    };
  }
  const model = new GaussianLines(window, starts.length);
  const result = minimise(model, model.startParameters(starts), {
    maxIterations: options.maxIterations ?? 60,
    tolerance: 1e-4,
  });
  if (result.outcome === "iterations" || result.outcome === "bad-start" || result.covariance === null) {
    return {
      outcome: "refused",
      reason: "not-converged",
      detail: `The fit did not settle after ${result.iterations} steps.`,
    };
  }
  const p = result.parameters;
  const refusal = model.findRefusal(p, starts.length);
  if (refusal !== null) return refusal;

  let covariance = result.covariance;
  let degreesOfFreedom = m - n;
  let expectedChiSquare = m - n;
  if (Math.abs(window.noiseCorrelation) > NEGLIGIBLE_CORRELATION) {
    const residuals = new Float64Array(m);
    const jacobian = new Float64Array(m * n);
    model.evaluate(p, residuals, jacobian);
    const correlated = correlatedCovariance(jacobian, m, n, covariance, window.positions, window.noiseCorrelation);
    covariance = correlated.covariance;
    degreesOfFreedom = correlated.degreesOfFreedom;
    expectedChiSquare = correlated.expectedChiSquare;
  }
  const reducedChiSquare = result.sumOfSquares / expectedChiSquare;
  const growth = isBeyondChance(reducedChiSquare, degreesOfFreedom) ? Math.sqrt(reducedChiSquare) : 1;
  const lines: FittedShape[] = starts.map((_, k) => {
    const at = PER_LINE * k;
    const std = p[at + 1]!;
    return {
      centre: p[at]!,
      centreUnc: growth * Math.sqrt(covariance[at * n + at]!),
      fwhm: FWHM_PER_STD * std,
      fwhmUnc: growth * FWHM_PER_STD * Math.sqrt(covariance[(at + 1) * n + at + 1]!),
      peakHeightCounts: p[at + 2]!,
      areaCounts: p[at + 2]! * std * SQRT_TWO_PI,
    };
  });
  if (
    lines.some(
      (line) => !(line.centreUnc > 0 && line.centreUnc < Infinity && line.fwhmUnc > 0 && line.fwhmUnc < Infinity),
    )
  ) {
    return {
      outcome: "refused",
      reason: "not-converged",
      detail: "The samples do not fix the line's position: its uncertainty has no finite value.",
    };
  }
  return {
    outcome: "fitted",
    lines,
    baseline: [p[n - 2]!, p[n - 1]!],
    windowCentre: model.windowCentre,
    reducedChiSquare,
    degreesOfFreedom,
    fittedCounts: model.curve(p),
  };
}

/** True where the scatter about a fit is more than chance, so that the uncertainties were made to grow with it. */
export function isBeyondChance(reducedChiSquare: number, degreesOfFreedom: number): boolean {
  return degreesOfFreedom > 0 && reducedChiSquare > 1 + Math.sqrt(2 / degreesOfFreedom);
}

function checkWindow(window: LineWindow, starts: readonly LineStart[]): void {
  const { positions, counts, countsUnc, noiseCorrelation } = window;
  const m = positions.length;
  if (starts.length === 0) throw new RangeError("fitLines needs at least one start");
  if (counts.length !== m || countsUnc.length !== m)
    throw new RangeError(`Lengths differ: ${m} positions, ${counts.length} counts, ${countsUnc.length} uncertainties`);
  for (let i = 0; i < m; i++) {
    if (!Number.isFinite(positions[i]) || !Number.isFinite(counts[i]))
      throw new RangeError(`Sample ${i} is not finite`);
    if (!(countsUnc[i]! > 0 && countsUnc[i]! < Infinity))
      throw new RangeError(`countsUnc[${i}] must be above 0 and finite; got ${countsUnc[i]}`);
    if (i > 0 && !(positions[i]! > positions[i - 1]!))
      throw new RangeError(`Positions must increase; they do not at sample ${i}`);
  }
  if (!(noiseCorrelation > -1 && noiseCorrelation < 1))
    throw new RangeError(`noiseCorrelation must lie between -1 and 1; got ${noiseCorrelation}`);
  for (const start of starts) {
    if (
      !Number.isFinite(start.centre) ||
      !(start.fwhm > 0 && start.fwhm < Infinity) ||
      !Number.isFinite(start.peakHeightCounts)
    ) {
      throw new RangeError("A start needs a finite centre and height and a width above 0");
    }
  }
}

/** Parameters: centre, standard deviation and height of each line, then background at the middle and its slope. */
class GaussianLines implements LeastSquaresProblem {
  readonly parameterCount: number;
  readonly residualCount: number;
  readonly windowCentre: number;
  private readonly span: number;
  private readonly leastStd: number;
  private readonly first: number;
  private readonly last: number;

  constructor(
    private readonly window: LineWindow,
    private readonly lineCount: number,
  ) {
    const { positions } = window;
    const m = positions.length;
    this.parameterCount = PER_LINE * lineCount + 2;
    this.residualCount = m;
    this.windowCentre = 0.5 * (positions[0]! + positions[m - 1]!);
    this.span = positions[m - 1]! - positions[0]!;
    let spacing = Infinity;
    for (let i = 1; i < m; i++) spacing = Math.min(spacing, positions[i]! - positions[i - 1]!);
    // Narrower than this, a line falls between samples and its width cannot be known.
    this.leastStd = 0.12 * spacing;
    this.first = positions[0]! - spacing;
    this.last = positions[m - 1]! + spacing;
  }

  startParameters(starts: readonly LineStart[]): Float64Array {
    const { positions, counts } = this.window;
    const m = positions.length;
    const p = new Float64Array(this.parameterCount);
    starts.forEach((start, k) => {
      p[PER_LINE * k] = Math.min(Math.max(start.centre, this.first), this.last);
      p[PER_LINE * k + 1] = Math.min(Math.max(start.fwhm / FWHM_PER_STD, 2 * this.leastStd), this.span);
      p[PER_LINE * k + 2] = start.peakHeightCounts;
    });
    // Background from the mean of what the starts leave over.
    let sum = 0;
    const curve = this.curve(p);
    for (let i = 0; i < m; i++) sum += counts[i]! - curve[i]!;
    p[this.parameterCount - 2] = sum / m;
    return p;
  }

  evaluate(p: Float64Array, residuals: Float64Array, jacobian: Float64Array): boolean {
    const { positions, counts, countsUnc, pixelIntegrated } = this.window;
    const m = this.residualCount;
    const n = this.parameterCount;
    for (let k = 0; k < this.lineCount; k++) {
      const centre = p[PER_LINE * k]!;
      const std = p[PER_LINE * k + 1]!;
      if (!(centre >= this.first && centre <= this.last && std >= this.leastStd && std <= 2 * this.span)) return false;
    }
    const background = p[n - 2]!;
    const slope = p[n - 1]!;
    for (let i = 0; i < m; i++) {
      const weight = 1 / countsUnc[i]!;
      const offset = positions[i]! - this.windowCentre;
      residuals[i] = (background + slope * offset - counts[i]!) * weight;
      jacobian[i * n + n - 2] = weight;
      jacobian[i * n + n - 1] = offset * weight;
    }
    for (let k = 0; k < this.lineCount; k++) {
      if (pixelIntegrated) this.addPixelLine(p, PER_LINE * k, residuals, jacobian);
      else this.addPointLine(p, PER_LINE * k, residuals, jacobian);
    }
    return true;
  }

  private addPointLine(p: Float64Array, at: number, residuals: Float64Array, jacobian: Float64Array): void {
    const { positions, countsUnc } = this.window;
    const n = this.parameterCount;
    const centre = p[at]!;
    const inverse = 1 / p[at + 1]!;
    const height = p[at + 2]!;
    for (let i = 0; i < this.residualCount; i++) {
      const u = (positions[i]! - centre) * inverse;
      const shape = gaussian(u) / countsUnc[i]!;
      const value = height * shape;
      residuals[i] = residuals[i]! + value;
      const cell = i * n + at;
      jacobian[cell] = value * u * inverse;
      jacobian[cell + 1] = value * u * u * inverse;
      jacobian[cell + 2] = shape;
    }
  }

  private addPixelLine(p: Float64Array, at: number, residuals: Float64Array, jacobian: Float64Array): void {
    const { positions, countsUnc } = this.window;
    const n = this.parameterCount;
    const centre = p[at]!;
    const std = p[at + 1]!;
    const inverse = 1 / std;
    const height = p[at + 2]!;
    // The upper edge of a pixel is the lower edge of the next.
    let edge = NaN;
    let edgeU = 0;
    let edgeShape = 0;
    let edgeIntegral = 0;
    for (let i = 0; i < this.residualCount; i++) {
      const lower = positions[i]! - 0.5;
      if (lower !== edge) {
        edgeU = (lower - centre) * inverse;
        edgeShape = gaussian(edgeU);
        edgeIntegral = gaussianIntegral(edgeU);
      }
      edge = positions[i]! + 0.5;
      const upperU = (edge - centre) * inverse;
      const upperShape = gaussian(upperU);
      const upperIntegral = gaussianIntegral(upperU);
      const weight = 1 / countsUnc[i]!;
      const area = upperIntegral - edgeIntegral;
      residuals[i] = residuals[i]! + height * std * area * weight;
      const cell = i * n + at;
      jacobian[cell] = height * (edgeShape - upperShape) * weight;
      jacobian[cell + 1] = height * (area - upperU * upperShape + edgeU * edgeShape) * weight;
      jacobian[cell + 2] = std * area * weight;
      edgeU = upperU;
      edgeShape = upperShape;
      edgeIntegral = upperIntegral;
    }
  }

  /** The model at each sample, counts. */
  curve(p: Float64Array): Float64Array {
    const { positions, pixelIntegrated } = this.window;
    const n = this.parameterCount;
    const values = new Float64Array(this.residualCount);
    for (let i = 0; i < values.length; i++) {
      const x = positions[i]!;
      let sum = p[n - 2]! + p[n - 1]! * (x - this.windowCentre);
      for (let at = 0; at < n - 2; at += PER_LINE) {
        const centre = p[at]!;
        const std = p[at + 1]!;
        sum += pixelIntegrated
          ? p[at + 2]! * std * (gaussianIntegral((x + 0.5 - centre) / std) - gaussianIntegral((x - 0.5 - centre) / std))
          : p[at + 2]! * gaussian((x - centre) / std);
      }
      values[i] = sum;
    }
    return values;
  }

  findRefusal(p: Float64Array, lineCount: number): LineFit | null {
    const { positions } = this.window;
    for (let k = 0; k < lineCount; k++) {
      const centre = p[PER_LINE * k]!;
      const std = p[PER_LINE * k + 1]!;
      if (!(centre >= positions[0]! && centre <= positions[positions.length - 1]!)) {
        return {
          outcome: "refused",
          reason: "centre-outside-window",
          detail: "The fitted centre lies outside the fitted samples.",
        };
      }
      if (!(p[PER_LINE * k + 2]! > 0)) {
        return { outcome: "refused", reason: "not-a-line", detail: "The fitted height is not above the background." };
      }
      if (std <= 1.01 * this.leastStd || std >= this.span) {
        return {
          outcome: "refused",
          reason: "not-a-line",
          detail: "The fitted width is not one that these samples can show.",
        };
      }
    }
    return null;
  }
}
