/**
 * Submitting: the maker's signature over one revision, and what its verdict causes, in one transaction.
 */
import { eq } from "drizzle-orm";
import type { z } from "zod";
import { openVerdictAlerts } from "../alerts/verdict-alerts.ts";
import type { PasswordProof } from "../auth/confirm-password.ts";
import type { Check, submitInput } from "../contract/checks.ts";
import { newId } from "../db/columns.ts";
import { checkDrafts, driftPoints, signatures, submissions } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { onlyOnce } from "../instruments/conflicts.ts";
import { lockConfiguration, findToleranceAt } from "../instruments/queries.ts";
import { findProcedure } from "../procedures/queries.ts";
import { canonicalText, sha256Hex } from "../records/canonical.ts";
import { writeTrail } from "../records/trail.ts";
import { aboutCheck, inputsHash, lockOpenDraft } from "./draft.ts";
import { placeHold } from "./hold.ts";
import {
  addContributor,
  addEvent,
  findFirstCaptureAt,
  findOptionalAnalysis,
  listAttempts,
  listCaptures,
  type AnalysisRow,
  type CheckRecord,
  type DraftRow,
} from "./queries.ts";
import { readCheck } from "./read-check.ts";
import type { CheckWork } from "./work.ts";

/** What a signature stands for, in canonical form: its SHA-256 is printed beside every signature of the revision. */
export interface SignedContent {
  check: string;
  revision: number;
  condition: string;
  configurationId: string;
  procedure: string;
  toleranceVersion: number;
  inputs: unknown;
  analysisSha256: string;
  captures: { fileName: string; part: string; sha256: string; attempt: number }[];
}

/**
 * Sign as the maker and submit.
 *
 * @param proof that the signer gave the password again
 * @throws problem "conflict" when it is submitted already or the result is older than the working copy, "stale", "unusable" without a verdict
 */
export function submitCheck(
  work: CheckWork,
  ctx: Context,
  checkId: string,
  input: Pick<z.output<typeof submitInput>, "version">,
  proof: PasswordProof,
): Promise<Check> {
  assertOwnProof(ctx, proof);
  return onlyOnce("conflict", "This check was submitted a moment ago. Nothing was signed twice; reload the page.", () =>
    inLab(work.db, ctx, async (tx) => {
      const { check, draft } = await lockOpenDraft(tx, ctx, checkId, input);
      const analysis = await findSubmittable(tx, check, draft);
      await lockConfiguration(tx, check.configurationId);
      const now = await recordNow(tx);
      const { submissionId, contentSha256 } = await insertSubmission(tx, ctx, { check, draft, analysis, now });
      const signatureId = await sign(tx, ctx, {
        checkId,
        revision: draft.revision,
        meaning: "made by",
        contentSha256,
        proof,
        selfApproval: false,
      });
      const event = await addEvent(tx, ctx, { checkId, kind: "submitted", revision: draft.revision });
      await addContributor(tx, ctx, checkId, "submitted");
      await tx
        .update(checkDrafts)
        .set({ open: false, version: draft.version + 1, savedAt: now, savedBy: ctx.personId! })
        .where(eq(checkDrafts.checkId, checkId));
      await insertDriftPoint(tx, ctx, check, draft.revision, analysis);
      const caused =
        analysis.verdict === "fail"
          ? await placeHold(tx, ctx, work, { check, analysis, cause: "submitted" })
          : await openVerdictAlerts(tx, ctx, work, {
              check,
              result: analysis.result,
              reasons: analysis.analysis.verdict?.reasons ?? [],
            });
      const reply = await readCheck(tx, ctx, check);
      await writeTrail(
        tx,
        ctx,
        {
          action: "check.submitted",
          shape: "signature",
          about: aboutCheck(check),
          after: {
            revision: draft.revision,
            meaning: "made by",
            condition: check.condition,
            verdict: analysis.verdict,
            nearLimit: analysis.nearLimit,
            toleranceUsed: analysis.result.toleranceUsed,
            withEveryLine: analysis.result.withEveryLine,
            leftOut: analysis.result.leftOutCount,
            attempts: draft.currentAttempt,
            contentSha256,
            proof: proof.kind,
          },
          rows: [
            { table: "submissions", id: submissionId },
            { table: "signatures", id: signatureId },
            { table: "analyses", id: analysis.id },
            { table: "check_events", id: event.id },
          ],
        },
        { signWith: work.signer },
      );
      if (caused.length > 0) await writeTrail(tx, asWavekeep(ctx), caused);
      return reply;
    }),
  );
}

