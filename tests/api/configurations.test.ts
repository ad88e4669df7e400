/** An instrument of more than one configuration, each judged, held and due by itself; and an axis from its fit to its use. */
import { beforeAll, describe, expect, test } from "vitest";
import { openDueAlerts } from "@wavekeep/api/alerts/overdue-tick";
import type { Check } from "@wavekeep/api/contract/checks";
import type { Configuration, Instrument } from "@wavekeep/api/contract/instruments";
import { useTestApp } from "../support/app.ts";
import { approve, measure, movedArgon, neonCapture, realCapture, submit } from "../support/check-steps.ts";
import {
  buildInstrument,
  buildLab,
  buildSource,
  instrumentInput,
  type TestLab,
  type TestPerson,
} from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
let tam: TestPerson;
let argonId: string;
let neonId: string;

beforeAll(async () => {
  lab = await buildLab(server, "Estuary lab");
  tam = await lab.add("Tam Technician", ["technician"]);
  argonId = (await buildSource(lab.manager, { label: "AR-1", name: "Argon lamp", elements: ["Ar"] })).id;
  neonId = (await buildSource(lab.manager, { label: "NE-1", name: "Neon lamp", elements: ["Ne"] })).id;
});

const { configuration: plain } = instrumentInput("");
const argonSetup = { ...plain, rangeFirstNm: 550, rangeLastNm: 963, setupReproducibilityNm: 0.002 };
const today = () => new Intl.DateTimeFormat("sv-SE", { timeZone: "Europe/Berlin" }).format(new Date());
const plainBench = (name: string) =>
  buildInstrument(lab.manager, {
    name,
    configuration: argonSetup,
    tolerance: [{ fromNm: 550, toNm: 965, toleranceNm: 0.2 }],
  });

type Next = {
  replacesId: string | null;
  presentName: string | null;
  name: string | null;
  version: number;
  firstDueOn?: string;
  fromOn?: string;
};
/** What a manager types to begin a configuration that is otherwise like the argon spectrograph. */
const next = ({ name, ...given }: Next) => ({
  reason: "the second channel came",
  fromOn: today(),
  configuration: { ...argonSetup, name },
  tolerance: [{ fromNm: 550, toNm: 965, toleranceNm: 0.5 }],
  firstDueOn: "2031-01-01",
  ...given,
});
const begin = (instrument: Instrument, given: Omit<Next, "version"> & { version?: number }) =>
  lab.manager.client.post(
    `/instruments/${instrument.id}/configurations`,
    next({ version: instrument.version, ...given }),
  );
const look = async (instrument: Instrument, configurationId?: string): Promise<Instrument> =>
  (
    await lab.manager.client
      .get(`/instruments/${instrument.id}${configurationId === undefined ? "" : `?configurationId=${configurationId}`}`)
      .expect(200)
  ).body as Instrument;
const named = (instrument: Instrument, name: string): Configuration =>
  instrument.configurations.find((one) => one.name === name)!;
const measureAndSubmit = async (
  configurationId: string,
  captures: { name: string; bytes: Uint8Array }[],
): Promise<Check> => submit(tam.client, await measure(tam.client, configurationId, { captures, sourceId: argonId }));

