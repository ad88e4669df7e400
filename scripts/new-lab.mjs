/**
 * `npm run -s new-lab -- --name "Spectroscopy" --email manager@example.org`: makes a lab and prints a one-time link for its
 * first manager. On the server of DATABASE_URL and DATABASE_OWNER_URL, or on the local one while `npm start` runs.
 */
import path from "node:path";
import { ensureBuild } from "./build.mjs";
import { appUrl } from "./local-database.mjs";
import { openCluster } from "./postgres.mjs";
import { cleanEnvironment, lockHolder, runProgram } from "./processes.mjs";
import { dataDirOf, readServer, startLockOf } from "./settings.mjs";
import { PlainError, ensureInstall, runCommand } from "./setup.mjs";

await runCommand(async () => {
  /** @param {string} line */
  const say = (line) => void process.stderr.write(`${line}\n`);
  const server = readServer(process.env);
  const { addresses, publicUrl } = server === null ? await localServer() : { addresses: server, publicUrl: undefined };
  await ensureInstall(say);
  const build = await ensureBuild(say);
  try {
    const { exit } = await runProgram(
      process.execPath,
      [path.join(build.api, "new-lab.js"), ...process.argv.slice(2)],
      {
        stdio: "inherit",
        allowFailure: true,
        env: cleanEnvironment({
          NODE_ENV: "production",
          DATABASE_URL: addresses.appUrl,
          DATABASE_OWNER_URL: addresses.ownerUrl ?? undefined,
          ...(publicUrl === undefined ? {} : { PUBLIC_URL: process.env["PUBLIC_URL"] ?? publicUrl }),
        }),
      },
    );
    return exit === 0 ? 0 : 1;
  } finally {
    build.release();
  }
});

/** Addresses of the local database, which runs as long as `npm start` does. */
async function localServer() {
  const dataDir = dataDirOf(process.env);
  const holder = lockHolder(startLockOf(dataDir));
  if (holder === null) {
    throw new PlainError(
      "Wavekeep is not running on this data folder. Run npm start in another terminal first, or set DATABASE_URL and DATABASE_OWNER_URL to use a server of your own.",
    );
  }
  const cluster = await openCluster({ dataDir });
  const database = new URL(appUrl(cluster, dataDir)).pathname.slice(1);
  return {
    addresses: { appUrl: appUrl(cluster, dataDir), ownerUrl: cluster.ownerUrl(database) },
    publicUrl: String(holder["address"]),
  };
}
