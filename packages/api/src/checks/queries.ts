/** Checks, their working copies, attempts, events, analyses and signatures: SQL only. */
import { and, asc, desc, eq, max, ne, sql } from "drizzle-orm";
import type { CheckState } from "../contract/common.ts";
import { newId } from "../db/columns.ts";
import {
  analyses,
  analysisDrawings,
  captureReadings,
  captures,
  checkAttempts,
  checkContributors,
  checkDrafts,
  checkEvents,
  checks,
  people,
  reports,
  signatures,
  submissions,
} from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";
import { stateOf } from "./list-checks.ts";

export type CheckRecord = typeof checks.$inferSelect;
export type DraftRow = typeof checkDrafts.$inferSelect;
export type EventRow = typeof checkEvents.$inferSelect;
export type AnalysisRow = typeof analyses.$inferSelect;
export type SubmissionRow = typeof submissions.$inferSelect;
export type SignatureRow = typeof signatures.$inferSelect;
export type CaptureRow = typeof captures.$inferSelect;

/** @throws problem "not-found" */
export async function findCheck(tx: Tx, checkId: string): Promise<CheckRecord> {
  const [row] = await tx.select().from(checks).where(eq(checks.id, checkId));
  if (row === undefined) throw notFound("This check");
  return row;
}

export async function findDraft(tx: Tx, checkId: string): Promise<DraftRow> {
  const [row] = await tx.select().from(checkDrafts).where(eq(checkDrafts.checkId, checkId));
  if (row === undefined) throw notFound("This check");
  return row;
}

/** The working copy, held until the transaction ends: everything that moves a check waits here for its turn. */
export async function lockDraft(tx: Tx, checkId: string): Promise<DraftRow> {
  const [row] = await tx.select().from(checkDrafts).where(eq(checkDrafts.checkId, checkId)).for("update");
  if (row === undefined) throw notFound("This check");
  return row;
}

/** State by the last event that moved the check. */
export async function findState(tx: Tx, checkId: string): Promise<CheckState> {
  const [row] = await tx
    .select({ kind: checkEvents.kind })
    .from(checkEvents)
    .where(and(eq(checkEvents.checkId, checkId), ne(checkEvents.kind, "acknowledged")))
    .orderBy(desc(checkEvents.sequence))
    .limit(1);
  if (row === undefined) throw notFound("This check");
  return stateOf(row.kind);
}

export function listEvents(tx: Tx, checkId: string): Promise<{ event: EventRow; name: string | null }[]> {
  return tx
    .select({ event: checkEvents, name: people.name })
    .from(checkEvents)
    .leftJoin(people, eq(people.id, checkEvents.byId))
    .where(eq(checkEvents.checkId, checkId))
    .orderBy(asc(checkEvents.sequence));
}

/** Add an event to a check whose working copy is held. */
export async function addEvent(
  tx: Tx,
  ctx: Context,
  event: { checkId: string; kind: EventRow["kind"]; revision: number; comment?: string | null },
): Promise<{ id: string; at: Date }> {
  const [last] = await tx
    .select({ sequence: max(checkEvents.sequence) })
    .from(checkEvents)
    .where(eq(checkEvents.checkId, event.checkId));
  const id = newId();
  const at = await recordNow(tx);
  await tx.insert(checkEvents).values({
    labId: ctx.labId,
    id,
    checkId: event.checkId,
    sequence: (last?.sequence ?? 0) + 1,
    kind: event.kind,
    revision: event.revision,
    at,
    byId: ctx.personId,
    comment: event.comment ?? null,
  });
  return { id, at };
}

export async function addContributor(
  tx: Tx,
  ctx: Context,
  checkId: string,
  part: (typeof checkContributors.$inferSelect)["part"],
): Promise<void> {
  if (ctx.personId === null) return;
  await tx
    .insert(checkContributors)
    .values({ labId: ctx.labId, checkId, personId: ctx.personId, part, since: await recordNow(tx) })
    .onConflictDoNothing();
}

export function listContributors(tx: Tx, checkId: string): Promise<{ id: string; name: string }[]> {
  return tx
    .selectDistinct({ id: checkContributors.personId, name: people.name })
    .from(checkContributors)
    .innerJoin(people, eq(people.id, checkContributors.personId))
    .where(eq(checkContributors.checkId, checkId))
    .orderBy(asc(people.name));
}

export async function isContributor(tx: Tx, checkId: string, personId: string): Promise<boolean> {
  const [row] = await tx
    .select({ part: checkContributors.part })
    .from(checkContributors)
    .where(and(eq(checkContributors.checkId, checkId), eq(checkContributors.personId, personId)))
    .limit(1);
  return row !== undefined;
}

export function listAttempts(tx: Tx, checkId: string): Promise<(typeof checkAttempts.$inferSelect)[]> {
  return tx.select().from(checkAttempts).where(eq(checkAttempts.checkId, checkId)).orderBy(asc(checkAttempts.number));
}

export interface CaptureWithMore {
  capture: CaptureRow;
  receiverName: string;
  reading: (typeof captureReadings.$inferSelect)["reading"];
  refusal: string | null;
  readWith: string | null;
}

