/**
 * The main job end to end on real captures: neon on one Raman bench, recorded on several dates (see fixtures/captures).
 * Between 29 August and 3 and 11 September the bench stood still within 0.02 nm; on 17 September it read 0.56 nm long.
 */
import { createHash } from "node:crypto";
import { beforeAll, describe, expect, test } from "vitest";
import type { Check } from "@wavekeep/api/contract/checks";
import type { Configuration, Instrument } from "@wavekeep/api/contract/instruments";
import { useTestApp } from "../support/app.ts";
import {
  analyse,
  approve,
  beginCheck,
  getBytes,
  measure,
  neonCapture,
  saveDraft,
  seenAll,
  submit,
} from "../support/check-steps.ts";
import {
  buildInstrument,
  buildLab,
  buildSource,
  instrumentInput,
  password,
  type TestLab,
  type TestPerson,
} from "../support/factories.ts";
import { pdfPages } from "../support/pdf-text.ts";

const server = useTestApp();
let lab: TestLab;
let tam: TestPerson;
let olga: TestPerson;
let odd: TestPerson;
let curlew: Instrument;
let sourceId: string;

const base = instrumentInput("");
const pixelConfiguration = {
  ...base.configuration,
  axisKind: "pixel" as const,
  rangeFirstNm: 545,
  rangeLastNm: 658,
  nominalFwhmNm: 0.5,
  setupReproducibilityNm: null,
};

beforeAll(async () => {
  lab = await buildLab(server, "Marsh lab");
  tam = await lab.add("Tam Technician", ["technician"]);
  olga = await lab.add("Olga Łukasz", ["technician"]);
  odd = await lab.add("Odd Auditor", ["auditor"]);
  curlew = await buildInstrument(lab.manager, {
    name: "Curlew",
    kind: "raman",
    ownerId: olga.id,
    configuration: pixelConfiguration,
    tolerance: [{ fromNm: 540, toNm: 660, toleranceNm: 0.3 }],
  });
  sourceId = (
    await buildSource(lab.manager, { label: "NE-1", name: "Neon lamp", elements: ["Ne"], reviewDueOn: "2031-05-01" })
  ).id;
});

const configurationId = () => curlew.currentConfigurationId;
const configuration = async (): Promise<Configuration> => {
  const { body } = await lab.manager.client.get(`/instruments/${curlew.id}`).expect(200);
  return (body as Instrument).configurations[0]!;
};
const entries = async () =>
  (
    await server.database.owner.query<{ action: string; shape: string; canonical: string; person_id: string | null }>(
      "select action, shape, canonical, person_id from trail_entries where lab_id = $1 order by number",
      [lab.id],
    )
  ).rows;
const actionsSince = async (count: number) => (await entries()).slice(count).map((entry) => entry.action);
const mailsTo = async (person: TestPerson) =>
  (
    await server.database.owner.query<{ subject: string; text: string }>(
      "select subject, text from mail_outbox where to_person_id = $1 order by queued_at",
      [person.id],
    )
  ).rows;

