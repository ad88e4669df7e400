/** Requests that may be repeated: key per person and route, with the request's hash, kept for 24 hours. */
import { index, integer, jsonb, pgTable, primaryKey, text, uuid } from "drizzle-orm/pg-core";
import { instant, labId, tenantPolicy } from "../columns.ts";
import { memberKey } from "./people.ts";

export const idempotencyKeys = pgTable(
  "idempotency_keys",
  {
    labId: labId(),
    personId: uuid("person_id").notNull(),
    route: text("route").notNull(),
    key: text("key").notNull(),
    requestHash: text("request_hash").notNull(),
    /** Written after the effect is committed; null in the moment between. */
    status: integer("status"),
    reply: jsonb("reply"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.personId, t.route, t.key] }),
    tenantPolicy(),
    memberKey(t, t.personId),
    index("idempotency_keys_by_time").on(t.createdAt),
  ],
);
