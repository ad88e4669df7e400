/** What comes wrong gets a plain sentence as a problem document, loses nothing, and is never a fault of the server. */
import { beforeAll, describe, expect, test } from "vitest";
import type { Check } from "@wavekeep/api/contract/checks";
import type { Instrument } from "@wavekeep/api/contract/instruments";
import { useTestApp } from "../support/app.ts";
import { analyse, beginCheck, measure, realCapture, saveDraft, seenAll, submit } from "../support/check-steps.ts";
import {
  buildInstrument,
  buildLab,
  buildSource,
  instrumentInput,
  password,
  type TestLab,
  type TestPerson,
} from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
let tam: TestPerson;
let iris: TestPerson;
let redshank: Instrument;
let argonId: string;
let neonId: string;

beforeAll(async () => {
  lab = await buildLab(server, "Estuary lab");
  tam = await lab.add("Tam Technician", ["technician"]);
  iris = await lab.add("Iris Manager", ["manager"]);
  const { configuration } = instrumentInput("");
  redshank = await buildInstrument(lab.manager, {
    name: "Redshank",
    configuration: { ...configuration, rangeFirstNm: 550, rangeLastNm: 963, setupReproducibilityNm: 0.005 },
    tolerance: [{ fromNm: 550, toNm: 965, toleranceNm: 0.2 }],
  });
  argonId = (await buildSource(lab.manager, { label: "AR-1", name: "Argon lamp", elements: ["Ar"] })).id;
  neonId = (await buildSource(lab.manager, { label: "NE-2", name: "Neon lamp", elements: ["Ne"] })).id;
});

const trailLength = async () =>
  Number(
    (await server.database.owner.query("select count(*) from trail_entries where lab_id = $1", [lab.id])).rows[0].count,
  );
const storedBytes = async (sha256: string) =>
  (
    await server.database.owner.query<{ bytes: Buffer }>(
      "select bytes from capture_bytes where lab_id = $1 and sha256 = $2",
      [lab.id, sha256],
    )
  ).rows[0]?.bytes;

const rows = (count: number, write: (i: number) => string) =>
  Array.from({ length: count }, (_, i) => write(i)).join("\n");
const badFiles: { name: string; bytes: Buffer; says: RegExp }[] = [
  { name: "empty.csv", bytes: Buffer.alloc(0), says: /empty/i },
  { name: "axis-only.csv", bytes: Buffer.from(rows(300, (i) => `${400 + i * 0.5}`)), says: /one column/ },
  {
    name: "binary.dat",
    bytes: Buffer.from(Array.from({ length: 5000 }, (_, i) => (i * 7919) % 256)),
    says: /text|binary/i,
  },
  {
    name: "back-and-forth.csv",
    bytes: Buffer.from(rows(300, (i) => `${i < 200 ? 400 + i : 800 - i};${100 + ((i * 37) % 23)}`)),
    says: /turns back/,
  },
  {
    name: "letter.txt",
    bytes: Buffer.from("Dear lab,\nthe lamp is on its way.\nKind regards\n".repeat(20)),
    says: /no numbers|number/i,
  },
];

