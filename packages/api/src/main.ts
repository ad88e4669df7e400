/** The server's program: configuration, database, jobs, mail, then it listens. Ends cleanly on SIGTERM and SIGINT. */
import type { Server } from "node:http";
import { sql } from "drizzle-orm";
import { openLogger } from "./logger.ts";
import { createApp } from "./app.ts";
import { ticks } from "./capabilities.ts";
import { openAnalyser } from "./checks/analyser.ts";
import { ConfigError, loadConfig } from "./config.ts";
import { openDatabase, type Database } from "./db/connection.ts";
import { MIGRATION_COUNT } from "./db/schema-version.ts";
import { makeJobs, openBoss } from "./jobs/jobs.ts";
import { startWorkers } from "./jobs/workers.ts";
import { openCatcher } from "./mail/catcher.ts";
import { openSender } from "./mail/sender.ts";
import { openSigningKey } from "./records/signing.ts";
import type { Services } from "./services.ts";

/** Replies that still run get this long. */
const PATIENCE_MS = 8_000;

async function main(): Promise<void> {
  const config = loadConfig(process.env);
  const logger = openLogger(config.logLevel);
  const db = openDatabase(config.databaseUrl);
  await assertSchema(db);

  const worker = config.role !== "web";
  const boss = openBoss(config.databaseUrl, { worker });
  boss.on("error", (error) => logger.error({ err: error }, "the job queue reported an error"));
  await boss.start();
  const analyser = openAnalyser({ onFault: (error) => logger.error({ err: error as Error }, "an analysis failed") });
  const services: Services = {
    config,
    db,
    logger,
    jobs: makeJobs(boss),
    signer: openSigningKey(config.signingKeyFile),
    analyser,
  };
  const catcher = config.demo && config.smtpUrl === null ? await openCatcher() : undefined;
  const smtpUrl = config.smtpUrl ?? catcher?.url ?? null;
  if (smtpUrl === null) logger.warn("SMTP_URL is not set: mail waits in the outbox.");
  const sender = smtpUrl === null ? null : openSender(db, { smtpUrl, from: config.mailFrom });

  let server: Server | null = null;
  if (config.role !== "worker") server = await listen(createApp(services, { catcher }), config.port, config.host);
  if (worker) await startWorkers(boss, services, sender, ticks);
  logger.info({ port: config.port, host: config.host, role: config.role }, "Wavekeep is ready");

  let stopping = false;
  const stop = async (signal: string) => {
    if (stopping) return;
    stopping = true;
    logger.info({ signal }, "stopping");
    const forced = setTimeout(() => process.exit(1), PATIENCE_MS + 1_500);
    forced.unref();
    if (server !== null) await close(server);
    await boss
      .stop({ graceful: true, timeout: 3_000 })
      .catch((error: unknown) => logger.error({ err: error as Error }, "the job queue did not stop cleanly"));
    sender?.close();
    await catcher?.close();
    await analyser.close();
    await db.close();
    process.exit(0);
  };
  for (const signal of ["SIGTERM", "SIGINT"] as const) process.on(signal, () => void stop(signal));
}

/** @throws {ConfigError} when the schema is older or newer than this server, which was given no owner to migrate it */
async function assertSchema(db: Database): Promise<void> {
  const { rows } = await db.orm.execute<{ count: number }>(
    sql`select count(*)::int as count from drizzle.__drizzle_migrations`,
  );
  const count = rows[0]!.count;
  if (count !== MIGRATION_COUNT) {
    throw new ConfigError(
      `The database's schema is ${count < MIGRATION_COUNT ? "older" : "newer"} than this server (${count} of ${MIGRATION_COUNT} migrations). Run the migrating step of this version first.`,
    );
  }
}

function listen(app: ReturnType<typeof createApp>, port: number, host: string): Promise<Server> {
  return new Promise((resolve, reject) => {
    const server = app.listen(port, host, (error?: Error) => {
      if (error === undefined) resolve(server);
      else reject(new ConfigError(`Port ${port} on ${host} could not be opened: ${error.message}`));
    });
  });
}

/** Stop taking requests, let those that run finish, cut what idles. */
function close(server: Server): Promise<void> {
  return new Promise((resolve) => {
    const cut = setTimeout(() => server.closeAllConnections(), PATIENCE_MS);
    server.close(() => {
      clearTimeout(cut);
      resolve();
    });
    server.closeIdleConnections();
  });
}

try {
  await main();
} catch (error) {
  process.stderr.write(`${error instanceof ConfigError ? error.message : (error as Error).stack}\n`);
  process.exit(1);
}
