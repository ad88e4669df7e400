/** Questions that the frame around every page asks; the same keys as the pages, so that each answer is fetched once. */
import { queryOptions } from "@tanstack/react-query";
import { api } from "./api.ts";

export const searchQuery = (q: string) =>
  queryOptions({
    queryKey: ["search", q],
    queryFn: ({ signal }) => api.get("search", {}, { q }, { signal }),
    enabled: q !== "",
    staleTime: 10_000,
  });

export const openAlertsQuery = queryOptions({
  queryKey: ["alerts", "open", "count"],
  queryFn: async ({ signal }) => {
    const page = await api.get("listAlerts", {}, { state: "open", limit: 100 }, { signal });
    return page.next === null ? String(page.items.length) : `${page.items.length}+`;
  },
  refetchInterval: 120_000,
});
