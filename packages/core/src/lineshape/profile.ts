/**
 * Line shapes: their density, the integral of it, and the derivatives a fit needs.
 *
 * Every shape is a density of unit area in the reduced distance u = (x - centre) / width, with at most one shape parameter s. The
 * centre is the centre of symmetry; of the exponentially modified Gaussian it is the first moment, so that a fit gives the position and
 * its uncertainty directly, the tail's share included. With G the integral of g from -infinity the mean over a pixel is a difference of G.
 *
 * shape         width means           s                                              range of s    mean over a pixel
 * gaussian      standard deviation    none                                                         closed (erf)
 * lorentzian    half width            none                                                         closed (atan)
 * pseudo-voigt  FWHM                  share of the Lorentzian, both parts of one FWHM  0 to 1       closed
 * voigt         FWHM, approximate     Lorentzian's FWHM over it                      0 to 0.98     Gauss-Legendre, five nodes
 * exponentially standard deviation    cube of tail / standard deviation: half the    -0.95 to 0.95 closed (erfcx)
 *  -modified    of the whole shape    skewness; negative for a tail to lower x
 * box           standard deviation    fourth power of the box's standard deviation   0 to 0.98     closed (erf)
 *               of the whole shape    over it: the flatness
 * empirical     FWHM                  none                                                         held by what is learned
 *
 * The parameters of the tail and the box are powers because the curve depends on exactly that power where the tail or the box is small:
 * the derivative stays finite and the uncertainty honest there.
 * Sources  exponentially modified Gaussian: E. Grushka, Anal. Chem. 44 (1972) 1733, in the scaled form that neither overflows nor
 *          cancels; Voigt: w(z) of `numeric/faddeeva.ts`, its FWHM after J. J. Olivero, R. L. Longbothum, JQSRT 17 (1977) 233 (as the
 *          scale only; the FWHM that is handed on is found on the curve); small tail or box: Edgeworth's series (DLMF 18.5)
 */
import type { LineShapeName } from "../analysis/types.ts";
import { atan, erfcx, pow } from "../numeric/elementary.ts";
import { voigtWithGradient } from "../numeric/faddeeva.ts";
import { FWHM_PER_STD, gaussian, gaussianIntegral, SQRT_TWO_PI } from "./gaussian.ts";

/** What a shape leaves behind: at an edge G, g and dG/ds; at a point g, dg/du and dg/ds. */
export interface Profile {
  readonly name: LineShapeName;
  readonly hasParameter: boolean;
  /** Limits of the shape parameter. */
  readonly least: number;
  readonly most: number;
  /** A value to start from where nothing is known. */
  readonly usual: number;
  /** False: the mean over a pixel is taken by quadrature over `point`. */
  readonly hasClosedIntegral: boolean;
  /** Width scale of a line with this FWHM. */
  readonly widthPerFwhm: number;
  /** Sets the shape parameter for the calls that follow. */
  setParameter(s: number): void;
  edge(u: number, out: Float64Array): void;
  point(u: number, out: Float64Array): void;
}

const DENSITY = 1 / SQRT_TWO_PI;
const INVERSE_PI = 0.3183098861837907;
const SQRT_HALF = 0.7071067811865476;
const SQRT_HALF_PI = 1.2533141373155003;

/** Standard normal distribution function. */
function normalIntegral(z: number): number {
  return 0.5 + DENSITY * gaussianIntegral(z);
}

/** What shapes with nothing but a width have in common. */
export abstract class WithoutParameter implements Profile {
  abstract readonly name: LineShapeName;
  readonly hasParameter = false;
  readonly least = 0;
  readonly most = 0;
  readonly usual = 0;
  abstract readonly hasClosedIntegral: boolean;
  abstract readonly widthPerFwhm: number;
  setParameter(): void {}
  abstract edge(u: number, out: Float64Array): void;
  abstract point(u: number, out: Float64Array): void;
}

class Gaussian extends WithoutParameter {
  readonly name = "gaussian";
  readonly hasClosedIntegral = true;
  readonly widthPerFwhm = 1 / FWHM_PER_STD;
  edge(u: number, out: Float64Array): void {
    out[0] = DENSITY * gaussianIntegral(u);
    out[1] = DENSITY * gaussian(u);
  }
  point(u: number, out: Float64Array): void {
    const g = DENSITY * gaussian(u);
    out[0] = g;
    out[1] = -u * g;
  }
}

