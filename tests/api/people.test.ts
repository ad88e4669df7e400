/** Members, invitations, deputies, shared PCs, the lab's settings. */
import { beforeAll, describe, expect, test } from "vitest";
import { useTestApp, type Client } from "../support/app.ts";
import {
  buildInstrument,
  buildLab,
  mailedToken,
  password,
  type TestLab,
  type TestPerson,
} from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
beforeAll(async () => {
  lab = await buildLab(server, "People");
});

const owner = (text: string, values: unknown[] = []) => server.database.owner.query(text, values);
const findPerson = async (id: string) =>
  (await lab.manager.client.get("/people")).body.people.find((person: { id: string }) => person.id === id);

describe("invitations", () => {
  const email = "new.person@lab.example";

  test("are mailed once, shown as open, and replaced by a newer one to the same address", async () => {
    await lab.manager.client
      .post("/invitations", { email: "New.Person@lab.example", roles: ["technician", "technician"] })
      .expect(200);
    const first = await mailedToken(server, email);
    const second = await lab.manager.client
      .post("/invitations", { email, roles: ["technician", "auditor"] })
      .expect(200);
    expect(second.body).toMatchObject({
      email,
      roles: ["technician", "auditor"],
      state: "open",
      invitedBy: { id: lab.manager.id },
    });
    const browser = await server.visit();
    expect((await browser.get(`/invitations/${first}`)).body).toMatchObject({
      type: "/problems/gone",
      detail: expect.stringMatching(/withdrawn/),
    });
    expect((await browser.get(`/invitations/${await mailedToken(server, email)}`)).body).toEqual({
      labName: "People",
      email,
      roles: ["technician", "auditor"],
      invitedBy: "Mara Manager",
      knownPerson: false,
    });
  });

  test("make a person of whoever holds the link, with a password that is long enough, once", async () => {
    const browser = await server.visit();
    const token = await mailedToken(server, email);
    const short = await browser.post(`/invitations/${token}/accept`, { name: "New Person", password: "short" });
    expect(short.body).toMatchObject({ type: "/problems/invalid-input", fields: [{ path: "password" }] });
    const accepted = await browser.post(`/invitations/${token}/accept`, { name: "New Person", password }).expect(200);
    expect(accepted.body).toMatchObject({
      person: { email, name: "New Person" },
      lab: { name: "People" },
      roles: ["technician", "auditor"],
    });
    expect(
      (await (await server.visit()).post(`/invitations/${token}/accept`, { name: "Again", password })).status,
    ).toBe(410);
    const { body } = await lab.manager.client.get("/people");
    expect(
      body.invitations
        .filter((row: { email: string }) => row.email === email)
        .map(({ state }: { state: string }) => state),
    ).toEqual(["accepted", "withdrawn"]);
  });

  test("end after two weeks, and when withdrawn; a member is not invited again", async () => {
    await lab.manager.client.post("/invitations", { email: "late@lab.example", roles: ["auditor"] }).expect(200);
    const late = await mailedToken(server, "late@lab.example");
    await owner("update invitations set expires_at = now() where email = 'late@lab.example'");
    const browser = await server.visit();
    expect((await browser.post(`/invitations/${late}/accept`, { name: "Late", password })).status).toBe(410);
    const open = await lab.manager.client
      .post("/invitations", { email: "other@lab.example", roles: ["auditor"] })
      .expect(200);
    await lab.manager.client.delete(`/invitations/${open.body.id}`).expect(204);
    expect((await lab.manager.client.delete(`/invitations/${open.body.id}`)).status).toBe(409);
    expect(
      (
        await browser.post(`/invitations/${await mailedToken(server, "other@lab.example")}/accept`, {
          name: "Other",
          password,
        })
      ).status,
    ).toBe(410);
    expect((await lab.manager.client.post("/invitations", { email, roles: ["auditor"] })).body).toMatchObject({
      type: "/problems/already-exists",
      fields: [{ path: "email" }],
    });
  });
});

