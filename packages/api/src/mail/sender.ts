/** Delivery: an outbox row is claimed, handed over once, and marked. Twice only after a crash in that very moment. */
import { and, eq, isNull, lt, or, sql } from "drizzle-orm";
import { createTransport, type Transporter } from "nodemailer";
import type { Database } from "../db/connection.ts";
import { mailOutbox } from "../db/schema/index.ts";
import { asWavekeep, inLab, recordNow, type Context, type Tx } from "../db/tenancy.ts";
import { findLab } from "../labs/queries.ts";
import { writeTrail } from "../records/trail.ts";

export interface MailSender {
  /**
   * Deliver one mail.
   *
   * @throws when the mail server does not take it: the job is tried again
   */
  deliver(labId: string, mailId: string): Promise<void>;
  close(): void;
}

/** A claim older than this was left by a process that died. */
const CLAIM_MINUTES = 5;
/** After so many tries the mail is given up, and the trail says so. */
const MOST_ATTEMPTS = 8;

export function openSender(db: Database, options: { smtpUrl: string; from: string }): MailSender {
  const transport: Transporter = createTransport(options.smtpUrl, { from: options.from });
  return {
    close: () => transport.close(),
    async deliver(labId, mailId) {
      const bare = asWavekeep({ labId, isDemo: false, zone: "Etc/UTC" });
      const claimed = await inLab(db, bare, async (tx) => {
        const now = await recordNow(tx);
        const [mail] = await tx
          .update(mailOutbox)
          .set({ claimedAt: now, attempts: sql`${mailOutbox.attempts} + 1` })
          .where(
            and(
              eq(mailOutbox.id, mailId),
              isNull(mailOutbox.sentAt),
              lt(mailOutbox.attempts, MOST_ATTEMPTS),
              or(
                isNull(mailOutbox.claimedAt),
                lt(mailOutbox.claimedAt, new Date(now.getTime() - CLAIM_MINUTES * 60_000)),
              ),
            ),
          )
          .returning();
        return mail === undefined ? null : { mail, lab: await findLab(tx, labId) };
      });
      if (claimed === null) return;
      const { mail, lab } = claimed;
      const ctx = asWavekeep({ labId, isDemo: lab.isDemo, zone: lab.zone });
      try {
        await transport.sendMail({
          to: mail.toAddress,
          subject: mail.subject,
          text: mail.text,
          messageId: mail.messageId,
          date: mail.queuedAt,
        });
      } catch (error) {
        await keepFailure(db, ctx, mail, error as Error);
        throw error;
      }
      await inLab(db, ctx, async (tx) => {
        await tx
          .update(mailOutbox)
          .set({ sentAt: await recordNow(tx), lastError: null })
          .where(eq(mailOutbox.id, mail.id));
        await writeTrail(tx, ctx, {
          action: "mail.sent",
          about: { kind: "mail", id: mail.id, label: mail.toAddress },
          after: { subject: mail.subject },
        });
      });
    },
  };
}

/** Mail that waits for half an hour or more and was not given up: its job may be lost. */
export async function listWaitingMail(tx: Tx): Promise<string[]> {
  const rows = await tx
    .select({ id: mailOutbox.id })
    .from(mailOutbox)
    .where(
      and(
        isNull(mailOutbox.sentAt),
        lt(mailOutbox.attempts, MOST_ATTEMPTS),
        lt(mailOutbox.queuedAt, sql`clock_timestamp() - interval '30 minutes'`),
      ),
    )
    .limit(500);
  return rows.map(({ id }) => id);
}

async function keepFailure(
  db: Database,
  ctx: Context,
  mail: typeof mailOutbox.$inferSelect,
  error: Error,
): Promise<void> {
  await inLab(db, ctx, async (tx) => {
    await tx
      .update(mailOutbox)
      .set({ claimedAt: null, lastError: error.message.slice(0, 500) })
      .where(eq(mailOutbox.id, mail.id));
    if (mail.attempts < MOST_ATTEMPTS) return;
    await writeTrail(tx, ctx, {
      action: "mail.failed",
      about: { kind: "mail", id: mail.id, label: mail.toAddress },
      after: { subject: mail.subject },
    });
  });
}
