/**
 * The life of an instrument's configurations: one is added beside the present ones, takes the place of one that ends, or ends.
 * Two present ones each have a name; each keeps its own axis, tolerance, checks and drift, and histories are never joined.
 */
import { eq } from "drizzle-orm";
import type { z } from "zod";
import type { endConfigurationInput, Instrument, nextConfigurationInput } from "../contract/instruments.ts";
import type { InstrumentKind } from "../contract/common.ts";
import type { Database } from "../db/connection.ts";
import { configurations, instruments } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { findProcedureForKind } from "../procedures/queries.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";
import { beginConfiguration, givenName } from "./begin-configuration.ts";
import { calledText } from "./called.ts";
import { dateIn, dayText } from "./dates.ts";
import { endConfigurations } from "./end-configurations.ts";
import {
  findConfiguration,
  findNextOrdinal,
  lockInstrument,
  lockPresentConfigurations,
  type ConfigurationRow,
  type InstrumentRow,
} from "./queries.ts";
import { readInstrument } from "./read-instrument.ts";
import { assertNotRetired, configurationProblems, nameProblem, refuseFields, toleranceProblems } from "./rules.ts";
import { assertFreshFor } from "./stale.ts";

type NextConfiguration = z.output<typeof nextConfigurationInput>;

/** Begin a configuration in place of one that ends the same day, or beside those there are. */
export function nextConfiguration(
  db: Database,
  ctx: Context,
  instrumentId: string,
  input: NextConfiguration,
): Promise<Instrument> {
  refuseFields([
    ...configurationProblems(input.configuration, "configuration."),
    ...toleranceProblems(input.tolerance, "tolerance."),
  ]);
  return inLab(db, ctx, async (tx) => {
    const stored = await lockInstrument(tx, instrumentId);
    await assertFreshFor(tx, ctx, stored, input, { id: instrumentId, what: stored.name });
    assertNotRetired(stored);
    const present = await lockPresentConfigurations(tx, instrumentId);
    const replaced = findReplaced(stored, present, input.replacesId);
    const staying = present.filter((one) => one.id !== input.replacesId);
    await refuseDay(tx, ctx, "fromOn", input.fromOn, replaced);
    const named = await nameThePresent(tx, ctx, stored, staying, input);
    const ended =
      replaced === null
        ? { rows: [], closed: [] }
        : await endConfigurations(tx, ctx, [replaced], {
            toOn: input.fromOn,
            reason: input.reason,
            alertsClosed: "The configuration was ended.",
          });
    const procedureId = replaced?.procedureId ?? (await findProcedureForKind(tx, stored.kind as InstrumentKind)).id;
    const begun = await beginConfiguration(tx, ctx, {
      instrumentId,
      ordinal: await findNextOrdinal(tx, instrumentId),
      fromOn: input.fromOn,
      replacesId: input.replacesId,
      configuration: input.configuration,
      tolerance: input.tolerance,
      firstDueOn: input.firstDueOn,
      procedureId,
      reason: input.reason,
    });
    await tx
      .update(instruments)
      .set({ version: stored.version + 1 })
      .where(eq(instruments.id, instrumentId));
    const reply = await readInstrument(tx, ctx, instrumentId, begun.id);
    const label = calledText(stored.name, givenName(input.configuration.name));
    await writeTrail(tx, ctx, [
      ...named,
      {
        action: "configuration.begun",
        about: { kind: "configuration", id: begun.id, label, instrumentId },
        before: replaced === null ? undefined : { configurationId: replaced.id, name: replaced.name },
        after: {
          fromOn: input.fromOn,
          configuration: input.configuration,
          tolerance: input.tolerance,
          dueOn: input.firstDueOn,
        },
        why: input.reason,
        rows: [...ended.rows, ...begun.rows],
      },
    ]);
    if (ended.closed.length > 0) await writeTrail(tx, asWavekeep(ctx), ended.closed);
    return reply;
  });
}

