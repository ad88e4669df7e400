/**
 * `npm test`: its own set-up, then type check, lint, format, unit, API and browser tests, ending in one plain line.
 * `npm test -- PATH...` runs only the test files whose path holds one of the words given.
 */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { ensureBuild } from "./build.mjs";
import { ensureChromium } from "./chromium.mjs";
import { throwAwayCluster } from "./postgres.mjs";
import { ProgramFailed, cleanEnvironment, projectDir, runProgram, stopChildren } from "./processes.mjs";
import { step } from "./progress.mjs";
import { PlainError, ensureInstall, runCommand, workspacePackages } from "./setup.mjs";

const filters = process.argv.slice(2);
const totals = { passed: 0, failed: 0, skipped: 0 };
const begun = performance.now();
/** @type {string} */
const scratch = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-results-"));
let stopping = false;

for (const signal of /** @type {const} */ (["SIGINT", "SIGTERM", "SIGHUP"])) {
  process.on(signal, () => {
    stopping = true;
    stopChildren();
  });
}
for (const stream of [process.stdout, process.stderr]) stream.on("error", () => {});

await runCommand(async () => {
  try {
    await step("packages", async (say, outcome) => {
      if (!(await ensureInstall(say))) outcome("unchanged");
    });
    const cluster = await step("PostgreSQL", (say) => throwAwayCluster(say));
    try {
      const variables = { WAVEKEEP_TEST_DATABASE: cluster.ownerUrl("postgres") };
      if (filters.length > 0) await runVitest("chosen", filters, variables);
      else await runEverything(variables);
    } finally {
      await cluster.remove();
    }
  } finally {
    fs.rmSync(scratch, { recursive: true, force: true });
  }
  if (stopping) throw new PlainError("Stopped before the end.");
  if (totals.skipped > 0) print(`${totals.skipped} skipped`);
  print(`${((performance.now() - begun) / 1000).toFixed(0)} s`);
  print(`${totals.passed} passed, ${totals.failed} failed`);
  return totals.failed > 0 || totals.passed === 0 ? 1 : 0;
});

/** @param {string} line */
function print(line) {
  process.stdout.write(`${line}\n`);
}

/**
 * Two lanes share the cores: the static checks and the build beside the tests that need no browser; then the browser.
 *
 * @param {Record<string, string>} variables
 */
async function runEverything(variables) {
  const chromium = ensureChromium(print);
  chromium.catch(() => {});
  await Promise.all([
    runStaticChecks(),
    runVitest(
      "unit and API",
      ["--project", "scripts", "--project", "core", "--project", "external", "--project", "api", "--project", "web"],
      variables,
    ),
  ]);
  await countAs("Chromium", async () => void (await chromium));
  await runVitest("browser", ["--project", "browser"], variables);
}

async function runStaticChecks() {
  const bin = (/** @type {string} */ file) => path.join(projectDir, "node_modules", file);
  const node = (/** @type {string[]} */ ...args) =>
    runProgram(process.execPath, args, { cwd: projectDir, env: cleanEnvironment() });
  await countAs("build", async () => void (await ensureBuild()).release());
  for (const project of [...workspacePackages().map((name) => `packages/${name}`), "tests", "scripts"]) {
    await countAs(`type check ${project}`, () => node(bin("typescript/bin/tsc"), "-p", project));
  }
  await countAs("lint", () => node(bin("eslint/bin/eslint.js"), "--max-warnings", "0", "."));
  await countAs("format", () => node(bin("prettier/bin/prettier.cjs"), "--check", "--log-level", "warn", "."));
}

/**
 * Run a check that counts as one test.
 *
 * @param {string} name
 * @param {() => Promise<unknown>} check
 */
async function countAs(name, check) {
  const since = performance.now();
  try {
    await check();
    totals.passed += 1;
    print(`  ${name}: passed, ${((performance.now() - since) / 1000).toFixed(1)} s`);
  } catch (error) {
    totals.failed += 1;
    const why = error instanceof ProgramFailed ? error.output : /** @type {Error} */ (error).message;
    print(`  ${name}: FAILED\n${why.trimEnd()}`);
  }
}

/**
 * Run vitest and add what it counted. A file that could not be loaded, or an error outside a test, counts as a failure.
 *
 * @param {string} name
 * @param {string[]} args
 * @param {Record<string, string>} variables
 */
async function runVitest(name, args, variables) {
  const results = path.join(scratch, `${name.replaceAll(" ", "-")}.json`);
  const reporters = ["--reporter=default", "--reporter=json", `--outputFile.json=${results}`];
  const { exit } = await runProgram(
    process.execPath,
    [path.join(projectDir, "node_modules/vitest/vitest.mjs"), "run", ...reporters, ...args],
    {
      cwd: projectDir,
      env: cleanEnvironment({ ...variables, NODE_ENV: "test" }),
      stdio: ["ignore", "inherit", "inherit"],
      allowFailure: true,
    },
  );
  if (!fs.existsSync(results)) {
    totals.failed += 1;
    print(`  ${name}: the test runner ended (exit ${exit}) without results`);
    return;
  }
  const report = JSON.parse(fs.readFileSync(results, "utf8"));
  const unloaded = report.testResults.filter(
    (/** @type {{ status: string, assertionResults: { status: string }[] }} */ file) =>
      file.status === "failed" && file.assertionResults.every(({ status }) => status !== "failed"),
  ).length;
  const failed = report.numFailedTests + unloaded;
  totals.passed += report.numPassedTests;
  totals.skipped += report.numPendingTests + report.numTodoTests;
  totals.failed += failed === 0 && exit !== 0 ? 1 : failed;
}
