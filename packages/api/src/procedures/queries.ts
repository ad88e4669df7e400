/** Procedures: SQL only. */
import { asc, desc, eq } from "drizzle-orm";
import type { InstrumentKind } from "../contract/common.ts";
import { people, procedures } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";

export type ProcedureRow = typeof procedures.$inferSelect;

export function listProcedureRows(tx: Tx): Promise<{ procedure: ProcedureRow; approverName: string | null }[]> {
  return tx
    .select({ procedure: procedures, approverName: people.name })
    .from(procedures)
    .leftJoin(people, eq(people.id, procedures.approvedBy))
    .orderBy(asc(procedures.code), desc(procedures.version));
}

/** @throws problem "not-found" */
export async function findProcedure(tx: Tx, procedureId: string): Promise<ProcedureRow> {
  const [row] = await tx.select().from(procedures).where(eq(procedures.id, procedureId));
  if (row === undefined) throw notFound("This procedure");
  return row;
}

/** The newest procedure for a kind of instrument; a lab has one from its first day. */
export async function findProcedureForKind(tx: Tx, kind: InstrumentKind): Promise<ProcedureRow> {
  const [row] = await tx
    .select()
    .from(procedures)
    .where(eq(procedures.instrumentKind, kind))
    .orderBy(desc(procedures.version), asc(procedures.code))
    .limit(1);
  if (row === undefined) throw notFound(`A procedure for this kind of instrument`);
  return row;
}
