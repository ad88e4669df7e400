/**
 * A check from the moment it is begun: its identity, its working copy, its attempts, who had a part in it, and what happened to it.
 *
 * Only `check_drafts` and the number counters may be updated; a check's state is derived from its events.
 */
import { sql } from "drizzle-orm";
import {
  boolean,
  check,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  text,
  unique,
  uniqueIndex,
  uuid,
  type PgTableExtraConfigValue,
} from "drizzle-orm/pg-core";
import type { DraftInput } from "../../contract/checks.ts";
import { id, instant, labId, tenant, tenantKey, tenantPolicy } from "../columns.ts";
import { configurations, instruments } from "./instruments.ts";
import { memberKey } from "./people.ts";
import { procedures } from "./procedures.ts";

export type StoredDraft = Omit<DraftInput, "version">;

/** Last number given per kind and year (CHK-2027-0041): taken under the row's lock, so that none is given twice. */
export const numberCounters = pgTable(
  "number_counters",
  {
    labId: labId(),
    kind: text("kind").notNull(),
    year: integer("year").notNull(),
    last: integer("last").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.kind, t.year] }),
    check("number_counters_kind", sql`${t.kind} in ('check', 'impact-review', 'report')`),
    tenantPolicy(),
  ],
);

export const checks = pgTable(
  "checks",
  {
    labId: labId(),
    id: id(),
    number: text("number").notNull(),
    instrumentId: uuid("instrument_id").notNull(),
    configurationId: uuid("configuration_id").notNull(),
    condition: text("condition").notNull(),
    followsCheckId: uuid("follows_check_id"),
    procedureId: uuid("procedure_id").notNull(),
    begunAt: instant("begun_at").notNull(),
    begunBy: uuid("begun_by").notNull(),
  },
  // Checks and configurations point at each other: without the annotation their types would be circular.
  (t): PgTableExtraConfigValue[] => [
    ...tenant(t),
    unique("checks_number").on(t.labId, t.number),
    check("checks_condition", sql`${t.condition} in ('as-found', 'as-left')`),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    tenantKey([t.labId, t.instrumentId], [instruments.labId, instruments.id]),
    tenantKey([t.labId, t.followsCheckId], [t.labId, t.id]),
    tenantKey([t.labId, t.procedureId], [procedures.labId, procedures.id]),
    memberKey(t, t.begunBy),
    index("checks_by_configuration").on(t.labId, t.configurationId, t.begunAt),
    index("checks_by_begun").on(t.labId, t.begunAt, t.id),
  ],
);

export const checkDrafts = pgTable(
  "check_drafts",
  {
    labId: labId(),
    checkId: uuid("check_id").notNull(),
    /** The revision that the next signature makes: 1 until the first is sent back. */
    revision: integer("revision").notNull().default(1),
    currentAttempt: integer("current_attempt").notNull().default(1),
    inputs: jsonb("inputs").$type<StoredDraft>().notNull(),
    version: integer("version").notNull().default(0),
    savedAt: instant("saved_at").notNull(),
    savedBy: uuid("saved_by").notNull(),
    /** True while it may be changed: from the beginning, and again after it was sent back. */
    open: boolean("open").notNull().default(true),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.checkId] }),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.savedBy),
    index("check_drafts_open")
      .on(t.labId, t.savedAt)
      .where(sql`${t.open}`),
    tenantPolicy(),
  ],
);

export const checkAttempts = pgTable(
  "check_attempts",
  {
    labId: labId(),
    checkId: uuid("check_id").notNull(),
    number: integer("number").notNull(),
    startedAt: instant("started_at").notNull(),
    startedBy: uuid("started_by").notNull(),
    /** Why the attempt before it was abandoned; empty for the first. */
    reason: text("reason").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.checkId, t.number] }),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.startedBy),
    tenantPolicy(),
  ],
);

/** Nobody approves what they had a part in: one row a person and part. */
export const checkContributors = pgTable(
  "check_contributors",
  {
    labId: labId(),
    checkId: uuid("check_id").notNull(),
    personId: uuid("person_id").notNull(),
    part: text("part").notNull(),
    since: instant("since").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.checkId, t.personId, t.part] }),
    check(
      "check_contributors_part",
      sql`${t.part} in ('began', 'uploaded', 'edited', 'analysed', 'left-out', 'submitted')`,
    ),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.personId),
    tenantPolicy(),
  ],
);

export const checkEvents = pgTable(
  "check_events",
  {
    labId: labId(),
    id: id(),
    checkId: uuid("check_id").notNull(),
    /** 1, 2, 3… within the check. */
    sequence: integer("sequence").notNull(),
    kind: text("kind").notNull(),
    revision: integer("revision").notNull(),
    at: instant("at").notNull(),
    /** null: Wavekeep (a failing draft left for a day). */
    byId: uuid("by_id"),
    comment: text("comment"),
  },
  (t) => [
    ...tenant(t),
    unique("check_events_sequence").on(t.labId, t.checkId, t.sequence),
    check(
      "check_events_kind",
      sql`${t.kind} in ('begun', 'set-aside', 'resumed', 'submitted', 'returned', 'approved', 'acknowledged', 'void')`,
    ),
    // Two reviewers at once, or one who clicks twice: the key decides, the second is told.
    uniqueIndex("check_events_one_decision")
      .on(t.labId, t.checkId, t.revision)
      .where(sql`${t.kind} in ('returned', 'approved')`),
    uniqueIndex("check_events_one_approval")
      .on(t.labId, t.checkId)
      .where(sql`${t.kind} = 'approved'`),
    uniqueIndex("check_events_one_submission")
      .on(t.labId, t.checkId, t.revision)
      .where(sql`${t.kind} = 'submitted'`),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.byId),
  ],
);
