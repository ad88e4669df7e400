/**
 * What the instruments of a laboratory have in common: errors split into instrument + source + date.
 *
 * Split     error at mid-range of a check = level of its instrument + shares that several instruments have in common + scatter. Common shares
 *           are looked for one after the other, the most probable first (forward selection by the evidence of evidence.ts, each class
 *           paying for the number of its candidates): all checks of one day; all from a day on; all with one source; all with one source from a day
 *           on; all with one version of the core or of the line list.
 * Robust    a share counts as common when it stays probable (1 : 100) without the instrument that speaks for it most, when three
 *           instruments at least take part, three in four of them in its direction, and when a common jump explains them better than a
 *           trend of each one's own. Its size is the median of the instruments' own sizes.
 * Weights   1/(stated variance + the instrument's scatter between checks squared).
 * Reported  once, as one finding, with the conditions that differ beside it. A signal of an instrument that is gone when the common
 *           shares are taken off is marked as explained. Units nm, days, K, Pa.
 * Limits    a source that one instrument alone uses can't be told from the instrument. Where all checks from a day on used
 *           one source, source and day can't be told apart either, and the finding says so.
 */
import { log } from "../numeric/elementary.ts";
import { median } from "../spectrum/median.ts";
import { signalsOf, type DriftSignal } from "./assess-drift.ts";
import { isoDateOfDay } from "./civil-date.ts";
import { logBayesFactor } from "./evidence.ts";
import { seriesOf, weightingUncs, type DriftCheck } from "./history.ts";

export interface FleetCheck extends DriftCheck {
  /** Absent = not recorded. */
  pressurePa?: number | null;
  coreVersion?: string | null;
  lineListVersion?: string | null;
}

export interface InstrumentHistory {
  /** What the caller knows the configuration by. */
  id: string;
  checks: readonly FleetCheck[];
}

export type CommonKind = "day" | "from-day" | "source" | "source-from-day" | "core-version" | "line-list-version";

export interface CommonFinding {
  kind: CommonKind;
  /** Source or version; null for days. */
  label: string | null;
  /** First and last check that take part. */
  from: string;
  to: string;
  shiftNm: number;
  shiftUncNm: number;
  /** Instruments that take part, and their checks (index into each history as it was given). */
  instruments: string[];
  checks: { instrument: string; index: number }[];
  /** Means of the checks that take part less those of the same instruments' other checks; null where not recorded. */
  beside: { temperatureK: number | null; pressurePa: number | null };
  /** Other causes that take in the same checks: the data can't tell them apart. */
  notToldFrom: { kind: CommonKind; label: string | null }[];
  /** ln of the odds for it against chance, without its strongest instrument. */
  logOdds: number;
  sentence: string;
}

export interface CommonCauses {
  findings: CommonFinding[];
  /** Signals of each instrument; `explainedBy` is an index into `findings`, null = the instrument's own. */
  instruments: { id: string; signals: (DriftSignal & { explainedBy: number | null })[] }[];
}

interface Row {
  instrument: number;
  /** Index into the instrument's history as given. */
  index: number;
  day: number;
  value: number;
  weight: number;
  check: FleetCheck;
}

interface Candidate {
  kind: CommonKind;
  label: string | null;
  fromDay: number | null;
  rows: number[];
}

const leastInstruments = 3;
const leastLogOdds = 4.6;
const sameDirection = 0.75;
const mostFindings = 8;

export function commonCauses(histories: readonly InstrumentHistory[]): CommonCauses {
  const rows = rowsOf(histories);
  const values = rows.map((row) => row.value);
  const findings: CommonFinding[] = [];
  for (let round = 0; round < mostFindings; round++) {
    const best = bestOf(rows, values, candidatesOf(rows));
    if (best === null) break;
    for (const i of best.candidate.rows) values[i]! -= best.shiftNm;
    findings.push(findingOf(histories, rows, best));
  }
  return { findings, instruments: histories.map((history, i) => explained(history, i, rows, values, findings)) };
}

