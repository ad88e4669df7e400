/**
 * Instruments, their configurations, and what is stated of a configuration over time.
 *
 * Tolerance versions, standing entries, events and axes are insert-only: a later row takes over from an earlier one,
 * and what was in force on a date can always be found.
 */
import { sql } from "drizzle-orm";
import {
  boolean,
  check,
  date,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  unique,
  uniqueIndex,
  uuid,
  type PgTableExtraConfigValue,
} from "drizzle-orm/pg-core";
import type { z } from "zod";
import type { decisionRule, toleranceSegment } from "../../contract/common.ts";
import type { Optics } from "../../contract/instruments.ts";
import { id, instant, labId, tenant, tenantKey } from "../columns.ts";
import { checks } from "./checks.ts";
import { memberKey } from "./people.ts";
import { procedures } from "./procedures.ts";

export type StoredSegment = z.infer<typeof toleranceSegment>;
export type StoredRule = z.infer<typeof decisionRule>;

export const instruments = pgTable(
  "instruments",
  {
    labId: labId(),
    id: id(),
    name: text("name").notNull(),
    kind: text("kind").notNull(),
    maker: text("maker").notNull(),
    model: text("model").notNull(),
    serial: text("serial").notNull(),
    ownerId: uuid("owner_id").notNull(),
    place: text("place").notNull(),
    /** Metres above sea level, where it differs from the lab's. */
    altitudeM: doublePrecision("altitude_m"),
    purchasedOn: date("purchased_on"),
    registeredAt: instant("registered_at").notNull(),
    registeredBy: uuid("registered_by"),
    retiredAt: instant("retired_at"),
    retiredReason: text("retired_reason"),
    version: integer("version").notNull().default(0),
  },
  (t) => [
    ...tenant(t),
    uniqueIndex("instruments_name_in_use")
      .on(t.labId, sql`lower(${t.name})`)
      .where(sql`${t.retiredAt} is null`),
    check("instruments_kind", sql`${t.kind} in ('array', 'scanning', 'spectrophotometer', 'raman')`),
    memberKey(t, t.ownerId),
    memberKey(t, t.registeredBy),
    index("instruments_by_owner").on(t.labId, t.ownerId),
  ],
);

export const configurations = pgTable(
  "configurations",
  {
    labId: labId(),
    id: id(),
    instrumentId: uuid("instrument_id").notNull(),
    /** 1, 2, 3… along the instrument's life. */
    ordinal: integer("ordinal").notNull(),
    /** null for a plain instrument, whose pages never show the word; two present ones each have their own. */
    name: text("name"),
    /** The one that ended where this one began: its grating, detector, slit or laser was replaced. */
    replacesId: uuid("replaces_id"),
    fromOn: date("from_on").notNull(),
    toOn: date("to_on"),
    endedReason: text("ended_reason"),
    axisKind: text("axis_kind").notNull(),
    axisMeaning: text("axis_meaning").notNull(),
    rangeFirstNm: doublePrecision("range_first_nm").notNull(),
    rangeLastNm: doublePrecision("range_last_nm").notNull(),
    nominalFwhmNm: doublePrecision("nominal_fwhm_nm"),
    optics: jsonb("optics").$type<Optics>().notNull(),
    intervalDays: integer("interval_days").notNull(),
    graceDays: integer("grace_days").notNull(),
    dueOn: date("due_on"),
    assignedToId: uuid("assigned_to_id"),
    setupReproducibilityNm: doublePrecision("setup_reproducibility_nm"),
    decisionRule: jsonb("decision_rule").$type<StoredRule>().notNull(),
    warningShare: doublePrecision("warning_share").notNull(),
    procedureId: uuid("procedure_id").notNull(),
    /** The failing check that asked for an as-left check; null when none is asked for. */
    asLeftAskedByCheckId: uuid("as_left_asked_by_check_id"),
    version: integer("version").notNull().default(0),
  },
  // Checks and configurations point at each other: without the annotation their types would be circular.
  (t): PgTableExtraConfigValue[] => [
    ...tenant(t),
    unique("configurations_ordinal").on(t.labId, t.instrumentId, t.ordinal),
    uniqueIndex("configurations_name_in_use")
      .on(t.labId, t.instrumentId, sql`lower(coalesce(${t.name}, ''))`)
      .where(sql`${t.toOn} is null`),
    unique("configurations_replaced_once").on(t.labId, t.replacesId),
    check("configurations_name", sql`${t.name} <> ''`),
    check("configurations_axis_kind", sql`${t.axisKind} in ('pixel', 'wavelength', 'step')`),
    check("configurations_axis_meaning", sql`${t.axisMeaning} in ('vacuum', 'standard-air', 'room-air')`),
    check("configurations_range", sql`${t.rangeFirstNm} < ${t.rangeLastNm}`),
    check("configurations_interval", sql`${t.intervalDays} > 0 and ${t.graceDays} >= 0`),
    tenantKey([t.labId, t.instrumentId], [instruments.labId, instruments.id]),
    tenantKey([t.labId, t.replacesId], [t.labId, t.id]),
    memberKey(t, t.assignedToId),
    tenantKey([t.labId, t.procedureId], [procedures.labId, procedures.id]),
    tenantKey([t.labId, t.asLeftAskedByCheckId], [checks.labId, checks.id]),
    index("configurations_by_due").on(t.labId, t.dueOn),
  ],
);

