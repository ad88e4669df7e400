/** Rows of sign-in: mostly the listed functions that look before a lab is known. */
import { and, eq, ne, sql } from "drizzle-orm";
import type { PersonRef } from "../contract/common.ts";
import { labs, memberships, people, sessions } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";

export interface SignInRow {
  personId: string;
  name: string;
  passwordHash: string;
}

export async function findSignIn(tx: Tx, email: string): Promise<SignInRow | null> {
  const { rows } = await tx.execute<{ person_id: string; name: string; password_hash: string }>(
    sql`select * from sign_in_lookup(${email})`,
  );
  const row = rows[0];
  return row === undefined ? null : { personId: row.person_id, name: row.name, passwordHash: row.password_hash };
}

export interface LabOfPerson {
  id: string;
  name: string;
  zone: string;
  isDemo: boolean;
  lastSeenAt: Date | null;
}

/** Labs of the transaction's person, by name. */
export async function listMyLabs(tx: Tx): Promise<LabOfPerson[]> {
  const { rows } = await tx.execute<{
    lab_id: string;
    name: string;
    zone: string;
    is_demo: boolean;
    last_seen_at: string | Date | null;
  }>(sql`select * from my_labs()`);
  return rows.map((row) => ({
    id: row.lab_id,
    name: row.name,
    zone: row.zone,
    isDemo: row.is_demo,
    lastSeenAt: row.last_seen_at === null ? null : new Date(row.last_seen_at),
  }));
}

export async function listLabsOfEmail(
  tx: Tx,
  email: string,
): Promise<{ labId: string; zone: string; isDemo: boolean }[]> {
  const { rows } = await tx.execute<{ lab_id: string; zone: string; is_demo: boolean }>(
    sql`select * from labs_of_email(${email})`,
  );
  return rows.map((row) => ({ labId: row.lab_id, zone: row.zone, isDemo: row.is_demo }));
}

export async function findMe(
  tx: Tx,
  personId: string,
): Promise<{ id: string; name: string; email: string; hasPin: boolean } | null> {
  const [person] = await tx
    .select({ id: people.id, name: people.name, email: people.email })
    .from(people)
    .where(eq(people.id, personId));
  if (person === undefined) return null;
  const { rows } = await tx.execute<{ has_pin: boolean }>(
    sql`select pin_hash is not null as has_pin from own_credentials()`,
  );
  return { ...person, hasPin: rows[0]?.has_pin === true };
}

export const setOwnPassword = (tx: Tx, hash: string) => tx.execute(sql`select set_own_password(${hash})`);
export const setOwnPin = (tx: Tx, hash: string) => tx.execute(sql`select set_own_pin(${hash})`);
export const saveOwnName = (tx: Tx, personId: string, name: string) =>
  tx.update(people).set({ name }).where(eq(people.id, personId));

/** Note that a member was here. */
export const touchMembership = (tx: Tx, labId: string, personId: string) =>
  tx
    .update(memberships)
    .set({ lastSeenAt: sql`record_now()` })
    .where(and(eq(memberships.labId, labId), eq(memberships.personId, personId)));

/** End a person's sessions, all of them or all but one. */
export const endSessionsOf = (tx: Tx, personId: string, exceptSid?: string) =>
  tx
    .delete(sessions)
    .where(
      exceptSid === undefined
        ? eq(sessions.personId, personId)
        : and(eq(sessions.personId, personId), ne(sessions.sid, exceptSid)),
    );

export async function beginReset(
  tx: Tx,
  email: string,
  tokenHash: string,
): Promise<{ personId: string; name: string; email: string; resetId: string } | null> {
  const { rows } = await tx.execute<{ person_id: string; name: string; email: string; reset_id: string }>(
    sql`select * from begin_reset(${email}, ${tokenHash})`,
  );
  const row = rows[0];
  return row === undefined
    ? null
    : { personId: row.person_id, name: row.name, email: row.email, resetId: row.reset_id };
}

export async function finishReset(tx: Tx, tokenHash: string, newHash: string): Promise<string | null> {
  const { rows } = await tx.execute<{ person_id: string | null }>(
    sql`select finish_reset(${tokenHash}, ${newHash}) as person_id`,
  );
  return rows[0]?.person_id ?? null;
}

export interface BenchDevice {
  id: string;
  name: string;
  labId: string;
  labName: string;
  people: PersonRef[];
}

export async function findBenchDevice(tx: Tx, tokenHash: string): Promise<BenchDevice | null> {
  const { rows } = await tx.execute<{
    device_id: string;
    device_name: string;
    lab_id: string;
    lab_name: string;
    people: PersonRef[];
  }>(sql`select * from bench_device_of(${tokenHash})`);
  const row = rows[0];
  return row === undefined
    ? null
    : { id: row.device_id, name: row.device_name, labId: row.lab_id, labName: row.lab_name, people: row.people };
}

export async function findBenchCredentials(
  tx: Tx,
  tokenHash: string,
  personId: string,
): Promise<{ name: string; pinHash: string } | null> {
  const { rows } = await tx.execute<{ name: string; pin_hash: string }>(
    sql`select * from bench_credentials(${tokenHash}, ${personId})`,
  );
  const row = rows[0];
  return row === undefined ? null : { name: row.name, pinHash: row.pin_hash };
}

/** What a context needs to know of its lab. */
export async function findLabMark(tx: Tx, labId: string): Promise<{ isDemo: boolean; zone: string }> {
  const [lab] = await tx.select({ isDemo: labs.isDemo, zone: labs.zone }).from(labs).where(eq(labs.id, labId));
  return lab ?? { isDemo: false, zone: "Etc/UTC" };
}

export async function findLab(tx: Tx, labId: string) {
  const [lab] = await tx
    .select({ id: labs.id, name: labs.name, zone: labs.zone, isDemo: labs.isDemo, altitudeM: labs.altitudeM })
    .from(labs)
    .where(eq(labs.id, labId));
  return lab ?? null;
}

/** The person a reset was carried out for: their own row is seen as themselves. */
export async function findPersonByReset(tx: Tx, personId: string): Promise<{ email: string }> {
  await tx.execute(sql`select set_config('app.person', ${personId}, true)`);
  const [person] = await tx.select({ email: people.email }).from(people).where(eq(people.id, personId));
  await tx.execute(sql`select set_config('app.person', '', true)`);
  return { email: person?.email ?? "" };
}
