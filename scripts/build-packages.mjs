/** Bundles the server's programs (esbuild) and the client (Vite) into the two folders named on the command line. */
import fs from "node:fs";
import path from "node:path";
import { build as buildWithVite } from "vite";
import { bundleServerPrograms } from "./bundle.mjs";
import { projectDir } from "./processes.mjs";

/** Program in the build -> source. */
const programs = {
  main: "main.ts",
  migrate: "db/migrate.ts",
  "seed-demo": "demo/seed.ts",
  "new-lab": "labs/new-lab.ts",
  "analysis-worker": "checks/analysis-worker.ts",
  "report-worker": "records/report-worker.ts",
};

const webDir = path.join(projectDir, "packages/web");

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
await Promise.all([
  buildInto((outdir) => bundleServerPrograms(programs, outdir), apiOut),
  buildInto(buildClient, webOut),
]);
