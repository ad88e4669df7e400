/** Reference sources: register, change, retire, and keep their certificates as received. */
import { eq } from "drizzle-orm";
import { builtInLineList, elementsOf } from "@wavekeep/core";
import type { z } from "zod";
import type { changeSourceInput, retireSourceInput, Source, sourceInput } from "../contract/sources.ts";
import { newId } from "../db/columns.ts";
import type { Database } from "../db/connection.ts";
import { sourceCertificates, sources } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import type { FileReply } from "../http/file-reply.ts";
import { problem } from "../http/problem.ts";
import type { ReceivedFile } from "../http/uploads.ts";
import { closeAlerts } from "../alerts/open-and-close.ts";
import { changedOnly } from "../instruments/changes.ts";
import { dateIn } from "../instruments/dates.ts";
import { assertFreshFor } from "../instruments/stale.ts";
import { nameTaken } from "../instruments/conflicts.ts";
import { sha256Hex } from "../records/canonical.ts";
import { writeTrail } from "../records/trail.ts";
import { presentSource } from "./present.ts";
import { findCertificate, findSource, listSources, lockSource } from "./queries.ts";

type SourceInput = z.output<typeof sourceInput>;

export function listLabSources(db: Database, ctx: Context): Promise<{ items: Source[] }> {
  return inLab(db, ctx, async (tx) => {
    const today = dateIn(ctx.zone, await recordNow(tx));
    return { items: (await listSources(tx)).map((row) => presentSource(row, today)) };
  });
}

export function readLabSource(db: Database, ctx: Context, sourceId: string): Promise<Source> {
  return inLab(db, ctx, (tx) => read(tx, ctx, sourceId));
}

export function createSource(db: Database, ctx: Context, input: SourceInput): Promise<Source> {
  assertSensible(input);
  return nameTaken(
    "label",
    "sources_label_in_use",
    `A source with the label ${input.label} is in use already. Choose another label, or retire the other one.`,
    () =>
      inLab(db, ctx, async (tx) => {
        const id = newId();
        await tx
          .insert(sources)
          .values({ labId: ctx.labId, id, ...columnsOf(input), registeredAt: await recordNow(tx) });
        const reply = await read(tx, ctx, id);
        await writeTrail(tx, ctx, {
          action: "source.registered",
          about: about({ id, label: input.label }),
          after: { ...columnsOf(input) },
        });
        return reply;
      }),
  );
}

export function changeSource(
  db: Database,
  ctx: Context,
  sourceId: string,
  input: z.output<typeof changeSourceInput>,
): Promise<Source> {
  assertSensible(input);
  return nameTaken(
    "label",
    "sources_label_in_use",
    `A source with the label ${input.label} is in use already. Choose another label.`,
    () =>
      inLab(db, ctx, async (tx) => {
        const stored = await lockSource(tx, sourceId);
        await assertFreshFor(tx, ctx, stored, input, { id: sourceId, what: `Source ${stored.label}` });
        assertInUse(stored);
        const next = columnsOf(input);
        const change = changedOnly(stored, next);
        await tx
          .update(sources)
          .set({ ...next, version: stored.version + 1 })
          .where(eq(sources.id, sourceId));
        const today = dateIn(ctx.zone, await recordNow(tx));
        const reviewed = next.reviewDueOn === null || next.reviewDueOn >= today;
        const closed = reviewed
          ? await closeAlerts(tx, { sourceId }, ["source-review"], "The review date was moved on.")
          : [];
        const reply = await read(tx, ctx, sourceId);
        await writeTrail(tx, ctx, { action: "source.changed", about: about(stored), ...change });
        if (closed.length > 0) await writeTrail(tx, asWavekeep(ctx), closed);
        return reply;
      }),
  );
}

