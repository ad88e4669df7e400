/** Laboratories. The row `HOUSE_LAB_ID` is no laboratory: its chain and outbox hold what belongs to no lab. */
import { sql } from "drizzle-orm";
import { boolean, check, doublePrecision, integer, jsonb, pgPolicy, pgTable, text, uuid } from "drizzle-orm/pg-core";
import { currentLab, instant, newId } from "../columns.ts";

/** What belongs to no lab (a reset of a password, a refused sign-in of nobody) is recorded under this id. */
export const HOUSE_LAB_ID = "00000000-0000-7000-8000-000000000000";

export type StoredDecisionRule = { kind: "simple" } | { kind: "guarded"; r: number };

export const labs = pgTable(
  "labs",
  {
    id: uuid("id").primaryKey().$defaultFn(newId),
    name: text("name").notNull(),
    /** IANA name: dates and check numbers are cut in it. */
    zone: text("zone").notNull(),
    altitudeM: doublePrecision("altitude_m"),
    isDemo: boolean("is_demo").notNull().default(false),
    selfApproval: boolean("self_approval").notNull().default(false),
    warningShare: doublePrecision("warning_share").notNull().default(0.75),
    decisionRule: jsonb("decision_rule").$type<StoredDecisionRule>().notNull().default({ kind: "guarded", r: 1 }),
    /** Address outside the lab's own hands that receives the signed heads of the trail. */
    headMail: text("head_mail"),
    version: integer("version").notNull().default(0),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    check("labs_warning_share", sql`${t.warningShare} between 0.3 and 1`),
    pgPolicy("lab_apart", {
      for: "all",
      to: "public",
      using: sql`id = ${currentLab}`,
      withCheck: sql`id = ${currentLab}`,
    }),
  ],
);
