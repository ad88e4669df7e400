/** The lab's procedures: versions, never edited. */
import { sql } from "drizzle-orm";
import { check, integer, jsonb, pgTable, text, unique, uuid } from "drizzle-orm/pg-core";
import { id, instant, labId, tenant } from "../columns.ts";
import { memberKey } from "./people.ts";

export const procedures = pgTable(
  "procedures",
  {
    labId: labId(),
    id: id(),
    code: text("code").notNull(),
    version: integer("version").notNull(),
    title: text("title").notNull(),
    instrumentKind: text("instrument_kind").notNull(),
    approvedAt: instant("approved_at").notNull(),
    /** null: came with the lab. */
    approvedBy: uuid("approved_by"),
    warmUpMinutes: integer("warm_up_minutes").notNull(),
    repeats: integer("repeats").notNull(),
    elements: jsonb("elements").$type<string[]>().notNull(),
    /** nm, air above 200 nm; a line counts where the source in use has it. */
    requiredLinesNm: jsonb("required_lines_nm").$type<number[]>().notNull(),
    leastLinesPerSegment: integer("least_lines_per_segment").notNull(),
    steps: jsonb("steps").$type<string[]>().notNull(),
    acceptance: text("acceptance").notNull(),
  },
  (t) => [
    ...tenant(t),
    unique("procedures_code_version").on(t.labId, t.code, t.version),
    check("procedures_kind", sql`${t.instrumentKind} in ('array', 'scanning', 'spectrophotometer', 'raman')`),
    memberKey(t, t.approvedBy),
  ],
);
