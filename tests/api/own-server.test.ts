/** A PostgreSQL of the lab's own, whose owner is no superuser: the README's example. */
import path from "node:path";
import pg from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { migrate } from "@wavekeep/api/db/migrate";
import { throwAwayCluster } from "../../scripts/postgres.mjs";

const migrationsDir = path.resolve(import.meta.dirname, "../../drizzle");
let cluster: Awaited<ReturnType<typeof throwAwayCluster>>;

/** Address of a role in the lab's database. */
function addressOf(role: string, password: string): string {
  const url = new URL(cluster.ownerUrl("lab"));
  url.username = role;
  url.password = password;
  return url.href;
}

async function ask<T extends pg.QueryResultRow>(url: string, sql: string): Promise<T[]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    return (await client.query<T>(sql)).rows;
  } finally {
    await client.end();
  }
}

beforeAll(async () => {
  cluster = await throwAwayCluster();
  await ask(cluster.ownerUrl("postgres"), "create role lab_owner login createrole password 'owner-of-the-lab'");
  await ask(cluster.ownerUrl("postgres"), "create database lab owner lab_owner");
}, 60_000);
afterAll(() => cluster.remove());

test("an owner with CREATEROLE migrates, and makes the app's role with a login and no powers; again changes nothing", async () => {
  const owner = addressOf("lab_owner", "owner-of-the-lab");
  const appRole = { name: "wavekeep_app", password: "of-the-app" };
  await migrate(owner, { appRole, migrationsDir });
  await migrate(owner, { appRole, migrationsDir });
  const app = addressOf("wavekeep_app", "of-the-app");
  expect(
    await ask(
      app,
      "select rolsuper, rolbypassrls, rolcreaterole, rolcreatedb from pg_roles where rolname = current_user",
    ),
  ).toEqual([{ rolsuper: false, rolbypassrls: false, rolcreaterole: false, rolcreatedb: false }]);
  expect(await ask(app, "select id from labs")).toEqual([]);
  await expect(ask(app, "select create_lab(gen_random_uuid(), 'x', 'Etc/UTC', null, false)")).rejects.toMatchObject({
    code: "42501",
  });
}, 60_000);
