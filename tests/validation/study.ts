/** Many simulated captures, counted: what `npm run validate` prints and what people try things with. */
import type { LineShapeChoice } from "../../packages/core/src/index.ts";
import { judgeCapture, type Judged, type ModeName } from "./judge.ts";
import { mixes, simulate, type Mix } from "./simulator/index.ts";

export interface StudyOptions {
  mode: ModeName;
  mix: Mix["name"];
  captures: number;
  /** First seed; the captures are seed, seed + 1, ... */
  seed: number;
  lineShape?: LineShapeChoice;
  /** Called after each capture. */
  each?: (seed: number, judged: Judged, about: string) => void;
}

export interface StudyCounts {
  captures: number;
  solved: number;
  identified: number;
  ambiguous: number;
  wrongIdentification: number;
  withSix: number;
  identifiedOfSix: number;
  named: number;
  wrongLines: number;
  /** Seed and place of each wrong line, at most 40. */
  wrongList: string[];
  unsolvedList: string[];
  linesHeld: number;
  linesTried: number;
  axisHeld: number;
  axisTried: number;
  /** Sum, sum of squares and number of the squared departures over the bound. */
  bound: { sum: number; squares: number; count: number };
  elapsedMs: number[];
}

export function emptyCounts(): StudyCounts {
  return {
    captures: 0,
    solved: 0,
    identified: 0,
    ambiguous: 0,
    wrongIdentification: 0,
    withSix: 0,
    identifiedOfSix: 0,
    named: 0,
    wrongLines: 0,
    wrongList: [],
    unsolvedList: [],
    linesHeld: 0,
    linesTried: 0,
    axisHeld: 0,
    axisTried: 0,
    bound: { sum: 0, squares: 0, count: 0 },
    elapsedMs: [],
  };
}

export function runStudy(options: StudyOptions): StudyCounts {
  const counts = emptyCounts();
  for (let seed = options.seed; seed < options.seed + options.captures; seed += 1) {
    const sim = simulate(seed, mixes[options.mix], { onlyUnnamedAxes: options.mode === "none" });
    const judged = judgeCapture(sim, options.mode, options.lineShape);
    addTo(counts, seed, judged);
    options.each?.(
      seed,
      judged,
      `${sim.lamp} ${sim.axisKind} ${sim.samples} samples ${sim.instrument.spanNm.toFixed(0)} nm FWHM ${sim.instrument.fwhmMid.toFixed(1)}${sim.instrument.isFalling ? " falling" : ""} [${sim.troubles.join(" ")}]`,
    );
  }
  return counts;
}

function addTo(counts: StudyCounts, seed: number, judged: Judged): void {
  counts.captures += 1;
  if (judged.isSolved) counts.solved += 1;
  else if (counts.unsolvedList.length < 40)
    counts.unsolvedList.push(
      `${seed}: ${judged.outcome}${judged.wrong.length > 0 ? `, ${judged.wrong.length} wrong` : ""}${Number.isNaN(judged.axisOffSamples) ? "" : `, axis off by ${judged.axisOffSamples.toFixed(2)}`}`,
    );
  if (judged.outcome === "identified") counts.identified += 1;
  if (judged.outcome === "ambiguous") counts.ambiguous += 1;
  if (judged.clearOfOneElement >= 6) {
    counts.withSix += 1;
    if (judged.outcome === "identified") counts.identifiedOfSix += 1;
  }
  // More than half the names wrong: the whole reading of the capture is, not a line of it.
  if (judged.wrong.length > 0.5 * judged.named) counts.wrongIdentification += 1;
  counts.named += judged.named;
  counts.wrongLines += judged.wrong.length;
  for (const one of judged.wrong)
    if (counts.wrongList.length < 40)
      counts.wrongList.push(
        `${seed} at ${one.position.toFixed(2)}: named ${one.namedNm.toFixed(3)}, truly ${one.trueNm?.toFixed(3) ?? "nothing"}, off by ${one.offBySamples.toFixed(2)} samples`,
      );
  counts.linesHeld += judged.linesHeld;
  counts.linesTried += judged.linesTried;
  counts.axisHeld += judged.axisHeld;
  counts.axisTried += judged.axisTried;
  for (const value of judged.overBound) {
    counts.bound.sum += value;
    counts.bound.squares += value * value;
    counts.bound.count += 1;
  }
  counts.elapsedMs.push(judged.elapsedMs);
}

export function medianOf(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted.length === 0 ? Number.NaN : sorted[sorted.length >> 1]!;
}

/** "96.2 ± 0.4 %": a share with its binomial standard uncertainty (never below that of one count in three). */
export function share(part: number, whole: number): string {
  if (whole === 0) return "none tried";
  const p = part / whole;
  const unc = Math.sqrt(Math.max(p * (1 - p), 1 / 3 / whole) / whole);
  const digits = unc < 0.0005 ? 2 : 1;
  return `${(100 * p).toFixed(digits)} ± ${(100 * unc).toFixed(digits)} %`;
}