describe("files that can't be read", () => {
  let check: Check;
  beforeAll(async () => {
    check = await beginCheck(tam.client, redshank.currentConfigurationId);
  });

  test.each(badFiles)("$name is stored as it came and says why it can't be read", async ({ name, bytes, says }) => {
    const before = await trailLength();
    const { body, status } = await tam.client.upload(
      `/checks/${check.summary.id}/captures`,
      "files",
      [{ name, bytes }],
      { part: "lamp" },
    );
    expect(status).toBe(200);
    expect(body.captures[0]).toMatchObject({ fileName: name, sizeBytes: bytes.length, reading: null });
    expect(body.captures[0].refusal).toMatch(says);
    expect(Buffer.compare((await storedBytes(body.captures[0].sha256))!, bytes)).toBe(0);
    expect(await trailLength()).toBe(before + 1);
  });

  test("with nothing readable the analysis says so and nothing is lost", async () => {
    check = await saveDraft(tam.client, (await tam.client.get(`/checks/${check.summary.id}`)).body, {
      sourceIds: [argonId],
    });
    const reply = await tam.client.post(`/checks/${check.summary.id}/analyses`, { version: check.draft.version });
    expect(reply.status).toBe(422);
    expect(reply.headers["content-type"]).toContain("application/problem+json");
    expect(reply.body).toMatchObject({
      type: "/problems/unusable",
      status: 422,
      kept: expect.stringContaining("stored"),
    });
    expect((await tam.client.get(`/checks/${check.summary.id}`)).body.attempts[0].captures).toHaveLength(
      badFiles.length,
    );
  });

  test("beside a good capture, the ones that were not read are named in the result", async () => {
    await tam.client
      .upload(`/checks/${check.summary.id}/captures`, "files", [realCapture("ar-arc-angstrom.csv")], { part: "lamp" })
      .expect(200);
    check = await analyse(tam.client, (await tam.client.get(`/checks/${check.summary.id}`)).body);
    expect(check.analysis!.outcome).toBe("identified");
    expect(
      check
        .analysis!.warnings.filter((warning) => warning.code === "not-read")
        .map((warning) => warning.text.split(" ")[0]),
    ).toEqual(badFiles.map((file) => file.name));
  });

  test("60 MB is refused before it is read, and nothing is stored", async () => {
    const before = await trailLength();
    const reply = await tam.client.upload(
      `/checks/${check.summary.id}/captures`,
      "files",
      [{ name: "huge.csv", bytes: Buffer.alloc(60 * 1024 * 1024, "1,2\n") }],
      { part: "lamp" },
    );
    expect(reply.status).toBe(413);
    expect(reply.body).toMatchObject({ type: "/problems/too-large", detail: expect.stringContaining("50 MB") });
    expect(await trailLength()).toBe(before);
  });

  test("no file, a wrong part, a strange form: plain refusals", async () => {
    const path = `/checks/${check.summary.id}/captures`;
    expect((await tam.client.upload(path, "files", [], { part: "lamp" })).status).toBe(400);
    expect((await tam.client.upload(path, "files", [{ name: "a.csv", bytes: "1,2" }], { part: "blank" })).status).toBe(
      400,
    );
    expect((await tam.client.upload(path, "other", [{ name: "a.csv", bytes: "1,2" }])).status).toBe(400);
    expect((await tam.client.post(path, { part: "lamp" })).status).toBe(415);
  });
});

