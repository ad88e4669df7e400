/** The trail: one hash chain a lab, its personal data beside it, its signed heads. All insert-only for the app's role. */
import { sql } from "drizzle-orm";
import {
  bigint,
  boolean,
  check,
  index,
  jsonb,
  pgTable,
  primaryKey,
  text,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import { id, instant, labId, tenant, tenantKey, tenantPolicy } from "../columns.ts";
import { labs } from "./labs.ts";

export const trailEntries = pgTable(
  "trail_entries",
  {
    labId: labId().references(() => labs.id, { onDelete: "restrict", onUpdate: "restrict" }),
    /** From 1, without gaps. */
    number: bigint("number", { mode: "number" }).notNull(),
    at: instant("at").notNull(),
    action: text("action").notNull(),
    shape: text("shape").notNull(),
    personId: uuid("person_id"),
    aboutKind: text("about_kind"),
    aboutId: text("about_id"),
    instrumentId: uuid("instrument_id"),
    checkId: uuid("check_id"),
    demo: boolean("demo").notNull(),
    /** The entry itself: RFC 8785 text. The columns beside it are copies to search by, compared when the chain is verified. */
    canonical: text("canonical").notNull(),
    previousHash: text("previous_hash").notNull(),
    /** SHA-256 of `canonical`, hex. The canonical text holds the previous hash. */
    hash: text("hash").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.number] }),
    tenantPolicy(),
    uniqueIndex("trail_entries_hash").on(t.labId, t.hash),
    index("trail_entries_by_instrument").on(t.labId, t.instrumentId, t.number),
    index("trail_entries_by_check").on(t.labId, t.checkId, t.number),
    index("trail_entries_by_person").on(t.labId, t.personId, t.number),
    index("trail_entries_by_action").on(t.labId, t.action, t.number),
    index("trail_entries_by_time").on(t.labId, t.at),
    check("trail_entries_number", sql`${t.number} >= 1`),
    check(
      "trail_entries_shape",
      sql`${t.shape} in ('person', 'wavekeep', 'signature', 'amendment', 'out-of-tolerance')`,
    ),
  ],
);

/** Names and addresses an entry speaks of. The entry holds `HMAC-SHA-256(salt, value)`; disposal empties this row alone. */
export const trailPersonal = pgTable(
  "trail_personal",
  {
    labId: labId(),
    number: bigint("number", { mode: "number" }).notNull(),
    salt: text("salt").notNull(),
    data: jsonb("data").$type<Record<string, string>>().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.number] }),
    tenantPolicy(),
    tenantKey([t.labId, t.number], [trailEntries.labId, trailEntries.number]),
  ],
);

/** Ed25519 signatures over heads of the chain, by a key the database does not hold. */
export const signedHeads = pgTable(
  "signed_heads",
  {
    id: id(),
    labId: labId(),
    number: bigint("number", { mode: "number" }).notNull(),
    hash: text("hash").notNull(),
    signedAt: instant("signed_at").notNull(),
    cause: text("cause").notNull(),
    /** SHA-256 of the public key (SubjectPublicKeyInfo, DER), hex. */
    keyFingerprint: text("key_fingerprint").notNull(),
    publicKey: text("public_key").notNull(),
    signature: text("signature").notNull(),
  },
  (t) => [
    ...tenant(t),
    tenantKey([t.labId, t.number], [trailEntries.labId, trailEntries.number]),
    index("signed_heads_by_number").on(t.labId, t.number),
    check("signed_heads_cause", sql`${t.cause} in ('signature', 'daily')`),
  ],
);