describe("roles", () => {
  test("a stale form is told so; two at once do not overwrite each other", async () => {
    const person = await lab.add("Rosa Roles", ["technician"]);
    const change = (roles: string[], version: number) =>
      lab.manager.client.put(`/people/${person.id}/roles`, { roles, isApprover: false, version });
    const [one, two] = await Promise.all([change(["technician", "auditor"], 0), change(["manager"], 0)]);
    expect([one.status, two.status].sort()).toEqual([200, 409]);
    const stale = await change(["auditor"], 0);
    expect(stale.body).toMatchObject({
      type: "/problems/stale",
      detail: expect.stringMatching(/Nothing of yours was lost/),
    });
    expect((await findPerson(person.id)).version).toBe(1);
  });

  test("a lab keeps a manager, also when two remove each other at the same moment", async () => {
    const small = await buildLab(server, "Two managers");
    expect(
      (
        await small.manager.client.put(`/people/${small.manager.id}/roles`, {
          roles: ["technician"],
          isApprover: false,
          version: 0,
        })
      ).body.detail,
    ).toMatch(/needs a manager/);
    const second = await small.add("Second Manager", ["manager"]);
    const replies = await Promise.all([
      small.manager.client.put(`/people/${second.id}/roles`, { roles: ["technician"], isApprover: false, version: 0 }),
      second.client.post(`/people/${small.manager.id}/end`, { reason: "", version: 0 }),
    ]);
    expect(replies.filter(({ status }) => status < 300)).toHaveLength(1);
    const { rows } = await owner(
      "select count(*)::int as n from memberships where lab_id = $1 and ended_at is null and 'manager' = any(roles)",
      [small.id],
    );
    expect(rows[0].n).toBe(1);
  });

  test("who owns an instrument neither becomes a pure auditor nor leaves before handing it over", async () => {
    const person = await lab.add("Olga Owner", ["technician"]);
    await buildInstrument(lab.manager, { name: "Owned bench", ownerId: person.id });
    expect((await findPerson(person.id)).owns).toMatchObject([{ name: "Owned bench" }]);
    expect(
      (
        await lab.manager.client.put(`/people/${person.id}/roles`, {
          roles: ["auditor"],
          isApprover: false,
          version: 0,
        })
      ).body.detail,
    ).toMatch(/owns Owned bench/);
    expect((await lab.manager.client.post(`/people/${person.id}/end`, { reason: "", version: 0 })).body.detail).toMatch(
      /owns Owned bench/,
    );
  });

  test("a person who left keeps their place in the record, and comes back by a new invitation", async () => {
    const person = await lab.add("Beate Back", ["technician"]);
    await lab.manager.client.post(`/people/${person.id}/end`, { reason: "moved on", version: 0 }).expect(204);
    expect((await findPerson(person.id)).endedAt).not.toBeNull();
    await lab.manager.client.post("/invitations", { email: person.email, roles: ["auditor"] }).expect(200);
    const browser = await server.visit();
    await browser
      .post(`/invitations/${await mailedToken(server, person.email)}/accept`, { name: "Ignored", password })
      .expect(200);
    expect(await findPerson(person.id)).toMatchObject({ name: "Beate Back", roles: ["auditor"], endedAt: null });
  });
});

