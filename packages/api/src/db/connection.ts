/** The pool of the app's own login role. The owner's address never reaches this process. */
import { drizzle, type NodePgDatabase } from "drizzle-orm/node-postgres";
import pg from "pg";
import * as schema from "./schema/index.ts";

export interface Database {
  pool: pg.Pool;
  orm: NodePgDatabase<typeof schema>;
  close(): Promise<void>;
}

/** Open a pool. Connections are made when first needed; a broken idle one is dropped by the pool. */
export function openDatabase(url: string, options: { max?: number } = {}): Database {
  const pool = new pg.Pool({
    connectionString: url,
    max: options.max ?? 10,
    // Times are written and hashed in UTC, whatever the server's own zone is.
    options: "-c timezone=UTC -c statement_timeout=30000 -c idle_in_transaction_session_timeout=60000",
  });
  // Without a listener an idle connection cut by the server would end the process.
  pool.on("error", () => {});
  return { pool, orm: drizzle(pool, { schema }), close: () => pool.end() };
}
