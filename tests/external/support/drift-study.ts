/**
 * The drift room measured on invented instruments with known truth: which kind is found, how soon, how often a stable instrument is alerted, and
 * whether forecasts hold what they state. Every share comes with its standard error; the same seed gives the same figures.
 */
import { assessDrift } from "../../../packages/core/src/drift/assess-drift.ts";
import { chooseModel } from "../../../packages/core/src/drift/choose-model.ts";
import { watch } from "../../../packages/core/src/drift/default-rules.ts";
import { continuationOf, crossingOf, predictInterval } from "../../../packages/core/src/drift/forecast.ts";
import { seriesOf } from "../../../packages/core/src/drift/history.ts";
import { oddEvidenceOf } from "../../../packages/core/src/drift/odd-checks.ts";
import {
  createDraws,
  realisticSettings,
  simulateHistory,
  toDriftChecks,
  trueKinds,
  type SimulatedHistory,
  type TrueKind,
} from "./drift-history.ts";

export interface Share {
  of: number;
  count: number;
  share: number;
  /** Standard error, binomial. */
  error: number;
}

export interface DriftStudy {
  /** true kind -> found kind -> number. */
  confusion: Record<TrueKind, Record<TrueKind, number>>;
  right: Share;
  rightByKind: Record<TrueKind, Share>;
  /** Stable instruments in 60 monthly checks after the limits' own: alerts of the default rules per instrument, by number of checks before. */
  falseAlerts: { checksBefore: number; perInstrument: number; error: number; anyAlert: Share }[];
  /** All signals, evidence included, of stable histories of 60 monthly checks. */
  falseSignals: { perInstrument: number; error: number; any: Share };
  /** Steps of 3 to 10 standard deviations: checks from the step to the first signal at or after it, and histories with a signal before it. */
  stepDelay: { median: number; nine10: number; missed: Share; early: Share };
  /** Checks after the forecast was made, within the 90 % interval for a check: last check of the 40 % that was held back. */
  backtest90: Share;
  /** 90 % and 95 % intervals of the crossing date that hold the true one, of histories found to drift. */
  crossing90: Share;
  crossing95: Share;
  /** |date - true date| over the time left, of the same. */
  crossingError: { median: number; nine10: number; count: number };
  /** True crossing dates that the interval's date lies before, of the same: half when unbiased. */
  crossingEarly: Share;
}

export interface DriftStudySettings {
  /** Histories of each kind, and instruments of each of the other parts. */
  instruments: number;
  seed: number;
  /** Share of the instruments whose signals are looked for check by check, which takes longest; absent = 1. */
  signalShare?: number;
}

export function runDriftStudy({ instruments, seed, signalShare = 1 }: DriftStudySettings): DriftStudy {
  const confusion = Object.fromEntries(
    trueKinds.map((kind) => [kind, Object.fromEntries(trueKinds.map((found) => [found, 0]))]),
  ) as DriftStudy["confusion"];
  const drawsOf = (part: number, i: number) => createDraws(seed + 100003 * part + 7919 * i);
  trueKinds.forEach((kind, k) => {
    for (let i = 0; i < instruments; i++) {
      const { model } = modelOf(simulateHistory(kind, drawsOf(k + 1, i)));
      confusion[kind][model.kind] += 1;
    }
  });
  const rightByKind = Object.fromEntries(
    trueKinds.map((kind) => [kind, shareOf(confusion[kind][kind], instruments)]),
  ) as DriftStudy["rightByKind"];
  const right = trueKinds.reduce((sum, kind) => sum + confusion[kind][kind], 0);
  return {
    confusion,
    right: shareOf(right, instruments * trueKinds.length),
    rightByKind,
    falseAlerts: [8, 12, 20].map((checksBefore) => falseAlerts(checksBefore, instruments, (i) => drawsOf(11, i))),
    ...signalParts(Math.max(5, Math.round(instruments * signalShare)), drawsOf),
    ...forecastParts(instruments, (i) => drawsOf(14, i)),
  };
}

