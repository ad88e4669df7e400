/**
 * The next interval of a configuration, with its reasoning as data and as a sentence.
 *
 * Reliability   the longest interval after which the probability of still being in tolerance is at least the target, from the forecast
 *               (drift/forecast.ts), that is ILAC-G24 / OIML D 10 method 2 carried out on the whole history; looked for day by day in whole weeks.
 * Other rules   staircase, simple response, exponential reliability, drift line and time in use (rules.ts) are worked out beside it.
 * Decision      a shorter interval is proposed whenever the chosen rule or the history says so; a longer one never beyond what the
 *               evidence holds: not longer than the reliability rule allows, and not longer than `longestStep` times the present one.
 * Limits        a proposal, for a person to accept. Between `floorDays` and `ceilingDays`. Fewer than 6 checks: the present interval stays.
 */
import { DAYS_PER_YEAR, isoDateOfDay } from "../drift/civil-date.ts";
import { chooseModel } from "../drift/choose-model.ts";
import { leastJudged, type DriftSettings } from "../drift/assess-drift.ts";
import { continuationOf, predictInterval, probabilityOut, type Continuation } from "../drift/forecast.ts";
import { seriesOf, type DriftCheck } from "../drift/history.ts";
import { oddEvidenceOf } from "../drift/odd-checks.ts";
import {
  commonSteps,
  daysOfUseLeft,
  driftLineInterval,
  exponentialInterval,
  reliabilityFromCounts,
  simpleResponse,
  staircase,
  type Finding,
  type StaircaseSteps,
} from "./rules.ts";

export type IntervalMethod =
  "reliability-target" | "staircase" | "simple-response" | "exponential-reliability" | "drift-line" | "time-in-use";

export interface IntervalSettings extends Pick<DriftSettings, "tolerance"> {
  /** The interval in force, days. */
  presentDays: number;
  method: IntervalMethod;
  /** P(in tolerance at the interval's end) to be kept; absent = 0.95. */
  target?: number;
  /** Absent = 30 and 3 times the present interval. */
  floorDays?: number;
  ceilingDays?: number;
  /** At most this many times the present interval at once; absent = 1.5. */
  longestStep?: number;
  /** As found at each calibration since the interval was last changed, oldest first; absent = none. */
  findings?: Finding[];
  staircaseSteps?: StaircaseSteps;
  /** Simple response; absent = 0.1 and 0.55, which tends to 89 % in tolerance. */
  response?: { a: number; b: number };
  /** Guard between limit and drift line, nm; absent = 0. */
  guardNm?: number;
  /** Hours of use (or cycles): allowed between calibrations, since the last one, a day; absent = use is not counted. */
  use?: { allowed: number; sinceLast: number; perDay: number };
}

export interface RuleAnswer {
  method: IntervalMethod;
  /** null = this rule can't say, with the reason in `note`. */
  days: number | null;
  note: string;
}

export interface IntervalProposal {
  presentDays: number;
  proposedDays: number;
  direction: "shorter" | "kept" | "longer";
  /** By the last check's date. */
  dueOn: string | null;
  method: IntervalMethod;
  /** What every rule says by itself. */
  rules: RuleAnswer[];
  /** P(in tolerance) at the end of the present and of the proposed interval; null with too few checks. */
  reliabilityAtPresent: number | null;
  reliabilityAtProposed: number | null;
  target: number;
  /** What held the answer of the method back. */
  heldBy: "nothing" | "floor" | "ceiling" | "longest-step" | "evidence" | "too-few-checks";
  why: string;
}

/** Whole weeks are looked at, this many years far. */
const farthestYears = 10;