class Lorentzian extends WithoutParameter {
  readonly name = "lorentzian";
  readonly hasClosedIntegral = true;
  readonly widthPerFwhm = 0.5;
  edge(u: number, out: Float64Array): void {
    out[0] = INVERSE_PI * atan(u);
    out[1] = INVERSE_PI / (1 + u * u);
  }
  point(u: number, out: Float64Array): void {
    const inverse = 1 / (1 + u * u);
    out[0] = INVERSE_PI * inverse;
    out[1] = -2 * u * INVERSE_PI * inverse * inverse;
  }
}

class PseudoVoigt implements Profile {
  readonly name = "pseudo-voigt";
  readonly hasParameter = true;
  readonly least = 0;
  readonly most = 1;
  readonly usual = 0.3;
  readonly hasClosedIntegral = true;
  readonly widthPerFwhm = 1;
  private share = 0;
  setParameter(s: number): void {
    this.share = s;
  }
  edge(u: number, out: Float64Array): void {
    const z = FWHM_PER_STD * u;
    const normal = DENSITY * gaussianIntegral(z);
    const wide = INVERSE_PI * atan(2 * u);
    out[0] = normal + this.share * (wide - normal);
    out[1] = (1 - this.share) * FWHM_PER_STD * DENSITY * gaussian(z) + (this.share * 2 * INVERSE_PI) / (1 + 4 * u * u);
    out[2] = wide - normal;
  }
  point(u: number, out: Float64Array): void {
    const z = FWHM_PER_STD * u;
    const normal = FWHM_PER_STD * DENSITY * gaussian(z);
    const inverse = 1 / (1 + 4 * u * u);
    const wide = 2 * INVERSE_PI * inverse;
    out[0] = normal + this.share * (wide - normal);
    out[1] = -(1 - this.share) * z * FWHM_PER_STD * normal - this.share * 8 * u * inverse * wide;
    out[2] = wide - normal;
  }
}

const LORENTZ_LINEAR = 0.5346;
const LORENTZ_SQUARE = 0.2166;

class Voigt implements Profile {
  readonly name = "voigt";
  readonly hasParameter = true;
  readonly least = 0;
  readonly most = 0.98;
  readonly usual = 0.2;
  readonly hasClosedIntegral = false;
  readonly widthPerFwhm = 1;
  private inverseStd = 1;
  private y = 0;
  private relativeStdSlope = 0;
  private readonly w = new Float64Array(4);
  setParameter(s: number): void {
    const free = 1 - LORENTZ_LINEAR * s;
    const gauss = Math.sqrt(free * free - LORENTZ_SQUARE * s * s);
    const std = gauss / FWHM_PER_STD;
    this.inverseStd = 1 / std;
    this.y = (0.5 * s * SQRT_HALF) / std;
    this.relativeStdSlope = -(LORENTZ_LINEAR * free + LORENTZ_SQUARE * s) / (gauss * gauss);
  }
  edge(): void {
    throw new RangeError("The Voigt shape has no closed integral");
  }
  point(u: number, out: Float64Array): void {
    const { inverseStd, y, w } = this;
    const x = u * inverseStd * SQRT_HALF;
    voigtWithGradient(x, y, w);
    const scale = DENSITY * inverseStd;
    out[0] = scale * w[0]!;
    out[1] = scale * inverseStd * SQRT_HALF * w[2]!;
    // d ln std / ds = r: x and y scale with 1 / std, y also with s.
    const r = this.relativeStdSlope;
    out[2] = scale * (-r * (w[0]! + x * w[2]! + y * w[3]!) + 0.5 * SQRT_HALF * inverseStd * w[3]!);
  }
}

/** Below this tail over standard deviation the Edgeworth series is as good: its error is of the fourth power. */
const SMALL_TAIL = 0.02;

