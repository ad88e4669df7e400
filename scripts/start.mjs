/**
 * `npm start`: everything from a fresh clone to a running Wavekeep on one port. Ctrl-C ends all of it.
 * Node's own modules only, until the packages are installed.
 */
import fs from "node:fs";
import path from "node:path";
import { ensureBuild } from "./build.mjs";
import { appUrl, finishDatabase, migrateDatabase, prepareDatabase, seedDemoLab } from "./local-database.mjs";
import { ensureDataDir, openCluster } from "./postgres.mjs";
import { callersOf, freePort, portProblem, processIdentity, stopChildren, takeLock } from "./processes.mjs";
import { step } from "./progress.mjs";
import { answers, startServer } from "./server-process.mjs";
import { addressOf, readStartSettings, startLockOf, version } from "./settings.mjs";
import { PlainError, ensureInstall, runCommand } from "./setup.mjs";

/** What must be undone at the end, in reverse order. @type {(() => Promise<void> | void)[]} */
const undo = [];
let stopping = false;
/** @type {() => void} */
let requestStop = () => {};
/** @type {Promise<void>} */
const stopRequested = new Promise((resolve) => (requestStop = resolve));

function onStop() {
  // The terminal and npm may both pass on one Ctrl-C.
  if (stopping) return;
  stopping = true;
  process.stdout.write("\nStopping…\n");
  stopChildren();
  requestStop();
}
for (const signal of /** @type {const} */ (["SIGINT", "SIGTERM", "SIGHUP"])) process.on(signal, onStop);
// Started by another program with a channel (the browser tests): end with it.
process.once("disconnect", onStop);
// npm does not pass on every signal that ends it: without npm nobody could stop this start any more.
if (process.env["npm_lifecycle_event"] !== undefined) {
  const parent = process.ppid;
  const callers = callersOf(parent);
  setInterval(() => {
    const gone = process.ppid !== parent || callers.some(({ pid, identity }) => processIdentity(pid) !== identity);
    if (gone) onStop();
  }, 300).unref();
}
// The terminal may be gone before everything is stopped.
for (const stream of [process.stdout, process.stderr]) stream.on("error", () => {});

/** @throws when a stop was asked for meanwhile */
function goOn() {
  if (stopping) throw new Stopped();
}
class Stopped extends Error {}

await runCommand(async () => {
  let exitCode = 0;
  try {
    await start();
  } catch (error) {
    if (!stopping) throw error;
    exitCode = 130;
  } finally {
    for (const action of undo.reverse()) await action();
    if (stopping) process.stdout.write("Stopped.\n");
    if (process.connected) process.disconnect();
  }
  return exitCode;
});

async function start() {
  const settings = readStartSettings(process.env);
  process.stdout.write(`Wavekeep ${version}\n`);
  ensureDataDir(settings.dataDir);
  const port = settings.port === 0 ? await freePort(settings.host) : settings.port;
  const address = addressOf(settings.host, port);
  if (settings.listens) {
    if (await runsAlready(settings.dataDir, address)) return;
    await checkPort(settings.host, port);
  }

  const { database, build } = await prepare(settings);
  const server = await step("server", () =>
    startServer({
      program: path.join(build.api, "main.js"),
      dataDir: settings.dataDir,
      address: settings.listens ? address : null,
      giveUp: stopRequested,
      variables: {
        PORT: String(port),
        HOST: settings.host,
        DATABASE_URL: database,
        WAVEKEEP_DATA_DIR: settings.dataDir,
        WAVEKEEP_DEMO: settings.demo ? "1" : "0",
        WAVEKEEP_WEB_DIR: build.web,
      },
    }),
  );
  undo.push(() => server.stop());
  goOn();
  announce(settings, address);

  const how = await Promise.race([server.ended, stopRequested]);
  if (how !== undefined) {
    throw new PlainError(
      `The server ended by itself (${how}). Its log is ${path.join(settings.dataDir, "server.log")}.`,
    );
  }
}

/**
 * Take the data folder for this start, or say where the start that has it answers.
 *
 * @param {string} dataDir
 * @param {string} address of this start
 */
async function runsAlready(dataDir, address) {
  const lock = takeLock(startLockOf(dataDir), { address });
  if (lock.taken) {
    undo.push(lock.release);
    return false;
  }
  const first = String(lock.holder["address"]);
  process.stdout.write(
    (await answers(first, 0))
      ? `Wavekeep already runs on this data folder: ${first}\nStop that one first, or set WAVEKEEP_DATA_DIR (and PORT) for a second one.\n`
      : `Process ${lock.holder.pid} is starting Wavekeep on this data folder; it will answer at ${first}\n`,
  );
  return true;
}

/**
 * @param {string} host
 * @param {number} port
 */
async function checkPort(host, port) {
  const problem = await portProblem(host, port);
  if (problem === null) return;
  const sentences = /** @type {Record<string, string>} */ ({
    EADDRINUSE: `Port ${port} on ${host} is used by another program. Choose another one: PORT=${port + 1} npm start`,
    EACCES: `Port ${port} may not be used by this user. Choose one above 1023: PORT=4310 npm start`,
    EADDRNOTAVAIL: `HOST=${host} is not an address of this machine.`,
    ENOTFOUND: `HOST=${host} is not an address of this machine.`,
  });
  throw new PlainError(sentences[problem] ?? `Port ${port} on ${host} cannot be used (${problem}).`);
}

