/** Today, alerts, impact reviews, search. */
import { z } from "zod";
import { date, id, instant, page, pageQuery, personRef, reason, shownState, version } from "./common.ts";
import { fleetRow } from "./instruments.ts";

export const alertKind = z.enum(["out-of-tolerance", "near-limit", "inconclusive", "overdue", "source-review"]);
export const alert = z.object({
  id,
  kind: alertKind,
  title: z.string(),
  detail: z.string(),
  instrumentId: id.nullable(),
  instrumentName: z.string().nullable(),
  configurationId: id.nullable(),
  configurationName: z.string().nullable(),
  sourceId: id.nullable(),
  sourceLabel: z.string().nullable(),
  owner: personRef.nullable(),
  checkId: id.nullable(),
  checkNumber: z.string().nullable(),
  state: shownState.nullable(),
  openedAt: instant,
  closedAt: instant.nullable(),
  closedBecause: z.string().nullable(),
  reopenedCount: z.number().int(),
  acknowledged: z.object({ by: personRef, at: instant, note: z.string(), forOwner: z.boolean() }).nullable(),
  mayAcknowledge: z.boolean(),
  version,
});
export type Alert = z.infer<typeof alert>;
export const alertsQuery = pageQuery.extend({
  state: z.enum(["open", "closed", "all"]).default("open"),
  instrumentId: id.optional(),
});
export const alertsReply = page(alert);
export const acknowledgeAlertInput = z.object({ note: reason, version });

export const impactReview = z.object({
  id,
  number: z.string(),
  instrumentId: id,
  instrumentName: z.string(),
  configurationId: id,
  configurationName: z.string().nullable(),
  owner: personRef,
  check: z.object({ id, number: z.string() }),
  /** Exposure window: from the last good check (null: none on record) to the failing one. */
  windowFrom: instant.nullable(),
  windowFromCheck: z.object({ id, number: z.string() }).nullable(),
  windowTo: instant,
  largestErrorNm: z.number().nullable(),
  largestAtNm: z.number().nullable(),
  openedAt: instant,
  state: z.enum(["open", "decided"]),
  decision: z
    .object({
      affected: z.enum(["none", "some", "unknown"]),
      affectedWork: z.string(),
      decision: z.string(),
      by: personRef,
      at: instant,
      forOwner: z.boolean(),
    })
    .nullable(),
  mayDecide: z.boolean(),
});
export type ImpactReview = z.infer<typeof impactReview>;
export const impactReply = z.object({ items: z.array(impactReview) });
export const decideImpactInput = z.object({
  affected: z.enum(["none", "some", "unknown"]),
  affectedWork: z.string().trim().max(8000),
  decision: reason,
});

/** What waits for this person, most urgent first. Sentences are made by the server, so that mail says the same. */
export const todayItem = z.object({
  key: z.string(),
  kind: z.enum(["hold-decision", "review", "due", "overdue", "returned", "draft", "impact", "alert", "recent"]),
  state: shownState.nullable(),
  title: z.string(),
  detail: z.string(),
  link: z.object({ label: z.string(), to: z.string() }).nullable(),
  action: z.object({ label: z.string(), to: z.string() }).nullable(),
});
export const todayReply = z.object({
  on: date,
  sentence: z.string(),
  items: z.array(todayItem),
  due: z.array(z.object({ label: z.string(), note: z.string(), on: date, days: z.number().int(), to: z.string() })),
  fleet: z.array(fleetRow),
});
export type TodayReply = z.infer<typeof todayReply>;

export const searchQuery = z.object({ q: z.string().trim().min(1).max(100) });
export const searchReply = z.object({
  hits: z.array(
    z.object({ kind: z.enum(["instrument", "check", "person"]), label: z.string(), note: z.string(), to: z.string() }),
  ),
});
