/** Sending jobs inside the transaction that causes them; workers are started by jobs/workers.ts. */
import { sql, type SQL } from "drizzle-orm";
import pg from "pg";
import PgBoss from "pg-boss";
import type { Tx } from "../db/tenancy.ts";
import type { QueueName } from "./queues.ts";

/** Ids and the lab only: what is done is looked up when the job runs. */
export type JobPayload = { labId?: string; id?: string };

export interface Jobs {
  /**
   * Send a job that exists if and only if the transaction commits.
   *
   * @throws when the queue is missing: pg-boss would lose the job in silence
   */
  send(tx: Tx, queue: QueueName, payload: JobPayload, options?: { startAfter?: Date }): Promise<void>;
}

export function makeJobs(boss: PgBoss): Jobs {
  return {
    async send(tx, queue, payload, options = {}) {
      const id = await boss.send(queue, payload, {
        db: {
          executeSql: (text, values) =>
            tx.execute(fromNumbered(text, values as unknown[])) as unknown as Promise<{ rows: unknown[] }>,
        },
        ...(options.startAfter === undefined ? {} : { startAfter: options.startAfter }),
        retryLimit: 8,
        retryDelay: 20,
        retryBackoff: true,
      });
      if (id === null)
        throw new Error(`The queue ${queue} took no job. The database's migrations may be older than the server.`);
    },
  };
}

/** pg-boss as the app runs it: neither schema nor queues are made here, the migrating owner did that. */
export function openBoss(databaseUrl: string, options: { worker: boolean }): PgBoss {
  return new PgBoss({
    connectionString: databaseUrl,
    schema: "pgboss",
    migrate: false,
    supervise: options.worker,
    schedule: options.worker,
    max: 3,
    application_name: "wavekeep-jobs",
  });
}

/**
 * SQL text with $1, $2 … as a query of the transaction, values written in as quoted literals: the query builder would give
 * a value that is used twice two numbers, and PostgreSQL could then not tell the type of each.
 */
function fromNumbered(text: string, values: readonly unknown[]): SQL {
  return sql.raw(text.replace(/\$(\d+)/g, (_, number: string) => literal(values[Number(number) - 1])));
}

function literal(value: unknown): string {
  if (value === null || value === undefined) return "null";
  if (value instanceof Date) return pg.escapeLiteral(value.toISOString());
  if (typeof value === "object") return pg.escapeLiteral(JSON.stringify(value));
  return typeof value === "number" || typeof value === "boolean" ? String(value) : pg.escapeLiteral(String(value));
}
