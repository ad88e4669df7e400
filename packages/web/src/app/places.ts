/** The entries of the rail. The role decides which are there; what a person may not open is absent, not grey. */
import type { Action } from "@wavekeep/api/contract";
import { mayDo, type Member } from "../shared/session.ts";

export interface Place {
  to: string;
  label: string;
  needs: Action;
}

const PLACES: readonly Place[] = [
  { to: "/today", label: "Today", needs: "today.read" },
  { to: "/instruments", label: "Instruments", needs: "instrument.read" },
  { to: "/checks", label: "Checks", needs: "check.read" },
  { to: "/sources", label: "Sources", needs: "source.read" },
  { to: "/alerts", label: "Alerts", needs: "alert.read" },
  { to: "/records", label: "Records", needs: "records.read" },
  { to: "/settings", label: "Settings", needs: "people.change" },
];

export const placesOf = (me: Member): readonly Place[] => PLACES.filter((place) => mayDo(me, place.needs));

const ROLE_WORDS = { manager: "lab manager", technician: "technician", auditor: "auditor" } as const;

/** The role a person is shown with: the first of manager, technician, auditor; an owner without a role is one. */
export function roleWord(me: Pick<Member, "roles" | "ownedInstrumentIds">): string {
  const role = (["manager", "technician", "auditor"] as const).find((candidate) => me.roles.includes(candidate));
  if (role !== undefined) return ROLE_WORDS[role];
  return me.ownedInstrumentIds.length > 0 ? "instrument owner" : "member";
}
