/** What people do in the browser, by the words that they read. */
import fs from "node:fs";
import path from "node:path";
import type { Page } from "playwright-core";
import { expect, inject } from "vitest";

export const password = "bench-book-2027";

export interface CaptureFile {
  name: string;
  bytes: Buffer;
}

const captures = path.resolve(import.meta.dirname, "../../fixtures/captures");

/** Neon on one Raman bench, recorded on several dates: see fixtures/captures/README.md. */
export const neonCapture = (date: string): CaptureFile => ({
  name: `${date}.csv`,
  bytes: fs.readFileSync(path.join(captures, "neon-series", `${date}.csv`)),
});

/** Hand files to the chooser behind *Add files*. */
export async function addFiles(page: Page, files: readonly CaptureFile[]): Promise<void> {
  await page
    .getByLabel("Captures to add")
    .setInputFiles(files.map(({ name, bytes }) => ({ name, mimeType: "text/plain", buffer: bytes })));
}

/** From wherever the person is to the draft of a new check; @returns its number, e.g. `CHK-2027-0042`. */
export async function beginCheck(page: Page, instrument: string, condition?: "as left"): Promise<string> {
  await page.getByRole("link", { name: "Instruments", exact: true }).click();
  await page.getByRole("table").getByRole("link", { name: instrument, exact: true }).click();
  await page.getByRole("link", { name: "Start a check" }).first().click();
  if (condition !== undefined) await page.getByLabel("Condition").selectOption("as-left");
  await page.getByRole("button", { name: "Begin the check" }).click();
  await page.getByRole("heading", { level: 1, name: `New check of ${instrument}` }).waitFor();
  await page.waitForURL(/\/checks\/[0-9a-f-]+\/edit/);
  return (await page
    .getByText(/^CHK-\d{4}-\d{4,}$/)
    .first()
    .textContent())!;
}

/** Source and conditions of the draft on the page. A later check begins with the sources of the one before. */
export async function stateConditions(page: Page, source: string): Promise<void> {
  const conditions = page.getByRole("region", { name: "Source and conditions" });
  const remove = conditions.getByRole("button", { name: `Remove source ${source}` });
  const choice = conditions.getByLabel(/source$/i).last();
  await remove
    .or(choice.getByRole("option", { name: new RegExp(`^${source},`) }))
    .first()
    .waitFor({ state: "attached" });
  if ((await remove.count()) === 0) {
    const label = await choice.getByRole("option", { name: new RegExp(`^${source},`) }).textContent();
    await choice.selectOption({ label: label! });
    await remove.waitFor();
  }
  await conditions.getByLabel("Since lamp was switched on").fill("25");
  await conditions.getByLabel("Room temperature").fill("21,4");
  await page.getByText(/kept as you type: on this device and on the server, /).waitFor();
}

/** Sign what the draft on the page says; the check itself opens. */
export async function submitCheck(page: Page): Promise<void> {
  await page.getByRole("button", { name: "Sign and submit" }).click();
  const dialog = page.getByRole("dialog");
  await dialog.getByLabel("Your password").fill(password);
  await dialog.getByRole("button", { name: "Sign and submit" }).click();
  await page.waitForURL(/\/checks\/[0-9a-f-]+$/);
  await page.getByText("Awaiting approval").waitFor();
}

/** Open a check from the list by its number. */
export async function openCheck(page: Page, number: string): Promise<void> {
  await page.getByRole("link", { name: "Checks", exact: true }).click();
  await page.getByRole("link", { name: number, exact: true }).first().click();
  await page.getByRole("heading", { level: 3, name: "Signatures" }).waitFor();
}

/** See the four things, then sign as the reviewer. */
export async function approveCheck(page: Page): Promise<void> {
  const approve = page.getByRole("button", { name: "Approve and sign" });
  const things = page.getByRole("group", { name: /Tick each when you have seen it/ }).getByRole("checkbox");
  expect(await things.count()).toBe(4);
  for (const thing of await things.all()) {
    expect(await approve.isDisabled()).toBe(true);
    await thing.check();
  }
  await approve.click();
  const dialog = page.getByRole("dialog");
  await dialog.getByLabel("Your password").fill(password);
  await dialog.getByRole("button", { name: "Approve and sign" }).click();
  await page.getByText("Meaning: reviewed and approved.").waitFor();
}

export async function signOut(page: Page): Promise<void> {
  await page.getByRole("banner").getByRole("button", { name: /, / }).click();
  await page.getByRole("menuitem", { name: "Sign out", exact: true }).click();
  await page.getByLabel("E-mail").waitFor();
}

export interface Mail {
  to: string;
  subject: string;
  text: string;
}

/** Mail to an address that holds the words, as soon as it has arrived. */
export async function mailTo(address: string, words: string): Promise<Mail> {
  let found: Mail | undefined;
  await expect
    .poll(
      async () => {
        const reply = await fetch(`${inject("wavekeep").address}/dev/mail?json`);
        const { mails } = (await reply.json()) as { mails: Mail[] };
        found = mails.find((mail) => mail.to.includes(address) && mail.text.includes(words));
        return found;
      },
      { timeout: 20_000, message: `mail to ${address} about "${words}"` },
    )
    .toBeDefined();
  return found!;
}
