/** Problems told to people: RFC 9457 documents with a stable `type`. One table from kind to status and title. */
import type { ProblemDocument } from "../contract/common.ts";

export const problemKinds = {
  "bad-request": { status: 400, title: "The request could not be read" },
  "invalid-input": { status: 400, title: "Something in the form needs another look" },
  "not-signed-in": { status: 401, title: "Sign in first" },
  "session-ended": { status: 401, title: "The session has ended" },
  "wrong-credentials": { status: 401, title: "These did not match" },
  "wrong-password": { status: 403, title: "The password did not match" },
  "not-allowed": { status: 403, title: "Not allowed" },
  csrf: { status: 403, title: "The page is out of date" },
  "not-found": { status: 404, title: "Not found" },
  gone: { status: 410, title: "No longer valid" },
  stale: { status: 409, title: "Changed in the meantime" },
  conflict: { status: 409, title: "Not possible in this state" },
  "already-exists": { status: 409, title: "This exists already" },
  "repeated-request": { status: 409, title: "This was sent before" },
  "too-large": { status: 413, title: "Too large" },
  "unsupported-type": { status: 415, title: "This kind of content is not taken" },
  unusable: { status: 422, title: "Readable, but not usable" },
  locked: { status: 423, title: "Locked for a while" },
  "too-many": { status: 429, title: "Too many tries" },
  internal: { status: 500, title: "Something went wrong here" },
  "not-ready": { status: 503, title: "Not ready yet" },
} as const satisfies Record<string, { status: number; title: string }>;

export type ProblemKind = keyof typeof problemKinds;
export interface ProblemExtra {
  /** Fields of the form, the first one to be focused first. */
  fields?: { path: string; message: string }[];
  /** What was kept in spite of the refusal. */
  kept?: string;
  /** Seconds after which it is worth trying again. */
  retryAfterSeconds?: number;
}

/** A refusal with a sentence for the person; everything else that is thrown is a fault of ours. */
export class Problem extends Error {
  readonly kind: ProblemKind;
  readonly extra: ProblemExtra;

  constructor(kind: ProblemKind, detail: string, extra: ProblemExtra = {}) {
    super(detail);
    this.name = "Problem";
    this.kind = kind;
    this.extra = extra;
  }

  get status(): number {
    return problemKinds[this.kind].status;
  }

  document(): ProblemDocument {
    const { fields, kept } = this.extra;
    return {
      type: `/problems/${this.kind}`,
      title: problemKinds[this.kind].title,
      status: this.status,
      detail: this.message,
      ...(fields === undefined ? {} : { fields }),
      ...(kept === undefined ? {} : { kept }),
    };
  }
}

/**
 * A problem to be thrown: `throw problem("conflict", "This check was approved already.")`.
 *
 * @param detail what happened, what was kept, what to do, in plain words
 */
export const problem = (kind: ProblemKind, detail: string, extra?: ProblemExtra): Problem =>
  new Problem(kind, detail, extra);

/** What is absent and what belongs to another lab read the same. */
export const notFound = (what: string): Problem =>
  problem("not-found", `${what} is not here. It may belong to another lab, or the address may be mistyped.`);
