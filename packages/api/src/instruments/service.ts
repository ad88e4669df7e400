/** Instruments: register, change, retire, and end one configuration to begin the next. */
import { eq } from "drizzle-orm";
import type { z } from "zod";
import type {
  changeInstrumentInput,
  createInstrumentInput,
  FleetRow,
  Instrument,
  nextConfigurationInput,
  retireInput,
} from "../contract/instruments.ts";
import { closeAlerts } from "../alerts/open-and-close.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { configurations, instruments, standingEntries } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { findProcedureForKind } from "../procedures/queries.ts";
import { writeTrail } from "../records/trail.ts";
import { beginConfiguration } from "./begin-configuration.ts";
import { changedOnly } from "./changes.ts";
import { nameTaken } from "./conflicts.ts";
import { dateIn } from "./dates.ts";
import { listFleet } from "./fleet.ts";
import {
  findCurrentConfiguration,
  findStanding,
  lockConfiguration,
  lockInstrument,
  type InstrumentRow,
} from "./queries.ts";
import { readInstrument } from "./read-instrument.ts";
import { assertCanOwn, configurationProblems, refuseFields, toleranceProblems } from "./rules.ts";
import { assertFreshFor } from "./stale.ts";

const everyKind = ["out-of-tolerance", "near-limit", "inconclusive", "overdue"] as const;

export function listInstruments(db: Database, ctx: Context): Promise<{ items: FleetRow[] }> {
  return inLab(db, ctx, async (tx) => ({
    items: await listFleet(tx, dateIn(ctx.zone, await recordNow(tx)), { withRetired: true }),
  }));
}

export function readLabInstrument(db: Database, ctx: Context, instrumentId: string): Promise<Instrument> {
  return inLab(db, ctx, (tx) => readInstrument(tx, ctx, instrumentId));
}

/** Register an instrument; its one configuration is made silently. */
export function createInstrument(
  db: Database,
  ctx: Context,
  input: z.output<typeof createInstrumentInput>,
): Promise<Instrument> {
  refuseFields([
    ...configurationProblems(input.configuration, "configuration."),
    ...toleranceProblems(input.tolerance, "tolerance."),
  ]);
  return nameTaken(
    "name",
    "instruments_name_in_use",
    `An instrument named ${input.name} is in use already. Choose another name.`,
    () =>
      inLab(db, ctx, async (tx) => {
        const owner = await assertCanOwn(tx, input.ownerId);
        const procedure = await findProcedureForKind(tx, input.kind);
        const now = await recordNow(tx);
        const id = newId();
        const { name, kind, maker, model, serial, ownerId, place, altitudeM, purchasedOn } = input;
        await tx
          .insert(instruments)
          .values({
            labId: ctx.labId,
            id,
            name,
            kind,
            maker,
            model,
            serial,
            ownerId,
            place,
            altitudeM,
            purchasedOn,
            registeredAt: now,
            registeredBy: ctx.personId,
          });
        const begun = await beginConfiguration(tx, ctx, {
          instrumentId: id,
          ordinal: 1,
          fromOn: purchasedOn ?? dateIn(ctx.zone, now),
          configuration: input.configuration,
          tolerance: input.tolerance,
          firstDueOn: input.firstDueOn,
          procedureId: procedure.id,
          reason: "As registered",
        });
        const reply = await readInstrument(tx, ctx, id);
        await writeTrail(tx, ctx, {
          action: "instrument.registered",
          about: { kind: "instrument", id, label: name, instrumentId: id },
          after: {
            kind,
            maker,
            model,
            serial,
            place,
            altitudeM,
            purchasedOn,
            ownerId,
            configuration: input.configuration,
            tolerance: input.tolerance,
            dueOn: input.firstDueOn,
          },
          rows: begun.rows,
          personal: { owner: owner.name },
        });
        return reply;
      }),
  );
}

export function changeInstrument(
  db: Database,
  ctx: Context,
  instrumentId: string,
  input: z.output<typeof changeInstrumentInput>,
): Promise<Instrument> {
  return nameTaken(
    "name",
    "instruments_name_in_use",
    `An instrument named ${input.name} is in use already. Choose another name.`,
    () =>
      inLab(db, ctx, async (tx) => {
        const stored = await lockInstrument(tx, instrumentId);
        await assertFreshFor(tx, ctx, stored, input, { id: instrumentId, what: stored.name });
        assertNotRetired(stored);
        const { name, maker, model, serial, ownerId, place, altitudeM, purchasedOn } = input;
        const next = { name, maker, model, serial, ownerId, place, altitudeM, purchasedOn };
        const owner = stored.ownerId === ownerId ? null : await assertCanOwn(tx, ownerId);
        const change = changedOnly(stored, next);
        await tx
          .update(instruments)
          .set({ ...next, version: stored.version + 1 })
          .where(eq(instruments.id, instrumentId));
        const reply = await readInstrument(tx, ctx, instrumentId);
        await writeTrail(tx, ctx, {
          action: "instrument.changed",
          about: { kind: "instrument", id: instrumentId, label: name, instrumentId },
          ...change,
          ...(owner === null ? {} : { personal: { owner: owner.name } }),
        });
        return reply;
      }),
  );
}

