/** The working copy of a check: kept as one types, a new attempt, set aside. */
import { eq, inArray } from "drizzle-orm";
import type { z } from "zod";
import type { Check, DraftInput, newAttemptInput, setAsideInput } from "../contract/checks.ts";
import { checkAttempts, checkDrafts, sources, type StoredDraft } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import type { Database } from "../db/connection.ts";
import { problem } from "../http/problem.ts";
import { clockText } from "../instruments/dates.ts";
import { findOptionalMember } from "../instruments/queries.ts";
import { canonicalText, sha256Hex } from "../records/canonical.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";
import type { HoldWork } from "./work.ts";
import { placeHold } from "./hold.ts";
import { leaveOutProblem } from "./leave-out.ts";
import {
  addContributor,
  addEvent,
  findCheck,
  findOptionalAnalysis,
  findState,
  lockDraft,
  type CheckRecord,
  type DraftRow,
} from "./queries.ts";
import { readCheck } from "./read-check.ts";

/** SHA-256 of a working copy in canonical form: says whether an analysis was made from it. */
export const inputsHash = (inputs: StoredDraft): string => sha256Hex(canonicalText(inputs));

export const aboutCheck = (check: CheckRecord): TrailInput["about"] => ({
  kind: "check",
  id: check.id,
  label: check.number,
  instrumentId: check.instrumentId,
  checkId: check.id,
});

/** Lock a working copy that may be changed, for a form on its newest state. @throws problem "conflict" or "stale" */
export async function lockOpenDraft(
  tx: Tx,
  ctx: Context,
  checkId: string,
  sent?: { version: number },
): Promise<{ check: CheckRecord; draft: DraftRow }> {
  const check = await findCheck(tx, checkId);
  const draft = await lockDraft(tx, checkId);
  if (!draft.open)
    throw problem(
      "conflict",
      `${check.number} is submitted and can't be changed. Nothing was stored; a reviewer can send it back.`,
    );
  if (sent !== undefined && sent.version !== draft.version) {
    const who =
      draft.savedBy === ctx.personId
        ? "you, in another window,"
        : ((await findOptionalMember(tx, draft.savedBy))?.name ?? "somebody else");
    throw problem(
      "stale",
      `${check.number} was changed by ${who} at ${clockText(ctx.zone, draft.savedAt)} while this page was open. Nothing was stored and what you typed is still in the form: reload and compare.`,
    );
  }
  return { check, draft };
}

/** Keep what is typed. No trail entry a keystroke: what a result used is kept with each analysis. */
export function saveDraft(db: Database, ctx: Context, checkId: string, input: DraftInput): Promise<Check> {
  return inLab(db, ctx, async (tx) => {
    const { check, draft } = await lockOpenDraft(tx, ctx, checkId, input);
    const { version: _, ...inputs } = input;
    await assertSourcesInUse(tx, inputs.sourceIds);
    await assertLeaveOutsSeen(tx, check, draft, inputs);
    if (inputsHash(inputs) !== inputsHash(draft.inputs)) {
      await tx
        .update(checkDrafts)
        .set({ inputs, version: draft.version + 1, savedAt: await recordNow(tx), savedBy: ctx.personId! })
        .where(eq(checkDrafts.checkId, checkId));
      await addContributor(tx, ctx, checkId, "edited");
      if (inputs.leftOut.length > draft.inputs.leftOut.length) await addContributor(tx, ctx, checkId, "left-out");
    }
    return readCheck(tx, ctx, check);
  });
}

async function assertSourcesInUse(tx: Tx, ids: readonly string[]): Promise<void> {
  if (ids.length === 0) return;
  const rows = await tx
    .select({ id: sources.id, label: sources.label, retiredAt: sources.retiredAt })
    .from(sources)
    .where(inArray(sources.id, [...ids]));
  const retired = rows.find((row) => row.retiredAt !== null);
  const message =
    rows.length < new Set(ids).size
      ? "One of the sources is not in this lab."
      : retired === undefined
        ? null
        : `Source ${retired.label} is retired; choose another.`;
  if (message !== null)
    throw problem("invalid-input", `${message} Nothing was stored.`, { fields: [{ path: "sourceIds", message }] });
}

