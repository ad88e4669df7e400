/**
 * Diagnosis: which change of an instrument's geometry explains a change of its error over wavelength.
 *
 * What      the change of error at several lines is set against the modes of the geometry (modes.ts). Modes are taken in one after
 *           the other, each time the one that explains most, as long as what it explains is more than noise would; modes that explain
 *           the change as well within the noise are reported with it as one group, because the data cannot tell them apart
 * Test      F of each mode's share against the noise, corrected for having looked at all modes at once: the probability that none of
 *           the correlated statistics is larger is taken from their joint normal distribution (numeric/multivariate-normal.ts), so
 *           that a change of pure noise is explained by anything in the stated share of cases (default 5 %)
 * Noise     the stated uncertainties (with their covariance); where the lines scatter about all modes together by clearly more than
 *           that (chance below 1 %), the scatter itself, with its few degrees of freedom
 * Group     modes within 3.84 units of chi-squared of the best (95 % for one amplitude; S. S. Wilks, 1938)
 * Units     nm in, amplitudes in the unit of each mode
 * Limits    linear: changes small against the geometry. At most two causes at once are looked for; a third would stand on what two
 *           mistakes left over
 */
import {
  chiSquareUpperTail,
  normalQuantile,
  normalRectangleProbability,
  regularizedBeta,
  Whitener,
} from "../numeric/index.ts";
import type { GeometryMode } from "./modes.ts";

export interface ErrorChange {
  wavelengthNm: number;
  /** Error now minus error before, nm. */
  changeNm: number;
  /** Standard uncertainty of the change; not read where a covariance is given. */
  uncNm: number;
}

export interface DiagnosisOptions {
  /** Covariance of the changes, row-major, nm²: what lines share (set-up) belongs here. Default: their own uncertainties alone. */
  covarianceNm2?: ArrayLike<number>;
  /** Share of changes of pure noise that may be explained by something; default 0.05. */
  falseFindingRate?: number;
}

export interface ModeFinding {
  id: string;
  words: string;
  unit: string;
  /** Best amplitude of this mode with the other causes, and its standard uncertainty. */
  amplitude: number;
  amplitudeUnc: number;
  /** Share of the change (weighted sum of squares) that it explains, after the causes found before it. */
  share: number;
}

export interface Cause {
  /** Best first; more than one where the data cannot tell them apart. */
  modes: ModeFinding[];
  /** Of the first mode. */
  share: number;
  /** Probability of so much by noise alone, all modes looked at (an upper bound where it is small). */
  chanceProbability: number;
  /** "the detector shifted along the spectrum, or the grating turned: the data cannot tell". */
  sentence: string;
}

export interface Diagnosis {
  /** none: no more than noise, or nothing the geometry does. */
  outcome: "explained" | "partly-explained" | "none";
  causes: Cause[];
  /** Share of each mode taken alone, in the order given: several large ones mean curves that look alike. */
  sharesAlone: { id: string; share: number }[];
  /**
   * What is left after all causes, chi-squared with its degrees of freedom in units of the stated uncertainties. More than chance of it
   * makes the outcome `partly-explained`, or tells a change that the geometry does not make from none at all.
   */
  leftChiSquare: number;
  leftDegreesOfFreedom: number;
  /** Whether the scatter stood in for the stated uncertainties. */
  noiseFrom: "stated" | "scatter";
  /** For people. */
  sentence: string;
}

const SAME_WITHIN_CHI_SQUARE = 3.841458820694124;
const SCATTER_CHANCE = 0.01;
const MOST_CAUSES = 2;
/** Squared length below which a mode's curve is nothing but the others'. */
const DEPENDENT = 1e-9;

/**
 * Diagnose a change of error.
 *
 * @param changes  two or more lines
 * @param modes    from `arrayModes` or `sineDriveModes` at the same wavelengths, in the same order
 * @throws {RangeError} caller bugs: fewer than 2 lines, no modes, lengths that differ, uncertainties not above 0
 */
