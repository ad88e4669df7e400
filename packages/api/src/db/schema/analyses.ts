/** Analyses, submitted revisions, signatures, reports and drift points: the measured record. All insert-only. */
import { sql } from "drizzle-orm";
import {
  boolean,
  check,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  text,
  unique,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import type { Analysis, SpectrumDrawing } from "@wavekeep/core";
import type { CheckSummary, StripLine } from "../../contract/common.ts";
import { bytes, id, instant, labId, tenant, tenantKey, tenantPolicy } from "../columns.ts";
import { checks, type StoredDraft } from "./checks.ts";
import { configurations, type StoredSegment } from "./instruments.ts";
import { memberKey } from "./people.ts";

/** What lists and mails say of a result, kept beside it so that no list reads whole analyses. */
export type StoredResult = NonNullable<CheckSummary["result"]>;

export const analyses = pgTable(
  "analyses",
  {
    labId: labId(),
    id: id(),
    checkId: uuid("check_id").notNull(),
    version: integer("version").notNull(),
    attempt: integer("attempt").notNull(),
    revision: integer("revision").notNull(),
    madeAt: instant("made_at").notNull(),
    madeBy: uuid("made_by").notNull(),
    coreVersion: text("core_version").notNull(),
    lineListVersion: text("line_list_version").notNull(),
    /** The working copy it was made from, and its SHA-256: a later change asks for another analysis. */
    inputs: jsonb("inputs").$type<StoredDraft>().notNull(),
    inputsSha256: text("inputs_sha256").notNull(),
    captureIds: jsonb("capture_ids").$type<string[]>().notNull(),
    toleranceVersion: integer("tolerance_version").notNull(),
    axisNumber: integer("axis_number"),
    analysis: jsonb("analysis").$type<Analysis>().notNull(),
    /** SHA-256 of the analysis in canonical form (RFC 8785). */
    sha256: text("sha256").notNull(),
    outcome: text("outcome").notNull(),
    verdict: text("verdict"),
    nearLimit: boolean("near_limit").notNull(),
    result: jsonb("result").$type<StoredResult>().notNull(),
    strip: jsonb("strip").$type<StripLine[]>().notNull(),
    /** What differs from the version before, in words. */
    changed: text("changed").notNull(),
  },
  (t) => [
    ...tenant(t),
    unique("analyses_version").on(t.labId, t.checkId, t.version),
    check("analyses_outcome", sql`${t.outcome} in ('identified', 'ambiguous', 'unidentified', 'refused')`),
    check("analyses_verdict", sql`${t.verdict} in ('pass', 'inconclusive', 'fail')`),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.madeBy),
  ],
);

export const analysisDrawings = pgTable(
  "analysis_drawings",
  {
    labId: labId(),
    analysisId: uuid("analysis_id").notNull(),
    drawing: jsonb("drawing").$type<SpectrumDrawing>().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.analysisId] }),
    tenantKey([t.labId, t.analysisId], [analyses.labId, analyses.id]),
    tenantPolicy(),
  ],
);

export const submissions = pgTable(
  "submissions",
  {
    labId: labId(),
    id: id(),
    checkId: uuid("check_id").notNull(),
    revision: integer("revision").notNull(),
    analysisId: uuid("analysis_id").notNull(),
    submittedAt: instant("submitted_at").notNull(),
    submittedBy: uuid("submitted_by").notNull(),
    /** When the first capture of the submitted attempt arrived: the time of the measurement in the drift series. */
    measuredAt: instant("measured_at").notNull(),
    inputs: jsonb("inputs").$type<StoredDraft>().notNull(),
    toleranceVersion: integer("tolerance_version").notNull(),
    toleranceSegments: jsonb("tolerance_segments").$type<StoredSegment[]>().notNull(),
    procedureVersion: integer("procedure_version").notNull(),
    attemptCount: integer("attempt_count").notNull(),
    verdict: text("verdict"),
    nearLimit: boolean("near_limit").notNull(),
    /** SHA-256 over the canonical form of all that the signature stands for. */
    contentSha256: text("content_sha256").notNull(),
  },
  (t) => [
    ...tenant(t),
    unique("submissions_revision").on(t.labId, t.checkId, t.revision),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    tenantKey([t.labId, t.analysisId], [analyses.labId, analyses.id]),
    memberKey(t, t.submittedBy),
  ],
);

export const signatures = pgTable(
  "signatures",
  {
    labId: labId(),
    id: id(),
    checkId: uuid("check_id").notNull(),
    revision: integer("revision").notNull(),
    meaning: text("meaning").notNull(),
    personId: uuid("person_id").notNull(),
    printedName: text("printed_name").notNull(),
    role: text("role").notNull(),
    signedAt: instant("signed_at").notNull(),
    /** IANA zone of the lab when it was signed. */
    zone: text("zone").notNull(),
    contentSha256: text("content_sha256").notNull(),
    /** How the signer was known: the password again, or the seeding of a demo lab. */
    proof: text("proof").notNull(),
    selfApproval: boolean("self_approval").notNull(),
  },
  (t) => [
    ...tenant(t),
    unique("signatures_meaning").on(t.labId, t.checkId, t.revision, t.meaning),
    check("signatures_meaning_words", sql`${t.meaning} in ('made by', 'reviewed and approved')`),
    uniqueIndex("signatures_one_approval")
      .on(t.labId, t.checkId)
      .where(sql`${t.meaning} = 'reviewed and approved'`),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    memberKey(t, t.personId),
  ],
);

export const reports = pgTable(
  "reports",
  {
    labId: labId(),
    checkId: uuid("check_id").notNull(),
    number: text("number").notNull(),
    sha256: text("sha256").notNull(),
    bytes: bytes("bytes").notNull(),
    madeAt: instant("made_at").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.checkId] }),
    unique("reports_number").on(t.labId, t.number),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    tenantPolicy(),
  ],
);

export const driftPoints = pgTable(
  "drift_points",
  {
    labId: labId(),
    checkId: uuid("check_id").notNull(),
    revision: integer("revision").notNull(),
    configurationId: uuid("configuration_id").notNull(),
    measuredAt: instant("measured_at").notNull(),
    coreVersion: text("core_version").notNull(),
    midNm: doublePrecision("mid_nm").notNull(),
    rangeNm: doublePrecision("range_nm").notNull(),
    midErrorNm: doublePrecision("mid_error_nm").notNull(),
    midErrorUncNm: doublePrecision("mid_error_unc_nm").notNull(),
    scaleErrorNm: doublePrecision("scale_error_nm").notNull(),
    scaleErrorUncNm: doublePrecision("scale_error_unc_nm").notNull(),
    covarianceNm2: doublePrecision("covariance_nm2").notNull(),
    largestErrorNm: doublePrecision("largest_error_nm").notNull(),
    largestErrorUncNm: doublePrecision("largest_error_unc_nm").notNull(),
    largestAtNm: doublePrecision("largest_at_nm").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.checkId, t.revision] }),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    tenantKey([t.labId, t.configurationId], [configurations.labId, configurations.id]),
    index("drift_points_by_configuration").on(t.labId, t.configurationId, t.measuredAt),
    tenantPolicy(),
  ],
);
