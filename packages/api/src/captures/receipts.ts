/** Receipts of captures: what arrived, when, from whom, under which trail number, and how it was read. */
import { and, eq } from "drizzle-orm";
import type { CaptureReceipt } from "../contract/checks.ts";
import { listCaptures } from "../checks/queries.ts";
import { trailEntries } from "../db/schema/index.ts";
import type { Tx } from "../db/tenancy.ts";
import { findFirstSeen } from "./queries.ts";

/** Every capture of a check, in the order they came. */
export async function listReceipts(tx: Tx, checkId: string): Promise<CaptureReceipt[]> {
  const [rows, numbers] = await Promise.all([listCaptures(tx, checkId), trailNumbers(tx, checkId)]);
  const firstSeen = await findFirstSeen(tx, [
    ...new Set(rows.filter((row) => row.capture.seenBeforeCaptureId !== null).map((row) => row.capture.sha256)),
  ]);
  return rows.map(({ capture, receiverName, reading, refusal }) => {
    const before = capture.seenBeforeCaptureId === null ? undefined : firstSeen.get(capture.sha256);
    return {
      id: capture.id,
      attempt: capture.attempt,
      fileName: capture.fileName,
      sizeBytes: capture.sizeBytes,
      sha256: capture.sha256,
      receivedAt: capture.receivedAt.toISOString(),
      receivedBy: { id: capture.receivedBy, name: receiverName },
      part: capture.part as CaptureReceipt["part"],
      trailNumber: numbers.get(capture.id) ?? 0,
      seenBefore:
        before === undefined
          ? null
          : { checkNumber: before.checkNumber, fileName: before.fileName, receivedAt: before.receivedAt.toISOString() },
      reading: reading ?? null,
      refusal: refusal ?? null,
    };
  });
}

/** Trail entry under which each capture was stored. */
async function trailNumbers(tx: Tx, checkId: string): Promise<Map<string, number>> {
  const entries = await tx
    .select({ number: trailEntries.number, canonical: trailEntries.canonical })
    .from(trailEntries)
    .where(and(eq(trailEntries.checkId, checkId), eq(trailEntries.action, "captures.stored")));
  const numbers = new Map<string, number>();
  for (const { number, canonical } of entries) {
    const { rows } = JSON.parse(canonical) as { rows: { table: string; id: string }[] };
    for (const row of rows) if (row.table === "captures") numbers.set(row.id, number);
  }
  return numbers;
}
