/** Reference sources and their certificates as received. */
import { sql } from "drizzle-orm";
import {
  check,
  date,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import { bytes, id, instant, labId, tenant, tenantKey } from "../columns.ts";
import { instruments } from "./instruments.ts";
import { memberKey } from "./people.ts";

export const sources = pgTable(
  "sources",
  {
    labId: labId(),
    id: id(),
    label: text("label").notNull(),
    name: text("name").notNull(),
    kind: text("kind").notNull(),
    elements: jsonb("elements").$type<string[]>().notNull(),
    laserLineNm: doublePrecision("laser_line_nm"),
    maker: text("maker").notNull(),
    serial: text("serial").notNull(),
    builtIntoInstrumentId: uuid("built_into_instrument_id"),
    warmUpMinutes: integer("warm_up_minutes").notNull(),
    reviewDueOn: date("review_due_on"),
    note: text("note").notNull(),
    registeredAt: instant("registered_at").notNull(),
    retiredAt: instant("retired_at"),
    retiredReason: text("retired_reason"),
    version: integer("version").notNull().default(0),
  },
  (t) => [
    ...tenant(t),
    uniqueIndex("sources_label_in_use")
      .on(t.labId, sql`lower(${t.label})`)
      .where(sql`${t.retiredAt} is null`),
    check(
      "sources_kind",
      sql`${t.kind} in ('low-pressure-lamp', 'high-pressure-lamp', 'laser', 'absorption-standard', 'built-in')`,
    ),
    tenantKey([t.labId, t.builtIntoInstrumentId], [instruments.labId, instruments.id]),
  ],
);

/** Insert-only: a newer certificate stands before an older one, which stays. */
export const sourceCertificates = pgTable(
  "source_certificates",
  {
    labId: labId(),
    id: id(),
    sourceId: uuid("source_id").notNull(),
    fileName: text("file_name").notNull(),
    sizeBytes: integer("size_bytes").notNull(),
    sha256: text("sha256").notNull(),
    bytes: bytes("bytes").notNull(),
    storedAt: instant("stored_at").notNull(),
    storedBy: uuid("stored_by"),
  },
  (t) => [
    ...tenant(t),
    tenantKey([t.labId, t.sourceId], [sources.labId, sources.id]),
    memberKey(t, t.storedBy),
    index("source_certificates_by_source").on(t.labId, t.sourceId, t.storedAt),
  ],
);
