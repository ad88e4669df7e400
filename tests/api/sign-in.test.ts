import { beforeAll, expect, test } from "vitest";
import { useTestApp, type Client } from "../support/app.ts";
import { buildLab, mailedToken, password, type TestLab } from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
beforeAll(async () => {
  lab = await buildLab(server, "Spectroscopy");
});

/** A sign-in that may fail; the token of the new session is taken over when it does not. */
async function trySignIn(client: Client, email: string, given = password) {
  await client.readSession();
  const reply = await client.post("/session", { email, password: given });
  if (reply.status === 200) await client.readSession();
  return reply;
}

const trailOf = async (labId: string) =>
  (
    await server.database.owner.query<{ action: string; canonical: string }>(
      "select action, canonical from trail_entries where lab_id = $1 order by number",
      [labId],
    )
  ).rows;

test("before sign-in the session names nobody, and gives the token that a change needs", async () => {
  const browser = await server.visit();
  expect(await browser.readSession()).toMatchObject({
    person: null,
    lab: null,
    roles: [],
    isDemoServer: false,
    demoPeople: [],
  });
  expect((await browser.get("/people")).status).toBe(401);
});

test("signing in answers who, where and what they may do; the trail has it", async () => {
  const browser = await server.visit();
  const reply = await trySignIn(browser, lab.manager.email.toUpperCase());
  expect(reply.status).toBe(200);
  expect(reply.body).toMatchObject({
    person: { id: lab.manager.id },
    lab: { id: lab.id, zone: "Europe/Berlin" },
    roles: ["manager"],
    idleSeconds: 1200,
  });
  expect((await trailOf(lab.id)).at(-1)).toMatchObject({ action: "session.begun" });
  const ended = await browser.delete("/session");
  expect(ended.status).toBe(204);
  expect((await browser.get("/people")).status).toBe(401);
});

test("a wrong password and an unknown address read the same, and the refusal is in the trail of the lab", async () => {
  const browser = await server.visit();
  const wrong = await trySignIn(browser, lab.manager.email, "not the password");
  const unknown = await trySignIn(browser, "nobody@nowhere.example", "not the password");
  expect(wrong.status).toBe(401);
  expect(wrong.body).toEqual(unknown.body);
  expect(wrong.headers["content-type"]).toContain("application/problem+json");
  expect((await trailOf(lab.id)).at(-1)).toMatchObject({ action: "session.refused" });
});

test("the session's id changes with the sign-in, so that a planted one is worth nothing", async () => {
  const sids = async () =>
    (await server.database.owner.query<{ sid: string }>("select sid from sessions")).rows.map(({ sid }) => sid);
  const browser = await server.visit();
  await trySignIn(browser, lab.manager.email);
  const before = await sids();
  const again = await trySignIn(browser, lab.manager.email);
  expect(again.headers["set-cookie"]?.[0]).toMatch(/^wavekeep_4310=.*HttpOnly; SameSite=Lax/);
  const after = await sids();
  expect(after).toHaveLength(before.length);
  expect(after.filter((sid) => !before.includes(sid))).toHaveLength(1);
});

test("eight wrong passwords lock the address, then even the right one is told to wait", async () => {
  const person = await lab.add("Lena Locked", ["technician"]);
  const browser = await server.visit();
  for (let i = 0; i < 8; i += 1) expect((await trySignIn(browser, person.email, "wrong wrong wrong")).status).toBe(401);
  const locked = await trySignIn(browser, person.email);
  expect(locked.status).toBe(423);
  expect(Number(locked.headers["retry-after"])).toBeGreaterThan(600);
  expect(locked.body.detail).toMatch(/locked for 15 minutes/);
  expect((await trailOf(lab.id)).at(-1)?.canonical).toContain("too many wrong passwords");
  // The lock ends by itself: its window is over.
  await server.database.owner.query("update rate_counters set expires_at = now() where key = $1", [
    `sign-in:${person.email}`,
  ]);
  expect((await trySignIn(browser, person.email)).status).toBe(200);
});

test("a change without the token, with another's, or from a foreign page is refused", async () => {
  const { client: browser } = await lab.add("Tom Token", ["technician"]);
  expect((await browser.put("/me", { name: "Changed" }).unset("x-csrf-token")).status).toBe(403);
  expect(
    (
      await browser
        .put("/me", { name: "Changed" })
        .set("x-csrf-token", (await lab.manager.client.readSession()).csrfToken)
    ).status,
  ).toBe(403);
  const foreign = await browser.put("/me", { name: "Changed" }).set("sec-fetch-site", "cross-site");
  expect(foreign.body).toMatchObject({ type: "/problems/csrf", status: 403 });
  expect((await browser.put("/me", { name: "Tom Changed" })).status).toBe(204);
  expect((await browser.readSession()).person.name).toBe("Tom Changed");
});