describe("the first check of a pixel axis fits it", () => {
  let check: Check;

  test("begun: short number at once, tolerance and procedure named, nothing judged", async () => {
    check = await beginCheck(tam.client, configurationId());
    expect(check.summary.number).toMatch(/^CHK-\d{4}-0001$/);
    expect(check).toMatchObject({
      state: "begun",
      revision: 1,
      axisInForce: null,
      analysis: null,
      procedure: { code: "R-1", version: 1 },
      draft: { mode: "range" },
    });
    expect(check.may).toMatchObject({ edit: true, submit: false, approve: false });
  });

  test("a capture is stored with its SHA-256 and its trail entry before anything is judged", async () => {
    const file = neonCapture("2024-08-29");
    const { body } = await tam.client
      .upload(`/checks/${check.summary.id}/captures`, "files", [file], { part: "lamp" })
      .expect(200);
    const receipt = body.captures[0];
    expect(receipt).toMatchObject({
      fileName: "2024-08-29.csv",
      sizeBytes: file.bytes.length,
      sha256: createHash("sha256").update(file.bytes).digest("hex"),
      seenBefore: null,
      refusal: null,
      attempt: 1,
      reading: { rows: 2048, axisKind: "pixel", delimiter: ",", decimal: "." },
    });
    expect(receipt.reading.firstRows[0]).toEqual(["Pixels #", "Intensity (a.u.)"]);
    const stored = (await entries())[receipt.trailNumber - 1]!;
    expect(stored.action).toBe("captures.stored");
    expect(stored.canonical).toContain(receipt.sha256);
  });

  test("the bytes come back exactly as they were sent, and that a copy was taken is in the trail", async () => {
    const { body } = await tam.client.get(`/checks/${check.summary.id}`).expect(200);
    const id = body.attempts[0].captures[0].id as string;
    const reply = await getBytes(odd.client, `/captures/${id}/bytes`);
    expect(reply.status).toBe(200);
    expect(Buffer.compare(reply.bytes, neonCapture("2024-08-29").bytes)).toBe(0);
    expect((await entries()).at(-1)).toMatchObject({ action: "capture.read", person_id: odd.id });
  });

  test("analysed by the range: neon named, an axis fitted, and no verdict where no axis was in force", async () => {
    check = await saveDraft(tam.client, (await tam.client.get(`/checks/${check.summary.id}`)).body, {
      sourceIds: [sourceId],
      temperatureC: 21.4,
      minutesSinceSwitchOn: 15,
    });
    check = await analyse(tam.client, check);
    expect(check.analysis).toMatchObject({ outcome: "identified", verdict: null });
    // The bench's own description: 0.055 nm a pixel.
    const samples = check.analysis!.dispersion!.samples;
    expect((samples[10]!.nm - samples[0]!.nm) / (samples[10]!.px - samples[0]!.px)).toBeCloseTo(0.055, 3);
    expect(check.analysisVersion).toMatchObject({ version: 1, changed: "First analysis." });
    expect(check.analysis!.setup.setupReproducibility).toMatchObject({ basis: "assumed", value: 0.1, unit: "px" });
  });

  test("submitted and approved by another: axis no. 1 is in force", async () => {
    check = await submit(tam.client, check);
    expect(check).toMatchObject({
      state: "submitted",
      signatures: [{ printedName: "Tam Technician", meaning: "made by", role: "technician" }],
    });
    check = await approve(lab.manager.client, check);
    expect(check.state).toBe("approved");
    expect((await configuration()).axis).toMatchObject({ number: 1, fromCheckNumber: check.summary.number });
  });
});

