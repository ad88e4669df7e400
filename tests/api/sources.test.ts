/** Reference sources with their certificates and cautions, the lab's procedures, the line library. */
import { createHash } from "node:crypto";
import { beforeAll, describe, expect, test } from "vitest";
import { openDueAlerts } from "@wavekeep/api/alerts/overdue-tick";
import { useTestApp } from "../support/app.ts";
import { beginCheck, getBytes } from "../support/check-steps.ts";
import { buildInstrument, buildLab, buildSource, type TestLab, type TestPerson } from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
let tam: TestPerson;
let argonId: string;
let neonId: string;

beforeAll(async () => {
  lab = await buildLab(server, "Shelf lab");
  tam = await lab.add("Tam Technician", ["technician"]);
  argonId = (await buildSource(lab.manager, { label: "AR-1", name: "Argon lamp", elements: ["Ar"] })).id;
  neonId = (await buildSource(lab.manager, { label: "NE-1", name: "Neon lamp", elements: ["Ne"] })).id;
});

const labVisit = () => ({ labId: lab.id, zone: "Europe/Berlin", isDemo: false });
const actions = async () =>
  (
    await server.database.owner.query<{ action: string }>(
      "select action from trail_entries where lab_id = $1 order by number",
      [lab.id],
    )
  ).rows.map((row) => row.action);

