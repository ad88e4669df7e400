/**
 * The migrating step, in a process of its own: it alone is given the owner's address (DATABASE_OWNER_URL).
 * Started by start.mjs; by hand: DATABASE_OWNER_URL=... DATABASE_URL=... node scripts/migrate.mjs
 */
import path from "node:path";
import { pathToFileURL } from "node:url";
import { ensureBuild } from "./build.mjs";
import { projectDir } from "./processes.mjs";
import { PlainError, ensureInstall, runCommand } from "./setup.mjs";

await runCommand(async () => {
  const ownerUrl = process.env["DATABASE_OWNER_URL"];
  const appUrl = process.env["DATABASE_URL"];
  if (!ownerUrl) throw new PlainError("DATABASE_OWNER_URL is not set: it names the role that may change the schema.");
  await ensureInstall();
  const build = await ensureBuild();
  const { migrate } = await import(pathToFileURL(path.join(build.api, "migrate.js")).href);
  const app = appUrl ? new URL(appUrl) : null;
  await migrate(ownerUrl, {
    appRole:
      app === null ? null : { name: decodeURIComponent(app.username), password: decodeURIComponent(app.password) },
    migrationsDir: path.join(projectDir, "drizzle"),
  });
  build.release();
});
