/**
 * The production build, one folder per state of the sources: `packages/api/dist/<fingerprint>` and
 * `packages/web/dist/<fingerprint>`. A finished build never changes, so commands that run side by side, also on
 * different states of the sources, do not disturb each other.
 */
import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { cleanEnvironment, processIdentity, projectDir, runProgram } from "./processes.mjs";

const distOf = { api: path.join(projectDir, "packages/api/dist"), web: path.join(projectDir, "packages/web/dist") };

const dayMs = 86_400_000;

/** Folders that hold nothing written by a person. */
const notSources = new Set(["node_modules", "dist", "generated"]);

/** @param {string} folder @returns {string[]} every source file below, relative to the project, sorted */
function sourceFiles(folder) {
  return fs
    .readdirSync(path.join(projectDir, folder), { withFileTypes: true })
    .flatMap((entry) => {
      const relative = `${folder}/${entry.name}`;
      if (entry.isDirectory()) return notSources.has(entry.name) ? [] : sourceFiles(relative);
      return /\.test\.tsx?$/.test(entry.name) ? [] : [relative];
    })
    .sort();
}

/** Fingerprint of everything that decides what a build holds. */
export function buildFingerprint() {
  const files = [
    ...sourceFiles("packages"),
    "scripts/build.mjs",
    "scripts/build-packages.mjs",
    "scripts/bundle.mjs",
    "pnpm-lock.yaml",
    "package.json",
  ];
  return fingerprintOf(files);
}

/** @param {string[]} files relative to the project */
function fingerprintOf(files) {
  const hash = createHash("sha256").update(process.versions.node.split(".")[0] ?? "");
  for (const file of files) hash.update(`\0${file}\0`).update(fs.readFileSync(path.join(projectDir, file)));
  return hash.digest("hex").slice(0, 16);
}

/**
 * The build of the sources as they stand, made when it is not there yet.
 *
 * @param {(line: string) => void} [say]
 * @returns {Promise<{ api: string, web: string, built: boolean, release: () => void }>} folders; `release` when they
 *   are no longer used by this process
 */
export async function ensureBuild(say = () => {}) {
  const fingerprint = buildFingerprint();
  const folders = { api: path.join(distOf.api, fingerprint), web: path.join(distOf.web, fingerprint) };
  const built = !fs.existsSync(folders.api) || !fs.existsSync(folders.web);
  if (built) {
    removeOldBuilds();
    await runProgram(
      process.execPath,
      [path.join(projectDir, "scripts/build-packages.mjs"), folders.api, folders.web],
      {
        cwd: projectDir,
        env: cleanEnvironment({ NODE_ENV: "production" }),
        onLine: say,
      },
    );
  }
  return { ...folders, built, release: markUse(folders.api) };
}

/**
 * A command-line program written in TypeScript on the core, bundled when it or the core changed.
 *
 * @param {string} folder relative to the project; its main.ts is the entry
 * @param {string[]} also other folders that it is made of
 * @returns {Promise<string>} the bundle
 */
export async function ensureCommand(folder, also = []) {
  const files = [...["packages/core", folder, ...also].flatMap(sourceFiles), "pnpm-lock.yaml"];
  const bundles = path.join(projectDir, folder, "dist");
  const bundle = path.join(bundles, `${fingerprintOf(files)}.mjs`);
  if (!fs.existsSync(bundle)) {
    removeOldBundles(bundles);
    const unfinished = path.join(bundles, `${process.pid}.unfinished.mjs`);
    const { bundleCommand } = await import("./bundle.mjs");
    await bundleCommand(path.join(folder, "main.ts"), unfinished);
    fs.renameSync(unfinished, bundle);
  }
  return bundle;
}

/** Bundles older than a day; a younger one may be another command's, about to be loaded. @param {string} folder */
function removeOldBundles(folder) {
  for (const name of fs.existsSync(folder) ? fs.readdirSync(folder) : []) {
    const file = path.join(folder, name);
    if (Date.now() - fs.statSync(file).mtimeMs > dayMs) fs.rmSync(file, { force: true });
  }
}

/** @param {string} folder */
function markUse(folder) {
  const mark = path.join(folder, `.used-by-${process.pid}`);
  fs.writeFileSync(mark, processIdentity(process.pid) ?? "");
  return () => fs.rmSync(mark, { force: true });
}

/** Builds that no process uses and that are older than a day are removed. */
function removeOldBuilds() {
  for (const name of fs.existsSync(distOf.api) ? fs.readdirSync(distOf.api) : []) {
    const folder = path.join(distOf.api, name);
    const inUse = fs.readdirSync(folder).some((file) => {
      const pid = /^\.used-by-(\d+)$/.exec(file)?.[1];
      return pid !== undefined && processIdentity(Number(pid)) === fs.readFileSync(path.join(folder, file), "utf8");
    });
    if (inUse || Date.now() - fs.statSync(folder).mtimeMs < dayMs) continue;
    fs.rmSync(folder, { recursive: true, force: true });
    fs.rmSync(path.join(distOf.web, name), { recursive: true, force: true });
  }
}
