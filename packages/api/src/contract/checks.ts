/** A check from its first capture to its approval. */
import { z } from "zod";
import type { Analysis, SpectrumDrawing } from "@wavekeep/core";
import {
  checkState,
  checkSummary,
  condition,
  id,
  instant,
  note,
  page,
  pageQuery,
  personRef,
  reason,
  toleranceSegment,
  version,
} from "./common.ts";

/** The core's own shapes pass through as they are: validated where they are made, typed here. */
export const analysisShape = z.custom<Analysis>(
  (value) => typeof value === "object" && value !== null && "outcome" in value,
);
export const drawingShape = z.custom<SpectrumDrawing>(
  (value) => typeof value === "object" && value !== null && "counts" in value,
);

export const beginCheckInput = z.object({ configurationId: id, condition, followsCheckId: id.nullable() });
export const leaveOutReason = z.enum(["saturated", "blended", "spike", "too-weak", "disturbed"]);
export const leftOutLine = z.object({
  wavelengthNm: z.number(),
  reason: leaveOutReason,
  note: z.string().trim().min(3, "Say what is seen in the data.").max(1000),
});

/** Working copy, kept as one types; updatable until the check is submitted. */
export const draftInput = z.object({
  sourceIds: z.array(id).max(8),
  minutesSinceSwitchOn: z.number().min(0).max(100_000).nullable(),
  temperatureC: z.number().min(-40).max(80).nullable(),
  pressureHpa: z.number().min(500).max(1100).nullable(),
  relativeHumidity: z.number().min(0).max(1).nullable(),
  fullScaleCounts: z.number().positive().nullable(),
  /** How a pixel capture is named: by the axis in force, a range typed in, or the lamp's elements alone. */
  mode: z.enum(["earlier-axis", "range", "none"]),
  rangeFirstNm: z.number().nullable(),
  rangeLastNm: z.number().nullable(),
  leftOut: z.array(leftOutLine).max(200),
  note,
  version,
});
export type DraftInput = z.infer<typeof draftInput>;

export const captureReceipt = z.object({
  id,
  attempt: z.number().int(),
  fileName: z.string(),
  sizeBytes: z.number().int(),
  sha256: z.string(),
  receivedAt: instant,
  receivedBy: personRef,
  part: z.enum(["lamp", "dark"]),
  trailNumber: z.number().int(),
  /** Bytes already stored: named with the check that used them first (may be this one). */
  seenBefore: z.object({ checkNumber: z.string(), fileName: z.string(), receivedAt: instant }).nullable(),
  /** As read by the core; null with a reason when it could not be read (it is stored all the same). */
  reading: z
    .object({
      rows: z.number().int(),
      columns: z.array(z.string()),
      axisColumn: z.number().int().nullable(),
      intensityColumn: z.number().int(),
      axisKind: z.string(),
      axisUnit: z.string(),
      first: z.number(),
      last: z.number(),
      remarks: z.array(z.string()),
      delimiter: z.string(),
      decimal: z.string(),
      metadata: z.record(z.string(), z.string()),
      firstRows: z.array(z.array(z.string())),
    })
    .nullable(),
  refusal: z.string().nullable(),
});
export type CaptureReceipt = z.infer<typeof captureReceipt>;
/** multipart/form-data: field `files` (one or more) and `part`. */
export const uploadReply = z.object({ captures: z.array(captureReceipt), attempt: z.number().int() });

export const attempt = z.object({
  number: z.number().int(),
  startedAt: instant,
  captures: z.array(captureReceipt),
  abandoned: z.boolean(),
  /** Verdict of its last analysis. */
  verdict: z.enum(["pass", "inconclusive", "fail"]).nullable(),
  outcome: z.string().nullable(),
  analysisCount: z.number().int(),
  note: z.string(),
});
export const newAttemptInput = z.object({ reason, version });
export const analyseInput = z.object({ version });

