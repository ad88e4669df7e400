/**
 * Who gets through which door: every route of the contract, asked by every role, by an owner, by an approver, by nobody,
 * and by a manager of another lab. A route that is not in the contract, or not mounted, fails here.
 */
import { randomUUID } from "node:crypto";
import type { Test } from "supertest";
import { beforeAll, describe, expect, test } from "vitest";
import { permissions, type Permission } from "@wavekeep/api/contract/permissions";
import { routes, type RouteContract, type RouteName } from "@wavekeep/api/contract/routes";
import { useTestApp, type Client } from "../support/app.ts";
import {
  buildInstrument,
  buildLab,
  buildSource,
  password,
  type TestLab,
  type TestPerson,
} from "../support/factories.ts";

const server = useTestApp();
const allRoutes = Object.entries(routes) as [RouteName, RouteContract][];

let lab: TestLab;
let other: TestLab;
let people: Record<
  "manager" | "technician" | "auditor" | "nothing" | "owner" | "approver" | "foreign-manager",
  TestPerson
>;
/** Ids of things in the lab, by the name they have in paths. */
let ids: Record<string, string>;
/** Words that only the lab's own replies may hold. */
const SECRET = "Bench of secrets";

beforeAll(async () => {
  lab = await buildLab(server, "Lab under test");
  other = await buildLab(server, "The other lab");
  /** A member without any role. */
  const addBare = async (name: string, isApprover = false) => {
    const person = await lab.add(name, ["technician"]);
    await lab.manager.client.put(`/people/${person.id}/roles`, { roles: [], isApprover, version: 0 }).expect(200);
    return person;
  };
  const owner = await addBare("Olga Owner");
  people = {
    manager: lab.manager,
    technician: await lab.add("Tina Technician", ["technician"]),
    auditor: await lab.add("Axel Auditor", ["auditor"]),
    nothing: await addBare("Nora Nothing"),
    owner,
    approver: await addBare("Anton Approver", true),
    "foreign-manager": other.manager,
  };
  const instrument = await buildInstrument(lab.manager, { ownerId: owner.id, name: SECRET });
  const source = await buildSource(lab.manager, { label: "HA-7" });
  const begun = await people.technician.client.post("/checks", {
    configurationId: instrument.currentConfigurationId,
    condition: "as-found",
    followsCheckId: null,
  });
  expect(begun.status).toBe(200);
  const checkId = begun.body.summary.id as string;
  const lists = await lab.manager.client.get("/line-lists");
  const [alertId, impactReviewId] = [randomUUID(), randomUUID()];
  await server.database.owner.query(
    `insert into alerts (lab_id, id, kind, instrument_id, configuration_id, check_id, title, detail, opened_at) values ($1, $2, 'overdue', $3, $4, $5, 'Overdue', $6, now())`,
    [lab.id, alertId, instrument.id, instrument.currentConfigurationId, checkId, SECRET],
  );
  await server.database.owner.query(
    `insert into impact_reviews (lab_id, id, number, instrument_id, configuration_id, check_id, window_to, opened_at) values ($1, $2, 'IMP-1', $3, $4, $5, now(), now())`,
    [lab.id, impactReviewId, instrument.id, instrument.currentConfigurationId, checkId],
  );
  ids = {
    instrumentId: instrument.id,
    configurationId: instrument.currentConfigurationId,
    sourceId: source.id,
    checkId,
    alertId,
    impactReviewId,
    personId: people.technician.id,
    captureId: randomUUID(),
    invitationId: randomUUID(),
    deviceId: randomUUID(),
    token: "no-such-token-no-such-token",
    analysisVersion: "1",
    lineListVersion: lists.body.items[0].version as string,
  };
});

const pathOf = (route: RouteContract): string => route.path.replace(/:(\w+)/g, (_, key: string) => ids[key] ?? key);

