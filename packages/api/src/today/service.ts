/** Today: what waits for this person, most urgent first, as sentences; what is due; the fleet. */
import type { Context, Tx } from "../db/tenancy.ts";
import { hasRole, inLab, ownsInstrument, recordNow } from "../db/tenancy.ts";
import type { Database } from "../db/connection.ts";
import type { TodayReply } from "../contract/work.ts";
import { listAlertRows, type AlertRow } from "../alerts/queries.ts";
import { listCheckRows, type CheckRow } from "../checks/list-checks.ts";
import { countText, percentText, verdictText, worstText } from "../checks/words.ts";
import { listReviewRows, type ReviewRow } from "../impact/queries.ts";
import { addDays, clockText, dateIn, daysBetween, dueText, shortDayText } from "../instruments/dates.ts";
import { calledText, checkOfText, configurationPath } from "../instruments/called.ts";
import { fleetOf, listFleetConfigurations, type FleetConfiguration } from "../instruments/fleet.ts";
import { findLab } from "../labs/queries.ts";
import { listContributedChecks, listHolds, listSourcesDue, type HoldRow, type SourceDue } from "./queries.ts";
import { rulerNote, todaySentence } from "./sentence.ts";

export type TodayItem = TodayReply["items"][number];

/** How far ahead the ruler of due dates reaches, and how far ahead a technician is told. */
const rulerDays = 42;
const soonDays = 7;
const mostRows = 50;

export interface TodayFacts {
  ctx: Context;
  today: string;
  now: Date;
  /** Every present configuration: what is due and asked for is its own. */
  configurations: FleetConfiguration[];
  holds: HoldRow[];
  submitted: CheckRow[];
  drafts: CheckRow[];
  contributed: Set<string>;
  selfApproval: boolean;
  reviews: ReviewRow[];
  alerts: AlertRow[];
  recent: CheckRow[];
}

export function readToday(db: Database, ctx: Context): Promise<TodayReply> {
  return inLab(db, ctx, async (tx) => {
    const facts = await gather(tx, ctx);
    const sourcesDue = await listSourcesDue(tx, addDays(facts.today, rulerDays));
    const items = [
      ...holdItems(facts),
      ...reviewItems(facts),
      ...returnedItems(facts),
      ...impactItems(facts),
      ...alertItems(facts),
      ...dueItems(facts),
      ...draftItems(facts),
      ...recentItems(facts),
    ];
    return {
      on: facts.today,
      sentence: todaySentence(items),
      items,
      due: dueList(facts, sourcesDue),
      fleet: fleetOf(facts.configurations),
    };
  });
}

async function gather(tx: Tx, ctx: Context): Promise<TodayFacts> {
  const now = await recordNow(tx);
  const today = dateIn(ctx.zone, now);
  const reviewer = hasRole(ctx, "manager") || ctx.isApprover;
  const submitted = reviewer ? await listCheckRows(tx, { states: ["submitted"], limit: mostRows }) : [];
  const drafts =
    ctx.personId === null
      ? []
      : await listCheckRows(tx, {
          states: ["begun", "set-aside", "returned"],
          personId: ctx.personId,
          limit: mostRows,
        });
  return {
    ctx,
    today,
    now,
    configurations: await listFleetConfigurations(tx, today),
    holds: await listHolds(tx),
    submitted,
    drafts,
    contributed: await listContributedChecks(
      tx,
      ctx.personId,
      submitted.map(({ summary }) => summary.id),
    ),
    selfApproval: (await findLab(tx, ctx.labId)).selfApproval,
    reviews: (await listReviewRows(tx)).filter((row) => row.decision === null),
    alerts: await listAlertRows(tx, { state: "open", limit: 200 }),
    recent: hasRole(ctx, "auditor") ? await listCheckRows(tx, { states: ["approved"], limit: 8 }) : [],
  };
}

const when = ({ ctx, today }: TodayFacts, at: Date): string => {
  const on = dateIn(ctx.zone, at);
  const clock = clockText(ctx.zone, at);
  const days = daysBetween(on, today);
  return days === 0 ? `today ${clock}` : days === 1 ? `yesterday ${clock}` : `${shortDayText(on, today)}, ${clock}`;
};

/** Holds that no manager has decided about. */
function holdItems(facts: TodayFacts): TodayItem[] {
  if (!hasRole(facts.ctx, "manager")) return [];
  return facts.holds
    .filter((hold) => !hold.decided)
    .map((hold) => {
      const row = facts.configurations.find((one) => one.configurationId === hold.configurationId);
      const since =
        dateIn(facts.ctx.zone, hold.since) === facts.today
          ? clockText(facts.ctx.zone, hold.since)
          : shortDayText(dateIn(facts.ctx.zone, hold.since), facts.today);
      const review = facts.reviews.find((one) => one.review.configurationId === hold.configurationId);
      const doubt =
        review === undefined ? "" : ` ${review.ownerName} decides about the results ${windowText(facts, review)}.`;
      return {
        key: `hold:${hold.configurationId}`,
        kind: "hold-decision",
        state: "out-of-tolerance",
        title: `${calledText(hold.instrumentName, hold.configurationName)} is out of tolerance, on hold since ${since}; your decision waits.`,
        detail: `${hold.reason}${doubt}${row?.asLeftAsked === true ? " An as-left check is asked for." : ""}`,
        link: hold.checkId === null ? null : { label: hold.checkNumber ?? "Check", to: `/checks/${hold.checkId}` },
        action: { label: "Confirm or lift the hold", to: configurationPath(hold, { doing: "hold" }) },
      };
    });
}

