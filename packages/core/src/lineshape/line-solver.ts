/**
 * The inside of a line fit: model, derivatives and the search for the minimum, in memory that is used again for every fit.
 *
 * Parameters  centre, width scale and area of each line; the shape parameter that all lines of the window share (where the shape has
 *             one and it is not held); background at the window's middle and its slope
 * Search      Levenberg-Marquardt: Gauss-Newton steps, damped by the diagonal of the normal matrix when a step promises more than it
 *             keeps or leaves the region where the linear model can be trusted (centre within 0.7 FWHM, width within a factor of 2;
 *             damping after the gain ratio: H. B. Nielsen, IMM-REP-1999-05, Technical University of Denmark)
 * Solved      Cholesky's factor of the normal matrix scaled to a unit diagonal; a line window's condition is far below what that needs
 * Stops       when the next step is below a twentieth of a joint standard error; that step is taken, so that what is left is its square
 */
import type { LineWindow } from "./fit-line.ts";
import { gaussian, gaussianIntegral, SQRT_TWO_PI } from "./gaussian.ts";
import type { Profile } from "./profile.ts";

export const PER_LINE = 3;
const mostParameters = 40;
const LEAST_STEP = 0.05;
const MOST_WIDTH_RATIO = 2;
const MOST_SHIFT = 0.7;

/** Gauss-Legendre over a pixel: five nodes for a narrow line, three where the line is three pixels wide or more. */
const FIVE_NODES = [-0.453089922969332, -0.2692346550528416, 0, 0.2692346550528416, 0.453089922969332];
const FIVE_WEIGHTS = [
  0.1184634425280945, 0.2393143352496832, 0.2844444444444444, 0.2393143352496832, 0.1184634425280945,
];
const THREE_NODES = [-0.3872983346207417, 0, 0.3872983346207417];
const THREE_WEIGHTS = [0.2777777777777778, 0.4444444444444444, 0.2777777777777778];
const BROAD_PIXELS = 3;

export type SearchOutcome = "converged" | "iterations" | "singular";

/** What is known of the shape parameter beforehand; `unc` 0 holds it. */
export interface KnownParameter {
  value: number;
  unc: number;
}

export class LineSolver {
  /** Samples, parameters and lines of the window at hand. */
  m = 0;
  n = 0;
  lineCount = 0;
  /** Room for one column. */
  stride = 0;
  /** Derivatives of the residuals, column by column, over the uncertainties. */
  columns = new Float64Array(0);
  /** (observed - fitted) / uncertainty. */
  residuals = new Float64Array(0);
  readonly parameters = new Float64Array(mostParameters);
  covariance: Float64Array = new Float64Array(0);
  chiSquare = 0;
  iterations = 0;
  windowCentre = 0;
  /** Column of the shape parameter, -1 where there is none or it is held. */
  shapeColumn = -1;
  /** True where the shape parameter stands at its limit: then it has no variance. */
  isAtLimit = false;
  profile!: Profile;
  readonly prior = new Float64Array(mostParameters);

  private window!: LineWindow;
  private weights = new Float64Array(0);
  private startChiSquare = 0;
  private held = 0;
  private priorValue = 0;
  private first = 0;
  private last = 0;
  private leastWidth = 0;
  private mostWidth = 0;
  private readonly trial = new Float64Array(mostParameters);
  private readonly gradient = new Float64Array(mostParameters);
  private readonly scale = new Float64Array(mostParameters);
  private readonly step = new Float64Array(mostParameters);
  private normal = new Float64Array(mostParameters * mostParameters);
  private factor = new Float64Array(mostParameters * mostParameters);
  private readonly lower = new Float64Array(3);
  private readonly upper = new Float64Array(3);

