import { keepPreviousData, useInfiniteQuery, useQuery } from "@tanstack/react-query";
import type { acknowledgeAlertInput } from "@wavekeep/api/contract";
import type { z } from "zod";
import { api } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";

export type AlertsShown = "open" | "closed" | "all";

export const useAlerts = (state: AlertsShown, instrumentId: string | undefined) =>
  useInfiniteQuery({
    queryKey: ["alerts", state, instrumentId ?? "every"],
    queryFn: ({ pageParam, signal }) =>
      api.get("listAlerts", {}, { state, instrumentId, after: pageParam ?? undefined }, { signal }),
    initialPageParam: null as string | null,
    getNextPageParam: (last) => last.next,
    placeholderData: keepPreviousData,
  });

/** Impact reviews, shown under the alerts that opened them. */
export const useImpactReviews = () =>
  useQuery({
    queryKey: ["impact-reviews"],
    queryFn: ({ signal }) => api.get("listImpactReviews", {}, undefined, { signal }),
  });

export const useAcknowledgeAlert = (alertId: string, done: () => void) =>
  useChange((body: z.input<typeof acknowledgeAlertInput>) => api.post("acknowledgeAlert", { alertId }, body), done);
