/**
 * How the scatter grows with the signal: counts per detected electron, told apart from a line shape that does not fit.
 *
 * Model   variance of a sample about a first, evenly weighted fit = read noise² + gain x signal + (misfit x signal)²; photon noise grows
 *         with the signal, a wrong shape with its square, so that lines of different height part the two
 * Solved  iterated weighted least squares over lines, neither term below zero; the weight of a line takes in the scatter of its own
 *         variance estimate (2 / degrees of freedom) and that misfit differs from line to line; misfit is looked for only where photon
 *         noise alone does not explain the lines, because from a few lines the two are hard to part
 */

export interface LineScatter {
  /** Mean squared residual, corrected for the fitted parameters, less the mean squared read noise, counts². */
  excess: number;
  /** Mean squared read noise, counts². */
  readVariance: number;
  /** Mean of the fitted signal above the baseline, counts. */
  meanSignal: number;
  /** Mean of its square, counts². */
  meanSquareSignal: number;
  degreesOfFreedom: number;
}

const rounds = 8;
/** Mean squared deviation of the lines, in their own standard deviations, up to which photon noise alone explains them. */
const explainedUpTo = 2.5;

interface Terms {
  gain: number;
  gainUnc: number;
}

/** Counts per electron; 0 where the lines show no photon noise (or there is none to judge by). */
export function estimatePhotonGain(lines: readonly LineScatter[]): number {
  if (lines.length === 0) return 0;
  const alone = solve(lines, false);
  const { gain, gainUnc } = deviation(lines, alone.gain) <= explainedUpTo ? alone : solve(lines, true);
  return gain > gainUnc ? gain : 0;
}

/** Mean squared deviation of the lines from photon noise alone, each in its own standard deviations. */
function deviation(lines: readonly LineScatter[], gain: number): number {
  let sum = 0;
  for (const line of lines) {
    const variance = line.readVariance + gain * line.meanSignal;
    const off = (line.excess + line.readVariance - variance) / variance;
    sum += (off * off * line.degreesOfFreedom) / 2;
  }
  return sum / lines.length;
}

function solve(lines: readonly LineScatter[], withMisfit: boolean): Terms {
  let gain = 0;
  let misfit = 0;
  let gainUnc = 0;
  for (let round = 0; round < rounds; round += 1) {
    let a11 = 0;
    let a12 = 0;
    let a22 = 0;
    let b1 = 0;
    let b2 = 0;
    for (const line of lines) {
      const { meanSignal: s, meanSquareSignal: q } = line;
      const variance = line.readVariance + gain * s + misfit * q;
      // Misfit varies from line to line by about as much as it is (seen on real captures).
      const spread = misfit * q;
      const weight = 1 / ((2 / line.degreesOfFreedom) * variance * variance + spread * spread);
      a11 += weight * s * s;
      a12 += weight * s * q;
      a22 += weight * q * q;
      b1 += weight * s * line.excess;
      b2 += weight * q * line.excess;
    }
    const determinant = a11 * a22 - a12 * a12;
    if (!(a11 > 0) || !(a22 > 0)) return { gain: 0, gainUnc: 0 };
    const both = withMisfit && determinant > 1e-9 * a11 * a22;
    gain = both ? (a22 * b1 - a12 * b2) / determinant : b1 / a11;
    misfit = both ? (a11 * b2 - a12 * b1) / determinant : 0;
    gainUnc = both ? Math.sqrt(a22 / determinant) : 1 / Math.sqrt(a11);
    if (gain < 0) {
      gain = 0;
      misfit = both ? Math.max(0, b2 / a22) : 0;
    } else if (misfit < 0) {
      misfit = 0;
      gain = Math.max(0, b1 / a11);
    }
  }
  return { gain, gainUnc };
}