describe("two configurations beside each other", () => {
  let curlew: Instrument;
  let visible: Configuration;
  let red: Configuration;

  beforeAll(async () => {
    curlew = await plainBench("Curlew");
  });

  test("the second one asks for a name, and for one of the first; both are stored together, and only then", async () => {
    const unnamed = await begin(curlew, { replacesId: null, presentName: null, name: null });
    expect(unnamed.status).toBe(400);
    expect(unnamed.body.fields.map((field: { path: string }) => field.path)).toEqual([
      "presentName",
      "configuration.name",
    ]);
    const same = await begin(curlew, { replacesId: null, presentName: "visible", name: "Visible" });
    expect(same.body.fields).toMatchObject([{ path: "configuration.name" }]);
    expect((await look(curlew)).configurations).toMatchObject([{ name: null }]);

    const added = await begin(curlew, { replacesId: null, presentName: "visible", name: "red" }).expect(200);
    curlew = added.body as Instrument;
    [visible, red] = [named(curlew, "visible"), named(curlew, "red")];
    expect(curlew.configurations).toHaveLength(2);
    expect(curlew.shownConfigurationId).toBe(red.id);
    expect(visible).toMatchObject({ toOn: null, replacesId: null, standing: { standing: "in-service" } });
    expect(red).toMatchObject({ toOn: null, replacesId: null, dueOn: "2031-01-01", axis: null });
    expect(red.tolerance.segments[0]!.toleranceNm).toBe(0.5);
  });

  test("each is judged by its own tolerance, and a failing one holds itself alone", async () => {
    const good = await measureAndSubmit(red.id, [realCapture("ar-arc-angstrom.csv")]);
    expect(good.summary).toMatchObject({ configurationName: "red", result: { verdict: "pass" } });
    await approve(lab.manager.client, good);
    const bad = await measureAndSubmit(visible.id, movedArgon(0.3));
    // 0.3 nm is out of the visible one's 0.2 nm and would be within the red one's 0.5 nm.
    expect(bad.summary.result).toMatchObject({ verdict: "fail", worst: { toleranceNm: 0.2 } });

    const held = await look(curlew, visible.id);
    expect(named(held, "visible").standing).toMatchObject({ standing: "on-hold", checkNumber: bad.summary.number });
    expect(named(held, "red").standing.standing).toBe("in-service");
    expect(held).toMatchObject({ state: "on-hold", currentConfigurationId: visible.id, checkCount: 1 });
    expect(held.recentChecks.map((check) => check.number)).toEqual([bad.summary.number]);
    const other = await look(curlew, red.id);
    expect(other).toMatchObject({ state: "in-tolerance", shownConfigurationId: red.id, checkCount: 1 });
    expect(other.recentChecks.map((check) => check.number)).toEqual([good.summary.number]);

    const drift = async (id: string) =>
      (await tam.client.get(`/configurations/${id}/drift`)).body.points.map(
        (point: { checkNumber: string }) => point.checkNumber,
      );
    expect([await drift(visible.id), await drift(red.id)]).toEqual([[bad.summary.number], [good.summary.number]]);
    const { body: list } = await tam.client.get(`/checks?configurationId=${red.id}`).expect(200);
    expect(list.items.map((check: { number: string }) => check.number)).toEqual([good.summary.number]);
  });

  test("the fleet, Today, alerts and the mail speak of the worst, by its name", async () => {
    const { body: fleet } = await tam.client.get("/instruments").expect(200);
    const [row, ...others] = fleet.items.filter((item: { name: string }) => item.name === "Curlew");
    expect(others).toEqual([]);
    expect(row).toMatchObject({ state: "on-hold", configurationName: "visible", configurationId: visible.id });
    expect(row.configurations).toMatchObject([
      { name: "visible", state: "on-hold", asLeftAsked: true },
      { name: "red", state: "in-tolerance", asLeftAsked: false },
    ]);
    const { body: alerts } = await tam.client.get(`/alerts?instrumentId=${curlew.id}`).expect(200);
    expect(alerts.items).toMatchObject([
      { title: "Curlew (visible) is out of tolerance", configurationId: visible.id, configurationName: "visible" },
    ]);
    const { body: mine } = await lab.manager.client.get("/today").expect(200);
    const hold = mine.items.find((item: { kind: string }) => item.kind === "hold-decision");
    expect(hold.title).toMatch(/^Curlew \(visible\) is out of tolerance/);
    expect(hold.action.to).toBe(`/instruments/${curlew.id}?configuration=${visible.id}&do=hold`);
    const { rows } = await server.database.owner.query<{ subject: string }>(
      "select subject from mail_outbox where subject like 'Curlew%'",
    );
    expect(rows[0]!.subject).toMatch(/^Curlew \(visible\) is out of tolerance and on hold/);
    const { body: reviews } = await tam.client.get("/impact-reviews").expect(200);
    expect(reviews.items).toMatchObject([{ instrumentName: "Curlew", configurationName: "visible" }]);
  });

  test("each falls due by itself: an entry a configuration in the due list, and an alert for the overdue one alone", async () => {
    const due = (days: number) => new Date(Date.now() + days * 86_400_000).toISOString().slice(0, 10);
    for (const [one, days] of [
      [visible, 30],
      [red, -20],
    ] as const) {
      const { version } = named(await look(curlew), one.name!);
      await lab.manager.client
        .post(`/configurations/${one.id}/due`, {
          dueOn: due(days),
          assignedToId: null,
          reason: "planned anew",
          version,
        })
        .expect(200);
    }
    const { body } = await tam.client.get("/today").expect(200);
    const entries = body.due.filter((item: { label: string }) => item.label.startsWith("Curlew"));
    expect(entries.map((item: { label: string; to: string }) => [item.label, item.to])).toEqual([
      ["Curlew (red)", `/instruments/${curlew.id}?configuration=${red.id}`],
      ["Curlew (visible)", `/instruments/${curlew.id}?configuration=${visible.id}`],
    ]);
    expect(body.items.find((item: { key: string }) => item.key === `due:${red.id}`).title).toMatch(
      /^The check of Curlew \(red\) is overdue/,
    );
    // The row of the fleet says what comes first of any of them.
    expect(body.fleet.find((row: { name: string }) => row.name === "Curlew")).toMatchObject({
      configurationName: "visible",
      dueOn: due(-20),
    });
    await openDueAlerts(server.services, { labId: lab.id, zone: "Europe/Berlin", isDemo: false });
    const { body: alerts } = await tam.client.get(`/alerts?instrumentId=${curlew.id}`);
    expect(
      alerts.items
        .filter((alert: { kind: string }) => alert.kind === "overdue")
        .map((alert: { title: string }) => alert.title),
    ).toEqual(["The check of Curlew (red) is overdue"]);
  });

  test("search finds it by its name and opens it; a check list is searched by it too", async () => {
    const { body } = await tam.client.get("/search?q=visib").expect(200);
    expect(body.hits).toMatchObject([
      {
        kind: "instrument",
        label: "Curlew (visible)",
        to: `/instruments/${curlew.id}?configuration=${visible.id}`,
      },
    ]);
    const { body: checks } = await tam.client.get("/checks?q=visib").expect(200);
    expect(checks.items.map((check: { configurationName: string }) => check.configurationName)).toEqual(["visible"]);
    const both = (await tam.client.get("/search?q=curlew")).body.hits.map((hit: { label: string }) => hit.label);
    expect(both).toEqual(expect.arrayContaining(["Curlew", "Curlew (red)", "Curlew (visible)"]));
  });

  test("a present name is not taken twice, and none can lose its name", async () => {
    const { axisCoefficients: _, ...set } = argonSetup;
    const path = `/configurations/${red.id}`;
    const rename = async (name: string | null) =>
      lab.manager.client.put(path, { ...set, name, version: named(await look(curlew), "red").version });
    expect((await rename("VISIBLE")).body.fields).toMatchObject([{ path: "name" }]);
    expect((await rename(null)).body.fields).toMatchObject([{ path: "name" }]);
    const third = await begin(await look(curlew), { replacesId: null, presentName: null, name: "red" });
    expect(third.body.fields).toMatchObject([{ path: "configuration.name" }]);
  });

  test("one is replaced: the named one ends, the other one stays as it is", async () => {
    curlew = await look(curlew);
    const toCome = await begin(curlew, { replacesId: red.id, presentName: null, name: "red", fromOn: "2099-01-01" });
    expect(toCome.body.fields).toMatchObject([{ path: "fromOn" }]);
    const open = await measure(tam.client, red.id, {
      captures: [realCapture("ar-arc-angstrom.csv")],
      sourceId: argonId,
    });
    const early = await begin(curlew, { replacesId: red.id, presentName: null, name: "red" });
    expect([early.status, early.body.detail]).toEqual([
      409,
      expect.stringMatching(new RegExp(`^${open.summary.number}, begun by Tam Technician`)),
    ]);
    await tam.client
      .post(`/checks/${open.summary.id}/set-aside`, { reason: "the grating goes", version: open.draft.version })
      .expect(200);
    curlew = await look(curlew);
    // The name is free again as soon as its holder has ended.
    curlew = (await begin(curlew, { replacesId: red.id, presentName: null, name: "red" }).expect(200))
      .body as Instrument;
    const [one, two, three] = curlew.configurations;
    expect(one).toMatchObject({ id: visible.id, toOn: null, standing: { standing: "on-hold" } });
    expect(two).toMatchObject({ id: red.id, toOn: today(), dueOn: null, standing: { standing: "retired" } });
    expect(three).toMatchObject({ name: "red", toOn: null, replacesId: red.id });
    const again = await begin(curlew, { replacesId: red.id, presentName: null, name: "far red" });
    expect(again.status).toBe(409);
    const { body: alerts } = await tam.client.get(`/alerts?instrumentId=${curlew.id}`);
    expect(alerts.items.map((alert: { title: string }) => alert.title)).toEqual([
      "Curlew (visible) is out of tolerance",
    ]);
    // What has ended can still be looked at.
    expect(await look(curlew, red.id)).toMatchObject({
      state: "retired",
      prognosis: expect.stringMatching(/^Ended on .*the second channel came$/),
      checkCount: 2,
    });
  });

  test("one ends and nothing takes its place; the last one stays until the instrument is retired", async () => {
    const present = named(
      { ...curlew, configurations: curlew.configurations.filter((one) => one.toOn === null) },
      "red",
    );
    const end = { toOn: today(), reason: "the channel was taken out", version: present.version };
    expect((await tam.client.post(`/configurations/${present.id}/end`, end)).status).toBe(403);
    curlew = (await lab.manager.client.post(`/configurations/${present.id}/end`, end).expect(200)).body as Instrument;
    expect(curlew.configurations.filter((one) => one.toOn === null).map((one) => one.name)).toEqual(["visible"]);
    const last = named(curlew, "visible");
    const refused = await lab.manager.client.post(`/configurations/${last.id}/end`, { ...end, version: last.version });
    expect([refused.status, refused.body.detail]).toEqual([409, expect.stringMatching(/the only one left/)]);
    const { body: trail } = await lab.manager.client.get(`/trail?instrumentId=${curlew.id}&limit=50`).expect(200);
    const sentences = trail.items.map((entry: { sentence: string }) => entry.sentence);
    expect(sentences).toEqual(
      expect.arrayContaining([
        expect.stringMatching(/added the configuration Curlew \(red\)/),
        expect.stringMatching(/began the configuration Curlew \(red\), in place of red/),
        expect.stringMatching(/ended the configuration Curlew \(red\)/),
      ]),
    );
    await lab.manager.client
      .post(`/instruments/${curlew.id}/retire`, { reason: "given to the school", version: curlew.version })
      .expect(200);
    expect(await look(curlew)).toMatchObject({ state: "retired" });
  });

  test("a configuration of another lab is neither replaced nor shown", async () => {
    const other = await buildLab(server, "Cliff lab");
    const theirs = await buildInstrument(other.manager, { name: "Gannet" });
    const mine = await plainBench("Turnstone");
    const reply = await begin(mine, {
      replacesId: theirs.currentConfigurationId,
      presentName: "one",
      name: "two",
    });
    expect(reply.status).toBe(409);
    expect(
      (await lab.manager.client.get(`/instruments/${mine.id}?configurationId=${theirs.currentConfigurationId}`)).status,
    ).toBe(404);
    expect((await look(mine)).configurations).toMatchObject([{ name: null, toOn: null }]);
  });

  test("two people who add at once: one is stored, the other is told so", async () => {
    const bench = await plainBench("Ruff");
    const replies = await Promise.all(
      ["blue", "red"].map((name) => begin(bench, { replacesId: null, presentName: "white", name })),
    );
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
    expect((await look(bench)).configurations).toHaveLength(2);
  });
});

