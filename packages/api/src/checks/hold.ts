/**
 * What a failing check does by itself, in the transaction that causes it and without waiting for review: the configuration
 * goes on hold, an as-left check is asked for, an alert and an impact review open, owner and managers are mailed.
 */
import { and, desc, eq, isNull, sql } from "drizzle-orm";
import { openAlert } from "../alerts/open-and-close.ts";
import type { Standing } from "../contract/common.ts";
import { newId } from "../db/columns.ts";
import { configurations, standingEntries } from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { openImpactReview } from "../impact/open-review.ts";
import { calledText } from "../instruments/called.ts";
import { momentText } from "../instruments/dates.ts";
import {
  findInstrument,
  findStanding,
  listManagers,
  lockConfiguration,
  type ConfigurationRow,
  type InstrumentRow,
} from "../instruments/queries.ts";
import { isInUse } from "../instruments/states.ts";
import { queueMail } from "../mail/outbox.ts";
import type { TrailInput } from "../records/trail.ts";
import type { AnalysisRow, CheckRecord } from "./queries.ts";
import { worstText } from "./words.ts";
import type { HoldWork } from "./work.ts";

export interface FailedCheck {
  check: CheckRecord;
  analysis: AnalysisRow;
  cause: "submitted" | "set-aside";
}

/** @returns the trail entries, to be written last and as Wavekeep */
export async function placeHold(
  tx: Tx,
  ctx: Context,
  work: HoldWork,
  { check, analysis, cause }: FailedCheck,
): Promise<TrailInput[]> {
  const configuration = await lockConfiguration(tx, check.configurationId);
  const { instrument } = await findInstrument(tx, check.instrumentId);
  const before = await findStanding(tx, configuration.id);
  const wasInUse = isInUse(before.standing as Standing);
  // A draft that was set aside before, and whose hold a manager has lifted since, does not hold again by being set aside.
  if (cause === "set-aside" && (await holdOfCheck(tx, check.id)) !== null) return [];
  const finding = worstText(analysis.result) ?? "A line is out of tolerance";
  const entries: TrailInput[] = [];
  if (wasInUse)
    entries.push(
      await holdEntry(tx, ctx, { configuration, instrument, check, finding, sequence: before.sequence + 1 }),
    );
  if (configuration.asLeftAskedByCheckId === null) {
    await tx
      .update(configurations)
      .set({ asLeftAskedByCheckId: check.id, version: configuration.version + 1 })
      .where(eq(configurations.id, configuration.id));
    entries.push({ action: "as-left.asked", about: aboutConfiguration(configuration, instrument, check) });
  } else if (wasInUse) {
    await tx
      .update(configurations)
      .set({ version: configuration.version + 1 })
      .where(eq(configurations.id, configuration.id));
  }
  entries.push(
    ...(await openAlert(tx, ctx, {
      kind: "out-of-tolerance",
      about: { instrumentId: instrument.id, configurationId: configuration.id },
      checkId: check.id,
      title: `${calledText(instrument.name, configuration.name)} is out of tolerance`,
      detail: `${finding} (${check.number}, ${check.condition === "as-left" ? "as left" : "as found"}).`,
    })),
  );
  const review = await openImpactReview(tx, ctx, { check, result: analysis.result, wasInUse });
  if (review !== null) entries.push(review.entry);
  const called = calledText(instrument.name, configuration.name);
  await tellPeople(tx, ctx, work, {
    instrument,
    called,
    check,
    finding,
    reviewNumber: review?.number ?? null,
    wasInUse,
  });
  return entries;
}

async function holdEntry(
  tx: Tx,
  ctx: Context,
  hold: {
    configuration: ConfigurationRow;
    instrument: InstrumentRow;
    check: CheckRecord;
    finding: string;
    sequence: number;
  },
): Promise<TrailInput> {
  const { configuration, instrument, check, finding } = hold;
  const id = newId();
  await tx.insert(standingEntries).values({
    labId: ctx.labId,
    id,
    configurationId: configuration.id,
    sequence: hold.sequence,
    standing: "on-hold",
    since: await recordNow(tx),
    reason: `${finding} (${check.number}).`,
    setBy: null,
    checkId: check.id,
  });
  return {
    action: "hold.placed",
    shape: "out-of-tolerance",
    about: aboutConfiguration(configuration, instrument, check),
    after: { standing: "on-hold", check: check.number },
    why: finding,
    rows: [{ table: "standing_entries", id }],
  };
}

