/**
 * Set-up of the tests that need PostgreSQL: a cluster (the one `npm test` started, or a throw-away one of its own), and
 * in it a migrated template database from which every test file gets a copy.
 */
import path from "node:path";
import pg from "pg";
import type { TestProject } from "vitest/node";
import { migrate } from "@wavekeep/api/db/migrate";
import { throwAwayCluster } from "../../scripts/postgres.mjs";

export interface TestCluster {
  /** Address of the cluster's superuser, database `postgres`. */
  ownerUrl: string;
  /** Name of the migrated template database. */
  template: string;
  /** The app's login role, which row security binds. */
  appRole: { name: string; password: string };
}

declare module "vitest" {
  export interface ProvidedContext {
    testCluster: TestCluster;
  }
}

export default async function setUpDatabase(project: TestProject): Promise<() => Promise<void>> {
  const given = process.env["WAVEKEEP_TEST_DATABASE"];
  const own = given === undefined ? await throwAwayCluster() : null;
  const ownerUrl = given ?? own!.ownerUrl("postgres");
  const template = `template_${process.pid}`;
  const appRole = { name: "wavekeep_app", password: "app-role-of-the-tests" };
  const owner = new pg.Client({ connectionString: ownerUrl });
  await owner.connect();
  await owner.query(`create database ${template}`);
  await owner.end();
  await migrate(withDatabase(ownerUrl, template), {
    appRole,
    migrationsDir: path.resolve(import.meta.dirname, "../../drizzle"),
  });
  project.provide("testCluster", { ownerUrl, template, appRole });
  return async () => own?.remove();
}

/** The same address with another database. */
export function withDatabase(url: string, database: string): string {
  const changed = new URL(url);
  changed.pathname = `/${database}`;
  return changed.href;
}
