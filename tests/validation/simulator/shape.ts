/**
 * Line shapes of the validation's simulator, each a fine table made by adding up the physical causes numerically: a Gaussian blur, a
 * Lorentzian of natural and collisional broadening, a one-sided exponential (coma, slow electronics), and the images of two slits
 * (boxes). The table is normalised to unit area and unit full width at half maximum and its zero is the first moment (for the
 * Lorentzian, which has none, the centre of symmetry). A line is integrated over each sample by the midpoint rule on at least 12 pieces.
 */
export interface ShapeKind {
  name: "gaussian" | "winged" | "skewed" | "slit" | "trapezoid";
  /** Share of the cause beside the Gaussian, 0..1; quantised to twentieths so that tables are made once. */
  share: number;
  /** Tail to higher (1) or lower (-1) index. */
  side: 1 | -1;
}

export interface Shape {
  kind: ShapeKind;
  /** Density at u widths from the centre. */
  at(u: number): number;
  peak: number;
  /** Widths on either side beyond which nothing is drawn. */
  reach: number;
}

const stepsPerWidth = 100;
const cache = new Map<string, Shape>();

function grid(reach: number): Float64Array {
  return new Float64Array(2 * reach * stepsPerWidth + 1);
}

/** Discrete convolution of a wide table with a narrow kernel (both centred), keeping the wide one's length. */
function blur(table: Float64Array, kernel: Float64Array): Float64Array {
  const half = (kernel.length - 1) / 2;
  const out = new Float64Array(table.length);
  for (let i = 0; i < table.length; i += 1) {
    let sum = 0;
    for (let k = -half; k <= half; k += 1) {
      const j = i - k;
      if (j >= 0 && j < table.length) sum += table[j]! * kernel[k + half]!;
    }
    out[i] = sum;
  }
  return out;
}

function kernelOf(density: (u: number) => number, reach: number): Float64Array {
  const half = Math.ceil(reach * stepsPerWidth);
  const kernel = new Float64Array(2 * half + 1);
  let sum = 0;
  for (let k = -half; k <= half; k += 1) {
    let value = 0;
    for (let j = 0; j < 8; j += 1) value += density((k + (j + 0.5) / 8 - 0.5) / stepsPerWidth) / 8;
    kernel[k + half] = value;
    sum += value;
  }
  for (let k = 0; k < kernel.length; k += 1) kernel[k] = kernel[k]! / sum;
  return kernel;
}

const gaussianOf =
  (sigma: number) =>
  (u: number): number =>
    Math.exp(-0.5 * (u / sigma) * (u / sigma));
const boxOf =
  (width: number) =>
  (u: number): number =>
    Math.abs(u) <= width / 2 ? 1 : 0;

export function shapeOf(given: ShapeKind): Shape {
  const share = Math.round(given.share * 20) / 20;
  const kind = { ...given, share };
  const key = `${kind.name} ${share} ${kind.side}`;
  const known = cache.get(key);
  if (known !== undefined) return known;
  const isWinged = kind.name === "winged" && share > 0;
  const reach = isWinged ? 60 : 9;
  let table = grid(reach);
  const middle = (table.length - 1) / 2;
  const sigma = 0.42466;
  if (isWinged) {
    const gamma = 0.5 * share;
    for (let i = 0; i < table.length; i += 1) {
      const u = (i - middle) / stepsPerWidth;
      table[i] = gamma / (u * u + gamma * gamma);
    }
    const rest = sigma * Math.sqrt(1 - share);
    if (rest > 0.02) table = blur(table, kernelOf(gaussianOf(rest), 5 * rest));
  } else {
    for (let i = 0; i < table.length; i += 1)
      table[i] = gaussianOf(kind.name === "gaussian" ? sigma : 0.3)((i - middle) / stepsPerWidth);
    if (kind.name === "skewed" && share > 0)
      table = blur(
        table,
        kernelOf((u) => (kind.side * u < 0 ? 0 : Math.exp((-kind.side * u) / (0.6 * share))), 6),
      );
    if (kind.name === "slit") table = blur(table, kernelOf(boxOf(0.3 + 1.7 * share), 1.5));
    if (kind.name === "trapezoid")
      table = blur(blur(table, kernelOf(boxOf(0.4 + 0.8 * share), 1.5)), kernelOf(boxOf(0.4), 1));
  }
  let area = 0;
  let moment = 0;
  let top = 0;
  for (let i = 0; i < table.length; i += 1) {
    area += table[i]!;
    moment += table[i]! * (i - middle);
    top = Math.max(top, table[i]!);
  }
  const centre = middle + (isWinged ? 0 : moment / area);
  // Half-maximum points by linear interpolation.
  const crossing = (from: number, step: number): number => {
    let i = from;
    while (table[i]! < top / 2) i += step;
    return i - (step * (table[i]! - top / 2)) / (table[i]! - table[i - step]!);
  };
  const width = crossing(table.length - 2, -1) - crossing(1, 1);
  const shape: Shape = {
    kind,
    peak: (top / area) * width,
    reach: (reach * stepsPerWidth) / width - 1,
    at: (u) => {
      const place = centre + u * width;
      const i = Math.floor(place);
      if (i < 0 || i >= table.length - 1) return 0;
      const f = place - i;
      return ((table[i]! * (1 - f) + table[i + 1]! * f) / area) * width;
    },
  };
  cache.set(key, shape);
  return shape;
}

/** Share of the line's light in each sample from `from` on; index = centre of sample. */
export function addLine(out: Float64Array, shape: Shape, centre: number, fwhm: number, area: number): void {
  const from = Math.max(0, Math.floor(centre - shape.reach * fwhm));
  const to = Math.min(out.length - 1, Math.ceil(centre + shape.reach * fwhm));
  for (let i = from; i <= to; i += 1) out[i] = out[i]! + area * shareIn(shape, i - centre, fwhm);
}

/** Light of unit area within the sample whose centre lies `offset` samples from the line. */
export function shareIn(shape: Shape, offset: number, fwhm: number): number {
  const isNear = Math.abs(offset) < 4 * fwhm + 2;
  const pieces = isNear ? Math.max(12, Math.ceil(40 / fwhm)) : 2;
  let sum = 0;
  for (let j = 0; j < pieces; j += 1) sum += shape.at((offset + (j + 0.5) / pieces - 0.5) / fwhm);
  return sum / pieces / fwhm;
}
