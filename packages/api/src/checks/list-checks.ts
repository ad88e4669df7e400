/** Checks in one line each, for lists, instruments and Today: one query, whatever the filter. */
import { sql, type SQL } from "drizzle-orm";
import type { CheckState, CheckSummary } from "../contract/common.ts";
import type { StoredResult } from "../db/schema/analyses.ts";
import type { Tx } from "../db/tenancy.ts";
import { toInstant } from "../instruments/dates.ts";

/** In a query on `configurations`: whether a check of the one named waits for its review. Then it is not overdue. */
export const awaitsReview = (labId: SQL, configurationId: SQL): SQL => sql`exists (
    select 1 from checks w
    join lateral (select e.kind from check_events e where e.lab_id = w.lab_id and e.check_id = w.id and e.kind <> 'acknowledged'
      order by e.sequence desc limit 1) moved on true
    where w.lab_id = ${labId} and w.configuration_id = ${configurationId} and moved.kind = 'submitted')`;

interface Row extends Record<string, unknown> {
  id: string;
  number: string;
  instrument_id: string;
  instrument_name: string;
  owner_id: string;
  configuration_id: string;
  configuration_name: string | null;
  condition: "as-found" | "as-left";
  event_kind: string;
  event_at: string;
  event_comment: string | null;
  begun_at: string;
  begun_by: string;
  begun_by_name: string;
  submitted_at: string | null;
  submitted_by: string | null;
  submitted_by_name: string | null;
  approved_at: string | null;
  approved_by: string | null;
  approved_by_name: string | null;
  attempt_count: number;
  capture_count: number;
  result: StoredResult | null;
}

export interface CheckRow {
  summary: CheckSummary;
  ownerId: string;
  submittedBy: { id: string; name: string } | null;
  lastEvent: { at: Date; comment: string | null };
  captureCount: number;
}

export interface CheckFilter {
  checkId?: string;
  instrumentId?: string;
  configurationId?: string;
  states?: readonly CheckState[];
  verdict?: "pass" | "inconclusive" | "fail";
  personId?: string;
  /** Part of a check's number, or of its instrument's or configuration's name. */
  text?: string;
  /** Keyset: rows begun before this one. */
  after?: { begunAt: string; id: string };
  limit: number;
}

/** State shown for the last event that moved the check; a note of the owner does not move it. */
export function stateOf(eventKind: string): CheckState {
  return eventKind === "resumed" ? "begun" : (eventKind as CheckState);
}

/** Newest first. */
export async function listCheckRows(tx: Tx, filter: CheckFilter): Promise<CheckRow[]> {
  const conditions: SQL[] = [sql`true`];
  if (filter.checkId !== undefined) conditions.push(sql`c.id = ${filter.checkId}::uuid`);
  if (filter.instrumentId !== undefined) conditions.push(sql`c.instrument_id = ${filter.instrumentId}::uuid`);
  if (filter.configurationId !== undefined) conditions.push(sql`c.configuration_id = ${filter.configurationId}::uuid`);
  if (filter.states !== undefined) {
    const kinds = filter.states.flatMap((state) => (state === "begun" ? ["begun", "resumed"] : [state]));
    conditions.push(
      sql`st.kind in (${sql.join(
        kinds.map((kind) => sql`${kind}`),
        sql`, `,
      )})`,
    );
  }
  if (filter.verdict !== undefined)
    conditions.push(sql`coalesce(sub.result, la.result) ->> 'verdict' = ${filter.verdict}`);
  if (filter.personId !== undefined) {
    conditions.push(sql`(exists (select 1 from check_contributors cc where cc.lab_id = c.lab_id and cc.check_id = c.id and cc.person_id = ${filter.personId}::uuid)
      or exists (select 1 from check_events pe where pe.lab_id = c.lab_id and pe.check_id = c.id and pe.by_id = ${filter.personId}::uuid))`);
  }
  if (filter.text !== undefined && filter.text.trim() !== "") {
    const pattern = `%${filter.text.trim().replace(/[\\%_]/g, (sign) => `\\${sign}`)}%`;
    conditions.push(sql`(c.number ilike ${pattern} or i.name ilike ${pattern} or cf.name ilike ${pattern})`);
  }
  if (filter.after !== undefined)
    conditions.push(sql`(c.begun_at, c.id) < (${filter.after.begunAt}::timestamptz, ${filter.after.id}::uuid)`);
  const { rows } = await tx.execute<Row>(sql`
    select c.id, c.number, c.instrument_id, i.name as instrument_name, i.owner_id, c.configuration_id, cf.name as configuration_name, c.condition,
      st.kind as event_kind, st.at as event_at, st.comment as event_comment, c.begun_at, c.begun_by, beginner.name as begun_by_name,
      sub.submitted_at, sub.submitted_by, sub.submitter_name as submitted_by_name,
      ap.at as approved_at, ap.by_id as approved_by, ap.name as approved_by_name,
      (select count(*)::int from check_attempts a where a.lab_id = c.lab_id and a.check_id = c.id) as attempt_count,
      (select count(*)::int from captures p where p.lab_id = c.lab_id and p.check_id = c.id) as capture_count,
      case when st.kind in ('submitted', 'approved') then sub.result else coalesce(la.result, sub.result) end as result
    from checks c
    join instruments i on i.lab_id = c.lab_id and i.id = c.instrument_id
    join configurations cf on cf.lab_id = c.lab_id and cf.id = c.configuration_id
    join people beginner on beginner.id = c.begun_by
    join lateral (select e.kind, e.at, e.comment from check_events e where e.lab_id = c.lab_id and e.check_id = c.id and e.kind <> 'acknowledged'
      order by e.sequence desc limit 1) st on true
    left join lateral (select s.submitted_at, s.submitted_by, p.name as submitter_name, a.result
      from submissions s join analyses a on a.lab_id = s.lab_id and a.id = s.analysis_id join people p on p.id = s.submitted_by
      where s.lab_id = c.lab_id and s.check_id = c.id order by s.revision desc limit 1) sub on true
    left join lateral (select a.result from analyses a where a.lab_id = c.lab_id and a.check_id = c.id order by a.version desc limit 1) la on true
    left join lateral (select e.at, e.by_id, p.name from check_events e join people p on p.id = e.by_id
      where e.lab_id = c.lab_id and e.check_id = c.id and e.kind = 'approved' limit 1) ap on true
    where ${sql.join(conditions, sql` and `)}
    order by c.begun_at desc, c.id desc
    limit ${filter.limit}`);
  return rows.map(present);
}

function present(row: Row): CheckRow {
  return {
    summary: {
      id: row.id,
      number: row.number,
      instrumentId: row.instrument_id,
      instrumentName: row.instrument_name,
      configurationId: row.configuration_id,
      configurationName: row.configuration_name,
      condition: row.condition,
      state: stateOf(row.event_kind),
      begunAt: toInstant(row.begun_at).toISOString(),
      begunBy: { id: row.begun_by, name: row.begun_by_name },
      submittedAt: row.submitted_at === null ? null : toInstant(row.submitted_at).toISOString(),
      approvedAt: row.approved_at === null ? null : toInstant(row.approved_at).toISOString(),
      approvedBy: row.approved_by === null ? null : { id: row.approved_by, name: row.approved_by_name ?? "" },
      attemptCount: row.attempt_count,
      result: row.result,
    },
    ownerId: row.owner_id,
    submittedBy: row.submitted_by === null ? null : { id: row.submitted_by, name: row.submitted_by_name ?? "" },
    lastEvent: { at: toInstant(row.event_at), comment: row.event_comment },
    captureCount: row.capture_count,
  };
}