const windowText = ({ ctx, today }: TodayFacts, { review }: ReviewRow): string => {
  const to = dateIn(ctx.zone, review.windowTo);
  const end = to === today ? "today" : shortDayText(to, today);
  return review.windowFrom === null
    ? `up to ${end}`
    : `between ${shortDayText(dateIn(ctx.zone, review.windowFrom), today)} and ${end}`;
};

/** Submitted checks this person may sign. */
function reviewItems(facts: TodayFacts): TodayItem[] {
  return facts.submitted
    .filter(({ summary }) => facts.selfApproval || !facts.contributed.has(summary.id))
    .map((row) => ({
      key: `review:${row.summary.id}`,
      kind: "review",
      state: null,
      title: `Review the check of ${calledOf(row)}, ${row.summary.number}.`,
      detail: `${row.submittedBy?.name ?? ""}, ${when(facts, new Date(row.summary.submittedAt!))}. ${resultText(row)}`,
      link: null,
      action: { label: "Review and sign", to: `/checks/${row.summary.id}` },
    }));
}

/** `Near limit, 78 % used; 79 % with every line. 2 attempts; one line left out.` */
function resultText({ summary }: CheckRow): string {
  const { result } = summary;
  if (result === null) return "No result yet.";
  const word = verdictText(result.verdict, result.nearLimit);
  const used = result.toleranceUsed === null ? "" : `, ${percentText(result.toleranceUsed)} used`;
  const every = result.withEveryLine;
  const differs =
    every !== null && every.toleranceUsed !== null && result.leftOutCount > 0
      ? `; ${percentText(every.toleranceUsed)} with every line`
      : "";
  const attempts = summary.attemptCount > 1 ? ` ${countText(summary.attemptCount, "attempt")};` : "";
  const leftOut =
    result.leftOutCount === 0 ? "Nothing left out." : `${countText(result.leftOutCount, "line")} left out.`;
  const rest = `${attempts} ${attempts === "" ? leftOut : leftOut[0]!.toLowerCase() + leftOut.slice(1)}`;
  return `${word[0]!.toUpperCase()}${word.slice(1)}${used}${differs}.${rest}`;
}

function returnedItems(facts: TodayFacts): TodayItem[] {
  return facts.drafts
    .filter(({ summary }) => summary.state === "returned")
    .map((row) => ({
      key: `returned:${row.summary.id}`,
      kind: "returned",
      state: null,
      title: `${row.summary.number} of ${calledOf(row)} was sent back.`,
      detail: row.lastEvent.comment ?? "",
      link: null,
      action: { label: "Go on with it", to: `/checks/${row.summary.id}/edit` },
    }));
}

/** Reviews of this person's own instruments; a manager is told by the hold. */
function impactItems(facts: TodayFacts): TodayItem[] {
  return facts.reviews
    .filter((row) => ownsInstrument(facts.ctx, row.review.instrumentId))
    .map((row) => ({
      key: `impact:${row.review.id}`,
      kind: "impact",
      state: null,
      title: `Which results of ${calledText(row.instrumentName, row.configurationName)} are in doubt? ${row.review.number} waits for you.`,
      detail: `Results ${windowText(facts, row)}${row.windowFromNumber === null ? "; no good check is on record before" : `, since ${row.windowFromNumber}`}.`,
      link: { label: row.checkNumber, to: `/checks/${row.review.checkId}` },
      action: { label: "Decide", to: `/impact/${row.review.id}` },
    }));
}

/** Alerts of own instruments that nobody has taken note of; sources' reviews for managers. Overdue checks stand among what is due. */
function alertItems(facts: TodayFacts): TodayItem[] {
  const { ctx } = facts;
  return facts.alerts
    .filter(({ alert }) => alert.acknowledgedAt === null && alert.kind !== "overdue")
    .filter(({ alert }) =>
      alert.instrumentId === null ? hasRole(ctx, "manager") : ownsInstrument(ctx, alert.instrumentId),
    )
    .map(({ alert, checkNumber }) => ({
      key: `alert:${alert.id}`,
      kind: "alert",
      state:
        alert.kind === "out-of-tolerance" || alert.kind === "near-limit" || alert.kind === "inconclusive"
          ? alert.kind
          : null,
      title: `${alert.title}.`,
      detail: alert.detail,
      link: alert.checkId === null ? null : { label: checkNumber ?? "Check", to: `/checks/${alert.checkId}` },
      action:
        alert.sourceId === null
          ? { label: "Take note", to: "/alerts" }
          : { label: "Review the source", to: `/sources/${alert.sourceId}` },
    }));
}

