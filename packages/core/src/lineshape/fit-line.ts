/**
 * Line fit: one line, or neighbours together, on a straight background, weighted least squares.
 *
 * Model     y(x) = b0 + b1 (x - x0) + sum of area x shape((x - centre) / width; s); averaged over x - 1/2 … x + 1/2 when the samples are
 *           pixels; x0 the middle of the window; the shapes and what their centre is: `profile.ts`
 * Axes      positions in the axis unit, sample centres; y in counts
 * Weights   1/u², u = standard uncertainty of each sample in counts
 * Shape     the lines of a window share one shape parameter: free, or with what is known of it beforehand (value and standard uncertainty,
 *           which enters as one more observation, so that the position's uncertainty holds it), or held
 * Noise     correlated between neighbours when `noiseAutocorrelation` or `noiseCorrelation` says so: the covariance is then that of the
 *           weighted fit under such noise, and chi-squared is compared with its expectation under it (`correlated-noise.ts`)
 * Scatter   uncertainties grow by sqrt(reduced chi²) where that exceeds 1 by more than its own standard deviation
 *           sqrt(2 / degrees of freedom): below that it is chance, and growing only upwards would overstate every interval
 * Refuses   too few samples, no convergence, a centre outside the window, a width that is no line's
 * Source    search `line-solver.ts`; intervals, variance and bias held by simulation in tests/external/line-fit.test.ts and
 *           line-shapes.test.ts
 */
import type { LineShapeName } from "../analysis/types.ts";
import { correlatedCovariance, runningMeanAutocorrelation } from "./correlated-noise.ts";
import { LineSolver, PER_LINE, type KnownParameter } from "./line-solver.ts";
import { measureProfile, profileOf, type Profile } from "./profile.ts";

export interface LineWindow {
  /** Sample centres in the axis unit, strictly increasing; gaps are allowed. */
  positions: Float64Array;
  counts: Float64Array;
  /** Standard uncertainty of each sample, counts, > 0. */
  countsUnc: Float64Array;
  /** True where each sample is the mean over one pixel and positions count pixels. */
  pixelIntegrated: boolean;
  /** Lag-one correlation of the noise, 0 for white noise: that of a running mean. */
  noiseCorrelation: number;
  /** Correlation of the noise by lag, first entry lag one; where given it is used instead of `noiseCorrelation`. */
  noiseAutocorrelation?: Float64Array;
}

export interface LineStart {
  /** Axis unit. */
  centre: number;
  /** Axis unit. */
  fwhm: number;
  peakHeightCounts: number;
}

export interface FittedShape {
  /** Centre of symmetry; of a skewed shape the first moment. */
  centre: number;
  centreUnc: number;
  fwhm: number;
  fwhmUnc: number;
  peakHeightCounts: number;
  /** Counts times axis unit. */
  areaCounts: number;
  /** Of centre, FWHM, area and, where it was free, the shape parameter: row-major, grown by the scatter as the uncertainties are. */
  covariance: number[];
}

export interface FitLinesOptions {
  /** Default 60. */
  maxIterations?: number;
  /** Default `gaussian`; a learned shape is handed in as its profile. */
  shape?: Exclude<LineShapeName, "empirical"> | Profile;
  /** What is known of the shape parameter: unc 0 holds it; absent or null leaves it free. */
  shapeParameter?: KnownParameter | null;
  /** Hand back the curve's derivatives by every parameter. */
  withDerivatives?: boolean;
}

export type LineFitRefusal = "too-few-samples" | "not-converged" | "centre-outside-window" | "not-a-line";

export interface FittedWindowOfLines {
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
  /** Shape parameter of the window's lines and its standard uncertainty (0 where it was held or stands at its limit); null: the shape has none. */
  shapeParameter: KnownParameter | null;
  /** Where asked for: one column a parameter, counts per unit of it at each sample. */
  derivatives?: Float64Array[];
}

export type LineFit = FittedWindowOfLines | { outcome: "refused"; reason: LineFitRefusal; detail: string };

/** Noise correlation that changes no interval by more than a hundredth. */
const NEGLIGIBLE_CORRELATION = 0.01;

/** One solver for all fits: it keeps its memory, nothing else, between them. */
const solver = new LineSolver();

/**
 * Fit the lines of one window together.
 *
 * @returns a fit, or a refusal with its reason; never NaN, never a zero uncertainty
 * @throws {RangeError} caller bugs only: lengths differ, no start, a value is not finite, positions not increasing
 */
export function fitLines(window: LineWindow, starts: readonly LineStart[], options: FitLinesOptions = {}): LineFit {
  checkWindow(window, starts);
  const shape = options.shape ?? "gaussian";
  const profile = typeof shape === "string" ? profileOf(shape) : shape;
  const known = options.shapeParameter ?? null;
  const m = window.positions.length;
  const isFree = profile.hasParameter && (known === null || known.unc > 0);
  const n = PER_LINE * starts.length + 2 + (isFree ? 1 : 0);
  const fewest = n + 1 - (isFree && known !== null ? 1 : 0);
  if (m < fewest) {
    return {
      outcome: "refused",
      reason: "too-few-samples",
      detail: `${m} samples cannot show ${starts.length} line(s): at least ${fewest} are needed.`,
    };
  }
  solver.load(window, starts.length, profile, known);
  solver.start(
    starts.map((one) => one.centre),
    starts.map((one) => one.fwhm),
    starts.map((one) => one.peakHeightCounts),
  );
  const outcome = solver.search(options.maxIterations ?? 60);
  if (outcome !== "converged") {
    return {
      outcome: "refused",
      reason: "not-converged",
      detail: `The fit did not settle after ${solver.iterations} steps.`,
    };
  }
  for (let k = 0; k < starts.length; k++) {
    const refusal = refusalOf(solver.isLineAllowed(k));
    if (refusal !== null) return refusal;
  }
  return resultOf(window, starts.length, m - fewest + 1, profile, options.withDerivatives ?? false);
}

