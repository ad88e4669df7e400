import { queryOptions, useQuery } from "@tanstack/react-query";
import { api } from "../shared/api.ts";

const todayQuery = queryOptions({
  queryKey: ["today"],
  queryFn: ({ signal }) => api.get("today", {}, undefined, { signal }),
  refetchInterval: 60_000,
});

/** What waits for me, what is due, the fleet. */
export const useToday = () => useQuery(todayQuery);
