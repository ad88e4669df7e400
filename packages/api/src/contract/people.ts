/** Sign-in, people, memberships, invitations, bench mode, the lab's own settings. */
import { z } from "zod";
import { date, decisionRule, email, id, instant, name, personRef, role, version } from "./common.ts";

export const password = z.string().min(10, "At least 10 characters.").max(200, "At most 200 characters.");
export const pin = z.string().regex(/^\d{4,8}$/, "4 to 8 digits.");

export const signInInput = z.object({ email, password: z.string().min(1, "Write your password.").max(200) });
export const switchLabInput = z.object({ labId: id });
export const forgottenPasswordInput = z.object({ email });
export const resetPasswordInput = z.object({ token: z.string().min(20).max(200), password });
export const changePasswordInput = z.object({ current: z.string().max(200), password });
export const changePinInput = z.object({ current: z.string().max(200), pin });
export const changeMeInput = z.object({ name });

/** Who is signed in, where, and what they may do. `person` is null before sign-in. */
export const me = z.object({
  person: z.object({ id, name: z.string(), email: z.string(), hasPin: z.boolean() }).nullable(),
  lab: z
    .object({ id, name: z.string(), zone: z.string(), isDemo: z.boolean(), altitudeM: z.number().nullable() })
    .nullable(),
  roles: z.array(role),
  isApprover: z.boolean(),
  /** Instruments this person owns or stands in for; owning gives rights that no role gives. */
  ownedInstrumentIds: z.array(id),
  labs: z.array(z.object({ id, name: z.string(), isDemo: z.boolean() })),
  bench: z.object({ deviceName: z.string(), lockAfterSeconds: z.number().int() }).nullable(),
  idleSeconds: z.number().int(),
  /** Sent back in the header `x-csrf-token` with every change. */
  csrfToken: z.string(),
  /** True on a local demo: then the sign-in page names the demo people and mail is read at /dev/mail. */
  isDemoServer: z.boolean(),
  demoPeople: z.array(z.object({ email: z.string(), name: z.string(), role: z.string(), password: z.string() })),
  version: z.string(),
});
export type Me = z.infer<typeof me>;

export const person = z.object({
  id,
  name: z.string(),
  email: z.string(),
  roles: z.array(role),
  isApprover: z.boolean(),
  owns: z.array(z.object({ id, name: z.string() })),
  deputyFor: z.array(z.object({ person: personRef, fromOn: date, toOn: date })),
  joinedAt: instant,
  endedAt: instant.nullable(),
  lastSeenAt: instant.nullable(),
  version,
});
export type Person = z.infer<typeof person>;
export const invitation = z.object({
  id,
  email: z.string(),
  roles: z.array(role),
  invitedBy: personRef,
  invitedAt: instant,
  expiresAt: instant,
  state: z.enum(["open", "accepted", "withdrawn", "expired"]),
});
export const peopleReply = z.object({
  people: z.array(person),
  invitations: z.array(invitation),
  benchDevices: z.array(
    z.object({ id, name: z.string(), enrolledAt: instant, enrolledBy: personRef, lastUsedAt: instant.nullable() }),
  ),
});
export const inviteInput = z.object({ email, roles: z.array(role).min(1, "Choose at least one role.") });
export const invitationReply = z.object({
  labName: z.string(),
  email: z.string(),
  roles: z.array(role),
  invitedBy: z.string(),
  knownPerson: z.boolean(),
});
export const acceptInvitationInput = z.object({ name, password: z.string().max(200) });
export const changeRolesInput = z.object({ roles: z.array(role), isApprover: z.boolean(), version });
export const endMembershipInput = z.object({ reason: z.string().trim().max(4000), version });
export const appointDeputyInput = z.object({ personId: id, forPersonId: id, fromOn: date, toOn: date });

export const enrolBenchInput = z.object({ name });
export const benchReply = z.object({
  device: z.object({ name: z.string(), labName: z.string() }).nullable(),
  people: z.array(personRef),
});
export const benchSignInInput = z.object({ personId: id, pin });

export const labSettings = z.object({
  id,
  name: z.string(),
  zone: z.string(),
  altitudeM: z.number().nullable(),
  isDemo: z.boolean(),
  selfApproval: z.boolean(),
  warningShare: z.number(),
  decisionRule,
  headMail: z.string().nullable(),
  signingKeyFingerprint: z.string(),
  version,
});
export type LabSettings = z.infer<typeof labSettings>;
export const changeLabInput = z.object({
  name,
  zone: z.string().max(60),
  altitudeM: z.number().min(-430).max(6000).nullable(),
  selfApproval: z.boolean(),
  warningShare: z.number().min(0.3).max(1),
  decisionRule,
  headMail: email.nullable(),
  version,
});
