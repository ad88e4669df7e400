/** What a manager sets of a configuration: its data, tolerance, standing, due date. Each is in the trail with its reason. */
import { eq } from "drizzle-orm";
import type { z } from "zod";
import type {
  changeConfigurationInput,
  changeStandingInput,
  changeToleranceInput,
  Configuration,
  moveDueDateInput,
} from "../contract/instruments.ts";
import type { Standing } from "../contract/common.ts";
import { closeAlerts } from "../alerts/open-and-close.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { configurations, standingEntries, toleranceVersions } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";
import { configurationColumns, givenName } from "./begin-configuration.ts";
import { calledText } from "./called.ts";
import { changedOnly } from "./changes.ts";
import { dateIn } from "./dates.ts";
import { presentConfiguration } from "./present.ts";
import {
  findAxisAt,
  findConfiguration,
  findInstrument,
  findLatestTolerance,
  findStanding,
  listConfigurations,
  lockConfiguration,
  lockInstrument,
  lockPresentConfigurations,
  type ConfigurationRow,
  type InstrumentRow,
} from "./queries.ts";
import {
  assertCanBeAssigned,
  assertNotRetired,
  configurationProblems,
  nameProblem,
  refuseFields,
  toleranceProblems,
} from "./rules.ts";
import { assertFreshFor } from "./stale.ts";

export function changeConfiguration(
  db: Database,
  ctx: Context,
  configurationId: string,
  input: z.output<typeof changeConfigurationInput>,
): Promise<Configuration> {
  refuseFields(configurationProblems(input, ""));
  return inLab(db, ctx, async (tx) => {
    // The instrument first: names are its own to keep apart.
    await lockInstrument(tx, (await findConfiguration(tx, configurationId)).instrumentId);
    const { stored, instrument } = await lockForChange(tx, ctx, configurationId, input);
    if (stored.axisKind !== input.axisKind) await assertNoAxisYet(tx, configurationId);
    const others = (await lockPresentConfigurations(tx, instrument.id)).filter((one) => one.id !== configurationId);
    if (others.length > 0)
      refuseFields(
        nameProblem(
          givenName(input.name),
          others.map((one) => one.name ?? ""),
          "name",
        ),
      );
    const next = configurationColumns(input);
    const change = changedOnly(stored, next);
    await tx
      .update(configurations)
      .set({ ...next, version: stored.version + 1 })
      .where(eq(configurations.id, configurationId));
    const reply = await readConfiguration(tx, configurationId);
    await writeTrail(tx, ctx, {
      action: "configuration.changed",
      about: aboutConfiguration({ ...stored, name: next.name }, instrument),
      ...change,
    });
    return reply;
  });
}

/** A new tolerance takes over from now on; a check whose first capture came before keeps the one it was begun under. */
export function changeTolerance(
  db: Database,
  ctx: Context,
  configurationId: string,
  input: z.output<typeof changeToleranceInput>,
): Promise<Configuration> {
  refuseFields(toleranceProblems(input.segments, "segments."));
  return inLab(db, ctx, async (tx) => {
    const { stored, instrument } = await lockForChange(tx, ctx, configurationId, input);
    const latest = await findLatestTolerance(tx, configurationId);
    const id = newId();
    await tx.insert(toleranceVersions).values({
      labId: ctx.labId,
      id,
      configurationId,
      version: latest.version + 1,
      segments: input.segments,
      inForceFrom: await recordNow(tx),
      reason: input.reason,
      setBy: ctx.personId,
    });
    await tx
      .update(configurations)
      .set({ version: stored.version + 1 })
      .where(eq(configurations.id, configurationId));
    const reply = await readConfiguration(tx, configurationId);
    await writeTrail(tx, ctx, {
      action: "tolerance.changed",
      shape: "amendment",
      about: aboutConfiguration(stored, instrument),
      before: { version: latest.version, segments: latest.segments },
      after: { version: latest.version + 1, segments: input.segments },
      why: input.reason,
      rows: [{ table: "tolerance_versions", id }],
    });
    return reply;
  });
}

