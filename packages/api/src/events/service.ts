/** Events of an instrument: moved, serviced, lamp changed, adjusted… */
import type { z } from "zod";
import type { logEventInput } from "../contract/instruments.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { instrumentEvents } from "../db/schema/index.ts";
import { inLab, recordNow, type Context } from "../db/tenancy.ts";
import { listSeries } from "../drift/queries.ts";
import { calledText } from "../instruments/called.ts";
import { dateIn } from "../instruments/dates.ts";
import { findConfiguration, findInstrument } from "../instruments/queries.ts";
import { assertNotRetired, refuseFields } from "../instruments/rules.ts";
import { writeTrail } from "../records/trail.ts";
import { presentEvent, type InstrumentEvent } from "./present.ts";

export function logEvent(db: Database, ctx: Context, input: z.output<typeof logEventInput>): Promise<InstrumentEvent> {
  return inLab(db, ctx, async (tx) => {
    const configuration = await findConfiguration(tx, input.configurationId);
    const { instrument } = await findInstrument(tx, configuration.instrumentId);
    assertNotRetired(instrument);
    const now = await recordNow(tx);
    if (input.happenedOn > dateIn(ctx.zone, now))
      refuseFields([
        { path: "happenedOn", message: "This day is still to come; an event is logged once it has happened." },
      ]);
    if (input.happenedOn < configuration.fromOn)
      refuseFields([
        {
          path: "happenedOn",
          message: `This configuration began on ${configuration.fromOn}; an event of it can't be older.`,
        },
      ]);
    const event = { labId: ctx.labId, id: newId(), ...input, recordedAt: now, recordedBy: ctx.personId };
    await tx.insert(instrumentEvents).values(event);
    const reply = presentEvent(
      { event, recorderName: ctx.personName },
      await listSeries(tx, configuration.id),
      ctx.zone,
    );
    await writeTrail(tx, ctx, {
      action: "event.logged",
      about: {
        kind: "event",
        id: event.id,
        label: calledText(instrument.name, configuration.name),
        instrumentId: instrument.id,
      },
      after: {
        kind: input.kind,
        title: input.title,
        happenedOn: input.happenedOn,
        note: input.note,
        breaksDrift: input.breaksDrift,
      },
      rows: [{ table: "instrument_events", id: event.id }],
    });
    return reply;
  });
}
