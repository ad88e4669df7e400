/**
 * A new axis applied to a whole spectrum: its samples keep their counts and get the new wavelengths, or the spectrum is resampled onto
 * even steps with its counts conserved.
 *
 * Resampling   each sample is a cell, from half way to its left neighbour to half way to its right one, its counts spread evenly over it; a new
 *              cell gets the counts that lie in it. The sum over the range that both share is kept to rounding; lines get a sample wider, and
 *              their centres move by up to some thousandths of a sample
 * Noise        of the new samples, with weights w_ij = share of old cell i in new cell j: variance sum of w_ij² u_i², and neighbours are
 *              correlated since they share old cells. Said with the result; whoever fits on resampled samples must take it in
 * Twice        a spectrum that was corrected carries a mark, and is refused
 */
import type { PixelAxis, Spectrum } from "../analysis/types.ts";
import { axisNm, isMonotonic } from "./axis.ts";

export interface AppliedAxis {
  outcome: "applied";
  /** Wavelengths ascending, nm; marked as corrected. */
  spectrum: Spectrum;
  /** True where the wavelength falls with the pixel and the samples were turned round. */
  wasTurned: boolean;
  /**
   * Of a resampled spectrum with even noise: correlation of neighbouring samples, mean over the range, and the standard deviation of a
   * sample over that of an original one. null where it was not resampled.
   */
  noise: { neighbourCorrelation: number; relativeDeviation: number } | null;
  /** What a person should know, a sentence; null where there is nothing. */
  remark: string | null;
}
export interface ApplyRefusal {
  outcome: "refused";
  reason: string;
}

export interface EvenSteps {
  fromNm: number;
  toNm: number;
  stepNm: number;
}

const mostSamples = 2_000_000;

/**
 * @param axis  of the spectrum's own positions (px, drive steps, or nm for a correction of a wavelength axis)
 * @param even  resample onto these centres; absent: the samples keep their counts and get new wavelengths
 */
export function applyAxis(spectrum: Spectrum, axis: PixelAxis, even?: EvenSteps): AppliedAxis | ApplyRefusal {
  if (spectrum.correctedBy !== undefined) {
    return refuse(
      "This spectrum was corrected already: a second axis on top would shift it twice. Start from the capture as recorded.",
    );
  }
  if (spectrum.axisKind === "wavenumber") {
    return refuse("The axis is in wavenumbers: an axis in nanometres does not belong to it.");
  }
  const { positions, counts } = spectrum;
  const n = positions.length;
  if (n < 2) return refuse("One sample has no axis.");
  const first = positions[0] as number;
  const last = positions[n - 1] as number;
  if (!isMonotonic(axis, first, last)) {
    return refuse("This axis turns back within the spectrum: it belongs to another instrument or other settings.");
  }
  const isFalling = axisNm(axis, last) < axisNm(axis, first);
  const at = (k: number): number => (isFalling ? n - 1 - k : k);
  const mark = { coefficients: axis.coefficients.slice(), meaning: axis.meaning, isResampled: even !== undefined };
  const isBeyond = first < axis.firstPx || last > axis.lastPx;
  const beyond = isBeyond ? "Beyond the outermost lines of the axis its wavelengths are extrapolated." : null;
  const base = { ...spectrum, axisKind: "wavelength" as const, axisUnit: "nm" as const, correctedBy: mark };
  if (even === undefined) {
    return {
      outcome: "applied",
      spectrum: {
        ...base,
        positions: Float64Array.from({ length: n }, (_, k) => axisNm(axis, positions[at(k)] as number)),
        counts: Float64Array.from({ length: n }, (_, k) => counts[at(k)] as number),
      },
      wasTurned: isFalling,
      noise: null,
      remark: beyond,
    };
  }
  const { fromNm, toNm, stepNm } = even;
  const count = Math.floor((toNm - fromNm) / stepNm + 1e-9) + 1;
  if (!(stepNm > 0) || !(toNm > fromNm) || !(count >= 2 && count <= mostSamples)) {
    return refuse("Even steps need a first wavelength, a larger last one and a step between them.");
  }
  // Edges of the old cells in nm, ascending: half way between neighbouring positions.
  const edges = new Float64Array(n + 1);
  for (let k = 0; k <= n; k++) {
    const i = isFalling ? n - k : k;
    const position =
      i === 0
        ? first - ((positions[1] as number) - first) / 2
        : i === n
          ? last + (last - (positions[n - 2] as number)) / 2
          : ((positions[i - 1] as number) + (positions[i] as number)) / 2;
    edges[k] = axisNm(axis, position);
  }
  const from = fromNm - stepNm / 2;
  if (from < (edges[0] as number) || fromNm + (count - 0.5) * stepNm > (edges[n] as number)) {
    const low = (edges[0] as number).toFixed(2);
    return refuse(
      `The spectrum reaches from ${low} to ${(edges[n] as number).toFixed(2)} nm; the even steps go beyond it.`,
    );
  }
  const resampled = new Float64Array(count);
  let variances = 0;
  let neighbours = 0;
  let cell = 0;
  /** Share of the old cell at the new cell's right edge that lay in the cell before, for the covariance with it. */
  let sharedBefore = 0;
  let sharedCell = -1;
  for (let j = 0; j < count; j++) {
    const left = from + j * stepNm;
    const right = from + (j + 1) * stepNm;
    while (cell > 0 && (edges[cell] as number) > left) cell -= 1;
    while ((edges[cell + 1] as number) <= left) cell += 1;
    let sum = 0;
    let square = 0;
    let k = cell;
    let share = 0;
    for (; k < n && (edges[k] as number) < right; k++) {
      const low = Math.max(left, edges[k] as number);
      const high = Math.min(right, edges[k + 1] as number);
      share = (high - low) / ((edges[k + 1] as number) - (edges[k] as number));
      sum += share * (counts[at(k)] as number);
      square += share * share;
      if (k === sharedCell) neighbours += share * sharedBefore;
    }
    sharedCell = k - 1;
    sharedBefore = share;
    resampled[j] = sum;
    variances += square;
    cell = k - 1;
  }
  const meanVariance = variances / count;
  const neighbourCorrelation = neighbours / (count - 1) / meanVariance;
  const positionsNm = Float64Array.from({ length: count }, (_, j) => fromNm + j * stepNm);
  const said = `Resampled: neighbouring samples share counts, and their noise is correlated by ${neighbourCorrelation.toFixed(2)}.`;
  return {
    outcome: "applied",
    spectrum: { ...base, positions: positionsNm, counts: resampled, fullScaleCounts: null },
    wasTurned: isFalling,
    noise: { neighbourCorrelation, relativeDeviation: Math.sqrt(meanVariance) },
    remark: beyond === null ? said : `${said} ${beyond}`,
  };
}

const refuse = (reason: string): ApplyRefusal => ({ outcome: "refused", reason });

/** Even steps as fine as the spectrum's own in the middle, inside what it holds; null where the axis turns. */
export function naturalSteps(spectrum: Spectrum, axis: PixelAxis): EvenSteps | null {
  const { positions } = spectrum;
  const n = positions.length;
  if (n < 4 || !isMonotonic(axis, positions[0] as number, positions[n - 1] as number)) return null;
  const a = axisNm(axis, positions[0] as number);
  const b = axisNm(axis, positions[n - 1] as number);
  const stepNm = Math.abs(b - a) / (n - 1);
  const fromNm = Math.min(a, b) + stepNm;
  const count = Math.floor((Math.max(a, b) - stepNm - fromNm) / stepNm);
  return count >= 1 ? { fromNm, toNm: fromNm + count * stepNm, stepNm } : null;
}