function shareOf(count: number, of: number): Share {
  const share = of === 0 ? NaN : count / of;
  return { of, count, share, error: Math.sqrt(Math.max(share * (1 - share), 0.25 / of) / of) };
}

function modelOf(history: SimulatedHistory) {
  const checks = toDriftChecks(history);
  const series = seriesOf(checks)!;
  return { series, model: chooseModel(series, oddEvidenceOf(series, checks).logFactor) };
}

const monthly = { spacingDays: [30, 31] as [number, number], jitter: 0.1 };

function falseAlerts(
  checksBefore: number,
  instruments: number,
  draws: (i: number) => ReturnType<typeof createDraws>,
): DriftStudy["falseAlerts"][number] {
  const counts: number[] = [];
  for (let i = 0; i < instruments; i++) {
    const count = checksBefore + 60;
    const history = simulateHistory("stable", draws(i), { ...realisticSettings, ...monthly, checks: [count, count] });
    const charts = watch(seriesOf(toDriftChecks(history))!).filter((chart) => chart.alerts);
    counts.push(charts.flatMap((chart) => chart.signals.filter((index) => index >= checksBefore)).length);
  }
  return {
    checksBefore,
    ...meanOf(counts),
    anyAlert: shareOf(counts.filter((count) => count > 0).length, instruments),
  };
}

function meanOf(counts: readonly number[]): { perInstrument: number; error: number } {
  const mean = counts.reduce((a, b) => a + b, 0) / counts.length;
  const squares = counts.reduce((a, b) => a + (b - mean) ** 2, 0);
  return { perInstrument: mean, error: Math.sqrt(squares / (counts.length - 1) / counts.length) };
}

function signalParts(
  instruments: number,
  drawsOf: (part: number, i: number) => ReturnType<typeof createDraws>,
): Pick<DriftStudy, "falseSignals" | "stepDelay"> {
  const counts: number[] = [];
  const delays: number[] = [];
  let early = 0;
  for (let i = 0; i < instruments; i++) {
    const stable = { ...realisticSettings, ...monthly, checks: [60, 60] as [number, number] };
    counts.push(signalsOf(simulateHistory("stable", drawsOf(12, i), stable)).length);
    const stepped = simulateHistory("step", drawsOf(13, i));
    const signals = signalsOf(stepped);
    if (signals.some((signal) => signal.index < stepped.place!)) early += 1;
    const first = signals.find((signal) => signal.index >= stepped.place!);
    if (first !== undefined) delays.push(first.index - stepped.place!);
  }
  const sorted = delays.toSorted((a, b) => a - b);
  return {
    falseSignals: { ...meanOf(counts), any: shareOf(counts.filter((count) => count > 0).length, instruments) },
    stepDelay: {
      median: sorted[sorted.length >> 1] ?? NaN,
      nine10: sorted[Math.floor(sorted.length * 0.9)] ?? NaN,
      missed: shareOf(instruments - delays.length, instruments),
      early: shareOf(early, instruments),
    },
  };
}

function signalsOf(history: SimulatedHistory) {
  return assessDrift(toDriftChecks(history), { tolerance: [] }).signals;
}

