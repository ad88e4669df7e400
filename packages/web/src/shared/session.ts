/** Who is signed in and what they may do, read from the one permission table that the server enforces. */
import { permissions, type Action, type Me, type Permission } from "@wavekeep/api/contract";
import { queryOptions, useQuery, type QueryClient } from "@tanstack/react-query";
import { createContext, useContext, useState } from "react";
import { dayOf } from "../ui/format.ts";
import { api, keepCsrfToken } from "./api.ts";

export const sessionQuery = queryOptions({
  queryKey: ["session"],
  queryFn: async ({ signal, client }) => adoptSession(client, await api.get("readSession", {}, undefined, { signal })),
  staleTime: 60_000,
});

let lastMember: string | null = null;

/**
 * Takes a session as the one in force. When another person, or the same one in another lab, holds it, nothing that was
 * fetched before may be seen: it is forgotten before the session is shown.
 */
export function adoptSession(client: QueryClient, me: Me): Me {
  keepCsrfToken(me);
  if (isMember(me)) {
    const member = memberKey(me);
    if (lastMember !== null && lastMember !== member)
      client.removeQueries({ predicate: (query) => query.queryKey[0] !== "session" });
    lastMember = member;
  }
  return me;
}

/** The session as the server last told it; before sign-in `person` is null. */
export const useSession = () => useQuery(sessionQuery);

/** A member at work in a lab: what every page inside the shell may take for granted. */
export type Member = Me & { person: NonNullable<Me["person"]>; lab: NonNullable<Me["lab"]> };

export const isMember = (me: Me | undefined): me is Member => me !== undefined && me.person !== null && me.lab !== null;

/** Names a person at work in a lab: another key is another desk. */
export const memberKey = (me: Member): string => `${me.person.id} ${me.lab.id}`;

const MemberContext = createContext<Member | null>(null);
/** Set by the shell around every page. */
export const MemberProvider = MemberContext.Provider;

/** The signed-in member. @throws outside the shell, which is a mistake of the caller */
export function useMe(): Member {
  const me = useContext(MemberContext);
  if (me === null) throw new Error("useMe is for pages inside the shell.");
  return me;
}

/** Time zone of the lab, or of this device before a lab is known. */
export const useZone = (): string =>
  useContext(MemberContext)?.lab.zone ?? Intl.DateTimeFormat().resolvedOptions().timeZone;

/** Today's date in the lab's zone, `yyyy-mm-dd`: as the server said it, else by this device's clock. */
export function useToday(given?: string): string {
  const zone = useZone();
  const [byClock] = useState(() => new Date());
  return given ?? dayOf(byClock, zone);
}

/** What an action is about, as far as the page knows it. */
export interface About {
  instrumentId?: string;
  /** The person contributed to the check in question. */
  contributed?: boolean;
}

/**
 * Whether this member may do an action: for showing or hiding a control. The server decides again.
 * A relation counts when it is known to hold: owning needs `about.instrumentId`.
 */
export function mayDo(me: Me, action: Action, about: About = {}): boolean {
  const rule: Permission = permissions[action];
  if (rule.public) return true;
  if (me.person === null) return false;
  if (rule.signedIn) return true;
  if (me.lab === null) return false;
  if (rule.unless === "contributed-to-check" && about.contributed === true) return false;
  if (rule.member) return true;
  if (rule.roles?.some((role) => me.roles.includes(role))) return true;
  if (rule.relation === "owns-instrument") {
    return about.instrumentId === undefined
      ? me.ownedInstrumentIds.length > 0
      : me.ownedInstrumentIds.includes(about.instrumentId);
  }
  if (rule.relation === "named-approver") return me.isApprover;
  return false;
}

/** `may("check.begin")`, `may("event.log", { instrumentId })`. */
export function useMay(): (action: Action, about?: About) => boolean {
  const me = useMe();
  return (action, about) => mayDo(me, action, about);
}