/** @param history  checks of one configuration, any order */
export function proposeInterval(history: readonly DriftCheck[], settings: IntervalSettings): IntervalProposal {
  const present = settings.presentDays;
  const target = settings.target ?? 0.95;
  const floorDays = settings.floorDays ?? Math.min(30, present);
  const ceilingDays = settings.ceilingDays ?? 3 * present;
  const ordered = [...history].sort((a, b) => a.day - b.day);
  const series = seriesOf(ordered);
  const last = series === null ? null : series.days[series.count - 1]!;
  const enough = series !== null && series.count >= leastJudged && settings.tolerance.length > 0;
  const continuation = enough
    ? continuationOf(series, chooseModel(series, oddEvidenceOf(series, ordered).logFactor), null)
    : null;
  const reliability = (days: number): number | null =>
    continuation === null || last === null ? null : reliabilityAt(continuation, settings, last + days);
  const longest = continuation === null ? null : longestReliable(reliability as (days: number) => number, target);
  const rules = answers(settings, target, longest, continuation, last);
  const answer = rules.find((rule) => rule.method === settings.method)!;

  let days = answer.days ?? present;
  let heldBy: IntervalProposal["heldBy"] = answer.days === null ? "too-few-checks" : "nothing";
  const hold = (limit: number, by: IntervalProposal["heldBy"]): void => {
    if (days <= limit) return;
    days = limit;
    heldBy = by;
  };
  if (days > present) {
    hold(longest === null ? present : Math.max(present, longest), longest === null ? "too-few-checks" : "evidence");
    hold((settings.longestStep ?? 1.5) * present, "longest-step");
  }
  // What the history shows shortens by itself, whichever rule was chosen.
  if (longest !== null && longest < present) hold(longest, "evidence");
  hold(ceilingDays, "ceiling");
  days = Math.floor(days);
  if (days < floorDays) {
    days = floorDays;
    heldBy = "floor";
  }
  const direction = days < present ? "shorter" : days > present ? "longer" : "kept";
  const proposal: IntervalProposal = {
    presentDays: present,
    proposedDays: days,
    direction,
    dueOn: last === null ? null : isoDateOfDay(last + days),
    method: settings.method,
    rules,
    reliabilityAtPresent: reliability(present),
    reliabilityAtProposed: reliability(days),
    target,
    heldBy,
    why: "",
  };
  proposal.why = sentence(proposal, answer);
  return proposal;
}

/** Probability that no segment is out of tolerance on a day; the least over segments, which move together. */
function reliabilityAt(continuation: Continuation, settings: IntervalSettings, day: number): number {
  let least = 1;
  for (const segment of settings.tolerance) {
    least = Math.min(least, 1 - probabilityOut(continuation, segment, day, "instrument"));
  }
  return least;
}

/** Days until the reliability first falls below the target, in whole weeks; 0 when it is below it now. */
function longestReliable(reliability: (days: number) => number, target: number): number {
  const end = Math.floor((farthestYears * DAYS_PER_YEAR) / 7);
  if (reliability(0) < target) return 0;
  // Reliability falls with time but for a drift through zero: the first fall is what counts, so the search steps before it halves.
  let low = 0;
  let step = 1;
  while (low + step <= end && reliability(7 * (low + step)) >= target) {
    low += step;
    step = Math.min(8, step * 2);
  }
  let high = Math.min(low + step, end);
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (reliability(7 * middle) >= target) low = middle;
    else high = middle;
  }
  return 7 * low;
}

