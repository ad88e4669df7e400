/** The outbox: a mail is committed with its cause, and one job with it; delivery comes afterwards. */
import { eq, and } from "drizzle-orm";
import { newId } from "../db/columns.ts";
import { mailOutbox, memberships, people } from "../db/schema/index.ts";
import { recordNow, type Context, type Tx } from "../db/tenancy.ts";
import type { Jobs } from "../jobs/jobs.ts";
import { queues } from "../jobs/queues.ts";

export interface MailInput {
  /** A member of the lab, or an address of nobody here. */
  to: { personId: string } | { address: string };
  subject: string;
  /** Plain text; a link stands on a line of its own. */
  text: string;
  /** What caused it, and for which period: queued once, however often it is asked for. */
  causeKey: string;
}

/**
 * Queue a mail in the causing transaction, before `writeTrail`.
 *
 * @returns false when the same cause was queued before, or the person is no member any more
 */
export async function queueMail(tx: Tx, ctx: Context, jobs: Jobs, mail: MailInput): Promise<boolean> {
  const to =
    "personId" in mail.to ? await addressOf(tx, ctx, mail.to.personId) : { personId: null, address: mail.to.address };
  if (to === null) return false;
  const id = newId();
  const stored = await tx
    .insert(mailOutbox)
    .values({
      id,
      labId: ctx.labId,
      toPersonId: to.personId,
      toAddress: to.address,
      subject: (ctx.isDemo ? "[demo] " : "") + mail.subject.replace(/[\r\n]+/g, " ").slice(0, 200),
      text: mail.text,
      causeKey: mail.causeKey,
      messageId: `<${id}@wavekeep>`,
      queuedAt: await recordNow(tx),
    })
    .onConflictDoNothing({ target: [mailOutbox.labId, mailOutbox.causeKey] })
    .returning({ id: mailOutbox.id });
  if (stored.length === 0) return false;
  await jobs.send(tx, queues.deliverMail, { labId: ctx.labId, id });
  return true;
}

async function addressOf(
  tx: Tx,
  ctx: Context,
  personId: string,
): Promise<{ personId: string; address: string } | null> {
  const [found] = await tx
    .select({ email: people.email, endedAt: memberships.endedAt })
    .from(memberships)
    .innerJoin(people, eq(people.id, memberships.personId))
    .where(and(eq(memberships.labId, ctx.labId), eq(memberships.personId, personId)));
  return found === undefined || found.endedAt !== null ? null : { personId, address: found.email };
}
