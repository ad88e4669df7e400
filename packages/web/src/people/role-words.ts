import type { Role } from "@wavekeep/api/contract";

export const ROLES: readonly { role: Role; word: string; note: string }[] = [
  {
    role: "manager",
    word: "lab manager",
    note: "Sets instruments, tolerances and people; reviews and approves what others made.",
  },
  { role: "technician", word: "technician", note: "Makes checks, logs events; sets no policy." },
  { role: "auditor", word: "auditor", note: "Reads everything, changes nothing." },
];

/** `lab manager, technician`; an owner without a role is one by owning. */
export function rolesText(roles: readonly Role[], ownsSomething: boolean): string {
  const words = ROLES.filter(({ role }) => roles.includes(role)).map(({ word }) => word);
  if (words.length > 0) return words.join(", ");
  return ownsSomething ? "instrument owner" : "member without a role";
}
