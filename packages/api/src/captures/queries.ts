/** Bytes as received: SQL only. */
import { and, asc, eq, inArray, max, ne } from "drizzle-orm";
import { captureBytes, captureReadings, captures, checks } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";

/** Who brought these bytes first. */
export interface FirstSeen {
  captureId: string;
  checkId: string;
  checkNumber: string;
  fileName: string;
  receivedAt: Date;
}

/** The first capture of each hash that is not one of `except`. */
export async function findFirstSeen(
  tx: Tx,
  sha256s: readonly string[],
  except: readonly string[] = [],
): Promise<Map<string, FirstSeen>> {
  const found = new Map<string, FirstSeen>();
  if (sha256s.length === 0) return found;
  const rows = await tx
    .select({
      sha256: captures.sha256,
      captureId: captures.id,
      checkId: captures.checkId,
      checkNumber: checks.number,
      fileName: captures.fileName,
      receivedAt: captures.receivedAt,
    })
    .from(captures)
    .innerJoin(checks, and(eq(checks.labId, captures.labId), eq(checks.id, captures.checkId)))
    .where(and(inArray(captures.sha256, [...sha256s]), ...except.map((id) => ne(captures.id, id))))
    .orderBy(asc(captures.receivedAt), asc(captures.position));
  for (const { sha256, ...first } of rows) if (!found.has(sha256)) found.set(sha256, first);
  return found;
}

export async function findLastPosition(tx: Tx, checkId: string): Promise<number> {
  const [row] = await tx
    .select({ last: max(captures.position) })
    .from(captures)
    .where(eq(captures.checkId, checkId));
  return row?.last ?? 0;
}

/** Equal bytes are kept once a lab. */
export async function keepBytes(tx: Tx, row: typeof captureBytes.$inferInsert): Promise<void> {
  await tx.insert(captureBytes).values(row).onConflictDoNothing();
}

export async function loadBytes(tx: Tx, sha256s: readonly string[]): Promise<Map<string, Buffer>> {
  if (sha256s.length === 0) return new Map();
  const rows = await tx
    .select({ sha256: captureBytes.sha256, bytes: captureBytes.bytes })
    .from(captureBytes)
    .where(inArray(captureBytes.sha256, [...sha256s]));
  return new Map(rows.map((row) => [row.sha256, row.bytes]));
}

/** @throws problem "not-found" */
export async function findCaptureWithBytes(
  tx: Tx,
  captureId: string,
): Promise<{ capture: typeof captures.$inferSelect; bytes: Buffer; checkNumber: string; instrumentId: string }> {
  const [row] = await tx
    .select({
      capture: captures,
      bytes: captureBytes.bytes,
      checkNumber: checks.number,
      instrumentId: checks.instrumentId,
    })
    .from(captures)
    .innerJoin(captureBytes, and(eq(captureBytes.labId, captures.labId), eq(captureBytes.sha256, captures.sha256)))
    .innerJoin(checks, and(eq(checks.labId, captures.labId), eq(checks.id, captures.checkId)))
    .where(eq(captures.id, captureId));
  if (row === undefined) throw notFound("This capture");
  return row;
}

/** A reading of the same capture by the same core is kept once. */
export async function keepReadings(tx: Tx, rows: (typeof captureReadings.$inferInsert)[]): Promise<void> {
  await tx.insert(captureReadings).values(rows).onConflictDoNothing();
}
