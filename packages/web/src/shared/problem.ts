/** A refusal of the server as the pages meet it: an RFC 9457 problem document, or what stands in for one when none came. */
import type { ProblemDocument } from "@wavekeep/api/contract";

export class ApiProblem extends Error {
  readonly document: ProblemDocument;

  constructor(document: ProblemDocument) {
    super(document.detail || document.title);
    this.name = "ApiProblem";
    this.document = document;
  }

  /** Stable last part of the type: `stale-version` of `/problems/stale-version`. */
  get kind(): string {
    return this.document.type.split("/").at(-1) ?? "";
  }

  get status(): number {
    return this.document.status;
  }
}

/** The network gave no answer at all: nothing is known about whether the server acted. */
export const unreachable = () =>
  new ApiProblem({
    type: "/problems/unreachable",
    title: "The server does not answer",
    status: 0,
    detail: "The server does not answer. What you typed is still here; try again in a moment.",
  });

/** Anything thrown, as a problem document that can be shown. */
export function problemOf(error: unknown): ProblemDocument {
  if (error instanceof ApiProblem) return error.document;
  return {
    type: "/problems/page-failed",
    title: "This part of the page failed",
    status: 0,
    detail:
      error instanceof Error
        ? error.message
        : "Something unexpected happened here. Reload the page; nothing stored is lost.",
  };
}
