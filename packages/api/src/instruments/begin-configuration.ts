/** Beginning a configuration: its row, first tolerance, standing and, where given, its first axis. */
import type { z } from "zod";
import type { configurationInput } from "../contract/instruments.ts";
import { newId } from "../db/columns.ts";
import { axes, configurations, standingEntries, toleranceVersions, type StoredSegment } from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import type { TrailInput } from "../records/trail.ts";

export type ConfigurationInput = z.output<typeof configurationInput>;

export interface BeginConfiguration {
  instrumentId: string;
  ordinal: number;
  fromOn: string;
  /** The one that ended where this one begins, or null. */
  replacesId: string | null;
  configuration: ConfigurationInput;
  tolerance: StoredSegment[];
  firstDueOn: string;
  procedureId: string;
  reason: string;
}

/** A name that was typed, or null where none was. */
export const givenName = (name: string | null): string | null => (name === "" ? null : name);

/** Columns a manager may set, without the axis, which is a row of its own. */
export function configurationColumns(input: Omit<ConfigurationInput, "axisCoefficients">) {
  const {
    name,
    axisKind,
    axisMeaning,
    rangeFirstNm,
    rangeLastNm,
    nominalFwhmNm,
    optics,
    intervalDays,
    graceDays,
    setupReproducibilityNm,
    decisionRule,
    warningShare,
  } = input;
  return {
    name: givenName(name),
    axisKind,
    axisMeaning,
    rangeFirstNm,
    rangeLastNm,
    nominalFwhmNm,
    optics,
    intervalDays,
    graceDays,
    setupReproducibilityNm,
    decisionRule,
    warningShare,
  };
}

/** @returns the new id, and the immutable rows for the trail entry that speaks of it */
export async function beginConfiguration(
  tx: Tx,
  ctx: Context,
  begin: BeginConfiguration,
): Promise<{ id: string; rows: NonNullable<TrailInput["rows"]> }> {
  const now = await recordNow(tx);
  const id = newId();
  await tx.insert(configurations).values({
    labId: ctx.labId,
    id,
    instrumentId: begin.instrumentId,
    ordinal: begin.ordinal,
    fromOn: begin.fromOn,
    replacesId: begin.replacesId,
    ...configurationColumns(begin.configuration),
    dueOn: begin.firstDueOn,
    procedureId: begin.procedureId,
  });
  const toleranceId = newId();
  await tx.insert(toleranceVersions).values({
    labId: ctx.labId,
    id: toleranceId,
    configurationId: id,
    version: 1,
    segments: begin.tolerance,
    inForceFrom: now,
    reason: begin.reason,
    setBy: ctx.personId,
  });
  const standingId = newId();
  await tx.insert(standingEntries).values({
    labId: ctx.labId,
    id: standingId,
    configurationId: id,
    sequence: 1,
    standing: "in-service",
    since: now,
    reason: begin.reason,
    setBy: ctx.personId,
  });
  const rows = [
    { table: "tolerance_versions", id: toleranceId },
    { table: "standing_entries", id: standingId },
  ];
  const coefficients = begin.configuration.axisCoefficients;
  if (coefficients !== null) {
    const axisId = newId();
    await tx.insert(axes).values({
      labId: ctx.labId,
      id: axisId,
      configurationId: id,
      number: 1,
      coefficients,
      firstPx: 0,
      lastPx: (begin.configuration.optics.pixels ?? 2048) - 1,
      meaning: begin.configuration.axisMeaning,
      inForceFrom: now,
      reason: begin.reason,
      setBy: ctx.personId,
    });
    rows.push({ table: "axes", id: axisId });
  }
  return { id, rows };
}
