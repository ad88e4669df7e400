/** What a report prints, gathered in one short transaction: plain values, nothing drawn yet. */
import { and, desc, eq, gte, inArray } from "drizzle-orm";
import type { Analysis } from "@wavekeep/core";
import type { CaptureReceipt } from "../contract/checks.ts";
import { listReceipts } from "../captures/receipts.ts";
import {
  findCheck,
  findDraft,
  findOptionalAnalysis,
  findOptionalSubmission,
  listAnalysisVersions,
  listAttempts,
  listEvents,
  listSignatures,
  type CheckRecord,
  type SignatureRow,
} from "../checks/queries.ts";
import {
  sources,
  sourceCertificates,
  toleranceVersions,
  type StoredDraft,
  type StoredSegment,
} from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { addDays, dateIn } from "../instruments/dates.ts";
import {
  findAxisAt,
  findConfiguration,
  findInstrument,
  findToleranceAt,
  type ConfigurationRow,
  type InstrumentRow,
} from "../instruments/queries.ts";
import { findLab, type LabRow } from "../labs/queries.ts";
import { findProcedure, type ProcedureRow } from "../procedures/queries.ts";
import { findOptionalLastEntry } from "./queries.ts";

export interface ReportFacts {
  /** Null: a draft, which is said on every page. */
  number: string | null;
  madeAt: Date;
  lab: LabRow;
  check: CheckRecord;
  revision: number;
  instrument: InstrumentRow;
  ownerName: string;
  configuration: ConfigurationRow;
  procedure: ProcedureRow;
  inputs: StoredDraft;
  analysis: Analysis;
  analysisSha256: string;
  lineListVersion: string;
  measuredAt: Date | null;
  tolerance: { version: number; segments: StoredSegment[]; inForceFrom: Date; reason: string };
  /** Other versions that took over within a year of the check: a changed tolerance shows for a year. */
  toleranceChanges: { version: number; inForceFrom: Date; reason: string; segments: StoredSegment[] }[];
  axis: { number: number; inForceFrom: Date } | null;
  sources: {
    label: string;
    name: string;
    maker: string;
    serial: string;
    reviewDueOn: string | null;
    pastReview: boolean;
    certificateSha256: string | null;
  }[];
  receipts: CaptureReceipt[];
  attempts: { number: number; reason: string }[];
  changes: { version: number; attempt: number; changed: string }[];
  comments: { kind: string; byName: string; at: Date; comment: string }[];
  signatures: SignatureRow[];
  contentSha256: string | null;
  /** Head of the lab's chain when the report is made: it holds the signatures. */
  head: { number: number; hash: string } | null;
}

/** @throws problem "conflict" while there is no result to print */
export async function gatherReport(tx: Tx, ctx: Context, checkId: string, number: string | null): Promise<ReportFacts> {
  const check = await findCheck(tx, checkId);
  const draft = await findDraft(tx, checkId);
  const submission = draft.open ? null : await findOptionalSubmission(tx, checkId);
  const analysis =
    submission === null
      ? await findOptionalAnalysis(tx, { checkId, attempt: draft.currentAttempt })
      : await findOptionalAnalysis(tx, { id: submission.analysisId });
  if (analysis === null)
    throw problem(
      "conflict",
      `${check.number} has no result yet, so there is nothing to print. Analyse its captures first.`,
    );
  const inputs = submission?.inputs ?? draft.inputs;
  const [
    { instrument, ownerName },
    configuration,
    receipts,
    versions,
    events,
    madeAt,
    lab,
    procedure,
    attempts,
    signatures,
    head,
  ] = await Promise.all([
    findInstrument(tx, check.instrumentId),
    findConfiguration(tx, check.configurationId),
    listReceipts(tx, checkId),
    listAnalysisVersions(tx, checkId),
    listEvents(tx, checkId),
    recordNow(tx),
    findLab(tx, ctx.labId),
    findProcedure(tx, check.procedureId),
    listAttempts(tx, checkId),
    listSignatures(tx, checkId),
    findOptionalLastEntry(tx),
  ]);
  const measuredAt = submission?.measuredAt ?? (receipts[0] === undefined ? null : new Date(receipts[0].receivedAt));
  const firstAt = receipts[0] === undefined ? madeAt : new Date(receipts[0].receivedAt);
  const [tolerance, axis, namedSources] = await Promise.all([
    findToleranceAt(tx, configuration.id, firstAt),
    findAxisAt(tx, configuration.id, measuredAt ?? firstAt),
    listReportSources(tx, inputs, dateIn(ctx.zone, measuredAt ?? firstAt)),
  ]);
  return {
    number,
    madeAt,
    lab,
    check,
    revision: submission?.revision ?? draft.revision,
    instrument,
    ownerName,
    configuration,
    procedure,
    inputs,
    analysis: analysis.analysis,
    analysisSha256: analysis.sha256,
    lineListVersion: analysis.lineListVersion,
    measuredAt,
    tolerance,
    toleranceChanges: await listToleranceChanges(tx, configuration.id, tolerance.version, firstAt),
    axis: analysis.axisNumber === null || axis === null ? null : { number: axis.number, inForceFrom: axis.inForceFrom },
    sources: namedSources,
    receipts,
    attempts: attempts.map((attempt) => ({ number: attempt.number, reason: attempt.reason })),
    changes: versions.map(({ version, attempt, changed }) => ({ version, attempt, changed })),
    comments: events.flatMap(({ event, name }) =>
      event.comment === null
        ? []
        : [{ kind: event.kind, byName: name ?? "Wavekeep", at: event.at, comment: event.comment }],
    ),
    signatures,
    contentSha256: submission?.contentSha256 ?? null,
    head,
  };
}

async function listToleranceChanges(
  tx: Tx,
  configurationId: string,
  usedVersion: number,
  at: Date,
): Promise<ReportFacts["toleranceChanges"]> {
  const yearBefore = new Date(`${addDays(at.toISOString().slice(0, 10), -365)}T00:00:00Z`);
  const rows = await tx
    .select()
    .from(toleranceVersions)
    .where(and(eq(toleranceVersions.configurationId, configurationId), gte(toleranceVersions.inForceFrom, yearBefore)))
    .orderBy(desc(toleranceVersions.version));
  // The first version is no change; the one in use is printed by itself, with the reason it was changed for.
  return rows.filter((row) => row.version > 1 || row.version > usedVersion);
}

async function listReportSources(tx: Tx, inputs: StoredDraft, on: string): Promise<ReportFacts["sources"]> {
  if (inputs.sourceIds.length === 0) return [];
  const rows = await tx.select().from(sources).where(inArray(sources.id, inputs.sourceIds));
  const certificates = await tx
    .select({ sourceId: sourceCertificates.sourceId, sha256: sourceCertificates.sha256 })
    .from(sourceCertificates)
    .where(inArray(sourceCertificates.sourceId, inputs.sourceIds))
    .orderBy(desc(sourceCertificates.storedAt));
  return inputs.sourceIds.flatMap((id) => {
    const source = rows.find((row) => row.id === id);
    if (source === undefined) return [];
    const { label, name, maker, serial, reviewDueOn } = source;
    return [
      {
        label,
        name,
        maker,
        serial,
        reviewDueOn,
        pastReview: reviewDueOn !== null && reviewDueOn < on,
        certificateSha256: certificates.find((row) => row.sourceId === id)?.sha256 ?? null,
      },
    ];
  });
}
