/**
 * Analysing the current attempt: the records are read in one short transaction, the core computes in a worker with none open,
 * the result is kept in a second one, unless the working copy has moved on meanwhile.
 */
import { coreVersion, type Analysis, type CaptureInput, type AnalysisSetup } from "@wavekeep/core";
import { inArray } from "drizzle-orm";
import type { z } from "zod";
import type { analyseInput, Check } from "../contract/checks.ts";
import { readStored } from "../captures/service.ts";
import { loadBytes } from "../captures/queries.ts";
import { newId } from "../db/columns.ts";
import { analyses, analysisDrawings, sources, type StoredDraft } from "../db/schema/index.ts";
import { inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { findReproducibility } from "../drift/service.ts";
import { problem } from "../http/problem.ts";
import { findAxisAt, findConfiguration, findInstrument, findToleranceAt } from "../instruments/queries.ts";
import { findLab } from "../labs/queries.ts";
import { findProcedure, type ProcedureRow } from "../procedures/queries.ts";
import { canonicalText, sha256Hex } from "../records/canonical.ts";
import { writeTrail, type TrailInput } from "../records/trail.ts";
import { describeChange } from "./describe-change.ts";
import { aboutCheck, inputsHash, lockOpenDraft } from "./draft.ts";
import { lineAt } from "./leave-out.ts";
import {
  addContributor,
  addEvent,
  findFirstCaptureAt,
  findOptionalAnalysis,
  findState,
  listCaptures,
  type AnalysisRow,
  type CaptureWithMore,
  type CheckRecord,
  type DraftRow,
} from "./queries.ts";
import { readCheck } from "./read-check.ts";
import { buildSetup } from "./setup.ts";
import { storableJson } from "./storable.ts";
import { holdToProcedure, resultOf, stripOf } from "./summarise.ts";
import type { CheckWork } from "./work.ts";

export async function analyseCheck(
  work: Pick<CheckWork, "db" | "analyser">,
  ctx: Context,
  checkId: string,
  input: z.output<typeof analyseInput>,
): Promise<Check> {
  await readUnread(work, ctx, checkId);
  const prepared = await inLab(work.db, ctx, (tx) => prepare(tx, ctx, checkId, input));
  const { analysis: raw, drawing } = await work.analyser.analyse(prepared.inputs, prepared.setup);
  const analysis = withUnread(
    holdToProcedure(storableJson(raw), prepared.procedure.leastLinesPerSegment, prepared.procedure.code),
    prepared.unread,
  );
  return inLab(work.db, ctx, (tx) =>
    keep(tx, ctx, input, prepared, analysis, drawing === null ? null : storableJson(drawing)),
  );
}

interface Prepared {
  check: CheckRecord;
  draft: DraftRow;
  procedure: ProcedureRow;
  inputs: CaptureInput[];
  captureIds: string[];
  /** Captures of the attempt that could not be read: named in the result. */
  unread: CaptureWithMore[];
  setup: AnalysisSetup;
  toleranceVersion: number;
  axisNumber: number | null;
}

/** Captures that were never read, or by an older core, are read before the setup needs to know what they are. */
async function readUnread(work: Pick<CheckWork, "db" | "analyser">, ctx: Context, checkId: string): Promise<void> {
  const unread = await inLab(work.db, ctx, async (tx) => {
    const rows = (await listCaptures(tx, checkId)).filter((row) => row.readWith !== coreVersion);
    const bytes = await loadBytes(
      tx,
      rows.map((row) => row.capture.sha256),
    );
    return rows.map(({ capture }) => ({ id: capture.id, name: capture.fileName, bytes: bytes.get(capture.sha256)! }));
  });
  await readStored(work, ctx, unread);
}

async function prepare(tx: Tx, ctx: Context, checkId: string, input: { version: number }): Promise<Prepared> {
  const { check, draft } = await lockOpenDraft(tx, ctx, checkId, input);
  const all = await listCaptures(tx, checkId, draft.currentAttempt);
  if (all.length === 0)
    throw problem(
      "unusable",
      `Attempt ${draft.currentAttempt} of ${check.number} has no capture yet. Add one, then analyse.`,
    );
  // The same bytes twice in one attempt are one recording, whatever they are called.
  const different = all.filter(
    (row, index) =>
      all.findIndex(
        (other) => other.capture.sha256 === row.capture.sha256 && other.capture.part === row.capture.part,
      ) === index,
  );
  const readable = different.filter((row) => row.reading !== null);
  const unread = different.filter((row) => row.reading === null);
  const lamp = readable.find((row) => row.capture.part === "lamp");
  if (lamp === undefined) {
    const why = unread[0]?.refusal ?? "Only darks have come so far.";
    throw problem("unusable", `No capture of the lamp can be read in attempt ${draft.currentAttempt}: ${why}`, {
      kept: "Every file is stored as it came, and stays in the list.",
    });
  }
  const [configuration, { instrument }, lab, procedure, firstAt, attemptAt, namedSources, bytes] = await Promise.all([
    findConfiguration(tx, check.configurationId),
    findInstrument(tx, check.instrumentId),
    findLab(tx, ctx.labId),
    findProcedure(tx, check.procedureId),
    findFirstCaptureAt(tx, checkId),
    findFirstCaptureAt(tx, checkId, draft.currentAttempt),
    listNamedSources(tx, draft.inputs),
    loadBytes(
      tx,
      readable.map((row) => row.capture.sha256),
    ),
  ]);
  const [tolerance, axis, history] = await Promise.all([
    findToleranceAt(tx, configuration.id, firstAt!),
    findAxisAt(tx, configuration.id, attemptAt!),
    findReproducibility(tx, ctx, configuration.id, checkId),
  ]);
  const setup = buildSetup({
    configuration,
    procedure,
    sources: namedSources,
    draft: draft.inputs,
    tolerance: tolerance.segments,
    axis,
    altitudeM: instrument.altitudeM ?? lab.altitudeM,
    history,
    reading: lamp.reading!,
  });
  return {
    check,
    draft,
    procedure,
    inputs: readable.map(({ capture }) => ({
      name: capture.fileName,
      bytes: bytes.get(capture.sha256)!,
      sha256: capture.sha256,
      part: capture.part as CaptureInput["part"],
    })),
    captureIds: readable.map(({ capture }) => capture.id),
    unread,
    setup,
    toleranceVersion: tolerance.version,
    axisNumber: setup.mode.kind === "earlier-axis" && setup.mode.axis !== "own" ? (axis?.number ?? null) : null,
  };
}

async function listNamedSources(tx: Tx, inputs: StoredDraft): Promise<(typeof sources.$inferSelect)[]> {
  if (inputs.sourceIds.length === 0) return [];
  const rows = await tx.select().from(sources).where(inArray(sources.id, inputs.sourceIds));
  return inputs.sourceIds.flatMap((id) => rows.filter((row) => row.id === id));
}

/** A file of the attempt that could not be read is not passed over in silence. */
function withUnread(analysis: Analysis, unread: readonly CaptureWithMore[]): Analysis {
  if (unread.length === 0) return analysis;
  const warnings = unread.map(({ capture, refusal }) => ({
    code: "not-read",
    text: `${capture.fileName} was not used: ${refusal ?? "it could not be read."}`,
  }));
  return { ...analysis, warnings: [...analysis.warnings, ...warnings] };
}

async function keep(
  tx: Tx,
  ctx: Context,
  input: { version: number },
  prepared: Prepared,
  analysis: Analysis,
  drawing: (typeof analysisDrawings.$inferInsert)["drawing"] | null,
): Promise<Check> {
  const { check, draft } = await lockOpenDraft(tx, ctx, prepared.check.id, input);
  const previous = await findOptionalAnalysis(tx, { checkId: check.id });
  const result = resultOf(analysis);
  const id = newId();
  const row: typeof analyses.$inferInsert = {
    labId: ctx.labId,
    id,
    checkId: check.id,
    version: (previous?.version ?? 0) + 1,
    attempt: draft.currentAttempt,
    revision: draft.revision,
    madeAt: await recordNow(tx),
    madeBy: ctx.personId!,
    coreVersion: analysis.coreVersion,
    lineListVersion: analysis.setup.lineListVersion,
    inputs: draft.inputs,
    inputsSha256: inputsHash(draft.inputs),
    captureIds: prepared.captureIds,
    toleranceVersion: prepared.toleranceVersion,
    axisNumber: prepared.axisNumber,
    analysis,
    sha256: sha256Hex(canonicalText(analysis)),
    outcome: analysis.outcome,
    verdict: result.verdict,
    nearLimit: result.nearLimit,
    result,
    strip: stripOf(analysis),
    changed: describeChange(previous, {
      attempt: draft.currentAttempt,
      inputs: draft.inputs,
      captureIds: prepared.captureIds,
    }),
  };
  await tx.insert(analyses).values(row);
  if (drawing !== null) await tx.insert(analysisDrawings).values({ labId: ctx.labId, analysisId: id, drawing });
  await addContributor(tx, ctx, check.id, "analysed");
  if ((await findState(tx, check.id)) === "set-aside")
    await addEvent(tx, ctx, { checkId: check.id, kind: "resumed", revision: draft.revision });
  const reply = await readCheck(tx, ctx, check);
  await writeTrail(tx, ctx, [
    {
      action: "analysis.made",
      about: aboutCheck(check),
      after: {
        version: row.version,
        attempt: row.attempt,
        outcome: row.outcome,
        verdict: row.verdict,
        nearLimit: row.nearLimit,
        toleranceUsed: result.toleranceUsed,
        withEveryLine: result.withEveryLine,
        changed: row.changed,
        coreVersion: row.coreVersion,
        lineListVersion: row.lineListVersion,
        sha256: row.sha256,
      },
      rows: [{ table: "analyses", id }],
    },
    ...leaveOutEntries(check, previous, draft.inputs, analysis),
  ]);
  return reply;
}

/** Lines left out since the analysis before, and lines taken back, each an entry of its own with the verdict on both sides. */
function leaveOutEntries(
  check: CheckRecord,
  previous: AnalysisRow | null,
  inputs: StoredDraft,
  analysis: Analysis,
): TrailInput[] {
  const before = previous?.inputs.leftOut ?? [];
  const isIn = (list: StoredDraft["leftOut"], wavelengthNm: number) =>
    list.some((left) => left.wavelengthNm === wavelengthNm);
  const verdicts = {
    before: { verdict: previous?.result.verdict ?? null, toleranceUsed: previous?.result.toleranceUsed ?? null },
    after: { verdict: analysis.verdict?.verdict ?? null, toleranceUsed: analysis.verdict?.toleranceUsed ?? null },
  };
  return [
    ...inputs.leftOut
      .filter((left) => !isIn(before, left.wavelengthNm))
      .map((left): TrailInput => ({
        action: "line.left-out",
        about: aboutCheck(check),
        before: verdicts.before,
        after: {
          wavelengthNm: left.wavelengthNm,
          species: lineAt(analysis, left.wavelengthNm)?.species ?? null,
          reason: left.reason,
          ...verdicts.after,
        },
        why: left.note,
      })),
    ...before
      .filter((left) => !isIn(inputs.leftOut, left.wavelengthNm))
      .map((left): TrailInput => ({
        action: "line.brought-back",
        about: aboutCheck(check),
        before: { wavelengthNm: left.wavelengthNm, reason: left.reason, ...verdicts.before },
        after: verdicts.after,
      })),
  ];
}