class ExponentiallyModified implements Profile {
  readonly name = "exponentially-modified-gaussian";
  readonly hasParameter = true;
  readonly least = -0.95;
  readonly most = 0.95;
  readonly usual = 0.1;
  readonly hasClosedIntegral = true;
  readonly widthPerFwhm = 1 / FWHM_PER_STD;
  private sign = 1;
  private s = 0;
  private tail = 0;
  private std = 1;
  setParameter(s: number): void {
    this.s = s;
    this.sign = s < 0 ? -1 : 1;
    this.tail = pow(Math.abs(s), 1 / 3);
    this.std = Math.sqrt(Math.max(1 - this.tail * this.tail, 1e-4));
  }
  private isSmall(): boolean {
    return this.tail < SMALL_TAIL;
  }
  /** exp(k²/2 - kz) Phi(z - k) with k = std / tail, without overflow. */
  private tailPart(z: number, k: number): number {
    const y = (k - z) * SQRT_HALF;
    if (y >= 0) return DENSITY * gaussian(z) * SQRT_HALF_PI * erfcx(y);
    return gaussianOfSum(k, z) - DENSITY * gaussian(z) * SQRT_HALF_PI * erfcx(-y);
  }
  edge(at: number, out: Float64Array): void {
    if (this.isSmall()) {
      const g = DENSITY * gaussian(at);
      const he2 = at * at - 1;
      out[0] = 0.5 + DENSITY * gaussianIntegral(at) - (this.s / 3) * he2 * g;
      out[1] = g * (1 + (this.s / 3) * at * (at * at - 3));
      out[2] = (-he2 * g) / 3;
      return;
    }
    const { std, tail, sign } = this;
    const u = sign * at;
    const z = (u + tail) / std;
    const k = std / tail;
    const phi = DENSITY * gaussian(z);
    const q = this.tailPart(z, k);
    const whole = normalIntegral(z) - q;
    const perTail =
      k * q * (1 / std + ((u + tail) * tail) / (std * std * std)) + ((k - z) * q - phi) / (std * tail * tail);
    out[0] = sign > 0 ? whole : 1 - whole;
    out[1] = q / tail;
    // s = sign tail³: the mirrored integral changes its sign, and so does s.
    out[2] = perTail / (3 * tail * tail);
  }
  point(at: number, out: Float64Array): void {
    if (this.isSmall()) {
      const g = DENSITY * gaussian(at);
      const square = at * at;
      const he3 = at * (square - 3);
      out[0] = g * (1 + (this.s / 3) * he3);
      out[1] = g * (-at - (this.s / 3) * (square * square - 6 * square + 3));
      out[2] = (g * he3) / 3;
      return;
    }
    const { std, tail, sign } = this;
    const u = sign * at;
    const z = (u + tail) / std;
    const k = std / tail;
    const phi = DENSITY * gaussian(z);
    const q = this.tailPart(z, k);
    const zSlope = 1 / std + ((u + tail) * tail) / (std * std * std);
    const kSlope = -1 / (std * tail * tail);
    out[0] = q / tail;
    out[1] = (sign * (phi - k * q)) / (tail * std);
    const perTail = -q / (tail * tail) + ((phi - k * q) * zSlope + ((k - z) * q - phi) * kSlope) / tail;
    out[2] = (sign * perTail) / (3 * tail * tail);
  }
}

/** exp(k²/2 - kz) where z > k: 0 to 1, by two factors that the table of the Gaussian holds. */
function gaussianOfSum(k: number, z: number): number {
  // k²/2 - kz = -((z')² )/2 with z'² = k (2z - k) > 0.
  return gaussian(Math.sqrt(k * (2 * z - k)));
}

/** Below this share of the whole standard deviation a box is told from a Gaussian by its fourth moment only. */
const SMALL_BOX = 0.15;
const SQRT_THREE = 1.7320508075688772;

class Box implements Profile {
  readonly name = "box";
  readonly hasParameter = true;
  readonly least = 0;
  readonly most = 0.98;
  readonly usual = 0.6;
  readonly hasClosedIntegral = true;
  readonly widthPerFwhm = 0.36;
  private q = 0;
  private s = 0;
  private half = 0;
  private std = 1;
  setParameter(s: number): void {
    this.s = s;
    this.q = Math.sqrt(Math.sqrt(Math.max(s, 0)));
    this.half = SQRT_THREE * this.q;
    this.std = Math.sqrt(1 - this.q * this.q);
  }
  private isSmall(): boolean {
    return this.q < SMALL_BOX;
  }
  /** Slopes of half box and blur with s. */
  private halfSlope(): number {
    return SQRT_THREE / (4 * this.q * this.q * this.q);
  }
  private stdSlope(): number {
    return -1 / (this.std * 4 * this.q * this.q);
  }
  edge(u: number, out: Float64Array): void {
    if (this.isSmall()) {
      const g = DENSITY * gaussian(u);
      const square = u * u;
      out[0] = 0.5 + DENSITY * gaussianIntegral(u) + 0.05 * this.s * u * (square - 3) * g;
      out[1] = g * (1 - 0.05 * this.s * (square * square - 6 * square + 3));
      out[2] = 0.05 * u * (square - 3) * g;
      return;
    }
    const { half, std } = this;
    const upper = (u + half) / std;
    const lower = (u - half) / std;
    const upperIntegral = normalIntegral(upper);
    const lowerIntegral = normalIntegral(lower);
    const upperPhi = DENSITY * gaussian(upper);
    const lowerPhi = DENSITY * gaussian(lower);
    const per = 1 / (2 * half);
    const whole = std * (upper * upperIntegral + upperPhi - lower * lowerIntegral - lowerPhi) * per;
    out[0] = whole;
    out[1] = (upperIntegral - lowerIntegral) * per;
    out[2] =
      (-whole / half + (upperIntegral + lowerIntegral) * per) * this.halfSlope() +
      (upperPhi - lowerPhi) * per * this.stdSlope();
  }
  point(u: number, out: Float64Array): void {
    if (this.isSmall()) {
      const g = DENSITY * gaussian(u);
      const square = u * u;
      const he4 = square * square - 6 * square + 3;
      out[0] = g * (1 - 0.05 * this.s * he4);
      out[1] = g * (-u + 0.05 * this.s * u * (square * square - 10 * square + 15));
      out[2] = -0.05 * g * he4;
      return;
    }
    const { half, std } = this;
    const upper = (u + half) / std;
    const lower = (u - half) / std;
    const upperPhi = DENSITY * gaussian(upper);
    const lowerPhi = DENSITY * gaussian(lower);
    const per = 1 / (2 * half);
    const g = (normalIntegral(upper) - normalIntegral(lower)) * per;
    out[0] = g;
    out[1] = ((upperPhi - lowerPhi) * per) / std;
    out[2] =
      (-g / half + ((upperPhi + lowerPhi) * per) / std) * this.halfSlope() +
      ((lower * lowerPhi - upper * upperPhi) * per * this.stdSlope()) / std;
  }
}

