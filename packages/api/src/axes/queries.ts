/** Axes of a configuration: SQL only. */
import { and, asc, eq, max } from "drizzle-orm";
import { findOptionalSubmission } from "../checks/queries.ts";
import { axes, checks, people } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import type { AxisRow } from "../instruments/queries.ts";

/** 0 where none was ever in force. */
export async function findLastAxisNumber(tx: Tx, configurationId: string): Promise<number> {
  const [row] = await tx
    .select({ last: max(axes.number) })
    .from(axes)
    .where(eq(axes.configurationId, configurationId));
  return row?.last ?? 0;
}

/** In the order they were put in force. */
export function listAxisRows(tx: Tx, by: { configurationId: string } | { fromCheckId: string }) {
  return tx
    .select({ axis: axes, setByName: people.name, fromCheckNumber: checks.number })
    .from(axes)
    .leftJoin(people, eq(people.id, axes.setBy))
    .leftJoin(checks, and(eq(checks.labId, axes.labId), eq(checks.id, axes.fromCheckId)))
    .where(
      "configurationId" in by ? eq(axes.configurationId, by.configurationId) : eq(axes.fromCheckId, by.fromCheckId),
    )
    .orderBy(asc(axes.number));
}

export type AxisListRow = Awaited<ReturnType<typeof listAxisRows>>[number];

/** Since when an axis says how the instrument stands: when its captures were measured, or when it was typed in. */
export async function findMeasuredSince(tx: Tx, axis: Pick<AxisRow, "fromCheckId" | "inForceFrom">): Promise<Date> {
  const submission = axis.fromCheckId === null ? null : await findOptionalSubmission(tx, axis.fromCheckId);
  return submission?.measuredAt ?? axis.inForceFrom;
}
