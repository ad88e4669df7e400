/** Instruments: register, change, retire. */
import { eq } from "drizzle-orm";
import type { z } from "zod";
import type {
  changeInstrumentInput,
  createInstrumentInput,
  FleetRow,
  Instrument,
  retireInput,
} from "../contract/instruments.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { instruments } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context } from "../db/tenancy.ts";
import { findProcedureForKind } from "../procedures/queries.ts";
import { writeTrail } from "../records/trail.ts";
import { beginConfiguration } from "./begin-configuration.ts";
import { changedOnly } from "./changes.ts";
import { nameTaken } from "./conflicts.ts";
import { dateIn } from "./dates.ts";
import { listFleet } from "./fleet.ts";
import { endConfigurations } from "./end-configurations.ts";
import { lockInstrument, lockPresentConfigurations } from "./queries.ts";
import { readInstrument } from "./read-instrument.ts";
import { assertCanOwn, assertNotRetired, configurationProblems, refuseFields, toleranceProblems } from "./rules.ts";
import { assertFreshFor } from "./stale.ts";

export function listInstruments(db: Database, ctx: Context): Promise<{ items: FleetRow[] }> {
  return inLab(db, ctx, async (tx) => ({
    items: await listFleet(tx, dateIn(ctx.zone, await recordNow(tx)), { withRetired: true }),
  }));
}

export function readLabInstrument(
  db: Database,
  ctx: Context,
  instrumentId: string,
  configurationId?: string,
): Promise<Instrument> {
  return inLab(db, ctx, (tx) => readInstrument(tx, ctx, instrumentId, configurationId));
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
        await tx.insert(instruments).values({
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
          replacesId: null,
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
    const ended = await endConfigurations(tx, ctx, await lockPresentConfigurations(tx, instrumentId), {
      toOn: dateIn(ctx.zone, now),
      reason: input.reason,
      alertsClosed: "The instrument was retired.",
    });
    await tx
      .update(instruments)
      .set({ retiredAt: now, retiredReason: input.reason, version: stored.version + 1 })
      .where(eq(instruments.id, instrumentId));
    const reply = await readInstrument(tx, ctx, instrumentId);
    await writeTrail(tx, ctx, {
      action: "instrument.retired",
      about: { kind: "instrument", id: instrumentId, label: stored.name, instrumentId },
      why: input.reason,
      rows: ended.rows,
    });
    if (ended.closed.length > 0) await writeTrail(tx, asWavekeep(ctx), ended.closed);
    return reply;
  });
}
