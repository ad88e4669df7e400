/** The API as the server builds it, on a test file's own database, spoken to through HTTP. */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { createApp } from "@wavekeep/api/app";
import { openAnalyser } from "@wavekeep/api/checks/analyser";
import { loadConfig } from "@wavekeep/api/config";
import { openDatabase } from "@wavekeep/api/db/connection";
import { makeJobs, openBoss } from "@wavekeep/api/jobs/jobs";
import { openSigningKey } from "@wavekeep/api/records/signing";
import type { Services } from "@wavekeep/api/services";
import { pino } from "pino";
import supertest, { type Test } from "supertest";
import { afterAll, beforeAll } from "vitest";
import { useTestDatabase, type TestDatabase } from "./database.ts";

type App = ReturnType<typeof createApp>;

export interface TestApp {
  app: App;
  services: Services;
  database: TestDatabase;
  /** A browser nobody has signed in with yet. */
  visit(): Promise<Client>;
}

/** One browser: keeps its cookies, and sends the token that every change must carry. Paths are below `/api`. */
export class Client {
  /** For requests without the token, or with another's. */
  readonly agent: ReturnType<typeof supertest.agent>;
  /** Sent back in `x-csrf-token` with every change. */
  csrfToken = "";

  constructor(app: App) {
    this.agent = supertest.agent(app);
  }

  get(route: string): Test {
    return this.agent.get(`/api${route}`);
  }
  post(route: string, body?: object): Test {
    return this.#change(this.agent.post(`/api${route}`), body);
  }
  put(route: string, body?: object): Test {
    return this.#change(this.agent.put(`/api${route}`), body);
  }
  delete(route: string): Test {
    return this.#change(this.agent.delete(`/api${route}`));
  }
  /** Files as a form sends them. */
  upload(
    route: string,
    field: string,
    files: { name: string; bytes: Uint8Array | string }[],
    fields: Record<string, string> = {},
  ): Test {
    let request = this.agent.post(`/api${route}`).set("x-csrf-token", this.csrfToken);
    for (const [name, value] of Object.entries(fields)) request = request.field(name, value);
    for (const { name, bytes } of files) request = request.attach(field, Buffer.from(bytes), name);
    return request;
  }

  /** Read who is signed in, and with it the token for this session. */
  async readSession() {
    const reply = await this.get("/session").expect(200);
    this.csrfToken = reply.body.csrfToken as string;
    return reply.body;
  }

  async signIn(email: string, password: string) {
    const reply = await this.post("/session", { email, password }).expect(200);
    this.csrfToken = reply.body.csrfToken as string;
    return reply.body;
  }

  #change(request: Test, body?: object): Test {
    return request.set("x-csrf-token", this.csrfToken).send(body);
  }
}

/**
 * The app for this test file, on a database of its own. Call it once at the top level.
 *
 * @example const server = useTestApp();  test("…", async () => { const client = await server.visit(); … });
 */
export function useTestApp(env: NodeJS.ProcessEnv = {}): TestApp {
  const database = useTestDatabase();
  const handle = { database } as TestApp;
  const undo: (() => unknown)[] = [];
  beforeAll(async () => {
    const dataDir = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-app-"));
    undo.push(() => fs.rmSync(dataDir, { recursive: true, force: true }));
    const config = loadConfig({
      NODE_ENV: "test",
      LOG_LEVEL: "silent",
      DATABASE_URL: database.appUrl,
      WAVEKEEP_DATA_DIR: dataDir,
      WAVEKEEP_SESSION_KEY: "a session key for the tests, long enough",
      ...env,
    });
    const db = openDatabase(config.databaseUrl, { max: 5 });
    undo.push(() => db.close());
    const boss = openBoss(config.databaseUrl, { worker: false });
    boss.on("error", () => {});
    await boss.start();
    undo.push(() => boss.stop({ graceful: false }));
    const analyser = openAnalyser({ threads: 1 });
    undo.push(() => analyser.close());
    handle.services = {
      config,
      db,
      logger: pino({ level: config.logLevel }),
      jobs: makeJobs(boss),
      signer: openSigningKey(config.signingKeyFile),
      analyser,
    };
    handle.app = createApp(handle.services);
    handle.visit = async () => {
      const client = new Client(handle.app);
      await client.readSession();
      return client;
    };
  });
  afterAll(async () => {
    for (const action of undo.reverse()) await action();
  });
  return handle;
}