/** Captures of a check in the order they came, with what was read in them last. */
export async function listCaptures(tx: Tx, checkId: string, attempt?: number): Promise<CaptureWithMore[]> {
  const newest = tx
    .select({
      reading: captureReadings.reading,
      refusal: captureReadings.refusal,
      coreVersion: captureReadings.coreVersion,
    })
    .from(captureReadings)
    .where(and(eq(captureReadings.labId, captures.labId), eq(captureReadings.captureId, captures.id)))
    .orderBy(desc(captureReadings.readAt))
    .limit(1)
    .as("newest");
  return tx
    .select({
      capture: captures,
      receiverName: people.name,
      reading: newest.reading,
      refusal: newest.refusal,
      readWith: newest.coreVersion,
    })
    .from(captures)
    .innerJoin(people, eq(people.id, captures.receivedBy))
    .leftJoinLateral(newest, sql`true`)
    .where(and(eq(captures.checkId, checkId), attempt === undefined ? undefined : eq(captures.attempt, attempt)))
    .orderBy(asc(captures.position));
}

/** When the check's first capture arrived: the instant whose tolerance judges it; null before any. */
export async function findFirstCaptureAt(tx: Tx, checkId: string, attempt?: number): Promise<Date | null> {
  const [row] = await tx
    .select({ at: captures.receivedAt })
    .from(captures)
    .where(and(eq(captures.checkId, checkId), attempt === undefined ? undefined : eq(captures.attempt, attempt)))
    .orderBy(asc(captures.receivedAt), asc(captures.position))
    .limit(1);
  return row?.at ?? null;
}

/** Analyses without their bodies, oldest first. */
export function listAnalysisVersions(
  tx: Tx,
  checkId: string,
): Promise<
  {
    id: string;
    version: number;
    attempt: number;
    madeAt: Date;
    madeBy: string;
    madeByName: string;
    coreVersion: string;
    sha256: string;
    changed: string;
    verdict: string | null;
    outcome: string;
  }[]
> {
  return tx
    .select({
      id: analyses.id,
      version: analyses.version,
      attempt: analyses.attempt,
      madeAt: analyses.madeAt,
      madeBy: analyses.madeBy,
      madeByName: people.name,
      coreVersion: analyses.coreVersion,
      sha256: analyses.sha256,
      changed: analyses.changed,
      verdict: analyses.verdict,
      outcome: analyses.outcome,
    })
    .from(analyses)
    .innerJoin(people, eq(people.id, analyses.madeBy))
    .where(eq(analyses.checkId, checkId))
    .orderBy(asc(analyses.version));
}

export async function findOptionalAnalysis(
  tx: Tx,
  by: { id: string } | { checkId: string; attempt?: number },
): Promise<AnalysisRow | null> {
  const [row] = await tx
    .select()
    .from(analyses)
    .where(
      "id" in by
        ? eq(analyses.id, by.id)
        : and(
            eq(analyses.checkId, by.checkId),
            by.attempt === undefined ? undefined : eq(analyses.attempt, by.attempt),
          ),
    )
    .orderBy(desc(analyses.version))
    .limit(1);
  return row ?? null;
}

/** @throws problem "not-found" */
export async function findDrawing(
  tx: Tx,
  checkId: string,
  version: number,
): Promise<(typeof analysisDrawings.$inferSelect)["drawing"]> {
  const [row] = await tx
    .select({ drawing: analysisDrawings.drawing })
    .from(analysisDrawings)
    .innerJoin(analyses, and(eq(analyses.labId, analysisDrawings.labId), eq(analyses.id, analysisDrawings.analysisId)))
    .where(and(eq(analyses.checkId, checkId), eq(analyses.version, version)));
  if (row === undefined) throw notFound("A drawing of this analysis");
  return row.drawing;
}

export async function findOptionalSubmission(
  tx: Tx,
  checkId: string,
  revision?: number,
): Promise<SubmissionRow | null> {
  const [row] = await tx
    .select()
    .from(submissions)
    .where(
      and(eq(submissions.checkId, checkId), revision === undefined ? undefined : eq(submissions.revision, revision)),
    )
    .orderBy(desc(submissions.revision))
    .limit(1);
  return row ?? null;
}

export function listSignatures(tx: Tx, checkId: string): Promise<SignatureRow[]> {
  return tx
    .select()
    .from(signatures)
    .where(eq(signatures.checkId, checkId))
    .orderBy(asc(signatures.signedAt), asc(signatures.revision));
}

export async function findOptionalReport(tx: Tx, checkId: string): Promise<typeof reports.$inferSelect | null> {
  const [row] = await tx.select().from(reports).where(eq(reports.checkId, checkId));
  return row ?? null;
}

/** What a check's page says of its report, without the bytes. */
export async function findOptionalReportHead(
  tx: Tx,
  checkId: string,
): Promise<Pick<typeof reports.$inferSelect, "number" | "sha256" | "madeAt"> | null> {
  const { number, sha256, madeAt } = reports;
  const [row] = await tx.select({ number, sha256, madeAt }).from(reports).where(eq(reports.checkId, checkId));
  return row ?? null;
}

export function listFollowers(tx: Tx, checkId: string): Promise<{ id: string; number: string }[]> {
  return tx
    .select({ id: checks.id, number: checks.number })
    .from(checks)
    .where(eq(checks.followsCheckId, checkId))
    .orderBy(asc(checks.begunAt));
}