function rowsOf(histories: readonly InstrumentHistory[]): Row[] {
  const rows: Row[] = [];
  histories.forEach(({ checks }, instrument) => {
    const series = seriesOf(checks);
    if (series === null) return;
    const usable = checks
      .map((check, index) => ({ check, index }))
      .filter(({ check }) => check.lines.length > 0 || check.point !== undefined);
    const uncs = weightingUncs(series.midErrorNm, series.midUncNm);
    for (let i = 0; i < series.count; i++) {
      const index = series.order[i]!;
      const check = usable.find((one) => one.index === index)!.check;
      const weight = 1 / (uncs[i]! * uncs[i]!);
      rows.push({ instrument, index, day: Math.floor(series.days[i]!), value: series.midErrorNm[i]!, weight, check });
    }
  });
  return rows;
}

/** Every group of checks that could share a cause and that at least three instruments take part in with checks outside it too. */
function candidatesOf(rows: readonly Row[]): Candidate[] {
  const candidates: Candidate[] = [];
  const days = [...new Set(rows.map((row) => row.day))].sort((a, b) => a - b);
  const add = (kind: CommonKind, label: string | null, fromDay: number | null, takes: (row: Row) => boolean): void => {
    const inside = new Set<number>();
    const outside = new Set<number>();
    const kept: number[] = [];
    rows.forEach((row, i) => {
      if (takes(row)) {
        kept.push(i);
        inside.add(row.instrument);
      } else outside.add(row.instrument);
    });
    let both = 0;
    for (const instrument of inside) if (outside.has(instrument)) both += 1;
    if (both >= leastInstruments) candidates.push({ kind, label, fromDay, rows: kept });
  };
  for (const day of days) {
    add("day", null, day, (row) => row.day === day);
    add("from-day", null, day, (row) => row.day >= day);
  }
  for (const source of labelsOf(rows, (row) => row.check.source)) {
    add("source", source, null, (row) => row.check.source === source);
    const used = [...new Set(rows.filter((row) => row.check.source === source).map((row) => row.day))];
    for (const day of used.sort((a, b) => a - b).slice(1)) {
      add("source-from-day", source, day, (row) => row.check.source === source && row.day >= day);
    }
  }
  for (const version of labelsOf(rows, (row) => row.check.coreVersion))
    add("core-version", version, null, (row) => row.check.coreVersion === version);
  for (const version of labelsOf(rows, (row) => row.check.lineListVersion))
    add("line-list-version", version, null, (row) => row.check.lineListVersion === version);
  return candidates;
}

function labelsOf(rows: readonly Row[], label: (row: Row) => string | null | undefined): string[] {
  const labels = new Set<string>();
  for (const row of rows) {
    const one = label(row);
    if (one !== null && one !== undefined && one !== "") labels.add(one);
  }
  return [...labels].sort();
}

interface Judged {
  candidate: Candidate;
  shiftNm: number;
  shiftUncNm: number;
  logOdds: number;
  equals: Candidate[];
}

function bestOf(rows: readonly Row[], values: readonly number[], candidates: readonly Candidate[]): Judged | null {
  const perKind = new Map<CommonKind, number>();
  for (const { kind } of candidates) perKind.set(kind, (perKind.get(kind) ?? 0) + 1);
  let best: Judged | null = null;
  for (const candidate of candidates) {
    const judged = judge(rows, values, candidate, log(perKind.get(candidate.kind)!));
    if (judged !== null && (best === null || judged.logOdds > best.logOdds)) best = judged;
  }
  if (best === null) return null;
  const same = best.candidate.rows.join(" ");
  best.equals = candidates.filter((one) => one !== best.candidate && one.rows.join(" ") === same);
  return best;
}

/** One instrument's part: how its checks inside differ from those outside. */
interface Part {
  instrument: number;
  shift: number;
  variance: number;
  /** Weighted sums of squares about one level, two levels, and a straight line of its own. */
  oneLevel: number;
  twoLevels: number;
  line: number;
  points: number;
}

