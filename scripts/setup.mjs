/** What every command does first: check Node, install the workspace's packages when they changed. Node's own modules only. */
import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { pnpm } from "./pnpm.mjs";
import { ProgramFailed, projectDir, withLock } from "./processes.mjs";

/** A sentence for the person at the terminal; printed without a stack. */
export class PlainError extends Error {}

/** @throws {PlainError} when this Node is older than package.json asks for */
export function checkNode() {
  const manifest = JSON.parse(fs.readFileSync(path.join(projectDir, "package.json"), "utf8"));
  const needed = /(\d+)\.(\d+)\.(\d+)/.exec(manifest.engines.node)?.slice(1).map(Number) ?? [];
  const have = process.versions.node.split(".").map(Number);
  for (let i = 0; i < 3; i += 1) {
    if ((have[i] ?? 0) > (needed[i] ?? 0)) return;
    if ((have[i] ?? 0) < (needed[i] ?? 0)) {
      throw new PlainError(
        `Wavekeep needs Node ${needed.join(".")} or newer; this is Node ${process.versions.node}. Install a newer Node and run the command again.`,
      );
    }
  }
}

/** Workspace packages, as folder names under packages/. */
export function workspacePackages() {
  const folder = path.join(projectDir, "packages");
  return fs
    .readdirSync(folder)
    .filter((name) => fs.existsSync(path.join(folder, name, "package.json")))
    .sort();
}

/** Fingerprint of everything that decides what an install brings. */
function installFingerprint() {
  const files = [
    "package.json",
    "pnpm-lock.yaml",
    "pnpm-workspace.yaml",
    ...workspacePackages().map((name) => `packages/${name}/package.json`),
  ];
  const hash = createHash("sha256").update(`${process.version} ${process.platform} ${process.arch}`);
  for (const file of files) hash.update(`\0${file}\0`).update(fs.readFileSync(path.join(projectDir, file)));
  return hash.digest("hex");
}

/** True when node_modules is what the manifests and the lock file ask for. */
export function isInstalled() {
  const stamp = path.join(projectDir, "node_modules", ".install-stamp");
  return (
    fs.existsSync(stamp) &&
    fs.readFileSync(stamp, "utf8") === installFingerprint() &&
    workspacePackages().every((name) => fs.existsSync(path.join(projectDir, "packages", name, "node_modules")))
  );
}

/**
 * Install the workspace's packages when a manifest or the lock file changed since the last install.
 * Several commands may ask at once: one installs, the others wait for it.
 *
 * @param {(line: string) => void} [onLine] progress, a line at a time
 * @returns {Promise<boolean>} whether something was installed
 * @throws {PlainError} when the packages cannot be fetched
 */
export async function ensureInstall(onLine = () => {}) {
  if (isInstalled()) return false;
  return withLock(
    path.join(projectDir, ".tmp", "install.lock"),
    async () => {
      if (isInstalled()) return false;
      const stamp = path.join(projectDir, "node_modules", ".install-stamp");
      fs.rmSync(stamp, { force: true });
      try {
        await pnpm(["install", "--frozen-lockfile", "--prefer-offline", "--reporter=append-only"], {
          onLine: (line) => {
            if (/^\s*(Progress|Downloading|Done|WARN|ERR|✓|\?)/.test(line)) onLine(line);
          },
        });
      } catch (error) {
        throw new PlainError(
          `The packages could not be installed. Nothing else was changed. Check that npm can reach its registry and run the command again.\n${error instanceof ProgramFailed ? error.output.trim() : error}`,
        );
      }
      fs.writeFileSync(stamp, installFingerprint());
      return true;
    },
    (pid) => onLine(`waiting: process ${pid} is installing the packages`),
  );
}

/**
 * Run a command's main function; plain errors and failed programs end it with their sentence, others with their stack.
 *
 * @param {() => Promise<number | void>} main returns the exit code (none: 0)
 */
export async function runCommand(main) {
  try {
    checkNode();
    process.exitCode = (await main()) ?? 0;
  } catch (error) {
    const isPlain = error instanceof PlainError || error instanceof ProgramFailed;
    process.stderr.write(`\n${isPlain ? error.message : /** @type {Error} */ (error).stack}\n`);
    process.exitCode = 1;
  }
}
