/** Relations of the permissions table that are found out from rows: who owns the instrument a request speaks of, who had a part in its check. */
import { eq } from "drizzle-orm";
import { isBarredContributor } from "../checks/approval.ts";
import { alerts, checks, configurations, impactReviews } from "../db/schema/index.ts";
import { ownsInstrument, type Tx } from "../db/tenancy.ts";
import { registerRelation, type Api, type RelationCall } from "../http/mount.ts";

export function registerWorkRelations(api: Api): void {
  registerRelation(api, "owns-instrument", async (tx, ctx, call) => {
    // Reading the record comes from owning any instrument; everything else from owning the one it speaks of.
    if (call.action === "records.read") return ctx.ownedInstrumentIds.length > 0;
    const instrumentId = await findInstrumentOf(tx, call);
    return instrumentId !== null && ownsInstrument(ctx, instrumentId);
  });
  registerRelation(api, "contributed-to-check", async (tx, ctx, { params }) => {
    const { checkId } = params;
    return checkId !== undefined && isBarredContributor(tx, ctx, checkId);
  });
}

/** The instrument a request speaks of, by its path or the configuration in its body; null where there is none here. */
async function findInstrumentOf(tx: Tx, { params, body }: RelationCall): Promise<string | null> {
  const { instrumentId, checkId, alertId, impactReviewId } = params;
  if (instrumentId !== undefined) return instrumentId;
  if (checkId !== undefined)
    return first(await tx.select({ id: checks.instrumentId }).from(checks).where(eq(checks.id, checkId)));
  if (alertId !== undefined)
    return first(await tx.select({ id: alerts.instrumentId }).from(alerts).where(eq(alerts.id, alertId)));
  if (impactReviewId !== undefined)
    return first(
      await tx
        .select({ id: impactReviews.instrumentId })
        .from(impactReviews)
        .where(eq(impactReviews.id, impactReviewId)),
    );
  const configurationId = params["configurationId"] ?? idIn(body, "configurationId");
  if (configurationId === null) return null;
  return first(
    await tx
      .select({ id: configurations.instrumentId })
      .from(configurations)
      .where(eq(configurations.id, configurationId)),
  );
}

const first = (rows: { id: string | null }[]): string | null => rows[0]?.id ?? null;

/** An id in a body that has not been parsed yet. */
function idIn(body: unknown, key: string): string | null {
  const value = typeof body === "object" && body !== null ? (body as Record<string, unknown>)[key] : undefined;
  return typeof value === "string" && /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i.test(value) ? value : null;
}