function judge(rows: readonly Row[], values: readonly number[], candidate: Candidate, price: number): Judged | null {
  const parts = partsOf(rows, values, candidate);
  if (parts.length < leastInstruments) return null;
  const shiftNm = median(parts.map((part) => part.shift));
  const agreeing = parts.filter((part) => part.shift * shiftNm > 0).length;
  if (agreeing < sameDirection * parts.length) return null;
  let oneLevel = 0;
  let withCommon = 0;
  let line = 0;
  let points = 0;
  let strongest = 0;
  let strongestGain = -Infinity;
  const gains = parts.map((part) => {
    const off = part.shift - shiftNm;
    return part.oneLevel - (part.twoLevels + (off * off) / part.variance);
  });
  parts.forEach((part, i) => {
    if (gains[i]! > strongestGain) {
      strongestGain = gains[i]!;
      strongest = i;
    }
    oneLevel += part.oneLevel;
    withCommon += part.oneLevel - gains[i]!;
    line += part.line;
    points += part.points;
  });
  if (candidate.fromDay !== null && withCommon > line) return null;
  const left = parts[strongest]!;
  const level = oneLevel - left.oneLevel;
  const common = Math.min(level, withCommon - (left.oneLevel - strongestGain));
  const dof = points - left.points - (parts.length - 1);
  const logOdds = logBayesFactor(level, common, 1, dof) - price;
  if (!(logOdds >= leastLogOdds)) return null;
  let weight = 0;
  let spread = 0;
  for (const part of parts) {
    weight += 1 / part.variance;
    spread += ((part.shift - shiftNm) * (part.shift - shiftNm)) / part.variance;
  }
  // The median of n normal values scatters 1.2533 times as much as their mean.
  const shiftUncNm = 1.2533 * Math.sqrt(Math.max(1, spread / (parts.length - 1)) / weight);
  return { candidate, shiftNm, shiftUncNm, logOdds, equals: [] };
}

function partsOf(rows: readonly Row[], values: readonly number[], candidate: Candidate): Part[] {
  const inside = new Uint8Array(rows.length);
  const taking = new Set<number>();
  for (const i of candidate.rows) {
    inside[i] = 1;
    taking.add(rows[i]!.instrument);
  }
  const parts: Part[] = [];
  for (const instrument of taking) {
    const own: number[] = [];
    rows.forEach((row, i) => {
      if (row.instrument === instrument) own.push(i);
    });
    const sums = [new Float64Array(3), new Float64Array(3)];
    for (const i of own) {
      const to = sums[inside[i]!]!;
      const { weight } = rows[i]!;
      to[0]! += weight;
      to[1]! += weight * values[i]!;
      to[2]! += weight * values[i]! * values[i]!;
    }
    const [outer, inner] = sums as [Float64Array, Float64Array];
    if (!(outer[0]! > 0) || !(inner[0]! > 0)) continue;
    const about = (s: Float64Array): number => Math.max(0, s[2]! - (s[1]! * s[1]!) / s[0]!);
    const all = outer.map((value, k) => value + inner[k]!);
    parts.push({
      instrument,
      shift: inner[1]! / inner[0]! - outer[1]! / outer[0]!,
      variance: 1 / inner[0]! + 1 / outer[0]!,
      oneLevel: about(all),
      twoLevels: about(outer) + about(inner),
      line: aboutOwnLine(rows, values, own),
      points: own.length,
    });
  }
  return parts;
}

function aboutOwnLine(rows: readonly Row[], values: readonly number[], own: readonly number[]): number {
  let w = 0;
  let wt = 0;
  let wy = 0;
  for (const i of own) {
    w += rows[i]!.weight;
    wt += rows[i]!.weight * rows[i]!.day;
    wy += rows[i]!.weight * values[i]!;
  }
  let tt = 0;
  let ty = 0;
  let yy = 0;
  for (const i of own) {
    const t = rows[i]!.day - wt / w;
    const y = values[i]! - wy / w;
    tt += rows[i]!.weight * t * t;
    ty += rows[i]!.weight * t * y;
    yy += rows[i]!.weight * y * y;
  }
  return tt > 0 ? Math.max(0, yy - (ty * ty) / tt) : yy;
}

