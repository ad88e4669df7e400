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
  const [row] = await listCheckRows(tx, { checkId, limit: 1 });
  if (row === undefined) throw notFound("This check");
  const { summary } = row;
  const draft = await findDraft(tx, checkId);
  const procedure = await findProcedure(tx, record.procedureId);
  const configuration = await findConfiguration(tx, record.configurationId);
  const analysis = await findShownAnalysis(tx, record, draft);
  const versions = await listAnalysisVersions(tx, checkId);
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
  const follows = record.followsCheckId === null ? null : await findCheck(tx, record.followsCheckId);
  const review = await findOptionalReviewOf(tx, checkId);
  const report = await findOptionalReportHead(tx, checkId);
  const receipts = await listReceipts(tx, checkId);
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
    ...(await readInForce(tx, record, draft, receipts)),
    fittedAxis: await readFittedAxis(tx, ctx, { check: record, configuration, state: summary.state, analysis }),
    sources: await readSources(tx, ctx, draft),
    attempts: await readAttempts(tx, record, draft, versions, receipts),
    currentAttempt: draft.currentAttempt,
    analysis: analysis?.analysis ?? null,
    analysisVersion: shownVersion === undefined ? null : presentVersion(shownVersion),
    analyses: versions.map(presentVersion),
    events: (await listEvents(tx, checkId)).map(({ event, name }) => ({
      id: event.id,
      kind: event.kind as Check["events"][number]["kind"],
      at: event.at.toISOString(),
      by: { id: event.byId ?? ctx.labId, name: name ?? "Wavekeep" },
      comment: event.comment,
      revision: event.revision,
    })),
    signatures: (await listSignatures(tx, checkId)).map((signature) => ({
      id: signature.id,
      printedName: signature.printedName,
      role: signature.role,
      meaning: signature.meaning as Check["signatures"][number]["meaning"],
      signedAt: signature.signedAt.toISOString(),
      zone: signature.zone,
      contentSha256: signature.contentSha256,
    })),
    contributors: await listContributors(tx, checkId),
    follows: follows === null ? null : { id: follows.id, number: follows.number },
    followedBy: await listFollowers(tx, checkId),
    hold: await readHold(tx, record),
    impactReview: review,
    report:
      report === null ? null : { number: report.number, sha256: report.sha256, madeAt: report.madeAt.toISOString() },
    may: await mayNow(tx, ctx, { check: record, configuration, draft, state: summary.state, analysis }),
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
  const latest = await findLatestTolerance(tx, check.configurationId);
  const tolerance = latest.inForceFrom <= firstAt ? latest : await findToleranceAt(tx, check.configurationId, firstAt);
  const axis = await findAxisAt(tx, check.configurationId, attemptAt);
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

async function readAttempts(
  tx: Tx,
  check: CheckRecord,
  draft: DraftRow,
  versions: Awaited<ReturnType<typeof listAnalysisVersions>>,
  receipts: readonly CaptureReceipt[],
): Promise<Check["attempts"]> {
  const attempts = await listAttempts(tx, check.id);
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
