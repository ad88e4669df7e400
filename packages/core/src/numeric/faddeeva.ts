/**
 * The Faddeeva function w(z) = exp(-z²) erfc(-iz) for z = x + iy with y >= 0: Voigt's line shape and its derivatives.
 *
 * w = K + iL. K(x, y) is Voigt's function: a Gaussian exp(-t²) convolved with a Lorentzian of half width y, at distance x,
 * times pi / y. Both arguments have no unit (distance and half width over sqrt(2) standard deviations).
 *
 * Source      M. Al Azah, S. N. Chandler-Wilde, SIAM J. Numer. Anal. 59 (2021) 2346: the trapezoidal and the midpoint rule
 *             for w's integral with the residue of the pole, whichever keeps its nodes away from z (step sqrt(pi / 12));
 *             the sums are written so that no term of K cancels. From |z| = 10 on the asymptotic series (DLMF 7.12.1).
 *             Derivatives: w' = -2zw + 2i / sqrt(pi) (DLMF 7.10.2), the differentiated series from |z| = 10 on.
 * Errors      largest seen against mpmath over 19,800 random arguments, |z| to 1e8 and y from 1e-30: K 2.8e-14, L 7e-15
 *             relative; its derivatives 2.1e-15 absolute below |z| = 10, 6e-14 relative from there on.
 *             faddeeva.test.ts holds values to 5e-14 and derivatives to 1e-13 on fixtures/faddeeva-reference.json
 */
import { exp, expOfNegativeSquare } from "./exponential.ts";
import { cos, sin } from "./trigonometric.ts";

const INVERSE_SQRT_PI = 0.5641895835477563;
const TWO_PI = 6.283185307179586;
const INVERSE_PI = 0.3183098861837907;
/** sqrt(pi / 12): balances the error of cutting the sums after 12 nodes against that of the step. */
const STEP = 0.5116633539732443;
const POLE_RATE = TWO_PI / STEP;
const NODES = 12;
/** From this |z|² on the asymptotic series is exact to rounding with 12 terms, from the second with 6. */
const SERIES_FROM = 100;
const SHORT_SERIES_FROM = 900;

/** So near the real axis the asymptotic series has hardly a real part, and the Gaussian it lacks is added. */
const REAL_AXIS = 1e-25;

/** Squares of the nodes and their weights: midpoint (k + 1/2) h, trapezoid k h. */
const MIDPOINT_SQUARE = new Float64Array(NODES);
const MIDPOINT_WEIGHT = new Float64Array(NODES);
const TRAPEZOID_SQUARE = new Float64Array(NODES);
const TRAPEZOID_WEIGHT = new Float64Array(NODES);
for (let k = 0; k < NODES; k++) {
  const middle = (k + 0.5) * STEP;
  MIDPOINT_SQUARE[k] = middle * middle;
  MIDPOINT_WEIGHT[k] = 2 * STEP * INVERSE_PI * expOfNegativeSquare(middle);
  const node = k * STEP;
  TRAPEZOID_SQUARE[k] = node * node;
  // The node at 0 has no mirror image.
  TRAPEZOID_WEIGHT[k] = (k === 0 ? 1 : 2) * STEP * INVERSE_PI * expOfNegativeSquare(node);
}

/** Real and imaginary part of the last result: no object is made for each sample of a spectrum. */
let real = 0;
let imaginary = 0;

/**
 * Sum of (2k - 1)!! u^k (or (2k + 1)!! u^k) with u = 1/(2z²), times i / (sqrt(pi) z^power); power 1 is w, power 2 is -w'.
 * 1/z is formed first, so that |z| up to 1e300 neither overflows nor loses the small part.
 */
function asymptoticSeries(x: number, y: number, power: 1 | 2): void {
  const inverse = 1 / (x * x + y * y);
  const terms = inverse * SHORT_SERIES_FROM <= 1 ? 6 : 12;
  const re = x * inverse;
  const im = -y * inverse;
  const uRe = 0.5 * (re - im) * (re + im);
  const uIm = re * im;
  let sumRe = 1;
  let sumIm = 0;
  for (let k = terms; k >= 1; k--) {
    const factor = power === 1 ? 2 * k - 1 : 2 * k + 1;
    const next = 1 + factor * (uRe * sumRe - uIm * sumIm);
    sumIm = factor * (uRe * sumIm + uIm * sumRe);
    sumRe = next;
  }
  const frontRe = power === 1 ? re : 2 * uRe;
  const frontIm = power === 1 ? im : 2 * uIm;
  // Multiplication with i turns (a, b) into (-b, a).
  real = -INVERSE_SQRT_PI * (frontRe * sumIm + frontIm * sumRe);
  imaginary = INVERSE_SQRT_PI * (frontRe * sumRe - frontIm * sumIm);
}

function gaussianTail(x: number): number {
  return Math.abs(x) < 27.3 ? expOfNegativeSquare(x) : 0;
}