describe("deputies", () => {
  const day = (offset: number) => new Date(Date.now() + offset * 86_400_000).toISOString().slice(0, 10);

  test("stand in for a manager and for an owner between two dates, and no longer", async () => {
    const [deputy, away] = [await lab.add("Dora Deputy", ["technician"]), await lab.add("Aron Away", ["technician"])];
    const instrument = await buildInstrument(lab.manager, { name: "Bench of Aron", ownerId: away.id });
    await lab.manager.client
      .post("/deputies", { personId: deputy.id, forPersonId: away.id, fromOn: day(-1), toOn: day(1) })
      .expect(204);
    expect((await deputy.client.get("/session")).body).toMatchObject({
      roles: ["technician"],
      ownedInstrumentIds: [instrument.id],
    });
    await lab.manager.client
      .post("/deputies", { personId: deputy.id, forPersonId: lab.manager.id, fromOn: day(-9), toOn: day(-8) })
      .expect(204);
    await lab.manager.client
      .post("/deputies", { personId: deputy.id, forPersonId: lab.manager.id, fromOn: day(8), toOn: day(9) })
      .expect(204);
    expect((await deputy.client.get("/session")).body.roles).toEqual(["technician"]);
    await lab.manager.client
      .post("/deputies", { personId: deputy.id, forPersonId: lab.manager.id, fromOn: day(-1), toOn: day(1) })
      .expect(204);
    expect((await deputy.client.get("/session")).body.roles).toEqual(["manager", "technician"]);
    // What they do then is said to be a deputy's.
    await deputy.client.post("/invitations", { email: "by.deputy@lab.example", roles: ["auditor"] }).expect(200);
    const { body } = await lab.manager.client.get("/trail?kind=person.invited&limit=1");
    expect(body.items[0]).toMatchObject({ actor: "Dora Deputy", actorRole: "deputy lab manager" });
  });

  test("nobody stands in for themselves, backwards in time, or for a stranger", async () => {
    const person = await lab.add("Selma Self", ["technician"]);
    const appoint = (body: object) => lab.manager.client.post("/deputies", body);
    expect((await appoint({ personId: person.id, forPersonId: person.id, fromOn: day(0), toOn: day(1) })).status).toBe(
      400,
    );
    expect(
      (await appoint({ personId: person.id, forPersonId: lab.manager.id, fromOn: day(2), toOn: day(1) })).status,
    ).toBe(400);
    const stranger = (await buildLab(server, "Strangers")).manager;
    expect(
      (await appoint({ personId: stranger.id, forPersonId: lab.manager.id, fromOn: day(0), toOn: day(1) })).status,
    ).toBe(404);
  });
});

