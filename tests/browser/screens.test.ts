/**
 * Every screen, as the people see it who use it: axe finds nothing, nothing scrolls sideways on a phone, the console is
 * quiet; in Paper, Ink and Dark room. Each is kept as a picture in screenshots/.
 */
import type { Page } from "playwright-core";
import type { CheckSummary } from "@wavekeep/api/contract";
import { beforeAll, expect, test } from "vitest";
import { accessFaults, signIn, sidewaysFault, takePicture, useBrowser } from "../support/browser.ts";
import { instrumentNamed, makeDraft, read, send, sourceLabelled } from "./support/api.ts";
import { demoCaptures } from "./support/demo-captures.ts";

interface Screen {
  name: string;
  path: string;
}

const browser = useBrowser();
const wide = { width: 1440, height: 900 };
const phone = { width: 375, height: 812 };
const otherThemes = ["Ink", "Dark room"] as const;
/** Kept as pictures in every theme; the others in Paper. */
const picturedInAll = ["today-manager", "instrument", "check-to-review", "draft", "records", "sign-in"];

let manager: Screen[] = [];
let technician: Screen[] = [];
let owner: Screen[] = [];
let auditor: Screen[] = [];

beforeAll(async () => {
  const page = await browser.open("/");
  await signIn(page, "Tam");
  const dunlin = await instrumentNamed(page, "Dunlin");
  const godwit = await instrumentNamed(page, "Godwit");
  const { items: checks } = await read<{ items: CheckSummary[] }>(page, "/checks?limit=100");
  const check = (instrument: string, state: CheckSummary["state"]) =>
    checks.find((one) => one.instrumentName === instrument && one.state === state)!.id;
  const { items: reviews } = await read<{ items: { id: string; instrumentName: string }[] }>(page, "/impact-reviews");
  const review = reviews.find(({ instrumentName }) => instrumentName === "Whimbrel")!.id;
  const source = await sourceLabelled(page, "HA-2");
  const draft = await makeDraft(page, "Knot", "HG-1", demoCaptures("Knot", 7));
  await page.context().close();

  const instrument = (tab: string) => `/instruments/${dunlin.id}${tab}`;
  manager = [
    { name: "today-manager", path: "/today" },
    { name: "instrument", path: instrument("") },
    { name: "check-to-review", path: `/checks/${check("Dunlin", "submitted")}` },
    { name: "instruments", path: "/instruments" },
    { name: "instrument-checks", path: instrument("/checks") },
    { name: "instrument-drift", path: instrument("/drift") },
    { name: "instrument-optics", path: instrument("/optics") },
    { name: "instrument-history", path: instrument("/history") },
    { name: "instrument-without-a-check", path: `/instruments/${godwit.id}` },
    { name: "instrument-tolerance-dialog", path: instrument("/optics?do=tolerance") },
    { name: "instrument-register", path: "/instruments/new" },
    { name: "instrument-edit", path: instrument("/edit") },
    { name: "check-on-hold", path: `/checks/${check("Whimbrel", "submitted")}` },
    { name: "checks", path: "/checks" },
    { name: "sources", path: "/sources" },
    { name: "source", path: `/sources/${source.id}` },
    { name: "line-library", path: "/sources/lines?element=Hg" },
    { name: "alerts", path: "/alerts?state=all" },
    { name: "records", path: "/records" },
    { name: "settings-people", path: "/settings/people" },
    { name: "settings-lab", path: "/settings/lab" },
    { name: "settings-account", path: "/settings/me" },
  ];
  technician = [
    { name: "today-technician", path: "/today" },
    { name: "new-check", path: `/checks/new?configuration=${godwit.configurationId}` },
    { name: "draft", path: `/checks/${draft.summary.id}/edit` },
    { name: "no-such-page", path: "/nowhere" },
  ];
  owner = [
    { name: "today-owner", path: "/today" },
    { name: "alerts-owner", path: "/alerts" },
    { name: "impact-review", path: `/impact/${review}` },
  ];
  auditor = [
    { name: "today-auditor", path: "/today" },
    { name: "records-auditor", path: `/records?instrument=${dunlin.id}` },
    { name: "check-approved", path: `/checks/${check("Knot", "approved")}` },
  ];
});

