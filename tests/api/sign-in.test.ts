import { beforeAll, expect, test } from "vitest";
import { Browser, PASSWORD, mailedToken, openTestLab, useTestApp, type TestLab } from "../support/app.ts";

const server = useTestApp();
let lab: TestLab;
beforeAll(async () => {
  lab = await openTestLab(server);
});

const trailOf = async (labId: string) =>
  (
    await server.database.owner.query<{ action: string; canonical: string }>(
      "select action, canonical from trail_entries where lab_id = $1 order by number",
      [labId],
    )
  ).rows;

test("before sign-in the session names nobody, and gives the token that a change needs", async () => {
  const browser = new Browser(server.app);
  const reply = await browser.session();
  expect(reply.status).toBe(200);
  expect(reply.body).toMatchObject({ person: null, lab: null, roles: [], isDemoServer: false, demoPeople: [] });
  expect((await browser.get("/people")).status).toBe(401);
});

test("signing in answers who, where and what they may do; the trail has it", async () => {
  const browser = new Browser(server.app);
  const reply = await browser.signIn(lab.manager.email.toUpperCase());
  expect(reply.status).toBe(200);
  expect(reply.body).toMatchObject({ person: { id: lab.manager.id }, lab: { id: lab.labId, zone: "Europe/Berlin" }, roles: ["manager"], idleSeconds: 1200 });
  expect((await trailOf(lab.labId)).at(-1)).toMatchObject({ action: "session.begun" });
  const ended = await browser.delete("/session");
  expect(ended.status).toBe(204);
  expect((await browser.get("/people")).status).toBe(401);
});

test("a wrong password and an unknown address read the same, and the refusal is in the trail of the lab", async () => {
  const browser = new Browser(server.app);
  const wrong = await browser.signIn(lab.manager.email, "not the password");
  const unknown = await browser.signIn("nobody@nowhere.example", "not the password");
  expect(wrong.status).toBe(401);
  expect(wrong.body).toEqual(unknown.body);
  expect(wrong.headers["content-type"]).toContain("application/problem+json");
  expect((await trailOf(lab.labId)).at(-1)).toMatchObject({ action: "session.refused" });
});

test("the session's id changes with the sign-in, so that a planted one is worth nothing", async () => {
  const browser = new Browser(server.app);
  await browser.signIn(lab.manager.email);
  const first = await browser.get("/session");
  await browser.signIn(lab.manager.email);
  const { rows } = await server.database.owner.query("select count(*)::int as n from sessions where person_id = $1", [lab.manager.id]);
  expect(first.status).toBe(200);
  expect(rows[0].n).toBeGreaterThanOrEqual(1);
  const cookies = (await browser.session()).request.cookies as string;
  expect(cookies).toContain("wavekeep_4310=");
});

test("eight wrong passwords lock the address, then even the right one is told to wait", async () => {
  const person = await lab.join("Lena Locked", ["technician"]);
  const browser = new Browser(server.app);
  for (let i = 0; i < 8; i += 1) expect((await browser.signIn(person.email, "wrong wrong wrong")).status).toBe(401);
  const locked = await browser.signIn(person.email);
  expect(locked.status).toBe(423);
  expect(Number(locked.headers["retry-after"])).toBeGreaterThan(600);
  expect(locked.body.detail).toMatch(/locked for 15 minutes/);
  expect((await trailOf(lab.labId)).at(-1)?.canonical).toContain("too many wrong passwords");
  // The lock ends by itself: its window is over.
  await server.database.owner.query("update rate_counters set expires_at = now() where key = $1", [`sign-in:${person.email}`]);
  expect((await browser.signIn(person.email)).status).toBe(200);
});

test("a change without the token, with another's, or from a foreign page is refused", async () => {
  const { browser } = await lab.join("Tom Token", ["technician"]);
  expect((await browser.agent.put("/api/me").send({ name: "Changed" })).status).toBe(403);
  expect((await browser.send("put", "/me", { name: "Changed" }, { "x-csrf-token": lab.manager.browser.csrfToken })).status).toBe(403);
  const foreign = await browser.send("put", "/me", { name: "Changed" }, { "sec-fetch-site": "cross-site" });
  expect(foreign.body).toMatchObject({ type: "/problems/csrf", status: 403 });
  expect((await browser.put("/me", { name: "Tom Changed" })).status).toBe(204);
  expect((await browser.session()).body.person.name).toBe("Tom Changed");
});

