/** A database of its own for each test file: a copy of the migrated template, reached as the app's role or as owner. */
import { randomUUID } from "node:crypto";
import pg from "pg";
import { afterAll, beforeAll, inject } from "vitest";
import { withDatabase } from "./database-setup.ts";

export interface TestDatabase {
  /** Address for the app's login role, bound by row security. */
  appUrl: string;
  /** Address for the owner, whom row security does not bind: only to look at or prepare what the app cannot. */
  ownerUrl: string;
  /** Pools on both, closed with the file. */
  app: pg.Pool;
  owner: pg.Pool;
}

/** Make a copy of the template. `close` ends the pools and drops it. */
export async function openTestDatabase(): Promise<TestDatabase & { close: () => Promise<void> }> {
  const cluster = inject("testCluster");
  const name = `test_${randomUUID().replaceAll("-", "")}`;
  await onServer(cluster.ownerUrl, `create database ${name} template ${cluster.template}`);
  const ownerUrl = withDatabase(cluster.ownerUrl, name);
  const login = new URL(ownerUrl);
  login.username = cluster.appRole.name;
  login.password = cluster.appRole.password;
  const app = new pg.Pool({ connectionString: login.href, max: 5 });
  const owner = new pg.Pool({ connectionString: ownerUrl, max: 2 });
  // The database is dropped with force, which cuts connections that a test left open.
  for (const pool of [app, owner]) pool.on("error", () => {});
  return {
    appUrl: login.href,
    ownerUrl,
    app,
    owner,
    close: async () => {
      await Promise.all([app.end(), owner.end()]);
      await onServer(cluster.ownerUrl, `drop database ${name} with (force)`);
    },
  };
}

/**
 * The database of this test file: call it once at the top level; the fields may be used inside hooks and tests.
 *
 * @example const database = useTestDatabase();  test("…", () => database.app.query("select 1"));
 */
export function useTestDatabase(): TestDatabase {
  const handle = {} as TestDatabase;
  let close: () => Promise<void> = async () => {};
  beforeAll(async () => {
    const opened = await openTestDatabase();
    close = opened.close;
    Object.assign(handle, opened);
  });
  afterAll(() => close());
  return handle;
}

async function onServer(url: string, statement: string): Promise<void> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    await client.query(statement);
  } finally {
    await client.end();
  }
}
