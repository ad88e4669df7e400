/** The doors themselves: problem documents, repeated requests, bad input, the client served, the API described. */
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { randomUUID } from "node:crypto";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { createApp } from "@wavekeep/api/app";
import { problemDocument } from "@wavekeep/api/contract/common";
import { routes, type RouteContract } from "@wavekeep/api/contract/routes";
import supertest from "supertest";
import { useTestApp } from "../support/app.ts";
import { buildInstrument, buildLab, instrumentInput, password, type TestLab } from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
beforeAll(async () => {
  lab = await buildLab(server, "Doors");
});

test("health answers with the version", async () => {
  const reply = await (await server.visit()).get("/health");
  expect([reply.status, reply.body]).toEqual([200, { status: "ready", version: server.services.config.version }]);
});

describe("refusals are problem documents", () => {
  test("for an address that is none, a method that is none, an id that is none", async () => {
    for (const reply of [
      await lab.manager.client.get("/nope"),
      await lab.manager.client.put("/health", {}),
      await lab.manager.client.get("/instruments/42"),
      await lab.manager.client.get(`/instruments/${randomUUID()}`),
      await lab.manager.client.get("/instruments/%E0%A4%A"),
    ]) {
      expect([400, 404]).toContain(reply.status);
      expect(reply.headers["content-type"]).toContain("application/problem+json");
      expect(problemDocument.parse(reply.body).status).toBe(reply.status);
    }
  });

  test("broken JSON, a foreign encoding, a body too large, a character that cannot be stored", async () => {
    const raw = (type: string, body: string) => lab.manager.client.put("/me").set("content-type", type).send(body);
    expect((await raw("application/json", '{"name": ')).body.detail).toMatch(/no valid JSON/);
    expect((await raw("application/json; charset=klingon", "{}")).status).toBe(415);
    expect((await raw("application/json", JSON.stringify({ name: "x".repeat(1_100_000) }))).status).toBe(413);
    expect((await raw("application/json", JSON.stringify({ name: "nul \u0000 here" }))).body.detail).toMatch(
      /cannot be stored/,
    );
    expect((await raw("text/plain", "name=x")).status).toBe(400);
    expect((await raw("application/json", "[1,2]")).status).toBe(400);
  });

  test("a form says which fields, in words", async () => {
    const reply = await lab.manager.client.post("/invitations", { email: "no address", roles: [] });
    expect(reply.body.fields).toEqual([
      { path: "email", message: "This is not an e-mail address." },
      { path: "roles", message: "Choose at least one role." },
    ]);
    expect((await lab.manager.client.post("/invitations", {})).body.fields).toEqual([
      { path: "email", message: "This is missing." },
      { path: "roles", message: "This is missing." },
    ]);
  });
});

test("whatever is sent to whatever route, no answer is a 5xx", async () => {
  const nasty: unknown[] = [
    {},
    [],
    null,
    "text",
    0,
    { name: null },
    { version: -1 },
    { version: 1e400 },
    { roles: "manager" },
    { email: { $ne: "" } },
    { name: "\u0000\uD800", reason: "\u0000\u0000\u0000", note: "\u0000\u0000\u0000", version: 0 },
    { version: 99999999999, roles: ["manager"], isApprover: true, reason: "a reason", password: "x", segments: [] },
  ];
  const queries = [
    "",
    "?limit=0",
    "?limit=abc",
    "?after=%00",
    "?after=99999999999999999999",
    "?q=%00",
    "?q=%25_%5C",
    "?fromOn=0000-00-00",
    "?fromOn=9999-12-31&toOn=9999-12-31",
    "?personId=1",
    "?kind=%25",
    "?state=open&state=closed",
    "?fromNm=NaN",
  ];
  const ids = [randomUUID(), "%00"];
  const failures: string[] = [];
  // These two end the session they are asked with.
  const left = new Set<string>([routes.signOut.path, routes.signOutEverywhere.path, routes.benchLock.path]);
  for (const route of Object.values(routes) as RouteContract[]) {
    if (route.method === "delete" && left.has(route.path)) continue;
    for (const id of ids) {
      const address = route.path.replace(/:\w+/g, id);
      const replies =
        route.method === "get"
          ? await Promise.all(queries.map((query) => lab.manager.client.get(address + query)))
          : await Promise.all(
              nasty.map((body) =>
                lab.manager.client[route.method as "post"](address, undefined)
                  .set("content-type", "application/json")
                  .send(JSON.stringify(body)),
              ),
            );
      replies.forEach(
        (reply, index) =>
          reply.status >= 500 &&
          failures.push(
            `${reply.status} ${route.method} ${address} ${route.method === "get" ? queries[index] : JSON.stringify(nasty[index])}`,
          ),
      );
      if (!route.path.includes(":")) break;
    }
  }
  expect(failures).toEqual([]);
}, 120_000);

