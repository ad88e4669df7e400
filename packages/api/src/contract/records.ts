/** The trail as people read it, and the state of its chain. */
import { z } from "zod";
import { date, id, instant, page, pageQuery } from "./common.ts";

export const entryShape = z.enum(["person", "wavekeep", "signature", "amendment", "out-of-tolerance"]);
export const trailEntry = z.object({
  number: z.number().int(),
  at: instant,
  shape: entryShape,
  action: z.string(),
  actor: z.string(),
  actorRole: z.string().nullable(),
  /** The sentence without the actor's name, which stands strong before it. */
  sentence: z.string(),
  about: z.object({ label: z.string(), to: z.string().nullable() }).nullable(),
  hash: z.string(),
  previousHash: z.string(),
  before: z.record(z.string(), z.unknown()).nullable(),
  after: z.record(z.string(), z.unknown()).nullable(),
  why: z.string().nullable(),
  demo: z.boolean(),
});
export type TrailEntry = z.infer<typeof trailEntry>;
export const trailQuery = pageQuery.extend({
  personId: id.optional(),
  instrumentId: id.optional(),
  checkId: id.optional(),
  kind: z.string().max(60).optional(),
  fromOn: date.optional(),
  toOn: date.optional(),
});
export const trailReply = page(trailEntry);
export const chainState = z.object({
  whole: z.boolean(),
  sentence: z.string(),
  entryCount: z.number().int(),
  checkedAt: instant,
  firstAt: instant.nullable(),
  lastAt: instant.nullable(),
  signatureCount: z.number().int(),
  signaturesValid: z.boolean(),
  attemptCount: z.number().int(),
  checkCount: z.number().int(),
  head: z.string(),
  headSignedAt: instant.nullable(),
  keyFingerprint: z.string(),
  /** Where it breaks: number and what is wrong. */
  breaks: z.array(z.object({ number: z.number().int(), what: z.string() })),
});
export type ChainState = z.infer<typeof chainState>;
export const trailDaysReply = z.object({
  days: z.array(z.object({ on: date, count: z.number().int() })),
  kinds: z.array(z.string()),
});