/** Queries that a list cannot do without. */
const queryOf: Partial<Record<RouteName, string>> = { search: `?q=${encodeURIComponent(SECRET)}` };
/** What a relation is found by, where the path does not say it; otherwise the body is empty, so that nothing is changed. */
const bodyOf: Partial<Record<RouteName, () => object>> = {
  logEvent: () => ({ configurationId: ids["configurationId"] }),
};

function ask(client: Client, name: RouteName): Test {
  const route: RouteContract = routes[name];
  const path = `${pathOf(route)}${queryOf[name] ?? ""}`;
  if (route.method === "get") return client.get(path);
  return client[route.method](path, bodyOf[name]?.() ?? {});
}

/** These end the session they are asked with. */
const endsSession = new Set<RouteName>(["signOut", "signOutEverywhere", "benchLock"]);

async function signInAgain(client: Client, email: string): Promise<void> {
  await client.readSession();
  await client.signIn(email, password);
}

test("the server has the routes of the contract, each with a policy of the table, and no other", () => {
  const contract = allRoutes.map(([, route]) => `${route.method} ${route.path}`).sort();
  expect(new Set(contract).size).toBe(contract.length);
  for (const [name, route] of allRoutes) expect([name, permissions[route.policy]]).not.toEqual([name, undefined]);
  expect(mountedRoutes().sort()).toEqual(contract);
});

/** Everything the router below /api answers, read from the router itself. */
function mountedRoutes(): string[] {
  interface Layer {
    route?: { path: string; methods: Record<string, boolean> };
    handle: { stack?: Layer[] };
  }
  const { stack } = (server.app as unknown as { router: { stack: Layer[] } }).router;
  const api = stack
    .map((layer) => layer.handle.stack ?? [])
    .find((inner) => inner.some((layer) => layer.route?.path === routes.readSession.path));
  // Beside the contract: the description of the API as a page, and nothing else.
  const beside = stack.flatMap((layer) => (layer.route === undefined ? [] : [layer.route.path]));
  expect(beside).toEqual(["/api/docs"]);
  return (api ?? []).flatMap((layer) =>
    layer.route === undefined ? [] : Object.keys(layer.route.methods).map((method) => `${method} ${layer.route!.path}`),
  );
}

describe.each(allRoutes)("%s", (name, route) => {
  const permission: Permission = permissions[route.policy];
  const refusals = ["/problems/not-allowed", "/problems/not-signed-in", "/problems/csrf"];
  const refused = (reply: { status: number; body: { type?: string } }) => refusals.includes(reply.body?.type ?? "");

  test("nobody signed in", async () => {
    const reply = await ask(await server.visit(), name);
    expect(reply.status).toBeLessThan(500);
    if (permission.public === true) expect(refused(reply)).toBe(false);
    else expect([reply.status, reply.body.type]).toEqual([401, "/problems/not-signed-in"]);
  });

  test.each(["manager", "technician", "auditor", "nothing", "owner", "approver"] as const)("%s", async (who) => {
    const { client, email } = people[who];
    const reply = await ask(client, name);
    if (endsSession.has(name)) await signInAgain(client, email);
    expect(reply.status).toBeLessThan(500);
    expect([who, refused(reply)]).toEqual([who, !mayPass(permission, who)]);
    if (refused(reply)) expect(reply.headers["content-type"]).toContain("application/problem+json");
  });

  test("a manager of another lab: nothing of this one is shown, nothing of it is changed", async () => {
    const { client, email } = people["foreign-manager"];
    const before = await fingerprint();
    const reply = await ask(client, name);
    if (endsSession.has(name)) await signInAgain(client, email);
    expect(reply.status).toBeLessThan(500);
    const text = JSON.stringify(reply.body ?? null) + (reply.text ?? "");
    expect(text).not.toContain(name === "search" ? `"label":"${SECRET}` : SECRET);
    expect(text).not.toContain("Olga Owner");
    const speaksOfTheLab = /:(instrument|configuration|source|check|alert|impactReview|person|capture)Id/.test(
      route.path,
    );
    // A form that is empty is told so before it is looked up; a complete one finds nothing.
    if (speaksOfTheLab) expect([404, 403, 400, 415]).toContain(reply.status);
    if (speaksOfTheLab && route.method === "get") expect(reply.status).toBe(404);
    expect(await fingerprint()).toEqual(before);
  });
});