describe("an axis from its fit to its use", () => {
  test("a calibration from a range is approved, put in force, and the next check is judged against it", async () => {
    const bench = await buildInstrument(lab.manager, {
      name: "Whimbrel",
      kind: "raman",
      configuration: { ...plain, axisKind: "pixel", rangeFirstNm: 545, rangeLastNm: 658, setupReproducibilityNm: null },
      tolerance: [{ fromNm: 540, toNm: 660, toleranceNm: 0.3 }],
    });
    const id = bench.currentConfigurationId;
    const neon = (date: string, change?: Partial<Check["draft"]>) =>
      measure(tam.client, id, { captures: [neonCapture(date)], sourceId: neonId, change });
    const version = async () => (await look(bench)).configurations[0]!.version;

    // No axis was in force: the first one follows from the approval itself, and is not offered.
    const first = await approve(lab.manager.client, await submit(tam.client, await neon("2024-08-29")));
    expect((await lab.manager.client.get(`/checks/${first.summary.id}`)).body.fittedAxis).toMatchObject({
      adopted: { number: 1 },
      next: null,
    });

    const before = await approve(lab.manager.client, await submit(tam.client, await neon("2024-08-29")));
    expect(before.fittedAxis).toMatchObject({ adopted: null, next: { number: 2, replaces: 1 } });

    // The bench has moved: by axis 1 it fails, so a range names its lines and fits a new axis.
    const failing = await neon("2024-09-17");
    expect(failing.analysis!.verdict!.verdict).toBe("fail");
    const calibration = await neon("2024-09-17", { mode: "range", rangeFirstNm: 545, rangeLastNm: 658 });
    expect(calibration.analysis).toMatchObject({ outcome: "identified", verdict: null });
    const submitted = await submit(tam.client, calibration);
    expect(submitted.fittedAxis).toMatchObject({ adopted: null, next: null });
    const approved = await approve(lab.manager.client, submitted);
    expect(approved.fittedAxis).toMatchObject({ adopted: null, next: { number: 2, replaces: 1 } });
    // A technician sees that it can be used, and is not offered to do so.
    expect((await tam.client.get(`/checks/${approved.summary.id}`)).body.fittedAxis).toMatchObject({ next: null });

    const path = `/configurations/${id}/axes`;
    const put = { checkId: approved.summary.id, reason: "the bench was moved; calibrated anew" };
    const stale = await lab.manager.client.post(path, { ...put, version: 99 });
    expect(stale.status).toBe(409);
    await lab.manager.client.post(path, { ...put, version: await version() }).expect(200);
    const twice = await lab.manager.client.post(path, { ...put, version: await version() });
    expect([twice.status, twice.body.detail]).toEqual([409, expect.stringMatching(/in force already, as no. 2/)]);

    // What was measured before says how the bench was: it is not offered any more, and refused.
    expect((await lab.manager.client.get(`/checks/${before.summary.id}`)).body.fittedAxis).toMatchObject({
      next: null,
    });
    const back = await lab.manager.client.post(path, {
      checkId: before.summary.id,
      reason: "back to how it was",
      version: await version(),
    });
    expect([back.status, back.body.detail]).toEqual([409, expect.stringMatching(/measured before axis no. 2/)]);

    const after = await neon("2024-09-17");
    expect(after.axisInForce).toMatchObject({ number: 2 });
    expect(after.analysis!.verdict!.verdict).toBe("pass");

    const { body: history } = await tam.client.get(path).expect(200);
    expect(history.items).toMatchObject([
      {
        number: 2,
        inForceTo: null,
        fromCheck: { number: approved.summary.number },
        by: { name: "Mara Manager" },
        reason: put.reason,
      },
      { number: 1, inForceTo: history.items[0].inForceFrom, by: { name: "Wavekeep" } },
    ]);
    const { body: drift } = await tam.client.get(`/configurations/${id}/drift`).expect(200);
    expect(drift.events).toMatchObject([{ kind: "adjusted", title: "Adjusted, axis no. 2", breaksDrift: true }]);
  });
});