const aboutConfiguration = (
  configuration: ConfigurationRow,
  instrument: InstrumentRow,
  check: CheckRecord,
): TrailInput["about"] => ({
  kind: "configuration",
  id: configuration.id,
  label: calledText(instrument.name, configuration.name),
  instrumentId: instrument.id,
  checkId: check.id,
});

async function tellPeople(
  tx: Tx,
  ctx: Context,
  work: HoldWork,
  told: {
    instrument: InstrumentRow;
    called: string;
    check: CheckRecord;
    finding: string;
    reviewNumber: string | null;
    wasInUse: boolean;
  },
): Promise<void> {
  const { instrument, called, check, finding } = told;
  const now = await recordNow(tx);
  const managers = await listManagers(tx);
  const people = [instrument.ownerId, ...managers.map((manager) => manager.personId)];
  const paragraphs = [
    `Check ${check.number}, ${check.condition === "as-left" ? "as left" : "as found"}: ${finding}.`,
    told.wasInUse
      ? `${called} has been on hold since ${momentText(ctx.zone, now)}: a lab manager confirms the hold or lifts it, and an as-left check is asked for.`
      : `${called} was out of use already; an as-left check is asked for.`,
    told.reviewNumber === null
      ? null
      : `Impact review ${told.reviewNumber} waits for its owner: which results since the last good check are in doubt, and what is done about them.`,
    `${work.config.publicUrl}/checks/${check.id}`,
  ];
  for (const personId of new Set(people)) {
    await queueMail(tx, ctx, work.jobs, {
      to: { personId },
      subject: `${called} is out of tolerance${told.wasInUse ? " and on hold" : ""}, ${check.number}`,
      text: `${paragraphs.filter((text) => text !== null).join("\n\n")}\n`,
      causeKey: `hold:${check.id}:${personId}:${now.toISOString()}`,
    });
  }
}

/** The hold that Wavekeep placed for a check, or null. */
export async function holdOfCheck(tx: Tx, checkId: string): Promise<typeof standingEntries.$inferSelect | null> {
  const [row] = await tx
    .select()
    .from(standingEntries)
    .where(
      and(eq(standingEntries.checkId, checkId), eq(standingEntries.standing, "on-hold"), isNull(standingEntries.setBy)),
    )
    .orderBy(desc(standingEntries.sequence))
    .limit(1);
  return row ?? null;
}

/**
 * End what a failing check began: called when an as-left check that passes is approved. A quarantine, or a manager's own
 * decision without a failing check behind it, stays.
 *
 * @returns the trail entries, to be written last and as Wavekeep
 */
export async function endHold(tx: Tx, ctx: Context, check: CheckRecord): Promise<TrailInput[]> {
  const configuration = await lockConfiguration(tx, check.configurationId);
  const { instrument } = await findInstrument(tx, check.instrumentId);
  const standing = await findStanding(tx, configuration.id);
  const held = standing.checkId !== null && ["on-hold", "restricted", "out-of-service"].includes(standing.standing);
  await tx
    .update(configurations)
    .set({ asLeftAskedByCheckId: null, version: sql`${configurations.version} + 1` })
    .where(eq(configurations.id, configuration.id));
  if (!held) return [];
  const id = newId();
  const reason = `As-left check ${check.number} passed and is approved.`;
  await tx.insert(standingEntries).values({
    labId: ctx.labId,
    id,
    configurationId: configuration.id,
    sequence: standing.sequence + 1,
    standing: "in-service",
    since: await recordNow(tx),
    reason,
    setBy: null,
    checkId: check.id,
  });
  return [
    {
      action: "hold.ended",
      about: aboutConfiguration(configuration, instrument, check),
      before: { standing: standing.standing },
      after: { standing: "in-service", check: check.number },
      why: reason,
      rows: [{ table: "standing_entries", id }],
    },
  ];
}