describe("Idempotency-Key", () => {
  const register = (key: string, name: string) =>
    lab.manager.client.post("/instruments", instrumentInput(lab.manager.id, { name })).set("idempotency-key", key);
  const count = async (name: string) =>
    (
      await server.database.owner.query("select count(*)::int as n from instruments where lab_id = $1 and name = $2", [
        lab.id,
        name,
      ])
    ).rows[0].n;

  test("a repetition has no second effect and gets the first reply", async () => {
    const first = await register("key-number-one", "Once").expect(200);
    const again = await register("key-number-one", "Once").expect(200);
    expect(again.body).toEqual(first.body);
    expect(await count("Once")).toBe(1);
  });

  test("five at the same moment have one effect and one reply", async () => {
    const replies = await Promise.all(Array.from({ length: 5 }, () => register("key-number-two", "Five at once")));
    expect(replies.map(({ status }) => status)).toEqual([200, 200, 200, 200, 200]);
    expect(new Set(replies.map(({ body }) => body.id)).size).toBe(1);
    expect(await count("Five at once")).toBe(1);
  });

  test("the same key for another request is refused, another person's same key is theirs", async () => {
    await register("key-number-three", "Third").expect(200);
    expect((await register("key-number-three", "Something else")).body.type).toBe("/problems/repeated-request");
    const second = await lab.add("Second Manager", ["manager"]);
    const reply = await second.client
      .post("/instruments", instrumentInput(second.id, { name: "Theirs" }))
      .set("idempotency-key", "key-number-three");
    expect([reply.status, reply.body.name]).toEqual([200, "Theirs"]);
  });

  test("a refused request leaves its key free; a key is forgotten after a day", async () => {
    expect((await register("key-number-four", "Once")).status).toBe(409);
    expect((await register("key-number-four", "Once more")).status).toBe(200);
    await server.database.owner.query(
      "update idempotency_keys set created_at = now() - interval '25 hours' where key = 'key-number-four'",
    );
    expect((await register("key-number-four", "After a day")).status).toBe(200);
    expect((await register("short", "x")).status).toBe(400);
  });
});

test("two people edit one instrument: the later one is told, and nothing is overwritten", async () => {
  const instrument = await buildInstrument(lab.manager, { name: "Edited twice" });
  const change = (place: string) =>
    lab.manager.client.put(`/instruments/${instrument.id}`, {
      name: instrument.name,
      maker: "",
      model: "",
      serial: "",
      ownerId: lab.manager.id,
      place,
      altitudeM: null,
      purchasedOn: null,
      version: instrument.version,
    });
  const replies = await Promise.all([change("Room 7"), change("Room 8")]);
  expect(replies.map(({ status }) => status).sort()).toEqual([200, 409]);
  const winner = replies.find(({ status }) => status === 200)!.body.place;
  expect((await lab.manager.client.get(`/instruments/${instrument.id}`)).body.place).toBe(winner);
});