  /** @param known  of the shape parameter; null leaves it free from `profile.usual` on */
  load(window: LineWindow, lineCount: number, profile: Profile, known: KnownParameter | null): void {
    const { positions, countsUnc } = window;
    const m = positions.length;
    this.window = window;
    this.profile = profile;
    this.m = m;
    this.lineCount = lineCount;
    const isFree = profile.hasParameter && (known === null || known.unc > 0);
    this.n = PER_LINE * lineCount + (isFree ? 1 : 0) + 2;
    if (this.n > mostParameters) throw new RangeError(`At most ${mostParameters} parameters in one fit`);
    this.shapeColumn = isFree ? PER_LINE * lineCount : -1;
    this.isAtLimit = false;
    this.held = known === null ? profile.usual : Math.min(Math.max(known.value, profile.least), profile.most);
    this.prior.fill(0);
    if (isFree && known !== null) {
      this.prior[this.shapeColumn] = 1 / (known.unc * known.unc);
      this.priorValue = known.value;
    }
    if (this.stride < m) {
      this.stride = Math.max(64, 2 * m);
      this.columns = new Float64Array(this.stride * mostParameters);
      this.residuals = new Float64Array(this.stride);
      this.weights = new Float64Array(this.stride);
    }
    this.windowCentre = 0.5 * (positions[0]! + positions[m - 1]!);
    let spacing = Infinity;
    for (let i = 1; i < m; i++) spacing = Math.min(spacing, positions[i]! - positions[i - 1]!);
    const constant = this.n - 2;
    for (let i = 0; i < m; i++) {
      const weight = 1 / countsUnc[i]!;
      this.weights[i] = weight;
      this.columns[constant * this.stride + i] = weight;
      this.columns[(constant + 1) * this.stride + i] = weight * (positions[i]! - this.windowCentre);
    }
    // Narrower than this, a line falls between samples and its width cannot be known.
    this.leastWidth = 0.28 * spacing * profile.widthPerFwhm;
    this.mostWidth = 4.7 * (positions[m - 1]! - positions[0]!) * profile.widthPerFwhm;
    this.first = positions[0]! - spacing;
    this.last = positions[m - 1]! + spacing;
  }

  /** Brings a start into the limits; the background is the mean of what the lines leave over. */
  start(centres: readonly number[], fwhms: readonly number[], heights: readonly number[]): void {
    const p = this.parameters;
    for (let k = 0; k < this.lineCount; k++) {
      const width = fwhms[k]! * this.profile.widthPerFwhm;
      p[PER_LINE * k] = Math.min(Math.max(centres[k]!, this.first), this.last);
      p[PER_LINE * k + 1] = Math.min(Math.max(width, 2 * this.leastWidth), 0.5 * this.mostWidth);
      p[PER_LINE * k + 2] = 1.07 * heights[k]! * fwhms[k]!;
    }
    if (this.shapeColumn >= 0) p[this.shapeColumn] = this.held;
    p[this.n - 2] = 0;
    p[this.n - 1] = 0;
    this.startChiSquare = this.evaluate(p);
    let sum = 0;
    for (let i = 0; i < this.m; i++) sum += this.residuals[i]! / this.weights[i]!;
    const level = sum / this.m;
    p[this.n - 2] = level;
    // The background moves the residuals alone, not the derivatives.
    for (let i = 0; i < this.m; i++) {
      const before = this.residuals[i]!;
      const after = before - level * this.weights[i]!;
      this.startChiSquare += after * after - before * before;
      this.residuals[i] = after;
    }
  }

