/** The pool of the app's own login role. The owner's address never reaches this process. */
import { drizzle, type NodePgDatabase } from "drizzle-orm/node-postgres";
import pg from "pg";
import * as schema from "./schema/index.ts";

export interface Database {
  pool: pg.Pool;
  orm: NodePgDatabase<typeof schema>;
  close(): Promise<void>;
}

/** Statements that one connection keeps prepared; what comes beyond them is planned each time, as without. */
const MOST_PREPARED = 400;

/**
 * A connection that prepares each statement once: PostgreSQL then parses and plans it once a connection and not once a
 * call, which is most of the time of a short query with many joins.
 */
class PreparingClient extends pg.Client {
  private readonly names = new Map<string, string>();

  // The driver's own signatures are many; what is passed on is what came, but for the name.
  override query(...args: unknown[]): never {
    const [config, values] = args as [unknown, unknown];
    if (isPlainQuery(config) && (config.values !== undefined || Array.isArray(values))) {
      const name = this.nameOf(config.text);
      if (name !== undefined) args[0] = { ...config, name };
    }
    return (super.query as (...all: unknown[]) => never).apply(this, args);
  }

  private nameOf(text: string): string | undefined {
    const known = this.names.get(text);
    if (known !== undefined || this.names.size >= MOST_PREPARED) return known;
    const name = `wk${this.names.size + 1}`;
    this.names.set(text, name);
    return name;
  }
}

const isPlainQuery = (config: unknown): config is { text: string; name?: string; values?: unknown[] } =>
  typeof config === "object" &&
  config !== null &&
  typeof (config as { text?: unknown }).text === "string" &&
  typeof (config as { submit?: unknown }).submit !== "function" &&
  (config as { name?: unknown }).name === undefined;

/** Open a pool. Connections are made when first needed; a broken idle one is dropped by the pool. */
export function openDatabase(url: string, options: { max?: number } = {}): Database {
  const pool = new pg.Pool({
    Client: PreparingClient,
    // Questions that do not depend on each other go out together, in the order they were asked.
    pipeline: true,
    connectionString: url,
    max: options.max ?? 10,
    // Times are written and hashed in UTC, whatever the server's own zone is.
    options: "-c timezone=UTC -c statement_timeout=30000 -c idle_in_transaction_session_timeout=60000",
  });
  // Without a listener an idle connection cut by the server would end the process.
  pool.on("error", () => {});
  return { pool, orm: drizzle(pool, { schema }), close: () => pool.end() };
}