describe("the API described", () => {
  test("OpenAPI 3.1 has every route with who may, and its shapes", async () => {
    const { body } = await (await server.visit()).get("/openapi.json").expect(200);
    expect(body.openapi).toBe("3.1.0");
    for (const [name, route] of Object.entries(routes) as [string, RouteContract][]) {
      const operation = body.paths[route.path.replace(/:(\w+)/g, "{$1}")]?.[route.method];
      expect(operation).toMatchObject({ operationId: name, description: expect.stringContaining(route.policy) });
      if (route.body !== undefined)
        expect(operation.requestBody.content["application/json"].schema.type).toBe("object");
    }
    expect(
      body.paths["/invitations"].post.requestBody.content["application/json"].schema.properties.email,
    ).toMatchObject({ type: "string", format: "email" });
  });

  test("and a plain page shows it", async () => {
    const reply = await (await server.visit()).get("/docs").expect(200);
    expect(reply.headers["content-type"]).toContain("text/html");
    expect(reply.text).toContain("/api/checks/:checkId/approve");
  });
});

describe("the client served", () => {
  const webDir = fs.mkdtempSync(path.join(os.tmpdir(), "wavekeep-web-"));
  afterAll(() => fs.rmSync(webDir, { recursive: true, force: true }));
  const page = () => {
    fs.mkdirSync(path.join(webDir, "assets"), { recursive: true });
    fs.writeFileSync(path.join(webDir, "assets", "main-abc123.js"), "1;");
    fs.writeFileSync(
      path.join(webDir, "index.html"),
      '<!doctype html><html lang="en" data-theme="paper"><head><meta name="theme-color" content="#F6F5F1" /><link rel="icon" href="/favicon-paper.svg" /></head></html>',
    );
    return supertest(createApp({ ...server.services, config: { ...server.services.config, webDir } }));
  };

  test("one page for every address, in the theme this device chose, and never cached", async () => {
    const asked = page();
    const plain = await asked.get("/instruments/some/deep/link").expect(200);
    expect(plain.text).toContain('data-theme="paper"');
    expect(plain.headers["cache-control"]).toBe("no-cache");
    const dark = await asked.get("/").set("cookie", "other=1; wavekeep-theme=dark-room-amber");
    expect(dark.text).toContain('data-theme="dark-room-amber"');
    expect(dark.text).toContain('content="#050200"');
    expect(dark.text).toContain("/favicon-dark-room-amber.svg");
    const odd = await asked.get("/").set("cookie", 'wavekeep-theme="><script>');
    expect(odd.text).toContain('data-theme="paper"');
  });

  test("hashed assets stay for a year, missing ones are 404, an unknown API address is no page", async () => {
    const asked = page();
    expect((await asked.get("/assets/main-abc123.js").expect(200)).headers["cache-control"]).toBe(
      "public, max-age=31536000, immutable",
    );
    await asked.get("/assets/gone-123.js").expect(404);
    await asked.get("/gone.png").expect(404);
    expect((await asked.get("/api/nope").expect(404)).headers["content-type"]).toContain("application/problem+json");
  });

  test("over plain http nothing asks the browser for https; behind TLS the cookie is secure and HSTS stands", async () => {
    const plain = await page().get("/");
    expect(plain.headers["content-security-policy"]).not.toContain("upgrade-insecure-requests");
    expect(plain.headers["strict-transport-security"]).toBeUndefined();
    const config = {
      ...server.services.config,
      webDir,
      publicUrl: "https://wavekeep.example",
      secureCookies: true,
      trustProxy: 1,
    };
    const secure = supertest.agent(createApp({ ...server.services, config }));
    const session = await secure.get("/api/session").set("x-forwarded-proto", "https");
    expect(session.headers["strict-transport-security"]).toBeDefined();
    const cookies = session.headers["set-cookie"] as unknown as string[];
    const signedIn = await secure
      .post("/api/session")
      .set({
        "x-forwarded-proto": "https",
        cookie: cookies.map((cookie) => cookie.split(";")[0]).join("; "),
        "x-csrf-token": session.body.csrfToken,
      })
      .send({ email: lab.manager.email, password });
    expect(signedIn.status).toBe(200);
    expect(String(signedIn.headers["set-cookie"])).toMatch(/Secure/);
  });
});