test("a reset comes by mail through the outbox, works once, ends every session, and says nothing of unknown addresses", async () => {
  const person = await lab.join("Rita Reset", ["technician"]);
  const browser = new Browser(server.app);
  await browser.session();
  const unknown = await browser.post("/password/forgotten", { email: "nobody@nowhere.example" });
  const known = await browser.post("/password/forgotten", { email: person.email });
  expect([unknown.status, known.status]).toEqual([204, 204]);
  const { rows: jobs } = await server.database.owner.query(
    "select j.data from pgboss.job j join mail_outbox m on m.id = (j.data ->> 'id')::uuid where j.name = 'deliver-mail' and m.to_address = $1 and m.subject like 'A new password%'",
    [person.email],
  );
  expect(jobs).toHaveLength(1);
  expect(Object.keys(jobs[0].data).sort()).toEqual(["id", "labId"]);

  const token = await mailedToken(server, person.email, "/reset?token=");
  expect((await person.browser.get("/people")).status).toBe(200);
  expect((await browser.post("/password/reset", { token, password: "short" })).status).toBe(400);
  expect((await browser.post("/password/reset", { token, password: "another long password" })).status).toBe(204);
  expect((await browser.post("/password/reset", { token, password: "a third long password" })).status).toBe(410);
  expect((await person.browser.get("/people")).status).toBe(401);
  expect((await browser.signIn(person.email)).status).toBe(401);
  expect((await browser.signIn(person.email, "another long password")).status).toBe(200);
});

test("a reset link is good for an hour", async () => {
  const person = await lab.join("Otto Old", ["technician"]);
  const browser = new Browser(server.app);
  await browser.session();
  await browser.post("/password/forgotten", { email: person.email });
  await server.database.owner.query("update password_resets set expires_at = now() - interval '1 second' where person_id = $1", [person.id]);
  const token = await mailedToken(server, person.email, "/reset?token=");
  expect((await browser.post("/password/reset", { token, password: "another long password" })).status).toBe(410);
});

test("signing out everywhere ends the sessions of every device; changing the password those of the others", async () => {
  const person = await lab.join("Eva Everywhere", ["technician"]);
  const [phone, laptop] = [new Browser(server.app), new Browser(server.app)];
  await phone.signIn(person.email);
  await laptop.signIn(person.email);
  expect((await laptop.put("/me/password", { current: "wrong", password: "one more long password" })).body).toMatchObject({ type: "/problems/wrong-password", fields: [{ path: "current" }] });
  expect((await laptop.put("/me/password", { current: PASSWORD, password: "one more long password" })).status).toBe(204);
  expect((await phone.get("/people")).status).toBe(401);
  expect((await laptop.get("/people")).status).toBe(200);
  await phone.session();
  await phone.signIn(person.email, "one more long password");
  expect((await laptop.delete("/sessions")).status).toBe(204);
  expect((await phone.get("/people")).status).toBe(401);
  expect((await laptop.get("/people")).status).toBe(401);
});

test("a session idle for 20 minutes is ended, and reading who is signed in does not keep it alive", async () => {
  const person = await lab.join("Ida Idle", ["technician"]);
  const age = (minutes: number) =>
    server.database.owner.query(
      "update sessions set sess = jsonb_set(sess::jsonb, '{seenAt}', to_jsonb((extract(epoch from now()) * 1000 - $2)::bigint))::json where person_id = $1",
      [person.id, minutes * 60_000],
    );
  await age(19);
  await person.browser.session();
  await age(19);
  expect((await person.browser.get("/people")).status).toBe(200);
  await age(21);
  expect((await person.browser.get("/session")).body.person).toBeNull();
  expect((await person.browser.put("/me", { name: "Ida Late" })).status).toBe(401);
});

test("a person of two labs works in one at a time, and switches", async () => {
  const other = await openTestLab(server, "Second lab");
  const invited = await other.manager.browser.post("/invitations", { email: lab.manager.email, roles: ["auditor"] });
  expect(invited.status).toBe(200);
  const token = await mailedToken(server, lab.manager.email, "/invitation/");
  const browser = new Browser(server.app);
  await browser.session();
  expect((await browser.get(`/invitations/${token}`)).body).toMatchObject({ knownPerson: true, labName: "Second lab", roles: ["auditor"] });
  expect((await browser.post(`/invitations/${token}/accept`, { name: "Ignored", password: "not theirs at all" })).status).toBe(401);
  const accepted = await browser.post(`/invitations/${token}/accept`, { name: "Ignored", password: PASSWORD });
  expect(accepted.body).toMatchObject({ lab: { id: other.labId }, roles: ["auditor"], person: { name: lab.manager.name } });
  browser.csrfToken = accepted.body.csrfToken;
  expect(accepted.body.labs.map(({ name }: { name: string }) => name)).toEqual(["Second lab", "Spectroscopy"]);
  const switched = await browser.put("/session/lab", { labId: lab.labId });
  expect(switched.body).toMatchObject({ lab: { id: lab.labId }, roles: ["manager"] });
  const foreign = await openTestLab(server, "Third lab");
  expect((await browser.put("/session/lab", { labId: foreign.labId })).status).toBe(404);
});