/**
 * Packages, build and database, up to date.
 *
 * @param {import("./settings.mjs").StartSettings} settings
 */
async function prepare(settings) {
  // The cluster starts while the packages are fetched; what it has to say is kept for its own step.
  /** @type {string[]} */
  const said = [];
  const opening =
    settings.server === null ? openCluster({ dataDir: settings.dataDir, say: (line) => said.push(line) }) : null;
  if (opening !== null) {
    opening.catch(() => {});
    undo.push(async () => {
      const [cluster] = await Promise.allSettled([opening]);
      if (cluster.status === "fulfilled") await cluster.value.stop();
    });
  }

  await step("packages", async (say, outcome) => {
    if (!(await ensureInstall(say))) outcome("unchanged");
  });
  goOn();
  const cluster = await step("PostgreSQL", async (say, outcome) => {
    if (opening === null) {
      outcome("the server of DATABASE_URL");
      return null;
    }
    const opened = await opening;
    for (const line of said) say(line);
    outcome(`version ${opened.version}${opened.made ? ", new" : ""}, on 127.0.0.1:${opened.port}`);
    return opened;
  });
  goOn();
  const build = await step("build", async (say, outcome) => {
    const made = await ensureBuild(say);
    if (!made.built) outcome("unchanged");
    return made;
  });
  undo.push(build.release);
  goOn();
  return { database: await prepareData(settings, cluster, build.api), build };
}

/**
 * Schema up to date and the demo lab in place; the address for the app's role.
 *
 * @param {import("./settings.mjs").StartSettings} settings
 * @param {import("./postgres.mjs").Cluster | null} cluster
 * @param {string} apiBuild
 * @returns {Promise<string>}
 */
async function prepareData(settings, cluster, apiBuild) {
  const signInsFile = signInsFileOf(settings.dataDir);
  if (settings.server !== null || cluster === null) {
    const addresses = /** @type {NonNullable<typeof settings.server>} */ (settings.server);
    const { appUrl: url, ownerUrl } = addresses;
    await step("schema", async (say, outcome) => {
      if (ownerUrl === null) outcome("taken as it is: DATABASE_OWNER_URL is not set, so nothing is migrated");
      else await migrateDatabase({ appUrl: url, ownerUrl }, say);
    });
    goOn();
    if (settings.demo && ownerUrl !== null && !fs.existsSync(signInsFile))
      await seed(ownerUrl, apiBuild, settings.dataDir);
    return url;
  }
  const { name, isNew } = await prepareDatabase(cluster);
  if (!isNew && !settings.demo && fs.existsSync(signInsFile)) {
    throw new PlainError(
      `The data folder ${settings.dataDir} holds the demo lab, whose sign-ins anybody can read: it is shown on this machine alone. Set HOST=127.0.0.1, or WAVEKEEP_DATA_DIR to a folder for your own lab, or WAVEKEEP_DEMO=1 if others may see it.`,
    );
  }
  const addresses = { ownerUrl: cluster.ownerUrl(name), appUrl: appUrl(cluster, settings.dataDir, name) };
  await step("schema", (say) => migrateDatabase(addresses, say));
  goOn();
  if (isNew) {
    fs.rmSync(signInsFile, { force: true });
    if (settings.demo) await seed(addresses.ownerUrl, apiBuild, settings.dataDir);
    await finishDatabase(cluster);
  }
  return appUrl(cluster, settings.dataDir);
}

/**
 * @param {string} ownerUrl
 * @param {string} apiBuild
 * @param {string} dataDir
 */
async function seed(ownerUrl, apiBuild, dataDir) {
  const program = path.join(apiBuild, "seed-demo.js");
  const signIns = await step("demo lab", (say) => seedDemoLab({ ownerUrl, program, dataDir, say }));
  fs.writeFileSync(signInsFileOf(dataDir), `${JSON.stringify(signIns, null, 2)}\n`, { mode: 0o600 });
}

/** @param {string} dataDir */
function signInsFileOf(dataDir) {
  return path.join(dataDir, "demo-sign-ins.json");
}

/**
 * @param {import("./settings.mjs").StartSettings} settings
 * @param {string} address
 */
function announce(settings, address) {
  if (!settings.listens) {
    process.stdout.write("\nWavekeep's worker is running.\nCtrl-C stops it.\n");
    return;
  }
  process.stdout.write(`\nWavekeep is ready: ${address}\n`);
  const file = signInsFileOf(settings.dataDir);
  if (settings.demo && fs.existsSync(file)) {
    process.stdout.write("\nSign in to the demo lab as\n");
    for (const { email, password, name, role } of JSON.parse(fs.readFileSync(file, "utf8"))) {
      process.stdout.write(`  ${email.padEnd(28)} ${password.padEnd(24)} ${name}, ${role}\n`);
    }
    process.stdout.write(`\nMail sent by the demo lab: ${address}/dev/mail\n`);
  } else {
    process.stdout.write(
      '\nNo lab yet? In a second terminal: npm run -s new-lab -- --name "Your lab" --email you@example.org\n',
    );
  }
  process.stdout.write("Ctrl-C stops everything.\n");
}
