/** The trail: what it holds, and that any change of it is found, with its place. */
import { beforeEach, describe, expect, test } from "vitest";
import { canonicalText, personalHash, sha256Hex } from "@wavekeep/api/records/canonical";
import { signDailyHead } from "@wavekeep/api/records/service";
import { signerFromPem } from "@wavekeep/api/records/signing";
import { trailActions } from "@wavekeep/api/records/trail-actions";
import { sentences } from "@wavekeep/api/records/sentences";
import { writeTrail } from "@wavekeep/api/records/trail";
import { asWavekeep, inLab } from "@wavekeep/api/db/tenancy";
import { generateKeyPairSync } from "node:crypto";
import { useTestApp } from "../support/app.ts";
import { buildInstrument, buildLab, type TestLab, type TestPerson } from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
let technician: TestPerson;
/** A lab with some history: each test spoils a chain of its own. */
beforeEach(async () => {
  lab = await buildLab(server, "Chain");
  technician = await lab.add("Tina Technician", ["technician"]);
  const instrument = await buildInstrument(lab.manager, { name: "Bench 1" });
  await technician.client
    .post("/checks", {
      configurationId: instrument.currentConfigurationId,
      condition: "as-found",
      followsCheckId: null,
    })
    .expect(200);
});

const owner = (text: string, values: unknown[] = []) => server.database.owner.query(text, values);
const state = async () => (await lab.manager.client.get("/trail/state")).body;
const entries = async () =>
  (await owner("select * from trail_entries where lab_id = $1 order by number", [lab.id])).rows;

/** Around the database's own guards, as somebody with the owner's password and time would do it. */
async function spoil(text: string, values: unknown[] = []): Promise<void> {
  const client = await server.database.owner.connect();
  try {
    await client.query("set session_replication_role = replica");
    await client.query(text, values);
  } finally {
    await client.query("set session_replication_role = origin");
    client.release();
  }
}

test("an untouched chain holds, from the opening of the lab on, numbered without gaps", async () => {
  const chain = await state();
  const rows = await entries();
  expect(chain).toMatchObject({
    whole: true,
    breaks: [],
    entryCount: rows.length,
    head: rows.at(-1).hash,
    checkCount: 1,
    attemptCount: 1,
    signaturesValid: true,
  });
  expect(chain.sentence).toMatch(/^The chain holds: \d+ entries since \d+ \w+ \d{4}\.$/);
  expect(rows.map(({ number }) => Number(number))).toEqual(rows.map((_, index) => index + 1));
  expect(rows[0]).toMatchObject({ action: "lab.created", previous_hash: "0".repeat(64) });
});

test("an entry is RFC 8785 text whose SHA-256 is its hash; names stand beside it, in it their salted hashes", async () => {
  const rows = await entries();
  const invited = rows.find(
    ({ action, canonical }) => action === "person.invited" && canonical.includes('"technician"'),
  );
  expect(sha256Hex(invited.canonical)).toBe(invited.hash);
  const document = JSON.parse(invited.canonical);
  expect(canonicalText(document)).toBe(invited.canonical);
  expect(invited.canonical).not.toContain(technician.email);
  expect(invited.canonical).not.toContain("Mara Manager");
  const { rows: personal } = await owner("select salt, data from trail_personal where lab_id = $1 and number = $2", [
    lab.id,
    invited.number,
  ]);
  expect(personal[0].data).toEqual({ actor: "Mara Manager", about: technician.email });
  expect(document.personal).toEqual({
    actor: personalHash(personal[0].salt, "Mara Manager"),
    about: personalHash(personal[0].salt, technician.email),
  });
});

test("rows that an entry speaks of are hashed as the database holds them", async () => {
  const registered = (await entries()).find(({ action }) => action === "instrument.registered");
  const document = JSON.parse(registered.canonical);
  const named = document.rows.find(({ table }: { table: string }) => table === "tolerance_versions");
  expect(named).toEqual({
    table: "tolerance_versions",
    id: expect.any(String),
    sha256: expect.stringMatching(/^[0-9a-f]{64}$/),
  });
  // A column that a later version adds is empty in older rows and changes nothing.
  await owner("alter table tolerance_versions add column added_later text");
  expect((await state()).whole).toBe(true);
  await owner("alter table tolerance_versions drop column added_later");

  await owner("update tolerance_versions set reason = 'rewritten' where id = $1", [named.id]);
  const chain = await state();
  expect(chain.whole).toBe(false);
  expect(chain.breaks).toEqual([
    { number: document.number, what: "the row in tolerance versions it speaks of was changed afterwards" },
  ]);
});