export function diagnoseChange(
  changes: readonly ErrorChange[],
  modes: readonly GeometryMode[],
  options: DiagnosisOptions = {},
): Diagnosis {
  const n = changes.length;
  if (n < 2 || modes.length === 0)
    throw new RangeError(`Diagnosis needs 2 lines and a mode; got ${n} and ${modes.length}`);
  for (const mode of modes)
    if (mode.curveNm.length !== n)
      throw new RangeError(`Mode ${mode.id} has ${mode.curveNm.length} points for ${n} lines`);
  for (const change of changes)
    if (!Number.isFinite(change.changeNm) || (!options.covarianceNm2 && !(change.uncNm > 0)))
      throw new RangeError("A change must be finite and its uncertainty above 0");
  const rate = options.falseFindingRate ?? 0.05;
  const whitener = new Whitener(options.covarianceNm2 ?? diagonal(changes), n);
  const y = whitener.whiten(changes.map((change) => change.changeNm));
  const total = dot(y, y);
  const curves = modes.map((mode) => whitener.whiten(mode.curveNm));
  const noise = noiseOf(y, curves);

  const sharesAlone = modes.map((mode, j) => {
    const along = dot(curves[j]!, y);
    const square = dot(curves[j]!, curves[j]!);
    return { id: mode.id, share: square > 0 && total > 0 ? (along * along) / square / total : 0 };
  });

  const causes: Cause[] = [];
  const chosen: number[] = [];
  let rest = y;
  let open: Float64Array[] = [...curves];
  while (causes.length < MOST_CAUSES && chosen.length < n - 1 && total > 0) {
    const step = bestMode(open, curves, rest);
    if (step === null) break;
    const chanceProbability = chanceOfLargest(
      open,
      curves,
      step.explained / noise.variance,
      noise.degreesOfFreedom,
      rate,
    );
    if (!(chanceProbability < rate)) break;
    const alike = step.all
      .filter(({ explained }) => step.explained - explained <= SAME_WITHIN_CHI_SQUARE * noise.variance)
      .sort((a, b) => b.explained - a.explained);
    const found = alike.map(({ j, explained }): ModeFinding => {
      const { amplitude, variance } = amplitudeWith(curves, [...chosen, j], y);
      return {
        id: modes[j]!.id,
        words: modes[j]!.words,
        unit: modes[j]!.unit,
        amplitude,
        amplitudeUnc: Math.sqrt(variance * noise.variance),
        share: explained / total,
      };
    });
    causes.push({ modes: found, share: found[0]!.share, chanceProbability, sentence: causeSentence(found) });
    chosen.push(step.j);
    const direction = unit(open[step.j]!);
    rest = without(rest, direction);
    open = open.map((curve) => without(curve, direction));
  }

  const left = dot(rest, rest);
  const leftDegreesOfFreedom = n - chosen.length;
  const isLeftNoise = !(chiSquareUpperTail(left, leftDegreesOfFreedom) < rate);
  const outcome = causes.length === 0 ? "none" : isLeftNoise ? "explained" : "partly-explained";
  return {
    outcome,
    causes,
    sharesAlone,
    leftChiSquare: left,
    leftDegreesOfFreedom,
    noiseFrom: noise.from,
    sentence: sentenceOf(outcome, causes, isLeftNoise),
  };
}

