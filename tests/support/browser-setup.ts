/**
 * Set-up of the browser tests: a whole Wavekeep, started by the same script as `npm start`, with the demo lab, in a
 * data folder and on a port of its own.
 */
import { spawn } from "node:child_process";
import { once } from "node:events";
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import type { TestProject } from "vitest/node";
import { ensureChromium } from "../../scripts/chromium.mjs";
import { cleanEnvironment, projectDir } from "../../scripts/processes.mjs";

export interface DemoSignIn {
  email: string;
  password: string;
  name: string;
  role: string;
}
export interface RunningWavekeep {
  address: string;
  dataDir: string;
  /** Process of scripts/start.mjs. */
  startPid: number;
  signIns: DemoSignIn[];
  chromium: string;
}

declare module "vitest" {
  export interface ProvidedContext {
    wavekeep: RunningWavekeep;
  }
}

export default async function setUpBrowser(project: TestProject): Promise<() => Promise<void>> {
  const chromium = await ensureChromium(console.log);
  const dataDir = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-browser-"));
  fs.chmodSync(dataDir, 0o711);
  const child = spawn(process.execPath, [path.join(projectDir, "scripts/start.mjs")], {
    stdio: ["ignore", "pipe", "pipe", "ipc"],
    env: cleanEnvironment({
      PORT: "0",
      HOST: "127.0.0.1",
      WAVEKEEP_DATA_DIR: dataDir,
      DATABASE_URL: undefined,
      DATABASE_OWNER_URL: undefined,
      SMTP_URL: undefined,
      WAVEKEEP_DEMO: undefined,
      NODE_ENV: undefined,
    }),
  });
  let output = "";
  const ended = once(child, "exit");
  const address = await new Promise<string>((resolve, reject) => {
    const take = (chunk: Buffer) => {
      output += chunk.toString();
      const ready = /Wavekeep is ready: (\S+)/.exec(output)?.[1];
      if (ready !== undefined) resolve(ready);
    };
    child.stdout?.on("data", take);
    child.stderr?.on("data", take);
    child.once("exit", () => reject(new Error(`Wavekeep did not start for the browser tests:\n${output}`)));
  });
  const signIns = JSON.parse(fs.readFileSync(path.join(dataDir, "demo-sign-ins.json"), "utf8")) as DemoSignIn[];
  project.provide("wavekeep", { address, dataDir, startPid: child.pid!, signIns, chromium });
  return async () => {
    child.kill("SIGTERM");
    await ended;
    fs.rmSync(dataDir, { recursive: true, force: true });
  };
}
