/** The demo lab tells the story it is meant to: asked of the server as the lab's manager and auditor. */
import { expect, test } from "vitest";
import type { ChainState, CheckSummary, FleetRow, TrailEntry } from "@wavekeep/api/contract";
import { lab } from "@wavekeep/api/demo/cast";
import { dateIn } from "@wavekeep/api/instruments/dates";
import { signIn, useBrowser } from "../support/browser.ts";

const browser = useBrowser();

async function asked<T>(who: string, path: string): Promise<T> {
  const page = await browser.open();
  await signIn(page, who);
  const reply = await page.request.get(`/api${path}`);
  expect(reply.status()).toBe(200);
  return (await reply.json()) as T;
}

test("nine instruments: one on hold, one near its limit, one overdue, one without a check, the others in tolerance", async () => {
  const { items } = await asked<{ items: FleetRow[] }>("lab manager", "/instruments");
  const story = items.filter((row) => row.retiredAt === null && row.checkedAt !== undefined);
  const of = (name: string) => story.find((row) => row.name === name)!;
  expect(
    ["Dunlin", "Whimbrel", "Redshank", "Turnstone", "Knot", "Sanderling", "Curlew", "Plover", "Godwit"].filter(
      (name) => of(name) === undefined,
    ),
  ).toEqual([]);
  expect(new Set(story.map((row) => row.kind))).toEqual(new Set(["array", "scanning", "spectrophotometer", "raman"]));
  expect(of("Redshank").dueDays).toBe(-3);
  expect(of("Plover")).toMatchObject({ state: "in-tolerance" });
  expect(of("Sanderling")).toMatchObject({
    state: "in-tolerance",
    worst: { species: expect.stringContaining("D") as string },
  });
});

test("Whimbrel failed yesterday and Dunlin waits for its review with an abandoned attempt and a line left out; all else passed", async () => {
  const { items } = await asked<{ items: CheckSummary[] }>("lab manager", "/checks?limit=200");
  // The story ends yesterday; what was begun today is other tests' work.
  const dayOf = (at: string | number) => dateIn(lab.zone, new Date(at));
  const told = items.filter(({ begunAt }) => dayOf(begunAt) < dayOf(Date.now()));
  expect(told.length).toBeGreaterThanOrEqual(99);
  expect(told.filter(({ result }) => result?.verdict === "fail").map((check) => check.instrumentName)).toEqual([
    "Whimbrel",
  ]);
  expect(
    told.filter(({ result }) => result?.verdict !== "pass" && result?.verdict !== "fail").map(({ number }) => number),
  ).toEqual([]);
  expect(told.filter(({ attemptCount }) => attemptCount > 1)).toMatchObject([
    { instrumentName: "Dunlin", result: { verdict: "pass", nearLimit: true, leftOutCount: 1 } },
  ]);
});

test("the chain of a year and a half holds, and every entry says that it is a demo's", async () => {
  const state = await asked<ChainState>("auditor", "/trail/state");
  expect(state).toMatchObject({ whole: true, signaturesValid: true, breaks: [] });
  expect(state.checkCount).toBeGreaterThanOrEqual(99);
  const { items } = await asked<{ items: TrailEntry[] }>("auditor", "/trail?limit=200");
  expect(items.every(({ demo }) => demo)).toBe(true);
});
