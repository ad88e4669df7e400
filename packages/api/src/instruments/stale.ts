/** Two people at one form: the later one is told who was faster, and keeps what was typed. */
import { and, desc, eq, isNotNull } from "drizzle-orm";
import { people, trailEntries } from "../db/schema/index.ts";
import type { Context, Tx } from "../db/tenancy.ts";
import { problem } from "../http/problem.ts";
import { momentText } from "./dates.ts";

/**
 * Refuse a form that was filled in on an older state of its row.
 *
 * @param about  the row: its id as the trail names it, and what people call it
 * @throws problem "stale", naming who changed the row and when
 */
export async function assertFreshFor(
  tx: Tx,
  ctx: Context,
  stored: { version: number },
  sent: { version: number },
  about: { id: string; what: string },
): Promise<void> {
  if (stored.version === sent.version) return;
  const [last] = await tx
    .select({ at: trailEntries.at, name: people.name, personId: trailEntries.personId })
    .from(trailEntries)
    .leftJoin(people, eq(people.id, trailEntries.personId))
    .where(and(eq(trailEntries.aboutId, about.id), isNotNull(trailEntries.personId)))
    .orderBy(desc(trailEntries.number))
    .limit(1);
  const who =
    last === undefined
      ? "somebody else"
      : last.personId === ctx.personId
        ? "you, in another window,"
        : (last.name ?? "somebody else");
  const when = last === undefined ? "" : ` on ${momentText(ctx.zone, last.at)}`;
  throw problem(
    "stale",
    `${about.what} was changed by ${who}${when} while this form was open. Nothing was stored and nothing of yours is lost: reload, compare, and save again.`,
  );
}
