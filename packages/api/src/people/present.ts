/** Stored people and invitations as the contract shows them. */
import { role, type Role } from "../contract/common.ts";
import type { Person } from "../contract/people.ts";
import type { InvitationRow, MemberRow, listDeputies } from "./queries.ts";

export const knownRoles = (stored: readonly string[]): Role[] =>
  stored.filter((text): text is Role => role.safeParse(text).success);

export function presentPerson(
  member: MemberRow,
  owned: { id: string; name: string; ownerId: string }[],
  deputyRows: Awaited<ReturnType<typeof listDeputies>>,
): Person {
  return {
    id: member.id,
    name: member.name,
    email: member.email,
    roles: knownRoles(member.roles),
    isApprover: member.isApprover,
    owns: owned.filter(({ ownerId }) => ownerId === member.id).map(({ id, name }) => ({ id, name })),
    deputyFor: deputyRows
      .filter(({ personId }) => personId === member.id)
      .map(({ forId, forName, fromOn, toOn }) => ({ person: { id: forId, name: forName }, fromOn, toOn })),
    joinedAt: member.joinedAt.toISOString(),
    endedAt: member.endedAt?.toISOString() ?? null,
    lastSeenAt: member.lastSeenAt?.toISOString() ?? null,
    version: member.version,
  };
}

/** Who stands where Wavekeep itself invited: the first manager of a lab. */
const WAVEKEEP = { id: "00000000-0000-7000-8000-000000000000", name: "Wavekeep" };

export function presentInvitation(row: InvitationRow, now: Date) {
  const state =
    row.acceptedAt !== null
      ? "accepted"
      : row.withdrawnAt !== null
        ? "withdrawn"
        : row.expiresAt <= now
          ? "expired"
          : "open";
  return {
    id: row.id,
    email: row.email,
    roles: knownRoles(row.roles),
    invitedBy:
      row.invitedById === null || row.invitedByName === null
        ? WAVEKEEP
        : { id: row.invitedById, name: row.invitedByName },
    invitedAt: row.invitedAt.toISOString(),
    expiresAt: row.expiresAt.toISOString(),
    state: state as "open" | "accepted" | "withdrawn" | "expired",
  };
}
