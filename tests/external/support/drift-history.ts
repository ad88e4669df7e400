/**
 * Invented histories of instruments with known truth, for the drift room's studies. Independent of the code under test: it draws with the
 * engine's own functions from a generator of its own and writes lines, not points.
 *
 * Every check shows all lines with their own noise (what `uncNm` states), a shift of the whole axis from check to check (set-up, not
 * stated) and a smaller one of the scale; the room's temperature follows the seasons and wanders. Effects are drawn in units of the standard deviation
 * of one check's error at mid-range, so that "how large" means the same for good and for bad instruments.
 */
export type TrueKind = "stable" | "drift" | "scale" | "step" | "temperature" | "mislabelled";
export const trueKinds: readonly TrueKind[] = ["stable", "drift", "scale", "step", "temperature", "mislabelled"];

export interface SimulatedLine {
  wavelengthNm: number;
  measuredNm: number;
  uncNm: number;
}
export interface SimulatedCheck {
  day: number;
  temperatureC: number | null;
  source: string;
  lines: SimulatedLine[];
}
export interface SimulatedHistory {
  kind: TrueKind;
  checks: SimulatedCheck[];
  /** Standard deviation of one check's error at mid-range about the truth, nm. */
  checkSdNm: number;
  /** First check that differs (step), or the odd check; null else. */
  place: number | null;
  midNm: number;
  rangeNm: number;
  /** True error at mid-range and true scale error on a day, without noise of the check. */
  truth: (day: number) => { midErrorNm: number; scaleErrorNm: number };
  /** True change a year of the series that drifts, nm; 0 else. */
  rateNmPerYear: number;
}

export interface HistorySettings {
  checks: [number, number];
  /** Change over the whole history, in standard deviations of a check: drift, scale, temperature (over the spread of the room). */
  trendSizes: [number, number];
  stepSizes: [number, number];
  oddSizes: [number, number];
  /** Days between checks, and the share of it that it varies by. */
  spacingDays: [number, number];
  jitter: number;
}

export const realisticSettings: HistorySettings = {
  checks: [12, 60],
  trendSizes: [4, 12],
  stepSizes: [3, 10],
  oddSizes: [8, 30],
  spacingDays: [7, 91],
  jitter: 0.25,
};

const lineSets: Record<string, number[]> = {
  HgAr: [253.652, 296.728, 365.015, 404.656, 435.833, 546.074, 696.543, 763.511],
  Hg: [253.652, 365.015, 404.656, 435.833, 546.074],
  Ne: [585.249, 614.306, 640.225, 667.828, 703.241],
  Kr: [557.029, 587.092, 760.155, 769.454, 785.482, 810.437, 826.324],
  HgNe: [404.656, 435.833, 546.074, 585.249, 614.306, 640.225, 703.241],
};

/** Lehmer's generator (a 48-bit product split by hand), normal numbers by Box and Muller. */
export function createDraws(seed: number) {
  let state = (seed % 2147483646) + 1;
  const uniform = (): number => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
  for (let i = 0; i < 20; i++) uniform();
  const normal = (): number => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
  return {
    uniform,
    normal,
    between: (low: number, high: number): number => low + (high - low) * uniform(),
    logBetween: (low: number, high: number): number => low * Math.exp(Math.log(high / low) * uniform()),
    whole: (low: number, high: number): number => low + Math.floor((high - low + 1) * uniform()),
    sign: (): number => (uniform() < 0.5 ? -1 : 1),
  };
}
export type Draws = ReturnType<typeof createDraws>;