/** Retire an instrument: it stays readable for ever, nothing new is made for it. */
export function retireInstrument(
  db: Database,
  ctx: Context,
  instrumentId: string,
  input: z.output<typeof retireInput>,
): Promise<Instrument> {
  return inLab(db, ctx, async (tx) => {
    const stored = await lockInstrument(tx, instrumentId);
    await assertFreshFor(tx, ctx, stored, input, { id: instrumentId, what: stored.name });
    assertNotRetired(stored);
    const now = await recordNow(tx);
    const current = await lockConfiguration(tx, (await findCurrentConfiguration(tx, instrumentId)).id);
    const rows = [await endStanding(tx, ctx, current.id, input.reason, now)];
    await tx
      .update(configurations)
      .set({ toOn: dateIn(ctx.zone, now), endedReason: input.reason, dueOn: null, version: current.version + 1 })
      .where(eq(configurations.id, current.id));
    await tx
      .update(instruments)
      .set({ retiredAt: now, retiredReason: input.reason, version: stored.version + 1 })
      .where(eq(instruments.id, instrumentId));
    const closed = await closeAlerts(tx, { configurationId: current.id }, everyKind, "The instrument was retired.");
    const reply = await readInstrument(tx, ctx, instrumentId);
    await writeTrail(tx, ctx, {
      action: "instrument.retired",
      about: { kind: "instrument", id: instrumentId, label: stored.name, instrumentId },
      why: input.reason,
      rows,
    });
    if (closed.length > 0) await writeTrail(tx, asWavekeep(ctx), closed);
    return reply;
  });
}

/** Replacing a grating, detector, slit or laser ends a configuration and begins the next; their histories are never joined. */
export function nextConfiguration(
  db: Database,
  ctx: Context,
  instrumentId: string,
  input: z.output<typeof nextConfigurationInput>,
): Promise<Instrument> {
  refuseFields([
    ...configurationProblems(input.configuration, "configuration."),
    ...toleranceProblems(input.tolerance, "tolerance."),
  ]);
  return inLab(db, ctx, async (tx) => {
    const stored = await lockInstrument(tx, instrumentId);
    await assertFreshFor(tx, ctx, stored, input, { id: instrumentId, what: stored.name });
    assertNotRetired(stored);
    const current = await lockConfiguration(tx, (await findCurrentConfiguration(tx, instrumentId)).id);
    if (input.fromOn < current.fromOn) {
      refuseFields([
        {
          path: "fromOn",
          message: `The configuration before began on ${current.fromOn}; the next one can't begin earlier.`,
        },
      ]);
    }
    const now = await recordNow(tx);
    const ended = await endStanding(tx, ctx, current.id, input.reason, now);
    await tx
      .update(configurations)
      .set({ toOn: input.fromOn, endedReason: input.reason, dueOn: null, version: current.version + 1 })
      .where(eq(configurations.id, current.id));
    const begun = await beginConfiguration(tx, ctx, {
      instrumentId,
      ordinal: current.ordinal + 1,
      fromOn: input.fromOn,
      configuration: input.configuration,
      tolerance: input.tolerance,
      firstDueOn: input.firstDueOn,
      procedureId: current.procedureId,
      reason: input.reason,
    });
    await tx
      .update(instruments)
      .set({ version: stored.version + 1 })
      .where(eq(instruments.id, instrumentId));
    const closed = await closeAlerts(tx, { configurationId: current.id }, everyKind, "The configuration was ended.");
    const reply = await readInstrument(tx, ctx, instrumentId);
    await writeTrail(tx, ctx, {
      action: "configuration.begun",
      about: { kind: "configuration", id: begun.id, label: stored.name, instrumentId },
      before: { configurationId: current.id, name: current.name },
      after: {
        fromOn: input.fromOn,
        configuration: input.configuration,
        tolerance: input.tolerance,
        dueOn: input.firstDueOn,
      },
      why: input.reason,
      rows: [ended, ...begun.rows],
    });
    if (closed.length > 0) await writeTrail(tx, asWavekeep(ctx), closed);
    return reply;
  });
}

async function endStanding(
  tx: Tx,
  ctx: Context,
  configurationId: string,
  reason: string,
  since: Date,
): Promise<{ table: string; id: string }> {
  const standing = await findStanding(tx, configurationId);
  const id = newId();
  await tx
    .insert(standingEntries)
    .values({
      labId: ctx.labId,
      id,
      configurationId,
      sequence: standing.sequence + 1,
      standing: "retired",
      since,
      reason,
      setBy: ctx.personId,
    });
  return { table: "standing_entries", id };
}

/** @throws problem "conflict" for what only a living instrument can have */
export function assertNotRetired(instrument: Pick<InstrumentRow, "name" | "retiredAt">): void {
  if (instrument.retiredAt !== null)
    throw problem("conflict", `${instrument.name} is retired: its record stays, and nothing new is made for it.`);
}
