/** Questions and changes about instruments and their configurations. */
import { queryOptions, useInfiniteQuery, useQuery, useQueryClient } from "@tanstack/react-query";
import type {
  changeConfigurationInput,
  changeInstrumentInput,
  changeStandingInput,
  changeToleranceInput,
  createInstrumentInput,
  endConfigurationInput,
  Instrument,
  logEventInput,
  moveDueDateInput,
  nextConfigurationInput,
  retireInput,
} from "@wavekeep/api/contract";
import type { z } from "zod";
import { api } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";

const keys = {
  fleet: ["instruments"] as const,
  every: (instrumentId: string) => ["instruments", instrumentId] as const,
  one: (instrumentId: string, configurationId: string | null) =>
    ["instruments", instrumentId, configurationId] as const,
  axes: (configurationId: string) => ["axes", configurationId] as const,
  drift: (configurationId: string) => ["drift", configurationId] as const,
  checks: (of: ChecksOf) => ["checks", "of-instrument", of] as const,
  trail: (instrumentId: string) => ["trail", "of-instrument", instrumentId] as const,
  people: ["people"] as const,
};

export const fleetQuery = queryOptions({
  queryKey: keys.fleet,
  queryFn: ({ signal }) => api.get("listInstruments", {}, undefined, { signal }),
});
export const useFleet = () => useQuery(fleetQuery);

/** One instrument as one of its configurations stands; without one, as its worst stands. */
export const useInstrument = (instrumentId: string, configurationId: string | null = null) =>
  useQuery({
    queryKey: keys.one(instrumentId, configurationId),
    queryFn: ({ signal }) =>
      api.get("readInstrument", { instrumentId }, { configurationId: configurationId ?? undefined }, { signal }),
    // Of the same instrument: what was seen last stays until the other configuration is there.
    placeholderData: (last) => (last?.id === instrumentId ? last : undefined),
  });

/** Asks for an instrument anew: after a refusal, so that the form knows what stands now. */
export function useRefreshInstrument(instrumentId: string): () => void {
  const client = useQueryClient();
  return () => void client.invalidateQueries({ queryKey: keys.every(instrumentId) });
}

export const useAxes = (configurationId: string, enabled: boolean) =>
  useQuery({
    queryKey: keys.axes(configurationId),
    queryFn: ({ signal }) => api.get("listAxes", { configurationId }, undefined, { signal }),
    enabled,
  });

export const useDrift = (configurationId: string) =>
  useQuery({
    queryKey: keys.drift(configurationId),
    queryFn: ({ signal }) => api.get("readDrift", { configurationId }, undefined, { signal }),
  });

type ChecksOf = { instrumentId: string } | { configurationId: string };

/** Checks of one instrument or configuration, newest first, page by page. */
export const useInstrumentChecks = (of: ChecksOf) =>
  useInfiniteQuery({
    queryKey: keys.checks(of),
    queryFn: ({ pageParam, signal }) =>
      api.get("listChecks", {}, { ...of, after: pageParam ?? undefined, limit: 50 }, { signal }),
    initialPageParam: null as string | null,
    getNextPageParam: (last) => last.next,
  });

/** Entries of the trail about one instrument, newest first. */
export const useInstrumentTrail = (instrumentId: string) =>
  useInfiniteQuery({
    queryKey: keys.trail(instrumentId),
    queryFn: ({ pageParam, signal }) =>
      api.get("listTrail", {}, { instrumentId, after: pageParam ?? undefined, limit: 50 }, { signal }),
    initialPageParam: null as string | null,
    getNextPageParam: (last) => last.next,
  });

/** Members of the lab, for choosing an owner or whom a check is given to. */
export const usePeople = () =>
  useQuery({ queryKey: keys.people, queryFn: ({ signal }) => api.get("listPeople", {}, undefined, { signal }) });

export const useCreateInstrument = (done: (instrumentId: string) => void) =>
  useChange(
    (body: z.input<typeof createInstrumentInput>, idempotencyKey) =>
      api.post("createInstrument", {}, body, { idempotencyKey }),
    (reply) => done(reply.id),
  );

export const useChangeInstrument = (instrumentId: string, done: () => void) =>
  useChange((body: z.input<typeof changeInstrumentInput>) => api.put("changeInstrument", { instrumentId }, body), done);

export const useRetireInstrument = (instrumentId: string, done: () => void) =>
  useChange((body: z.input<typeof retireInput>) => api.post("retireInstrument", { instrumentId }, body), done);

export const useNextConfiguration = (instrumentId: string, done: (reply: Instrument) => void) =>
  useChange(
    (body: z.input<typeof nextConfigurationInput>, idempotencyKey) =>
      api.post("nextConfiguration", { instrumentId }, body, { idempotencyKey }),
    done,
  );

export const useEndConfiguration = (configurationId: string, done: (reply: Instrument) => void) =>
  useChange(
    (body: z.input<typeof endConfigurationInput>, idempotencyKey) =>
      api.post("endConfiguration", { configurationId }, body, { idempotencyKey }),
    done,
  );

export const useChangeConfiguration = (configurationId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof changeConfigurationInput>) => api.put("changeConfiguration", { configurationId }, body),
    done,
  );

export const useChangeTolerance = (configurationId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof changeToleranceInput>) => api.post("changeTolerance", { configurationId }, body),
    done,
  );

export const useChangeStanding = (configurationId: string, done: () => void) =>
  useChange((body: z.input<typeof changeStandingInput>) => api.post("changeStanding", { configurationId }, body), done);

export const useMoveDueDate = (configurationId: string, done: () => void) =>
  useChange((body: z.input<typeof moveDueDateInput>) => api.post("moveDueDate", { configurationId }, body), done);

export const useLogEvent = (done: () => void) =>
  useChange(
    (body: z.input<typeof logEventInput>, idempotencyKey) => api.post("logEvent", {}, body, { idempotencyKey }),
    done,
  );
