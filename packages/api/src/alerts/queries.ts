/** Alerts: SQL only. */
import { and, desc, eq, isNotNull, isNull, sql } from "drizzle-orm";
import { alias } from "drizzle-orm/pg-core";
import { alerts, checks, configurations, instruments, people, sources } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";

const owner = alias(people, "owner");
const acknowledger = alias(people, "acknowledger");

export interface AlertFilter {
  alertId?: string;
  state?: "open" | "closed" | "all";
  instrumentId?: string;
  after?: { openedAt: string; id: string };
  limit: number;
}

/** Newest first. */
export function listAlertRows(tx: Tx, filter: AlertFilter) {
  return tx
    .select({
      alert: alerts,
      instrumentName: instruments.name,
      configurationName: configurations.name,
      ownerId: instruments.ownerId,
      ownerName: owner.name,
      sourceLabel: sources.label,
      checkNumber: checks.number,
      acknowledgerName: acknowledger.name,
    })
    .from(alerts)
    .leftJoin(instruments, and(eq(instruments.labId, alerts.labId), eq(instruments.id, alerts.instrumentId)))
    .leftJoin(
      configurations,
      and(eq(configurations.labId, alerts.labId), eq(configurations.id, alerts.configurationId)),
    )
    .leftJoin(owner, eq(owner.id, instruments.ownerId))
    .leftJoin(sources, and(eq(sources.labId, alerts.labId), eq(sources.id, alerts.sourceId)))
    .leftJoin(checks, and(eq(checks.labId, alerts.labId), eq(checks.id, alerts.checkId)))
    .leftJoin(acknowledger, eq(acknowledger.id, alerts.acknowledgedBy))
    .where(
      and(
        filter.alertId === undefined ? undefined : eq(alerts.id, filter.alertId),
        filter.instrumentId === undefined ? undefined : eq(alerts.instrumentId, filter.instrumentId),
        filter.state === "open"
          ? isNull(alerts.closedAt)
          : filter.state === "closed"
            ? isNotNull(alerts.closedAt)
            : undefined,
        filter.after === undefined
          ? undefined
          : sql`(${alerts.openedAt}, ${alerts.id}) < (${filter.after.openedAt}::timestamptz, ${filter.after.id}::uuid)`,
      ),
    )
    .orderBy(desc(alerts.openedAt), desc(alerts.id))
    .limit(filter.limit);
}

export type AlertRow = Awaited<ReturnType<typeof listAlertRows>>[number];

/** @throws problem "not-found" */
export async function findAlert(tx: Tx, alertId: string): Promise<AlertRow> {
  const [row] = await listAlertRows(tx, { alertId, limit: 1 });
  if (row === undefined) throw notFound("This alert");
  return row;
}

export async function lockAlert(tx: Tx, alertId: string): Promise<void> {
  await tx.select({ id: alerts.id }).from(alerts).where(eq(alerts.id, alertId)).for("update");
}