function diagonal(changes: readonly ErrorChange[]): Float64Array {
  const n = changes.length;
  const covariance = new Float64Array(n * n);
  changes.forEach(({ uncNm }, i) => (covariance[i * n + i] = uncNm * uncNm));
  return covariance;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

function unit(curve: Float64Array): Float64Array {
  const length = Math.sqrt(dot(curve, curve));
  return curve.map((value) => value / length);
}

/** The part of a curve square to a unit direction. */
function without(curve: Float64Array, direction: Float64Array): Float64Array {
  const along = dot(curve, direction);
  return curve.map((value, i) => value - along * direction[i]!);
}

/** Variance of the noise in units of the stated one, from what no combination of modes explains. */
function noiseOf(
  y: Float64Array,
  curves: readonly Float64Array[],
): { variance: number; degreesOfFreedom: number; from: "stated" | "scatter" } {
  let rest = y;
  let open = [...curves];
  let dimensions = 0;
  for (;;) {
    // The longest remaining curve first, as in a pivoted factorisation.
    let pivot = -1;
    let largest = DEPENDENT;
    open.forEach((curve, j) => {
      const relative = dot(curve, curve) / (dot(curves[j]!, curves[j]!) || 1);
      if (relative > largest) {
        largest = relative;
        pivot = j;
      }
    });
    if (pivot < 0 || dimensions === y.length) break;
    const direction = unit(open[pivot]!);
    rest = without(rest, direction);
    open = open.map((curve) => without(curve, direction));
    dimensions++;
  }
  const degreesOfFreedom = y.length - dimensions;
  const chiSquare = dot(rest, rest);
  if (degreesOfFreedom >= 3 && chiSquareUpperTail(chiSquare, degreesOfFreedom) < SCATTER_CHANCE)
    return { variance: chiSquare / degreesOfFreedom, degreesOfFreedom, from: "scatter" };
  return { variance: 1, degreesOfFreedom: Infinity, from: "stated" };
}

interface Step {
  j: number;
  explained: number;
  all: { j: number; explained: number }[];
}

/** What each mode still explains once the chosen ones are taken out; null where none has anything of its own. */
function bestMode(open: readonly Float64Array[], curves: readonly Float64Array[], rest: Float64Array): Step | null {
  const all: { j: number; explained: number }[] = [];
  open.forEach((curve, j) => {
    const square = dot(curve, curve);
    if (!(square > DEPENDENT * dot(curves[j]!, curves[j]!))) return;
    const along = dot(curve, rest);
    all.push({ j, explained: (along * along) / square });
  });
  let best: { j: number; explained: number } | null = null;
  for (const candidate of all) if (best === null || candidate.explained > best.explained) best = candidate;
  return best === null ? null : { ...best, all };
}

/** P(the largest of the modes' correlated statistics >= this one | noise alone); an upper bound where that decides already. */
function chanceOfLargest(
  open: readonly Float64Array[],
  curves: readonly Float64Array[],
  statistic: number,
  degreesOfFreedom: number,
  rate: number,
): number {
  // One amplitude's own probability: F(1, dof), or chi-squared where the noise is known.
  const single =
    degreesOfFreedom === Infinity
      ? chiSquareUpperTail(statistic, 1)
      : regularizedBeta(degreesOfFreedom / (degreesOfFreedom + statistic), degreesOfFreedom / 2, 0.5);
  // Far from the limit on either side the bounds decide: at least a single one's probability, at most all of them together.
  if (single >= rate || single * open.length < rate / 100) return Math.min(1, single * open.length);
  const z = -normalQuantile(single / 2);
  const directions = open.flatMap((curve, j) =>
    dot(curve, curve) > DEPENDENT * dot(curves[j]!, curves[j]!) ? [unit(curve)] : [],
  );
  const k = directions.length;
  const correlation = new Float64Array(k * k);
  for (let a = 0; a < k; a++)
    for (let b = 0; b < k; b++)
      correlation[a * k + b] = a === b ? 1 : Math.min(1, Math.max(-1, dot(directions[a]!, directions[b]!)));
  const zeros = new Float64Array(k);
  const within = normalRectangleProbability(
    zeros,
    correlation,
    zeros.map(() => -z),
    zeros.map(() => z),
    {
      tolerance: 2e-3,
      maxPoints: 1500,
    },
  );
  return Math.min(1, Math.max(single, 1 - within.probability));
}

/** Amplitude of the last of these modes, fitted together with the others, and its variance in units of the noise's. */
function amplitudeWith(
  curves: readonly Float64Array[],
  indices: readonly number[],
  y: Float64Array,
): { amplitude: number; variance: number } {
  let own = curves[indices.at(-1)!]!;
  let rest = y;
  let others = indices.slice(0, -1).map((j) => curves[j]!);
  while (others.length > 0) {
    const direction = unit(others[0]!);
    own = without(own, direction);
    rest = without(rest, direction);
    others = others.slice(1).map((curve) => without(curve, direction));
  }
  const square = dot(own, own);
  return { amplitude: dot(own, rest) / square, variance: 1 / square };
}

function causeSentence(found: readonly ModeFinding[]): string {
  const words = found.map((mode) => mode.words);
  if (words.length === 1) return words[0]!;
  return `${words.slice(0, -1).join(", ")}, or ${words.at(-1)!}: the data cannot tell`;
}

function sentenceOf(outcome: Diagnosis["outcome"], causes: readonly Cause[], isLeftNoise: boolean): string {
  if (outcome === "none") {
    return isLeftNoise
      ? "The error has not changed by more than its uncertainty."
      : "The error has changed, but not in a way that a shifted, turned, tilted or warmed instrument would show.";
  }
  const told = causes.map((cause, i) => {
    const share = Math.round(100 * Math.min(cause.share, 1));
    return `${i === 0 ? "Most likely" : "Besides"} ${cause.sentence} (explains ${share} % of the change).`;
  });
  if (!isLeftNoise) told.push("What is left is more than noise and fits no further change of the geometry.");
  return told.join(" ");
}
