import { keepPreviousData, useQuery } from "@tanstack/react-query";
import { api } from "../shared/api.ts";

export const useLineLists = () =>
  useQuery({ queryKey: ["line-lists"], queryFn: ({ signal }) => api.get("listLineLists", {}, undefined, { signal }) });

/** Lines of one version of the library, of one element or of all. */
export const useLines = (lineListVersion: string | undefined, element: string | undefined) =>
  useQuery({
    queryKey: ["line-lists", lineListVersion, element ?? "all"],
    queryFn: ({ signal }) => api.get("listLines", { lineListVersion: lineListVersion ?? "" }, { element }, { signal }),
    enabled: lineListVersion !== undefined,
    placeholderData: keepPreviousData,
    staleTime: Infinity,
  });
