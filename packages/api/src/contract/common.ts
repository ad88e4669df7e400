/** Shapes that every capability shares. Times are ISO 8601 UTC, dates `yyyy-mm-dd` in the lab's zone, ids UUIDv7. */
import { z } from "zod";

export const id = z.uuid();
export const instant = z.iso.datetime({ offset: true });
export const date = z.iso.date();
export const name = z.string().trim().min(1, "Write a name.").max(120, "At most 120 characters.");
export const note = z.string().trim().max(4000, "At most 4 000 characters.");
export const reason = z
  .string()
  .trim()
  .min(3, "Write a reason, at least a few words.")
  .max(4000, "At most 4 000 characters.");
export const email = z
  .email("This is not an e-mail address.")
  .max(254)
  .transform((text) => text.toLowerCase());
/** Version of a row that two people may edit: sent back with a change, refused as stale when it has moved on. */
export const version = z.number().int().nonnegative();

export const role = z.enum(["manager", "technician", "auditor"]);
export type Role = z.infer<typeof role>;

export const personRef = z.object({ id, name: z.string() });
export type PersonRef = z.infer<typeof personRef>;

/** RFC 9457 problem document. `type` is stable: `/problems/<kind>`. */
export const problemDocument = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  /** What happened, what was kept, what to do. */
  detail: z.string(),
  /** First one is focused in the form. */
  fields: z.array(z.object({ path: z.string(), message: z.string() })).optional(),
  kept: z.string().optional(),
});
export type ProblemDocument = z.infer<typeof problemDocument>;

/** A keyset page: `next` goes back as `after`. */
export const page = <T extends z.ZodType>(item: T) => z.object({ items: z.array(item), next: z.string().nullable() });
export const pageQuery = z.object({
  after: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(200).default(50),
});

export const instrumentKind = z.enum(["array", "scanning", "spectrophotometer", "raman"]);
export type InstrumentKind = z.infer<typeof instrumentKind>;
export const standing = z.enum(["in-service", "on-hold", "restricted", "out-of-service", "quarantined", "retired"]);
export type Standing = z.infer<typeof standing>;
export const verdict = z.enum(["pass", "inconclusive", "fail"]);
/** State shown for a configuration: the shape and word of design.md. */
export const shownState = z.enum([
  "in-tolerance",
  "near-limit",
  "out-of-tolerance",
  "inconclusive",
  "not-judged",
  "on-hold",
  "restricted",
  "out-of-service",
  "quarantined",
  "retired",
]);
export type ShownState = z.infer<typeof shownState>;
export const condition = z.enum(["as-found", "as-left"]);
export const toleranceSegment = z.object({ fromNm: z.number(), toNm: z.number(), toleranceNm: z.number().positive() });
export const decisionRule = z.discriminatedUnion("kind", [
  z.object({ kind: z.literal("simple") }),
  z.object({ kind: z.literal("guarded"), r: z.number().positive().max(3) }),
]);

/** One bar of a line strip. */
export const stripLine = z.object({
  wavelengthNm: z.number(),
  species: z.string().nullable(),
  errorNm: z.number().nullable(),
  expandedUncNm: z.number().nullable(),
  toleranceNm: z.number().nullable(),
  status: z.enum(["judged", "left-out", "refused", "not-judged", "unnamed"]),
  verdict: verdict.nullable(),
  nearLimit: z.boolean(),
  flags: z.array(z.string()),
  blend: z.boolean(),
});
export type StripLine = z.infer<typeof stripLine>;

/** A check in one line, for lists and for the instrument's rows. */
export const checkState = z.enum(["begun", "set-aside", "submitted", "returned", "approved", "void"]);
export type CheckState = z.infer<typeof checkState>;
export const checkSummary = z.object({
  id,
  number: z.string(),
  instrumentId: id,
  instrumentName: z.string(),
  configurationId: id,
  configurationName: z.string().nullable(),
  condition,
  state: checkState,
  begunAt: instant,
  begunBy: personRef,
  submittedAt: instant.nullable(),
  approvedAt: instant.nullable(),
  approvedBy: personRef.nullable(),
  attemptCount: z.number().int(),
  /** Of the submitted analysis, else of the draft's last one; null before any. */
  result: z
    .object({
      outcome: z.enum(["identified", "ambiguous", "unidentified", "refused"]),
      verdict: verdict.nullable(),
      nearLimit: z.boolean(),
      toleranceUsed: z.number().nullable(),
      /** Share of the tolerance that the worst line's guard band takes. */
      guardShare: z.number().nullable(),
      judgedCount: z.number().int(),
      lineCount: z.number().int(),
      leftOutCount: z.number().int(),
      worst: z
        .object({
          wavelengthNm: z.number(),
          species: z.string(),
          errorNm: z.number(),
          expandedUncNm: z.number(),
          toleranceNm: z.number(),
        })
        .nullable(),
      withEveryLine: z.object({ verdict, nearLimit: z.boolean(), toleranceUsed: z.number().nullable() }).nullable(),
    })
    .nullable(),
});
export type CheckSummary = z.infer<typeof checkSummary>;