describe("captures that are readable and still wrong", () => {
  test("a wrong lamp is refused, nothing is named, and it can't be signed", async () => {
    const check = await measure(tam.client, redshank.currentConfigurationId, {
      captures: [realCapture("ar-arc-angstrom.csv")],
      sourceId: neonId,
    });
    expect(check.analysis!.outcome).not.toBe("identified");
    expect(check.analysis!.reason).toBeTruthy();
    expect(check.analysis!.lines.every((line) => line.wavelengthNm === null || line.element === "Ne")).toBe(true);
    const reply = await tam.client.post(`/checks/${check.summary.id}/submit`, {
      password,
      version: check.draft.version,
    });
    if (check.analysis!.verdict === null) expect(reply.status).toBe(422);
    else expect(check.analysis!.verdict.verdict).toBe("inconclusive");
    expect(reply.status).toBeLessThan(500);
  });

  test("a saturated capture: lines at the ceiling are refused, the others judged", async () => {
    const text = realCapture("ar-arc-angstrom.csv").bytes.toString("utf8").split("\n");
    const values = text
      .slice(1)
      .filter((line) => line !== "")
      .map((line) => Number(line.split(",")[1]));
    const ceiling = Math.round(0.4 * Math.max(...values));
    const clipped = [
      text[0],
      ...text
        .slice(1)
        .filter((line) => line !== "")
        .map((line) => {
          const [axis, value] = line.split(",");
          return `${axis},${Math.min(Number(value), ceiling)}`;
        }),
    ].join("\n");
    const check = await measure(tam.client, redshank.currentConfigurationId, {
      captures: [{ name: "clipped.csv", bytes: Buffer.from(clipped) }],
      sourceId: argonId,
      change: { fullScaleCounts: ceiling },
    });
    const saturated = check.analysis!.lines.filter((line) => line.flags.includes("saturated"));
    expect(saturated.length).toBeGreaterThan(0);
    expect(saturated.every((line) => line.status !== "judged")).toBe(true);
    expect(check.analysis!.verdict!.judgedCount).toBeGreaterThan(3);
  });

  test("pixel captures for a configuration that writes wavelengths: told what to do", async () => {
    const begun = await beginCheck(tam.client, redshank.currentConfigurationId);
    await tam.client
      .upload(`/checks/${begun.summary.id}/captures`, "files", [realCapture("ne-raman-bench.csv")], { part: "lamp" })
      .expect(200);
    const draft = await saveDraft(tam.client, begun, { sourceIds: [neonId] });
    const reply = await tam.client.post(`/checks/${begun.summary.id}/analyses`, { version: draft.draft.version });
    expect(reply.status).toBe(422);
    expect(reply.body.detail).toMatch(/hold no wavelength axis/);
  });

  test("no source, no capture, a retired or foreign source: each its sentence", async () => {
    // A new check takes over the sources of the last one; here they are taken out again.
    const begun = await saveDraft(tam.client, await beginCheck(tam.client, redshank.currentConfigurationId), {
      sourceIds: [],
    });
    const path = `/checks/${begun.summary.id}`;
    expect((await tam.client.post(`${path}/analyses`, { version: begun.draft.version })).body.detail).toMatch(
      /has no capture yet/,
    );
    await tam.client
      .upload(`${path}/captures`, "files", [realCapture("ar-arc-angstrom.csv")], { part: "lamp" })
      .expect(200);
    expect((await tam.client.post(`${path}/analyses`, { version: begun.draft.version })).body.detail).toMatch(
      /Name the source first/,
    );
    const foreign = await tam.client.put(`${path}/draft`, { ...begun.draft, sourceIds: [redshank.id] });
    expect(foreign.status).toBe(400);
    expect(foreign.body.fields[0].path).toBe("sourceIds");
    expect((await tam.client.post(`${path}/submit`, { password, version: begun.draft.version })).status).toBe(409);
    expect((await tam.client.get(`${path}/report`)).status).toBe(409);
  });
});

