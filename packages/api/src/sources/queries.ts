/** Sources and certificates: SQL only. */
import { and, asc, desc, eq, sql } from "drizzle-orm";
import { captures, checkDrafts, instruments, people, sourceCertificates, sources } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";

export type SourceRow = typeof sources.$inferSelect;

export interface SourceWithMore {
  source: SourceRow;
  builtIntoName: string | null;
  usedInChecks: number;
  certificate: {
    fileName: string;
    sizeBytes: number;
    sha256: string;
    storedAt: Date;
    storedById: string | null;
    storedByName: string | null;
  } | null;
}

/** Every source, in use first, by label; with how often it was used and its newest certificate. */
export async function listSources(tx: Tx, sourceId?: string): Promise<SourceWithMore[]> {
  // A source counts as used where a working copy that holds captures names it.
  const used = sql<number>`(select count(*) from ${checkDrafts} d where d.lab_id = ${sources.labId}
    and d.inputs -> 'sourceIds' ? ${sources.id}::text
    and exists (select 1 from ${captures} c where c.lab_id = d.lab_id and c.check_id = d.check_id))`.mapWith(Number);
  const newest = tx
    .select({
      fileName: sourceCertificates.fileName,
      sizeBytes: sourceCertificates.sizeBytes,
      sha256: sourceCertificates.sha256,
      storedAt: sourceCertificates.storedAt,
      storedById: sourceCertificates.storedBy,
      storedByName: people.name,
    })
    .from(sourceCertificates)
    .leftJoin(people, eq(people.id, sourceCertificates.storedBy))
    .where(and(eq(sourceCertificates.labId, sources.labId), eq(sourceCertificates.sourceId, sources.id)))
    .orderBy(desc(sourceCertificates.storedAt), desc(sourceCertificates.id))
    .limit(1)
    .as("newest");
  const rows = await tx
    .select({
      source: sources,
      builtIntoName: instruments.name,
      usedInChecks: used,
      certificate: {
        fileName: newest.fileName,
        sizeBytes: newest.sizeBytes,
        sha256: newest.sha256,
        storedAt: newest.storedAt,
        storedById: newest.storedById,
        storedByName: newest.storedByName,
      },
    })
    .from(sources)
    .leftJoin(instruments, and(eq(instruments.labId, sources.labId), eq(instruments.id, sources.builtIntoInstrumentId)))
    .leftJoinLateral(newest, sql`true`)
    .where(sourceId === undefined ? undefined : eq(sources.id, sourceId))
    .orderBy(sql`${sources.retiredAt} is not null`, asc(sql`lower(${sources.label})`));
  return rows.map((row) => ({
    source: row.source,
    builtIntoName: row.builtIntoName,
    usedInChecks: row.usedInChecks,
    certificate: row.certificate === null || row.certificate.fileName === null ? null : row.certificate,
  }));
}

/** @throws problem "not-found" */
export async function findSource(tx: Tx, sourceId: string): Promise<SourceWithMore> {
  const [found] = await listSources(tx, sourceId);
  if (found === undefined) throw notFound("This source");
  return found;
}

/** The row itself, held until the transaction ends. @throws problem "not-found" */
export async function lockSource(tx: Tx, sourceId: string): Promise<SourceRow> {
  const [row] = await tx.select().from(sources).where(eq(sources.id, sourceId)).for("update");
  if (row === undefined) throw notFound("This source");
  return row;
}

export async function findCertificate(tx: Tx, sourceId: string): Promise<typeof sourceCertificates.$inferSelect> {
  const [row] = await tx
    .select()
    .from(sourceCertificates)
    .where(eq(sourceCertificates.sourceId, sourceId))
    .orderBy(desc(sourceCertificates.storedAt), desc(sourceCertificates.id))
    .limit(1);
  if (row === undefined) throw notFound("A certificate of this source");
  return row;
}
