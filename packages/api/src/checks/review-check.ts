/** Reviewing a submitted check: send it back with comments, approve it with a signature, take note of it as the owner. */
import { eq, sql } from "drizzle-orm";
import type { z } from "zod";
import { closeProvenAlerts } from "../alerts/verdict-alerts.ts";
import type { PasswordProof } from "../auth/confirm-password.ts";
import { adoptFirstAxis } from "../axes/adopt.ts";
import type { acknowledgeCheckInput, approveInput, Check, returnInput } from "../contract/checks.ts";
import { checkDrafts, configurations } from "../db/schema/index.ts";
import { asWavekeep, hasRole, inLab, ownsInstrument, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { aboutConfiguration } from "../instruments/configurations.ts";
import { onlyOnce } from "../instruments/conflicts.ts";
import { addDays, dateIn } from "../instruments/dates.ts";
import { findInstrument, lockConfiguration } from "../instruments/queries.ts";
import { queueMail } from "../mail/outbox.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";
import { ensureReport } from "../records/report-store.ts";
import { approveRefusal } from "./approval.ts";
import { aboutCheck } from "./draft.ts";
import { endHold } from "./hold.ts";
import {
  addEvent,
  findCheck,
  findOptionalSubmission,
  findState,
  isContributor,
  lockDraft,
  type CheckRecord,
  type SubmissionRow,
} from "./queries.ts";
import { readCheck } from "./read-check.ts";
import { assertOwnProof, sign } from "./submit-check.ts";
import { verdictText } from "./words.ts";
import type { CheckWork } from "./work.ts";

const decidedAlready =
  "Somebody else decided on this check a moment ago. Nothing of yours was stored; reload the page to see what was decided.";

export function returnCheck(
  work: Pick<CheckWork, "db" | "jobs" | "config">,
  ctx: Context,
  checkId: string,
  input: z.output<typeof returnInput>,
): Promise<Check> {
  return onlyOnce("conflict", decidedAlready, () =>
    inLab(work.db, ctx, async (tx) => {
      const { check, submission } = await lockSubmitted(tx, checkId, input.revision);
      const event = await addEvent(tx, ctx, {
        checkId,
        kind: "returned",
        revision: submission.revision,
        comment: input.comment,
      });
      await tx
        .update(checkDrafts)
        .set({ open: true, revision: submission.revision + 1, version: sql`${checkDrafts.version} + 1` })
        .where(eq(checkDrafts.checkId, checkId));
      await queueMail(tx, ctx, work.jobs, {
        to: { personId: submission.submittedBy },
        subject: `${check.number} was sent back`,
        text: `${ctx.personName} sent ${check.number} back:\n\n${input.comment}\n\nIts captures and results are kept; change what is asked for, analyse and submit again.\n\n${work.config.publicUrl}/checks/${checkId}\n`,
        causeKey: `returned:${checkId}:${submission.revision}`,
      });
      const reply = await readCheck(tx, ctx, check);
      await writeTrail(tx, ctx, {
        action: "check.returned",
        about: aboutCheck(check),
        after: { revision: submission.revision },
        why: input.comment,
        rows: [{ table: "check_events", id: event.id }],
      });
      return reply;
    }),
  );
}

/**
 * Sign as the reviewer. The record is locked from here on, the report is made once, what the check proves takes effect.
 *
 * @throws problem "conflict" when it was decided already (a double click, or a colleague at the same moment), "not-allowed" for own work
 */
export async function approveCheck(
  work: CheckWork,
  ctx: Context,
  checkId: string,
  input: Pick<z.output<typeof approveInput>, "revision" | "seen">,
  proof: PasswordProof,
): Promise<Check> {
  assertOwnProof(ctx, proof);
  await onlyOnce("conflict", decidedAlready, () =>
    inLab(work.db, ctx, async (tx) => {
      const { check, submission } = await lockSubmitted(tx, checkId, input.revision);
      const selfApproval = await assertMayApprove(tx, ctx, check);
      await lockConfiguration(tx, check.configurationId);
      const signatureId = await sign(tx, ctx, {
        checkId,
        revision: submission.revision,
        meaning: "reviewed and approved",
        contentSha256: submission.contentSha256,
        proof,
        selfApproval,
      });
      const event = await addEvent(tx, ctx, { checkId, kind: "approved", revision: submission.revision });
      const caused = await takeEffect(tx, ctx, check, submission);
      await writeTrail(
        tx,
        ctx,
        {
          action: "check.approved",
          shape: "signature",
          about: aboutCheck(check),
          after: {
            revision: submission.revision,
            meaning: "reviewed and approved",
            verdict: submission.verdict,
            nearLimit: submission.nearLimit,
            contentSha256: submission.contentSha256,
            seen: Object.keys(input.seen),
            selfApproval,
            proof: proof.kind,
          },
          rows: [
            { table: "signatures", id: signatureId },
            { table: "check_events", id: event.id },
            { table: "submissions", id: submission.id },
          ],
        },
        { signWith: work.signer },
      );
      if (caused.length > 0) await writeTrail(tx, asWavekeep(ctx), caused);
    }),
  );
  await ensureReport(work, ctx, checkId);
  return inLab(work.db, ctx, (tx) => readCheck(tx, ctx, checkId));
}

/** Holds end, the next due date moves on, alerts close: what a passing check proves once it is approved. */
async function takeEffect(tx: Tx, ctx: Context, check: CheckRecord, submission: SubmissionRow): Promise<TrailInput[]> {
  const configuration = await lockConfiguration(tx, check.configurationId);
  const { instrument } = await findInstrument(tx, check.instrumentId);
  if (submission.verdict === null) return adoptFirstAxis(tx, ctx, { check, submission, configuration, instrument });
  if (submission.verdict !== "pass") return [];
  const entries: TrailInput[] = [];
  if (check.condition === "as-left") entries.push(...(await endHold(tx, ctx, check)));
  const today = dateIn(ctx.zone, await recordNow(tx));
  const dueOn = addDays(dateIn(ctx.zone, submission.measuredAt), configuration.intervalDays);
  // An older check approved late does not pull a later due date back.
  const dueMoved = configuration.toOn === null && (configuration.dueOn === null || dueOn > configuration.dueOn);
  if (dueMoved) {
    await tx
      .update(configurations)
      .set({ dueOn, version: sql`${configurations.version} + 1` })
      .where(eq(configurations.id, configuration.id));
    entries.push({
      action: "due.moved",
      about: { ...aboutConfiguration(configuration, instrument), checkId: check.id },
      before: { dueOn: configuration.dueOn },
      after: { dueOn },
      why: `${check.number} is approved; the interval is ${configuration.intervalDays} days`,
    });
  }
  const notOverdue = (dueMoved ? dueOn : (configuration.dueOn ?? dueOn)) >= today;
  entries.push(...(await closeProvenAlerts(tx, check, submission, { dueMoved: notOverdue })));
  return entries;
}

/**
 * Nobody approves what they had a part in, unless the lab has switched self-approval on; then the signature says so.
 *
 * @returns whether it is a self-approval
 */
async function assertMayApprove(tx: Tx, ctx: Context, check: CheckRecord): Promise<boolean> {
  const refusal = await approveRefusal(tx, ctx, check.id);
  if (refusal !== null) throw problem("not-allowed", `${refusal} Nothing was signed.`);
  return isContributor(tx, check.id, ctx.personId!);
}

async function lockSubmitted(
  tx: Tx,
  checkId: string,
  revision: number,
): Promise<{ check: CheckRecord; submission: SubmissionRow }> {
  const check = await findCheck(tx, checkId);
  await lockDraft(tx, checkId);
  const state = await findState(tx, checkId);
  const submission = await findOptionalSubmission(tx, checkId);
  if (state === "approved")
    throw problem("conflict", `${check.number} is approved already; its record is locked. Nothing was changed.`);
  if (state !== "submitted" || submission === null)
    throw problem("conflict", `${check.number} is not submitted now, so there is nothing to decide. Reload the page.`);
  if (submission.revision !== revision) {
    throw problem(
      "stale",
      `${check.number} was submitted anew as revision ${submission.revision} while you looked at revision ${revision}. Nothing was signed; reload and review the new one.`,
    );
  }
  return { check, submission };
}

/** The owner takes note; a manager may do it for the owner, and the trail says so. */
export function acknowledgeCheck(
  work: Pick<CheckWork, "db">,
  ctx: Context,
  checkId: string,
  input: z.output<typeof acknowledgeCheckInput>,
): Promise<Check> {
  return inLab(work.db, ctx, async (tx) => {
    const check = await findCheck(tx, checkId);
    await lockDraft(tx, checkId);
    const submission = await findOptionalSubmission(tx, checkId);
    if (submission === null)
      throw problem("conflict", `${check.number} is not submitted yet; there is nothing to take note of.`);
    const { instrument } = await findInstrument(tx, check.instrumentId);
    const forOwner = !ownsInstrument(ctx, instrument.id);
    if (forOwner && !hasRole(ctx, "manager"))
      throw problem(
        "not-allowed",
        `${instrument.name} belongs to somebody else; its owner or a lab manager takes note.`,
      );
    const event = await addEvent(tx, ctx, {
      checkId,
      kind: "acknowledged",
      revision: submission.revision,
      comment: input.note,
    });
    const reply = await readCheck(tx, ctx, check);
    await writeTrail(tx, ctx, {
      action: "check.acknowledged",
      about: aboutCheck(check),
      after: {
        forOwner,
        verdict: verdictText(submission.verdict as "pass" | "inconclusive" | "fail" | null, submission.nearLimit),
      },
      why: input.note,
      rows: [{ table: "check_events", id: event.id }],
    });
    return reply;
  });
}
