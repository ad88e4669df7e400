/** What Today asks beside the lists of its neighbours: SQL only. */
import { and, asc, eq, inArray, isNull, lte, sql } from "drizzle-orm";
import { checkContributors, sources } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { toInstant } from "../instruments/dates.ts";

export interface HoldRow {
  configurationId: string;
  configurationName: string | null;
  instrumentId: string;
  instrumentName: string;
  since: Date;
  reason: string;
  decided: boolean;
  checkId: string | null;
  checkNumber: string | null;
}

interface RawHold extends Record<string, unknown> {
  configuration_id: string;
  configuration_name: string | null;
  instrument_id: string;
  name: string;
  since: string;
  reason: string;
  set_by: string | null;
  check_id: string | null;
  number: string | null;
}

/** Configurations on hold now, the longest first. */
export async function listHolds(tx: Tx): Promise<HoldRow[]> {
  const { rows } = await tx.execute<RawHold>(sql`
    select c.id as configuration_id, c.name as configuration_name, i.id as instrument_id, i.name, st.since, st.reason, st.set_by, st.check_id, k.number
    from configurations c
    join instruments i on i.lab_id = c.lab_id and i.id = c.instrument_id
    join lateral (select s.* from standing_entries s where s.lab_id = c.lab_id and s.configuration_id = c.id order by s.sequence desc limit 1) st on true
    left join checks k on k.lab_id = st.lab_id and k.id = st.check_id
    where c.to_on is null and st.standing = 'on-hold'
    order by st.since`);
  return rows.map((row) => ({
    configurationId: row.configuration_id,
    configurationName: row.configuration_name,
    instrumentId: row.instrument_id,
    instrumentName: row.name,
    since: toInstant(row.since),
    reason: row.reason,
    decided: row.set_by !== null,
    checkId: row.check_id,
    checkNumber: row.number,
  }));
}

/** Which of these checks the person had a part in. */
export async function listContributedChecks(
  tx: Tx,
  personId: string | null,
  checkIds: readonly string[],
): Promise<Set<string>> {
  if (personId === null || checkIds.length === 0) return new Set();
  const rows = await tx
    .selectDistinct({ checkId: checkContributors.checkId })
    .from(checkContributors)
    .where(and(eq(checkContributors.personId, personId), inArray(checkContributors.checkId, [...checkIds])));
  return new Set(rows.map((row) => row.checkId));
}

export interface SourceDue {
  id: string;
  label: string;
  reviewDueOn: string;
}

/** Sources in use whose review falls due by a date. */
export async function listSourcesDue(tx: Tx, by: string): Promise<SourceDue[]> {
  const rows = await tx
    .select({ id: sources.id, label: sources.label, reviewDueOn: sources.reviewDueOn })
    .from(sources)
    .where(and(isNull(sources.retiredAt), lte(sources.reviewDueOn, by)))
    .orderBy(asc(sources.reviewDueOn));
  return rows.map((row) => ({ id: row.id, label: row.label, reviewDueOn: row.reviewDueOn! }));
}
