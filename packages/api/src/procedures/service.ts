/** The lab's procedures: those it begins with, and reading them. */
import type { z } from "zod";
import type { InstrumentKind } from "../contract/common.ts";
import type { proceduresReply } from "../contract/sources.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { procedures } from "../db/schema/index.ts";
import { inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import type { TrailInput } from "../records/trail.ts";
import { defaultProcedures } from "./default-procedures.ts";
import { listProcedureRows } from "./queries.ts";

/**
 * Give a new lab its procedures, one a kind of instrument. Called in the transaction that makes the lab.
 *
 * @returns the trail entries to be written with the lab's own
 */
export async function addDefaultProcedures(tx: Tx, ctx: Pick<Context, "labId">): Promise<TrailInput[]> {
  const approvedAt = await recordNow(tx);
  const rows = defaultProcedures.map((procedure) => ({
    labId: ctx.labId,
    id: newId(),
    version: 1,
    approvedAt,
    approvedBy: null,
    ...procedure,
  }));
  await tx.insert(procedures).values(rows);
  return rows.map((row) => ({
    action: "procedure.approved",
    about: { kind: "procedure", id: row.id, label: row.code },
    shape: "wavekeep",
    after: { code: row.code, version: 1, title: row.title },
    rows: [{ table: "procedures", id: row.id }],
  }));
}

export function listProcedures(db: Database, ctx: Context): Promise<z.input<typeof proceduresReply>> {
  return inLab(db, ctx, async (tx) => ({
    items: (await listProcedureRows(tx)).map(({ procedure, approverName }) => ({
      ...procedure,
      instrumentKind: procedure.instrumentKind as InstrumentKind,
      approvedAt: procedure.approvedAt.toISOString(),
      approvedBy: procedure.approvedBy === null ? null : { id: procedure.approvedBy, name: approverName ?? "" },
    })),
  }));
}