describe("tampering as the owner is found at its place", () => {
  test("a changed text", async () => {
    await spoil(
      "update trail_entries set canonical = replace(canonical, 'Bench 1', 'Bench 2') where lab_id = $1 and action = 'instrument.registered'",
      [lab.id],
    );
    const { number } = (await entries()).find(({ action }) => action === "instrument.registered");
    const chain = await state();
    expect(chain.whole).toBe(false);
    expect(chain.breaks).toEqual([{ number: Number(number), what: "its text does not lead to its hash" }]);
    expect(chain.sentence).toBe(`The chain does not hold: at entry ${number}, its text does not lead to its hash.`);
  });

  test("a changed text with its hash made to fit", async () => {
    const target = (await entries()).find(({ action }) => action === "instrument.registered");
    const text = target.canonical.replace("Bench 1", "Bench 2");
    await spoil("update trail_entries set canonical = $1, hash = $2 where lab_id = $3 and number = $4", [
      text,
      sha256Hex(text),
      lab.id,
      target.number,
    ]);
    expect((await state()).breaks).toEqual([
      { number: Number(target.number) + 1, what: "it does not link to the entry before it" },
    ]);
  });

  test("a deleted entry", async () => {
    await spoil("delete from trail_personal where lab_id = $1 and number = 3", [lab.id]);
    await spoil("delete from trail_entries where lab_id = $1 and number = 3", [lab.id]);
    const chain = await state();
    expect(chain.breaks[0]).toEqual({ number: 4, what: "entry 3 is missing" });
  });

  test("two entries in each other's place", async () => {
    await spoil(
      "update trail_entries set number = case number when 3 then 1004 else 1003 end where lab_id = $1 and number in (3, 4)",
      [lab.id],
    );
    await spoil("update trail_entries set number = number - 1000 where lab_id = $1 and number > 1000", [lab.id]);
    const chain = await state();
    expect(chain.whole).toBe(false);
    expect(chain.breaks[0].number).toBe(3);
    expect(chain.breaks.map(({ what }: { what: string }) => what)).toContain("it does not link to the entry before it");
  });

  test("a column beside the text", async () => {
    await spoil("update trail_entries set at = at - interval '1 day' where lab_id = $1 and number = 2", [lab.id]);
    expect(
      (await state()).breaks.map(({ number, what }: { number: number; what: string }) => `${number} ${what}`),
    ).toEqual(["2 its time lies before that of the entry before it", "2 its columns do not say what its text says"]);
  });

  test("a name in the side table; but not one that was disposed of", async () => {
    await spoil(
      "update trail_personal set data = data || '{\"actor\": \"Somebody Else\"}' where lab_id = $1 and data ->> 'actor' = 'Tina Technician'",
      [lab.id],
    );
    expect((await state()).breaks[0].what).toBe("a name or address beside it was changed");
    await spoil("update trail_personal set data = '{}' where lab_id = $1 and data ->> 'actor' = 'Somebody Else'", [
      lab.id,
    ]);
    expect((await state()).whole).toBe(true);
    const listed = await lab.manager.client.get("/trail?kind=check");
    expect(listed.body.items[0].actor).toBe("somebody whose name was disposed of");
  });

  test("the newest entries cut off, or the whole chain written anew: the signed head tells", async () => {
    expect(await signDailyHead(server.services, { labId: lab.id, isDemo: false, zone: "Europe/Berlin" })).toBe(true);
    expect(await state()).toMatchObject({ whole: true, signatureCount: 1, signaturesValid: true });
    const signed = (await owner("select number from signed_heads where lab_id = $1", [lab.id])).rows[0].number;
    await spoil("delete from trail_entries where lab_id = $1 and number >= $2", [lab.id, Number(signed) - 1]);
    const chain = await state();
    expect(chain).toMatchObject({ whole: false, signaturesValid: false });
    expect(chain.breaks).toEqual([{ number: Number(signed), what: "it is not the entry that was signed" }]);
  });

  test("a head signed anew with another key", async () => {
    await signDailyHead(server.services, { labId: lab.id, isDemo: false, zone: "Europe/Berlin" });
    const { rows } = await owner("select * from signed_heads where lab_id = $1", [lab.id]);
    const own = signerFromPem(
      generateKeyPairSync("ed25519").privateKey.export({ type: "pkcs8", format: "pem" }).toString(),
    );
    await spoil("update signed_heads set key_fingerprint = $1, public_key = $2, signature = $3 where id = $4", [
      own.fingerprint,
      own.publicKey,
      own.sign(lab.id, Number(rows[0].number), rows[0].hash),
      rows[0].id,
    ]);
    expect((await state()).breaks).toEqual([
      { number: Number(rows[0].number), what: "it is signed with a key that is not this installation's" },
    ]);
    await spoil("update signed_heads set key_fingerprint = $1, public_key = $2, signature = $3 where id = $4", [
      rows[0].key_fingerprint,
      rows[0].public_key,
      own.sign(lab.id, Number(rows[0].number), rows[0].hash),
      rows[0].id,
    ]);
    expect((await state()).breaks).toEqual([
      { number: Number(rows[0].number), what: "the signature over it does not fit" },
    ]);
  });
});