/** Leave-outs that are new must be seen in the attempt's last analysis. */
async function assertLeaveOutsSeen(tx: Tx, check: CheckRecord, draft: DraftRow, inputs: StoredDraft): Promise<void> {
  const known = new Set(draft.inputs.leftOut.map((left) => `${left.wavelengthNm} ${left.reason}`));
  const added = inputs.leftOut
    .map((left, index) => ({ left, index }))
    .filter(({ left }) => !known.has(`${left.wavelengthNm} ${left.reason}`));
  if (added.length === 0) return;
  const row = await findOptionalAnalysis(tx, { checkId: check.id, attempt: draft.currentAttempt });
  const fields = added.flatMap(({ left, index }) => {
    const message = leaveOutProblem(row?.analysis ?? null, left);
    return message === null ? [] : [{ path: `leftOut.${index}.reason`, message }];
  });
  if (fields.length > 0) throw problem("unusable", `${fields[0]!.message} Nothing was stored.`, { fields });
}

/** Abandon the attempt, which stays in the list, and begin the next. */
export function newAttempt(
  db: Database,
  ctx: Context,
  checkId: string,
  input: z.output<typeof newAttemptInput>,
): Promise<Check> {
  return inLab(db, ctx, async (tx) => {
    const { check, draft } = await lockOpenDraft(tx, ctx, checkId, input);
    const number = draft.currentAttempt + 1;
    const now = await recordNow(tx);
    await tx
      .insert(checkAttempts)
      .values({ labId: ctx.labId, checkId, number, startedAt: now, startedBy: ctx.personId!, reason: input.reason });
    await tx
      .update(checkDrafts)
      // What was seen in one attempt's data says nothing about the next one's.
      .set({
        currentAttempt: number,
        inputs: { ...draft.inputs, leftOut: [] },
        version: draft.version + 1,
        savedAt: now,
        savedBy: ctx.personId!,
      })
      .where(eq(checkDrafts.checkId, checkId));
    await addContributor(tx, ctx, checkId, "edited");
    if ((await findState(tx, checkId)) === "set-aside")
      await addEvent(tx, ctx, { checkId, kind: "resumed", revision: draft.revision });
    const reply = await readCheck(tx, ctx, check);
    await writeTrail(tx, ctx, {
      action: "attempt.begun",
      about: aboutCheck(check),
      before: { attempt: draft.currentAttempt },
      after: { attempt: number },
      why: input.reason,
    });
    return reply;
  });
}

/** Set a draft aside. One whose last verdict is *fail* puts the configuration on hold all the same. */
export function setAside(
  work: HoldWork & { db: Database },
  ctx: Context,
  checkId: string,
  input: z.output<typeof setAsideInput>,
): Promise<Check> {
  return inLab(work.db, ctx, async (tx) => {
    const { check, draft } = await lockOpenDraft(tx, ctx, checkId, input);
    if ((await findState(tx, checkId)) === "set-aside")
      throw problem("conflict", `${check.number} is set aside already.`);
    return setAsideLocked(tx, ctx, work, check, draft, input.reason);
  });
}

/** The deed itself, also done by Wavekeep for a failing draft left for a day. */
export async function setAsideLocked(
  tx: Tx,
  ctx: Context,
  work: HoldWork,
  check: CheckRecord,
  draft: DraftRow,
  reason: string,
): Promise<Check> {
  const event = await addEvent(tx, ctx, {
    checkId: check.id,
    kind: "set-aside",
    revision: draft.revision,
    comment: reason,
  });
  const last = await findOptionalAnalysis(tx, { checkId: check.id });
  const hold =
    last?.verdict === "fail" ? await placeHold(tx, ctx, work, { check, analysis: last, cause: "set-aside" }) : [];
  const reply = await readCheck(tx, ctx, check);
  await writeTrail(tx, ctx, {
    action: "check.set-aside",
    about: aboutCheck(check),
    after: { attempt: draft.currentAttempt, verdict: last?.verdict ?? null },
    why: reason,
    rows: [{ table: "check_events", id: event.id }],
  });
  if (hold.length > 0) await writeTrail(tx, asWavekeep(ctx), hold);
  return reply;
}
