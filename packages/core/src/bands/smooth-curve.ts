/**
 * Highest point of a smooth curve that was recorded with noise: where a band lies, with an uncertainty that holds.
 *
 * Model     y = straight line + a smooth function + noise. The function is a stationary Gaussian process with the rational quadratic
 *           covariance s² (1 + d² / (4 l²))^-2, a mixture of scales about l: no shape of band is assumed, symmetric or not, only that
 *           nothing changes faster than over l. The noise is v N, N given up to its size (relative uncertainties, and the
 *           correlation of neighbours where the instrument smoothed)
 * Scales    l and v / s² from the samples by restricted likelihood (the straight line integrated out); l never below what the spectral
 *           bandwidth lets through. The noise v is learned from all bands of a spectrum together, each band allowed its own
 *           deviation: a band of few samples can't tell noise from detail by itself
 * Position  zero of the derivative of the posterior mean; its standard uncertainty sd(f') / |f''| holds the noise and what lies unseen
 *           between the samples alike; averaged over the scales that the samples leave possible, their spread added
 * Source    C. E. Rasmussen, C. K. I. Williams, Gaussian Processes for Machine Learning (MIT Press 2006) 2.2, 2.7, 4.2, 5.4, 9.4;
 *           H. D. Patterson, R. Thompson, Biometrika 58 (1971) 545 (restricted likelihood)
 * Units     positions in the axis unit, values in the unit of the ordinate
 * Limits    one highest point in the window's middle; 7 to 64 samples; intervals held by simulation in tests/external/bands.test.ts
 */
import { exp, log } from "../numeric/elementary.ts";

export interface CurveWindow {
  /** Increasing, axis unit. */
  positions: Float64Array;
  /** The curve has its maximum in the window. */
  values: Float64Array;
  /** Noise of each sample relative to the others (any common factor). */
  relativeUnc: Float64Array;
  /** Number of neighbouring samples whose noise is alike (running mean of so many); 1 for white noise. */
  smoothedOver: number;
  /** Shortest and longest scale that the curve may change over, axis unit. */
  shortestScale: number;
  longestScale: number;
  /** Where the maximum is looked for, axis unit. */
  from: number;
  to: number;
}

export interface CurveMaximum {
  position: number;
  positionUnc: number;
  /** Of `positionUnc`: how well the noise is known. */
  degreesOfFreedom: number;
  /** Of the smooth curve at its maximum: value, second derivative (below 0) and third derivative. */
  value: number;
  curvature: number;
  thirdDerivative: number;
  /** Most probable scale of the curve, axis unit, and standard deviation of a sample's noise where relativeUnc is 1. */
  scale: number;
  noise: number;
  /** Generalised sum of squares over its expectation at the noise that was settled on. */
  reducedChiSquare: number;
  /** The smooth curve where it was asked for. */
  fitted: Float64Array;
}

export const fewestSamples = 7;
export const mostSamples = 64;
const meanCount = 2;
/** Noise variance over the curve's, logarithms: from a curve without noise that matters to one that is noise alone. */
const lowestRatio = -18;
const highestRatio = 3;
const ratioStep = 2.1;
const scaleSteps = 5;
/** Steps of a standard deviation over which the scales are averaged. */
const averagedOver = [-1.4, 0, 1.4];
/** Noise of one band beside that of the others: standard deviation of the logarithm of its variance. Found by simulation. */
const noiseSpread = 0.7;
const noiseCells = 61;
/** Share of smoothed noise that stays white: rounding, and filters that are no exact running mean. */
const whiteShare = 0.02;

/** Logarithm of the noise variance, and the standard deviation of that. */
export interface NoiseLevel {
  logVariance: number;
  unc: number;
}

/** One pair of scales, worked out. */
interface State {
  logScale: number;
  logRatio: number;
  /** Logarithms of the determinants. */
  determinants: number;
  /** Generalised sum of squares over s². */
  rest: number;
}