export const analysisVersion = z.object({
  version: z.number().int(),
  attempt: z.number().int(),
  madeAt: instant,
  madeBy: personRef,
  coreVersion: z.string(),
  sha256: z.string(),
  changed: z.string(),
});

export const signature = z.object({
  id,
  printedName: z.string(),
  role: z.string(),
  meaning: z.enum(["made by", "reviewed and approved"]),
  signedAt: instant,
  zone: z.string(),
  contentSha256: z.string(),
});
export const checkEvent = z.object({
  id,
  kind: z.enum(["begun", "set-aside", "resumed", "submitted", "returned", "approved", "acknowledged", "void"]),
  at: instant,
  by: personRef,
  comment: z.string().nullable(),
  revision: z.number().int(),
});

export const check = z.object({
  summary: checkSummary,
  state: checkState,
  revision: z.number().int(),
  procedure: z.object({
    id,
    code: z.string(),
    version: z.number().int(),
    title: z.string(),
    warmUpMinutes: z.number().int(),
    repeats: z.number().int(),
  }),
  draft: draftInput,
  tolerance: z.object({ version: z.number().int(), segments: z.array(toleranceSegment), changedSince: z.boolean() }),
  axisInForce: z.object({ number: z.number().int(), degree: z.number().int(), inForceFrom: instant }).nullable(),
  /** What became, or can become, of the axis this check fitted. */
  fittedAxis: z
    .object({
      /** The number under which it was put in force. */
      adopted: z.object({ number: z.number().int(), inForceFrom: instant, by: personRef }).nullable(),
      /** It can be put in force now, as this number, in place of the one in force. */
      next: z
        .object({ number: z.number().int(), replaces: z.number().int().nullable(), configurationVersion: version })
        .nullable(),
    })
    .nullable(),
  sources: z.array(
    z.object({ id, label: z.string(), name: z.string(), reviewDueOn: z.string().nullable(), pastReview: z.boolean() }),
  ),
  attempts: z.array(attempt),
  currentAttempt: z.number().int(),
  analysis: analysisShape.nullable(),
  analysisVersion: analysisVersion.nullable(),
  analyses: z.array(analysisVersion),
  events: z.array(checkEvent),
  signatures: z.array(signature),
  contributors: z.array(personRef),
  follows: z.object({ id, number: z.string() }).nullable(),
  followedBy: z.array(z.object({ id, number: z.string() })),
  hold: z.object({ since: instant, decided: z.boolean() }).nullable(),
  impactReview: z.object({ id, number: z.string() }).nullable(),
  report: z.object({ number: z.string(), sha256: z.string(), madeAt: instant }).nullable(),
  /** What this person may do now, each with the reason when it may not be done. */
  may: z.object({
    edit: z.boolean(),
    submit: z.boolean(),
    approve: z.boolean(),
    approveRefusal: z.string().nullable(),
    return: z.boolean(),
    acknowledge: z.boolean(),
  }),
});
export type Check = z.infer<typeof check>;

export const submitInput = z.object({ password: z.string().min(1, "Write your password.").max(200), version });
export const setAsideInput = z.object({ reason, version });
export const returnInput = z.object({ comment: reason, revision: z.number().int() });
export const approveInput = z.object({
  password: z.string().min(1, "Write your password.").max(200),
  revision: z.number().int(),
  /** Each must be true: seen before the signature can be given. */
  seen: z.object({
    attempts: z.literal(true),
    leftOut: z.literal(true),
    settings: z.literal(true),
    tolerance: z.literal(true),
  }),
});
export const acknowledgeCheckInput = z.object({ note: reason });
export const checksQuery = pageQuery.extend({
  instrumentId: id.optional(),
  configurationId: id.optional(),
  state: checkState.optional(),
  verdict: z.enum(["pass", "inconclusive", "fail"]).optional(),
  personId: id.optional(),
  q: z.string().max(100).optional(),
});
export const checksReply = page(checkSummary);
