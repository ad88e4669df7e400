import { useQueryClient } from "@tanstack/react-query";
import type { Me } from "@wavekeep/api/contract";
import { keepCsrfToken } from "../shared/api.ts";
import { sessionQuery } from "../shared/session.ts";

/** Takes the session that a sign-in brought as the one in force. */
export function useEnter(): (me: Me) => void {
  const client = useQueryClient();
  return (me) => {
    keepCsrfToken(me);
    client.setQueryData(sessionQuery.queryKey, me);
  };
}
