/** Bundles the server's programs (esbuild) and the client (Vite) into the two folders named on the command line. */
import fs from "node:fs";
import path from "node:path";
import { build } from "esbuild";
import { build as buildWithVite } from "vite";
import { projectDir } from "./processes.mjs";

/** Program in the build -> source. */
const programs = {
  main: "main.ts",
  migrate: "db/migrate.ts",
  "seed-demo": "demo/seed.ts",
  "new-lab": "labs/new-lab.ts",
  "analysis-worker": "checks/analysis-worker.ts",
};

const apiDir = path.join(projectDir, "packages/api");
const webDir = path.join(projectDir, "packages/web");

/** @param {string} outdir */
async function buildServer(outdir) {
  const { dependencies } = JSON.parse(fs.readFileSync(path.join(apiDir, "package.json"), "utf8"));
  // The api's own dependencies stay packages; the core is bundled, and whatever only the core depends on with it.
  const external = Object.keys(dependencies)
    .filter((name) => !name.startsWith("@wavekeep/"))
    .flatMap((name) => [name, `${name}/*`]);
  await build({
    absWorkingDir: apiDir,
    entryPoints: Object.fromEntries(Object.entries(programs).map(([name, file]) => [name, path.join("src", file)])),
    outdir,
    bundle: true,
    platform: "node",
    target: "node20",
    format: "esm",
    external,
    sourcemap: true,
    logLevel: "warning",
  });
}

/** @param {string} outdir */
async function buildClient(outdir) {
  await buildWithVite({ root: webDir, logLevel: "warn", build: { outDir: outdir, emptyOutDir: true } });
}

/**
 * Build into a folder beside the wanted one and move it into place when it is whole. Where another process finished
 * the same build first, its result stands.
 *
 * @param {(outdir: string) => Promise<void>} make
 * @param {string} folder
 */
async function buildInto(make, folder) {
  if (fs.existsSync(folder)) return;
  const unfinished = path.join(path.dirname(folder), `.unfinished-${process.pid}`);
  try {
    await make(unfinished);
    fs.renameSync(unfinished, folder);
  } catch (error) {
    if (!fs.existsSync(folder)) throw error;
  } finally {
    fs.rmSync(unfinished, { recursive: true, force: true });
  }
}

const [apiOut, webOut] = process.argv.slice(2);
if (apiOut === undefined || webOut === undefined) throw new Error("build-packages.mjs <api folder> <web folder>");
await Promise.all([buildInto(buildServer, apiOut), buildInto(buildClient, webOut)]);
