/** The server's own process: started with its environment, awaited until it answers, ended in order. */
import { spawn } from "node:child_process";
import fs from "node:fs";
import path from "node:path";
import { cleanEnvironment, projectDir } from "./processes.mjs";
import { PlainError } from "./setup.mjs";

const largestLogBytes = 20_000_000;

/**
 * @typedef {object} Server
 * @property {Promise<string>} ended resolves with how it ended
 * @property {() => Promise<void>} stop asks it to end, waits 10 s, then kills it
 */

/**
 * Start the server and wait until it answers.
 *
 * @param {{ program: string, dataDir: string, address: string | null, variables: Record<string, string>, giveUp: Promise<void> }} options
 *   `address` null: a worker, which answers nobody: it runs when it has not ended within 3 s;
 *   `variables` are added to the environment; the owner's database address never is; `giveUp` ends the waiting
 * @returns {Promise<Server>}
 * @throws {PlainError} with the end of its log, when it ends or stays silent
 */
export async function startServer({ program, dataDir, address, variables, giveUp }) {
  const logFile = path.join(dataDir, "server.log");
  if ((fs.statSync(logFile, { throwIfNoEntry: false })?.size ?? 0) > largestLogBytes)
    fs.renameSync(logFile, `${logFile}.1`);
  const log = fs.openSync(logFile, "a", 0o600);
  const child = spawn(
    process.execPath,
    ["--enable-source-maps", "--import", path.join(projectDir, "scripts/stop-with-parent.mjs"), program],
    {
      cwd: projectDir,
      // A group of its own: Ctrl-C reaches start.mjs alone, which ends the server before its database.
      detached: true,
      stdio: ["ignore", log, log, "ipc"],
      env: cleanEnvironment({ ...variables, NODE_ENV: "production", DATABASE_OWNER_URL: undefined }),
    },
  );
  fs.closeSync(log);
  /** @type {Promise<string>} */
  const ended = new Promise((resolve) => {
    child.once("error", (error) => resolve(error.message));
    child.once("exit", (code, signal) => resolve(`exit ${code ?? signal}`));
  });
  const stop = async () => {
    if (child.exitCode !== null || child.signalCode !== null) return;
    child.kill("SIGTERM");
    const patience = setTimeout(() => child.kill("SIGKILL"), 10_000);
    await ended;
    clearTimeout(patience);
  };
  const outcome = await Promise.race([ended, address === null ? staysUp(3_000) : answers(address, 60_000), giveUp]);
  if (outcome === undefined) await stop();
  else if (outcome !== true) {
    await stop();
    const how = outcome === false ? "did not answer within 60 s" : `ended while starting (${outcome})`;
    throw new PlainError(`The server ${how}. The end of its log, ${logFile}:\n${tail(logFile)}`);
  }
  return { ended, stop };
}

/** @param {number} ms */
const staysUp = (ms) => new Promise((resolve) => setTimeout(() => resolve(true), ms));

/**
 * Whether a Wavekeep answers at an address.
 *
 * @param {string} address
 * @param {number} withinMs how long to go on asking
 * @returns {Promise<boolean>}
 */
export async function answers(address, withinMs) {
  const until = performance.now() + withinMs;
  do {
    try {
      const reply = await fetch(`${address}/api/health`, { signal: AbortSignal.timeout(2_000) });
      if (reply.status === 200) return true;
    } catch {
      // Not listening yet.
    }
    await new Promise((resolve) => setTimeout(resolve, 50));
  } while (performance.now() < until);
  return false;
}

/** @param {string} file */
export function tail(file) {
  return fs.existsSync(file) ? fs.readFileSync(file, "utf8").trimEnd().split("\n").slice(-15).join("\n") : "";
}