function findingOf(histories: readonly InstrumentHistory[], rows: readonly Row[], judged: Judged): CommonFinding {
  const { candidate, shiftNm, shiftUncNm, logOdds, equals } = judged;
  const taking = candidate.rows.map((i) => rows[i]!);
  const instruments = [...new Set(taking.map((row) => row.instrument))];
  const inside = new Set(candidate.rows);
  const others = rows.filter((row, i) => !inside.has(i) && instruments.includes(row.instrument));
  const difference = (of: (row: Row) => number | null | undefined): number | null => {
    const a = meanOf(taking, of);
    const b = meanOf(others, of);
    return a === null || b === null ? null : a - b;
  };
  const finding: CommonFinding = {
    kind: candidate.kind,
    label: candidate.label,
    from: isoDateOfDay(Math.min(...taking.map((row) => row.day))),
    to: isoDateOfDay(Math.max(...taking.map((row) => row.day))),
    shiftNm,
    shiftUncNm,
    instruments: instruments.map((instrument) => histories[instrument]!.id),
    checks: taking.map((row) => ({ instrument: histories[row.instrument]!.id, index: row.index })),
    beside: {
      temperatureK: difference((row) => row.check.temperatureC),
      pressurePa: difference((row) => row.check.pressurePa),
    },
    notToldFrom: equals.map(({ kind, label }) => ({ kind, label })),
    logOdds,
    sentence: "",
  };
  finding.sentence = sentenceOf(finding);
  return finding;
}

function meanOf(rows: readonly Row[], of: (row: Row) => number | null | undefined): number | null {
  let sum = 0;
  let count = 0;
  for (const row of rows) {
    const value = of(row);
    if (value === null || value === undefined) continue;
    sum += value;
    count += 1;
  }
  return count === 0 ? null : sum / count;
}

const causes: Record<CommonKind, (finding: CommonFinding) => string> = {
  day: ({ from }) => `on ${from}`,
  "from-day": ({ from }) => `from ${from} on`,
  source: ({ label }) => `with source ${label}`,
  "source-from-day": ({ label, from }) => `with source ${label} from ${from} on`,
  "core-version": ({ label }) => `measured with core ${label}`,
  "line-list-version": ({ label }) => `measured with line list ${label}`,
};

function sentenceOf(finding: CommonFinding): string {
  const { shiftNm, shiftUncNm, instruments, beside, notToldFrom } = finding;
  const sign = shiftNm < 0 ? "−" : "+";
  let text =
    `All ${instruments.length} instruments ${causes[finding.kind](finding)} share ${sign}${Math.abs(shiftNm).toFixed(4)} ± ` +
    `${(2 * shiftUncNm).toFixed(4)} nm (k = 2): one cause outside them, not ${instruments.length} of their own.`;
  if (beside.temperatureK !== null && Math.abs(beside.temperatureK) >= 1)
    text += ` The room was ${Math.abs(beside.temperatureK).toFixed(1)} K ${beside.temperatureK > 0 ? "warmer" : "colder"} then.`;
  if (beside.pressurePa !== null && Math.abs(beside.pressurePa) >= 500)
    text += ` The pressure was ${Math.abs(beside.pressurePa / 100).toFixed(0)} hPa ${beside.pressurePa > 0 ? "higher" : "lower"} then.`;
  if (notToldFrom.length > 0) {
    const others = notToldFrom.map((one) => (one.label === null ? one.kind.replaceAll("-", " ") : one.label));
    text += ` The same checks also share: ${others.join(", ")}; the data can't tell these apart.`;
  }
  return text;
}

/** Signals of one instrument as it is and with the common shares taken off: what is gone was not its own. */
function explained(
  history: InstrumentHistory,
  instrument: number,
  rows: readonly Row[],
  values: readonly number[],
  findings: readonly CommonFinding[],
): CommonCauses["instruments"][number] {
  const signals = signalsOf(history.checks);
  if (signals.length === 0) return { id: history.id, signals: [] };
  const shares = new Map<number, number>();
  rows.forEach((row, i) => {
    if (row.instrument === instrument) shares.set(row.index, row.value - values[i]!);
  });
  const freed = history.checks.map((check, index) => withoutShare(check, shares.get(index) ?? 0));
  const own = signalsOf(freed);
  return {
    id: history.id,
    signals: signals.map((signal) => {
      const remains = own.some((one) => one.kind === signal.kind && Math.abs(one.index - signal.index) <= 3);
      const cause = remains ? -1 : findings.findIndex((finding) => finding.instruments.includes(history.id));
      return { ...signal, explainedBy: cause < 0 ? null : cause };
    }),
  };
}

function withoutShare(check: FleetCheck, shareNm: number): FleetCheck {
  if (shareNm === 0) return check;
  const lines = check.lines.map((line) => ({ ...line, errorNm: line.errorNm - shareNm }));
  return check.point === undefined
    ? { ...check, lines }
    : { ...check, lines, point: { ...check.point, midErrorNm: check.point.midErrorNm - shareNm } };
}