  search(mostIterations: number): SearchOutcome {
    const { n, parameters: p, trial, step, gradient } = this;
    let chi = this.startChiSquare;
    this.buildNormal(p);
    let damping = 0;
    let growth = 2;
    let isFresh = true;
    for (this.iterations = 1; this.iterations <= mostIterations; this.iterations++) {
      if (!this.solve(damping)) {
        damping = damping === 0 ? 1e-4 : 10 * damping;
        if (damping > 1e10) return "singular";
        continue;
      }
      let slope = 0;
      let curvature = 0;
      for (let a = 0; a < n; a++) {
        slope += gradient[a]! * step[a]!;
        curvature += step[a]! * step[a]! * this.normal[a * n + a]!;
      }
      if (damping === 0 && slope <= LEAST_STEP * LEAST_STEP && this.isAllowed(p, step)) {
        if (!isFresh) this.evaluate(p);
        for (let a = 0; a < n; a++) p[a] = p[a]! + step[a]!;
        this.clip(p);
        this.chiSquare = Math.max(0, chi - slope);
        this.moveResiduals();
        return this.invert() ? "converged" : "singular";
      }
      if (!this.isWithinTrust(p, step) || !this.isAllowed(p, step)) {
        damping = damping === 0 ? 1e-3 : 4 * damping;
        if (damping > 1e12) return "singular";
        continue;
      }
      for (let a = 0; a < n; a++) trial[a] = p[a]! + step[a]!;
      this.clip(trial);
      const trialChi = this.evaluate(trial);
      const promised = slope + damping * curvature;
      const ratio = promised > 0 ? (chi - trialChi) / promised : -1;
      isFresh = ratio > 1e-4;
      if (isFresh) {
        for (let a = 0; a < n; a++) p[a] = trial[a]!;
        chi = trialChi;
        this.buildNormal(p);
        const t = 2 * ratio - 1;
        damping *= Math.max(1 / 3, 1 - t * t * t);
        if (damping < 1e-5 || (damping < 0.05 && ratio > 0.9)) damping = 0;
        growth = 2;
      } else {
        // What is promised is below what the sum of squares can show.
        if (promised < 1e-13 * chi) {
          this.chiSquare = chi;
          this.evaluate(p);
          return this.invert() ? "converged" : "singular";
        }
        damping = Math.max(damping, 1e-3) * growth;
        growth *= 2;
        if (damping > 1e12) return "singular";
      }
    }
    this.chiSquare = chi;
    return "iterations";
  }

  /** The last step is so short that the residuals follow it in a straight line. */
  private moveResiduals(): void {
    const { m, n, columns, stride, residuals, step } = this;
    for (let a = 0; a < n; a++) {
      const by = step[a]!;
      const column = a * stride;
      for (let i = 0; i < m; i++) residuals[i] = residuals[i]! - by * columns[column + i]!;
    }
  }

  private clip(p: Float64Array): void {
    const at = this.shapeColumn;
    if (at >= 0) p[at] = Math.min(Math.max(p[at]!, this.profile.least), this.profile.most);
  }

  private isAllowed(p: Float64Array, step: Float64Array): boolean {
    for (let at = 0; at < PER_LINE * this.lineCount; at += PER_LINE) {
      const centre = p[at]! + step[at]!;
      const width = p[at + 1]! + step[at + 1]!;
      if (!(centre >= this.first && centre <= this.last && width >= this.leastWidth && width <= this.mostWidth))
        return false;
    }
    return true;
  }

  private isWithinTrust(p: Float64Array, step: Float64Array): boolean {
    for (let at = 0; at < PER_LINE * this.lineCount; at += PER_LINE) {
      const width = p[at + 1]!;
      const ratio = (width + step[at + 1]!) / width;
      if (!(Math.abs(step[at]!) <= (MOST_SHIFT * width) / this.profile.widthPerFwhm)) return false;
      if (!(ratio <= MOST_WIDTH_RATIO && ratio >= 1 / MOST_WIDTH_RATIO)) return false;
    }
    return true;
  }

  /** Fills residuals and columns. @returns chi-squared, what is known of the shape parameter included */
  evaluate(p: Float64Array): number {
    const { m, n, window, weights, residuals, columns, stride, shapeColumn } = this;
    const { positions, counts, pixelIntegrated } = window;
    const background = p[n - 2]!;
    const slope = p[n - 1]!;
    for (let i = 0; i < m; i++) {
      residuals[i] = (counts[i]! - background - slope * (positions[i]! - this.windowCentre)) * weights[i]!;
    }
    if (this.profile.hasParameter) this.profile.setParameter(shapeColumn >= 0 ? p[shapeColumn]! : this.held);
    if (shapeColumn >= 0) columns.fill(0, shapeColumn * stride, shapeColumn * stride + m);
    for (let k = 0; k < this.lineCount; k++) {
      const at = PER_LINE * k;
      // A learned shape holds the pixel already.
      if (!pixelIntegrated || this.profile.name === "empirical") this.addPoints(p, at);
      else if (this.profile.name === "gaussian") this.addGaussianPixels(p, at);
      else if (this.profile.hasClosedIntegral) this.addPixels(p, at);
      else this.addQuadraturePixels(p, at);
    }
    let chi = 0;
    for (let i = 0; i < m; i++) chi += residuals[i]! * residuals[i]!;
    if (shapeColumn >= 0) {
      const off = p[shapeColumn]! - this.priorValue;
      chi += this.prior[shapeColumn]! * off * off;
    }
    return chi;
  }

