/**
 * Requests that may be repeated: with an `Idempotency-Key` the effect happens once, and a repetition gets the first reply.
 *
 * The key is kept by `writeTrail` in the transaction of the effect; here it is looked up before, and the reply is put
 * beside it afterwards.
 */
import type { Request } from "express";
import { and, eq, sql } from "drizzle-orm";
import type { RouteName } from "../contract/routes.ts";
import type { Database } from "../db/connection.ts";
import { idempotencyKeys } from "../db/schema/index.ts";
import { inLab, type Context } from "../db/tenancy.ts";
import { canonicalText, sha256Hex } from "../records/canonical.ts";
import { Problem, problem } from "./problem.ts";
import type { ReceivedFile } from "./uploads.ts";

interface Attempt {
  name: RouteName;
  req: Request;
  ctx: Context | null;
  input: unknown;
  files: ReceivedFile[];
}

/** A unique key was violated by a second request (PostgreSQL's SQLSTATE). */
const UNIQUE_VIOLATION = "23505";

/** Run the handler once per key; without a key, or on a read, simply run it. */
export async function runOnce<T>(db: Database, attempt: Attempt, handler: () => Promise<T>): Promise<T> {
  const key = attempt.req.get("idempotency-key");
  const { ctx } = attempt;
  if (key === undefined || attempt.req.method === "GET" || ctx === null || ctx.personId === null) return handler();
  if (!/^[\x21-\x7e]{8,200}$/.test(key))
    throw problem("bad-request", "The Idempotency-Key must be 8 to 200 plain characters.");
  const requestHash = sha256Hex(
    canonicalText({
      input: JSON.parse(JSON.stringify(attempt.input ?? null)),
      files: attempt.files.map((file) => [file.name, sha256Hex(file.bytes)]),
    }),
  );
  const claim = { route: attempt.name, key, requestHash, claimed: false };

  const before = await findReply<T>(db, ctx, claim);
  if (before !== null) return before.reply;
  ctx.idempotency = claim;
  try {
    const outcome = await handler();
    if (claim.claimed) await keepReply(db, ctx, claim, outcome);
    return outcome;
  } catch (error) {
    const lostRace = (error instanceof Problem && error.status === 409) || sqlState(error) === UNIQUE_VIOLATION;
    if (lostRace) {
      const first = await waitForReply<T>(db, ctx, claim);
      if (first !== null) return first.reply;
    }
    throw error;
  }
}

interface Claim {
  route: string;
  key: string;
  requestHash: string;
}

const claimed = (ctx: Context, claim: Claim) =>
  and(
    eq(idempotencyKeys.labId, ctx.labId),
    eq(idempotencyKeys.personId, ctx.personId!),
    eq(idempotencyKeys.route, claim.route),
    eq(idempotencyKeys.key, claim.key),
    sql`${idempotencyKeys.createdAt} > clock_timestamp() - interval '24 hours'`,
  );

async function findReply<T>(db: Database, ctx: Context, claim: Claim): Promise<{ reply: T } | null> {
  const [row] = await inLab(db, ctx, (tx) => tx.select().from(idempotencyKeys).where(claimed(ctx, claim)));
  if (row === undefined) return null;
  if (row.requestHash !== claim.requestHash) {
    throw problem(
      "repeated-request",
      "This key was used for a different request. Nothing was changed; send this one with a new key.",
    );
  }
  if (row.status === null) {
    throw problem("repeated-request", "This was sent before and has been carried out. Reload the page to see it.");
  }
  return { reply: row.reply as T };
}

/** The first request of the same key commits its effect a moment before its reply is kept. */
async function waitForReply<T>(db: Database, ctx: Context, claim: Claim): Promise<{ reply: T } | null> {
  for (let attempt = 0; attempt < 20; attempt += 1) {
    try {
      return await findReply<T>(db, ctx, claim);
    } catch (error) {
      if (!(error instanceof Problem) || attempt === 19) throw error;
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }
  return null;
}

async function keepReply(db: Database, ctx: Context, claim: Claim, outcome: unknown): Promise<void> {
  await inLab(db, ctx, (tx) =>
    tx
      .update(idempotencyKeys)
      .set({ status: 200, reply: outcome === undefined ? null : (JSON.parse(JSON.stringify(outcome)) as unknown) })
      .where(claimed(ctx, claim)),
  );
}

/** SQLSTATE of a database error, through the wrapper that the query builder puts around it. */
export function sqlState(error: unknown): string | null {
  for (let at: unknown = error; typeof at === "object" && at !== null; at = (at as { cause?: unknown }).cause) {
    const code = (at as { code?: unknown }).code;
    if (typeof code === "string" && /^[0-9A-Z]{5}$/.test(code)) return code;
  }
  return null;
}
