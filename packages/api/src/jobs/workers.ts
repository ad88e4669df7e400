/** Workers of the queues. Every tick asks what is due as of now, lab by lab; each effect has a key of cause and period. */
import type PgBoss from "pg-boss";
import { lt, sql } from "drizzle-orm";
import { idempotencyKeys, rateCounters, sessions } from "../db/schema/index.ts";
import { asWavekeep, inLab, inNoLab } from "../db/tenancy.ts";
import { listLabsToVisit, type VisitedLab } from "../labs/queries.ts";
import { listWaitingMail, type MailSender } from "../mail/sender.ts";
import { signDailyHead } from "../records/service.ts";
import type { Services } from "../services.ts";
import type { JobPayload } from "./jobs.ts";
import { queues, type QueueName } from "./queues.ts";

/** What other capabilities do at a tick, in one lab. */
export interface Ticks {
  dueAndOverdue(services: Services, lab: VisitedLab): Promise<void>;
  asideDrafts(services: Services, lab: VisitedLab): Promise<void>;
}

/** How often a worker looks for jobs. */
const POLL_SECONDS = 2;

export async function startWorkers(
  boss: PgBoss,
  services: Services,
  sender: MailSender | null,
  ticks: Ticks,
): Promise<void> {
  const { logger } = services;
  const work = (queue: QueueName, handler: (payload: JobPayload) => Promise<void>) =>
    boss.work<JobPayload>(queue, { pollingIntervalSeconds: POLL_SECONDS, batchSize: 1 }, async ([job]) => {
      try {
        await handler(job!.data ?? {});
      } catch (error) {
        logger.error({ err: error as Error, queue, job: job!.id }, "a job failed and will be tried again");
        throw error;
      }
    });
  if (sender !== null) {
    await work(queues.deliverMail, async ({ labId, id }) => {
      if (labId !== undefined && id !== undefined) await sender.deliver(labId, id);
    });
  }
  await work(queues.dueAndOverdue, () =>
    inEveryLab(services, "due and overdue", (lab) => ticks.dueAndOverdue(services, lab)),
  );
  await work(queues.asideDrafts, () =>
    inEveryLab(services, "drafts left for a day", (lab) => ticks.asideDrafts(services, lab)),
  );
  await work(queues.signHeads, () =>
    inEveryLab(services, "signing the head", async (lab) => void (await signDailyHead(services, lab))),
  );
  await work(queues.sweep, () => sweep(services));
  // What fell due while nothing ran is asked about at once, not at the next full tick.
  for (const queue of [queues.asideDrafts, queues.dueAndOverdue]) await boss.send(queue, {});
}

/** One lab's failure does not keep the others waiting. */
async function inEveryLab(
  { db, logger }: Services,
  what: string,
  visit: (lab: VisitedLab) => Promise<void>,
): Promise<void> {
  const labs = await inNoLab(db, null, (tx) => listLabsToVisit(tx));
  let failed: unknown;
  for (const lab of labs) {
    try {
      await visit(lab);
    } catch (error) {
      logger.error({ err: error as Error, lab: lab.labId, what }, "a tick failed in a lab");
      failed = error;
    }
  }
  if (failed !== undefined) throw failed as Error;
}

/**
 * Rows with an end: sessions past their time, counters of past windows, request keys older than a day. And mail that still
 * waits (no mail server was set, or its job was lost) is sent on its way again.
 */
async function sweep(services: Services): Promise<void> {
  await inNoLab(services.db, null, async (tx) => {
    await tx.delete(sessions).where(lt(sessions.expire, sql`clock_timestamp()`));
    await tx.delete(rateCounters).where(lt(rateCounters.expiresAt, sql`clock_timestamp()`));
  });
  await inEveryLab(services, "sweeping", (lab) =>
    inLab(services.db, asWavekeep(lab), async (tx) => {
      await tx
        .delete(idempotencyKeys)
        .where(lt(idempotencyKeys.createdAt, sql`clock_timestamp() - interval '24 hours'`));
      for (const id of await listWaitingMail(tx))
        await services.jobs.send(tx, queues.deliverMail, { labId: lab.labId, id });
    }),
  );
}
