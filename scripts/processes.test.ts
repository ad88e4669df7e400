import { spawn } from "node:child_process";
import { once } from "node:events";
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { cleanEnvironment, lockHolder, processIdentity, runProgram, takeLock, withLock } from "./processes.mjs";

let folder: string;
beforeEach(() => (folder = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-processes-"))));
afterEach(() => fs.rmSync(folder, { recursive: true, force: true }));

test("a lock is held until it is released, and says who holds it", () => {
  const file = path.join(folder, "start.lock");
  const first = takeLock(file, { address: "http://127.0.0.1:4310" });
  expect(takeLock(file)).toMatchObject({
    taken: false,
    holder: { pid: process.pid, address: "http://127.0.0.1:4310" },
  });
  if (first.taken) first.release();
  expect(lockHolder(file)).toBeNull();
  expect(takeLock(file).taken).toBe(true);
});

test("a lock left by a process that is gone is taken over", async () => {
  const child = spawn(process.execPath, ["--version"], { stdio: "ignore" });
  await once(child, "exit");
  const file = path.join(folder, "start.lock");
  fs.writeFileSync(file, JSON.stringify({ pid: child.pid, identity: `${child.pid}@1` }));
  expect(takeLock(file).taken).toBe(true);
  expect(fs.readdirSync(folder)).toEqual(["start.lock"]);
});

test("a lock whose number now belongs to another process is taken over", () => {
  const file = path.join(folder, "start.lock");
  fs.writeFileSync(file, JSON.stringify({ pid: process.pid, identity: `${process.pid}@1` }));
  expect(takeLock(file).taken).toBe(true);
});

test("what is done under a lock is done one after the other", async () => {
  const steps: string[] = [];
  const work = (name: string) => async () => {
    steps.push(`${name} begins`);
    await new Promise((resolve) => setTimeout(resolve, 20));
    steps.push(`${name} ends`);
  };
  const file = path.join(folder, "install.lock");
  await Promise.all([withLock(file, work("a")), withLock(file, work("b"))]);
  expect(steps).toEqual(["a begins", "a ends", "b begins", "b ends"]);
});

test("a process that is gone has no identity", () => {
  expect(processIdentity(process.pid)).toMatch(new RegExp(`^${process.pid}@\\d+$`));
  expect(processIdentity(2 ** 22 + 1)).toBeNull();
});

test("a program that fails is reported with its exit and what it printed", async () => {
  const failing = runProgram(process.execPath, ["-e", "console.log('half done'); process.exit(3)"]);
  await expect(failing).rejects.toMatchObject({ exit: 3, output: "half done\n" });
});

test("nested tools see where packages come from, and nothing else of the outer npm", () => {
  process.env["npm_config_registry"] = "https://packages.example/";
  process.env["npm_config_prefer_offline"] = "x";
  try {
    const environment = cleanEnvironment();
    expect(environment["npm_config_registry"]).toBe("https://packages.example/");
    expect(environment).not.toHaveProperty("npm_config_prefer_offline");
  } finally {
    delete process.env["npm_config_registry"];
    delete process.env["npm_config_prefer_offline"];
  }
});