test("the head is signed and mailed once a day, and not again while nothing happened", async () => {
  const mark = { labId: lab.id, isDemo: false, zone: "Europe/Berlin" };
  const settings = (await lab.manager.client.get("/lab")).body;
  const { name, zone, altitudeM, selfApproval, warningShare, decisionRule, version } = settings;
  await lab.manager.client
    .put("/lab", {
      name,
      zone,
      altitudeM,
      selfApproval,
      warningShare,
      decisionRule,
      headMail: "Notary@Outside.example",
      version,
    })
    .expect(200);
  expect(await signDailyHead(server.services, mark)).toBe(true);
  expect(await signDailyHead(server.services, mark)).toBe(false);
  const { rows } = await owner(
    "select to_address, text from mail_outbox where lab_id = $1 and cause_key like 'head:%' order by to_address",
    [lab.id],
  );
  expect(rows.map(({ to_address }) => to_address)).toEqual([lab.manager.email, "notary@outside.example"].sort());
  expect(rows[0].text).toContain(server.services.signer.fingerprint);
});

test("300 entries written at once form one chain", async () => {
  const ctx = asWavekeep({ labId: lab.id, isDemo: false, zone: "Europe/Berlin" });
  const before = (await entries()).length;
  await Promise.all(
    Array.from({ length: 300 }, (_, index) =>
      inLab(server.services.db, ctx, (tx) =>
        writeTrail(tx, ctx, {
          action: "event.logged",
          about: { kind: "event", id: String(index), label: "Bench 1" },
          after: { title: `event ${index}` },
        }),
      ),
    ),
  );
  const chain = await state();
  expect([chain.whole, chain.entryCount]).toEqual([true, before + 300]);
  // A page at a time, newest first, none twice and none left out.
  const seen: number[] = [];
  for (let after: string | null = ""; after !== null;) {
    const page: { items: { number: number }[]; next: string | null } = (
      await lab.manager.client.get(`/trail?limit=70${after === "" ? "" : `&after=${after}`}`)
    ).body;
    seen.push(...page.items.map(({ number }) => number));
    after = page.next;
  }
  expect(seen).toEqual(Array.from({ length: before + 300 }, (_, index) => before + 300 - index));
});

test("the trail reads as sentences, filtered by person, thing, kind and day", async () => {
  const items = async (query: string) =>
    (await technician.client.get(`/trail?${query}`)).body.items as {
      action: string;
      actor: string;
      actorRole: string;
      sentence: string;
      about: { label: string; to: string };
    }[];
  const [begun] = await items(`personId=${technician.id}&kind=check.begun`);
  expect(begun).toMatchObject({
    actor: "Tina Technician",
    actorRole: "technician",
    sentence: expect.stringMatching(/^began check CHK-\d{4}-0001/),
    about: { to: expect.stringMatching(/^\/checks\//) },
  });
  expect((await items("kind=instrument")).map(({ sentence }) => sentence)).toEqual(["registered Bench 1"]);
  expect((await items(`kind=person`)).map(({ sentence }) => sentence)[0]).toBe(
    `invited ${technician.email} as technician`,
  );
  const today = (await technician.client.get("/trail/days")).body;
  expect(today.days).toHaveLength(1);
  expect(today.kinds).toEqual(expect.arrayContaining(["check", "instrument", "lab", "person"]));
  const all = (await items("limit=200")).length;
  expect(today.days[0].count).toBe(all);
  expect(await items(`fromOn=${today.days[0].on}&toOn=${today.days[0].on}&limit=200`)).toHaveLength(all);
  expect(await items("toOn=2001-01-01")).toEqual([]);
});

test("dates and conditions are words in the sentences; the facts keep their ISO form", () => {
  const facts = { label: "Dunlin", before: {}, after: {}, why: null, personal: {} };
  expect(sentences["due.moved"]({ ...facts, before: { dueOn: "2026-12-08" }, after: { dueOn: "2026-12-29" } })).toBe(
    "moved the next check of Dunlin from 8 Dec 2026 to 29 Dec 2026",
  );
  expect(sentences["check.begun"]({ ...facts, label: "CHK-2026-0001", after: { condition: "as-found" } })).toBe(
    "began check CHK-2026-0001, as found",
  );
  expect(
    sentences["source.changed"]({
      ...facts,
      label: "HA-1",
      before: { reviewDueOn: null },
      after: { reviewDueOn: "2027-03-01" },
    }),
  ).toBe("changed the source HA-1 (review due on from none to 1 Mar 2027)");
  // A number that only looks like one is left alone.
  expect(sentences["certificate.stored"]({ ...facts, label: "HA-1", after: { fileName: "K-2026-13-08.pdf" } })).toBe(
    "stored the certificate K-2026-13-08.pdf of HA-1",
  );
});

test("every action has a sentence, which reads without the facts it may lack", () => {
  for (const action of trailActions) {
    const sentence = sentences[action]({ label: "X", before: {}, after: {}, why: null, personal: {} });
    expect([action, sentence]).toEqual([action, expect.stringMatching(/^[a-z][^]*[^.]$/)]);
    expect([action, sentence]).toEqual([action, expect.not.stringContaining("undefined")]);
  }
});

test("what a lab does stands in its own trail alone", async () => {
  const other = await buildLab(server, "Other");
  const { body } = await other.manager.client.get("/trail?limit=200");
  expect(JSON.stringify(body)).not.toContain("Tina Technician");
  expect((await other.manager.client.get("/trail/state")).body.whole).toBe(true);
});