function resultOf(
  window: LineWindow,
  lineCount: number,
  whiteDegreesOfFreedom: number,
  profile: Profile,
  withDerivatives: boolean,
): LineFit {
  const { m, n, parameters: p } = solver;
  let covariance: Float64Array = solver.covariance;
  let degreesOfFreedom = whiteDegreesOfFreedom;
  let expectedChiSquare = whiteDegreesOfFreedom;
  const autocorrelation = autocorrelationOf(window);
  if (autocorrelation !== null) {
    const correlated = correlatedCovariance(
      solver.columns,
      solver.stride,
      m,
      n,
      solver.prior,
      covariance,
      window.positions,
      autocorrelation,
    );
    covariance = correlated.covariance;
    degreesOfFreedom = correlated.degreesOfFreedom;
    expectedChiSquare = correlated.expectedChiSquare;
  }
  const reducedChiSquare = solver.chiSquare / expectedChiSquare;
  const growth = isBeyondChance(reducedChiSquare, degreesOfFreedom) ? reducedChiSquare : 1;
  const measures = measureProfile(profile, solver.shapeParameter());
  const s = solver.shapeColumn;
  const lines: FittedShape[] = [];
  for (let k = 0; k < lineCount; k++) {
    const at = PER_LINE * k;
    const width = p[at + 1]!;
    const result = reportedCovariance(covariance, n, at, s, measures.fwhm, width * measures.fwhmSlope, growth);
    const size = s >= 0 ? 4 : 3;
    lines.push({
      centre: p[at]!,
      centreUnc: Math.sqrt(result[0]!),
      fwhm: measures.fwhm * width,
      fwhmUnc: Math.sqrt(result[size + 1]!),
      peakHeightCounts: (p[at + 2]! * measures.height) / width,
      areaCounts: p[at + 2]!,
      covariance: result,
    });
  }
  for (const line of lines) {
    if (line.centreUnc > 0 && line.centreUnc < Infinity && line.fwhmUnc > 0 && line.fwhmUnc < Infinity) continue;
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
    windowCentre: solver.windowCentre,
    reducedChiSquare,
    degreesOfFreedom,
    fittedCounts: solver.fittedCounts(),
    shapeParameter: profile.hasParameter
      ? { value: solver.shapeParameter(), unc: s >= 0 ? Math.sqrt(growth * covariance[s * n + s]!) : 0 }
      : null,
    ...(withDerivatives ? { derivatives: derivativesOf(window.countsUnc) } : {}),
  };
}

function derivativesOf(countsUnc: Float64Array): Float64Array[] {
  const { m, n, columns, stride } = solver;
  return Array.from({ length: n }, (_, a) => {
    const column = columns.slice(a * stride, a * stride + m);
    for (let i = 0; i < m; i++) column[i] = column[i]! * countsUnc[i]!;
    return column;
  });
}

/** From the parameters' covariance to that of centre, FWHM, area and shape parameter: only the FWHM is not one of the parameters. */
function reportedCovariance(
  covariance: Float64Array,
  n: number,
  at: number,
  shapeColumn: number,
  fwhmPerWidth: number,
  fwhmPerShape: number,
  growth: number,
): number[] {
  const columns = shapeColumn >= 0 ? [at, at + 1, at + 2, shapeColumn] : [at, at + 1, at + 2];
  const withFwhm = (column: number): number =>
    fwhmPerWidth * covariance[(at + 1) * n + column]! +
    (shapeColumn >= 0 ? fwhmPerShape * covariance[shapeColumn * n + column]! : 0);
  const result: number[] = [];
  for (const a of columns) {
    for (const b of columns) {
      let value = covariance[a * n + b]!;
      if (a === at + 1 && b === at + 1) {
        value = fwhmPerWidth * withFwhm(a) + (shapeColumn >= 0 ? fwhmPerShape * withFwhm(shapeColumn) : 0);
      } else if (a === at + 1) value = withFwhm(b);
      else if (b === at + 1) value = withFwhm(a);
      result.push(growth * value);
    }
  }
  return result;
}

function autocorrelationOf(window: LineWindow): Float64Array | null {
  const given = window.noiseAutocorrelation;
  if (given !== undefined) return given.length > 0 ? given : null;
  return Math.abs(window.noiseCorrelation) > NEGLIGIBLE_CORRELATION
    ? runningMeanAutocorrelation(window.noiseCorrelation)
    : null;
}

function refusalOf(reason: "yes" | "centre-outside-window" | "not-a-line"): LineFit | null {
  if (reason === "yes") return null;
  return {
    outcome: "refused",
    reason,
    detail:
      reason === "centre-outside-window"
        ? "The fitted centre lies outside the fitted samples."
        : "The fitted height is not above the background, or its width is not one that these samples can show.",
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
    const position = positions[i]!;
    const value = counts[i]!;
    if (!(position - position === 0) || !(value - value === 0)) throw new RangeError(`Sample ${i} is not finite`);
    if (!(countsUnc[i]! > 0 && countsUnc[i]! < Infinity))
      throw new RangeError(`countsUnc[${i}] must be above 0 and finite; got ${countsUnc[i]}`);
    if (i > 0 && !(position > positions[i - 1]!))
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
