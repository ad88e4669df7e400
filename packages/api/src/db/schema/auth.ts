/** Sessions, resets, counters: of no lab, so without a lab's policy; what is secret is reached by definer functions only. */
import { sql } from "drizzle-orm";
import {
  index,
  integer,
  json,
  pgPolicy,
  pgTable,
  text,
  timestamp,
  uniqueIndex,
  uuid,
  varchar,
} from "drizzle-orm/pg-core";
import { instant, newId } from "../columns.ts";
import { people } from "./people.ts";

/** Shape that connect-pg-simple reads and writes; `person_id` lets everyone of a person's sessions be ended at once. */
export const sessions = pgTable(
  "sessions",
  {
    sid: varchar("sid").primaryKey(),
    sess: json("sess").notNull(),
    expire: timestamp("expire", { precision: 6, withTimezone: true }).notNull(),
    personId: uuid("person_id").generatedAlwaysAs(sql`((sess ->> 'personId')::uuid)`),
  },
  (t) => [index("sessions_expire").on(t.expire), index("sessions_person").on(t.personId)],
);

export const passwordResets = pgTable(
  "password_resets",
  {
    id: uuid("id").primaryKey().$defaultFn(newId),
    personId: uuid("person_id")
      .notNull()
      .references(() => people.id, { onDelete: "restrict", onUpdate: "restrict" }),
    tokenHash: text("token_hash").notNull(),
    createdAt: instant("created_at").notNull(),
    expiresAt: instant("expires_at").notNull(),
    usedAt: instant("used_at"),
  },
  (t) => [
    uniqueIndex("password_resets_token").on(t.tokenHash),
    pgPolicy("definer_only", { for: "all", to: "public", using: sql`false`, withCheck: sql`false` }),
  ],
);

/** One counter a key and window, for rate limits and lock-out. */
export const rateCounters = pgTable("rate_counters", {
  key: text("key").primaryKey(),
  points: integer("points").notNull(),
  expiresAt: instant("expires_at").notNull(),
});