describe("sources, procedures, the line library", () => {
  test("a certificate comes back byte for byte, with its hash; a newer one stands before it", async () => {
    const bytes = Buffer.from("%PDF-1.4 certificate of an invented lamp");
    const { body } = await lab.manager.client
      .upload(`/sources/${argonId}/certificate`, "file", [{ name: "AR-1 2026.pdf", bytes }])
      .expect(200);
    expect(body.certificate).toMatchObject({
      fileName: "AR-1 2026.pdf",
      sha256: createHash("sha256").update(bytes).digest("hex"),
      storedBy: { id: lab.manager.id },
    });
    const copy = await getBytes(tam.client, `/sources/${argonId}/certificate`);
    expect(Buffer.compare(copy.bytes, bytes)).toBe(0);
    expect(
      (await tam.client.upload(`/sources/${argonId}/certificate`, "file", [{ name: "x.pdf", bytes }])).status,
    ).toBe(403);
    expect((await tam.client.get(`/sources/${neonId}/certificate`)).status).toBe(404);
    expect(await actions()).toContain("certificate.stored");
  });

  test("cautions go with the kind and the elements, and defer", async () => {
    const mercury = await buildSource(lab.manager, { label: "HG-1", name: "Mercury lamp", elements: ["Hg"] });
    expect(mercury.cautions.map((caution) => caution.title)).toEqual([
      "Ultraviolet light.",
      "Mercury in the lamp.",
      "High voltage.",
      "Who decides.",
    ]);
    const laser = await buildSource(lab.manager, {
      label: "L-1",
      name: "Helium-neon laser",
      kind: "laser",
      elements: [],
      laserLineNm: 632.81646,
    });
    expect(laser.cautions[0]!.text).toMatch(/class of the laser and by the power measured/);
    const holmium = await buildSource(lab.manager, {
      label: "HO-1",
      name: "Holmium oxide, 4 % in perchloric acid",
      kind: "absorption-standard",
      elements: ["Ho"],
    });
    expect(holmium.cautions[0]!.title).toBe("Perchloric acid in a sealed cell.");
    for (const source of [mercury, laser, holmium])
      expect(source.cautions.at(-1)!.text).toMatch(/Wavekeep gives no permission to work\.$/);
    const unknown = await lab.manager.client.post("/sources", {
      label: "Q-1",
      name: "Unknown",
      kind: "low-pressure-lamp",
      elements: ["Qq"],
      laserLineNm: null,
      maker: "",
      serial: "",
      builtIntoInstrumentId: null,
      warmUpMinutes: 1,
      reviewDueOn: null,
      note: "",
    });
    expect(unknown.status).toBe(400);
    const taken = await lab.manager.client.post("/sources", {
      label: "hg-1",
      name: "Another",
      kind: "low-pressure-lamp",
      elements: ["Hg"],
      laserLineNm: null,
      maker: "",
      serial: "",
      builtIntoInstrumentId: null,
      warmUpMinutes: 1,
      reviewDueOn: null,
      note: "",
    });
    expect(taken.status).toBe(409);
  });

  test("a source past its review raises one alert; a new date closes it; a retired source is not taken", async () => {
    const old = await buildSource(lab.manager, {
      label: "KR-1",
      name: "Krypton lamp",
      elements: ["Kr"],
      reviewDueOn: "2026-02-01",
    });
    await openDueAlerts(server.services, labVisit());
    await openDueAlerts(server.services, labVisit());
    const open = async () =>
      (await tam.client.get("/alerts").expect(200)).body.items.filter(
        (alert: { sourceId: string | null }) => alert.sourceId === old.id,
      );
    expect(await open()).toMatchObject([{ kind: "source-review", sourceLabel: "KR-1" }]);
    const {
      id: _,
      version,
      retiredAt: _r,
      certificate: _c,
      cautions: _k,
      reviewDueDays: _d,
      usedInChecks: _u,
      builtIntoInstrumentName: _n,
      ...form
    } = old;
    await lab.manager.client.put(`/sources/${old.id}`, { ...form, reviewDueOn: "2031-02-01", version }).expect(200);
    expect(await open()).toEqual([]);
    await lab.manager.client
      .post(`/sources/${old.id}/retire`, { reason: "burnt out", version: version + 1 })
      .expect(200);
    const bench = await buildInstrument(lab.manager, { name: "Dotterel" });
    const begun = await beginCheck(tam.client, bench.currentConfigurationId);
    const reply = await tam.client.put(`/checks/${begun.summary.id}/draft`, { ...begun.draft, sourceIds: [old.id] });
    expect(reply.status).toBe(400);
    expect(reply.body.detail).toContain("KR-1 is retired");
  });

  test("a new lab has one procedure a kind, version 1, read-only", async () => {
    const { body } = await tam.client.get("/procedures").expect(200);
    expect(
      body.items.map((procedure: { code: string; version: number; instrumentKind: string }) => [
        procedure.code,
        procedure.version,
        procedure.instrumentKind,
      ]),
    ).toEqual([
      ["A-1", 1, "array"],
      ["M-1", 1, "scanning"],
      ["R-1", 1, "raman"],
      ["U-1", 1, "spectrophotometer"],
    ]);
    await expect(server.database.app.query("update procedures set version = 2")).rejects.toThrow(/permission denied/);
  });

  test("the spectrophotometer's procedure requires deuterium at 486.00 and 656.10 nm where its lamp has them", async () => {
    const { body } = await tam.client.get("/procedures").expect(200);
    const procedure = body.items.find((one: { code: string }) => one.code === "U-1");
    expect(procedure).toMatchObject({ elements: ["D", "Hg"], requiredLinesNm: [486, 656.1] });
  });

  test("the line library in air and vacuum, by element and range, with its sources", async () => {
    const { body: lists } = await tam.client.get("/line-lists").expect(200);
    expect(lists.items[0]).toMatchObject({ version: "2026.1", lineCount: 718 });
    const { body } = await tam.client.get("/line-lists/2026.1/lines?element=Hg&fromNm=546&toNm=547").expect(200);
    // NIST Atomic Spectra Database 5.12: Hg I 546.0750 nm in air, 546.2268 nm in vacuum.
    expect(
      body.lines.map((line: { wavelengthAirNm: number; wavelengthVacuumNm: number }) => [
        line.wavelengthAirNm,
        line.wavelengthVacuumNm.toFixed(4),
      ]),
    ).toContainEqual([546.075, "546.2268"]);
  });
});
