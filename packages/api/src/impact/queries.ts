/** Impact reviews: SQL only. */
import { and, desc, eq } from "drizzle-orm";
import { alias } from "drizzle-orm/pg-core";
import { checks, configurations, impactDecisions, impactReviews, instruments, people } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";

const fromCheck = alias(checks, "from_check");
const owner = alias(people, "owner");
const decider = alias(people, "decider");

/** Newest first; undecided and decided. */
export function listReviewRows(tx: Tx, by: { reviewId?: string; checkId?: string } = {}) {
  return tx
    .select({
      review: impactReviews,
      instrumentName: instruments.name,
      configurationName: configurations.name,
      ownerId: instruments.ownerId,
      ownerName: owner.name,
      checkNumber: checks.number,
      windowFromNumber: fromCheck.number,
      decision: impactDecisions,
      deciderName: decider.name,
    })
    .from(impactReviews)
    .innerJoin(
      instruments,
      and(eq(instruments.labId, impactReviews.labId), eq(instruments.id, impactReviews.instrumentId)),
    )
    .innerJoin(
      configurations,
      and(eq(configurations.labId, impactReviews.labId), eq(configurations.id, impactReviews.configurationId)),
    )
    .innerJoin(owner, eq(owner.id, instruments.ownerId))
    .innerJoin(checks, and(eq(checks.labId, impactReviews.labId), eq(checks.id, impactReviews.checkId)))
    .leftJoin(
      fromCheck,
      and(eq(fromCheck.labId, impactReviews.labId), eq(fromCheck.id, impactReviews.windowFromCheckId)),
    )
    .leftJoin(
      impactDecisions,
      and(eq(impactDecisions.labId, impactReviews.labId), eq(impactDecisions.reviewId, impactReviews.id)),
    )
    .leftJoin(decider, eq(decider.id, impactDecisions.decidedBy))
    .where(
      and(
        by.reviewId === undefined ? undefined : eq(impactReviews.id, by.reviewId),
        by.checkId === undefined ? undefined : eq(impactReviews.checkId, by.checkId),
      ),
    )
    .orderBy(desc(impactReviews.openedAt), desc(impactReviews.id));
}

export type ReviewRow = Awaited<ReturnType<typeof listReviewRows>>[number];

/** The review that a check caused, by number; null where it caused none. */
export async function findOptionalReviewOf(tx: Tx, checkId: string): Promise<{ id: string; number: string } | null> {
  const { id, number } = impactReviews;
  const [row] = await tx.select({ id, number }).from(impactReviews).where(eq(impactReviews.checkId, checkId));
  return row ?? null;
}

/** @throws problem "not-found" */
export async function findReview(tx: Tx, reviewId: string): Promise<ReviewRow> {
  const [row] = await listReviewRows(tx, { reviewId });
  if (row === undefined) throw notFound("This impact review");
  return row;
}
