/** The main job by the keyboard alone: Tab, Enter, Space, arrows. No pointer is used on these pages. */
import type { Page } from "playwright-core";
import { expect, inject, test } from "vitest";
import { useBrowser } from "../support/browser.ts";
import { demoCaptures } from "./support/demo-captures.ts";
import { pressOn, tabTo, typeInto } from "./support/keyboard.ts";
import { password } from "./support/steps.ts";

const browser = useBrowser();

async function signInByKeys(who: string): Promise<Page> {
  const page = await browser.open("/");
  page.setDefaultTimeout(15_000);
  const person = inject("wavekeep").signIns.find(({ name }) => name === who)!;
  await typeInto(page, page.getByLabel("E-mail"), person.email);
  await typeInto(page, page.getByLabel("Password", { exact: true }), person.password);
  await page.keyboard.press("Enter");
  await page.getByRole("heading", { level: 2, name: "For you" }).waitFor();
  return page;
}

async function signOutByKeys(page: Page, who: string): Promise<void> {
  await pressOn(page, page.getByRole("button", { name: who }));
  const item = page.getByRole("menuitem", { name: "Sign out", exact: true });
  for (let step = 0; step < 6; step += 1) {
    if (await item.evaluate((element) => element === document.activeElement)) break;
    await page.keyboard.press("ArrowDown");
  }
  await page.keyboard.press("Enter");
  await page.getByLabel("E-mail").waitFor();
}

let number = "";

test("a technician makes a check and signs it", async () => {
  const page = await signInByKeys("Alix Dowel");
  await tabTo(page, page.getByRole("link", { name: "To the page" }));
  await pressOn(page, page.getByRole("navigation", { name: "Pages" }).getByRole("link", { name: "Instruments" }));
  await pressOn(page, page.getByRole("table").getByRole("link", { name: "Godwit", exact: true }));
  await page.getByRole("heading", { level: 1, name: "Godwit" }).waitFor();
  await pressOn(page, page.getByRole("link", { name: "Start a check" }).first());
  await pressOn(page, page.getByRole("button", { name: "Begin the check" }));
  await page.getByRole("heading", { level: 1, name: "New check of Godwit" }).waitFor();
  number = (await page
    .getByText(/^CHK-\d{4}-\d{4,}$/)
    .first()
    .textContent())!;

  // The system's own list: open it, go down, choose.
  const source = page.getByLabel("Source", { exact: true });
  await source.getByRole("option", { name: /^HA-2,/ }).waitFor({ state: "attached" });
  await tabTo(page, source);
  await page.keyboard.press("Space");
  await page.keyboard.type("HA-2");
  await page.keyboard.press("Enter");
  await page.getByRole("button", { name: "Remove source HA-2" }).waitFor();
  expect(await page.getByRole("button", { name: /^Remove source/ }).count()).toBe(1);
  await typeInto(page, page.getByLabel("Since lamp was switched on"), "30");
  await typeInto(page, page.getByLabel("Room temperature"), "21.6");
  const chooser = page.waitForEvent("filechooser");
  await tabTo(page, page.getByRole("button", { name: "Add files" }));
  await page.keyboard.press("Enter");
  await (
    await chooser
  ).setFiles(demoCaptures("Godwit", 1).map(({ name, bytes }) => ({ name, mimeType: "text/csv", buffer: bytes })));
  await page.getByText(/In tolerance as it stands/).waitFor({ timeout: 30_000 });

  // From line to line in the drawing, by its arrows.
  const drawing = page.getByRole("region", { name: "Result so far" }).getByRole("group").first();
  await tabTo(page, drawing);
  await page.keyboard.press("ArrowRight");
  await page.keyboard.press("ArrowRight");
  await expect.poll(() => drawing.locator("[aria-live]").textContent()).toMatch(/nm/);

  await tabTo(page, page.getByRole("button", { name: "Sign and submit" }), "Shift+Tab");
  await page.keyboard.press("Enter");
  const dialog = page.getByRole("dialog");
  await typeInto(page, dialog.getByLabel("Your password"), password);
  await page.keyboard.press("Enter");
  await page.getByText("Awaiting approval").waitFor();
  await signOutByKeys(page, "Alix Dowel");
});

test("a manager sees the four things and signs", async () => {
  const page = await signInByKeys("Ida Vernier");
  await pressOn(page, page.getByRole("navigation", { name: "Pages" }).getByRole("link", { name: "Checks" }));
  await pressOn(page, page.getByRole("link", { name: number, exact: true }).first());
  await page.getByRole("heading", { level: 3, name: "Signatures" }).waitFor();
  const things = page.getByRole("group", { name: /Tick each when you have seen it/ }).getByRole("checkbox");
  for (const thing of await things.all()) await pressOn(page, thing, "Space");
  await pressOn(page, page.getByRole("button", { name: "Approve and sign" }));
  const dialog = page.getByRole("dialog");
  // Esc gives the focus back to the button that opened it.
  await dialog.getByLabel("Your password").waitFor();
  await page.keyboard.press("Escape");
  await dialog.waitFor({ state: "detached" });
  await expect.poll(() => page.evaluate(() => document.activeElement?.textContent)).toBe("Approve and sign");
  await page.keyboard.press("Enter");
  await typeInto(page, dialog.getByLabel("Your password"), password);
  await page.keyboard.press("Enter");
  await page.getByText("Meaning: reviewed and approved.").waitFor();
  await signOutByKeys(page, "Ida Vernier");
});
