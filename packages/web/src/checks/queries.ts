/** Questions and changes about checks, from the first capture to the approval. */
import { keepPreviousData, useInfiniteQuery, useQuery, useQueryClient } from "@tanstack/react-query";
import type {
  acknowledgeCheckInput,
  adoptAxisInput,
  approveInput,
  beginCheckInput,
  Check,
  draftInput,
  newAttemptInput,
  returnInput,
  setAsideInput,
  submitInput,
} from "@wavekeep/api/contract";
import { useCallback } from "react";
import type { z } from "zod";
import { api, type OnProgress, type RouteQuery } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";

const keys = {
  list: (filter: ChecksFilter) => ["checks", filter] as const,
  one: (checkId: string) => ["checks", checkId] as const,
  drawing: (checkId: string, analysisVersion: number) => ["drawing", checkId, analysisVersion] as const,
};

export type ChecksFilter = Omit<NonNullable<RouteQuery<"listChecks">>, "after" | "limit">;

export const useChecks = (filter: ChecksFilter) =>
  useInfiniteQuery({
    queryKey: keys.list(filter),
    queryFn: ({ pageParam, signal }) =>
      api.get("listChecks", {}, { ...filter, after: pageParam ?? undefined }, { signal }),
    initialPageParam: null as string | null,
    getNextPageParam: (last) => last.next,
    placeholderData: keepPreviousData,
  });

export const useCheck = (checkId: string) =>
  useQuery({
    queryKey: keys.one(checkId),
    queryFn: ({ signal }) => api.get("readCheck", { checkId }, undefined, { signal }),
  });

/** The spectrum of one analysis; immutable, so it is asked for once. */
export const useDrawing = (checkId: string, analysisVersion: number | undefined) =>
  useQuery({
    queryKey: keys.drawing(checkId, analysisVersion ?? 0),
    queryFn: ({ signal }) =>
      api.get("readDrawing", { checkId, analysisVersion: analysisVersion ?? 0 }, undefined, { signal }),
    enabled: analysisVersion !== undefined,
    staleTime: Infinity,
    placeholderData: keepPreviousData,
  });

export const useFleet = () =>
  useQuery({
    queryKey: ["instruments"],
    queryFn: ({ signal }) => api.get("listInstruments", {}, undefined, { signal }),
  });

export const usePeople = () =>
  useQuery({ queryKey: ["people"], queryFn: ({ signal }) => api.get("listPeople", {}, undefined, { signal }) });

export const useSources = () =>
  useQuery({ queryKey: ["sources"], queryFn: ({ signal }) => api.get("listSources", {}, undefined, { signal }) });

export const useInstrument = (instrumentId: string | undefined) =>
  useQuery({
    queryKey: ["instruments", instrumentId],
    queryFn: ({ signal }) => api.get("readInstrument", { instrumentId: instrumentId ?? "" }, undefined, { signal }),
    enabled: instrumentId !== undefined,
  });

export const useBeginCheck = (done: (check: Check) => void) =>
  useChange(
    (body: z.input<typeof beginCheckInput>, idempotencyKey) => api.post("beginCheck", {}, body, { idempotencyKey }),
    done,
  );

/** Asks for a check anew: after a refusal, so that its form knows what stands now. */
export function useRefreshCheck(checkId: string): () => void {
  const client = useQueryClient();
  return () => void client.invalidateQueries({ queryKey: keys.one(checkId) });
}

/** Puts a reply of the server in place of what was shown, without asking again. */
export function useKeepCheck(checkId: string): (check: Check) => void {
  const client = useQueryClient();
  return useCallback((check) => client.setQueryData(keys.one(checkId), check), [client, checkId]);
}

export const saveDraft = (checkId: string, body: z.input<typeof draftInput>) => api.put("saveDraft", { checkId }, body);
export const readCheck = (checkId: string) => api.get("readCheck", { checkId });
export const analyse = (checkId: string, version: number) => api.post("analyse", { checkId }, { version });
export const addCaptures = (checkId: string, files: readonly File[], part: "lamp" | "dark", onProgress: OnProgress) =>
  api.upload("addCaptures", { checkId }, files, { part }, onProgress);

export const useNewAttempt = (checkId: string, done: (check: Check) => void) =>
  useChange(
    (body: z.input<typeof newAttemptInput>, idempotencyKey) =>
      api.post("newAttempt", { checkId }, body, { idempotencyKey }),
    done,
  );

export const useSetAside = (checkId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof setAsideInput>, idempotencyKey) =>
      api.post("setAside", { checkId }, body, { idempotencyKey }),
    done,
  );

/** Password dialogs show their own refusals, so these are plain requests; the key makes a second press harmless. */
export const submitCheck = (checkId: string, body: z.input<typeof submitInput>, idempotencyKey: string) =>
  api.post("submitCheck", { checkId }, body, { idempotencyKey });
export const approveCheck = (checkId: string, body: z.input<typeof approveInput>, idempotencyKey: string) =>
  api.post("approveCheck", { checkId }, body, { idempotencyKey });

export const useReturnCheck = (checkId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof returnInput>, idempotencyKey) =>
      api.post("returnCheck", { checkId }, body, { idempotencyKey }),
    done,
  );

export const useAdoptAxis = (configurationId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof adoptAxisInput>, idempotencyKey) =>
      api.post("adoptAxis", { configurationId }, body, { idempotencyKey }),
    done,
  );

export const useAcknowledgeCheck = (checkId: string, done: () => void) =>
  useChange(
    (body: z.input<typeof acknowledgeCheckInput>, idempotencyKey) =>
      api.post("acknowledgeCheck", { checkId }, body, { idempotencyKey }),
    done,
  );