function answers(
  settings: IntervalSettings,
  target: number,
  longest: number | null,
  continuation: Continuation | null,
  last: number | null,
): RuleAnswer[] {
  const { presentDays, findings = [] } = settings;
  const none = (method: IntervalMethod, note: string): RuleAnswer => ({ method, days: null, note });
  const few = `fewer than ${leastJudged} checks, or no tolerance`;
  const rules: RuleAnswer[] = [];
  rules.push(
    longest === null
      ? none("reliability-target", few)
      : {
          method: "reliability-target",
          days: longest,
          note: `longest time with P(in tolerance) of at least ${percent(target)}`,
        },
  );
  const step = staircase(presentDays, findings, settings.staircaseSteps ?? commonSteps);
  const lastFinding = findings.at(-1);
  rules.push(
    lastFinding === undefined
      ? none("staircase", "no calibration as found")
      : {
          method: "staircase",
          days: step.interval,
          note: `last found at ${percent(lastFinding.shareOfLimit)} of the limit: ${step.move}`,
        },
  );
  const { a, b } = settings.response ?? { a: 0.1, b: 0.55 };
  const found = findings.map((finding) => finding.shareOfLimit <= 1);
  rules.push(
    lastFinding === undefined
      ? none("simple-response", "no calibration as found")
      : {
          method: "simple-response",
          days: simpleResponse(presentDays, found.at(-1)!, a, b),
          note: `last found ${found.at(-1)! ? "in" : "out of"} tolerance`,
        },
  );
  const observed = reliabilityFromCounts(found.filter(Boolean).length, found.length);
  rules.push(
    found.length < 4
      ? none("exponential-reliability", "fewer than 4 calibrations as found")
      : {
          method: "exponential-reliability",
          days: exponentialInterval(presentDays, observed, target),
          note: `${found.filter(Boolean).length} of ${found.length} found in tolerance`,
        },
  );
  rules.push(
    continuation === null || last === null ? none("drift-line", few) : driftLineAnswer(settings, continuation, last),
  );
  rules.push(
    settings.use === undefined
      ? none("time-in-use", "use is not counted")
      : {
          method: "time-in-use",
          days: daysOfUseLeft(settings.use.allowed, settings.use.sinceLast, settings.use.perDay),
          note: `${settings.use.sinceLast} of ${settings.use.allowed} used`,
        },
  );
  return rules.map((rule) => (rule.days === null || rule.days < Infinity ? rule : { ...rule, days: null }));
}

/** The forecast's middle as a line over the next year, at the end of the range where it is larger, against the tightest tolerance. */
function driftLineAnswer(settings: IntervalSettings, continuation: Continuation, last: number): RuleAnswer {
  const at = (day: number, x: number): number =>
    predictInterval(continuation, "mid", day, "state", 0.9).valueNm +
    x * predictInterval(continuation, "scale", day, "state", 0.9).valueNm;
  const limit = settings.tolerance.reduce((least, segment) => Math.min(least, segment.toleranceNm), Infinity);
  let days = Infinity;
  for (const x of [-0.5, 0.5]) {
    const now = at(last, x);
    const perDay = (at(last + DAYS_PER_YEAR, x) - now) / DAYS_PER_YEAR;
    days = Math.min(days, driftLineInterval(limit, settings.guardNm ?? 0, now, Math.abs(perDay) < 1e-9 ? 0 : perDay));
  }
  return days === Infinity
    ? { method: "drift-line", days: null, note: "no drift" }
    : { method: "drift-line", days: Math.max(0, days), note: "line of the forecast meets limit less guard" };
}

function sentence(proposal: IntervalProposal, answer: RuleAnswer): string {
  const held: Record<IntervalProposal["heldBy"], string> = {
    nothing: "",
    floor: " It is not made shorter than the floor.",
    ceiling: " It is held at the ceiling.",
    "longest-step": " More at once is not proposed.",
    evidence: " The evidence holds no longer time.",
    "too-few-checks": " There is not enough evidence to lengthen it.",
  };
  const now =
    proposal.reliabilityAtProposed === null
      ? ""
      : ` P(in tolerance) at its end is ${percent(proposal.reliabilityAtProposed)}; after the present ${proposal.presentDays} days it is ${percent(proposal.reliabilityAtPresent!)}.`;
  const verb = { shorter: "Shorten to", kept: "Keep", longer: "Lengthen to" }[proposal.direction];
  return `${verb} ${proposal.proposedDays} days (${answer.method.replaceAll("-", " ")}: ${answer.note}).${now}${held[proposal.heldBy]}`;
}

function percent(share: number): string {
  return `${(100 * share).toFixed(1)} %`;
}
