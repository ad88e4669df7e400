/** Records: the trail read as sentences, whether its chain holds, and the daily signature over its head. */
import type { z } from "zod";
import type { trailQuery } from "../contract/records.ts";
import { asWavekeep, inLab, recordNow, type Context } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { findLab } from "../labs/queries.ts";
import { queueMail } from "../mail/outbox.ts";
import { headMail } from "../mail/texts.ts";
import { listMembers } from "../people/queries.ts";
import type { Services } from "../services.ts";
import { presentChain, presentEntry } from "./present.ts";
import * as queries from "./queries.ts";
import { storeSignedHead, writeTrail } from "./trail.ts";
import { verifyChain } from "./verify.ts";

/** Entries, newest first, a page at a time. */
export function listTrail({ db }: Services, ctx: Context, query: z.output<typeof trailQuery>) {
  const { after, limit, ...filter } = query;
  const below = after === undefined ? undefined : Number(after);
  if (below !== undefined && (!Number.isSafeInteger(below) || below < 1))
    throw problem("invalid-input", "This page of the trail does not exist. Begin at the newest entry.");
  return inLab(db, ctx, async (tx) => {
    const rows = await queries.listEntries(tx, { ...filter, below }, ctx.zone, limit + 1);
    const shown = rows.slice(0, limit);
    return { items: shown.map(presentEntry), next: rows.length > limit ? String(shown.at(-1)!.number) : null };
  });
}

export const trailDays = ({ db }: Services, ctx: Context) =>
  inLab(db, ctx, async (tx) => ({ days: await queries.listDays(tx, ctx.zone), kinds: await queries.listKinds(tx) }));

/** The whole chain, verified now. */
export async function readChain({ db, signer }: Services, ctx: Context) {
  const chain = await verifyChain(db, ctx, signer);
  return inLab(db, ctx, async (tx) => {
    const counts = await queries.countChecksAndAttempts(tx);
    return presentChain(chain, {
      zone: ctx.zone,
      checkedAt: await recordNow(tx),
      keyFingerprint: signer.fingerprint,
      ...counts,
    });
  });
}

/**
 * Sign the head of a lab's chain and mail it to the managers and to the address the lab names: once a day of the lab's
 * zone, and only when the chain grew by more than the last signature's own entry.
 *
 * @returns whether a head was signed
 */
export function signDailyHead(services: Services, lab: Parameters<typeof asWavekeep>[0]): Promise<boolean> {
  const { db, jobs, signer } = services;
  const ctx = asWavekeep(lab);
  return inLab(db, ctx, async (tx) => {
    const now = await recordNow(tx);
    const today = dayOf(now, ctx.zone);
    const [head, last] = [await queries.findOptionalLastEntry(tx), await queries.findOptionalLastDailyHead(tx)];
    if (head === null || (last !== null && (dayOf(last.signedAt, ctx.zone) === today || last.number >= head.number)))
      return false;
    const row = await findLab(tx, ctx.labId);
    const managers = (await listMembers(tx)).filter(
      (member) => member.endedAt === null && member.roles.includes("manager"),
    );
    const mail = headMail({
      labName: row.name,
      number: head.number,
      hash: head.hash,
      at: head.at.toISOString(),
      fingerprint: signer.fingerprint,
      signature: signer.sign(ctx.labId, head.number, head.hash),
    });
    for (const manager of managers)
      await queueMail(tx, ctx, jobs, {
        to: { personId: manager.id },
        ...mail,
        causeKey: `head:${today}:${manager.id}`,
      });
    if (row.headMail !== null)
      await queueMail(tx, ctx, jobs, { to: { address: row.headMail }, ...mail, causeKey: `head:${today}:outside` });
    const written = await writeTrail(tx, ctx, {
      action: "head.signed",
      about: { kind: "head", id: head.hash, label: `entry ${head.number}` },
      after: { number: head.number, hash: head.hash, keyFingerprint: signer.fingerprint },
    });
    await storeSignedHead(tx, ctx.labId, written, signer, "daily");
    return true;
  });
}

/** Date in a zone, yyyy-mm-dd. */
const dayOf = (at: Date, zone: string): string =>
  new Intl.DateTimeFormat("en-CA", { timeZone: zone, year: "numeric", month: "2-digit", day: "2-digit" }).format(at);