describe("bench mode", () => {
  let bench: Client;
  let technician: TestPerson;
  beforeAll(async () => {
    technician = await lab.add("Bert Bench", ["technician"]);
    bench = await server.visit();
    await bench.signIn(lab.manager.email, password);
    await bench.post("/bench/devices", { name: "Bench PC" }).expect(204);
    await bench.delete("/session").expect(204);
    await bench.readSession();
  });

  test("from the enrolment on the PC locks after two minutes, also for the manager who enrolled it", async () => {
    const desk = await server.visit();
    await desk.signIn(lab.manager.email, password);
    expect(await desk.readSession()).toMatchObject({ bench: null, idleSeconds: 1200 });
    await desk.post("/bench/devices", { name: "Desk PC" }).expect(204);
    expect(await desk.readSession()).toMatchObject({
      person: { id: lab.manager.id },
      bench: { deviceName: "Desk PC", lockAfterSeconds: 120 },
      idleSeconds: 120,
    });
    const { body } = await lab.manager.client.get("/people");
    const { id } = body.benchDevices.find((device: { name: string }) => device.name === "Desk PC");
    await lab.manager.client.delete(`/bench/devices/${id}`).expect(204);
    expect((await desk.get("/instruments")).status).toBe(401);
  });

  test("a PIN is set with the password; only who has one is named on the shared PC, and only there", async () => {
    expect((await bench.get("/bench")).body).toEqual({ device: { name: "Bench PC", labName: "People" }, people: [] });
    expect((await technician.client.put("/me/pin", { current: "wrong", pin: "2468" })).body.fields).toMatchObject([
      { path: "current" },
    ]);
    await technician.client.put("/me/pin", { current: password, pin: "2468" }).expect(204);
    expect((await bench.get("/bench")).body.people).toEqual([{ id: technician.id, name: "Bert Bench" }]);
    const elsewhere = await server.visit();
    expect((await elsewhere.get("/bench")).body).toEqual({ device: null, people: [] });
    expect((await elsewhere.post("/bench/session", { personId: technician.id, pin: "2468" })).status).toBe(403);
  });

  test("name and PIN sign in, with an idle lock of two minutes; submitting would still ask for the password", async () => {
    const reply = await bench.post("/bench/session", { personId: technician.id, pin: "2468" }).expect(200);
    expect(reply.body).toMatchObject({
      person: { id: technician.id },
      bench: { deviceName: "Bench PC", lockAfterSeconds: 120 },
      idleSeconds: 120,
    });
    await bench.readSession();
    await owner(
      "update sessions set sess = jsonb_set(sess::jsonb, '{seenAt}', to_jsonb((extract(epoch from now()) * 1000 - 121000)::bigint))::json where person_id = $1 and sess ->> 'benchName' = 'Bench PC'",
      [technician.id],
    );
    expect((await bench.get("/instruments")).status).toBe(401);
    // Their own device is not locked by that.
    expect((await technician.client.get("/instruments")).status).toBe(200);
    await bench.readSession();
  });

  test("people change by name: each deed is theirs in the trail", async () => {
    const second = await lab.add("Second Bench", ["technician"]);
    await second.client.put("/me/pin", { current: password, pin: "1357" }).expect(204);
    await bench.post("/bench/session", { personId: technician.id, pin: "2468" }).expect(200);
    await bench.readSession();
    await bench.delete("/bench/session").expect(204);
    await bench.readSession();
    expect((await bench.post("/bench/session", { personId: second.id, pin: "1357" })).body.person.name).toBe(
      "Second Bench",
    );
    await bench.readSession();
    const { body } = await lab.manager.client.get("/trail?kind=session&limit=2");
    expect(
      body.items.map(({ actor, sentence }: { actor: string; sentence: string }) => `${actor} ${sentence}`),
    ).toEqual(["Second Bench signed in at the shared PC Bench PC", "Bert Bench signed in at the shared PC Bench PC"]);
    await bench.delete("/bench/session").expect(204);
    await bench.readSession();
  });

  test("five wrong PINs lock that person on that PC", async () => {
    for (let i = 0; i < 5; i += 1)
      expect((await bench.post("/bench/session", { personId: technician.id, pin: "0000" })).status).toBe(401);
    expect((await bench.post("/bench/session", { personId: technician.id, pin: "2468" })).status).toBe(423);
  });

  test("a member of another lab does not sign in there, nor one who left", async () => {
    const stranger = (await buildLab(server, "Next door")).manager;
    await stranger.client.put("/me/pin", { current: password, pin: "9999" }).expect(204);
    expect((await bench.post("/bench/session", { personId: stranger.id, pin: "9999" })).status).toBe(401);
    expect((await bench.get("/bench")).body.people).not.toContainEqual(expect.objectContaining({ id: stranger.id }));
  });

  test("ending bench mode ends its sessions and its token", async () => {
    const { body } = await lab.manager.client.get("/people");
    expect(body.benchDevices).toMatchObject([{ name: "Bench PC", enrolledBy: { id: lab.manager.id } }]);
    await lab.manager.client.delete(`/bench/devices/${body.benchDevices[0].id}`).expect(204);
    expect((await bench.get("/bench")).body.device).toBeNull();
    expect((await lab.manager.client.delete(`/bench/devices/${body.benchDevices[0].id}`)).status).toBe(404);
  });
});

describe("the lab's settings", () => {
  test("are changed with what they were and became in the trail; the zone must be one", async () => {
    const { id, isDemo, signingKeyFingerprint, ...settings } = (await lab.manager.client.get("/lab")).body;
    expect([id, isDemo, signingKeyFingerprint]).toEqual([lab.id, false, server.services.signer.fingerprint]);
    expect((await lab.manager.client.put("/lab", { ...settings, zone: "Mars/Olympus" })).body).toMatchObject({
      fields: [{ path: "zone" }],
    });
    const changed = await lab.manager.client
      .put("/lab", { ...settings, altitudeM: 1600, warningShare: 0.8 })
      .expect(200);
    expect(changed.body).toMatchObject({ altitudeM: 1600, warningShare: 0.8, version: settings.version + 1 });
    expect((await lab.manager.client.put("/lab", { ...settings, altitudeM: 2 })).body.type).toBe("/problems/stale");
    const { body } = await lab.manager.client.get("/trail?kind=lab.changed");
    expect(body.items[0]).toMatchObject({
      before: { altitudeM: null, warningShare: 0.75 },
      after: { altitudeM: 1600, warningShare: 0.8 },
    });
    expect(body.items[0].sentence).toBe(
      "changed the lab's settings (altitude in m from none to 1600; warning share from 0.75 to 0.8)",
    );
  });
});