describe("two people at once", () => {
  test("a stale form of an instrument: 409 that names who changed it, and the first change stands", async () => {
    const { body: seen } = await lab.manager.client.get(`/instruments/${redshank.id}`);
    const form = {
      name: seen.name,
      maker: seen.maker,
      model: seen.model,
      serial: seen.serial,
      ownerId: seen.owner.id,
      altitudeM: seen.altitudeM,
      purchasedOn: seen.purchasedOn,
      version: seen.version,
    };
    const { body: irisSaved } = await iris.client
      .put(`/instruments/${redshank.id}`, { ...form, place: "Bench 4" })
      .expect(200);
    expect(irisSaved.version).toBe(seen.version + 1);
    const late = await lab.manager.client.put(`/instruments/${redshank.id}`, { ...form, place: "Bench 9" });
    expect(late.status).toBe(409);
    expect(late.body.type).toBe("/problems/stale");
    expect(late.body.detail).toMatch(/^Redshank was changed by Iris Manager on .* while this form was open/);
    expect((await iris.client.get(`/instruments/${redshank.id}`)).body.place).toBe("Bench 4");
  });

  test("both at the very same moment: one 200, one 409", async () => {
    const { body: seen } = await lab.manager.client.get(`/instruments/${redshank.id}`);
    const path = `/configurations/${redshank.currentConfigurationId}/due`;
    const version = seen.configurations[0].version;
    const replies = await Promise.all([
      lab.manager.client.post(path, { dueOn: "2031-02-01", assignedToId: null, reason: "holidays", version }),
      iris.client.post(path, { dueOn: "2031-03-01", assignedToId: null, reason: "busy weeks", version }),
    ]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
  });

  test("a stale working copy says whose hand was faster", async () => {
    const begun = await beginCheck(tam.client, redshank.currentConfigurationId);
    await saveDraft(iris.client, begun, { temperatureC: 20.5 });
    const late = await tam.client.put(`/checks/${begun.summary.id}/draft`, { ...begun.draft, temperatureC: 19.5 });
    expect(late.status).toBe(409);
    expect(late.body.detail).toMatch(/was changed by Iris Manager at/);
    expect((await tam.client.get(`/checks/${begun.summary.id}`)).body.draft.temperatureC).toBe(20.5);
  });

  test("two reviewers approve in the same moment: one signature, the other a plain 409", async () => {
    const check = await submit(
      tam.client,
      await measure(tam.client, redshank.currentConfigurationId, {
        captures: [realCapture("ar-arc-angstrom.csv")],
        sourceId: argonId,
      }),
    );
    const body = { password, revision: 1, seen: seenAll };
    const replies = await Promise.all([
      lab.manager.client.post(`/checks/${check.summary.id}/approve`, body),
      iris.client.post(`/checks/${check.summary.id}/approve`, body),
    ]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
    const approved = (await tam.client.get(`/checks/${check.summary.id}`)).body as Check;
    expect(approved.signatures.filter((signature) => signature.meaning === "reviewed and approved")).toHaveLength(1);
    expect(approved.report!.number).toMatch(/^REP-/);
  });

  test("begun side by side, checks get different numbers without a gap", async () => {
    const begun = await Promise.all(
      Array.from({ length: 6 }, () => beginCheck(tam.client, redshank.currentConfigurationId)),
    );
    const numbers = begun.map((check) => Number(check.summary.number.slice(-4))).sort((a, b) => a - b);
    expect(new Set(numbers).size).toBe(6);
    expect(numbers[5]! - numbers[0]!).toBe(5);
  });
});

describe("what is not here", () => {
  test("another lab's rows, mistyped ids, wrong pages: 404 or 400, never 5xx", async () => {
    const other = await buildLab(server, "Other lab");
    const stranger = other.manager.client;
    for (const path of [
      `/instruments/${redshank.id}`,
      `/configurations/${redshank.currentConfigurationId}/drift`,
      `/sources/${argonId}`,
    ]) {
      expect((await stranger.get(path)).status).toBe(404);
    }
    expect(
      (
        await stranger.post("/checks", {
          configurationId: redshank.currentConfigurationId,
          condition: "as-found",
          followsCheckId: null,
        })
      ).status,
    ).toBe(404);
    expect(
      (
        await stranger.put(`/sources/${argonId}`, {
          label: "X",
          name: "x",
          kind: "laser",
          elements: [],
          laserLineNm: 632.8,
          maker: "",
          serial: "",
          builtIntoInstrumentId: null,
          warmUpMinutes: 1,
          reviewDueOn: null,
          note: "",
          version: 0,
        })
      ).status,
    ).toBe(404);
    expect((await tam.client.get("/checks/not-an-id")).status).toBe(404);
    expect((await tam.client.get("/checks?after=xyz")).status).toBe(400);
    expect((await tam.client.get("/checks?limit=0")).status).toBe(400);
    expect((await tam.client.get("/checks?q=%25_%5C")).status).toBe(200);
    expect((await tam.client.get("/search?q=%25")).body.hits).toEqual([]);
    expect((await tam.client.get(`/line-lists/1999.1/lines`)).status).toBe(404);
    expect((await stranger.get("/search?q=redshank")).body.hits).toEqual([]);
  });

  test("an instrument that could not be: every field at once, nothing stored", async () => {
    const wrong = instrumentInput(lab.manager.id, {
      name: "Ghost",
      tolerance: [{ fromNm: 700, toNm: 600, toleranceNm: 0.5 }],
    });
    const reply = await lab.manager.client.post("/instruments", {
      ...wrong,
      configuration: { ...wrong.configuration, rangeFirstNm: 900, rangeLastNm: 300 },
    });
    expect(reply.status).toBe(400);
    expect(reply.body.fields.map((field: { path: string }) => field.path)).toEqual([
      "configuration.rangeLastNm",
      "tolerance.0.toNm",
    ]);
    const twice = await lab.manager.client.post("/instruments", instrumentInput(lab.manager.id, { name: "redshank" }));
    expect(twice.status).toBe(409);
    expect(twice.body.fields[0].path).toBe("name");
    const auditor = await lab.add("Only Auditor", ["auditor"]);
    const owned = await lab.manager.client.post("/instruments", instrumentInput(auditor.id, { name: "Knot" }));
    expect(owned.status).toBe(400);
    expect(owned.body.fields[0].path).toBe("ownerId");
  });
});