  private addGaussianPixels(p: Float64Array, at: number): void {
    const { m, weights, residuals, columns, stride } = this;
    const { positions } = this.window;
    const centre = p[at]!;
    const inverse = 1 / p[at + 1]!;
    const area = p[at + 2]! / SQRT_TWO_PI;
    const perWidth = area * inverse;
    const centreAt = at * stride;
    const widthAt = centreAt + stride;
    const areaAt = widthAt + stride;
    // The upper edge of a pixel is the lower edge of the next.
    let edge = NaN;
    let u = 0;
    let g = 0;
    let integral = 0;
    for (let i = 0; i < m; i++) {
      const lower = positions[i]! - 0.5;
      if (lower !== edge) {
        u = (lower - centre) * inverse;
        g = gaussian(u);
        integral = gaussianIntegral(u);
      }
      edge = positions[i]! + 0.5;
      const nextU = (edge - centre) * inverse;
      const nextG = gaussian(nextU);
      const nextIntegral = gaussianIntegral(nextU);
      const weight = weights[i]!;
      const share = (nextIntegral - integral) * weight;
      residuals[i] = residuals[i]! - area * share;
      columns[centreAt + i] = perWidth * (g - nextG) * weight;
      columns[widthAt + i] = perWidth * (u * g - nextU * nextG) * weight;
      columns[areaAt + i] = share / SQRT_TWO_PI;
      u = nextU;
      g = nextG;
      integral = nextIntegral;
    }
  }

  private addPixels(p: Float64Array, at: number): void {
    const { m, weights, residuals, columns, stride, profile, shapeColumn } = this;
    const { positions } = this.window;
    const centre = p[at]!;
    const inverse = 1 / p[at + 1]!;
    const area = p[at + 2]!;
    let { lower, upper } = this;
    let edge = NaN;
    let u = 0;
    for (let i = 0; i < m; i++) {
      const from = positions[i]! - 0.5;
      if (from !== edge) {
        u = (from - centre) * inverse;
        profile.edge(u, lower);
      }
      edge = positions[i]! + 0.5;
      const nextU = (edge - centre) * inverse;
      profile.edge(nextU, upper);
      const weight = weights[i]!;
      const share = (upper[0]! - lower[0]!) * weight;
      const perWidth = area * inverse * weight;
      residuals[i] = residuals[i]! - area * share;
      columns[at * stride + i] = perWidth * (lower[1]! - upper[1]!);
      columns[(at + 1) * stride + i] = perWidth * (u * lower[1]! - nextU * upper[1]!);
      columns[(at + 2) * stride + i] = share;
      if (shapeColumn >= 0) {
        const cell = shapeColumn * stride + i;
        columns[cell] = columns[cell]! + area * weight * (upper[2]! - lower[2]!);
      }
      u = nextU;
      const swap = lower;
      lower = upper;
      upper = swap;
    }
  }

