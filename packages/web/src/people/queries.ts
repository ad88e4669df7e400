/** What Settings asks the server for, and what it changes there. */
import { queryOptions } from "@tanstack/react-query";
import { api } from "../shared/api.ts";

export const peopleQuery = queryOptions({
  queryKey: ["people"],
  queryFn: ({ signal }) => api.get("listPeople", {}, undefined, { signal }),
});
export const labQuery = queryOptions({
  queryKey: ["lab"],
  queryFn: ({ signal }) => api.get("readLab", {}, undefined, { signal }),
});
