/** Rows of members, invitations, deputies and shared PCs. */
import { and, asc, desc, eq, gt, isNull, sql } from "drizzle-orm";
import { alias } from "drizzle-orm/pg-core";
import { newId } from "../db/columns.ts";
import { benchDevices, deputies, instruments, invitations, memberships, people, sessions } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";

export interface MemberRow {
  id: string;
  name: string;
  email: string;
  roles: string[];
  isApprover: boolean;
  joinedAt: Date;
  endedAt: Date | null;
  lastSeenAt: Date | null;
  version: number;
}

const memberColumns = {
  id: people.id,
  name: people.name,
  email: people.email,
  roles: memberships.roles,
  isApprover: memberships.isApprover,
  joinedAt: memberships.joinedAt,
  endedAt: memberships.endedAt,
  lastSeenAt: memberships.lastSeenAt,
  version: memberships.version,
};

const members = (tx: Tx) =>
  tx.select(memberColumns).from(memberships).innerJoin(people, eq(people.id, memberships.personId));

/** Members past and present, by name. */
export const listMembers = (tx: Tx): Promise<MemberRow[]> => members(tx).orderBy(asc(people.name), asc(people.id));

export async function findOptionalMember(tx: Tx, personId: string): Promise<MemberRow | null> {
  const [row] = await members(tx).where(eq(memberships.personId, personId));
  return row ?? null;
}

/** The member's row, locked until the transaction ends. */
export async function lockMember(tx: Tx, personId: string): Promise<MemberRow | null> {
  await tx
    .select({ id: memberships.personId })
    .from(memberships)
    .where(eq(memberships.personId, personId))
    .for("update");
  return findOptionalMember(tx, personId);
}