/** The analysis of what stands in the working copy now; a result older than it is not what the signer sees. */
async function findSubmittable(tx: Tx, check: CheckRecord, draft: DraftRow): Promise<AnalysisRow> {
  const analysis = await findOptionalAnalysis(tx, { checkId: check.id, attempt: draft.currentAttempt });
  if (analysis === null)
    throw problem(
      "conflict",
      `Attempt ${draft.currentAttempt} of ${check.number} has no result yet: analyse its captures first. Nothing was signed.`,
    );
  const captures = await listCaptures(tx, check.id, draft.currentAttempt);
  const readable = captures.filter(
    (row, index) =>
      row.reading !== null &&
      captures.findIndex(
        (other) => other.capture.sha256 === row.capture.sha256 && other.capture.part === row.capture.part,
      ) === index,
  );
  const sameCaptures =
    readable.length === analysis.captureIds.length &&
    readable.every(({ capture }) => analysis.captureIds.includes(capture.id));
  if (analysis.inputsSha256 !== inputsHash(draft.inputs) || !sameCaptures) {
    throw problem(
      "conflict",
      `${check.number} was changed after its last analysis: analyse it again, look at the result, then sign. Nothing was signed.`,
    );
  }
  if (analysis.verdict === null && !isAxisFit(analysis)) {
    throw problem(
      "unusable",
      `There is no verdict to sign: ${analysis.analysis.reason ?? "no line could be judged."} Nothing is lost: begin another attempt, or set the check aside.`,
    );
  }
  return analysis;
}

/** No axis was in force, so there is no error to judge, but a new axis: that is what the check is for. */
export const isAxisFit = (analysis: Pick<AnalysisRow, "outcome" | "analysis">): boolean =>
  analysis.outcome === "identified" &&
  analysis.analysis.dispersion !== null &&
  analysis.analysis.setup.mode.kind === "range";

async function insertSubmission(
  tx: Tx,
  ctx: Context,
  { check, draft, analysis, now }: { check: CheckRecord; draft: DraftRow; analysis: AnalysisRow; now: Date },
): Promise<{ submissionId: string; contentSha256: string }> {
  const procedure = await findProcedure(tx, check.procedureId);
  const firstAt = (await findFirstCaptureAt(tx, check.id))!;
  const tolerance = await findToleranceAt(tx, check.configurationId, firstAt);
  const captures = await listCaptures(tx, check.id);
  const attempts = await listAttempts(tx, check.id);
  const content: SignedContent = {
    check: check.number,
    revision: draft.revision,
    condition: check.condition,
    configurationId: check.configurationId,
    procedure: `${procedure.code}, version ${procedure.version}`,
    toleranceVersion: tolerance.version,
    inputs: draft.inputs,
    analysisSha256: analysis.sha256,
    captures: captures.map(({ capture }) => ({
      fileName: capture.fileName,
      part: capture.part,
      sha256: capture.sha256,
      attempt: capture.attempt,
    })),
  };
  const contentSha256 = sha256Hex(canonicalText(content));
  const submissionId = newId();
  await tx.insert(submissions).values({
    labId: ctx.labId,
    id: submissionId,
    checkId: check.id,
    revision: draft.revision,
    analysisId: analysis.id,
    submittedAt: now,
    submittedBy: ctx.personId!,
    measuredAt: (await findFirstCaptureAt(tx, check.id, draft.currentAttempt))!,
    inputs: draft.inputs,
    toleranceVersion: tolerance.version,
    toleranceSegments: tolerance.segments,
    procedureVersion: procedure.version,
    attemptCount: attempts.length,
    verdict: analysis.verdict,
    nearLimit: analysis.nearLimit,
    contentSha256,
  });
  return { submissionId, contentSha256 };
}

/** Signatures keep name, role and zone as they were. */
export async function sign(
  tx: Tx,
  ctx: Context,
  signature: {
    checkId: string;
    revision: number;
    meaning: "made by" | "reviewed and approved";
    contentSha256: string;
    proof: PasswordProof;
    selfApproval: boolean;
  },
): Promise<string> {
  const id = newId();
  await tx.insert(signatures).values({
    labId: ctx.labId,
    id,
    checkId: signature.checkId,
    revision: signature.revision,
    meaning: signature.meaning,
    personId: ctx.personId!,
    printedName: ctx.personName,
    role: ctx.actingRole,
    signedAt: await recordNow(tx),
    zone: ctx.zone,
    contentSha256: signature.contentSha256,
    proof: signature.proof.kind,
    selfApproval: signature.selfApproval,
  });
  return id;
}

/** A proof is good for the person who gave it. */
export function assertOwnProof(ctx: Context, proof: PasswordProof): void {
  if (ctx.personId === null || proof.personId !== ctx.personId)
    throw problem("not-allowed", "This password was confirmed by somebody else. Nothing was signed.");
}

async function insertDriftPoint(
  tx: Tx,
  ctx: Context,
  check: CheckRecord,
  revision: number,
  analysis: AnalysisRow,
): Promise<void> {
  const point = analysis.analysis.driftPoint;
  if (point === null) return;
  await tx.insert(driftPoints).values({
    labId: ctx.labId,
    checkId: check.id,
    revision,
    configurationId: check.configurationId,
    measuredAt: (await findFirstCaptureAt(tx, check.id, analysis.attempt))!,
    coreVersion: analysis.coreVersion,
    midNm: point.midNm,
    rangeNm: point.rangeNm,
    midErrorNm: point.midErrorNm,
    midErrorUncNm: point.midErrorUncNm,
    scaleErrorNm: point.scaleErrorNm,
    scaleErrorUncNm: point.scaleErrorUncNm,
    covarianceNm2: point.covarianceNm2,
    largestErrorNm: point.largestErrorNm,
    largestErrorUncNm: point.largestErrorUncNm,
    largestAtNm: point.largestAtNm,
  });
}
