/** Impact reviews: the exposure window of a failing check, and what was decided about it. Insert-only. */
import { sql } from "drizzle-orm";
import { boolean, check, doublePrecision, index, pgTable, text, unique, uuid } from "drizzle-orm/pg-core";
import { id, instant, labId, tenant, tenantKey } from "../columns.ts";
import { checks } from "./checks.ts";
import { configurations, instruments } from "./instruments.ts";
import { memberKey } from "./people.ts";

export const impactReviews = pgTable(
  "impact_reviews",
  {
    labId: labId(),
    id: id(),
    number: text("number").notNull(),
    instrumentId: uuid("instrument_id").notNull(),
    configurationId: uuid("configuration_id").notNull(),
    checkId: uuid("check_id").notNull(),
    windowFrom: instant("window_from"),
    windowFromCheckId: uuid("window_from_check_id"),
    windowTo: instant("window_to").notNull(),
    largestErrorNm: doublePrecision("largest_error_nm"),
    largestAtNm: doublePrecision("largest_at_nm"),
    openedAt: instant("opened_at").notNull(),
  },
  (t) => [
    ...tenant(t),
    unique("impact_reviews_number").on(t.labId, t.number),
    unique("impact_reviews_check").on(t.labId, t.checkId),
    tenantKey([t.labId, t.instrumentId], [instruments.labId, instruments.id]),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    tenantKey([t.labId, t.windowFromCheckId], [checks.labId, checks.id]),
    index("impact_reviews_by_configuration").on(t.labId, t.configurationId, t.openedAt),
  ],
);

export const impactDecisions = pgTable(
  "impact_decisions",
  {
    labId: labId(),
    id: id(),
    reviewId: uuid("review_id").notNull(),
    affected: text("affected").notNull(),
    affectedWork: text("affected_work").notNull(),
    decision: text("decision").notNull(),
    decidedAt: instant("decided_at").notNull(),
    decidedBy: uuid("decided_by").notNull(),
    /** A manager who acted for the owner. */
    forOwner: boolean("for_owner").notNull(),
  },
  (t) => [
    ...tenant(t),
    // A review is decided once: the key decides between two who do it at once.
    unique("impact_decisions_once").on(t.labId, t.reviewId),
    check("impact_decisions_affected", sql`${t.affected} in ('none', 'some', 'unknown')`),
    tenantKey([t.labId, t.reviewId], [impactReviews.labId, impactReviews.id]),
    memberKey(t, t.decidedBy),
  ],
);