export function retireSource(
  db: Database,
  ctx: Context,
  sourceId: string,
  input: z.output<typeof retireSourceInput>,
): Promise<Source> {
  return inLab(db, ctx, async (tx) => {
    const stored = await lockSource(tx, sourceId);
    await assertFreshFor(tx, ctx, stored, input, { id: sourceId, what: `Source ${stored.label}` });
    assertInUse(stored);
    await tx
      .update(sources)
      .set({ retiredAt: await recordNow(tx), retiredReason: input.reason, version: stored.version + 1 })
      .where(eq(sources.id, sourceId));
    const closed = await closeAlerts(tx, { sourceId }, ["source-review"], "The source was retired.");
    const reply = await read(tx, ctx, sourceId);
    await writeTrail(tx, ctx, { action: "source.retired", about: about(stored), why: input.reason });
    if (closed.length > 0) await writeTrail(tx, asWavekeep(ctx), closed);
    return reply;
  });
}

/** Keep a certificate as received; an earlier one stays. */
export function storeCertificate(db: Database, ctx: Context, sourceId: string, file: ReceivedFile): Promise<Source> {
  if (file.bytes.length === 0)
    throw problem("unusable", `${file.name} is empty. Nothing was stored; choose the certificate itself.`);
  const sha256 = sha256Hex(file.bytes);
  return inLab(db, ctx, async (tx) => {
    const stored = await lockSource(tx, sourceId);
    assertInUse(stored);
    const id = newId();
    await tx.insert(sourceCertificates).values({
      labId: ctx.labId,
      id,
      sourceId,
      fileName: file.name,
      sizeBytes: file.bytes.length,
      sha256,
      bytes: file.bytes,
      storedAt: await recordNow(tx),
      storedBy: ctx.personId,
    });
    const reply = await read(tx, ctx, sourceId);
    await writeTrail(tx, ctx, {
      action: "certificate.stored",
      about: about(stored),
      after: { fileName: file.name, sizeBytes: file.bytes.length, sha256 },
      rows: [{ table: "source_certificates", id }],
    });
    return reply;
  });
}

/** A certificate exactly as it was stored. */
export async function readCertificate(db: Database, ctx: Context, sourceId: string): Promise<FileReply> {
  const row = await inLab(db, ctx, (tx) => findCertificate(tx, sourceId));
  const isPdf = row.bytes.subarray(0, 5).toString("latin1") === "%PDF-";
  return {
    file: {
      bytes: row.bytes,
      type: isPdf ? "application/pdf" : "application/octet-stream",
      name: row.fileName,
      inline: isPdf,
      sha256: row.sha256,
    },
  };
}

async function read(tx: Tx, ctx: Context, sourceId: string): Promise<Source> {
  return presentSource(await findSource(tx, sourceId), dateIn(ctx.zone, await recordNow(tx)));
}

const about = (source: { id: string; label: string }) => ({
  kind: "source" as const,
  id: source.id,
  label: source.label,
});

function columnsOf(input: SourceInput) {
  const {
    label,
    name,
    kind,
    elements,
    laserLineNm,
    maker,
    serial,
    builtIntoInstrumentId,
    warmUpMinutes,
    reviewDueOn,
    note,
  } = input;
  return {
    label,
    name,
    kind,
    elements,
    laserLineNm,
    maker,
    serial,
    builtIntoInstrumentId,
    warmUpMinutes,
    reviewDueOn,
    note,
  };
}

function assertInUse(source: { label: string; retiredAt: Date | null }): void {
  if (source.retiredAt !== null)
    throw problem("conflict", `Source ${source.label} is retired; its record can't be changed any more.`);
}

/** What the shapes alone can't say. */
function assertSensible(input: SourceInput): void {
  const known = new Set([...elementsOf(builtInLineList), "Ho", "Di", "Sm", "Er"]);
  const unknown = input.elements.filter((element) => !known.has(element));
  const fields: { path: string; message: string }[] = [];
  if (unknown.length > 0)
    fields.push({ path: "elements", message: `The line library knows no ${unknown.join(", ")}.` });
  if (input.kind === "laser" ? input.laserLineNm === null : input.elements.length === 0) {
    fields.push(
      input.kind === "laser"
        ? { path: "laserLineNm", message: "Give the wavelength of the laser's line." }
        : { path: "elements", message: "Name at least one element." },
    );
  }
  if (input.kind === "built-in" && input.builtIntoInstrumentId === null) {
    fields.push({ path: "builtIntoInstrumentId", message: "Say which instrument it is built into." });
  }
  if (fields.length > 0) throw problem("invalid-input", `${fields[0]!.message} Nothing was stored.`, { fields });
}
