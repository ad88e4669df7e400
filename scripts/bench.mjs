/**
 * `npm run bench`: times of the two commands, cold (a fresh clone, an empty home folder) and warm, as rows for
 * docs/figures.md. `npm run bench -- start` measures npm start alone, `-- test` npm test alone, `-- analyse` the measuring core beside
 * general-purpose packages that do the same job.
 */
import { spawn } from "node:child_process";
import { once } from "node:events";
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { pathToFileURL } from "node:url";
import { cleanEnvironment, freePort, projectDir, runProgram } from "./processes.mjs";
import { ensureInstall, runCommand } from "./setup.mjs";

const chosen = process.argv[2] ?? "all";
const scratch = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-bench-"));
fs.chmodSync(scratch, 0o755);

await runCommand(async () => {
  if (chosen === "analyse") {
    fs.rmSync(scratch, { recursive: true, force: true });
    await ensureInstall();
    const { ensureCommand } = await import("./build.mjs");
    const { main } = await import(
      pathToFileURL(await ensureCommand("scripts/bench-analyse", ["tests/validation"])).href
    );
    return main();
  }
  const clone = path.join(scratch, "wavekeep");
  const home = path.join(scratch, "home");
  fs.mkdirSync(home);
  // Where packages come from is the machine's matter: the settings are read where they are, nothing is carried over.
  process.env["npm_config_userconfig"] ??= path.join(os.homedir(), ".npmrc");
  try {
    await runProgram("git", ["clone", "--quiet", "--depth", "1", `file://${projectDir}`, clone]);
    process.stdout.write(
      `${os.cpus().length} cores (${os.cpus()[0]?.model ?? "unknown"}), ${Math.round(os.totalmem() / 2 ** 30)} GiB, Node ${process.versions.node}\n\n| what | time |\n| --- | --- |\n`,
    );
    if (chosen !== "test") await measureStart(clone, home);
    if (chosen !== "start") await measureTest(clone, home);
  } finally {
    fs.rmSync(scratch, { recursive: true, force: true });
  }
});

/**
 * @param {string} what
 * @param {number} begun from performance.now()
 */
function row(what, begun) {
  process.stdout.write(`| ${what} | ${((performance.now() - begun) / 1000).toFixed(1)} s |\n`);
}

/**
 * @param {string} clone
 * @param {string} home
 */
async function measureStart(clone, home) {
  const port = String(await freePort());
  for (const which of ["cold", "second"]) {
    const begun = performance.now();
    const child = spawn("npm", ["start"], {
      cwd: clone,
      env: cleanEnvironment({ HOME: home, PORT: port, WAVEKEEP_DATA_DIR: undefined }),
      stdio: ["ignore", "pipe", "inherit"],
    });
    const ended = once(child, "exit");
    let output = "";
    await new Promise((resolve, reject) => {
      child.stdout.on("data", (chunk) => {
        output += chunk;
        if (output.includes("Wavekeep is ready")) resolve(undefined);
      });
      child.once("exit", () => reject(new Error(`npm start ended:\n${output}`)));
    });
    row(`npm start, ${which}, until ready`, begun);
    const stopping = performance.now();
    child.kill("SIGINT");
    await ended;
    row(`npm start, ${which}, Ctrl-C until all is stopped`, stopping);
  }
}

/**
 * @param {string} clone
 * @param {string} home
 */
async function measureTest(clone, home) {
  for (const which of ["first", "second"]) {
    const begun = performance.now();
    const { output } = await runProgram("npm", ["test"], {
      cwd: clone,
      env: cleanEnvironment({ HOME: home }),
      allowFailure: true,
    });
    row(`npm test, ${which}: ${output.trimEnd().split("\n").at(-1)}`, begun);
  }
}