/** w for x >= 0, y >= 0 into `real` and `imaginary`. */
function quadrant(x: number, y: number): void {
  const square = x * x + y * y;
  if (square >= SERIES_FROM) {
    if (square > 1e200) {
      // 1/z alone, scaled: its square would leave the range of doubles.
      const scale = Math.max(x, y);
      const a = x / scale;
      const b = y / scale;
      const norm = (a * a + b * b) * scale;
      real = (INVERSE_SQRT_PI * b) / norm;
      imaginary = (INVERSE_SQRT_PI * a) / norm;
    } else asymptoticSeries(x, y, 1);
    if (y < REAL_AXIS) real += gaussianTail(x);
    return;
  }
  const position = x / STEP;
  const phase = position - Math.floor(position);
  const isMidpoint = phase < 0.25 || phase > 0.75 || y > x;
  const squares = isMidpoint ? MIDPOINT_SQUARE : TRAPEZOID_SQUARE;
  const weights = isMidpoint ? MIDPOINT_WEIGHT : TRAPEZOID_WEIGHT;
  const cross = 2 * x * y;
  const crossSquare = cross * cross;
  const difference = (x - y) * (x + y);
  let sumRe = 0;
  let sumIm = 0;
  for (let k = 0; k < NODES; k++) {
    const node = squares[k]!;
    const a = difference - node;
    const share = weights[k]! / (a * a + crossSquare);
    sumRe += share * (square + node);
    sumIm += share * (square - node);
  }
  real = y * sumRe;
  imaginary = x * sumIm;
  // Residue of the pole: 2 exp(-z²) / (1 ± q), q = exp(-2 pi i z / h), |q| >= 1; written with 1/q, which never overflows.
  // None above pi / h, where the sum alone is exact.
  if (y > x && y * STEP >= 0.5 * TWO_PI) return;
  // Where it is below rounding of K (at least y / (180 sqrt(pi)) here), its seven elementary functions are saved.
  if (y > 1e-3 && square - 2 * y * y + POLE_RATE * y > 48) return;
  const decay = exp(-POLE_RATE * y);
  const sign = isMidpoint ? 1 : -1;
  const angle = POLE_RATE * x;
  const c = cos(angle);
  const s = sin(angle);
  // 1 / (1 + sign q) = r (r + sign)* / |r + sign|² with r = 1/q = decay (c + i s)
  const denominator = decay * decay + 2 * sign * decay * c + 1;
  const poleRe = (decay * (decay + sign * c)) / denominator;
  const poleIm = (decay * sign * s) / denominator;
  const height = 2 * expOfNegativeSquare(x) * (y === 0 ? 1 : exp(y * y));
  const waveRe = height * cos(cross);
  const waveIm = -height * sin(cross);
  real += waveRe * poleRe - waveIm * poleIm;
  imaginary += waveRe * poleIm + waveIm * poleRe;
}

/**
 * Voigt's function K(x, y) = Re w(x + iy); K(x, 0) = exp(-x²). Even in x.
 *
 * @param y  >= 0; NaN below
 */
export function voigtFunction(x: number, y: number): number {
  if (!(y >= 0) || x !== x) return NaN;
  if (y === Infinity || x === Infinity || x === -Infinity) return 0;
  quadrant(Math.abs(x), y);
  return real;
}

/**
 * w(x + iy) = K + iL, written to out[0] = K, out[1] = L (odd in x).
 *
 * @param y  >= 0; both values are NaN below
 */
export function faddeeva(x: number, y: number, out: Float64Array): void {
  if (!(y >= 0) || x !== x) {
    out[0] = out[1] = NaN;
    return;
  }
  if (y === Infinity || x === Infinity || x === -Infinity) {
    out[0] = out[1] = 0;
    return;
  }
  quadrant(Math.abs(x), y);
  out[0] = real;
  out[1] = x < 0 ? -imaginary : imaginary;
}

/**
 * Voigt's function with its gradient: out[0] = K, out[1] = L, out[2] = dK/dx, out[3] = dK/dy.
 *
 * dL/dx = -dK/dy and dL/dy = dK/dx (Cauchy and Riemann).
 *
 * @param y  >= 0; all values are NaN below
 */
export function voigtWithGradient(x: number, y: number, out: Float64Array): void {
  faddeeva(x, y, out);
  const square = x * x + y * y;
  if (!(square < Infinity)) {
    out[2] = out[3] = y >= 0 ? 0 : NaN;
    return;
  }
  if (square >= SERIES_FROM) {
    // -w' is the series with the next odd factors.
    asymptoticSeries(Math.abs(x), y, 2);
    out[2] = x < 0 ? real : -real;
    out[3] = imaginary;
    if (y < REAL_AXIS) out[2] -= 2 * x * gaussianTail(x);
    return;
  }
  const k = out[0]!;
  const l = out[1]!;
  out[2] = 2 * (y * l - x * k);
  out[3] = 2 * (x * l + y * k - INVERSE_SQRT_PI);
}