/** Confirm a hold (out of service, restricted), lift it, quarantine, and back. */
export function changeStanding(
  db: Database,
  ctx: Context,
  configurationId: string,
  input: z.output<typeof changeStandingInput>,
): Promise<Configuration> {
  const restriction = input.restriction === "" ? null : input.restriction;
  if ((input.standing === "restricted") !== (restriction !== null)) {
    refuseFields([
      {
        path: "restriction",
        message:
          input.standing === "restricted"
            ? "Say which range or use it is restricted to."
            : "A restriction is stated only for a restricted configuration.",
      },
    ]);
  }
  return inLab(db, ctx, async (tx) => {
    const { stored, instrument } = await lockForChange(tx, ctx, configurationId, input);
    const before = await findStanding(tx, configurationId);
    if (before.standing === input.standing && before.restriction === restriction && before.setBy !== null) {
      throw problem(
        "conflict",
        `${calledText(instrument.name, stored.name)} is ${input.standing.replaceAll("-", " ")} already. Nothing was changed.`,
      );
    }
    const id = newId();
    await tx.insert(standingEntries).values({
      labId: ctx.labId,
      id,
      configurationId,
      sequence: before.sequence + 1,
      standing: input.standing,
      restriction,
      since: await recordNow(tx),
      reason: input.reason,
      setBy: ctx.personId,
      // A decision about a hold keeps the check that caused it in sight.
      checkId: input.standing === "in-service" ? null : before.checkId,
    });
    await tx
      .update(configurations)
      .set({ version: stored.version + 1, ...(input.standing === "in-service" ? { asLeftAskedByCheckId: null } : {}) })
      .where(eq(configurations.id, configurationId));
    const reply = await readConfiguration(tx, configurationId);
    await writeTrail(tx, ctx, {
      action: actionFor(before.standing as Standing, input.standing),
      about: { ...aboutConfiguration(stored, instrument), checkId: before.checkId ?? undefined },
      before: { standing: before.standing, restriction: before.restriction },
      after: { standing: input.standing, restriction },
      why: input.reason,
      rows: [{ table: "standing_entries", id }],
    });
    return reply;
  });
}

function actionFor(before: Standing, after: Standing): TrailInput["action"] {
  if (before !== "on-hold") return "standing.changed";
  if (after === "in-service") return "hold.lifted";
  return after === "quarantined" ? "standing.changed" : "hold.confirmed";
}

export function moveDueDate(
  db: Database,
  ctx: Context,
  configurationId: string,
  input: z.output<typeof moveDueDateInput>,
): Promise<Configuration> {
  return inLab(db, ctx, async (tx) => {
    const { stored, instrument } = await lockForChange(tx, ctx, configurationId, input);
    if (input.assignedToId !== null && input.assignedToId !== stored.assignedToId)
      await assertCanBeAssigned(tx, input.assignedToId);
    const today = dateIn(ctx.zone, await recordNow(tx));
    await tx
      .update(configurations)
      .set({ dueOn: input.dueOn, assignedToId: input.assignedToId, version: stored.version + 1 })
      .where(eq(configurations.id, configurationId));
    const closed =
      input.dueOn >= today ? await closeAlerts(tx, { configurationId }, ["overdue"], "The due date was moved.") : [];
    const reply = await readConfiguration(tx, configurationId);
    await writeTrail(tx, ctx, {
      action: "due.moved",
      about: aboutConfiguration(stored, instrument),
      before: { dueOn: stored.dueOn, assignedToId: stored.assignedToId },
      after: { dueOn: input.dueOn, assignedToId: input.assignedToId },
      why: input.reason,
    });
    if (closed.length > 0) await writeTrail(tx, asWavekeep(ctx), closed);
    return reply;
  });
}

/** One configuration with what is in force now. */
export async function readConfiguration(tx: Tx, configurationId: string): Promise<Configuration> {
  const [row] = await listConfigurations(tx, { configurationId });
  const now = await recordNow(tx);
  return presentConfiguration({
    ...row!,
    tolerance: await findLatestTolerance(tx, configurationId),
    standing: await findStanding(tx, configurationId),
    axis: await findAxisAt(tx, configurationId, now),
  });
}

/** Lock a configuration that may still be changed, for a form on its newest state. */
export async function lockForChange(
  tx: Tx,
  ctx: Context,
  configurationId: string,
  sent: { version: number },
): Promise<{ stored: ConfigurationRow; instrument: InstrumentRow }> {
  const stored = await lockConfiguration(tx, configurationId);
  const { instrument } = await findInstrument(tx, stored.instrumentId);
  const called = calledText(instrument.name, stored.name);
  await assertFreshFor(tx, ctx, stored, sent, { id: configurationId, what: called });
  assertNotRetired(instrument);
  if (stored.toOn !== null)
    throw problem("conflict", `This configuration of ${called} has ended; its record stays as it is.`);
  return { stored, instrument };
}

export const aboutConfiguration = (
  configuration: ConfigurationRow,
  instrument: InstrumentRow,
): TrailInput["about"] => ({
  kind: "configuration",
  id: configuration.id,
  label: calledText(instrument.name, configuration.name),
  instrumentId: instrument.id,
});

async function assertNoAxisYet(tx: Tx, configurationId: string): Promise<void> {
  if ((await findAxisAt(tx, configurationId, await recordNow(tx))) !== null) {
    throw problem(
      "conflict",
      "The kind of axis can't be changed once an axis is in force: it is another instrument to its history. Replace what was replaced instead. Nothing was stored.",
    );
  }
}
