/** What `npm start` promises beside a page that answers. */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { afterAll, expect, inject, test } from "vitest";
import { cleanEnvironment, projectDir, runProgram } from "../../scripts/processes.mjs";

const { address, dataDir, startPid } = inject("wavekeep");
const scratch = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-start-"));
afterAll(() => fs.rmSync(scratch, { recursive: true, force: true }));

const start = (variables: Record<string, string>) =>
  runProgram(process.execPath, [path.join(projectDir, "scripts/start.mjs")], {
    env: cleanEnvironment({
      NODE_ENV: undefined,
      DATABASE_URL: undefined,
      DATABASE_OWNER_URL: undefined,
      ...variables,
    }),
    allowFailure: true,
  });

test("health answers 200 with the version", async () => {
  const reply = await fetch(`${address}/api/health`);
  const { version } = JSON.parse(fs.readFileSync(path.join(projectDir, "package.json"), "utf8"));
  expect(reply.status).toBe(200);
  expect(await reply.json()).toMatchObject({ version });
});

test("a second start of the same data folder says where the first answers, and stops", async () => {
  const { exit, output } = await start({ PORT: "0", WAVEKEEP_DATA_DIR: dataDir });
  expect(output).toContain(`Wavekeep already runs on this data folder: ${address}`);
  expect(exit).toBe(0);
  expect((await fetch(`${address}/api/health`)).status).toBe(200);
});

test("a port that is taken is said in a sentence, before anything is made", async () => {
  const port = new URL(address).port;
  const other = path.join(scratch, "data");
  const { exit, output } = await start({ PORT: port, WAVEKEEP_DATA_DIR: other });
  expect(output).toContain(`Port ${port} on 127.0.0.1 is used by another program.`);
  expect(exit).toBe(1);
  expect(fs.readdirSync(other)).toEqual([]);
});

test("the server's process is given the app's address and never the owner's", () => {
  const children = fs.readFileSync(`/proc/${startPid}/task/${startPid}/children`, "utf8").trim().split(" ");
  const environments = children
    .filter((pid) => fs.readFileSync(`/proc/${pid}/cmdline`, "utf8").includes("main.js"))
    .map((pid) => fs.readFileSync(`/proc/${pid}/environ`, "utf8").split("\0"));
  expect(environments).toHaveLength(1);
  const ownerPassword = fs.readFileSync(path.join(dataDir, "owner.password"), "utf8").trim();
  expect(environments[0]!.some((variable) => variable.startsWith("DATABASE_URL=postgres://wavekeep_app:"))).toBe(true);
  expect(environments[0]!.filter((variable) => variable.includes(ownerPassword) || /OWNER/.test(variable))).toEqual([]);
});

test("keys and passwords in the data folder can be read by their owner alone", () => {
  for (const name of ["owner.password", "app.password", "session.key", "signing.key", "demo-sign-ins.json"]) {
    expect((fs.statSync(path.join(dataDir, name)).mode & 0o777).toString(8), name).toBe("600");
  }
});
