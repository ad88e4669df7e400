/** Ending configurations: they are retired, nothing falls due, their alerts close; their record stays. */
import { eq } from "drizzle-orm";
import { closeAlerts } from "../alerts/open-and-close.ts";
import { listCheckRows } from "../checks/list-checks.ts";
import { newId } from "../db/columns.ts";
import { configurations, standingEntries } from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import type { TrailInput } from "../records/trail.ts";
import { findStanding, type ConfigurationRow } from "./queries.ts";

const everyKind = ["out-of-tolerance", "near-limit", "inconclusive", "overdue"] as const;

/**
 * @param ending  locked rows
 * @returns the immutable rows for the trail entry that speaks of the end, and the entries of closed alerts, to be written as Wavekeep
 * @throws problem "conflict" while a draft on one of them is open: it could be neither signed nor set aside afterwards
 */
export async function endConfigurations(
  tx: Tx,
  ctx: Context,
  ending: readonly ConfigurationRow[],
  end: { toOn: string; reason: string; alertsClosed: string },
): Promise<{ rows: NonNullable<TrailInput["rows"]>; closed: TrailInput[] }> {
  const rows: NonNullable<TrailInput["rows"]> = [];
  const closed: TrailInput[] = [];
  for (const configuration of ending) {
    await assertNoOpenDraft(tx, configuration.id);
    const standing = await findStanding(tx, configuration.id);
    const id = newId();
    await tx.insert(standingEntries).values({
      labId: ctx.labId,
      id,
      configurationId: configuration.id,
      sequence: standing.sequence + 1,
      standing: "retired",
      since: await recordNow(tx),
      reason: end.reason,
      setBy: ctx.personId,
    });
    await tx
      .update(configurations)
      .set({ toOn: end.toOn, endedReason: end.reason, dueOn: null, version: configuration.version + 1 })
      .where(eq(configurations.id, configuration.id));
    rows.push({ table: "standing_entries", id });
    closed.push(...(await closeAlerts(tx, { configurationId: configuration.id }, everyKind, end.alertsClosed)));
  }
  return { rows, closed };
}

async function assertNoOpenDraft(tx: Tx, configurationId: string): Promise<void> {
  const [open] = await listCheckRows(tx, { configurationId, states: ["begun", "returned"], limit: 1 });
  if (open === undefined) return;
  const { number, begunBy } = open.summary;
  throw problem(
    "conflict",
    `${number}, begun by ${begunBy.name}, is not submitted yet. Submit it or set it aside first; nothing was changed.`,
  );
}
