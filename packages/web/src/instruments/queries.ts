/** Questions and changes about instruments and their configurations. */
import { queryOptions, useInfiniteQuery, useQuery } from "@tanstack/react-query";
import type {
  changeConfigurationInput,
  changeInstrumentInput,
  changeStandingInput,
  changeToleranceInput,
  createInstrumentInput,
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
  one: (instrumentId: string) => ["instruments", instrumentId] as const,
  drift: (configurationId: string) => ["drift", configurationId] as const,
  checks: (instrumentId: string) => ["checks", "of-instrument", instrumentId] as const,
  trail: (instrumentId: string) => ["trail", "of-instrument", instrumentId] as const,
  people: ["people"] as const,
};

export const fleetQuery = queryOptions({
  queryKey: keys.fleet,
  queryFn: ({ signal }) => api.get("listInstruments", {}, undefined, { signal }),
});
export const useFleet = () => useQuery(fleetQuery);

export const useInstrument = (instrumentId: string) =>
  useQuery({
    queryKey: keys.one(instrumentId),
    queryFn: ({ signal }) => api.get("readInstrument", { instrumentId }, undefined, { signal }),
  });

export const useDrift = (configurationId: string) =>
  useQuery({
    queryKey: keys.drift(configurationId),
    queryFn: ({ signal }) => api.get("readDrift", { configurationId }, undefined, { signal }),
  });

/** Checks of one instrument, newest first, page by page. */
export const useInstrumentChecks = (instrumentId: string) =>
  useInfiniteQuery({
    queryKey: keys.checks(instrumentId),
    queryFn: ({ pageParam, signal }) =>
      api.get("listChecks", {}, { instrumentId, after: pageParam ?? undefined, limit: 50 }, { signal }),
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

export const useNextConfiguration = (instrumentId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof nextConfigurationInput>, idempotencyKey) =>
      api.post("nextConfiguration", { instrumentId }, body, { idempotencyKey }),
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