/** What the table says, read once more by hand: the owner owns the instrument all the ids speak of. */
function mayPass(
  permission: Permission,
  who: "manager" | "technician" | "auditor" | "nothing" | "owner" | "approver",
): boolean {
  if (permission.public === true || permission.signedIn === true || permission.member === true) return true;
  if (who === "owner") return permission.relation === "owns-instrument";
  if (who === "approver") return permission.relation === "named-approver";
  return who !== "nothing" && (permission.roles?.includes(who) ?? false);
}

/** Number of rows of the lab in every table, and the versions of those that may change. */
async function fingerprint(): Promise<unknown> {
  const { rows: tables } = await server.database.owner.query<{ name: string; versioned: boolean }>(
    `select table_name as name, bool_or(column_name = 'version' and data_type = 'integer') as versioned from information_schema.columns
      where table_schema = 'public' group by 1 having bool_or(column_name = 'lab_id') order by 1`,
  );
  const counts = tables.map(
    ({ name, versioned }) =>
      `select '${name}' as name, count(*)::int as n, ${versioned ? "coalesce(sum(version), 0)" : "0"}::int as v from ${name} where lab_id = $1`,
  );
  return (await server.database.owner.query(counts.join(" union all "), [lab.id])).rows;
}

test("an auditor gets through no door that changes the record", () => {
  const own = ["session.", "password.", "invitation.", "bench.sign-in", "bench.lock", "me.change"];
  const changing = allRoutes.filter(
    ([, route]) => route.method !== "get" && !own.some((start) => route.policy.startsWith(start)),
  );
  const open = changing.filter(([, route]) => mayPass(permissions[route.policy], "auditor"));
  expect(open.map(([name]) => name)).toEqual([]);
});

test("a manager who contributed to a check does not approve it; another manager may, and the refusal is in the trail", async () => {
  const second = await lab.add("Second Manager", ["manager", "technician"]);
  const instrument = await buildInstrument(lab.manager, { ownerId: people.owner.id, name: "Bench of two managers" });
  const begun = await second.client
    .post("/checks", {
      configurationId: instrument.currentConfigurationId,
      condition: "as-found",
      followsCheckId: null,
    })
    .expect(200);
  const checkId = begun.body.summary.id as string;
  expect((await second.client.post(`/checks/${checkId}/approve`, {})).body).toMatchObject({
    type: "/problems/not-allowed",
    detail: expect.stringMatching(/You contributed/),
  });
  // Let through to the form, which is empty.
  expect((await lab.manager.client.post(`/checks/${checkId}/approve`, {})).body.type).toBe("/problems/invalid-input");
  const { rows } = await server.database.owner.query<{ canonical: string }>(
    "select canonical from trail_entries where lab_id = $1 and action = 'action.refused' order by number desc limit 1",
    [lab.id],
  );
  expect(JSON.parse(rows[0]!.canonical)).toMatchObject({
    actor: { id: second.id },
    about: { kind: "route", id: "approveCheck" },
    why: "check.approve",
  });
});

test("a person whose membership ended is out at once, with the session they had", async () => {
  const leaving = await lab.add("Lars Leaving", ["technician"]);
  expect((await leaving.client.get("/instruments")).status).toBe(200);
  expect((await lab.manager.client.post(`/people/${leaving.id}/end`, { reason: "moved on", version: 0 })).status).toBe(
    204,
  );
  expect((await leaving.client.get("/instruments")).status).toBe(403);
  expect((await leaving.client.get("/session")).body).toMatchObject({ lab: null, labs: [], roles: [] });
});
