/**
 * Line shapes of simulated instruments, as densities of unit area, and their mean over a pixel.
 *
 * Written apart from `lineshape`, with another method (five-point Gauss-Legendre over the pixel), so that a mistake in one
 * cannot hide in the other.
 */
import { erf, erfc, exp } from "../numeric/elementary.ts";

export type LineShape =
  | { kind: "gaussian" }
  /** Gaussian with an exponential tail towards higher samples; tail constant over the Gaussian's standard deviation. */
  | { kind: "skewed"; tailShare: number }
  /** A wide slit: a box blurred by a Gaussian; blur's standard deviation over the box width. */
  | { kind: "box"; blurShare: number };

const FWHM_OVER_STD = 2.3548200450309493;
const SQRT_TWO = 1.4142135623730951;
const NODES = [-0.453089922969332, -0.2692346550528416, 0, 0.2692346550528416, 0.453089922969332];
const WEIGHTS = [0.1184634425280945, 0.2393143352496832, 0.2844444444444444, 0.2393143352496832, 0.1184634425280945];

/** Density at distance x from the line's first moment, for a line of the given width (of the Gaussian part for `skewed`). */
export function density(shape: LineShape, fwhm: number, x: number): number {
  if (shape.kind === "box") {
    const blur = shape.blurShare * fwhm * SQRT_TWO;
    return (erf((x + fwhm / 2) / blur) - erf((x - fwhm / 2) / blur)) / (2 * fwhm);
  }
  const std = fwhm / FWHM_OVER_STD;
  if (shape.kind === "gaussian") return exp((-0.5 * x * x) / (std * std)) / (std * 2.5066282746310002);
  const tail = shape.tailShare * std;
  const fromMode = x + tail;
  const ratio = std / tail;
  return (exp(0.5 * ratio * ratio - fromMode / tail) * erfc((ratio - fromMode / std) / SQRT_TWO)) / (2 * tail);
}

/** Mean density over the pixel centred at x; the pixel is halved until its parts are no wider than what the shape's edges need. */
export function densityOverPixel(shape: LineShape, fwhm: number, x: number): number {
  const finest = shape.kind === "box" ? shape.blurShare * fwhm : fwhm / FWHM_OVER_STD;
  const panels = Math.max(1, Math.min(32, Math.ceil(1 / finest)));
  const width = 1 / panels;
  let sum = 0;
  for (let panel = 0; panel < panels; panel++) {
    const middle = x - 0.5 + (panel + 0.5) * width;
    for (let k = 0; k < NODES.length; k++) sum += WEIGHTS[k]! * density(shape, fwhm, middle + NODES[k]! * width);
  }
  return sum * width;
}

/** Distance from the line beyond which nothing of it is counted. */
export function reach(shape: LineShape, fwhm: number): number {
  return shape.kind === "skewed" ? fwhm * (3 + 8 * shape.tailShare) : 3.5 * fwhm;
}
