/** Putting an axis in force: the first one of a configuration when its check is approved, a later one by a manager's decision. */
import { eq } from "drizzle-orm";
import type { Dispersion } from "@wavekeep/core";
import type { z } from "zod";
import type { adoptAxisInput, Configuration } from "../contract/instruments.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { axes, configurations, instrumentEvents } from "../db/schema/index.ts";
import { inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { calledText } from "../instruments/called.ts";
import { dateIn } from "../instruments/dates.ts";
import { aboutConfiguration, lockForChange, readConfiguration } from "../instruments/configurations.ts";
import { findAxisAt, type ConfigurationRow, type InstrumentRow } from "../instruments/queries.ts";
import {
  findCheck,
  findOptionalAnalysis,
  findOptionalSubmission,
  findState,
  type CheckRecord,
  type SubmissionRow,
} from "../checks/queries.ts";
import { findLastAxisNumber, findMeasuredSince } from "./queries.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";

/** The first axis of a configuration that had none, from the approved check that fitted it. Nothing where one is in force. */
export async function adoptFirstAxis(
  tx: Tx,
  ctx: Context,
  from: { check: CheckRecord; submission: SubmissionRow; configuration: ConfigurationRow; instrument: InstrumentRow },
): Promise<TrailInput[]> {
  const { check, submission, configuration, instrument } = from;
  const analysis = await findOptionalAnalysis(tx, { id: submission.analysisId });
  const dispersion = analysis?.analysis.dispersion ?? null;
  if (dispersion === null || (await findLastAxisNumber(tx, configuration.id)) > 0) return [];
  const entered = await insertAxis(tx, ctx, {
    configurationId: configuration.id,
    number: 1,
    dispersion,
    checkId: check.id,
    reason: `The first, fitted by ${check.number}`,
    setBy: null,
  });
  return [
    axisEntry(configuration, instrument, check, {
      ...entered,
      number: 1,
      dispersion,
      why: `${check.number} is approved and no axis was in force`,
    }),
  ];
}

/** A manager puts the axis that an approved check has fitted in force. It is an adjustment: the drift series breaks here. */
export function adoptAxis(
  db: Database,
  ctx: Context,
  configurationId: string,
  input: z.output<typeof adoptAxisInput>,
): Promise<Configuration> {
  return inLab(db, ctx, async (tx) => {
    const { stored, instrument } = await lockForChange(tx, ctx, configurationId, input);
    const check = await findCheck(tx, input.checkId);
    const now = await recordNow(tx);
    const { dispersion, number } = await findAdoptable(tx, check, stored, now);
    const entered = await insertAxis(tx, ctx, {
      configurationId,
      number,
      dispersion,
      checkId: check.id,
      reason: input.reason,
      setBy: ctx.personId,
    });
    const eventId = newId();
    const title = `Adjusted, axis no. ${number}`;
    const happenedOn = dateIn(ctx.zone, now);
    await tx.insert(instrumentEvents).values({
      labId: ctx.labId,
      id: eventId,
      configurationId,
      kind: "adjusted",
      title,
      happenedOn,
      note: input.reason,
      breaksDrift: true,
      recordedAt: now,
      recordedBy: ctx.personId,
    });
    await tx
      .update(configurations)
      .set({ version: stored.version + 1 })
      .where(eq(configurations.id, configurationId));
    const reply = await readConfiguration(tx, configurationId);
    await writeTrail(tx, ctx, [
      axisEntry(stored, instrument, check, { ...entered, number, dispersion, why: input.reason }),
      {
        action: "event.logged",
        about: {
          kind: "event",
          id: eventId,
          label: calledText(instrument.name, stored.name),
          instrumentId: instrument.id,
        },
        after: { kind: "adjusted", title, happenedOn, note: input.reason, breaksDrift: true },
        rows: [{ table: "instrument_events", id: eventId }],
      },
    ]);
    return reply;
  });
}

async function findAdoptable(
  tx: Tx,
  check: CheckRecord,
  configuration: ConfigurationRow,
  now: Date,
): Promise<{ dispersion: Dispersion; number: number }> {
  if (check.configurationId !== configuration.id)
    throw problem(
      "conflict",
      `${check.number} was made on another configuration; its axis does not fit this one. Nothing was changed.`,
    );
  if (configuration.axisKind === "wavelength")
    throw problem(
      "conflict",
      "This instrument writes its own wavelengths; its axis is adjusted at the instrument. Log the adjustment as an event.",
    );
  const state = await findState(tx, check.id);
  const submission = await findOptionalSubmission(tx, check.id);
  if (submission === null || state !== "approved")
    throw problem(
      "conflict",
      `${check.number} is not approved yet; only a reviewed and approved check gives an axis. Nothing was changed.`,
    );
  const analysis = await findOptionalAnalysis(tx, { id: submission.analysisId });
  const dispersion = analysis?.analysis.dispersion ?? null;
  if (dispersion === null)
    throw problem(
      "unusable",
      `${check.number} fitted no axis: too few of its lines could be used. Nothing was changed.`,
    );
  const inForce = await findAxisAt(tx, configuration.id, now);
  if (inForce !== null && inForce.fromCheckId === check.id)
    throw problem(
      "conflict",
      `The axis of ${check.number} is in force already, as no. ${inForce.number}. Nothing was changed.`,
    );
  if (inForce !== null && submission.measuredAt < (await findMeasuredSince(tx, inForce)))
    throw problem(
      "conflict",
      `${check.number} was measured before axis no. ${inForce.number}, which is in force: it says how the instrument was. Make a new check to go back. Nothing was changed.`,
    );
  return { dispersion, number: (await findLastAxisNumber(tx, configuration.id)) + 1 };
}

async function insertAxis(
  tx: Tx,
  ctx: Context,
  axis: {
    configurationId: string;
    number: number;
    dispersion: Dispersion;
    checkId: string;
    reason: string;
    setBy: string | null;
  },
): Promise<{ id: string }> {
  const id = newId();
  const fitted = axis.dispersion.axis;
  await tx.insert(axes).values({
    labId: ctx.labId,
    id,
    configurationId: axis.configurationId,
    number: axis.number,
    coefficients: fitted.coefficients,
    firstPx: fitted.firstPx,
    lastPx: fitted.lastPx,
    chebyshevCovariance: fitted.chebyshevCovariance,
    degreesOfFreedom: fitted.degreesOfFreedom,
    meaning: fitted.meaning,
    inForceFrom: await recordNow(tx),
    reason: axis.reason,
    fromCheckId: axis.checkId,
    setBy: axis.setBy,
  });
  return { id };
}

function axisEntry(
  configuration: ConfigurationRow,
  instrument: InstrumentRow,
  check: CheckRecord,
  axis: { id: string; number: number; dispersion: Dispersion; why: string },
): TrailInput {
  return {
    action: "axis.entered",
    about: { ...aboutConfiguration(configuration, instrument), checkId: check.id },
    after: {
      number: axis.number,
      degree: axis.dispersion.degree,
      coefficients: axis.dispersion.coefficients,
      fromCheck: check.number,
    },
    why: axis.why,
    rows: [{ table: "axes", id: axis.id }],
  };
}
