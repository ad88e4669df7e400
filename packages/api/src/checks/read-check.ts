/** One check with all that its page shows, and what this person may do with it now. */
import { inArray } from "drizzle-orm";
import { readFittedAxis } from "../axes/read-axes.ts";
import type { CaptureReceipt, Check } from "../contract/checks.ts";
import { listReceipts } from "../captures/receipts.ts";
import { sources } from "../db/schema/index.ts";
import { hasRole, ownsInstrument, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { notFound } from "../http/problem.ts";
import { dateIn } from "../instruments/dates.ts";
import {
  findAxisAt,
  findConfiguration,
  findLatestTolerance,
  findStanding,
  findToleranceAt,
  type ConfigurationRow,
} from "../instruments/queries.ts";
import { findOptionalReviewOf } from "../impact/queries.ts";
import { findProcedure } from "../procedures/queries.ts";
import { approveRefusal } from "./approval.ts";
import { holdOfCheck } from "./hold.ts";
import { listCheckRows } from "./list-checks.ts";
import {
  findCheck,
  findDraft,
  findOptionalAnalysis,
  findOptionalReportHead,
  findOptionalSubmission,
  listAnalysisVersions,
  listAttempts,
  listContributors,
  listEvents,
  listFollowers,
  listSignatures,
  type AnalysisRow,
  type CheckRecord,
  type DraftRow,
} from "./queries.ts";

/** @param of the check, or its id where nobody has read it yet @throws problem "not-found" */
export async function readCheck(tx: Tx, ctx: Context, of: CheckRecord | string): Promise<Check> {
  const record = typeof of === "string" ? await findCheck(tx, of) : of;
  const checkId = record.id;
  const [
    draft,
    [row],
    procedure,
    configuration,
    versions,
    receipts,
    attempts,
    events,
    signatures,
    contributors,
    followedBy,
    hold,
    follows,
    review,
    report,
  ] = await Promise.all([
    findDraft(tx, checkId),
    listCheckRows(tx, { checkId, limit: 1 }),
    findProcedure(tx, record.procedureId),
    findConfiguration(tx, record.configurationId),
    listAnalysisVersions(tx, checkId),
    listReceipts(tx, checkId),
    listAttempts(tx, checkId),
    listEvents(tx, checkId),
    listSignatures(tx, checkId),
    listContributors(tx, checkId),
    listFollowers(tx, checkId),
    readHold(tx, record),
    record.followsCheckId === null ? null : findCheck(tx, record.followsCheckId),
    findOptionalReviewOf(tx, checkId),
    findOptionalReportHead(tx, checkId),
  ]);
  if (row === undefined) throw notFound("This check");
  const { summary } = row;
  const [analysis, inForce, namedSources] = await Promise.all([
    findShownAnalysis(tx, record, draft),
    readInForce(tx, record, draft, receipts),
    readSources(tx, ctx, draft),
  ]);
  const shown = { check: record, configuration, state: summary.state, analysis };
  const [fittedAxis, may] = await Promise.all([readFittedAxis(tx, ctx, shown), mayNow(tx, ctx, { ...shown, draft })]);
  const presentVersion = (version: (typeof versions)[number]): Check["analyses"][number] => ({
    version: version.version,
    attempt: version.attempt,
    madeAt: version.madeAt.toISOString(),
    madeBy: { id: version.madeBy, name: version.madeByName },
    coreVersion: version.coreVersion,
    sha256: version.sha256,
    changed: version.changed,
  });
  const shownVersion = versions.find((version) => version.version === analysis?.version);
  return {
    summary,
    state: summary.state,
    revision: draft.revision,
    procedure: {
      id: procedure.id,
      code: procedure.code,
      version: procedure.version,
      title: procedure.title,
      warmUpMinutes: procedure.warmUpMinutes,
      repeats: procedure.repeats,
    },
    draft: { ...draft.inputs, version: draft.version },
    ...inForce,
    fittedAxis,
    sources: namedSources,
    attempts: presentAttempts(attempts, draft, versions, receipts),
    currentAttempt: draft.currentAttempt,
    analysis: analysis?.analysis ?? null,
    analysisVersion: shownVersion === undefined ? null : presentVersion(shownVersion),
    analyses: versions.map(presentVersion),
    events: events.map(({ event, name }) => ({
      id: event.id,
      kind: event.kind as Check["events"][number]["kind"],
      at: event.at.toISOString(),
      by: { id: event.byId ?? ctx.labId, name: name ?? "Wavekeep" },
      comment: event.comment,
      revision: event.revision,
    })),
    signatures: signatures.map((signature) => ({
      id: signature.id,
      printedName: signature.printedName,
      role: signature.role,
      meaning: signature.meaning as Check["signatures"][number]["meaning"],
      signedAt: signature.signedAt.toISOString(),
      zone: signature.zone,
      contentSha256: signature.contentSha256,
    })),
    contributors,
    follows: follows === null ? null : { id: follows.id, number: follows.number },
    followedBy,
    hold,
    impactReview: review,
    report:
      report === null ? null : { number: report.number, sha256: report.sha256, madeAt: report.madeAt.toISOString() },
    may,
  };
}

/** The submitted analysis while one is under review or approved, else the current attempt's last. */
async function findShownAnalysis(tx: Tx, check: CheckRecord, draft: DraftRow): Promise<AnalysisRow | null> {
  if (draft.open) return findOptionalAnalysis(tx, { checkId: check.id, attempt: draft.currentAttempt });
  const submission = await findOptionalSubmission(tx, check.id);
  return submission === null ? null : findOptionalAnalysis(tx, { id: submission.analysisId });
}

/** Tolerance by the arrival of the first capture, axis by that of the current attempt's. */
async function readInForce(
  tx: Tx,
  check: CheckRecord,
  draft: DraftRow,
  receipts: readonly CaptureReceipt[],
): Promise<Pick<Check, "tolerance" | "axisInForce">> {
  const now = await recordNow(tx);
  const firstOf = (some: readonly CaptureReceipt[]) => (some[0] === undefined ? now : new Date(some[0].receivedAt));
  const firstAt = firstOf(receipts);
  const attemptAt = firstOf(receipts.filter(({ attempt }) => attempt === draft.currentAttempt));
  const [latest, axis] = await Promise.all([
    findLatestTolerance(tx, check.configurationId),
    findAxisAt(tx, check.configurationId, attemptAt),
  ]);
  const tolerance = latest.inForceFrom <= firstAt ? latest : await findToleranceAt(tx, check.configurationId, firstAt);
  return {
    tolerance: {
      version: tolerance.version,
      segments: tolerance.segments,
      changedSince: latest.version > tolerance.version,
    },
    axisInForce:
      axis === null
        ? null
        : { number: axis.number, degree: axis.coefficients.length - 1, inForceFrom: axis.inForceFrom.toISOString() },
  };
}

async function readSources(tx: Tx, ctx: Context, draft: DraftRow): Promise<Check["sources"]> {
  const ids = draft.inputs.sourceIds;
  if (ids.length === 0) return [];
  const today = dateIn(ctx.zone, await recordNow(tx));
  const rows = await tx.select().from(sources).where(inArray(sources.id, ids));
  return ids.flatMap((id) => {
    const source = rows.find((row) => row.id === id);
    if (source === undefined) return [];
    const { label, name, reviewDueOn } = source;
    return [{ id, label, name, reviewDueOn, pastReview: reviewDueOn !== null && reviewDueOn < today }];
  });
}

function presentAttempts(
  attempts: Awaited<ReturnType<typeof listAttempts>>,
  draft: DraftRow,
  versions: Awaited<ReturnType<typeof listAnalysisVersions>>,
  receipts: readonly CaptureReceipt[],
): Check["attempts"] {
  return attempts.map((attempt) => {
    const made = versions.filter((version) => version.attempt === attempt.number);
    const last = made.at(-1);
    const next = attempts.find((other) => other.number === attempt.number + 1);
    return {
      number: attempt.number,
      startedAt: attempt.startedAt.toISOString(),
      captures: receipts.filter((receipt) => receipt.attempt === attempt.number),
      abandoned: attempt.number < draft.currentAttempt,
      verdict: (last?.verdict ?? null) as Check["attempts"][number]["verdict"],
      outcome: last?.outcome ?? null,
      analysisCount: made.length,
      // Why it was abandoned is said when the next one begins.
      note: next?.reason ?? "",
    };
  });
}

/** The hold this check caused, while it stands, and whether a manager has decided about it. */
async function readHold(tx: Tx, check: CheckRecord): Promise<Check["hold"]> {
  const placed = await holdOfCheck(tx, check.id);
  if (placed === null) return null;
  const standing = await findStanding(tx, check.configurationId);
  if (standing.standing === "in-service" || standing.standing === "retired") return null;
  return { since: placed.since.toISOString(), decided: standing.sequence > placed.sequence && standing.setBy !== null };
}

async function mayNow(
  tx: Tx,
  ctx: Context,
  {
    check,
    configuration,
    draft,
    state,
    analysis,
  }: {
    check: CheckRecord;
    configuration: ConfigurationRow;
    draft: DraftRow;
    state: Check["state"];
    analysis: AnalysisRow | null;
  },
): Promise<Check["may"]> {
  const worker = hasRole(ctx, "technician") || hasRole(ctx, "manager");
  const edit = worker && draft.open && configuration.toOn === null;
  const refusal = state === "submitted" ? await approveRefusal(tx, ctx, check.id) : null;
  const reviewer = hasRole(ctx, "manager") || ctx.isApprover;
  return {
    edit,
    submit: edit && analysis !== null,
    approve: state === "submitted" && refusal === null,
    approveRefusal: refusal,
    return: state === "submitted" && reviewer,
    acknowledge:
      (state === "submitted" || state === "approved") &&
      (ownsInstrument(ctx, check.instrumentId) || hasRole(ctx, "manager")),
  };
}