/** Overdue checks for managers and technicians; checks due soon for technicians. */
function dueItems(facts: TodayFacts): TodayItem[] {
  const { ctx, today } = facts;
  const [manager, technician] = [hasRole(ctx, "manager"), hasRole(ctx, "technician")];
  if (!manager && !technician) return [];
  return facts.configurations
    .filter(
      (row) =>
        row.asLeftAsked || (!row.awaitsReview && row.dueDays !== null && row.dueDays < (technician ? soonDays + 1 : 0)),
    )
    .filter((row) => technician || !row.asLeftAsked)
    .filter((row) => row.assignedTo === null || manager || row.assignedTo.id === ctx.personId)
    .sort((a, b) => Number(b.asLeftAsked) - Number(a.asLeftAsked) || (a.dueDays ?? 0) - (b.dueDays ?? 0))
    .map((row) => {
      const overdue = row.dueDays !== null && row.dueDays < 0;
      const last =
        row.toleranceUsed === null ? "no check yet" : `${percentText(row.toleranceUsed)} used at the last one`;
      const assigned = row.assignedTo === null ? "" : `, given to ${row.assignedTo.name}`;
      const due = row.dueOn === null ? "" : `Due ${shortDayText(row.dueOn, today)}${assigned}; ${last}.`;
      const at = { ...row, instrumentId: row.id };
      const begin = { label: "Start a check", to: `/checks/new?configuration=${row.configurationId}` };
      return {
        key: `due:${row.configurationId}`,
        kind: overdue && !row.asLeftAsked ? "overdue" : "due",
        state: null,
        title: row.asLeftAsked
          ? `An as-left check of ${calledText(row.name, row.configurationName)} is asked for.`
          : `${sentenceStart(checkOfText(row.name, row.configurationName))} is ${dueText(row.dueDays!)}.`,
        detail: row.asLeftAsked ? `${worstText(row) ?? "It was out of tolerance"} at the last check.` : due,
        link: { label: calledText(row.name, row.configurationName), to: configurationPath(at) },
        action: technician ? begin : { label: "Reassign", to: configurationPath(at, { doing: "due" }) },
      };
    });
}

const sentenceStart = (text: string): string => text[0]!.toUpperCase() + text.slice(1);

const calledOf = ({ summary }: CheckRow): string => calledText(summary.instrumentName, summary.configurationName);

function draftItems(facts: TodayFacts): TodayItem[] {
  return facts.drafts
    .filter(({ summary }) => summary.state === "begun" || summary.state === "set-aside")
    .filter(({ summary }) => summary.begunBy.id === facts.ctx.personId)
    .map((row) => ({
      key: `draft:${row.summary.id}`,
      kind: "draft",
      state: null,
      title: `${row.summary.number} of ${calledOf(row)} is ${row.summary.state === "set-aside" ? "set aside" : "not submitted yet"}.`,
      detail: `Begun ${when(facts, new Date(row.summary.begunAt))}; ${row.captureCount === 0 ? "no capture yet" : countText(row.captureCount, "capture")}.`,
      link: null,
      action: { label: "Go on with it", to: `/checks/${row.summary.id}/edit` },
    }));
}

/** What an auditor looks at first. */
function recentItems(facts: TodayFacts): TodayItem[] {
  return facts.recent.map((row) => ({
    key: `recent:${row.summary.id}`,
    kind: "recent",
    state: null,
    title: `${row.summary.number} of ${calledOf(row)}, approved.`,
    detail: `${row.summary.approvedBy?.name ?? ""}, ${when(facts, new Date(row.summary.approvedAt!))}. ${resultText(row)}`,
    link: { label: "Open", to: `/checks/${row.summary.id}` },
    action: null,
  }));
}

function dueList({ configurations, today }: TodayFacts, sources: SourceDue[]): TodayReply["due"] {
  const instruments = configurations
    .filter((row) => row.dueOn !== null && row.dueDays! <= rulerDays)
    .map((row) => ({
      label: calledText(row.name, row.configurationName),
      note: rulerNote({ ...row, dueDays: row.dueDays! }),
      on: row.dueOn!,
      days: row.dueDays!,
      to: configurationPath({ ...row, instrumentId: row.id }),
    }));
  const reviews = sources.map((source) => ({
    label: source.label,
    note: "review due",
    on: source.reviewDueOn,
    days: daysBetween(today, source.reviewDueOn),
    to: `/sources/${source.id}`,
  }));
  return [...instruments, ...reviews].sort((a, b) => a.days - b.days);
}