/** A band's curve before the noise is settled: what its samples say of it. */
export class CurveProcess {
  private readonly m: number;
  private readonly middle: number;
  private readonly half: number;
  private readonly noise: Float64Array;
  private readonly kernel: Float64Array;
  private readonly factor: Float64Array;
  private readonly design: Float64Array;
  private readonly whiteDesign: Float64Array;
  private readonly whiteValues: Float64Array;
  private readonly alpha: Float64Array;
  private readonly column: Float64Array;
  private readonly beta = new Float64Array(meanCount);
  private readonly normal = new Float64Array(3);
  private readonly shortest: number;
  private readonly longest: number;
  private readonly states: State[] = [];
  private kernelScale = NaN;

  constructor(private readonly window: CurveWindow) {
    const { positions, relativeUnc, smoothedOver } = window;
    const m = positions.length;
    if (m < fewestSamples || m > mostSamples) {
      throw new RangeError(`A curve needs ${fewestSamples} to ${mostSamples} samples; got ${m}`);
    }
    this.m = m;
    this.middle = (positions[0]! + positions[m - 1]!) / 2;
    this.half = (positions[m - 1]! - positions[0]!) / 2;
    this.shortest = log(window.shortestScale);
    this.longest = log(Math.max(window.longestScale, 1.01 * window.shortestScale));
    this.noise = new Float64Array(m * m);
    this.kernel = new Float64Array(m * m);
    this.factor = new Float64Array(m * m);
    this.design = new Float64Array(m * meanCount);
    this.whiteDesign = new Float64Array(m * meanCount);
    this.whiteValues = new Float64Array(m);
    this.alpha = new Float64Array(m);
    this.column = new Float64Array(m);
    const step = (positions[m - 1]! - positions[0]!) / (m - 1);
    for (let i = 0; i < m; i += 1) {
      this.design[i * meanCount] = 1;
      this.design[i * meanCount + 1] = (positions[i]! - this.middle) / this.half;
      for (let j = 0; j <= i; j += 1) {
        const lag = (positions[i]! - positions[j]!) / step;
        const correlation = i === j ? 1 : (1 - whiteShare) * Math.max(0, 1 - lag / smoothedOver);
        this.noise[i * m + j] = correlation * relativeUnc[i]! * relativeUnc[j]!;
      }
    }
  }

  /** Works out one pair of scales; null outside their bounds or where the covariance is singular. */
  private at(logScale: number, logRatio: number): State | null {
    if (logScale < this.shortest || logScale > this.longest) return null;
    if (logRatio < lowestRatio || logRatio > highestRatio) return null;
    const { m, factor, noise, kernel, whiteDesign, whiteValues, design } = this;
    this.fillKernel(logScale);
    const ratio = exp(logRatio);
    let logDeterminant = 0;
    for (let i = 0; i < m; i += 1) {
      for (let j = 0; j <= i; j += 1) {
        let sum = kernel[i * m + j]! + ratio * noise[i * m + j]!;
        for (let k = 0; k < j; k += 1) sum -= factor[i * m + k]! * factor[j * m + k]!;
        if (i === j) {
          if (!(sum > 1e-13)) return null;
          factor[i * m + i] = Math.sqrt(sum);
          logDeterminant += log(sum);
        } else factor[i * m + j] = sum / factor[j * m + j]!;
      }
    }
    const { values } = this.window;
    let [a, b, c, d, e, yy] = [0, 0, 0, 0, 0, 0];
    for (let i = 0; i < m; i += 1) {
      let one = design[2 * i]!;
      let two = design[2 * i + 1]!;
      let y = values[i]!;
      for (let k = 0; k < i; k += 1) {
        const l = factor[i * m + k]!;
        one -= l * whiteDesign[2 * k]!;
        two -= l * whiteDesign[2 * k + 1]!;
        y -= l * whiteValues[k]!;
      }
      const pivot = factor[i * m + i]!;
      one /= pivot;
      two /= pivot;
      y /= pivot;
      whiteDesign[2 * i] = one;
      whiteDesign[2 * i + 1] = two;
      whiteValues[i] = y;
      a += one * one;
      b += one * two;
      c += two * two;
      d += one * y;
      e += two * y;
      yy += y * y;
    }
    const determinant = a * c - b * b;
    if (!(determinant > 0)) return null;
    this.normal[0] = c / determinant;
    this.normal[1] = -b / determinant;
    this.normal[2] = a / determinant;
    this.beta[0] = (c * d - b * e) / determinant;
    this.beta[1] = (a * e - b * d) / determinant;
    const rest = Math.max(yy - this.beta[0]! * d - this.beta[1]! * e, 1e-300);
    return { logScale, logRatio, determinants: logDeterminant + log(determinant), rest };
  }

