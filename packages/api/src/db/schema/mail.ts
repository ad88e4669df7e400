/** Outbox: a mail is committed with its cause and delivered afterwards. */
import { index, integer, pgTable, text, uniqueIndex, uuid } from "drizzle-orm/pg-core";
import { id, instant, labId, tenant } from "../columns.ts";
import { labs } from "./labs.ts";
import { memberKey } from "./people.ts";

export const mailOutbox = pgTable(
  "mail_outbox",
  {
    id: id(),
    labId: labId().references(() => labs.id, { onDelete: "restrict", onUpdate: "restrict" }),
    /** Null where the address belongs to no member (an invitation, the address outside the lab). */
    toPersonId: uuid("to_person_id"),
    toAddress: text("to_address").notNull(),
    subject: text("subject").notNull(),
    text: text("text").notNull(),
    /** Cause and period: the same effect is queued once. */
    causeKey: text("cause_key").notNull(),
    messageId: text("message_id").notNull(),
    queuedAt: instant("queued_at").notNull(),
    claimedAt: instant("claimed_at"),
    sentAt: instant("sent_at"),
    attempts: integer("attempts").notNull().default(0),
    lastError: text("last_error"),
  },
  (t) => [
    ...tenant(t),
    uniqueIndex("mail_outbox_cause").on(t.labId, t.causeKey),
    index("mail_outbox_by_time").on(t.labId, t.queuedAt),
    memberKey(t, t.toPersonId),
  ],
);
