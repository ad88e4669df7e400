/** Alerts: the list, and an owner's (or, for the owner, a manager's) acknowledgement. */
import { eq } from "drizzle-orm";
import type { z } from "zod";
import type { ShownState } from "../contract/common.ts";
import type { acknowledgeAlertInput, Alert, alertsQuery, alertsReply } from "../contract/work.ts";
import type { Database } from "../db/connection.ts";
import { alerts } from "../db/schema/index.ts";
import { hasRole, inLab, ownsInstrument, recordNow, type Context } from "../db/tenancy.ts";
import { pageAfter, pageNext } from "../http/keyset.ts";
import { problem } from "../http/problem.ts";
import { assertFreshFor } from "../instruments/stale.ts";
import { writeTrail } from "../records/trail.ts";
import { findAlert, listAlertRows, lockAlert, type AlertRow } from "./queries.ts";

const stateOfKind: Record<string, ShownState | null> = {
  "out-of-tolerance": "out-of-tolerance",
  "near-limit": "near-limit",
  inconclusive: "inconclusive",
  overdue: null,
  "source-review": null,
};

export function listAlerts(
  db: Database,
  ctx: Context,
  query: z.output<typeof alertsQuery>,
): Promise<z.input<typeof alertsReply>> {
  const after = pageAfter(query.after);
  return inLab(db, ctx, async (tx) => {
    const rows = await listAlertRows(tx, {
      state: query.state,
      instrumentId: query.instrumentId,
      after: after === undefined ? undefined : { openedAt: after.at, id: after.id },
      limit: query.limit + 1,
    });
    const shown = rows.slice(0, query.limit);
    const last = shown.at(-1);
    return {
      items: shown.map((row) => presentAlert(ctx, row)),
      next:
        rows.length > query.limit && last !== undefined
          ? pageNext({ at: last.alert.openedAt.toISOString(), id: last.alert.id })
          : null,
    };
  });
}

/** Acknowledge with a note: what is planned, who was told. The alert stays open until a good check closes it. */
export function acknowledgeAlert(
  db: Database,
  ctx: Context,
  alertId: string,
  input: z.output<typeof acknowledgeAlertInput>,
): Promise<Alert> {
  return inLab(db, ctx, async (tx) => {
    await lockAlert(tx, alertId);
    const { alert, ownerName } = await findAlert(tx, alertId);
    await assertFreshFor(tx, ctx, alert, input, { id: alertId, what: "This alert" });
    const owns = alert.instrumentId !== null && ownsInstrument(ctx, alert.instrumentId);
    if (!owns && !hasRole(ctx, "manager"))
      throw problem(
        "not-allowed",
        `This alert is for ${ownerName ?? "a lab manager"}; a lab manager may act for the owner.`,
      );
    if (alert.closedAt !== null)
      throw problem(
        "conflict",
        `This alert closed by itself: ${alert.closedBecause ?? ""} There is nothing to acknowledge any more.`,
      );
    if (alert.acknowledgedAt !== null)
      throw problem("conflict", "This alert is acknowledged already; its note stays as it was written.");
    const forOwner = alert.instrumentId !== null && !owns;
    await tx
      .update(alerts)
      .set({
        acknowledgedAt: await recordNow(tx),
        acknowledgedBy: ctx.personId,
        acknowledgedNote: input.note,
        acknowledgedForOwner: forOwner,
        version: alert.version + 1,
      })
      .where(eq(alerts.id, alertId));
    const reply = presentAlert(ctx, await findAlert(tx, alertId));
    await writeTrail(tx, ctx, {
      action: "alert.acknowledged",
      about: {
        kind: "alert",
        id: alertId,
        label: alert.title,
        instrumentId: alert.instrumentId ?? undefined,
        checkId: alert.checkId ?? undefined,
      },
      after: { kind: alert.kind, forOwner },
      why: input.note,
    });
    return reply;
  });
}

export function presentAlert(ctx: Context, row: AlertRow): Alert {
  const { alert } = row;
  const owns = alert.instrumentId !== null && ownsInstrument(ctx, alert.instrumentId);
  return {
    id: alert.id,
    kind: alert.kind as Alert["kind"],
    title: alert.title,
    detail: alert.detail,
    instrumentId: alert.instrumentId,
    instrumentName: row.instrumentName,
    configurationId: alert.configurationId,
    configurationName: row.configurationName,
    sourceId: alert.sourceId,
    sourceLabel: row.sourceLabel,
    owner: row.ownerId === null ? null : { id: row.ownerId, name: row.ownerName ?? "" },
    checkId: alert.checkId,
    checkNumber: row.checkNumber,
    state: stateOfKind[alert.kind] ?? null,
    openedAt: alert.openedAt.toISOString(),
    closedAt: alert.closedAt?.toISOString() ?? null,
    closedBecause: alert.closedBecause,
    reopenedCount: alert.reopenedCount,
    acknowledged:
      alert.acknowledgedAt === null || alert.acknowledgedBy === null
        ? null
        : {
            by: { id: alert.acknowledgedBy, name: row.acknowledgerName ?? "" },
            at: alert.acknowledgedAt.toISOString(),
            note: alert.acknowledgedNote ?? "",
            forOwner: alert.acknowledgedForOwner,
          },
    mayAcknowledge: alert.closedAt === null && alert.acknowledgedAt === null && (owns || hasRole(ctx, "manager")),
    version: alert.version,
  };
}
