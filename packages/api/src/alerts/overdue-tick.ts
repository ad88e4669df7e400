/** What is overdue as of now in one lab: alerts and, once a due date, a mail. Asking again changes nothing. */
import { and, eq, isNotNull, isNull, lt, not, sql } from "drizzle-orm";
import { awaitsReview } from "../checks/list-checks.ts";
import type { Standing } from "../contract/common.ts";
import type { Database } from "../db/connection.ts";
import { configurations, instruments, sources } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { calledText, configurationPath } from "../instruments/called.ts";
import { dateIn, dayText, daysBetween, dueText } from "../instruments/dates.ts";
import { findStanding, listManagers, lockConfiguration } from "../instruments/queries.ts";
import type { Jobs } from "../jobs/jobs.ts";
import type { Config } from "../config.ts";
import { queueMail } from "../mail/outbox.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";
import { openAlert } from "./open-and-close.ts";

export interface TickWork {
  db: Database;
  jobs: Jobs;
  config: Pick<Config, "publicUrl">;
}

/** Open the alerts of overdue checks and of sources past their review. @returns how many were opened */
export function openDueAlerts(work: TickWork, lab: Parameters<typeof asWavekeep>[0]): Promise<number> {
  const ctx = asWavekeep(lab);
  return inLab(work.db, ctx, async (tx) => {
    const today = dateIn(ctx.zone, await recordNow(tx));
    const entries = [...(await openOverdue(tx, ctx, work, today)), ...(await openSourceReviews(tx, ctx, work, today))];
    if (entries.length > 0) await writeTrail(tx, ctx, entries);
    return entries.length;
  });
}

async function openOverdue(tx: Tx, ctx: Context, work: TickWork, today: string): Promise<TrailInput[]> {
  const due = await tx
    .select({
      configurationId: configurations.id,
      instrumentId: instruments.id,
      instrumentName: instruments.name,
      configurationName: configurations.name,
      ownerId: instruments.ownerId,
    })
    .from(configurations)
    .innerJoin(
      instruments,
      and(eq(instruments.labId, configurations.labId), eq(instruments.id, configurations.instrumentId)),
    )
    .where(
      and(
        isNull(instruments.retiredAt),
        isNull(configurations.toOn),
        isNotNull(configurations.dueOn),
        sql`${configurations.dueOn} + ${configurations.graceDays} < ${today}::date`,
        not(awaitsReview(sql`${configurations.labId}`, sql`${configurations.id}`)),
      ),
    )
    .orderBy(configurations.id);
  const entries: TrailInput[] = [];
  for (const one of due) {
    const configuration = await lockConfiguration(tx, one.configurationId);
    const standing = (await findStanding(tx, one.configurationId)).standing as Standing;
    // What is out of use is not due: it is held by something stronger.
    if (standing !== "in-service" && standing !== "restricted") continue;
    const dueOn = configuration.dueOn!;
    const called = calledText(one.instrumentName, one.configurationName);
    const opened = await openAlert(tx, ctx, {
      kind: "overdue",
      about: { instrumentId: one.instrumentId, configurationId: one.configurationId },
      checkId: null,
      title: `The check of ${called} is overdue`,
      detail: `It was due on ${dayText(dueOn)}.`,
    });
    if (opened.length === 0) continue;
    entries.push(...opened);
    const told = new Set([
      one.ownerId,
      ...(configuration.assignedToId === null ? [] : [configuration.assignedToId]),
      ...(await listManagers(tx)).map((manager) => manager.personId),
    ]);
    for (const personId of told) {
      await queueMail(tx, ctx, work.jobs, {
        to: { personId },
        subject: `The check of ${called} is overdue`,
        text: `The check of ${called} was due on ${dayText(dueOn)} and is ${dueText(daysBetween(today, dueOn))}.\n\n${work.config.publicUrl}${configurationPath(one)}\n`,
        causeKey: `overdue:${one.configurationId}:${dueOn}:${personId}`,
      });
    }
  }
  return entries;
}

async function openSourceReviews(tx: Tx, ctx: Context, work: TickWork, today: string): Promise<TrailInput[]> {
  const past = await tx
    .select({ id: sources.id, label: sources.label, name: sources.name, reviewDueOn: sources.reviewDueOn })
    .from(sources)
    .where(and(isNull(sources.retiredAt), lt(sources.reviewDueOn, today)))
    .orderBy(sources.id)
    .for("update");
  const entries: TrailInput[] = [];
  for (const source of past) {
    const opened = await openAlert(tx, ctx, {
      kind: "source-review",
      about: { sourceId: source.id },
      checkId: null,
      title: `The review of ${source.label} is due`,
      detail: `${source.name}: review due on ${dayText(source.reviewDueOn!)}.`,
    });
    if (opened.length === 0) continue;
    entries.push(...opened);
    for (const { personId } of await listManagers(tx)) {
      await queueMail(tx, ctx, work.jobs, {
        to: { personId },
        subject: `The review of ${source.label} is due`,
        text: `${source.label}, ${source.name}, was to be reviewed by ${dayText(source.reviewDueOn!)}. Until then its certificate is past its date.\n\n${work.config.publicUrl}/sources/${source.id}\n`,
        causeKey: `source-review:${source.id}:${source.reviewDueOn}:${personId}`,
      });
    }
  }
  return entries;
}