const closedForms: Profile[] = [
  new Gaussian(),
  new Lorentzian(),
  new PseudoVoigt(),
  new Voigt(),
  new ExponentiallyModified(),
  new Box(),
];

/** The profile of a shape in closed form. @throws {RangeError} for `empirical`, which is learned from a capture */
export function profileOf(name: LineShapeName): Profile {
  const found = closedForms.find((one) => one.name === name);
  if (found === undefined) throw new RangeError(`The shape ${name} is learned from a capture`);
  return found;
}

const scratch = new Float64Array(3);

/** Of a line of unit width scale and area; `fwhmSlope` is the change of the FWHM with the shape parameter. */
export interface ProfileMeasures {
  fwhm: number;
  fwhmSlope: number;
  height: number;
  /** Distance of the highest point from the centre. */
  top: number;
}

const GAUSSIAN_MEASURES: ProfileMeasures = { fwhm: FWHM_PER_STD, fwhmSlope: 0, height: DENSITY, top: 0 };

/** Measures found on the curve, by Newton's steps kept within a bracket. */
export function measureProfile(profile: Profile, s: number): ProfileMeasures {
  if (profile.name === "gaussian") return GAUSSIAN_MEASURES;
  profile.setParameter(s);
  const isSkewed = profile.name === "exponentially-modified-gaussian" || profile.name === "empirical";
  const top = isSkewed ? topOf(profile) : 0;
  profile.point(top, scratch);
  const height = scratch[0]!;
  // The top is stationary, so the half height moves with dg/ds alone.
  const halfSlope = profile.hasParameter ? 0.5 * scratch[2]! : 0;
  let fwhm = 0;
  let fwhmSlope = 0;
  for (let side = -1; side <= 1; side += 2) {
    const at = crossingOf(profile, top, side, 0.5 * height);
    profile.point(at, scratch);
    fwhm += side * (at - top);
    if (profile.hasParameter) fwhmSlope += (side * (halfSlope - scratch[2]!)) / scratch[1]!;
  }
  return { fwhm, fwhmSlope, height, top };
}

function topOf(profile: Profile): number {
  let low = -3;
  let high = 3;
  for (let k = 0; k < 44; k += 1) {
    const middle = 0.5 * (low + high);
    profile.point(middle, scratch);
    if (scratch[1]! > 0) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

function crossingOf(profile: Profile, top: number, side: number, half: number): number {
  let near = 0;
  let far = 0.5;
  for (let k = 0; k < 12; k += 1) {
    profile.point(top + side * far, scratch);
    if (scratch[0]! <= half) break;
    near = far;
    far *= 1.5;
  }
  let at = 0.5 * (near + far);
  for (let k = 0; k < 50; k += 1) {
    profile.point(top + side * at, scratch);
    const excess = scratch[0]! - half;
    if (excess > 0) near = at;
    else far = at;
    let next = at - (side * excess) / scratch[1]!;
    if (!(next > near && next < far)) next = 0.5 * (near + far);
    if (Math.abs(next - at) < 1e-13 * at) break;
    at = next;
  }
  return top + side * at;
}