/** The data is there: no skeleton row, no sentence that waits. */
async function settled(page: Page): Promise<void> {
  // A dialog hides the page from readers, its heading too: looked for as an element.
  await page.locator("h1").first().waitFor();
  await page.waitForFunction(
    () =>
      document.querySelector('[role="status"][aria-label^="Loading"]') === null &&
      !/…$/.test(document.querySelector("h1")?.textContent ?? "…"),
  );
  await page.evaluate(() => document.fonts.ready.then(() => true));
}

async function chooseTheme(page: Page, theme: string): Promise<void> {
  await page.getByRole("button", { name: /^Theme: / }).click();
  await page.getByRole("menuitemradio", { name: theme, exact: true }).click();
}

/** One screen in three themes and on a phone. @returns what is wrong with it */
async function look(page: Page, name: string): Promise<string[]> {
  const faults: string[] = [];
  const note = (where: string, found: readonly string[]) =>
    faults.push(...found.map((one) => `${name}, ${where}: ${one}`));
  await settled(page);
  note("Paper", await accessFaults(page));
  await takePicture(page, `${name}-1440`);
  const isOpen = (await page.getByRole("dialog").count()) > 0;
  if (!isOpen) {
    for (const theme of otherThemes) {
      await chooseTheme(page, theme);
      // Themes change colours alone: what axe says about colour is asked again.
      note(theme, await accessFaults(page, ["color-contrast", "link-in-text-block"]));
      if (picturedInAll.includes(name))
        await takePicture(page, `${name}-1440-${theme.toLowerCase().replace(" ", "-")}`);
    }
    await chooseTheme(page, "Paper");
  }
  await page.setViewportSize(phone);
  await settled(page);
  note("375", await accessFaults(page));
  const sideways = await sidewaysFault(page);
  if (sideways !== null) note("375", [sideways]);
  await takePicture(page, `${name}-375`);
  await page.setViewportSize(wide);
  return faults;
}

async function walk(who: string, screens: readonly Screen[]): Promise<string[]> {
  const page = await browser.open("/", wide);
  await page.emulateMedia({ reducedMotion: "reduce" });
  page.setDefaultTimeout(20_000);
  await signIn(page, who);
  const faults: string[] = [];
  for (const { name, path } of screens) {
    await page.goto(path);
    faults.push(...(await look(page, name)));
  }
  return faults;
}

/** Doors: before anybody is signed in, and on a shared PC. */
async function walkDoors(): Promise<string[]> {
  const page = await browser.open("/", wide);
  await page.emulateMedia({ reducedMotion: "reduce" });
  page.setDefaultTimeout(20_000);
  const faults = await look(page, "sign-in");
  await page.goto("/forgotten");
  faults.push(...(await look(page, "forgotten-password")));
  await page.goto("/");
  await signIn(page, "Ida");
  await send(page, "post", "/bench/devices", { name: "Raman room" });
  const { benchDevices } = await read<{ benchDevices: { id: string; name: string }[] }>(page, "/people");
  await send(page, "delete", "/session");
  await page.goto("/");
  await page.getByRole("heading", { level: 1, name: "Who is at the bench?" }).waitFor();
  faults.push(...(await look(page, "bench-sign-in")));
  await page.getByRole("button", { name: "Sign in with e-mail and password" }).click();
  await signIn(page, "Ida");
  for (const { id } of benchDevices) await send(page, "delete", `/bench/devices/${id}`);
  return faults;
}

test("a manager's screens", { timeout: 300_000 }, async () => {
  const half = Math.ceil(manager.length / 2);
  const faults = await Promise.all([walk("Ida", manager.slice(0, half)), walk("Ida", manager.slice(half))]);
  expect(faults.flat()).toEqual([]);
});

test("screens of a technician, an owner and an auditor, and the doors", { timeout: 300_000 }, async () => {
  const first = walk("Tam", technician).then(async (faults) => [...faults, ...(await walk("Nell", owner))]);
  const second = walkDoors().then(async (faults) => [...faults, ...(await walk("Odd", auditor))]);
  expect((await Promise.all([first, second])).flat()).toEqual([]);
});
