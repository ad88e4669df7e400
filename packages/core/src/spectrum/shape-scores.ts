/**
 * Do the lines show anything that the fitted shape does not?
 *
 * The residuals of each first fit are projected on the third and fourth Hermite functions of its line (skewness, flatness), less what the fit
 * could follow, and summed over the lines: score test (C. R. Rao, Proc. Camb. Phil. Soc. 44 (1948) 50). Noise gives every line a sign of its
 * own, a wrong shape gives all the same. Each line counts in units of its own scatter, and no line for more than thirty deviations, so that one
 * odd line does not speak for all.
 */
import type { FittedWindowOfLines } from "../lineshape/fit-line.ts";
import { FWHM_PER_STD } from "../lineshape/gaussian.ts";
import type { GroupWindow } from "./line-groups.ts";

export interface ShapeScores {
  skewness: number;
  flatness: number;
  skewnessVariance: number;
  flatnessVariance: number;
  lines: number;
}

const tellingSigmas = 3;
const fewestLines = 2;
const mostWeight = 30;

export function noScores(): ShapeScores {
  return { skewness: 0, flatness: 0, skewnessVariance: 0, flatnessVariance: 0, lines: 0 };
}

/** True where the sums lie beyond three standard deviations of chance. */
export function showsMisfit(scores: ShapeScores): boolean {
  const limit = tellingSigmas * tellingSigmas;
  return (
    scores.lines >= fewestLines &&
    (scores.skewness * scores.skewness > limit * scores.skewnessVariance ||
      scores.flatness * scores.flatness > limit * scores.flatnessVariance)
  );
}

/**
 * Add one line's fit, made with even weights.
 *
 * @param basis       orthonormal columns that the fit's derivatives span
 * @param signals     fitted curve above the background
 * @param redundancy  sum of the noise's correlations at all lags
 */
export function addScores(
  scores: ShapeScores,
  fit: FittedWindowOfLines,
  window: GroupWindow,
  basis: readonly Float64Array[],
  signals: Float64Array,
  redundancy: number,
): void {
  const { positions, values, unc } = window;
  const m = positions.length;
  const { centre, fwhm } = fit.lines[0]!;
  const scatter = Math.max(1, fit.reducedChiSquare) * redundancy;
  scores.lines += 1;
  const wave = new Float64Array(m);
  for (let order = 3; order <= 4; order += 1) {
    for (let i = 0; i < m; i += 1) {
      const u = ((positions[i]! - centre) / fwhm) * FWHM_PER_STD;
      wave[i] = (order === 3 ? u * (u * u - 3) : u * u * (u * u - 6) + 3) * signals[i]!;
    }
    for (const column of basis) {
      let dot = 0;
      for (let i = 0; i < m; i += 1) dot += column[i]! * wave[i]!;
      for (let i = 0; i < m; i += 1) wave[i] = wave[i]! - dot * column[i]!;
    }
    let square = 0;
    let product = 0;
    for (let i = 0; i < m; i += 1) {
      const scaled = wave[i]! / unc[i]!;
      square += scaled * scaled;
      product += (scaled * (values[i]! - fit.fittedCounts[i]!)) / unc[i]!;
    }
    if (!(square > 0)) continue;
    const weight = Math.min(1, mostWeight / Math.sqrt(square));
    const sum = (weight * product) / Math.sqrt(scatter);
    if (order === 3) {
      scores.skewness += sum;
      scores.skewnessVariance += weight * weight * square;
    } else {
      scores.flatness += sum;
      scores.flatnessVariance += weight * weight * square;
    }
  }
}