describe("a check that passes", () => {
  let check: Check;

  test("in tolerance by the server's verdict, every line with its U, k and budget", async () => {
    check = await measure(tam.client, configurationId(), { captures: [neonCapture("2024-09-03")], sourceId });
    const { analysis } = check;
    expect(analysis).toMatchObject({ outcome: "identified", verdict: { verdict: "pass", nearLimit: false } });
    for (const line of analysis!.lines.filter((one) => one.status === "judged")) {
      expect(line.errorExpandedUncNm).toBeGreaterThan(0);
      expect(line.coverageFactor).toBeGreaterThanOrEqual(2);
      expect(line.budget.length).toBeGreaterThan(2);
      expect(Math.abs(line.errorNm!)).toBeLessThan(0.1);
    }
    expect(check.summary.result).toMatchObject({
      verdict: "pass",
      leftOutCount: 0,
      withEveryLine: { verdict: "pass" },
    });
    const drawing = await tam.client.get(`/checks/${check.summary.id}/analyses/1/drawing`).expect(200);
    expect(drawing.body.counts.length).toBeGreaterThan(500);
  });

  test("a line is left out for what is seen in the data, never for its error", async () => {
    const strong = check.analysis!.lines.find((line) => line.wavelengthNm === 640.2248)!;
    const refused = await tam.client.put(`/checks/${check.summary.id}/draft`, {
      ...check.draft,
      leftOut: [{ wavelengthNm: strong.wavelengthNm, reason: "too-weak", note: "it looks wrong to me" }],
    });
    expect(refused.status).toBe(422);
    expect(refused.body.detail).toMatch(/never for its error/);
    expect(refused.body.fields[0].path).toBe("leftOut.0.reason");

    const seen = check.analysis!.lines.find(
      (line) =>
        line.status === "judged" &&
        (line.flags.includes("blend") || line.signalToNoise < 10 || line.reducedChiSquare > 2),
    )!;
    const reason = seen.flags.includes("blend") ? "blended" : seen.signalToNoise < 10 ? "too-weak" : "disturbed";
    const before = await entries();
    check = await saveDraft(tam.client, check, {
      leftOut: [{ wavelengthNm: seen.wavelengthNm!, reason, note: "a neighbour stands in its wing" }],
    });
    const early = await tam.client.post(`/checks/${check.summary.id}/submit`, {
      password,
      version: check.draft.version,
    });
    expect(early.status).toBe(409);
    expect(early.body.detail).toMatch(/analyse it again/);

    check = await analyse(tam.client, check);
    expect(check.analysisVersion!.changed).toMatch(/^Left out/);
    expect(check.summary.result).toMatchObject({ leftOutCount: 1 });
    expect(check.analysis!.verdictWithEveryLine).not.toBeNull();
    expect(await actionsSince(before.length)).toEqual(["analysis.made", "line.left-out"]);
    expect((await entries()).at(-1)!.canonical).toContain("a neighbour stands in its wing");

    check = await analyse(tam.client, await saveDraft(tam.client, check, { leftOut: [] }));
    expect((await entries()).at(-1)!.action).toBe("line.brought-back");
  });

  test("an attempt that is abandoned stays in the list, and bytes used before are named", async () => {
    const { body } = await tam.client
      .post(`/checks/${check.summary.id}/attempts`, {
        reason: "the lamp was still warming",
        version: check.draft.version,
      })
      .expect(200);
    check = body as Check;
    const upload = await tam.client
      .upload(`/checks/${check.summary.id}/captures`, "files", [{ ...neonCapture("2024-09-03"), name: "again.csv" }], {
        part: "lamp",
      })
      .expect(200);
    expect(upload.body.captures[0].seenBefore).toMatchObject({
      checkNumber: check.summary.number,
      fileName: "2024-09-03.csv",
    });
    check = await analyse(tam.client, check);
    expect(check.attempts).toMatchObject([
      { number: 1, abandoned: true, verdict: "pass", analysisCount: 3, note: "the lamp was still warming" },
      { number: 2, abandoned: false, verdict: "pass", analysisCount: 1 },
    ]);
    check = await submit(tam.client, check);
  });

  test("nobody approves what they had a part in, and a technician approves nothing", async () => {
    const own = await tam.client.post(`/checks/${check.summary.id}/approve`, { password, revision: 1, seen: seenAll });
    expect(own.status).toBe(403);
    const before = (await entries()).length;
    const wrong = await lab.manager.client.post(`/checks/${check.summary.id}/approve`, {
      password: "not this one",
      revision: 1,
      seen: seenAll,
    });
    expect(wrong.status).toBe(403);
    expect(wrong.body.type).toBe("/problems/wrong-password");
    const unseen = await lab.manager.client.post(`/checks/${check.summary.id}/approve`, {
      password,
      revision: 1,
      seen: { ...seenAll, attempts: false },
    });
    expect(unseen.status).toBe(400);
    expect((await entries()).length).toBe(before);
  });

  test("a double click on approve: one approval, the second a plain 409", async () => {
    const click = () =>
      lab.manager.client.post(`/checks/${check.summary.id}/approve`, { password, revision: 1, seen: seenAll });
    const replies = await Promise.all([click(), click()]);
    expect(replies.map((reply) => reply.status).sort()).toEqual([200, 409]);
    const second = replies.find((reply) => reply.status === 409)!;
    expect(second.body.detail).toMatch(/approved already|a moment ago/);
    const { rows } = await server.database.owner.query(
      "select 1 from signatures where check_id = $1 and meaning = 'reviewed and approved'",
      [check.summary.id],
    );
    expect(rows).toHaveLength(1);
    check = (await lab.manager.client.get(`/checks/${check.summary.id}`)).body as Check;
  });

  test("the next due date moves on by the interval from the day of the measurement", async () => {
    const { body } = await lab.manager.client.get(`/checks/${check.summary.id}`);
    expect(body.state).toBe("approved");
    // First due on 2030-01-01, later than 90 days from today: an approval never pulls a due date back.
    expect((await configuration()).dueOn).toBe("2030-01-01");
  });

  test("locked: no capture, no change, no second submission", async () => {
    const upload = await tam.client.upload(
      `/checks/${check.summary.id}/captures`,
      "files",
      [neonCapture("2024-09-11")],
      { part: "lamp" },
    );
    expect(upload.status).toBe(409);
    expect((await tam.client.put(`/checks/${check.summary.id}/draft`, check.draft)).status).toBe(409);
    expect(
      (await tam.client.post(`/checks/${check.summary.id}/submit`, { password, version: check.draft.version })).status,
    ).toBe(409);
  });

  test("the report holds every line with U, the rule, the signatures, the hashes and the head of the chain", async () => {
    const reply = await getBytes(odd.client, `/checks/${check.summary.id}/report`);
    expect(reply.type).toBe("application/pdf");
    const bytes = reply.bytes;
    expect(check.report).toMatchObject({
      number: expect.stringMatching(/^REP-\d{4}-000\d$/),
      sha256: createHash("sha256").update(bytes).digest("hex"),
    });
    const pages = pdfPages(bytes);
    const text = pages.join("\n");
    // Cells break long words and change faces within a name: compared without spaces.
    const letters = text.replace(/\s/g, "");
    for (const line of check.analysis!.lines.filter((one) => one.wavelengthNm !== null))
      expect(text).toContain(line.wavelengthNm!.toFixed(4));
    for (const words of [
      "guarded acceptance, w = U",
      "Tam Technician",
      "made by",
      "Mara Manager",
      "reviewed and approved",
      "Olga Łukasz",
      "NE-1, Neon lamp",
      "1 May 2031",
      "R-1, version 1",
      "Tolerance, version 1",
      "21.4",
      "abandoned: the lamp was still warming",
      createHash("sha256").update(neonCapture("2024-09-03").bytes).digest("hex"),
      check.signatures[0]!.contentSha256,
      server.services.signer.fingerprint,
    ]) {
      expect(letters).toContain(words.replace(/\s/g, ""));
    }
    expect(text).not.toContain("DRAFT");
    expect(text).not.toContain("\uFFFD");
    pages.forEach((page, index) => expect(page).toContain(`Page ${index + 1} of ${pages.length}`));
    const approval = (await entries()).findIndex(
      (entry) => entry.action === "check.approved" && entry.canonical.includes(check.summary.id),
    );
    const head = /entry (\d+), ([0-9a-f]{64})/.exec(text)!;
    expect(Number(head[1])).toBeGreaterThanOrEqual(approval + 1);
  });

  test("the drift series has the point with its uncertainty", async () => {
    const { body } = await odd.client.get(`/configurations/${configurationId()}/drift`).expect(200);
    expect(body.points).toHaveLength(1);
    expect(body.points[0]).toMatchObject({
      checkNumber: check.summary.number,
      state: "approved",
      verdict: "pass",
      temperatureC: 21.4,
      sourceLabels: ["NE-1"],
    });
    expect(Math.abs(body.points[0].midErrorNm)).toBeLessThan(0.05);
    expect(body.points[0].midExpandedUncNm).toBeGreaterThan(0);
    expect(body.toleranceNm).toBe(0.3);
  });
});