/** End a configuration that nothing takes the place of. */
export function endConfiguration(
  db: Database,
  ctx: Context,
  configurationId: string,
  input: z.output<typeof endConfigurationInput>,
): Promise<Instrument> {
  return inLab(db, ctx, async (tx) => {
    const { instrumentId } = await findConfiguration(tx, configurationId);
    const instrument = await lockInstrument(tx, instrumentId);
    const present = await lockPresentConfigurations(tx, instrumentId);
    const stored = present.find((one) => one.id === configurationId) ?? (await findConfiguration(tx, configurationId));
    const called = calledText(instrument.name, stored.name);
    await assertFreshFor(tx, ctx, stored, input, { id: configurationId, what: called });
    assertNotRetired(instrument);
    if (stored.toOn !== null) throw problem("conflict", `${called} has ended already; its record stays as it is.`);
    if (present.length === 1)
      throw problem(
        "conflict",
        `${called} is the only one left: begin the next in its place, or retire the instrument. Nothing was changed.`,
      );
    await refuseDay(tx, ctx, "toOn", input.toOn, stored);
    const ended = await endConfigurations(tx, ctx, [stored], {
      toOn: input.toOn,
      reason: input.reason,
      alertsClosed: "The configuration was ended.",
    });
    await tx
      .update(instruments)
      .set({ version: instrument.version + 1 })
      .where(eq(instruments.id, instrumentId));
    const reply = await readInstrument(tx, ctx, instrumentId);
    await writeTrail(tx, ctx, {
      action: "configuration.ended",
      about: { kind: "configuration", id: configurationId, label: called, instrumentId },
      before: { toOn: null },
      after: { toOn: input.toOn },
      why: input.reason,
      rows: ended.rows,
    });
    if (ended.closed.length > 0) await writeTrail(tx, asWavekeep(ctx), ended.closed);
    return reply;
  });
}

function findReplaced(
  instrument: InstrumentRow,
  present: readonly ConfigurationRow[],
  replacesId: string | null,
): ConfigurationRow | null {
  if (replacesId === null) return null;
  const replaced = present.find((one) => one.id === replacesId);
  if (replaced !== undefined) return replaced;
  const message = `What is to be replaced is no present part of ${instrument.name}: it has ended, or belongs to another instrument.`;
  throw problem("conflict", `${message} Nothing was stored; reload and choose again.`, {
    fields: [{ path: "replacesId", message }],
  });
}

/** What begins or ends has happened, and nothing ends before it began. */
async function refuseDay(
  tx: Tx,
  ctx: Context,
  path: string,
  on: string,
  ending: ConfigurationRow | null,
): Promise<void> {
  if (on > dateIn(ctx.zone, await recordNow(tx)))
    refuseFields([{ path, message: "This day is still to come; a change is recorded once it has happened." }]);
  if (ending !== null && on < ending.fromOn)
    refuseFields([{ path, message: `The one that ends began on ${dayText(ending.fromOn)}; it can't end earlier.` }]);
}

/** With more than one present, each has a name of its own: the new one, and the one that had none so far. */
async function nameThePresent(
  tx: Tx,
  ctx: Context,
  instrument: InstrumentRow,
  staying: readonly ConfigurationRow[],
  input: NextConfiguration,
): Promise<TrailInput[]> {
  if (staying.length === 0) return [];
  const unnamed = staying.find((one) => one.name === null);
  const presentName = unnamed === undefined ? null : givenName(input.presentName);
  const taken = staying.flatMap((one) => (one.name === null ? [] : [one.name]));
  refuseFields([
    ...(unnamed === undefined ? [] : nameProblem(presentName, taken, "presentName")),
    ...nameProblem(
      givenName(input.configuration.name),
      presentName === null ? taken : [...taken, presentName],
      "configuration.name",
    ),
  ]);
  if (unnamed === undefined) return [];
  await tx
    .update(configurations)
    .set({ name: presentName, version: unnamed.version + 1 })
    .where(eq(configurations.id, unnamed.id));
  return [
    {
      action: "configuration.changed",
      about: {
        kind: "configuration",
        id: unnamed.id,
        label: calledText(instrument.name, presentName),
        instrumentId: instrument.id,
      },
      before: { name: null },
      after: { name: presentName },
    },
  ];
}
