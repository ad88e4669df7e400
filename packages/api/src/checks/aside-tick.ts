/** A failing draft that is left for a day is set aside by Wavekeep: its configuration goes on hold without anybody's doing. */
import { sql } from "drizzle-orm";
import type { Database } from "../db/connection.ts";
import { asWavekeep, inLab, recordNow } from "../db/tenancy.ts";
import { setAsideLocked } from "./draft.ts";
import { findCheck, findState, lockDraft } from "./queries.ts";
import type { HoldWork } from "./work.ts";

const leftMs = 24 * 3600 * 1000;

/** @returns how many drafts were set aside */
export async function setAsideLeftDrafts(
  work: HoldWork & { db: Database },
  lab: Parameters<typeof asWavekeep>[0],
): Promise<number> {
  const ctx = asWavekeep(lab);
  const left = await inLab(work.db, ctx, async (tx) => {
    const before = new Date((await recordNow(tx)).getTime() - leftMs);
    // The last analysis of any attempt counts: abandoning a failing attempt does not make it pass.
    const { rows } = await tx.execute<{ check_id: string }>(sql`
      select d.check_id from check_drafts d
      join lateral (select a.verdict, a.made_at from analyses a where a.lab_id = d.lab_id and a.check_id = d.check_id order by a.version desc limit 1) last on true
      join lateral (select e.kind from check_events e where e.lab_id = d.lab_id and e.check_id = d.check_id and e.kind <> 'acknowledged' order by e.sequence desc limit 1) st on true
      where d.open and last.verdict = 'fail' and st.kind <> 'set-aside' and greatest(d.saved_at, last.made_at) < ${before.toISOString()}::timestamptz`);
    return rows.map((row) => row.check_id);
  });
  let count = 0;
  for (const checkId of left) {
    await inLab(work.db, ctx, async (tx) => {
      const check = await findCheck(tx, checkId);
      const draft = await lockDraft(tx, checkId);
      if (!draft.open || (await findState(tx, checkId)) === "set-aside") return;
      await setAsideLocked(tx, ctx, work, check, draft, "Left for a day with a verdict out of tolerance.");
      count += 1;
    });
  }
  return count;
}
