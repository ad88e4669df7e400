/** Keyset pages by time and id: the place after which the next page begins, as one opaque text. */
import { problem } from "./problem.ts";

export interface PagePlace {
  /** ISO 8601 UTC. */
  at: string;
  id: string;
}

export const pageNext = ({ at, id }: PagePlace): string => Buffer.from(`${at} ${id}`, "utf8").toString("base64url");

/** @throws problem "invalid-input" for a text that was not given out here */
export function pageAfter(text: string | undefined): PagePlace | undefined {
  if (text === undefined) return undefined;
  const [at, id] = Buffer.from(text, "base64url").toString("utf8").split(" ");
  const wellFormed =
    at !== undefined && id !== undefined && /^\d{4}-\d\d-\d\dT[\d:.]+Z$/.test(at) && /^[0-9a-f-]{36}$/.test(id);
  if (!wellFormed || Number.isNaN(Date.parse(at)))
    throw problem("invalid-input", "This page of the list does not exist. Begin at its first page.");
  return { at, id };
}
