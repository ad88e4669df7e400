/** Impact reviews: which results since the last good check are in doubt, and what their owner decides. */
import type { z } from "zod";
import type { decideImpactInput, ImpactReview } from "../contract/work.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { impactDecisions } from "../db/schema/index.ts";
import { hasRole, inLab, ownsInstrument, recordNow, type Context } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { onlyOnce } from "../instruments/conflicts.ts";
import { refuseFields } from "../instruments/rules.ts";
import { writeTrail } from "../records/trail.ts";
import { findReview, listReviewRows, type ReviewRow } from "./queries.ts";

export function listImpactReviews(db: Database, ctx: Context): Promise<{ items: ImpactReview[] }> {
  return inLab(db, ctx, async (tx) => ({ items: (await listReviewRows(tx)).map((row) => present(ctx, row)) }));
}

export function readImpactReview(db: Database, ctx: Context, reviewId: string): Promise<ImpactReview> {
  return inLab(db, ctx, async (tx) => present(ctx, await findReview(tx, reviewId)));
}

/** The owner decides, once; a manager may decide for the owner, and the trail says so. */
export function decideImpact(
  db: Database,
  ctx: Context,
  reviewId: string,
  input: z.output<typeof decideImpactInput>,
): Promise<ImpactReview> {
  if (input.affected === "some" && input.affectedWork.trim() === "") {
    refuseFields([{ path: "affectedWork", message: "Name the results that are affected." }]);
  }
  return onlyOnce(
    "conflict",
    "Somebody else decided this review a moment ago. Nothing of yours was stored; reload the page to see the decision.",
    () =>
      inLab(db, ctx, async (tx) => {
        const row = await findReview(tx, reviewId);
        const forOwner = !ownsInstrument(ctx, row.review.instrumentId);
        if (forOwner && !hasRole(ctx, "manager"))
          throw problem(
            "not-allowed",
            `${row.instrumentName} belongs to ${row.ownerName}, who decides this review, or a lab manager for them.`,
          );
        if (row.decision !== null)
          throw problem("conflict", `${row.review.number} is decided already; a decision stays as it was made.`);
        const id = newId();
        await tx.insert(impactDecisions).values({
          labId: ctx.labId,
          id,
          reviewId,
          ...input,
          decidedAt: await recordNow(tx),
          decidedBy: ctx.personId!,
          forOwner,
        });
        const reply = present(ctx, await findReview(tx, reviewId));
        await writeTrail(tx, ctx, {
          action: "impact.decided",
          about: {
            kind: "impact-review",
            id: reviewId,
            label: row.review.number,
            instrumentId: row.review.instrumentId,
            checkId: row.review.checkId,
          },
          after: { affected: input.affected, affectedWork: input.affectedWork, forOwner },
          why: input.decision,
          rows: [{ table: "impact_decisions", id }],
        });
        return reply;
      }),
  );
}

function present(ctx: Context, row: ReviewRow): ImpactReview {
  const { review, decision } = row;
  return {
    id: review.id,
    number: review.number,
    instrumentId: review.instrumentId,
    instrumentName: row.instrumentName,
    configurationId: review.configurationId,
    configurationName: row.configurationName,
    owner: { id: row.ownerId, name: row.ownerName },
    check: { id: review.checkId, number: row.checkNumber },
    windowFrom: review.windowFrom?.toISOString() ?? null,
    windowFromCheck:
      review.windowFromCheckId === null ? null : { id: review.windowFromCheckId, number: row.windowFromNumber ?? "" },
    windowTo: review.windowTo.toISOString(),
    largestErrorNm: review.largestErrorNm,
    largestAtNm: review.largestAtNm,
    openedAt: review.openedAt.toISOString(),
    state: decision === null ? "open" : "decided",
    decision:
      decision === null
        ? null
        : {
            affected: decision.affected as NonNullable<ImpactReview["decision"]>["affected"],
            affectedWork: decision.affectedWork,
            decision: decision.decision,
            by: { id: decision.decidedBy, name: row.deciderName ?? "" },
            at: decision.decidedAt.toISOString(),
            forOwner: decision.forOwner,
          },
    mayDecide: decision === null && (ownsInstrument(ctx, review.instrumentId) || hasRole(ctx, "manager")),
  };
}