/** Changes of who manages a lab go one after the other: two managers cannot remove each other at once. */
export const lockManagers = (tx: Tx, labId: string) =>
  tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`managers:${labId}`}, 0))`);

/** Managers other than this person whose membership stands. */
export async function countOtherManagers(tx: Tx, personId: string): Promise<number> {
  const { rows } = await tx.execute<{ count: number }>(
    sql`select count(*)::int as count from memberships where ended_at is null and 'manager' = any(roles) and person_id <> ${personId}`,
  );
  return rows[0]!.count;
}

export const saveRoles = (tx: Tx, personId: string, change: { roles: string[]; isApprover: boolean }) =>
  tx
    .update(memberships)
    .set({ ...change, version: sql`${memberships.version} + 1` })
    .where(eq(memberships.personId, personId));

export const saveEnd = (tx: Tx, personId: string, endedAt: Date) =>
  tx
    .update(memberships)
    .set({ endedAt, isApprover: false, version: sql`${memberships.version} + 1` })
    .where(eq(memberships.personId, personId));

/** Instruments in use, by owner. */
export const listOwned = (tx: Tx): Promise<{ id: string; name: string; ownerId: string }[]> =>
  tx
    .select({ id: instruments.id, name: instruments.name, ownerId: instruments.ownerId })
    .from(instruments)
    .where(isNull(instruments.retiredAt))
    .orderBy(asc(instruments.name));

const principal = alias(people, "principal");
export const listDeputies = (tx: Tx) =>
  tx
    .select({
      personId: deputies.personId,
      fromOn: deputies.fromOn,
      toOn: deputies.toOn,
      forId: principal.id,
      forName: principal.name,
    })
    .from(deputies)
    .innerJoin(principal, eq(principal.id, deputies.forPersonId))
    .orderBy(desc(deputies.toOn));

export const saveDeputy = (tx: Tx, row: Omit<typeof deputies.$inferInsert, "id">) =>
  tx.insert(deputies).values({ id: newId(), ...row });

const inviter = alias(people, "inviter");
const invitationColumns = {
  id: invitations.id,
  email: invitations.email,
  roles: invitations.roles,
  invitedAt: invitations.invitedAt,
  expiresAt: invitations.expiresAt,
  acceptedAt: invitations.acceptedAt,
  withdrawnAt: invitations.withdrawnAt,
  invitedById: inviter.id,
  invitedByName: inviter.name,
};
export type InvitationRow = Awaited<ReturnType<typeof listInvitations>>[number];

export const listInvitations = (tx: Tx) =>
  tx
    .select(invitationColumns)
    .from(invitations)
    .leftJoin(inviter, eq(inviter.id, invitations.invitedBy))
    .orderBy(desc(invitations.invitedAt))
    .limit(200);

export async function findOptionalInvitation(tx: Tx, invitationId: string): Promise<InvitationRow | null> {
  const [row] = await tx
    .select(invitationColumns)
    .from(invitations)
    .leftJoin(inviter, eq(inviter.id, invitations.invitedBy))
    .where(eq(invitations.id, invitationId));
  return row ?? null;
}

export const saveInvitation = (tx: Tx, row: typeof invitations.$inferInsert) => tx.insert(invitations).values(row);

/** Withdraw open invitations: one by its id, or all of an address. @returns how many were open */
export async function withdrawInvitations(
  tx: Tx,
  which: { id: string } | { email: string },
  at: Date,
): Promise<number> {
  const rows = await tx
    .update(invitations)
    .set({ withdrawnAt: at })
    .where(
      and(
        "id" in which ? eq(invitations.id, which.id) : eq(invitations.email, which.email),
        isNull(invitations.acceptedAt),
        isNull(invitations.withdrawnAt),
        gt(invitations.expiresAt, at),
      ),
    )
    .returning({ id: invitations.id });
  return rows.length;
}

export async function isMemberByEmail(tx: Tx, email: string): Promise<boolean> {
  const rows = await members(tx).where(and(eq(people.email, email), isNull(memberships.endedAt)));
  return rows.length > 0;
}

const enroller = alias(people, "enroller");
export const listBenchDevices = (tx: Tx) =>
  tx
    .select({
      id: benchDevices.id,
      name: benchDevices.name,
      enrolledAt: benchDevices.enrolledAt,
      lastUsedAt: benchDevices.lastUsedAt,
      byId: enroller.id,
      byName: enroller.name,
    })
    .from(benchDevices)
    .innerJoin(enroller, eq(enroller.id, benchDevices.enrolledBy))
    .where(isNull(benchDevices.removedAt))
    .orderBy(asc(benchDevices.name));

export const saveBenchDevice = (tx: Tx, row: typeof benchDevices.$inferInsert) => tx.insert(benchDevices).values(row);

/** End bench mode on a PC, and the sessions that live on it. @returns its name, null when it was not enrolled */
export async function removeBenchDevice(tx: Tx, deviceId: string, at: Date): Promise<string | null> {
  const [row] = await tx
    .update(benchDevices)
    .set({ removedAt: at })
    .where(and(eq(benchDevices.id, deviceId), isNull(benchDevices.removedAt)))
    .returning({ name: benchDevices.name });
  if (row === undefined) return null;
  await tx.delete(sessions).where(sql`${sessions.sess} ->> 'benchDeviceId' = ${deviceId}`);
  return row.name;
}

export interface OfferedRow extends Record<string, unknown> {
  invitation_id: string;
  lab_id: string;
  lab_name: string;
  zone: string;
  is_demo: boolean;
  email: string;
  roles: string[];
  invited_by: string;
  person_id: string | null;
  person_name: string | null;
  password_hash: string | null;
  state: "open" | "accepted" | "withdrawn" | "expired";
}

/** What an invitation's token offers, looked up before a lab is known. */
export async function findOffer(tx: Tx, tokenHash: string): Promise<OfferedRow | null> {
  const { rows } = await tx.execute<OfferedRow>(sql`select * from invitation_of(${tokenHash})`);
  return rows[0] ?? null;
}

/** Accept it: the person is made if need be, the membership begins; the transaction then works in that lab. */
export async function acceptOffer(
  tx: Tx,
  tokenHash: string,
  name: string,
  passwordHash: string | null,
): Promise<{ personId: string; labId: string } | null> {
  const { rows } = await tx.execute<{ person_id: string; lab_id: string }>(
    sql`select * from accept_invitation(${tokenHash}, ${name}, ${passwordHash})`,
  );
  const row = rows[0];
  if (row === undefined) return null;
  await tx.execute(
    sql`select set_config('app.lab', ${row.lab_id}, true), set_config('app.person', ${row.person_id}, true)`,
  );
  return { personId: row.person_id, labId: row.lab_id };
}
