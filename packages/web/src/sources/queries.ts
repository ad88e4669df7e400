/** Questions and changes about reference sources. */
import { useMutation, useQuery, useQueryClient } from "@tanstack/react-query";
import type { changeSourceInput, retireSourceInput, sourceInput } from "@wavekeep/api/contract";
import type { z } from "zod";
import { api } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";

const keys = {
  all: ["sources"] as const,
  one: (sourceId: string) => ["sources", sourceId] as const,
  fleet: ["instruments"] as const,
};

export const useSources = () =>
  useQuery({ queryKey: keys.all, queryFn: ({ signal }) => api.get("listSources", {}, undefined, { signal }) });

export const useSource = (sourceId: string) =>
  useQuery({
    queryKey: keys.one(sourceId),
    queryFn: ({ signal }) => api.get("readSource", { sourceId }, undefined, { signal }),
  });

/** Instruments to choose from where a source is built in. */
export const useFleet = () =>
  useQuery({ queryKey: keys.fleet, queryFn: ({ signal }) => api.get("listInstruments", {}, undefined, { signal }) });

export const useCreateSource = (done: (sourceId: string) => void) =>
  useChange(
    (body: z.input<typeof sourceInput>, idempotencyKey) => api.post("createSource", {}, body, { idempotencyKey }),
    (reply) => done(reply.id),
  );

export const useChangeSource = (sourceId: string, done: () => void) =>
  useChange((body: z.input<typeof changeSourceInput>) => api.put("changeSource", { sourceId }, body), done);

export const useRetireSource = (sourceId: string, done: () => void) =>
  useChange((body: z.input<typeof retireSourceInput>) => api.post("retireSource", { sourceId }, body), done);

export function useStoreCertificate(sourceId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (file: File) => api.upload("storeCertificate", { sourceId }, [file]),
    onSuccess: () => client.invalidateQueries(),
  });
}