export function simulateHistory(
  kind: TrueKind,
  draws: Draws,
  settings: HistorySettings = realisticSettings,
): SimulatedHistory {
  const count = draws.whole(...settings.checks);
  const names = Object.keys(lineSets);
  const source = names[draws.whole(0, names.length - 1)]!;
  const wavelengths = lineSets[source]!;
  const first = wavelengths[0]!;
  const last = wavelengths.at(-1)!;
  const midNm = (first + last) / 2;
  const rangeNm = last - first;
  const lineUnc = draws.logBetween(0.003, 0.03);
  const setUpSd = lineUnc * draws.logBetween(0.3, 3);
  const scaleSd = setUpSd * draws.between(0.2, 0.8);
  const lineUncs = wavelengths.map(() => lineUnc * draws.logBetween(0.6, 1.8));
  const checkSdNm = Math.sqrt(setUpSd ** 2 + lineUnc ** 2 / wavelengths.length);
  const scaleCheckSd = Math.sqrt(scaleSd ** 2 + (12 * lineUnc ** 2) / wavelengths.length);

  const days: number[] = [];
  const spacing = draws.logBetween(...settings.spacingDays);
  let day = draws.whole(17000, 20000);
  for (let i = 0; i < count; i++) {
    days.push(Math.round(day));
    day += Math.max(1, spacing * (1 + settings.jitter * (2 * draws.uniform() - 1)));
  }
  const spanDays = days.at(-1)! - days[0]!;
  const season = draws.between(0.5, 2.5);
  const phase = 2 * Math.PI * draws.uniform();
  const temperatures = days.map(
    (one) => 21.5 + season * Math.sin((2 * Math.PI * one) / 365.25 + phase) + 0.6 * draws.normal(),
  );
  const meanT = temperatures.reduce((a, b) => a + b, 0) / count;
  const spreadT = Math.sqrt(temperatures.reduce((a, b) => a + (b - meanT) ** 2, 0) / (count - 1));

  const sign = draws.sign();
  const trend = sign * draws.between(...settings.trendSizes);
  const step = sign * draws.between(...settings.stepSizes);
  const odd = sign * draws.between(...settings.oddSizes);
  const place = kind === "step" ? draws.whole(3, count - 4) : kind === "mislabelled" ? draws.whole(1, count - 2) : null;
  const startMid = checkSdNm * 3 * draws.normal();
  const startScale = scaleCheckSd * 2 * draws.normal();
  const truth = (at: number) => {
    const share = (at - days[0]!) / spanDays;
    return {
      midErrorNm:
        startMid +
        (kind === "drift" ? trend * checkSdNm * share : 0) +
        (kind === "step" && at >= days[place!]! ? step * checkSdNm : 0),
      scaleErrorNm: startScale + (kind === "scale" ? trend * scaleCheckSd * share : 0),
    };
  };
  const checks = days.map((at, i) => {
    const { midErrorNm, scaleErrorNm } = truth(at);
    const warm = kind === "temperature" ? ((trend * checkSdNm) / (3.4 * spreadT)) * (temperatures[i]! - meanT) : 0;
    const isOdd = kind === "mislabelled" && i === place;
    const mid = midErrorNm + warm + (isOdd ? odd * checkSdNm : 0) + setUpSd * draws.normal();
    const scale = scaleErrorNm + scaleSd * draws.normal();
    return {
      day: at,
      temperatureC: Number(temperatures[i]!.toFixed(1)),
      source,
      lines: wavelengths.map((wavelengthNm, j) => ({
        wavelengthNm,
        measuredNm:
          wavelengthNm +
          mid +
          (scale * (wavelengthNm - midNm)) / rangeNm +
          (isOdd ? odd * checkSdNm * 0.5 * draws.normal() : 0) +
          lineUncs[j]! * draws.normal(),
        uncNm: lineUncs[j]!,
      })),
    };
  });
  const yearly = (365.2425 / spanDays) * trend;
  return {
    kind,
    checks,
    checkSdNm,
    place,
    midNm,
    rangeNm,
    truth,
    rateNmPerYear: kind === "drift" ? yearly * checkSdNm : kind === "scale" ? yearly * scaleCheckSd : 0,
  };
}

/** A simulated history as the core takes it. */
export function toDriftChecks(history: SimulatedHistory) {
  return history.checks.map(({ day, temperatureC, source, lines }) => ({
    day,
    temperatureC,
    source,
    lines: lines.map(({ wavelengthNm, measuredNm, uncNm }) => ({
      wavelengthNm,
      errorNm: measuredNm - wavelengthNm,
      ownUncNm: uncNm,
    })),
  }));
}