  private fillKernel(logScale: number): void {
    if (logScale === this.kernelScale) return;
    this.kernelScale = logScale;
    const { m, kernel } = this;
    const { positions } = this.window;
    const scale = exp(logScale);
    const factor = 1 / (4 * scale * scale);
    for (let i = 0; i < m; i += 1) {
      for (let j = 0; j <= i; j += 1) {
        const distance = positions[i]! - positions[j]!;
        const r = 1 / (1 + factor * distance * distance);
        kernel[i * m + j] = r * r;
      }
    }
  }

  /** Evaluates a coarse grid of scales. */
  explore(): void {
    for (let a = 0; a <= scaleSteps; a += 1) {
      const logScale = this.shortest + (a / scaleSteps) * (this.longest - this.shortest);
      for (let logRatio = lowestRatio; logRatio <= highestRatio; logRatio += ratioStep) {
        const state = this.at(logScale, logRatio);
        if (state !== null) this.states.push(state);
      }
    }
    if (this.states.length === 0)
      throw new RangeError("The samples are not finite, or their uncertainties not above 0");
  }

  private logLikelihood(state: State, logVariance: number): number {
    const logSignal = logVariance - state.logRatio;
    return -0.5 * (state.determinants + (this.m - meanCount) * logSignal + state.rest * exp(-logSignal));
  }

  /** Restricted log-likelihood of the most probable of the explored scales for a noise variance. */
  likelihoodOfNoise(logVariance: number): number {
    let best = Number.NEGATIVE_INFINITY;
    for (const state of this.states) best = Math.max(best, this.logLikelihood(state, logVariance));
    return best;
  }

  /** Bounds of the noise variance that the explored scales speak of, logarithms. */
  noiseBounds(): [number, number] {
    let low = Number.POSITIVE_INFINITY;
    let high = Number.NEGATIVE_INFINITY;
    for (const { rest, logRatio } of this.states) {
      const own = log(rest / (this.m - meanCount)) + logRatio;
      if (own < low) low = own;
      if (own > high) high = own;
    }
    return [low, high];
  }

  /**
   * The maximum.
   *
   * @param shared   noise level that several bands agree on; null where this band is alone
   * @param drawnAt  where the smooth curve is wanted
   */
  findMaximum(shared: NoiseLevel | null, drawnAt: Float64Array): CurveMaximum | null {
    const prior =
      shared === null
        ? null
        : { logVariance: shared.logVariance, unc: Math.sqrt(shared.unc * shared.unc + noiseSpread * noiseSpread) };
    const level = noiseLevelOf([this], prior);
    const noise = level.logVariance;
    let best = this.states[0]!;
    let highest = Number.NEGATIVE_INFINITY;
    for (const state of this.states) {
      const value = this.logLikelihood(state, noise);
      if (value > highest) {
        highest = value;
        best = state;
      }
    }
    let scaleStep = (this.longest - this.shortest) / (2 * scaleSteps);
    let stepOfRatio = ratioStep / 2;
    for (let round = 0; round < 4; round += 1) {
      best = this.better(best, scaleStep, 0, noise);
      best = this.better(best, 0, stepOfRatio, noise);
      scaleStep /= 2;
      stepOfRatio /= 2;
    }
    const top = this.maximumAt(best, noise);
    if (top === null) return null;
    const peak = this.logLikelihood(best, noise);
    const [overScale, overRatio] = this.spreadAround(best, noise);
    let [sum, position, square] = [0, 0, 0];
    for (const a of averagedOver) {
      for (const b of averagedOver) {
        const state = this.at(best.logScale + a * overScale, best.logRatio + b * overRatio);
        const one = state === null ? null : this.maximumAt(state, noise);
        if (state === null || one === null) continue;
        const weight = exp(this.logLikelihood(state, noise) - peak);
        const off = one.position - top.position;
        sum += weight;
        position += weight * off;
        square += weight * (one.positionVariance + off * off);
      }
    }
    position /= sum;
    const fitted = this.curveAt(best, drawnAt);
    return {
      position: top.position + position,
      positionUnc: Math.sqrt(square / sum - position * position),
      degreesOfFreedom: Math.min(1e4, 2 / (level.unc * level.unc)),
      value: top.value,
      curvature: top.curvature,
      thirdDerivative: top.thirdDerivative,
      scale: exp(best.logScale),
      noise: exp(0.5 * noise),
      reducedChiSquare: (best.rest * exp(best.logRatio - noise)) / (this.m - meanCount),
      fitted,
    };
  }

