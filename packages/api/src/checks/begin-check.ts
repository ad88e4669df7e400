/** Beginning a check: its number, its working copy, its first attempt. */
import { desc, eq, inArray, isNull, and } from "drizzle-orm";
import type { z } from "zod";
import type { beginCheckInput, Check } from "../contract/checks.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { checkAttempts, checkDrafts, checks, sources, submissions, type StoredDraft } from "../db/schema/index.ts";
import { inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { calledText } from "../instruments/called.ts";
import { yearIn } from "../instruments/dates.ts";
import {
  findAxisAt,
  findConfiguration,
  findInstrument,
  takeNumber,
  type ConfigurationRow,
} from "../instruments/queries.ts";
import { assertNotRetired } from "../instruments/rules.ts";
import { findProcedure } from "../procedures/queries.ts";
import { writeTrail } from "../records/trail.ts";
import { addContributor, addEvent, findCheck } from "./queries.ts";
import { readCheck } from "./read-check.ts";

export function beginCheck(db: Database, ctx: Context, input: z.output<typeof beginCheckInput>): Promise<Check> {
  return inLab(db, ctx, async (tx) => {
    const configuration = await findConfiguration(tx, input.configurationId);
    const { instrument } = await findInstrument(tx, configuration.instrumentId);
    assertNotRetired(instrument);
    if (configuration.toOn !== null)
      throw problem(
        "conflict",
        `This configuration of ${calledText(instrument.name, configuration.name)} has ended: begin the check on a present one.`,
      );
    const followsCheckId =
      input.followsCheckId ?? (input.condition === "as-left" ? configuration.asLeftAskedByCheckId : null);
    if (followsCheckId !== null) await assertSameConfiguration(tx, followsCheckId, configuration);
    const procedure = await findProcedure(tx, configuration.procedureId);
    const now = await recordNow(tx);
    const number = await takeNumber(tx, ctx, "check", yearIn(ctx.zone, now));
    const id = newId();
    await tx.insert(checks).values({
      labId: ctx.labId,
      id,
      number,
      instrumentId: instrument.id,
      configurationId: configuration.id,
      condition: input.condition,
      followsCheckId,
      procedureId: procedure.id,
      begunAt: now,
      begunBy: ctx.personId!,
    });
    await tx.insert(checkDrafts).values({
      labId: ctx.labId,
      checkId: id,
      inputs: await firstInputs(tx, configuration, now),
      savedAt: now,
      savedBy: ctx.personId!,
    });
    await tx
      .insert(checkAttempts)
      .values({ labId: ctx.labId, checkId: id, number: 1, startedAt: now, startedBy: ctx.personId!, reason: "" });
    await addEvent(tx, ctx, { checkId: id, kind: "begun", revision: 1 });
    await addContributor(tx, ctx, id, "began");
    const reply = await readCheck(tx, ctx, id);
    await writeTrail(tx, ctx, {
      action: "check.begun",
      about: { kind: "check", id, label: number, instrumentId: instrument.id, checkId: id },
      after: {
        condition: input.condition,
        instrument: calledText(instrument.name, configuration.name),
        procedure: `${procedure.code}, version ${procedure.version}`,
        followsCheckId,
      },
      rows: [{ table: "checks", id }],
    });
    return reply;
  });
}

async function assertSameConfiguration(tx: Tx, followsCheckId: string, configuration: ConfigurationRow): Promise<void> {
  const before = await findCheck(tx, followsCheckId);
  if (before.configurationId === configuration.id) return;
  throw problem(
    "invalid-input",
    `${before.number} was made on another instrument or configuration; a check follows one of its own. Nothing was begun.`,
    {
      fields: [{ path: "followsCheckId", message: "Choose a check of the same configuration." }],
    },
  );
}

/** The sources of the last check, where they are still in use; nothing is taken over that has to be looked at again. */
async function firstInputs(tx: Tx, configuration: ConfigurationRow, now: Date): Promise<StoredDraft> {
  const [last] = await tx
    .select({ inputs: submissions.inputs })
    .from(submissions)
    .innerJoin(checks, and(eq(checks.labId, submissions.labId), eq(checks.id, submissions.checkId)))
    .where(eq(checks.configurationId, configuration.id))
    .orderBy(desc(submissions.submittedAt))
    .limit(1);
  const lastIds = last?.inputs.sourceIds ?? [];
  const present =
    lastIds.length === 0
      ? []
      : await tx
          .select({ id: sources.id })
          .from(sources)
          .where(and(inArray(sources.id, lastIds), isNull(sources.retiredAt)));
  const axis = await findAxisAt(tx, configuration.id, now);
  return {
    sourceIds: lastIds.filter((id) => present.some((source) => source.id === id)),
    minutesSinceSwitchOn: null,
    temperatureC: null,
    pressureHpa: null,
    relativeHumidity: null,
    fullScaleCounts: configuration.optics.fullScaleCounts,
    mode: axis === null && configuration.axisKind !== "wavelength" ? "range" : "earlier-axis",
    rangeFirstNm: configuration.rangeFirstNm,
    rangeLastNm: configuration.rangeLastNm,
    leftOut: [],
    note: "",
  };
}
