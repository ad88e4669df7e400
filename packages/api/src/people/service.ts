/** Members of a lab: what they may do, who joins and who leaves, deputies, shared PCs. */
import type { Role } from "../contract/common.ts";
import { newId } from "../db/columns.ts";
import { inLab, assertFresh, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { newToken, tokenHash } from "../auth/passwords.ts";
import { notFound, problem } from "../http/problem.ts";
import { invitationMail, rolesChangedMail } from "../mail/texts.ts";
import { queueMail } from "../mail/outbox.ts";
import { findLabName } from "../labs/queries.ts";
import { writeTrail } from "../records/trail.ts";
import type { Services } from "../services.ts";
import { knownRoles, presentInvitation, presentPerson } from "./present.ts";
import * as queries from "./queries.ts";

const INVITATION_DAYS = 14;
const DAY_MS = 86_400_000;
const roleWords: Record<Role, string> = { manager: "lab manager", technician: "technician", auditor: "auditor" };

export function listPeople({ db }: Services, ctx: Context) {
  return inLab(db, ctx, async (tx) => {
    const [members, owned, deputyRows, invited, devices, now] = [
      await queries.listMembers(tx),
      await queries.listOwned(tx),
      await queries.listDeputies(tx),
      await queries.listInvitations(tx),
      await queries.listBenchDevices(tx),
      await recordNow(tx),
    ];
    return {
      people: members.map((member) => presentPerson(member, owned, deputyRows)),
      invitations: invited.map((row) => presentInvitation(row, now)),
      benchDevices: devices.map((device) => ({
        id: device.id,
        name: device.name,
        enrolledAt: device.enrolledAt.toISOString(),
        enrolledBy: { id: device.byId, name: device.byName },
        lastUsedAt: device.lastUsedAt?.toISOString() ?? null,
      })),
    };
  });
}

async function findPresented(tx: Tx, personId: string) {
  const member = await queries.findOptionalMember(tx, personId);
  if (member === null) throw notFound("This person");
  return presentPerson(member, await queries.listOwned(tx), await queries.listDeputies(tx));
}

/** Invite by e-mail. An earlier open invitation of the same address is replaced. */
export function invite(services: Services, ctx: Context, input: { email: string; roles: Role[] }) {
  const { db, jobs, config } = services;
  const roles = [...new Set(input.roles)];
  const token = newToken();
  return inLab(db, ctx, async (tx) => {
    if (await queries.isMemberByEmail(tx, input.email)) {
      throw problem(
        "already-exists",
        `${input.email} is a member already. Change their roles instead; nothing was sent.`,
        { fields: [{ path: "email", message: "Is a member already." }] },
      );
    }
    const now = await recordNow(tx);
    await queries.withdrawInvitations(tx, { email: input.email }, now);
    const id = newId();
    const expiresAt = new Date(now.getTime() + INVITATION_DAYS * DAY_MS);
    await queries.saveInvitation(tx, {
      id,
      labId: ctx.labId,
      email: input.email,
      roles,
      tokenHash: tokenHash(token),
      invitedBy: ctx.personId,
      invitedAt: now,
      expiresAt,
    });
    const mail = invitationMail({
      labName: await findLabName(tx, ctx.labId),
      invitedBy: ctx.personName,
      roles: roles.map((name) => roleWords[name]),
      link: `${config.publicUrl}/invitation/${token}`,
      expiresOn: expiresAt.toISOString().slice(0, 10),
    });
    await queueMail(tx, ctx, jobs, { to: { address: input.email }, ...mail, causeKey: `invitation:${id}` });
    await writeTrail(tx, ctx, {
      action: "person.invited",
      about: { kind: "invitation", id, label: input.email },
      after: { roles },
    });
    return presentInvitation((await queries.findOptionalInvitation(tx, id))!, now);
  });
}

export async function withdrawInvitation({ db }: Services, ctx: Context, invitationId: string): Promise<void> {
  await inLab(db, ctx, async (tx) => {
    const found = await queries.findOptionalInvitation(tx, invitationId);
    if (found === null) throw notFound("This invitation");
    if ((await queries.withdrawInvitations(tx, { id: invitationId }, await recordNow(tx))) === 0) {
      throw problem("conflict", "This invitation is not open any more. Nothing was changed.");
    }
    await writeTrail(tx, ctx, {
      action: "invitation.withdrawn",
      about: { kind: "invitation", id: invitationId, label: found.email },
    });
  });
}

/** Change roles and the appointment as approver. A lab keeps a manager, an owner stays more than an auditor. */
export function changeRoles(
  services: Services,
  ctx: Context,
  personId: string,
  input: { roles: Role[]; isApprover: boolean; version: number },
) {
  const { db, jobs } = services;
  const roles = [...new Set(input.roles)];
  return inLab(db, ctx, async (tx) => {
    await queries.lockManagers(tx, ctx.labId);
    const member = await queries.lockMember(tx, personId);
    if (member === null) throw notFound("This person");
    if (member.endedAt !== null)
      throw problem("conflict", `${member.name} has left the lab. Invite them again; nothing was changed.`);
    assertFresh(member, input, `What ${member.name} may do`);
    if (member.roles.includes("manager") && !roles.includes("manager")) await assertOtherManager(tx, personId);
    const owned = (await queries.listOwned(tx)).filter(({ ownerId }) => ownerId === personId);
    if (owned.length > 0 && roles.length === 1 && roles[0] === "auditor") {
      throw problem(
        "conflict",
        `${member.name} owns ${owned.map(({ name }) => name).join(", ")}, and a pure auditor owns no instrument. Hand it over first; nothing was changed.`,
      );
    }
    if (input.isApprover && roles.length === 1 && roles[0] === "auditor") {
      throw problem("conflict", "A pure auditor approves nothing. Give another role first; nothing was changed.");
    }
    await queries.saveRoles(tx, personId, { roles, isApprover: input.isApprover });
    if (personId !== ctx.personId) {
      const mail = rolesChangedMail({
        name: member.name,
        labName: await findLabName(tx, ctx.labId),
        by: ctx.personName,
        roles: roles.map((name) => roleWords[name]),
      });
      await queueMail(tx, ctx, jobs, {
        to: { personId },
        ...mail,
        causeKey: `roles:${personId}:${member.version + 1}`,
      });
    }
    const reply = await findPresented(tx, personId);
    await writeTrail(tx, ctx, {
      action: "roles.changed",
      about: { kind: "person", id: personId, label: member.name },
      before: { roles: knownRoles(member.roles), isApprover: member.isApprover },
      after: { roles, isApprover: input.isApprover },
    });
    return reply;
  });
}

async function assertOtherManager(tx: Tx, personId: string): Promise<void> {
  if ((await queries.countOtherManagers(tx, personId)) === 0) {
    throw problem(
      "conflict",
      "A lab needs a manager, and this is the last one. Make somebody else a manager first; nothing was changed.",
    );
  }
}

/** End a membership. What the person did stays theirs in the record. */
export async function endMembership(
  { db }: Services,
  ctx: Context,
  personId: string,
  input: { reason: string; version: number },
): Promise<void> {
  await inLab(db, ctx, async (tx) => {
    await queries.lockManagers(tx, ctx.labId);
    const member = await queries.lockMember(tx, personId);
    if (member === null) throw notFound("This person");
    if (member.endedAt !== null)
      throw problem("conflict", `${member.name} has left the lab already. Nothing was changed.`);
    assertFresh(member, input, `What ${member.name} may do`);
    if (member.roles.includes("manager")) await assertOtherManager(tx, personId);
    const owned = (await queries.listOwned(tx)).filter(({ ownerId }) => ownerId === personId);
    if (owned.length > 0) {
      throw problem(
        "conflict",
        `${member.name} owns ${owned.map(({ name }) => name).join(", ")}. Give each another owner first; nothing was changed.`,
      );
    }
    await queries.saveEnd(tx, personId, await recordNow(tx));
    await writeTrail(tx, ctx, {
      action: "membership.ended",
      about: { kind: "person", id: personId, label: member.name },
      before: { roles: knownRoles(member.roles), isApprover: member.isApprover },
      why: input.reason === "" ? null : input.reason,
    });
  });
}

/** Appoint a deputy from one date to another; the trail is what ends it, or the date. */
export async function appointDeputy(
  { db }: Services,
  ctx: Context,
  input: { personId: string; forPersonId: string; fromOn: string; toOn: string },
): Promise<void> {
  if (input.personId === input.forPersonId) {
    throw problem("invalid-input", "Nobody stands in for themselves. Choose somebody else.", {
      fields: [{ path: "personId", message: "Choose somebody else." }],
    });
  }
  if (input.toOn < input.fromOn) {
    throw problem("invalid-input", "The last day lies before the first. Nothing was stored.", {
      fields: [{ path: "toOn", message: "This lies before the first day." }],
    });
  }
  await inLab(db, ctx, async (tx) => {
    const [deputy, principal] = [
      await queries.findOptionalMember(tx, input.personId),
      await queries.findOptionalMember(tx, input.forPersonId),
    ];
    if (deputy === null || principal === null) throw notFound("This person");
    if (deputy.endedAt !== null || principal.endedAt !== null)
      throw problem("conflict", "Both must be members of the lab. Nothing was stored.");
    if (deputy.roles.length === 1 && deputy.roles[0] === "auditor")
      throw problem("conflict", "A pure auditor stands in for nobody. Choose somebody else; nothing was stored.");
    await queries.saveDeputy(tx, {
      labId: ctx.labId,
      ...input,
      appointedBy: ctx.personId!,
      appointedAt: await recordNow(tx),
    });
    await writeTrail(tx, ctx, {
      action: "deputy.appointed",
      about: { kind: "person", id: input.personId, label: deputy.name },
      after: { fromOn: input.fromOn, toOn: input.toOn, forPersonId: input.forPersonId },
      personal: { forPerson: principal.name },
    });
  });
}

/** Enrol the PC the request comes from. @returns the device, and the token for its cookie */
export async function enrolBench({ db }: Services, ctx: Context, name: string): Promise<{ id: string; token: string }> {
  const [id, token] = [newId(), newToken()];
  await inLab(db, ctx, async (tx) => {
    await queries.saveBenchDevice(tx, {
      id,
      labId: ctx.labId,
      name,
      tokenHash: tokenHash(token),
      enrolledAt: await recordNow(tx),
      enrolledBy: ctx.personId!,
    });
    await writeTrail(tx, ctx, { action: "bench.enrolled", about: { kind: "bench-device", id, label: name } });
  });
  return { id, token };
}

export async function removeBench({ db }: Services, ctx: Context, deviceId: string): Promise<void> {
  await inLab(db, ctx, async (tx) => {
    const name = await queries.removeBenchDevice(tx, deviceId, await recordNow(tx));
    if (name === null) throw notFound("This shared PC");
    await writeTrail(tx, ctx, { action: "bench.removed", about: { kind: "bench-device", id: deviceId, label: name } });
  });
}