  private better(best: State, scaleStep: number, ratioStep: number, noise: number): State {
    let found = best;
    for (const sign of [-1, 1]) {
      const state = this.at(best.logScale + sign * scaleStep, best.logRatio + sign * ratioStep);
      if (state !== null && this.logLikelihood(state, noise) > this.logLikelihood(found, noise)) found = state;
    }
    return found;
  }

  /** Standard deviations of both scales, from the curvature of the likelihood; at most 1. */
  private spreadAround(best: State, noise: number): [number, number] {
    const peak = this.logLikelihood(best, noise);
    const spread = (scaleStep: number, stepOfRatio: number): number => {
      const drop = (sign: number): number => {
        const state = this.at(best.logScale + sign * scaleStep, best.logRatio + sign * stepOfRatio);
        return state === null ? NaN : Math.max(0, peak - this.logLikelihood(state, noise));
      };
      const low = drop(-1);
      const high = drop(1);
      const fall = low !== low ? high : high !== high ? low : (low + high) / 2;
      // Log-likelihood falls by a half at one standard deviation of a parabola.
      return fall > 0 ? Math.min(1, (scaleStep + stepOfRatio) / Math.sqrt(2 * fall)) : 1;
    };
    return [spread(0.15, 0), spread(0, 0.4)];
  }

  /** Must follow `at` of the same state. */
  private solveAlpha(): void {
    const { m, factor, alpha, whiteDesign, whiteValues, beta } = this;
    for (let i = m - 1; i >= 0; i -= 1) {
      let sum = whiteValues[i]! - beta[0]! * whiteDesign[2 * i]! - beta[1]! * whiteDesign[2 * i + 1]!;
      for (let k = i + 1; k < m; k += 1) sum -= factor[k * m + i]! * alpha[k]!;
      alpha[i] = sum / factor[i * m + i]!;
    }
  }

  private derivativesAt(x: number): { value: number; first: number; second: number; third: number } {
    const { m, alpha, beta, middle, half } = this;
    const { positions } = this.window;
    const scale = exp(this.kernelScale);
    const inverse = 1 / (scale * scale);
    let value = beta[0]! + (beta[1]! * (x - middle)) / half;
    let first = beta[1]! / half;
    let second = 0;
    let third = 0;
    for (let i = 0; i < m; i += 1) {
      const d = x - positions[i]!;
      const u = d * inverse;
      const r = 1 / (1 + 0.25 * d * u);
      const k = alpha[i]! * r * r;
      value += k;
      first -= u * r * k;
      second += (1.5 * u * u * r - inverse) * r * k;
      third += u * r * r * k * (4.5 * inverse - 3 * u * u * r);
    }
    return { value, first, second, third };
  }

