/**
 * Captures: stored byte for byte with their SHA-256 and their entry in the trail in one transaction, and only then read.
 */
import { coreVersion } from "@wavekeep/core";
import type { z } from "zod";
import type { CaptureReceipt, uploadReply } from "../contract/checks.ts";
import type { Analyser } from "../checks/analyser.ts";
import { storableJson } from "../checks/storable.ts";
import { addContributor, addEvent, findCheck, findState, lockDraft } from "../checks/queries.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { captures } from "../db/schema/index.ts";
import { inLab, recordNow, type Context } from "../db/tenancy.ts";
import type { FileReply } from "../http/file-reply.ts";
import { Problem, problem } from "../http/problem.ts";
import type { ReceivedFile } from "../http/uploads.ts";
import { sha256Hex } from "../records/canonical.ts";
import { writeTrail } from "../records/trail.ts";
import { findCaptureWithBytes, findFirstSeen, findLastPosition, keepBytes, keepReadings } from "./queries.ts";
import { listReceipts } from "./receipts.ts";

export interface CaptureServices {
  db: Database;
  analyser: Analyser;
}

/** Files of one upload are one attempt's captures of one part. */
export async function addCaptures(
  { db, analyser }: CaptureServices,
  ctx: Context,
  checkId: string,
  upload: { part: CaptureReceipt["part"]; files: readonly ReceivedFile[] },
): Promise<z.input<typeof uploadReply>> {
  const stored = await storeCaptures(db, ctx, checkId, upload);
  await readStored(
    { db, analyser },
    ctx,
    stored.captures.map(({ id, file }) => ({ id, name: file.name, bytes: file.bytes })),
    { faults: "left-unread" },
  );
  const receipts = await inLab(db, ctx, (tx) => listReceipts(tx, checkId));
  const ids = new Set(stored.captures.map(({ id }) => id));
  return { captures: receipts.filter(({ id }) => ids.has(id)), attempt: stored.attempt };
}

async function storeCaptures(
  db: Database,
  ctx: Context,
  checkId: string,
  { part, files }: { part: CaptureReceipt["part"]; files: readonly ReceivedFile[] },
): Promise<{ attempt: number; captures: { id: string; file: ReceivedFile }[] }> {
  const hashed = files.map((file) => ({ file, id: newId(), sha256: sha256Hex(file.bytes) }));
  return inLab(db, ctx, async (tx) => {
    const check = await findCheck(tx, checkId);
    const draft = await lockDraft(tx, checkId);
    if (!draft.open) {
      throw problem(
        "conflict",
        `${check.number} is submitted: its captures are closed. Nothing was stored; have it sent back, or begin another check.`,
      );
    }
    const receivedAt = await recordNow(tx);
    const known = await findFirstSeen(
      tx,
      hashed.map(({ sha256 }) => sha256),
    );
    const first = new Map([...known].map(([sha256, seen]) => [sha256, seen.captureId]));
    let position = await findLastPosition(tx, checkId);
    for (const { file, id, sha256 } of hashed) {
      position += 1;
      await keepBytes(tx, {
        labId: ctx.labId,
        sha256,
        sizeBytes: file.bytes.length,
        bytes: file.bytes,
        storedAt: receivedAt,
      });
      await tx.insert(captures).values({
        labId: ctx.labId,
        id,
        checkId,
        attempt: draft.currentAttempt,
        position,
        fileName: file.name,
        sizeBytes: file.bytes.length,
        sha256,
        part,
        receivedAt,
        receivedBy: ctx.personId!,
        seenBeforeCaptureId: first.get(sha256) ?? null,
      });
      if (!first.has(sha256)) first.set(sha256, id);
    }
    await addContributor(tx, ctx, checkId, "uploaded");
    if ((await findState(tx, checkId)) === "set-aside")
      await addEvent(tx, ctx, { checkId, kind: "resumed", revision: draft.revision });
    await writeTrail(tx, ctx, {
      action: "captures.stored",
      about: { kind: "check", id: checkId, label: check.number, instrumentId: check.instrumentId, checkId },
      after: {
        count: hashed.length,
        part,
        attempt: draft.currentAttempt,
        files: hashed.map(({ file, sha256 }) => ({ name: file.name, sizeBytes: file.bytes.length, sha256 })),
        usedBefore: hashed.flatMap(({ sha256 }) => {
          const seen = known.get(sha256);
          return seen === undefined ? [] : [{ sha256, check: seen.checkNumber }];
        }),
      },
      rows: hashed.map(({ id }) => ({ table: "captures", id })),
    });
    return { attempt: draft.currentAttempt, captures: hashed.map(({ id, file }) => ({ id, file })) };
  });
}

/**
 * Read stored captures in the workers and keep what was read. The bytes are safe whatever comes of it.
 *
 * @param options.faults  `left-unread`: a fault in reading takes nothing back; the receipt says that the capture was not
 *   read, and the analysis tries again. By default the first fault is thrown once the others are kept.
 */
export async function readStored(
  { db, analyser }: CaptureServices,
  ctx: Context,
  unread: readonly { id: string; name: string; bytes: Uint8Array }[],
  options: { faults?: "left-unread" } = {},
): Promise<void> {
  if (unread.length === 0) return;
  const outcomes = await Promise.allSettled(unread.map(({ bytes, name }) => analyser.read(bytes, name)));
  const found = outcomes.flatMap((outcome, index) =>
    outcome.status === "fulfilled" ? [{ captureId: unread[index]!.id, ...storableJson(outcome.value) }] : [],
  );
  if (found.length > 0) {
    await inLab(db, ctx, async (tx) => {
      const readAt = await recordNow(tx);
      await keepReadings(
        tx,
        found.map(({ captureId, reading, refusal }) => ({
          labId: ctx.labId,
          captureId,
          coreVersion,
          reading,
          refusal,
          readAt,
        })),
      );
    });
  }
  for (const outcome of outcomes) {
    if (outcome.status === "fulfilled") continue;
    if (options.faults === "left-unread" && outcome.reason instanceof Problem) continue;
    throw outcome.reason;
  }
}

/** A capture exactly as it arrived; that somebody took a copy is in the trail. */
export async function readCaptureBytes(db: Database, ctx: Context, captureId: string): Promise<FileReply> {
  const found = await inLab(db, ctx, async (tx) => {
    const row = await findCaptureWithBytes(tx, captureId);
    await writeTrail(tx, ctx, {
      action: "capture.read",
      about: {
        kind: "capture",
        id: captureId,
        label: row.capture.fileName,
        instrumentId: row.instrumentId,
        checkId: row.capture.checkId,
      },
      after: { sha256: row.capture.sha256, check: row.checkNumber },
    });
    return row;
  });
  return {
    file: {
      bytes: found.bytes,
      type: "application/octet-stream",
      name: found.capture.fileName,
      sha256: found.capture.sha256,
    },
  };
}