  private addQuadraturePixels(p: Float64Array, at: number): void {
    const { m } = this;
    const { positions } = this.window;
    const centre = p[at]!;
    const inverse = 1 / p[at + 1]!;
    const values = this.lower;
    const isBroad = p[at + 1]! >= BROAD_PIXELS * this.profile.widthPerFwhm;
    const nodes = isBroad ? THREE_NODES : FIVE_NODES;
    const weights = isBroad ? THREE_WEIGHTS : FIVE_WEIGHTS;
    for (let i = 0; i < m; i++) {
      let g = 0;
      let slope = 0;
      let moment = 0;
      let perShape = 0;
      for (let k = 0; k < nodes.length; k++) {
        const u = (positions[i]! + nodes[k]! - centre) * inverse;
        this.profile.point(u, values);
        const weight = weights[k]!;
        g += weight * values[0]!;
        slope += weight * values[1]!;
        moment += weight * u * values[1]!;
        perShape += weight * values[2]!;
      }
      this.setSample(p, at, i, g, slope, moment, perShape);
    }
  }

  private addPoints(p: Float64Array, at: number): void {
    const { m } = this;
    const { positions } = this.window;
    const centre = p[at]!;
    const inverse = 1 / p[at + 1]!;
    const values = this.lower;
    for (let i = 0; i < m; i++) {
      const u = (positions[i]! - centre) * inverse;
      this.profile.point(u, values);
      this.setSample(p, at, i, values[0]!, values[1]!, u * values[1]!, values[2]!);
    }
  }

  /** One sample from the density, its slope, u times that, and its derivative by the shape parameter. */
  private setSample(
    p: Float64Array,
    at: number,
    i: number,
    g: number,
    slope: number,
    moment: number,
    perShape: number,
  ): void {
    const { residuals, columns, stride, shapeColumn } = this;
    const inverse = 1 / p[at + 1]!;
    const scaled = p[at + 2]! * inverse * this.weights[i]!;
    residuals[i] = residuals[i]! - scaled * g;
    columns[at * stride + i] = -scaled * inverse * slope;
    columns[(at + 1) * stride + i] = -scaled * inverse * (g + moment);
    columns[(at + 2) * stride + i] = inverse * this.weights[i]! * g;
    if (shapeColumn >= 0) {
      const cell = shapeColumn * stride + i;
      columns[cell] = columns[cell]! + scaled * perShape;
    }
  }

  /** Normal matrix (lower triangle) and gradient at the parameters whose columns are at hand. */
  private buildNormal(p: Float64Array): void {
    const { m, n, columns, stride, residuals, normal, gradient, shapeColumn } = this;
    for (let a = 0; a < n; a++) {
      const columnA = a * stride;
      let dot = 0;
      for (let i = 0; i < m; i++) dot += columns[columnA + i]! * residuals[i]!;
      gradient[a] = dot;
      for (let b = 0; b <= a; b++) {
        const columnB = b * stride;
        let sum = 0;
        for (let i = 0; i < m; i++) sum += columns[columnA + i]! * columns[columnB + i]!;
        normal[a * n + b] = sum;
      }
    }
    if (shapeColumn < 0) return;
    const cell = shapeColumn * n + shapeColumn;
    normal[cell] = normal[cell]! + this.prior[shapeColumn]!;
    const value = p[shapeColumn]!;
    gradient[shapeColumn] = gradient[shapeColumn]! + this.prior[shapeColumn]! * (this.priorValue - value);
    // At its limit, and drawn outwards: the parameter stays where it is.
    const outwards = gradient[shapeColumn]!;
    this.isAtLimit = (value <= this.profile.least && outwards <= 0) || (value >= this.profile.most && outwards >= 0);
    if (!this.isAtLimit) return;
    for (let b = 0; b < n; b++) {
      if (b < shapeColumn) normal[shapeColumn * n + b] = 0;
      else if (b > shapeColumn) normal[b * n + shapeColumn] = 0;
    }
    normal[cell] = 1;
    gradient[shapeColumn] = 0;
  }