export const toleranceVersions = pgTable(
  "tolerance_versions",
  {
    labId: labId(),
    id: id(),
    configurationId: uuid("configuration_id").notNull(),
    version: integer("version").notNull(),
    segments: jsonb("segments").$type<StoredSegment[]>().notNull(),
    inForceFrom: instant("in_force_from").notNull(),
    reason: text("reason").notNull(),
    setBy: uuid("set_by"),
  },
  (t) => [
    ...tenant(t),
    unique("tolerance_versions_number").on(t.labId, t.configurationId, t.version),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    memberKey(t, t.setBy),
  ],
);

export const standingEntries = pgTable(
  "standing_entries",
  {
    labId: labId(),
    id: id(),
    configurationId: uuid("configuration_id").notNull(),
    /** 1, 2, 3…: the unique key decides between two who change it at once. */
    sequence: integer("sequence").notNull(),
    standing: text("standing").notNull(),
    restriction: text("restriction"),
    since: instant("since").notNull(),
    reason: text("reason").notNull(),
    /** null: Wavekeep, by a verdict. */
    setBy: uuid("set_by"),
    checkId: uuid("check_id"),
  },
  (t) => [
    ...tenant(t),
    unique("standing_entries_sequence").on(t.labId, t.configurationId, t.sequence),
    check(
      "standing_entries_standing",
      sql`${t.standing} in ('in-service', 'on-hold', 'restricted', 'out-of-service', 'quarantined', 'retired')`,
    ),
    check("standing_entries_restriction", sql`(${t.standing} = 'restricted') = (${t.restriction} is not null)`),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    memberKey(t, t.setBy),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
  ],
);

export const instrumentEvents = pgTable(
  "instrument_events",
  {
    labId: labId(),
    id: id(),
    configurationId: uuid("configuration_id").notNull(),
    kind: text("kind").notNull(),
    title: text("title").notNull(),
    happenedOn: date("happened_on").notNull(),
    note: text("note").notNull(),
    breaksDrift: boolean("breaks_drift").notNull(),
    recordedAt: instant("recorded_at").notNull(),
    recordedBy: uuid("recorded_by"),
  },
  (t) => [
    ...tenant(t),
    check(
      "instrument_events_kind",
      sql`${t.kind} in ('moved', 'serviced', 'lamp-changed', 'slit-changed', 'adjusted', 'firmware', 'environment', 'other')`,
    ),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    memberKey(t, t.recordedBy),
    index("instrument_events_by_configuration").on(t.labId, t.configurationId, t.happenedOn),
  ],
);

export const axes = pgTable(
  "axes",
  {
    labId: labId(),
    id: id(),
    configurationId: uuid("configuration_id").notNull(),
    number: integer("number").notNull(),
    /** nm, ascending powers of the pixel. */
    coefficients: jsonb("coefficients").$type<number[]>().notNull(),
    firstPx: doublePrecision("first_px").notNull(),
    lastPx: doublePrecision("last_px").notNull(),
    /** Covariance of the Chebyshev coefficients, nm², row-major; null when the axis was typed in. */
    chebyshevCovariance: jsonb("chebyshev_covariance").$type<number[]>(),
    degreesOfFreedom: doublePrecision("degrees_of_freedom"),
    meaning: text("meaning").notNull(),
    inForceFrom: instant("in_force_from").notNull(),
    reason: text("reason").notNull(),
    fromCheckId: uuid("from_check_id"),
    setBy: uuid("set_by"),
  },
  (t) => [
    ...tenant(t),
    unique("axes_number").on(t.labId, t.configurationId, t.number),
    check("axes_meaning", sql`${t.meaning} in ('vacuum', 'standard-air', 'room-air')`),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    tenantKey([t.labId, t.fromCheckId], [checks.labId, checks.id]),
    memberKey(t, t.setBy),
  ],
);
