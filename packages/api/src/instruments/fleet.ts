/** The fleet: every present configuration with its standing and last check, in one query; an instrument shows its worst. */
import { sql } from "drizzle-orm";
import type { InstrumentKind, ShownState, Standing, StripLine } from "../contract/common.ts";
import type { ConfigurationState, FleetRow } from "../contract/instruments.ts";
import type { StoredResult } from "../db/schema/analyses.ts";
import type { Tx } from "../db/tenancy.ts";
import { awaitsReview as reviewAwaited } from "../checks/list-checks.ts";
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
  configuration_name: string | null;
  range_first_nm: number;
  range_last_nm: number;
  laser_nm: number | null;
  due_on: string | null;
  as_left_asked: boolean;
  awaits_review: boolean;
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

/** One configuration as a row of the fleet: due and assigned are its own. */
export type FleetConfiguration = Omit<FleetRow, "configurations">;

export interface FleetFilter {
  /** Only this instrument. */
  instrumentId?: string;
  /** Only this configuration, also when it has ended. */
  configurationId?: string;
  /** Retired instruments too, each with its last configuration. */
  withRetired?: boolean;
}

/**
 * Present configurations, those of one instrument beside each other, the worst first.
 *
 * @param today date in the lab's zone
 */
export async function listFleetConfigurations(
  tx: Tx,
  today: string,
  options: FleetFilter = {},
): Promise<FleetConfiguration[]> {
  const { rows } = await tx.execute<Row>(sql`
    select i.id, i.name, i.kind, i.place, i.owner_id, owner.name as owner_name, i.retired_at,
      c.id as configuration_id, c.name as configuration_name, c.range_first_nm, c.range_last_nm, (c.optics ->> 'laserNm')::float8 as laser_nm,
      c.due_on, c.as_left_asked_by_check_id is not null as as_left_asked,
      ${reviewAwaited(sql`c.lab_id`, sql`c.id`)} as awaits_review, c.assigned_to_id as assigned_id, assigned.name as assigned_name,
      st.standing, st.restriction,
      last.check_id, last.number as check_number, last.measured_at, last.result, last.strip
    from instruments i
    join people owner on owner.id = i.owner_id
    join configurations c on c.lab_id = i.lab_id and c.instrument_id = i.id
      and case when ${options.configurationId ?? null}::uuid is not null then c.id = ${options.configurationId ?? null}::uuid
        when i.retired_at is null then c.to_on is null
        else c.ordinal = (select max(o.ordinal) from configurations o where o.lab_id = i.lab_id and o.instrument_id = i.id) end
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
  return rows.map((row) => present(row, today)).sort(byWorst);
}

/** Rows by tolerance used, the most first; those without a check and the retired ones last. */
export async function listFleet(tx: Tx, today: string, options: FleetFilter = {}): Promise<FleetRow[]> {
  return fleetOf(await listFleetConfigurations(tx, today, options));
}

/** An instrument's row: its worst configuration, with whatever falls due first. @param rows the worst of each first */
export function fleetOf(rows: readonly FleetConfiguration[]): FleetRow[] {
  const byInstrument = new Map<string, FleetConfiguration[]>();
  for (const row of rows) byInstrument.set(row.id, [...(byInstrument.get(row.id) ?? []), row]);
  return [...byInstrument.values()].map(rowOf).sort(byToleranceUsed);
}

function rowOf(present: FleetConfiguration[]): FleetRow {
  // What waits for its review was checked: another configuration's date comes before it.
  const [due] = present
    .filter((one) => one.dueOn !== null)
    .sort((a, b) => Number(a.awaitsReview) - Number(b.awaitsReview) || a.dueDays! - b.dueDays!);
  const { dueOn, dueDays, awaitsReview, assignedTo } = due ?? present[0]!;
  return {
    ...present[0]!,
    dueOn,
    dueDays,
    awaitsReview,
    assignedTo,
    asLeftAsked: present.some((one) => one.asLeftAsked),
    configurations: present.map(stateIn),
  };
}

const stateIn = (row: FleetConfiguration): ConfigurationState => ({
  id: row.configurationId,
  name: row.configurationName,
  state: row.state,
  restriction: row.restriction,
  toleranceUsed: row.toleranceUsed,
  dueOn: row.dueOn,
  dueDays: row.dueDays,
  asLeftAsked: row.asLeftAsked,
  assignedTo: row.assignedTo,
  lastCheckId: row.lastCheckId,
  lastCheckNumber: row.lastCheckNumber,
});

function present(row: Row, today: string): FleetConfiguration {
  const { result } = row;
  return {
    id: row.id,
    name: row.name,
    kind: row.kind,
    place: row.place,
    owner: { id: row.owner_id, name: row.owner_name },
    retiredAt: row.retired_at === null ? null : toInstant(row.retired_at).toISOString(),
    configurationId: row.configuration_id,
    configurationName: row.configuration_name,
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
    awaitsReview: row.awaits_review,
    assignedTo: row.assigned_id === null ? null : { id: row.assigned_id, name: row.assigned_name ?? "" },
  };
}

function byToleranceUsed(a: FleetRow, b: FleetRow): number {
  const rank = (row: FleetRow) => (row.retiredAt !== null ? -2 : (row.toleranceUsed ?? -1));
  return rank(b) - rank(a) || (a.name < b.name ? -1 : 1);
}

/** What waits for somebody first, then what may not be used, then how near the limit it is. */
const worstFirst: readonly ShownState[] = [
  "on-hold",
  "out-of-tolerance",
  "quarantined",
  "out-of-service",
  "restricted",
  "inconclusive",
  "near-limit",
  "not-judged",
  "in-tolerance",
  "retired",
];

function byWorst(a: FleetConfiguration, b: FleetConfiguration): number {
  return (
    worstFirst.indexOf(a.state) - worstFirst.indexOf(b.state) ||
    (b.toleranceUsed ?? -1) - (a.toleranceUsed ?? -1) ||
    ((a.configurationName ?? "") < (b.configurationName ?? "") ? -1 : 1)
  );
}