  /** Cholesky's factor of the scaled, damped normal matrix. @returns false where it has none */
  private factorise(damping: number): boolean {
    const { n, normal, factor, scale } = this;
    for (let a = 0; a < n; a++) {
      const diagonal = normal[a * n + a]!;
      if (!(diagonal > 0 && diagonal < Infinity)) return false;
      scale[a] = 1 / Math.sqrt(diagonal);
    }
    for (let a = 0; a < n; a++) {
      for (let b = 0; b <= a; b++) {
        let sum = b === a ? 1 + damping : normal[a * n + b]! * scale[a]! * scale[b]!;
        for (let c = 0; c < b; c++) sum -= factor[a * n + c]! * factor[b * n + c]!;
        if (b < a) factor[a * n + b] = sum * factor[b * n + b]!;
        else if (sum > 1e-14) factor[a * n + a] = 1 / Math.sqrt(sum);
        else return false;
      }
    }
    return true;
  }

  private solve(damping: number): boolean {
    if (!this.factorise(damping)) return false;
    const { n, factor, scale, step, gradient } = this;
    for (let a = 0; a < n; a++) {
      let sum = gradient[a]! * scale[a]!;
      for (let c = 0; c < a; c++) sum -= factor[a * n + c]! * step[c]!;
      step[a] = sum * factor[a * n + a]!;
    }
    for (let a = n - 1; a >= 0; a--) {
      let sum = step[a]!;
      for (let c = a + 1; c < n; c++) sum -= factor[c * n + a]! * step[c]!;
      step[a] = sum * factor[a * n + a]!;
    }
    for (let a = 0; a < n; a++) step[a] = step[a]! * scale[a]!;
    return true;
  }

  /** Covariance of all parameters, row-major; a shape parameter at its limit has none. */
  private invert(): boolean {
    if (!this.factorise(0)) return false;
    const { n, factor, scale } = this;
    const inverse = new Float64Array(n * n);
    // Inverse of the factor below the diagonal, then its product with its own transpose.
    const t = this.normalRoom(n);
    for (let b = 0; b < n; b++) {
      t[b * n + b] = factor[b * n + b]!;
      for (let a = b + 1; a < n; a++) {
        let sum = 0;
        for (let c = b; c < a; c++) sum -= factor[a * n + c]! * t[c * n + b]!;
        t[a * n + b] = sum * factor[a * n + a]!;
      }
    }
    for (let a = 0; a < n; a++) {
      for (let b = 0; b <= a; b++) {
        let sum = 0;
        for (let c = a; c < n; c++) sum += t[c * n + a]! * t[c * n + b]!;
        inverse[a * n + b] = sum * scale[a]! * scale[b]!;
        inverse[b * n + a] = inverse[a * n + b]!;
      }
    }
    if (this.isAtLimit) inverse[this.shapeColumn * n + this.shapeColumn] = 0;
    this.covariance = inverse;
    return true;
  }

  private inverseRoom = new Float64Array(0);
  private normalRoom(n: number): Float64Array {
    if (this.inverseRoom.length < n * n) this.inverseRoom = new Float64Array(mostParameters * mostParameters);
    return this.inverseRoom;
  }

  /** The shape parameter as fitted or held. */
  shapeParameter(): number {
    return this.shapeColumn >= 0 ? this.parameters[this.shapeColumn]! : this.held;
  }

  isLineAllowed(k: number): "yes" | "centre-outside-window" | "not-a-line" {
    const { positions } = this.window;
    const centre = this.parameters[PER_LINE * k]!;
    const width = this.parameters[PER_LINE * k + 1]!;
    if (!(centre >= positions[0]! && centre <= positions[this.m - 1]!)) return "centre-outside-window";
    const span = positions[this.m - 1]! - positions[0]!;
    const isWide = width >= span * this.profile.widthPerFwhm * 2.3548200450309493;
    return !(this.parameters[PER_LINE * k + 2]! > 0) || width <= 1.01 * this.leastWidth || isWide
      ? "not-a-line"
      : "yes";
  }

  /** The fitted curve at each sample, counts, from the residuals at hand: call after `search`, before another `load`. */
  fittedCounts(): Float64Array {
    const values = new Float64Array(this.m);
    for (let i = 0; i < this.m; i++) values[i] = this.window.counts[i]! - this.residuals[i]! / this.weights[i]!;
    return values;
  }
}
