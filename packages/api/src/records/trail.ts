/**
 * Writing the trail: one hash chain a lab.
 *
 * An entry is RFC 8785 text that holds the hash of the entry before it; its own hash is the SHA-256 of that text. It is
 * written in the transaction of the deed, as its last statement, because the lab's chain is locked from there to the
 * commit. The time is read under that lock and never runs back. Names and addresses stand in a side table, the entry
 * holds their salted hashes, so that they can be disposed of without breaking the chain.
 */
import { randomBytes } from "node:crypto";
import { sql } from "drizzle-orm";
import type { z } from "zod";
import type { entryShape } from "../contract/records.ts";
import { newId } from "../db/columns.ts";
import { idempotencyKeys, signedHeads, trailEntries, trailPersonal } from "../db/schema/index.ts";
import type { Context, Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { canonicalText, personalHash, sha256Hex } from "./canonical.ts";
import type { HeadSigner } from "./signing.ts";
import { hashRowsNow } from "./queries.ts";
import type { TrailAction } from "./trail-actions.ts";

export type EntryShape = z.infer<typeof entryShape>;

/** Version of the entry's own form, inside the hashed text. */
const ENTRY_FORM = 1;
/** Previous hash of the first entry of a chain. */
export const CHAIN_START = "0".repeat(64);

/** The record an entry speaks of. A person's label is treated as personal data by itself. */
export interface TrailSubject {
  kind:
    | "lab"
    | "person"
    | "invitation"
    | "bench-device"
    | "instrument"
    | "configuration"
    | "event"
    | "source"
    | "line-list"
    | "procedure"
    | "check"
    | "capture"
    | "analysis"
    | "axis"
    | "alert"
    | "impact-review"
    | "report"
    | "mail"
    | "head"
    | "route";
  id: string;
  /** As people call it: an instrument's name, a check's number. */
  label: string;
  /** Searched by: the instrument's or the check's whole history. */
  instrumentId?: string;
  checkId?: string;
}

export interface TrailInput {
  action: TrailAction;
  about: TrailSubject;
  /** How the entry is drawn; by default a person's or Wavekeep's own. */
  shape?: EntryShape;
  /** What changed: the same keys in both, values that JSON can hold (Dates become ISO text). */
  before?: Record<string, unknown> | null;
  after?: Record<string, unknown> | null;
  why?: string | null;
  /** Insert-only rows the entry speaks of: the database hashes them as they stand. `sha256` is ignored on input. */
  rows?: { table: string; id: string; sha256?: string }[];
  /** Names and addresses; everything personal goes here, never into before, after or why. */
  personal?: Record<string, string>;
}

/** The hashed form of an entry. */
export interface TrailDocument {
  form: number;
  lab: string;
  number: number;
  at: string;
  action: string;
  shape: string;
  demo: boolean;
  actor: { id: string | null; role: string | null };
  about: { kind: string; id: string; label: string | null; instrument: string | null; check: string | null };
  before: unknown;
  after: unknown;
  why: string | null;
  rows: { table: string; id: string; sha256: string }[];
  personal: Record<string, string>;
  previous: string;
}

export interface WrittenEntry {
  number: number;
  hash: string;
  at: Date;
}

interface ChainHead extends Record<string, unknown> {
  number: string | number;
  hash: string;
  at: Date | string;
}

/**
 * Write one entry, or several in order, as the last statement of the transaction.
 *
 * @param options.signWith signs the new head with the key outside the database (at each signature)
 * @returns number, hash and time of the (last) entry; for receipts that name it
 */
export async function writeTrail(
  tx: Tx,
  ctx: Context,
  entry: TrailInput | readonly TrailInput[],
  options: { signWith?: HeadSigner } = {},
): Promise<WrittenEntry> {
  const inputs = Array.isArray(entry) ? (entry as readonly TrailInput[]) : [entry as TrailInput];
  if (inputs.length === 0) throw new RangeError("writeTrail was given no entry.");
  const rows = await hashRows(tx, inputs);
  const { rows: found } = await tx.execute<ChainHead>(sql`select number, hash, at from trail_begin()`);
  const head = found[0]!;
  const at = new Date(head.at);
  let number = Number(head.number);
  let hash = head.hash;
  const entries: (typeof trailEntries.$inferInsert)[] = [];
  const personals: (typeof trailPersonal.$inferInsert)[] = [];
  inputs.forEach((input, index) => {
    number += 1;
    const built = buildEntry(ctx, input, { number, at, previous: hash, rows: rows[index]! });
    hash = built.entry.hash;
    entries.push(built.entry);
    if (built.personal !== null) personals.push(built.personal);
  });
  await tx.insert(trailEntries).values(entries);
  if (personals.length > 0) await tx.insert(trailPersonal).values(personals);
  if (options.signWith !== undefined)
    await storeSignedHead(tx, ctx.labId, { number, hash, at }, options.signWith, "signature");
  await keepRequestKey(tx, ctx, at);
  return { number, hash, at };
}

/** Sign a head of the chain and keep the signature beside it. */
export async function storeSignedHead(
  tx: Tx,
  labId: string,
  head: WrittenEntry,
  signer: HeadSigner,
  cause: "signature" | "daily",
): Promise<void> {
  await tx.insert(signedHeads).values({
    id: newId(),
    labId,
    number: head.number,
    hash: head.hash,
    signedAt: head.at,
    cause,
    keyFingerprint: signer.fingerprint,
    publicKey: signer.publicKey,
    signature: signer.sign(labId, head.number, head.hash),
  });
}

/** SHA-256 of each row named, as the database holds it now. Before the lock: the rows are there already. */
async function hashRows(tx: Tx, inputs: readonly TrailInput[]): Promise<TrailDocument["rows"][]> {
  const hashes = await hashRowsNow(
    tx,
    inputs.flatMap((input) => input.rows ?? []),
  );
  let next = 0;
  return inputs.map((input) =>
    (input.rows ?? []).map(({ table, id }) => {
      const sha256 = hashes[next++];
      if (typeof sha256 !== "string") throw new Error(`The trail names ${table} ${id}, which is not there.`);
      return { table, id, sha256 };
    }),
  );
}

function buildEntry(
  ctx: Context,
  input: TrailInput,
  place: { number: number; at: Date; previous: string; rows: TrailDocument["rows"] },
): { entry: typeof trailEntries.$inferInsert; personal: typeof trailPersonal.$inferInsert | null } {
  const { about } = input;
  const shape = input.shape ?? (ctx.personId === null ? "wavekeep" : "person");
  const aboutPerson = about.kind === "person" || about.kind === "invitation" || about.kind === "mail";
  const data: Record<string, string> = {
    ...input.personal,
    ...(ctx.personId === null ? {} : { actor: ctx.personName }),
    ...(aboutPerson ? { about: about.label } : {}),
  };
  const salt = randomBytes(16).toString("hex");
  const document: TrailDocument = {
    form: ENTRY_FORM,
    lab: ctx.labId,
    number: place.number,
    at: place.at.toISOString(),
    action: input.action,
    shape,
    demo: ctx.isDemo,
    actor: { id: ctx.personId, role: ctx.actingRole === "" ? null : ctx.actingRole },
    about: {
      kind: about.kind,
      id: about.id,
      label: aboutPerson ? null : about.label,
      instrument: about.instrumentId ?? null,
      check: about.checkId ?? null,
    },
    before: plainJson(input.before),
    after: plainJson(input.after),
    why: input.why ?? null,
    rows: place.rows,
    personal: Object.fromEntries(Object.entries(data).map(([key, value]) => [key, personalHash(salt, value)])),
    previous: place.previous,
  };
  const canonical = canonicalText(document);
  return {
    entry: {
      labId: ctx.labId,
      number: place.number,
      at: place.at,
      action: input.action,
      shape,
      personId: ctx.personId,
      aboutKind: about.kind,
      aboutId: about.id,
      instrumentId: about.instrumentId ?? null,
      checkId: about.checkId ?? null,
      demo: ctx.isDemo,
      canonical,
      previousHash: place.previous,
      hash: sha256Hex(canonical),
    },
    personal: Object.keys(data).length === 0 ? null : { labId: ctx.labId, number: place.number, salt, data },
  };
}

/** Through JSON once: Dates become ISO text, undefined keys go. */
const plainJson = (value: Record<string, unknown> | null | undefined): unknown =>
  value === null || value === undefined ? null : JSON.parse(JSON.stringify(value));

/**
 * Keep the request's key in the same transaction as its effect. A second request with the same key waits here for the
 * first one's commit and then fails on the key, so that its effect is rolled back.
 */
async function keepRequestKey(tx: Tx, ctx: Context, at: Date): Promise<void> {
  const claim = ctx.idempotency;
  if (claim === undefined || claim.claimed || ctx.personId === null) return;
  const kept = await tx
    .insert(idempotencyKeys)
    .values({
      labId: ctx.labId,
      personId: ctx.personId,
      route: claim.route,
      key: claim.key,
      requestHash: claim.requestHash,
      createdAt: at,
    })
    // A key is forgotten after 24 hours.
    .onConflictDoUpdate({
      target: [idempotencyKeys.labId, idempotencyKeys.personId, idempotencyKeys.route, idempotencyKeys.key],
      set: { requestHash: claim.requestHash, status: null, reply: null, createdAt: at },
      setWhere: sql`${idempotencyKeys.createdAt} < clock_timestamp() - interval '24 hours'`,
    })
    .returning({ key: idempotencyKeys.key });
  if (kept.length === 0)
    throw problem("repeated-request", "This was sent before and has been carried out. Reload the page to see it.");
  claim.claimed = true;
}
