/**
 * Opening and closing alerts, in the transaction of what causes it.
 *
 * One alert of a kind is open for a configuration (or a source) at a time; what returns reopens the earlier one. The
 * functions change rows and give back the trail entries, which the caller writes last and as Wavekeep.
 */
import { and, desc, eq, inArray, isNull } from "drizzle-orm";
import type { z } from "zod";
import type { alertKind } from "../contract/work.ts";
import { newId } from "../db/columns.ts";
import { alerts } from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import type { TrailInput } from "../records/trail.ts";

export type AlertKind = z.infer<typeof alertKind>;

export interface AlertCause {
  kind: AlertKind;
  about: { instrumentId: string; configurationId: string } | { sourceId: string };
  checkId: string | null;
  title: string;
  detail: string;
}

/** Open an alert, or reopen the last one of its kind; nothing where it is open already. */
export async function openAlert(tx: Tx, ctx: Context, cause: AlertCause): Promise<TrailInput[]> {
  const subject =
    "sourceId" in cause.about
      ? eq(alerts.sourceId, cause.about.sourceId)
      : eq(alerts.configurationId, cause.about.configurationId);
  const [last] = await tx
    .select()
    .from(alerts)
    .where(and(eq(alerts.kind, cause.kind), subject))
    .orderBy(desc(alerts.openedAt))
    .limit(1)
    .for("update");
  if (last !== undefined && last.closedAt === null) return [];
  const openedAt = await recordNow(tx);
  const stated = { checkId: cause.checkId, title: cause.title, detail: cause.detail, openedAt };
  if (last === undefined) {
    const id = newId();
    await tx.insert(alerts).values({ labId: ctx.labId, id, kind: cause.kind, ...cause.about, ...stated });
    return [{ action: "alert.opened", about: aboutAlert(id, cause), after: { kind: cause.kind }, why: cause.detail }];
  }
  await tx
    .update(alerts)
    .set({
      ...stated,
      closedAt: null,
      closedBecause: null,
      reopenedCount: last.reopenedCount + 1,
      acknowledgedAt: null,
      acknowledgedBy: null,
      acknowledgedNote: null,
      acknowledgedForOwner: false,
      version: last.version + 1,
    })
    .where(eq(alerts.id, last.id));
  return [
    {
      action: "alert.reopened",
      about: aboutAlert(last.id, cause),
      before: { closedAt: last.closedAt, closedBecause: last.closedBecause },
      after: { kind: cause.kind, reopenedCount: last.reopenedCount + 1 },
      why: cause.detail,
    },
  ];
}

/** Close what is open of these kinds for a configuration or a source. */
export async function closeAlerts(
  tx: Tx,
  about: { configurationId: string } | { sourceId: string },
  kinds: readonly AlertKind[],
  because: string,
): Promise<TrailInput[]> {
  const subject =
    "sourceId" in about ? eq(alerts.sourceId, about.sourceId) : eq(alerts.configurationId, about.configurationId);
  const open = await tx
    .select()
    .from(alerts)
    .where(and(subject, inArray(alerts.kind, [...kinds]), isNull(alerts.closedAt)))
    .for("update");
  if (open.length === 0) return [];
  const closedAt = await recordNow(tx);
  const entries: TrailInput[] = [];
  for (const alert of open) {
    await tx
      .update(alerts)
      .set({ closedAt, closedBecause: because, version: alert.version + 1 })
      .where(eq(alerts.id, alert.id));
    entries.push({
      action: "alert.closed",
      about: {
        kind: "alert",
        id: alert.id,
        label: alert.title,
        instrumentId: alert.instrumentId ?? undefined,
        checkId: alert.checkId ?? undefined,
      },
      after: { kind: alert.kind },
      why: because,
    });
  }
  return entries;
}

function aboutAlert(id: string, cause: AlertCause): TrailInput["about"] {
  return {
    kind: "alert",
    id,
    label: cause.title,
    instrumentId: "instrumentId" in cause.about ? cause.about.instrumentId : undefined,
    checkId: cause.checkId ?? undefined,
  };
}
