/** The mix of simulated captures that naming and intervals are held to: instruments, lamps, exposures and wrong axes drawn from one seed. */
import type { AnalysisSetup, IdentificationMode, ReferenceLine } from "../../../packages/core/src/index.ts";
import { builtInLineList, defaultSetup } from "../../../packages/core/src/index.ts";
import { chebyshevToPowers, fillChebyshevBasis, solveLeastSquares } from "../../../packages/core/src/numeric/index.ts";
import {
  arraySpectrometer,
  createRandom,
  opticsForRange,
  simulateCapture,
  wavelengthAt,
  type SimulatedCapture,
  type TrueAxis,
} from "../../../packages/core/src/testing/index.ts";

export interface SimulatedCheck {
  sim: SimulatedCapture;
  setup: AnalysisSetup;
  /** nm, ascending powers of the pixel, of the earlier axis. */
  earlier: number[];
  trueAxis: TrueAxis;
}

/** First and last wavelength of instruments that a small laboratory owns. */
const ranges = [
  [200, 850],
  [350, 1000],
  [250, 600],
  [500, 800],
  [400, 720],
] as const;

const lampsOfRange = [
  [["Hg"], ["Hg", "Ar"]],
  [["Hg", "Ar"], ["Ne"], ["Ar"], ["Kr"]],
  [["Hg"], ["Cd"]],
  [["Ne"], ["Ar"]],
  [["Hg", "Ne"], ["Ne"]],
] as const;

const samples = 2048;

/** A polynomial of degree 5 through the true axis, as powers: an axis that an earlier calibration could have left. */
export function polynomialOf(axis: TrueAxis, last = samples - 1): number[] {
  const points = 48;
  const degree = 5;
  const n = degree + 1;
  const design = new Float64Array(points * n);
  const wavelengths = new Float64Array(points);
  for (let i = 0; i < points; i += 1) {
    const px = (last * i) / (points - 1);
    fillChebyshevBasis(design, i * n, degree, (2 * px) / last - 1);
    wavelengths[i] = wavelengthAt(axis, px);
  }
  const { coefficients } = solveLeastSquares(design, points, n, wavelengths, null);
  return Array.from(chebyshevToPowers(coefficients, 0, last));
}

/** Published lines with the error that their stated uncertainty allows, so that the reference's share of U is put to the test as well. */
function asTheyReallyAre(lines: readonly ReferenceLine[], random: ReturnType<typeof createRandom>): ReferenceLine[] {
  return lines.map((line) => {
    const off = (line.uncertaintyNm ?? 0.001) * random.normal();
    return {
      ...line,
      wavelengthAirNm: line.wavelengthAirNm === null ? null : line.wavelengthAirNm + off,
      wavelengthVacuumNm: line.wavelengthVacuumNm + off,
    };
  });
}

/**
 * Heights as a lamp shows them through an instrument: published intensities run over four decades and on a scale of their own for every
 * spectrum, so each spectrum is taken from its own strongest line, its decades halved, and scattered by a factor of two (one standard deviation).
 */
function heightsOf(
  lines: readonly ReferenceLine[],
  strongestCounts: number,
  random: ReturnType<typeof createRandom>,
): Record<string, number> {
  const strongest = new Map<string, number>();
  for (const line of lines) {
    strongest.set(line.spectrum, Math.max(strongest.get(line.spectrum) ?? 0, line.relativeIntensity ?? 1));
  }
  return Object.fromEntries(
    lines.map((line) => {
      const share = (line.relativeIntensity ?? 1) / strongest.get(line.spectrum)!;
      const ion = line.spectrum.endsWith(" I") ? 1 : 0.1;
      const height = strongestCounts * ion * Math.sqrt(share) * Math.exp(0.7 * random.normal());
      return [(line.wavelengthAirNm ?? line.wavelengthVacuumNm).toFixed(4), Math.min(height, 1.5 * strongestCounts)];
    }),
  );
}

/**
 * One check of the mix: an earlier axis wrong by up to 3 FWHM and 1 % in scale, or a range good to 5 % of its span.
 *
 * @param lamp  elements the analysis is told, when they are not the lamp's own
 */
export function simulatedCheck(seed: number, mode: "earlier-axis" | "range", lamp?: string[]): SimulatedCheck {
  const random = createRandom(seed);
  const which = random.whole(ranges.length);
  const [first, last] = ranges[which]!;
  const lamps = lampsOfRange[which]!;
  const elements = [...random.pick<readonly string[]>(lamps)];
  const trueAxis = opticsForRange(first, last, samples, last - first > 400 ? 600 : 1200);
  const fwhmPx = random.between(2.2, 5);
  const instrument = arraySpectrometer({
    trueAxis,
    fwhm: { value: fwhmPx, unit: "px" },
    readNoiseCounts: random.between(5, 30),
    countsPerElectron: random.between(0.1, 1),
  });
  const published = builtInLineList.lines.filter((line) => elements.includes(line.element));
  const lines = asTheyReallyAre(published, random);
  const strongestCounts = random.between(8000, 60000);
  const sim = simulateCapture({
    seed: seed + 1_000_000,
    instrument,
    lamp: { lines, strongestCounts, intensityScatter: 1, heightsCounts: heightsOf(lines, strongestCounts, random) },
    hotPixels: random.whole(4),
  });
  const exact = polynomialOf(trueAxis);
  const nmPerPx = (last - first) / samples;
  const offset = random.between(-3, 3) * fwhmPx * nmPerPx;
  const scale = random.between(-0.01, 0.01);
  const middle = wavelengthAt(trueAxis, (samples - 1) / 2);
  const earlier = exact.map((coefficient, k) => (1 + scale) * coefficient + (k === 0 ? offset - scale * middle : 0));
  return { sim, setup: setupFor(lamp ?? elements, mode, earlier, trueAxis, random), earlier, trueAxis };
}

function setupFor(
  elements: string[],
  kind: "earlier-axis" | "range",
  earlier: number[],
  trueAxis: TrueAxis,
  random: ReturnType<typeof createRandom>,
): AnalysisSetup {
  const first = wavelengthAt(trueAxis, 0);
  const last = wavelengthAt(trueAxis, samples - 1);
  const wrong = (): number => random.between(-0.05, 0.05) * (last - first);
  const mode: IdentificationMode =
    kind === "range"
      ? { kind: "range", firstNm: first + wrong(), lastNm: last + wrong() }
      : {
          kind: "earlier-axis",
          axis: {
            coefficients: earlier,
            firstPx: 0,
            lastPx: samples - 1,
            chebyshevCovariance: null,
            degreesOfFreedom: null,
            meaning: "standard-air",
          },
        };
  return defaultSetup({ elements, mode });
}
