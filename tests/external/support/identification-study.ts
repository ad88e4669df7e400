/**
 * How often the lines of a capture are named, and how often wrongly: in each mode, from lists of found lines (`line-generator`) or from
 * whole simulated captures (`simulated-check`; the project's own simulator). The mixes are written down there.
 */
import { analyseCapture, builtInLineList, type IdentificationMode } from "../../../packages/core/src/index.ts";
import { identifyLines, type IdentifiedLines } from "../../../packages/core/src/identify/identify-lines.ts";
import { generateCapture, powersOfPixel, Random, type GeneratedCapture } from "./line-generator.ts";
import { simulatedCheck } from "./simulated-check.ts";

export type ModeKind = IdentificationMode["kind"];

export interface StudyQuestion {
  mode: ModeKind;
  captures: number;
  seed: number;
  /** `lines`: found lines without a spectrum; `captures`: whole captures, read, fitted and named. */
  source: "lines" | "captures";
  /** Fewest lines of the lamp in a generated list; default 5. */
  fewest?: number;
}

export interface IdentificationStudy {
  captures: number;
  identified: number;
  ambiguous: number;
  /** Captures with six or more found lines of one element of the lamp, and how many of them were identified. */
  withSixLines: number;
  identifiedOfThose: number;
  named: number;
  /** One sentence for each line that was named wrongly. */
  wrongLines: string[];
  medianMs: number;
}

/** Mode for a generated list: an earlier axis wrong by up to 3 FWHM and 1 % in scale, or ends each wrong by up to 5 % of the span. */
export function modeOf(capture: GeneratedCapture, kind: ModeKind, random: Random): IdentificationMode {
  const span = capture.lastNm - capture.firstNm;
  const ends = [random.uniform(-0.05, 0.05) * span, random.uniform(-0.05, 0.05) * span] as const;
  const offset = random.uniform(-3, 3) * capture.fwhmPx;
  const scale = 1 + random.uniform(-0.01, 0.01);
  if (kind === "none") return { kind };
  if (kind === "range") return { kind, firstNm: capture.firstNm + ends[0], lastNm: capture.lastNm + ends[1] };
  // The earlier axis read at middle + (p - middle) scale + offset: wrong by an offset and a scale in pixels.
  const middle = (capture.pixels - 1) / 2;
  const shift = middle * (1 - scale) + offset;
  const coefficients = powersOfPixel(capture).reduceRight<number[]>((sum, coefficient) => {
    const next = new Array<number>(sum.length + 1).fill(0);
    sum.forEach((value, k) => {
      next[k] = (next[k] as number) + value * shift;
      next[k + 1] = (next[k + 1] as number) + value * scale;
    });
    next[0] = (next[0] as number) + coefficient;
    return next;
  }, []);
  const axis = {
    coefficients,
    firstPx: 0,
    lastPx: capture.pixels - 1,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
  };
  return { kind, axis: { ...axis, meaning: "standard-air" } };
}

export function identifyGenerated(
  capture: GeneratedCapture,
  elements: string[],
  mode: IdentificationMode,
): IdentifiedLines {
  return identifyLines({
    lines: capture.lines,
    firstPosition: 0,
    lastPosition: capture.pixels - 1,
    axisKind: "pixel",
    medianFwhm: capture.fwhmPx,
    elements,
    expectedLinesNm: [],
    lineList: builtInLineList,
    mode,
    axisMeaning: "standard-air",
    toleranceNm: null,
  });
}

/** Names that no component with 2 % of the line's light bears. */
export function wrongNames(capture: GeneratedCapture, result: IdentifiedLines): string[] {
  return result.names.flatMap((name, i) => {
    if (name === null) return [];
    const truth = capture.truth[i];
    const parts = name.blendOf.length > 0 ? name.blendOf.map((line) => line.wavelengthAirNm) : [name.wavelengthNm];
    const isRight = truth?.components.some((line) =>
      parts.some((nm) => Math.abs((nm ?? 0) - (line.wavelengthAirNm ?? line.wavelengthVacuumNm)) < 0.002),
    );
    return isRight
      ? []
      : [
          `${capture.elements.join("")} ${capture.instrument}: ${name.wavelengthNm} nm for ${truth?.nm.toFixed(3) ?? "a stray"}`,
        ];
  });
}