  /** The highest point between `from` and `to`; null where it lies on their edge. */
  private maximumAt(state: State, logVariance: number) {
    if (this.at(state.logScale, state.logRatio) === null) return null;
    this.solveAlpha();
    const { from, to } = this.window;
    const parts = 64;
    let at = 0;
    let highest = Number.NEGATIVE_INFINITY;
    for (let k = 0; k <= parts; k += 1) {
      const { value } = this.derivativesAt(from + (k / parts) * (to - from));
      if (value > highest) {
        highest = value;
        at = k;
      }
    }
    if (at === 0 || at === parts) return null;
    let low = from + ((at - 1) / parts) * (to - from);
    let high = from + ((at + 1) / parts) * (to - from);
    let x = (low + high) / 2;
    let here = this.derivativesAt(x);
    for (let step = 0; step < 40; step += 1) {
      if (here.first > 0) low = x;
      else high = x;
      const newton = here.second < 0 ? x - here.first / here.second : NaN;
      const next = newton > low && newton < high ? newton : (low + high) / 2;
      const moved = Math.abs(next - x);
      x = next;
      here = this.derivativesAt(x);
      if (moved < 1e-9 * (to - from)) break;
    }
    if (!(here.second < 0)) return null;
    const slopeVariance = this.slopeVarianceAt(x) * exp(logVariance - state.logRatio);
    return {
      position: x,
      positionVariance: slopeVariance / (here.second * here.second),
      value: here.value,
      curvature: here.second,
      thirdDerivative: here.third,
    };
  }

  /** Posterior variance of the derivative at x over s². */
  private slopeVarianceAt(x: number): number {
    const { m, factor, column, whiteDesign, half, normal } = this;
    const { positions } = this.window;
    const scale = exp(this.kernelScale);
    const inverse = 1 / (scale * scale);
    let square = 0;
    let one = 0;
    let two = 1 / half;
    for (let i = 0; i < m; i += 1) {
      const d = x - positions[i]!;
      const r = 1 / (1 + 0.25 * d * d * inverse);
      let sum = -d * inverse * r * r * r;
      for (let k = 0; k < i; k += 1) sum -= factor[i * m + k]! * column[k]!;
      column[i] = sum / factor[i * m + i]!;
      square += column[i]! * column[i]!;
      one -= column[i]! * whiteDesign[2 * i]!;
      two -= column[i]! * whiteDesign[2 * i + 1]!;
    }
    const mean = one * one * normal[0]! + 2 * one * two * normal[1]! + two * two * normal[2]!;
    return Math.max(0, inverse - square) + mean;
  }

  private curveAt(state: State, drawnAt: Float64Array): Float64Array {
    this.at(state.logScale, state.logRatio);
    this.solveAlpha();
    return drawnAt.map((x) => this.derivativesAt(x).value);
  }
}

/**
 * Noise variance that several curves speak for together.
 *
 * @param prior  what is known of it beforehand
 */
export function noiseLevelOf(curves: readonly CurveProcess[], prior: NoiseLevel | null): NoiseLevel {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const curve of curves) {
    const [from, to] = curve.noiseBounds();
    if (from < low) low = from;
    if (to > high) high = to;
  }
  if (prior !== null) {
    low = Math.max(low, prior.logVariance - 5 * prior.unc);
    high = Math.min(high, prior.logVariance + 5 * prior.unc);
    if (!(low < high)) return prior;
  }
  for (let round = 0; ; round += 1) {
    const step = (high - low) / (noiseCells - 1);
    const totals = new Float64Array(noiseCells);
    let best = 0;
    for (let k = 0; k < noiseCells; k += 1) {
      const at = low + k * step;
      let total = 0;
      for (const curve of curves) total += curve.likelihoodOfNoise(at);
      if (prior !== null)
        total -= (0.5 * (at - prior.logVariance) * (at - prior.logVariance)) / (prior.unc * prior.unc);
      totals[k] = total;
      if (total > totals[best]!) best = k;
    }
    let [sum, mean, square] = [0, 0, 0];
    for (let k = 0; k < noiseCells; k += 1) {
      const weight = exp(totals[k]! - totals[best]!);
      const off = (k - best) * step;
      sum += weight;
      mean += weight * off;
      square += weight * off * off;
    }
    mean /= sum;
    const unc = Math.sqrt(Math.max(square / sum - mean * mean, step * step));
    const centre = low + best * step + mean;
    if (round === 1 || unc > 3 * step) return { logVariance: centre, unc };
    low = centre - 6 * unc;
    high = centre + 6 * unc;
  }
}
