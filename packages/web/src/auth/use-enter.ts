import { useQueryClient } from "@tanstack/react-query";
import type { Me } from "@wavekeep/api/contract";
import { adoptSession, sessionQuery } from "../shared/session.ts";

/** Takes the session that a sign-in brought as the one in force. */
export function useEnter(): (me: Me) => void {
  const client = useQueryClient();
  return (me) => client.setQueryData(sessionQuery.queryKey, adoptSession(client, me));
}
