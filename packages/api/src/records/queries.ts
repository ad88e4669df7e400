/** Rows of the trail and of its signed heads. */
import { and, asc, desc, eq, gt, gte, inArray, like, lt, sql, type SQL } from "drizzle-orm";
import { checkAttempts, checks, signedHeads, trailEntries, trailPersonal } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";

export interface EntryFilter {
  personId?: string;
  instrumentId?: string;
  checkId?: string;
  /** An action ("check.approved") or its noun ("check"). */
  kind?: string;
  /** Dates in the lab's zone, both included. */
  fromOn?: string;
  toOn?: string;
  /** Entries below this number. */
  below?: number;
}

/** Start of a date in a zone; the day after for its end. */
const startOf = (date: string, zone: string, days = 0) =>
  sql`((${date}::date + ${days}::int)::timestamp at time zone ${zone})`;

function conditions(filter: EntryFilter, zone: string): SQL | undefined {
  const { kind } = filter;
  const parts: (SQL | undefined)[] = [
    filter.personId === undefined ? undefined : eq(trailEntries.personId, filter.personId),
    filter.instrumentId === undefined ? undefined : eq(trailEntries.instrumentId, filter.instrumentId),
    filter.checkId === undefined ? undefined : eq(trailEntries.checkId, filter.checkId),
    kind === undefined
      ? undefined
      : kind.includes(".")
        ? eq(trailEntries.action, kind)
        : like(trailEntries.action, `${kind.replace(/[\\%_]/g, "\\$&")}.%`),
    filter.fromOn === undefined ? undefined : gte(trailEntries.at, startOf(filter.fromOn, zone)),
    filter.toOn === undefined ? undefined : lt(trailEntries.at, startOf(filter.toOn, zone, 1)),
    filter.below === undefined ? undefined : lt(trailEntries.number, filter.below),
  ];
  return and(...parts);
}

const entryColumns = {
  number: trailEntries.number,
  at: trailEntries.at,
  action: trailEntries.action,
  shape: trailEntries.shape,
  personId: trailEntries.personId,
  aboutKind: trailEntries.aboutKind,
  aboutId: trailEntries.aboutId,
  instrumentId: trailEntries.instrumentId,
  checkId: trailEntries.checkId,
  demo: trailEntries.demo,
  canonical: trailEntries.canonical,
  previousHash: trailEntries.previousHash,
  hash: trailEntries.hash,
  labId: trailEntries.labId,
  salt: trailPersonal.salt,
  personal: trailPersonal.data,
};

const entries = (tx: Tx) =>
  tx
    .select(entryColumns)
    .from(trailEntries)
    .leftJoin(
      trailPersonal,
      and(eq(trailPersonal.labId, trailEntries.labId), eq(trailPersonal.number, trailEntries.number)),
    );

export type EntryRow = Awaited<ReturnType<typeof listEntriesAbove>>[number];

/** Newest first. */
export const listEntries = (tx: Tx, filter: EntryFilter, zone: string, limit: number) =>
  entries(tx).where(conditions(filter, zone)).orderBy(desc(trailEntries.number)).limit(limit);

/** Oldest first, from just above a number: the verification's way through the chain. */
export const listEntriesAbove = (tx: Tx, number: number, limit: number) =>
  entries(tx).where(gt(trailEntries.number, number)).orderBy(asc(trailEntries.number)).limit(limit);

export async function listDays(tx: Tx, zone: string): Promise<{ on: string; count: number }[]> {
  const { rows } = await tx.execute<{ on: string; count: number }>(
    sql`select to_char((at at time zone ${zone})::date, 'YYYY-MM-DD') as on, count(*)::int as count from trail_entries group by 1 order by 1`,
  );
  return rows;
}

export async function listKinds(tx: Tx): Promise<string[]> {
  const { rows } = await tx.execute<{ kind: string }>(
    sql`select distinct split_part(action, '.', 1) as kind from trail_entries order by 1`,
  );
  return rows.map(({ kind }) => kind);
}

/** SHA-256 of rows as they stand now, in the order asked; null for a row that is not there. */
export async function hashRowsNow(tx: Tx, rows: readonly { table: string; id: string }[]): Promise<(string | null)[]> {
  if (rows.length === 0) return [];
  const asked = JSON.stringify(rows.map(({ table, id }, place) => ({ place, table, id })));
  const { rows: found } = await tx.execute<{ sha256: string | null }>(sql`
    select row_sha256(r.table, r.id) as sha256
      from jsonb_to_recordset(${asked}::jsonb) as r(place int, "table" text, id uuid) order by r.place`);
  return found.map(({ sha256 }) => sha256);
}

export const listSignedHeads = (tx: Tx) =>
  tx.select().from(signedHeads).orderBy(asc(signedHeads.number), asc(signedHeads.signedAt));

export async function findOptionalLastDailyHead(tx: Tx) {
  const [row] = await tx
    .select()
    .from(signedHeads)
    .where(eq(signedHeads.cause, "daily"))
    .orderBy(desc(signedHeads.number))
    .limit(1);
  return row ?? null;
}

export async function findOptionalLastEntry(tx: Tx): Promise<{ number: number; hash: string; at: Date } | null> {
  const [row] = await tx
    .select({ number: trailEntries.number, hash: trailEntries.hash, at: trailEntries.at })
    .from(trailEntries)
    .orderBy(desc(trailEntries.number))
    .limit(1);
  return row ?? null;
}

/** Hash of the entries with these numbers. */
export async function listHashes(tx: Tx, numbers: readonly number[]): Promise<Map<number, string>> {
  if (numbers.length === 0) return new Map();
  const rows = await tx
    .select({ number: trailEntries.number, hash: trailEntries.hash })
    .from(trailEntries)
    .where(inArray(trailEntries.number, [...numbers]));
  return new Map(rows.map(({ number, hash }) => [number, hash]));
}

export async function countChecksAndAttempts(tx: Tx): Promise<{ checks: number; attempts: number }> {
  return { checks: await tx.$count(checks), attempts: await tx.$count(checkAttempts) };
}
