/**
 * Child processes, ports and locks for the scripts that run before anything is installed.
 * Node's own modules only.
 */
import { spawn } from "node:child_process";
import fs from "node:fs";
import net from "node:net";
import path from "node:path";

/** Folder that holds package.json, whatever the working directory is. */
export const projectDir = path.resolve(import.meta.dirname, "..");

/**
 * The environment for nested tools: npm's own `npm_*` variables of the outer run are dropped,
 * those that say where packages come from stay.
 *
 * @param {NodeJS.ProcessEnv} [extra] added last
 * @returns {NodeJS.ProcessEnv}
 */
export function cleanEnvironment(extra = {}) {
  const kept = Object.entries(process.env).filter(
    ([name]) =>
      !/^npm_/i.test(name) ||
      /^npm_config_(registry|cafile|userconfig|globalconfig|cache|proxy|https_proxy|noproxy)$/i.test(name),
  );
  return { ...Object.fromEntries(kept), ...extra };
}

/** A program that ended with an exit code other than 0, with what it printed. */
export class ProgramFailed extends Error {
  /**
   * @param {string} program
   * @param {number | NodeJS.Signals | null} exit
   * @param {string} output
   * @param {boolean} [shown] whether its output was shown as it came
   */
  constructor(program, exit, output, shown = false) {
    super(`${program} failed (exit ${exit}).${shown || output.trim() === "" ? "" : `\n${output.trim()}`}`);
    this.name = "ProgramFailed";
    this.program = program;
    this.exit = exit;
    this.output = output;
  }
}

/** Children that are running now; killed together when the outer command is stopped. @type {Set<import("node:child_process").ChildProcess>} */
const running = new Set();

/** Ask every child that still runs to end, save the sheltered ones. */
export function stopChildren() {
  for (const child of running) child.kill("SIGTERM");
}

/**
 * Run a program to its end.
 *
 * @param {string} program
 * @param {string[]} args
 * @param {import("node:child_process").SpawnOptions & { onLine?: (line: string) => void, allowFailure?: boolean, sheltered?: boolean, title?: string }} [options]
 *   `onLine` receives each line of output as it comes; `allowFailure` returns the exit instead of throwing;
 *   `title` names it in the sentence when it fails;
 *   `sheltered` keeps it out of the reach of Ctrl-C, for what must not be cut off half-way and is soon over
 * @returns {Promise<{ exit: number | NodeJS.Signals | null, output: string }>}
 * @throws {ProgramFailed} on an exit code other than 0
 */
export function runProgram(program, args, options = {}) {
  const { onLine, allowFailure = false, sheltered = false, title = path.basename(program), ...spawnOptions } = options;
  return new Promise((resolve, reject) => {
    const child = spawn(program, args, { stdio: ["ignore", "pipe", "pipe"], detached: sheltered, ...spawnOptions });
    if (!sheltered) running.add(child);
    let output = "";
    let partial = "";
    /** @param {Buffer} chunk */
    const take = (chunk) => {
      const text = chunk.toString("utf8");
      output = (output + text).slice(-1_000_000);
      if (onLine === undefined) return;
      const lines = (partial + text).split("\n");
      partial = lines.pop() ?? "";
      for (const line of lines) onLine(line);
    };
    child.stdout?.on("data", take);
    child.stderr?.on("data", take);
    child.once("error", (error) => {
      running.delete(child);
      reject(new ProgramFailed(title, null, error.message));
    });
    child.once("close", (code, signal) => {
      running.delete(child);
      if (onLine !== undefined && partial !== "") onLine(partial);
      const exit = code ?? signal;
      if (exit === 0 || allowFailure) resolve({ exit, output });
      else reject(new ProgramFailed(title, exit, output, onLine !== undefined));
    });
  });
}

/**
 * A port that is free on the host now.
 *
 * @param {string} [host]
 * @returns {Promise<number>}
 */
export function freePort(host = "127.0.0.1") {
  return new Promise((resolve, reject) => {
    const server = net.createServer();
    server.once("error", reject);
    server.listen(0, host, () => {
      const { port } = /** @type {net.AddressInfo} */ (server.address());
      server.close(() => resolve(port));
    });
  });
}

/**
 * Whether a port can be listened on; the error's code where it cannot (EADDRINUSE, EACCES, EADDRNOTAVAIL).
 *
 * @param {string} host
 * @param {number} port
 * @returns {Promise<string | null>} null when it is free
 */
export function portProblem(host, port) {
  return new Promise((resolve) => {
    const server = net.createServer();
    server.once("error", (/** @type {NodeJS.ErrnoException} */ error) => resolve(error.code ?? error.message));
    server.listen(port, host, () => server.close(() => resolve(null)));
  });
}

/**
 * State, parent and start tick of a process, on Linux.
 *
 * @param {number} pid
 * @returns {{ state: string, parent: number, begunAt: string } | null} null elsewhere, or when there is no such process
 */
