/** Captures as received, byte for byte, and what the core read in them. All insert-only. */
import { sql } from "drizzle-orm";
import { check, index, integer, jsonb, pgTable, primaryKey, text, uuid } from "drizzle-orm/pg-core";
import type { CaptureReceipt } from "../../contract/checks.ts";
import { bytes, id, instant, labId, tenant, tenantKey, tenantPolicy } from "../columns.ts";
import { checks, checkAttempts } from "./checks.ts";
import { memberKey } from "./people.ts";

/** Equal bytes are kept once a lab, whatever they are called. */
export const captureBytes = pgTable(
  "capture_bytes",
  {
    labId: labId(),
    sha256: text("sha256").notNull(),
    sizeBytes: integer("size_bytes").notNull(),
    bytes: bytes("bytes").notNull(),
    storedAt: instant("stored_at").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.sha256] }),
    check("capture_bytes_sha256", sql`${t.sha256} ~ '^[0-9a-f]{64}$'`),
    tenantPolicy(),
  ],
);

export const captures = pgTable(
  "captures",
  {
    labId: labId(),
    id: id(),
    checkId: uuid("check_id").notNull(),
    attempt: integer("attempt").notNull(),
    /** Order within the check, from 1. */
    position: integer("position").notNull(),
    fileName: text("file_name").notNull(),
    sizeBytes: integer("size_bytes").notNull(),
    sha256: text("sha256").notNull(),
    part: text("part").notNull(),
    receivedAt: instant("received_at").notNull(),
    receivedBy: uuid("received_by").notNull(),
    /** The first capture that brought these bytes, when it was not this one. */
    seenBeforeCaptureId: uuid("seen_before_capture_id"),
  },
  (t) => [
    ...tenant(t),
    check("captures_part", sql`${t.part} in ('lamp', 'dark')`),
    tenantKey([t.labId, t.sha256], [captureBytes.labId, captureBytes.sha256]),
    tenantKey([t.labId, t.checkId], [checks.labId, checks.id]),
    tenantKey([t.labId, t.checkId, t.attempt], [checkAttempts.labId, checkAttempts.checkId, checkAttempts.number]),
    memberKey(t, t.receivedBy),
    tenantKey([t.labId, t.seenBeforeCaptureId], [t.labId, t.id]),
    index("captures_by_check").on(t.labId, t.checkId, t.position),
    index("captures_by_sha256").on(t.labId, t.sha256),
  ],
);

export const captureReadings = pgTable(
  "capture_readings",
  {
    labId: labId(),
    captureId: uuid("capture_id").notNull(),
    coreVersion: text("core_version").notNull(),
    reading: jsonb("reading").$type<NonNullable<CaptureReceipt["reading"]>>(),
    refusal: text("refusal"),
    readAt: instant("read_at").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.captureId, t.coreVersion] }),
    check("capture_readings_either", sql`(${t.reading} is null) <> (${t.refusal} is null)`),
    tenantKey([t.labId, t.captureId], [captures.labId, captures.id]),
    tenantPolicy(),
  ],
);
