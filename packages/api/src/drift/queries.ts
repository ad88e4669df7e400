/** Drift series: SQL only. */
import { sql } from "drizzle-orm";
import type { Tx } from "../db/tenancy.ts";
import { toInstant } from "../instruments/dates.ts";

export interface SeriesRow {
  checkId: string;
  checkNumber: string;
  measuredAt: Date;
  condition: "as-found" | "as-left";
  state: "submitted" | "approved" | "returned";
  verdict: "pass" | "inconclusive" | "fail" | null;
  guardShare: number | null;
  temperatureC: number | null;
  sourceLabels: string[];
  midNm: number;
  rangeNm: number;
  midErrorNm: number;
  midErrorUncNm: number;
  scaleErrorNm: number;
  scaleErrorUncNm: number;
  largestErrorNm: number;
  largestErrorUncNm: number;
  largestAtNm: number;
}

interface Raw extends Record<string, unknown> {
  check_id: string;
  number: string;
  measured_at: string;
  condition: SeriesRow["condition"];
  kind: string;
  verdict: SeriesRow["verdict"];
  guard_share: number | null;
  temperature_c: number | null;
  source_labels: string[] | null;
  mid_nm: number;
  range_nm: number;
  mid_error_nm: number;
  mid_error_unc_nm: number;
  scale_error_nm: number;
  scale_error_unc_nm: number;
  largest_error_nm: number;
  largest_error_unc_nm: number;
  largest_at_nm: number;
}

/** One point a check, that of its newest revision, oldest first. */
export async function listSeries(tx: Tx, configurationId: string): Promise<SeriesRow[]> {
  const { rows } = await tx.execute<Raw>(sql`
    select distinct on (d.measured_at, d.check_id) d.*, c.number, c.condition, st.kind, s.verdict,
      (a.result ->> 'guardShare')::float8 as guard_share, (s.inputs ->> 'temperatureC')::float8 as temperature_c,
      (select array_agg(so.label order by so.label) from sources so where so.lab_id = d.lab_id and s.inputs -> 'sourceIds' ? so.id::text) as source_labels
    from drift_points d
    join checks c on c.lab_id = d.lab_id and c.id = d.check_id
    join submissions s on s.lab_id = d.lab_id and s.check_id = d.check_id and s.revision = d.revision
    join analyses a on a.lab_id = s.lab_id and a.id = s.analysis_id
    join lateral (select e.kind from check_events e where e.lab_id = d.lab_id and e.check_id = d.check_id
      and e.kind in ('submitted', 'returned', 'approved', 'void') order by e.sequence desc limit 1) st on true
    where d.configuration_id = ${configurationId}::uuid and st.kind <> 'void'
      and d.revision = (select max(n.revision) from drift_points n where n.lab_id = d.lab_id and n.check_id = d.check_id)
    order by d.measured_at, d.check_id`);
  return rows.map((row) => ({
    checkId: row.check_id,
    checkNumber: row.number,
    measuredAt: toInstant(row.measured_at),
    condition: row.condition,
    state: row.kind as SeriesRow["state"],
    verdict: row.verdict,
    guardShare: row.guard_share,
    temperatureC: row.temperature_c,
    sourceLabels: row.source_labels ?? [],
    midNm: row.mid_nm,
    rangeNm: row.range_nm,
    midErrorNm: row.mid_error_nm,
    midErrorUncNm: row.mid_error_unc_nm,
    scaleErrorNm: row.scale_error_nm,
    scaleErrorUncNm: row.scale_error_unc_nm,
    largestErrorNm: row.largest_error_nm,
    largestErrorUncNm: row.largest_error_unc_nm,
    largestAtNm: row.largest_at_nm,
  }));
}
