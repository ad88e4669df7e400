/**
 * The migrating step: roles, schema, queues. Run by the owner, in a process of its own; the server never sees the
 * owner's address.
 */
import { drizzle } from "drizzle-orm/node-postgres";
import { migrate as runMigrations } from "drizzle-orm/node-postgres/migrator";
import pg from "pg";
import PgBoss from "pg-boss";
import { queues, ticks } from "../jobs/queues.ts";

export interface MigrateOptions {
  /** Login role of the app; made when it is not there. Null: `wavekeep_app` exists without a login. */
  appRole: { name: string; password: string } | null;
  /** Folder of the SQL migrations. */
  migrationsDir: string;
}

/** One migrating step at a time in a database. */
const MIGRATION_LOCK = 20_260_727;
const DUPLICATE_OBJECT = "42710";
const APP_ROLE = "wavekeep_app";

/**
 * Bring roles, schema and queues up to date.
 *
 * @throws when the owner may not make roles and they are missing, or a migration fails (nothing of that one is kept)
 */
export async function migrate(ownerUrl: string, options: MigrateOptions): Promise<void> {
  const client = new pg.Client({
    connectionString: ownerUrl,
    options: "-c timezone=UTC",
    application_name: "wavekeep-migrate",
  });
  // Notices (a policy that was not there to be dropped) are no news.
  client.on("notice", () => {});
  await client.connect();
  try {
    await client.query("select pg_advisory_lock($1)", [MIGRATION_LOCK]);
    await makeRoles(client, options.appRole);
    await runMigrations(drizzle(client), { migrationsFolder: options.migrationsDir });
    await makeQueues(ownerUrl);
    await client.query(`grant usage on schema drizzle, pgboss to ${APP_ROLE};
      grant select on drizzle.__drizzle_migrations to ${APP_ROLE};
      grant select, insert, update, delete on all tables in schema pgboss to ${APP_ROLE};
      grant execute on all functions in schema pgboss to ${APP_ROLE}`);
  } finally {
    await client.end();
  }
}

/** Roles are cluster-wide and may be there already, made for another database. */
async function makeRoles(client: pg.Client, appRole: MigrateOptions["appRole"]): Promise<void> {
  await makeRole(client, APP_ROLE, "nologin");
  await makeRole(client, "wavekeep_seeder", "nologin");
  await makeRole(client, "wavekeep_definer", "nologin");
  await client.query(`grant ${APP_ROLE} to wavekeep_seeder`);
  const { rows } = await client.query<{ superuser: boolean }>(
    "select rolsuper as superuser from pg_roles where rolname = current_user",
  );
  // Who is no superuser must be a member of a role to give it functions.
  if (rows[0]?.superuser !== true) await client.query("grant wavekeep_definer to current_user");
  if (appRole === null) return;
  // A new role has no powers unless they are given; to name them, even to deny them, takes a superuser in `alter role`.
  const login = `login password ${client.escapeLiteral(appRole.password)}`;
  if (appRole.name === APP_ROLE) {
    const { rowCount } = await client.query("select 1 from pg_roles where rolname = $1 and rolcanlogin", [APP_ROLE]);
    if (rowCount === 0) await client.query(`alter role ${APP_ROLE} ${login}`);
  } else {
    await makeRole(client, appRole.name, login);
    await client.query(`grant ${APP_ROLE} to ${client.escapeIdentifier(appRole.name)}`);
  }
  await refuseStrongAppRole(client, appRole.name);
}

async function makeRole(client: pg.Client, name: string, attributes: string): Promise<void> {
  const { rowCount } = await client.query("select 1 from pg_roles where rolname = $1", [name]);
  if (rowCount !== 0) return;
  try {
    await client.query(`create role ${client.escapeIdentifier(name)} ${attributes}`);
  } catch (error) {
    if ((error as { code?: string }).code !== DUPLICATE_OBJECT) {
      throw new Error(
        `The role ${name} is missing and could not be made: ${(error as Error).message}. Make it once as an administrator of the server, or give the owner CREATEROLE.`,
        { cause: error },
      );
    }
  }
}

/** Row security holds nobody who may bypass it. */
async function refuseStrongAppRole(client: pg.Client, name: string): Promise<void> {
  const { rows } = await client.query<{ strong: boolean }>(
    "select rolsuper or rolbypassrls as strong from pg_roles where rolname = $1",
    [name],
  );
  if (rows[0]?.strong === true) {
    throw new Error(
      `The app's role ${name} is a superuser or may bypass row security, so labs would not be kept apart. Give DATABASE_URL a role without these.`,
    );
  }
}

async function makeQueues(ownerUrl: string): Promise<void> {
  const boss = new PgBoss({
    connectionString: ownerUrl,
    schema: "pgboss",
    migrate: true,
    supervise: false,
    schedule: false,
    max: 1,
  });
  boss.on("error", () => {});
  await boss.start();
  try {
    for (const name of Object.values(queues)) {
      if ((await boss.getQueue(name)) === null)
        await boss.createQueue(name, {
          name,
          policy: ticks.some((tick) => tick.queue === name) ? "short" : "standard",
        });
    }
    for (const { queue, cron } of ticks) await boss.schedule(queue, cron, {}, { tz: "UTC" });
  } finally {
    await boss.stop({ graceful: false });
  }
}
