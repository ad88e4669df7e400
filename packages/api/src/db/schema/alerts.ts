/** Alerts: opened and closed by what checks prove and by dates; one open a kind and configuration (or source). */
import { sql } from "drizzle-orm";
import { boolean, check, index, integer, pgTable, text, uniqueIndex, uuid } from "drizzle-orm/pg-core";
import { id, instant, labId, tenant, tenantKey } from "../columns.ts";
import { checks } from "./checks.ts";
import { configurations, instruments } from "./instruments.ts";
import { memberKey } from "./people.ts";
import { sources } from "./sources.ts";

export const alerts = pgTable(
  "alerts",
  {
    labId: labId(),
    id: id(),
    kind: text("kind").notNull(),
    instrumentId: uuid("instrument_id"),
    configurationId: uuid("configuration_id"),
    sourceId: uuid("source_id"),
    checkId: uuid("check_id"),
    title: text("title").notNull(),
    /** The figures that opened it, as a sentence: frozen. */
    detail: text("detail").notNull(),
    openedAt: instant("opened_at").notNull(),
    closedAt: instant("closed_at"),
    closedBecause: text("closed_because"),
    reopenedCount: integer("reopened_count").notNull().default(0),
    acknowledgedAt: instant("acknowledged_at"),
    acknowledgedBy: uuid("acknowledged_by"),
    acknowledgedNote: text("acknowledged_note"),
    acknowledgedForOwner: boolean("acknowledged_for_owner").notNull().default(false),
    version: integer("version").notNull().default(0),
  },
  (t) => [
    ...tenant(t),
    check(
      "alerts_kind",
      sql`${t.kind} in ('out-of-tolerance', 'near-limit', 'inconclusive', 'overdue', 'source-review')`,
    ),
    check("alerts_about", sql`(${t.configurationId} is null) <> (${t.sourceId} is null)`),
    check("alerts_closed", sql`(${t.closedAt} is null) = (${t.closedBecause} is null)`),
    uniqueIndex("alerts_one_open_by_configuration")
      .on(t.labId, t.kind, t.configurationId)
      .where(sql`${t.closedAt} is null and ${t.configurationId} is not null`),
    uniqueIndex("alerts_one_open_by_source")
      .on(t.labId, t.kind, t.sourceId)
      .where(sql`${t.closedAt} is null and ${t.sourceId} is not null`),
    tenantKey([t.labId, t.instrumentId], [instruments.labId, instruments.id]),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    tenantKey([t.labId, t.sourceId], [sources.labId, sources.id]),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.acknowledgedBy),
    index("alerts_by_opened").on(t.labId, t.openedAt, t.id),
  ],
);
