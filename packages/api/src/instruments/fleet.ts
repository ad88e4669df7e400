/** The fleet: every instrument with its current configuration, standing and last check, in one query. */
import { sql } from "drizzle-orm";
import type { InstrumentKind, Standing, StripLine } from "../contract/common.ts";
import type { FleetRow } from "../contract/instruments.ts";
import type { StoredResult } from "../db/schema/analyses.ts";
import type { Tx } from "../db/tenancy.ts";
import { daysBetween, toInstant } from "./dates.ts";
import { shownStateOf } from "./states.ts";

interface Row extends Record<string, unknown> {
  id: string;
  name: string;
  kind: InstrumentKind;
  place: string;
  owner_id: string;
  owner_name: string;
  retired_at: string | null;
  configuration_id: string;
  range_first_nm: number;
  range_last_nm: number;
  laser_nm: number | null;
  due_on: string | null;
  as_left_asked: boolean;
  assigned_id: string | null;
  assigned_name: string | null;
  standing: Standing;
  restriction: string | null;
  check_id: string | null;
  check_number: string | null;
  measured_at: string | null;
  result: StoredResult | null;
  strip: StripLine[] | null;
}

/**
 * Rows by tolerance used, the most first; those without a check and the retired ones last.
 *
 * @param today date in the lab's zone
 * @param options.instrumentId only this one
 */
export async function listFleet(
  tx: Tx,
  today: string,
  options: { instrumentId?: string; withRetired?: boolean } = {},
): Promise<FleetRow[]> {
  const { rows } = await tx.execute<Row>(sql`
    select i.id, i.name, i.kind, i.place, i.owner_id, owner.name as owner_name, i.retired_at,
      c.id as configuration_id, c.range_first_nm, c.range_last_nm, (c.optics ->> 'laserNm')::float8 as laser_nm,
      c.due_on, c.as_left_asked_by_check_id is not null as as_left_asked, c.assigned_to_id as assigned_id, assigned.name as assigned_name,
      st.standing, st.restriction,
      last.check_id, last.number as check_number, last.measured_at, last.result, last.strip
    from instruments i
    join people owner on owner.id = i.owner_id
    join lateral (select * from configurations c where c.lab_id = i.lab_id and c.instrument_id = i.id order by c.ordinal desc limit 1) c on true
    left join people assigned on assigned.id = c.assigned_to_id
    join lateral (select s.standing, s.restriction from standing_entries s
      where s.lab_id = c.lab_id and s.configuration_id = c.id order by s.sequence desc limit 1) st on true
    left join lateral (select s.check_id, k.number, s.measured_at, a.result, a.strip
      from checks k
      join submissions s on s.lab_id = k.lab_id and s.check_id = k.id
      join analyses a on a.lab_id = s.lab_id and a.id = s.analysis_id
      where k.lab_id = c.lab_id and k.configuration_id = c.id
      order by s.measured_at desc, s.submitted_at desc limit 1) last on true
    where (${options.instrumentId ?? null}::uuid is null or i.id = ${options.instrumentId ?? null}::uuid)
      and (${options.withRetired ?? false} or i.retired_at is null)`);
  return rows.map((row) => present(row, today)).sort(byToleranceUsed);
}

function present(row: Row, today: string): FleetRow {
  const { result } = row;
  return {
    id: row.id,
    name: row.name,
    kind: row.kind,
    place: row.place,
    owner: { id: row.owner_id, name: row.owner_name },
    retiredAt: row.retired_at === null ? null : toInstant(row.retired_at).toISOString(),
    configurationId: row.configuration_id,
    rangeFirstNm: row.range_first_nm,
    rangeLastNm: row.range_last_nm,
    laserNm: row.laser_nm,
    state: row.retired_at === null ? shownStateOf(row.standing, result) : "retired",
    restriction: row.restriction,
    toleranceUsed: result?.toleranceUsed ?? null,
    guardShare: result?.guardShare ?? null,
    worst: result?.worst ?? null,
    strip: row.strip ?? [],
    checkedAt: row.measured_at === null ? null : toInstant(row.measured_at).toISOString(),
    lastCheckId: row.check_id,
    lastCheckNumber: row.check_number,
    dueOn: row.due_on,
    dueDays: row.due_on === null ? null : daysBetween(today, row.due_on),
    asLeftAsked: row.as_left_asked,
    assignedTo: row.assigned_id === null ? null : { id: row.assigned_id, name: row.assigned_name ?? "" },
  };
}

function byToleranceUsed(a: FleetRow, b: FleetRow): number {
  const rank = (row: FleetRow) => (row.retiredAt !== null ? -2 : (row.toleranceUsed ?? -1));
  return rank(b) - rank(a) || (a.name < b.name ? -1 : 1);
}