describe("a check that fails", () => {
  let failed: Check;
  let entriesBefore = 0;

  test("submitting it holds the configuration, asks for as-left, opens alert and review, mails the owner: one transaction", async () => {
    failed = await measure(tam.client, configurationId(), { captures: [neonCapture("2024-09-17")], sourceId });
    expect(failed.analysis!.verdict).toMatchObject({ verdict: "fail" });
    expect((await configuration()).standing.standing).toBe("in-service");
    entriesBefore = (await entries()).length;
    failed = await submit(tam.client, failed);
    expect(await actionsSince(entriesBefore)).toEqual([
      "check.submitted",
      "hold.placed",
      "as-left.asked",
      "alert.opened",
      "impact.opened",
    ]);
    const written = (await entries()).slice(entriesBefore);
    expect(written.map((entry) => entry.person_id)).toEqual([tam.id, null, null, null, null]);
    expect(written.map((entry) => entry.shape)).toEqual([
      "signature",
      "out-of-tolerance",
      "wavekeep",
      "wavekeep",
      "wavekeep",
    ]);
    expect((await configuration()).standing).toMatchObject({
      standing: "on-hold",
      by: null,
      checkNumber: failed.summary.number,
    });
    expect(failed.hold).toMatchObject({ decided: false });
    const mail = (await mailsTo(olga)).at(-1)!;
    expect(mail.subject).toContain("Curlew is out of tolerance and on hold");
    expect(mail.text).toMatch(/reads \+0\.\d+ ± 0\.\d+.nm where 0\.30.nm is allowed/);
    expect(mail.text).toContain(`Check ${failed.summary.number}, as found: `);
    expect(mail.text).toContain(`/checks/${failed.summary.id}`);
  });

  test("the review's window runs from the last good check to this one", async () => {
    const { body } = await olga.client.get(`/impact-reviews/${failed.impactReview!.id}`).expect(200);
    expect(body).toMatchObject({
      state: "open",
      owner: { id: olga.id },
      windowFromCheck: { number: expect.stringMatching(/0002$/) },
      mayDecide: true,
    });
    expect(new Date(body.windowFrom).getTime()).toBeLessThan(new Date(body.windowTo).getTime());
    expect(body.largestErrorNm).toBeGreaterThan(0.5);
  });

  test("Today tells each what waits", async () => {
    const { body: manager } = await lab.manager.client.get("/today").expect(200);
    expect(manager.items.map((item: { kind: string }) => item.kind)).toEqual(
      expect.arrayContaining(["hold-decision", "review"]),
    );
    expect(manager.items[0].title).toMatch(/^Curlew is out of tolerance, on hold since .*; your decision waits\.$/);
    expect(manager.fleet[0]).toMatchObject({ name: "Curlew", state: "on-hold", asLeftAsked: true });
    const { body: owner } = await olga.client.get("/today").expect(200);
    expect(owner.items.map((item: { kind: string }) => item.kind)).toEqual(expect.arrayContaining(["impact", "alert"]));
    expect(owner.sentence).toMatch(/wait for you\.$/);
    const { body: auditor } = await odd.client.get("/today").expect(200);
    expect(auditor.items.every((item: { kind: string }) => item.kind === "recent")).toBe(true);
  });

  test("somebody else's alert and review are not a technician's; a manager acts for the owner, and the trail says so", async () => {
    const { body: list } = await tam.client.get("/alerts").expect(200);
    const alert = list.items.find((item: { kind: string }) => item.kind === "out-of-tolerance");
    expect(
      (await tam.client.post(`/alerts/${alert.id}/acknowledge`, { note: "I saw it", version: alert.version })).status,
    ).toBe(403);
    const acknowledged = await olga.client
      .post(`/alerts/${alert.id}/acknowledge`, { note: "the mirror mount was loose", version: alert.version })
      .expect(200);
    expect(acknowledged.body.acknowledged).toMatchObject({ by: { id: olga.id }, forOwner: false });
    const stale = await olga.client.post(`/alerts/${alert.id}/acknowledge`, {
      note: "the mirror mount was loose",
      version: alert.version,
    });
    expect(stale.status).toBe(409);

    const path = `/impact-reviews/${failed.impactReview!.id}/decision`;
    expect(
      (await tam.client.post(path, { affected: "none", affectedWork: "", decision: "nothing was measured" })).status,
    ).toBe(403);
    const unnamed = await lab.manager.client.post(path, {
      affected: "some",
      affectedWork: "",
      decision: "to be repeated",
    });
    expect(unnamed.status).toBe(400);
    const decided = await lab.manager.client
      .post(path, { affected: "some", affectedWork: "Spectra of 12 September", decision: "they are repeated" })
      .expect(200);
    expect(decided.body).toMatchObject({ state: "decided", decision: { forOwner: true, affected: "some" } });
    expect((await entries()).at(-1)!.canonical).toContain('"forOwner":true');
    expect(
      (await olga.client.post(path, { affected: "none", affectedWork: "", decision: "nothing after all" })).status,
    ).toBe(409);
  });

  test("a manager confirms the hold as restricted; a reason is needed", async () => {
    const { version } = await configuration();
    const path = `/configurations/${configurationId()}/standing`;
    expect(
      (await tam.client.post(path, { standing: "in-service", restriction: null, reason: "it is fine", version }))
        .status,
    ).toBe(403);
    const vague = await lab.manager.client.post(path, {
      standing: "restricted",
      restriction: null,
      reason: "for rough work only",
      version,
    });
    expect(vague.status).toBe(400);
    const { body } = await lab.manager.client
      .post(path, {
        standing: "restricted",
        restriction: "peak heights only",
        reason: "positions are not used there",
        version,
      })
      .expect(200);
    expect(body.standing).toMatchObject({
      standing: "restricted",
      restriction: "peak heights only",
      checkNumber: failed.summary.number,
    });
    expect((await entries()).at(-1)).toMatchObject({ action: "hold.confirmed", person_id: lab.manager.id });
  });

  test("sent back with comments: a new revision may be submitted, both are kept", async () => {
    const before = (await entries()).length;
    const returned = await lab.manager.client
      .post(`/checks/${failed.summary.id}/return`, { comment: "please state the pressure", revision: 1 })
      .expect(200);
    expect(returned.body).toMatchObject({ state: "returned", revision: 2 });
    expect((await mailsTo(tam)).at(-1)!.text).toContain("please state the pressure");
    expect(await actionsSince(before)).toEqual(["check.returned"]);
    let again = (await tam.client.get(`/checks/${failed.summary.id}`)).body as Check;
    again = await analyse(tam.client, await saveDraft(tam.client, again, { pressureHpa: 1002 }));
    expect(again.analysisVersion!.changed).toBe("Pressure 1002 hPa.");
    const submitted = await submit(tam.client, again);
    expect(submitted).toMatchObject({ state: "submitted", revision: 2 });
    const outdated = await lab.manager.client.post(`/checks/${failed.summary.id}/approve`, {
      password,
      revision: 1,
      seen: seenAll,
    });
    expect(outdated.status).toBe(409);
    expect(outdated.body.type).toBe("/problems/stale");
    failed = await approve(lab.manager.client, submitted);
    expect(failed.signatures.map((signature) => [signature.meaning, signature.printedName])).toEqual([
      ["made by", "Tam Technician"],
      ["made by", "Tam Technician"],
      ["reviewed and approved", "Mara Manager"],
    ]);
    // Failing, it moves no due date and closes no alert.
    expect((await configuration()).standing.standing).toBe("on-hold");
  });

  test("an as-left check that passes ends the hold once it is approved, and closes the alert by itself", async () => {
    let left = await measure(tam.client, configurationId(), {
      captures: [neonCapture("2024-09-11")],
      sourceId,
      condition: "as-left",
    });
    expect(left.follows).toMatchObject({ number: failed.summary.number });
    left = await submit(tam.client, left);
    expect((await configuration()).standing.standing).toBe("on-hold");
    const before = (await entries()).length;
    left = await approve(lab.manager.client, left);
    expect(await actionsSince(before)).toEqual(
      expect.arrayContaining(["check.approved", "hold.ended", "alert.closed", "report.made"]),
    );
    expect((await configuration()).standing).toMatchObject({
      standing: "in-service",
      by: null,
      checkNumber: left.summary.number,
    });
    const { body } = await odd.client.get("/alerts?state=open").expect(200);
    expect(body.items.filter((item: { kind: string }) => item.kind === "out-of-tolerance")).toEqual([]);
    const acknowledged = await olga.client
      .post(`/checks/${left.summary.id}/acknowledge`, { note: "seen, thank you" })
      .expect(200);
    expect(acknowledged.body.events.at(-1)).toMatchObject({
      kind: "acknowledged",
      comment: "seen, thank you",
      by: { id: olga.id },
    });
  });

  test("the auditor sees all of it as a whole chain, and can change nothing", async () => {
    const { body } = await odd.client.get("/trail/state").expect(200);
    expect(body).toMatchObject({ whole: true, signaturesValid: true, breaks: [] });
    expect(body.attemptCount).toBe(5);
    expect(body.checkCount).toBe(4);
    const { body: trail } = await odd.client.get(`/trail?instrumentId=${curlew.id}&limit=200`).expect(200);
    expect(trail.items.some((entry: { sentence: string }) => entry.sentence.includes("put Curlew on hold"))).toBe(true);
    expect(
      (
        await odd.client.post("/checks", {
          configurationId: configurationId(),
          condition: "as-found",
          followsCheckId: null,
        })
      ).status,
    ).toBe(403);
    expect((await odd.client.post(`/checks/${failed.summary.id}/acknowledge`, { note: "nothing to see" })).status).toBe(
      403,
    );
  });
});