/** Drifting instruments whose tolerance is such that they truly cross it between a fifth and the whole of the history's span later. */
function forecastParts(
  instruments: number,
  draws: (i: number) => ReturnType<typeof createDraws>,
): Pick<DriftStudy, "backtest90" | "crossing90" | "crossing95" | "crossingError" | "crossingEarly"> {
  const errors: number[] = [];
  let held = 0;
  let tested = 0;
  const holds = { 0.9: 0, 0.95: 0 };
  let early = 0;
  for (let i = 0; i < instruments; i++) {
    const random = draws(i);
    const kind = i % 2 === 0 ? "drift" : trueKinds[i % trueKinds.length]!;
    const whole = simulateHistory(kind, random);
    const last = whole.checks.at(-1)!;
    if (whole.kind === "drift" || whole.kind === "stable" || whole.kind === "scale") {
      const known = { ...whole, checks: whole.checks.slice(0, Math.max(8, Math.floor(whole.checks.length * 0.6))) };
      const { series, model } = modelOf(known);
      const heldBack = seriesOf(toDriftChecks({ ...whole, checks: [...known.checks, last] }))!;
      const interval = predictInterval(continuationOf(series, model, null), "mid", last.day, "check", 0.9);
      const measured = heldBack.midErrorNm[heldBack.count - 1]!;
      tested += 1;
      if (interval.lowNm <= measured && measured <= interval.highNm) held += 1;
    }
    if (whole.kind !== "drift") continue;
    const first = whole.checks[0]!.day;
    const crossing = last.day + random.between(0.2, 1) * (last.day - first);
    const largest = (day: number): number => {
      const { midErrorNm, scaleErrorNm } = whole.truth(day);
      return Math.abs(midErrorNm) + Math.abs(scaleErrorNm) / 2;
    };
    const toleranceNm = largest(crossing);
    // An error that shrinks first would cross twice.
    if (largest(first) >= toleranceNm || largest(last.day) >= toleranceNm) continue;
    const { series, model } = modelOf(whole);
    if (model.kind !== "drift") continue;
    const continuation = continuationOf(series, model, "drift");
    const segment = { fromNm: 0, toNm: 1e5, toleranceNm };
    for (const coverage of [0.9, 0.95] as const) {
      const { day, lowDay, highDay } = crossingOf(continuation, segment, coverage, 100);
      if ((lowDay ?? Infinity) <= crossing && crossing <= (highDay ?? Infinity)) holds[coverage] += 1;
      if (coverage === 0.9) continue;
      errors.push(Math.abs((day ?? Infinity) - crossing) / (crossing - last.day));
      if ((day ?? Infinity) < crossing) early += 1;
    }
  }
  errors.sort((a, b) => a - b);
  return {
    backtest90: shareOf(held, tested),
    crossing90: shareOf(holds[0.9], errors.length),
    crossing95: shareOf(holds[0.95], errors.length),
    crossingError: {
      median: errors[errors.length >> 1] ?? NaN,
      nine10: errors[Math.floor(errors.length * 0.9)] ?? NaN,
      count: errors.length,
    },
    crossingEarly: shareOf(early, errors.length),
  };
}

/** The study as text, one line a figure. */
export function describeDriftStudy(study: DriftStudy): string[] {
  const percent = ({ share, error, of }: Share): string =>
    `${(100 * share).toFixed(1)} ± ${(100 * error).toFixed(1)} % of ${of}`;
  return [
    `kind found right: ${percent(study.right)}`,
    ...trueKinds.map(
      (kind) =>
        `  ${kind.padEnd(12)} ${trueKinds.map((found) => `${found} ${study.confusion[kind][found]}`).join(", ")}`,
    ),
    ...study.falseAlerts.map(
      (one) =>
        `false alerts of a stable instrument in 60 monthly checks, limits from ${one.checksBefore} checks on: ` +
        `${one.perInstrument.toFixed(2)} ± ${one.error.toFixed(2)} (any: ${percent(one.anyAlert)})`,
    ),
    `all signals of a stable history of 60 checks: ${study.falseSignals.perInstrument.toFixed(2)} ± ${study.falseSignals.error.toFixed(2)} (any: ${percent(study.falseSignals.any)})`,
    `step to first signal: median ${study.stepDelay.median} checks, nine in ten within ${study.stepDelay.nine10}; missed ${percent(study.stepDelay.missed)}; a signal before it ${percent(study.stepDelay.early)}`,
    `later checks within their 90 % interval: ${percent(study.backtest90)}`,
    `crossing date within its 90 % interval: ${percent(study.crossing90)}; within its 95 % interval: ${percent(study.crossing95)}`,
    `crossing date off by ${(100 * study.crossingError.median).toFixed(1)} % of the time left in the median, ${(100 * study.crossingError.nine10).toFixed(0)} % for nine in ten; early for ${percent(study.crossingEarly)}`,
  ];
}
