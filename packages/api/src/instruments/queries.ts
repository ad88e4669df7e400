/** Instruments and configurations: SQL only. */
import { and, asc, count, desc, eq, isNull, lte, max, sql } from "drizzle-orm";
import {
  alerts,
  axes,
  checks,
  configurations,
  instruments,
  memberships,
  people,
  procedures,
  standingEntries,
  toleranceVersions,
} from "../db/schema/index.ts";
import type { Context, Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";

export type InstrumentRow = typeof instruments.$inferSelect;
export type ConfigurationRow = typeof configurations.$inferSelect;
export type ToleranceRow = typeof toleranceVersions.$inferSelect;
export type StandingRow = typeof standingEntries.$inferSelect;
export type AxisRow = typeof axes.$inferSelect;

/** @throws problem "not-found" */
export async function findInstrument(
  tx: Tx,
  instrumentId: string,
): Promise<{ instrument: InstrumentRow; ownerName: string }> {
  const [row] = await tx
    .select({ instrument: instruments, ownerName: people.name })
    .from(instruments)
    .innerJoin(people, eq(people.id, instruments.ownerId))
    .where(eq(instruments.id, instrumentId));
  if (row === undefined) throw notFound("This instrument");
  return row;
}

/** The row, held until the transaction ends. @throws problem "not-found" */
export async function lockInstrument(tx: Tx, instrumentId: string): Promise<InstrumentRow> {
  const [row] = await tx.select().from(instruments).where(eq(instruments.id, instrumentId)).for("update");
  if (row === undefined) throw notFound("This instrument");
  return row;
}

/** @throws problem "not-found" */
export async function findConfiguration(tx: Tx, configurationId: string): Promise<ConfigurationRow> {
  const [row] = await tx.select().from(configurations).where(eq(configurations.id, configurationId));
  if (row === undefined) throw notFound("This configuration");
  return row;
}

/** The row, held until the transaction ends: standing, due date and alerts of it change one after the other. */
export async function lockConfiguration(tx: Tx, configurationId: string): Promise<ConfigurationRow> {
  const [row] = await tx.select().from(configurations).where(eq(configurations.id, configurationId)).for("update");
  if (row === undefined) throw notFound("This configuration");
  return row;
}

/** The instrument's present configurations in the order they were begun, held until the transaction ends. */
export function lockPresentConfigurations(tx: Tx, instrumentId: string): Promise<ConfigurationRow[]> {
  return tx
    .select()
    .from(configurations)
    .where(and(eq(configurations.instrumentId, instrumentId), isNull(configurations.toOn)))
    .orderBy(asc(configurations.ordinal))
    .for("update");
}

/** The number after the last one along the instrument's life. */
export async function findNextOrdinal(tx: Tx, instrumentId: string): Promise<number> {
  const [row] = await tx
    .select({ last: max(configurations.ordinal) })
    .from(configurations)
    .where(eq(configurations.instrumentId, instrumentId));
  return (row?.last ?? 0) + 1;
}

/** The tolerance in force at an instant: the newest version that had begun by then. */
export async function findToleranceAt(tx: Tx, configurationId: string, at: Date): Promise<ToleranceRow> {
  const [row] = await tx
    .select()
    .from(toleranceVersions)
    .where(and(eq(toleranceVersions.configurationId, configurationId), lte(toleranceVersions.inForceFrom, at)))
    .orderBy(desc(toleranceVersions.version))
    .limit(1);
  if (row === undefined) throw notFound("A tolerance of this configuration");
  return row;
}

export async function findLatestTolerance(
  tx: Tx,
  configurationId: string,
): Promise<ToleranceRow & { setByName: string | null }> {
  const [row] = await tx
    .select({ tolerance: toleranceVersions, setByName: people.name })
    .from(toleranceVersions)
    .leftJoin(people, eq(people.id, toleranceVersions.setBy))
    .where(eq(toleranceVersions.configurationId, configurationId))
    .orderBy(desc(toleranceVersions.version))
    .limit(1);
  if (row === undefined) throw notFound("A tolerance of this configuration");
  return { ...row.tolerance, setByName: row.setByName };
}

export interface CurrentStanding extends StandingRow {
  setByName: string | null;
  checkNumber: string | null;
}

export async function findStanding(tx: Tx, configurationId: string): Promise<CurrentStanding> {
  const [row] = await tx
    .select({ entry: standingEntries, setByName: people.name, checkNumber: checks.number })
    .from(standingEntries)
    .leftJoin(people, eq(people.id, standingEntries.setBy))
    .leftJoin(checks, and(eq(checks.labId, standingEntries.labId), eq(checks.id, standingEntries.checkId)))
    .where(eq(standingEntries.configurationId, configurationId))
    .orderBy(desc(standingEntries.sequence))
    .limit(1);
  if (row === undefined) throw notFound("The standing of this configuration");
  return { ...row.entry, setByName: row.setByName, checkNumber: row.checkNumber };
}

/** The axis in force at an instant, or null where there is none (a wavelength axis of the instrument's own). */
export async function findAxisAt(
  tx: Tx,
  configurationId: string,
  at: Date,
): Promise<(AxisRow & { fromCheckNumber: string | null }) | null> {
  const [row] = await tx
    .select({ axis: axes, fromCheckNumber: checks.number })
    .from(axes)
    .leftJoin(checks, and(eq(checks.labId, axes.labId), eq(checks.id, axes.fromCheckId)))
    .where(and(eq(axes.configurationId, configurationId), lte(axes.inForceFrom, at)))
    .orderBy(desc(axes.number))
    .limit(1);
  return row === undefined ? null : { ...row.axis, fromCheckNumber: row.fromCheckNumber };
}

export interface ConfigurationWithMore {
  configuration: ConfigurationRow;
  procedureTitle: string;
  assignedName: string | null;
}

export function listConfigurations(
  tx: Tx,
  by: { instrumentId: string } | { configurationId: string },
): Promise<ConfigurationWithMore[]> {
  return tx
    .select({ configuration: configurations, procedureTitle: procedures.title, assignedName: people.name })
    .from(configurations)
    .innerJoin(
      procedures,
      and(eq(procedures.labId, configurations.labId), eq(procedures.id, configurations.procedureId)),
    )
    .leftJoin(people, eq(people.id, configurations.assignedToId))
    .where(
      "instrumentId" in by
        ? eq(configurations.instrumentId, by.instrumentId)
        : eq(configurations.id, by.configurationId),
    )
    .orderBy(asc(configurations.ordinal));
}

export async function countOpenAlerts(tx: Tx, instrumentId: string): Promise<number> {
  const [row] = await tx
    .select({ open: count() })
    .from(alerts)
    .where(and(eq(alerts.instrumentId, instrumentId), isNull(alerts.closedAt)));
  return row!.open;
}

export async function countChecks(
  tx: Tx,
  of: { instrumentId: string } | { configurationId: string },
): Promise<{ count: number; firstAt: Date | null }> {
  const [row] = await tx
    .select({
      count: count(),
      firstAt: sql<Date | null>`min(${checks.begunAt})`.mapWith((value: string | null) =>
        value === null ? null : new Date(value),
      ),
    })
    .from(checks)
    .where(
      "instrumentId" in of ? eq(checks.instrumentId, of.instrumentId) : eq(checks.configurationId, of.configurationId),
    );
  return row!;
}

/** A current member, or null. */
export async function findOptionalMember(tx: Tx, personId: string): Promise<{ name: string; roles: string[] } | null> {
  const [row] = await tx
    .select({ name: people.name, roles: memberships.roles })
    .from(memberships)
    .innerJoin(people, eq(people.id, memberships.personId))
    .where(and(eq(memberships.personId, personId), isNull(memberships.endedAt)));
  return row ?? null;
}

/** People who may decide in the lab: those a hold or an alert is told to besides the owner. */
export function listManagers(tx: Tx): Promise<{ personId: string; name: string }[]> {
  return tx
    .select({ personId: memberships.personId, name: people.name })
    .from(memberships)
    .innerJoin(people, eq(people.id, memberships.personId))
    .where(and(isNull(memberships.endedAt), sql`'manager' = any(${memberships.roles})`))
    .orderBy(asc(people.name));
}

/** The next number of a series: CHK-2027-0041, IR-2027-004. Taken under the counter's lock. */
export async function takeNumber(
  tx: Tx,
  ctx: Pick<Context, "labId">,
  kind: "check" | "impact-review" | "report",
  year: number,
): Promise<string> {
  const { rows } = await tx.execute<{ last: number }>(sql`
    insert into number_counters (lab_id, kind, year, last) values (${ctx.labId}::uuid, ${kind}, ${year}, 1)
    on conflict (lab_id, kind, year) do update set last = number_counters.last + 1
    returning last`);
  const { prefix, digits } = numberSeries[kind];
  return `${prefix}-${year}-${String(rows[0]!.last).padStart(digits, "0")}`;
}

const numberSeries = {
  check: { prefix: "CHK", digits: 4 },
  "impact-review": { prefix: "IR", digits: 3 },
  report: { prefix: "REP", digits: 4 },
} as const;