function processFacts(pid) {
  try {
    const stat = fs.readFileSync(`/proc/${pid}/stat`, "utf8");
    // After the program's name in brackets, which may hold spaces: field 3 (state), 4 (parent), ... 22 (start tick).
    const fields = stat.slice(stat.lastIndexOf(")") + 2).split(" ");
    return { state: fields[0] ?? "", parent: Number(fields[1]), begunAt: fields[19] ?? "" };
  } catch {
    return null;
  }
}

/**
 * What tells this process from a later one with the same number: its pid and, on Linux, the tick it began at.
 *
 * @param {number} pid
 * @returns {string | null} null when no such process runs
 */
export function processIdentity(pid) {
  try {
    process.kill(pid, 0);
  } catch (error) {
    if (/** @type {NodeJS.ErrnoException} */ (error).code !== "EPERM") return null;
  }
  const facts = processFacts(pid);
  if (facts === null) return String(pid);
  // Z: ended, not yet collected by its parent.
  return facts.state === "Z" ? null : `${pid}@${facts.begunAt}`;
}

/**
 * A process and the one that started it: for a package script the shell and npm.
 *
 * @param {number} pid
 */
export function callersOf(pid) {
  const parent = processFacts(pid)?.parent;
  return [pid, parent]
    .filter((number) => number !== undefined && number > 1)
    .map((number) => ({ pid: Number(number), identity: processIdentity(Number(number)) }));
}

/**
 * Take a lock file, or say who holds it. A file left behind by a process that is gone is taken over.
 *
 * @param {string} file
 * @param {Record<string, unknown>} [about] further facts kept in the file
 * @returns {{ taken: true, release: () => void } | { taken: false, holder: Record<string, unknown> & { pid: number } }}
 */
export function takeLock(file, about = {}) {
  fs.mkdirSync(path.dirname(file), { recursive: true });
  const text = JSON.stringify({ pid: process.pid, identity: processIdentity(process.pid), ...about });
  for (let attempt = 0; attempt < 100; attempt += 1) {
    // The whole text must be there at once, so it is written beside the lock and then linked to its name.
    const own = `${file}.${process.pid}`;
    fs.writeFileSync(own, text, { mode: 0o600 });
    try {
      fs.linkSync(own, file);
      return { taken: true, release: () => releaseLock(file, text) };
    } catch (error) {
      if (/** @type {NodeJS.ErrnoException} */ (error).code !== "EEXIST") throw error;
    } finally {
      fs.rmSync(own, { force: true });
    }
    const holder = readLock(file);
    if (holder !== null && processIdentity(holder.pid) === holder.identity) return { taken: false, holder };
    if (holder !== null) setAside(file, JSON.stringify(holder));
  }
  throw new Error(`${file} could not be taken. Remove it when no other start is running.`);
}

/**
 * Who holds a lock now.
 *
 * @param {string} file
 * @returns {(Record<string, unknown> & { pid: number }) | null} null when nobody that still runs
 */
export function lockHolder(file) {
  const holder = readLock(file);
  return holder !== null && processIdentity(holder.pid) === holder.identity ? holder : null;
}

/**
 * @param {string} file
 * @returns {(Record<string, unknown> & { pid: number, identity: string | null }) | null}
 */
function readLock(file) {
  try {
    return JSON.parse(fs.readFileSync(file, "utf8"));
  } catch (error) {
    if (error instanceof SyntaxError) return { pid: 0, identity: "" };
    return null;
  }
}

/**
 * Remove a dead process's lock; put it back if another process renewed it in between.
 *
 * @param {string} file
 * @param {string} expected
 */
function setAside(file, expected) {
  const aside = `${file}.dead-${process.pid}`;
  try {
    fs.renameSync(file, aside);
    const found = fs.readFileSync(aside, "utf8");
    if (JSON.stringify(JSON.parse(found)) !== expected) fs.linkSync(aside, file);
  } catch {
    // Another process was faster, or the file is unreadable: the next attempt sees what stands there now.
  }
  fs.rmSync(aside, { force: true });
}

/**
 * @param {string} file
 * @param {string} text
 */
function releaseLock(file, text) {
  try {
    if (fs.readFileSync(file, "utf8") === text) fs.rmSync(file);
  } catch {
    // Already gone.
  }
}

/**
 * Do something while holding a lock, waiting for whoever holds it.
 *
 * @template T
 * @param {string} file
 * @param {() => Promise<T>} action
 * @param {(holderPid: number) => void} [onWait] told once when it has to wait
 * @returns {Promise<T>}
 */
export async function withLock(file, action, onWait = () => {}) {
  let told = false;
  for (;;) {
    const lock = takeLock(file);
    if (lock.taken) {
      try {
        return await action();
      } finally {
        lock.release();
      }
    }
    if (!told) onWait(lock.holder.pid);
    told = true;
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
}