test("a reset comes by mail through the outbox, works once, ends every session, and says nothing of unknown addresses", async () => {
  const person = await lab.add("Rita Reset", ["technician"]);
  const browser = await server.visit();
  const unknown = await browser.post("/password/forgotten", { email: "nobody@nowhere.example" });
  const known = await browser.post("/password/forgotten", { email: person.email });
  expect([unknown.status, known.status]).toEqual([204, 204]);
  const { rows: jobs } = await server.database.owner.query(
    "select j.data from pgboss.job j join mail_outbox m on m.id = (j.data ->> 'id')::uuid where j.name = 'deliver-mail' and m.to_address = $1 and m.subject like 'A new password%'",
    [person.email],
  );
  expect(jobs).toHaveLength(1);
  expect(Object.keys(jobs[0].data).sort()).toEqual(["id", "labId"]);

  const token = await mailedToken(server, person.email);
  expect((await person.client.get("/people")).status).toBe(200);
  expect((await browser.post("/password/reset", { token, password: "short" })).status).toBe(400);
  expect((await browser.post("/password/reset", { token, password: "another long password" })).status).toBe(204);
  expect((await browser.post("/password/reset", { token, password: "a third long password" })).status).toBe(410);
  expect((await person.client.get("/people")).status).toBe(401);
  expect((await trySignIn(browser, person.email)).status).toBe(401);
  expect((await trySignIn(browser, person.email, "another long password")).status).toBe(200);
});

test("a reset link is good for an hour", async () => {
  const person = await lab.add("Otto Old", ["technician"]);
  const browser = await server.visit();
  await browser.post("/password/forgotten", { email: person.email });
  await server.database.owner.query(
    "update password_resets set expires_at = now() - interval '1 second' where person_id = $1",
    [person.id],
  );
  const token = await mailedToken(server, person.email);
  expect((await browser.post("/password/reset", { token, password: "another long password" })).status).toBe(410);
});

test("signing out everywhere ends the sessions of every device; changing the password those of the others", async () => {
  const person = await lab.add("Eva Everywhere", ["technician"]);
  const [phone, laptop] = [await server.visit(), await server.visit()];
  await trySignIn(phone, person.email);
  await trySignIn(laptop, person.email);
  expect(
    (await laptop.put("/me/password", { current: "wrong", password: "one more long password" })).body,
  ).toMatchObject({ type: "/problems/wrong-password", fields: [{ path: "current" }] });
  expect((await laptop.put("/me/password", { current: password, password: "one more long password" })).status).toBe(
    204,
  );
  expect((await phone.get("/people")).status).toBe(401);
  expect((await laptop.get("/people")).status).toBe(200);
  await trySignIn(phone, person.email, "one more long password");
  expect((await laptop.delete("/sessions")).status).toBe(204);
  expect((await phone.get("/people")).status).toBe(401);
  expect((await laptop.get("/people")).status).toBe(401);
});

test("a session idle for 20 minutes is ended, and reading who is signed in does not keep it alive", async () => {
  const person = await lab.add("Ida Idle", ["technician"]);
  const age = (minutes: number) =>
    server.database.owner.query(
      "update sessions set sess = jsonb_set(sess::jsonb, '{seenAt}', to_jsonb((extract(epoch from now()) * 1000 - $2)::bigint))::json where person_id = $1",
      [person.id, minutes * 60_000],
    );
  await age(19);
  await person.client.get("/session");
  await age(19);
  expect((await person.client.get("/people")).status).toBe(200);
  await age(21);
  expect((await person.client.get("/session")).body.person).toBeNull();
  expect((await person.client.put("/me", { name: "Ida Late" })).status).toBe(401);
});

test("a person of two labs works in one at a time, and switches", async () => {
  const other = await buildLab(server, "Second lab");
  const invited = await other.manager.client.post("/invitations", { email: lab.manager.email, roles: ["auditor"] });
  expect(invited.status).toBe(200);
  const token = await mailedToken(server, lab.manager.email);
  const browser = await server.visit();
  expect((await browser.get(`/invitations/${token}`)).body).toMatchObject({
    knownPerson: true,
    labName: "Second lab",
    roles: ["auditor"],
  });
  expect(
    (await browser.post(`/invitations/${token}/accept`, { name: "Ignored", password: "not theirs at all" })).status,
  ).toBe(401);
  const accepted = await browser.post(`/invitations/${token}/accept`, { name: "Ignored", password: password });
  expect(accepted.body).toMatchObject({
    lab: { id: other.id },
    roles: ["auditor"],
    person: { name: lab.manager.name },
  });
  await browser.readSession();
  expect(accepted.body.labs.map(({ name }: { name: string }) => name)).toEqual(["Second lab", "Spectroscopy"]);
  const switched = await browser.put("/session/lab", { labId: lab.id });
  expect(switched.body).toMatchObject({ lab: { id: lab.id }, roles: ["manager"] });
  const foreign = await buildLab(server, "Third lab");
  expect((await browser.put("/session/lab", { labId: foreign.id })).status).toBe(404);
});
