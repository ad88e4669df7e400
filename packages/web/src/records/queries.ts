/** The trail as people read it, and whether its chain holds. */
import { keepPreviousData, useInfiniteQuery, useQuery } from "@tanstack/react-query";
import { api } from "../shared/api.ts";

export interface TrailFilter {
  personId?: string | undefined;
  instrumentId?: string | undefined;
  checkId?: string | undefined;
  kind?: string | undefined;
  fromOn?: string | undefined;
  toOn?: string | undefined;
}

export const useTrail = (filter: TrailFilter) =>
  useInfiniteQuery({
    queryKey: ["trail", filter],
    queryFn: ({ pageParam, signal }) =>
      api.get("listTrail", {}, { ...filter, after: pageParam ?? undefined, limit: 100 }, { signal }),
    initialPageParam: null as string | null,
    getNextPageParam: (last) => last.next,
    placeholderData: keepPreviousData,
  });

export const useTrailDays = () =>
  useQuery({ queryKey: ["trail-days"], queryFn: ({ signal }) => api.get("trailDays", {}, undefined, { signal }) });

/** Recomputes the chain on the server: `refetch` checks it now. */
export const useChain = () =>
  useQuery({
    queryKey: ["trail-state"],
    queryFn: ({ signal }) => api.get("readChain", {}, undefined, { signal }),
    staleTime: 60_000,
  });

export const usePeople = () =>
  useQuery({ queryKey: ["people"], queryFn: ({ signal }) => api.get("listPeople", {}, undefined, { signal }) });

export const useFleet = () =>
  useQuery({
    queryKey: ["instruments"],
    queryFn: ({ signal }) => api.get("listInstruments", {}, undefined, { signal }),
  });
