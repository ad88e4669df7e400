/** People, what they may do in a lab, and how they get in. */
import { sql } from "drizzle-orm";
import {
  boolean,
  check,
  date,
  index,
  integer,
  pgPolicy,
  pgTable,
  primaryKey,
  text,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import { currentLab, currentPerson, id, instant, labId, newId, tenant, tenantKey, tenantPolicy } from "../columns.ts";
import { labs } from "./labs.ts";

/** A person exists once, whatever labs they belong to; a lab sees those who are or were its members. */
export const people = pgTable(
  "people",
  {
    id: uuid("id").primaryKey().$defaultFn(newId),
    /** Lower case. */
    email: text("email").notNull(),
    name: text("name").notNull(),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("people_email").on(t.email),
    check("people_email_lower", sql`${t.email} = lower(${t.email})`),
    pgPolicy("people_of_lab", {
      for: "select",
      to: "public",
      using: sql`id = ${currentPerson} or exists (select 1 from memberships m where m.person_id = people.id and m.lab_id = ${currentLab})`,
    }),
    pgPolicy("own_row", {
      for: "update",
      to: "public",
      using: sql`id = ${currentPerson}`,
      withCheck: sql`id = ${currentPerson}`,
    }),
  ],
);

/** Argon2id hashes: reached only through security definer functions. */
export const credentials = pgTable(
  "credentials",
  {
    personId: uuid("person_id")
      .primaryKey()
      .references(() => people.id, { onDelete: "restrict", onUpdate: "restrict" }),
    passwordHash: text("password_hash").notNull(),
    passwordChangedAt: instant("password_changed_at").notNull(),
    pinHash: text("pin_hash"),
  },
  () => [pgPolicy("definer_only", { for: "all", to: "public", using: sql`false`, withCheck: sql`false` })],
);

/** What a person is in a lab. Never deleted: what they did still points here. */
export const memberships = pgTable(
  "memberships",
  {
    labId: labId().references(() => labs.id, { onDelete: "restrict", onUpdate: "restrict" }),
    personId: uuid("person_id")
      .notNull()
      .references(() => people.id, { onDelete: "restrict", onUpdate: "restrict" }),
    roles: text("roles").array().notNull(),
    isApprover: boolean("is_approver").notNull().default(false),
    joinedAt: instant("joined_at").notNull(),
    endedAt: instant("ended_at"),
    lastSeenAt: instant("last_seen_at"),
    version: integer("version").notNull().default(0),
  },
  (t) => [
    primaryKey({ columns: [t.labId, t.personId] }),
    index("memberships_by_person").on(t.personId),
    check("memberships_roles", sql`${t.roles} <@ array['manager', 'technician', 'auditor']::text[]`),
    tenantPolicy(),
  ],
);

/** Reference to a person as a member of the row's lab. */
export const memberKey = (
  t: { labId: Parameters<typeof tenantKey>[0][0] },
  column: Parameters<typeof tenantKey>[0][0],
) => tenantKey([t.labId, column], [memberships.labId, memberships.personId]);

/** An invitation by e-mail; the token itself is only in the mail. `invited_by` is null for the first manager of a lab. */
export const invitations = pgTable(
  "invitations",
  {
    id: id(),
    labId: labId().references(() => labs.id, { onDelete: "restrict", onUpdate: "restrict" }),
    email: text("email").notNull(),
    roles: text("roles").array().notNull(),
    tokenHash: text("token_hash").notNull(),
    invitedBy: uuid("invited_by"),
    invitedAt: instant("invited_at").notNull(),
    expiresAt: instant("expires_at").notNull(),
    acceptedAt: instant("accepted_at"),
    acceptedBy: uuid("accepted_by"),
    withdrawnAt: instant("withdrawn_at"),
  },
  (t) => [
    ...tenant(t),
    uniqueIndex("invitations_token").on(t.tokenHash),
    check("invitations_roles", sql`${t.roles} <@ array['manager', 'technician', 'auditor']::text[]`),
    memberKey(t, t.invitedBy),
    memberKey(t, t.acceptedBy),
  ],
);

/** A deputy stands in for a manager or an owner, from one date of the lab's zone to another, both included. */
export const deputies = pgTable(
  "deputies",
  {
    id: id(),
    labId: labId(),
    personId: uuid("person_id").notNull(),
    forPersonId: uuid("for_person_id").notNull(),
    fromOn: date("from_on").notNull(),
    toOn: date("to_on").notNull(),
    appointedBy: uuid("appointed_by").notNull(),
    appointedAt: instant("appointed_at").notNull(),
  },
  (t) => [
    ...tenant(t),
    memberKey(t, t.personId),
    memberKey(t, t.forPersonId),
    memberKey(t, t.appointedBy),
    check("deputies_dates", sql`${t.fromOn} <= ${t.toOn}`),
    check("deputies_other", sql`${t.personId} <> ${t.forPersonId}`),
  ],
);

/** A shared PC on which people change by name and PIN; it holds a random token in a cookie, we hold its hash. */
export const benchDevices = pgTable(
  "bench_devices",
  {
    id: id(),
    labId: labId(),
    name: text("name").notNull(),
    tokenHash: text("token_hash").notNull(),
    enrolledAt: instant("enrolled_at").notNull(),
    enrolledBy: uuid("enrolled_by").notNull(),
    lastUsedAt: instant("last_used_at"),
    removedAt: instant("removed_at"),
  },
  (t) => [...tenant(t), uniqueIndex("bench_devices_token").on(t.tokenHash), memberKey(t, t.enrolledBy)],
);
