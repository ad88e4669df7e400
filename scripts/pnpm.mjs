/** The pinned pnpm, fetched through npm's own client: nothing is installed globally. Node's own modules only. */
import fs from "node:fs";
import path from "node:path";
import { cleanEnvironment, projectDir, runProgram } from "./processes.mjs";

/**
 * Run pnpm in the project folder.
 *
 * @param {string[]} args
 * @param {{ onLine?: (line: string) => void }} [options]
 */
export async function pnpm(args, options = {}) {
  const manifest = JSON.parse(fs.readFileSync(path.join(projectDir, "package.json"), "utf8"));
  // `--yes`: without a terminal npx refuses to fetch. `CI`: pnpm must not ask before it replaces node_modules.
  await runProgram("npx", ["--yes", manifest.packageManager, ...args], {
    cwd: projectDir,
    env: cleanEnvironment({ CI: "1" }),
    ...options,
  });
}
