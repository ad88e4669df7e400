/** Opening an impact review: the exposure window from the last good check to the failing one. */
import { and, desc, eq, gte, lt } from "drizzle-orm";
import type { StoredResult } from "../db/schema/analyses.ts";
import { newId } from "../db/columns.ts";
import { checkEvents, checks, impactReviews, submissions } from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { yearIn } from "../instruments/dates.ts";
import { takeNumber } from "../instruments/queries.ts";
import type { TrailInput } from "../records/trail.ts";
import { findFirstCaptureAt, type CheckRecord } from "../checks/queries.ts";

/** The last check before an instant that passed and is approved: the results up to it stand. */
export async function findLastGoodCheck(
  tx: Tx,
  configurationId: string,
  before: Date,
): Promise<{ id: string; number: string; measuredAt: Date } | null> {
  const [row] = await tx
    .select({ id: checks.id, number: checks.number, measuredAt: submissions.measuredAt })
    .from(checks)
    .innerJoin(submissions, and(eq(submissions.labId, checks.labId), eq(submissions.checkId, checks.id)))
    .innerJoin(
      checkEvents,
      and(
        eq(checkEvents.labId, checks.labId),
        eq(checkEvents.checkId, checks.id),
        eq(checkEvents.kind, "approved"),
        eq(checkEvents.revision, submissions.revision),
      ),
    )
    .where(
      and(
        eq(checks.configurationId, configurationId),
        eq(submissions.verdict, "pass"),
        lt(submissions.measuredAt, before),
      ),
    )
    .orderBy(desc(submissions.measuredAt))
    .limit(1);
  return row ?? null;
}

/**
 * Open the review of a failing check, once a check. A further failing check while the configuration is out of use exposes
 * no new results, so it opens none where one stands since the last good check.
 */
export async function openImpactReview(
  tx: Tx,
  ctx: Context,
  failed: { check: CheckRecord; result: StoredResult; wasInUse: boolean },
): Promise<{ number: string; entry: TrailInput } | null> {
  const { check, result } = failed;
  const now = await recordNow(tx);
  const windowTo = (await findFirstCaptureAt(tx, check.id)) ?? now;
  const good = await findLastGoodCheck(tx, check.configurationId, windowTo);
  const since = good?.measuredAt ?? new Date(0);
  const standing = await tx
    .select({ checkId: impactReviews.checkId })
    .from(impactReviews)
    .where(and(eq(impactReviews.configurationId, check.configurationId), gte(impactReviews.windowTo, since)));
  const ownAlready = standing.some((review) => review.checkId === check.id);
  if (ownAlready || (!failed.wasInUse && standing.length > 0)) return null;
  const id = newId();
  const number = await takeNumber(tx, ctx, "impact-review", yearIn(ctx.zone, now));
  await tx.insert(impactReviews).values({
    labId: ctx.labId,
    id,
    number,
    instrumentId: check.instrumentId,
    configurationId: check.configurationId,
    checkId: check.id,
    windowFrom: good?.measuredAt ?? null,
    windowFromCheckId: good?.id ?? null,
    windowTo,
    largestErrorNm: result.worst?.errorNm ?? null,
    largestAtNm: result.worst?.wavelengthNm ?? null,
    openedAt: now,
  });
  return {
    number,
    entry: {
      action: "impact.opened",
      about: { kind: "impact-review", id, label: number, instrumentId: check.instrumentId, checkId: check.id },
      after: {
        windowFrom: good?.measuredAt ?? null,
        windowFromCheck: good?.number ?? null,
        windowTo,
        check: check.number,
      },
      rows: [{ table: "impact_reviews", id }],
    },
  };
}
