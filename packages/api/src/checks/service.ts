/** Reading checks: the list, one check, its drawing. */
import type { z } from "zod";
import type { SpectrumDrawing } from "@wavekeep/core";
import type { Check, checksQuery, checksReply } from "../contract/checks.ts";
import type { Database } from "../db/connection.ts";
import { inLab, type Context } from "../db/tenancy.ts";
import { pageAfter, pageNext } from "../http/keyset.ts";
import { notFound } from "../http/problem.ts";
import { listCheckRows } from "./list-checks.ts";
import { findDrawing } from "./queries.ts";
import { readCheck } from "./read-check.ts";

export function listChecks(
  db: Database,
  ctx: Context,
  query: z.output<typeof checksQuery>,
): Promise<z.input<typeof checksReply>> {
  const after = pageAfter(query.after);
  return inLab(db, ctx, async (tx) => {
    const rows = await listCheckRows(tx, {
      instrumentId: query.instrumentId,
      configurationId: query.configurationId,
      states: query.state === undefined ? undefined : [query.state],
      verdict: query.verdict,
      personId: query.personId,
      text: query.q,
      after: after === undefined ? undefined : { begunAt: after.at, id: after.id },
      limit: query.limit + 1,
    });
    const shown = rows.slice(0, query.limit).map(({ summary }) => summary);
    const last = shown.at(-1);
    return {
      items: shown,
      next: rows.length > query.limit && last !== undefined ? pageNext({ at: last.begunAt, id: last.id }) : null,
    };
  });
}

export const readLabCheck = (db: Database, ctx: Context, checkId: string): Promise<Check> =>
  inLab(db, ctx, (tx) => readCheck(tx, ctx, checkId));

/** @throws problem "not-found" for a version that never was, or has no drawing */
export function readDrawing(db: Database, ctx: Context, checkId: string, version: string): Promise<SpectrumDrawing> {
  if (!/^\d{1,6}$/.test(version)) throw notFound("A drawing of this analysis");
  return inLab(db, ctx, (tx) => findDrawing(tx, checkId, Number(version)));
}