/** Run one study; the same question gives the same counts. */
export function runIdentificationStudy(question: StudyQuestion): IdentificationStudy {
  const study: IdentificationStudy = {
    captures: question.captures,
    identified: 0,
    ambiguous: 0,
    withSixLines: 0,
    identifiedOfThose: 0,
    named: 0,
    wrongLines: [],
    medianMs: 0,
  };
  const times: number[] = [];
  const random = new Random(question.seed);
  for (let n = 0; n < question.captures; n++) {
    const one = question.source === "lines" ? fromList(question, random) : fromCapture(question, question.seed + n);
    times.push(one.elapsedMs);
    study.named += one.named;
    study.wrongLines.push(...one.wrong);
    if (one.outcome === "identified") study.identified += 1;
    if (one.outcome === "ambiguous") study.ambiguous += 1;
    if (!one.hasSixLines) continue;
    study.withSixLines += 1;
    if (one.outcome === "identified") study.identifiedOfThose += 1;
  }
  times.sort((a, b) => a - b);
  study.medianMs = times[times.length >> 1] ?? 0;
  return study;
}

interface OneAnswer {
  outcome: string;
  hasSixLines: boolean;
  named: number;
  wrong: string[];
  elapsedMs: number;
}

function fromList({ mode, fewest }: StudyQuestion, random: Random): OneAnswer {
  const capture = generateCapture(builtInLineList, random, fewest ?? 5);
  const asked = modeOf(capture, mode, random);
  const start = performance.now();
  const result = identifyGenerated(capture, capture.elements, asked);
  const elapsedMs = performance.now() - start;
  const found = capture.truth.map((line) => line?.components[0]?.element);
  return {
    outcome: result.outcome,
    hasSixLines: hasSix(capture.elements, found),
    named: result.names.filter((name) => name !== null).length,
    wrong: wrongNames(capture, result),
    elapsedMs,
  };
}

function fromCapture({ mode }: StudyQuestion, seed: number): OneAnswer {
  const check = simulatedCheck(seed, mode === "none" ? "range" : mode);
  const setup = mode === "none" ? { ...check.setup, mode: { kind: mode } } : check.setup;
  const start = performance.now();
  const { analysis } = analyseCapture(check.sim.text, setup);
  const elapsedMs = performance.now() - start;
  const wrong: string[] = [];
  const found: (string | undefined)[] = [];
  for (const line of analysis.lines) {
    const reach = line.blendOfNm.length > 1 ? 0.75 : 0.25;
    const near = check.sim.truth.filter(
      (one) => Math.abs(one.position - line.position) < reach * one.fwhm + 3 * line.positionUnc,
    );
    found.push(near.find((one) => one.signalToNoise > 3)?.element);
    if (line.wavelengthNm === null) continue;
    const names = [line.wavelengthNm, ...line.blendOfNm];
    if (!near.some((one) => names.some((nm) => Math.abs(nm - one.wavelengthNm) < 0.05))) {
      wrong.push(`seed ${seed}: ${line.wavelengthNm} nm at ${line.position.toFixed(2)} px`);
    }
  }
  const named = analysis.lines.filter((line) => line.wavelengthNm !== null).length;
  return { outcome: analysis.outcome, hasSixLines: hasSix(setup.elements, found), named, wrong, elapsedMs };
}

const hasSix = (elements: readonly string[], found: readonly (string | undefined)[]): boolean =>
  elements.some((element) => found.filter((one) => one === element).length >= 6);
