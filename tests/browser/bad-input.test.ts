/** What goes wrong at a bench: each is said in a plain sentence, and nothing that was typed is lost. */
import type { Page } from "playwright-core";
import type { Check } from "@wavekeep/api/contract/checks";
import { expect, test } from "vitest";
import { signIn, useBrowser } from "../support/browser.ts";
import { instrumentNamed, makeDraft, read, submitDraft } from "./support/api.ts";
import { demoCaptures } from "./support/demo-captures.ts";
import { addFiles, password, stateConditions } from "./support/steps.ts";

const browser = useBrowser();

async function open(who: string, path = "/"): Promise<Page> {
  const page = await browser.open("/");
  page.setDefaultTimeout(15_000);
  await signIn(page, who);
  if (path !== "/") await page.goto(path);
  return page;
}

test("files that are no captures: each has its receipt or its reason, and the form keeps what was typed", async () => {
  const page = await open("Tam");
  const { configurationId } = await instrumentNamed(page, "Plover");
  await page.goto(`/checks/new?configuration=${configurationId}`);
  await page.getByRole("button", { name: "Begin the check" }).click();
  await page.getByRole("heading", { level: 1, name: "New check of Plover" }).waitFor();
  await stateConditions(page, "HA-2");
  await page.getByLabel("Note").fill("Blinds down, lamp at 30 mm.");
  await page.getByText(/kept as you type: on this device and on the server, /).waitFor();

  const files = page.getByRole("region", { name: "Files" });
  const bytes = (text: string) => Buffer.from(text, "utf8");
  await addFiles(page, [
    { name: "notes.txt", bytes: bytes("Monday: the lamp was left on.\nTuesday: nothing to tell.\n") },
    { name: "empty.csv", bytes: bytes("") },
    {
      name: "picture.csv",
      bytes: Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 13, 0, 255]),
    },
  ]);
  // Stored first, then read: each has its receipt, and what cannot be read says why.
  const stored = files.getByRole("table", { name: "Files of attempt 1" });
  for (const name of ["notes.txt", "empty.csv", "picture.csv"]) {
    await stored.getByRole("row").filter({ hasText: name }).filter({ hasText: "not read" }).waitFor();
  }
  await stored.getByText("The file holds text in one column and no numbers.").waitFor();
  await stored.getByText("The file is empty: it holds no bytes.").waitFor();
  await stored.getByText("The file is a picture.").waitFor();
  expect(await page.getByLabel("Room temperature").inputValue()).toMatch(/^21[.,]4$/);
  expect(await page.getByLabel("Note").inputValue()).toBe("Blinds down, lamp at 30 mm.");
  expect(await page.getByText(/in tolerance as it stands/i).count()).toBe(0);
  await page.reload();
  await page.getByLabel("Note").waitFor();
  expect(await page.getByLabel("Note").inputValue()).toBe("Blinds down, lamp at 30 mm.");
  await stored.getByRole("row").filter({ hasText: "picture.csv" }).waitFor();

  // Good captures go on beside the bad ones.
  await page.getByRole("button", { name: "Begin a new attempt" }).click();
  await page.getByLabel("Why it is repeated").fill("The wrong files were dropped.");
  await page.getByRole("button", { name: "Begin attempt 2" }).click();
  await page.getByRole("dialog").waitFor({ state: "detached" });
  await addFiles(page, demoCaptures("Plover", 3));
  await page.getByText(/In tolerance as it stands/).waitFor({ timeout: 30_000 });
});

test("more than 50 MB is refused before it is sent", async () => {
  const page = await open("Tam");
  const { configurationId } = await instrumentNamed(page, "Sanderling");
  await page.goto(`/checks/new?configuration=${configurationId}`);
  await page.getByRole("button", { name: "Begin the check" }).click();
  await page.getByRole("heading", { level: 1, name: "New check of Sanderling" }).waitFor();
  const sent: string[] = [];
  page.on("request", (request) => request.url().endsWith("/captures") && sent.push(request.url()));
  // A file of 60 MB is made in the page: the wire of the test carries no more than 50 MB.
  await page.getByLabel("Captures to add").evaluate((input: HTMLInputElement) => {
    const transfer = new DataTransfer();
    transfer.items.add(new File([new Uint8Array(60_000_000)], "long-night.csv", { type: "text/csv" }));
    input.files = transfer.files;
    input.dispatchEvent(new Event("change", { bubbles: true }));
  });
  await page.getByText(/long-night\.csv has 60\.MB|long-night\.csv has 60.0.MB/).waitFor();
  await page.getByText(/files up to 50 MB are taken/).waitFor();
  await page.getByRole("button", { name: "Put long-night.csv away" }).click();
  expect(sent).toEqual([]);
});

test("two windows on one draft: the later one is told, and chooses", async () => {
  const first = await open("Tam");
  const draft = await makeDraft(first, "Knot", "HG-1", demoCaptures("Knot", 11));
  const address = `/checks/${draft.summary.id}/edit`;
  await first.goto(address);
  await first.getByLabel("Note").waitFor();
  const second = await first.context().newPage();
  second.setDefaultTimeout(15_000);
  await second.goto(address);
  await second.getByLabel("Note").waitFor();

  await first.getByLabel("Note").fill("From the first window.");
  await first.getByText(/on this device and on the server, /).waitFor();
  await second.getByLabel("Room temperature").fill("22.9");
  const told = second.getByRole("alert");
  await told.waitFor();
  expect((await told.textContent())!.length).toBeGreaterThan(40);
  expect(await second.getByLabel("Room temperature").inputValue()).toBe("22.9");
  await second.getByRole("button", { name: "Keep what I typed" }).click();
  await told.waitFor({ state: "detached" });
  await expect
    .poll(async () => (await read<Check>(first, `/checks/${draft.summary.id}`)).draft.temperatureC)
    .toBe(22.9);
});

test("two people edit one instrument: the second is told, nothing typed is lost", async () => {
  const ida = await open("Ida");
  const { id } = await instrumentNamed(ida, "Sanderling");
  const other = await ida.context().newPage();
  other.setDefaultTimeout(15_000);
  for (const page of [ida, other]) {
    await page.goto(`/instruments/${id}/edit`);
    await page.getByLabel("Place", { exact: true }).waitFor();
  }
  const save = (page: Page) => page.getByRole("main").locator('button[type="submit"]').click();
  await ida.getByLabel("Place", { exact: true }).fill("Wet bench, left");
  await save(ida);
  await ida.getByRole("heading", { level: 1, name: "Sanderling", exact: true }).waitFor();
  await other.getByLabel("Place", { exact: true }).fill("Wet bench, right");
  await save(other);
  await other.getByRole("alert").waitFor();
  expect(await other.getByLabel("Place", { exact: true }).inputValue()).toBe("Wet bench, right");
  // What stands now is asked for before it is written over.
  await other.waitForLoadState("networkidle");
  await other.getByRole("button", { name: "Keep what I typed" }).click();
  await save(other);
  await other.getByRole("heading", { level: 1, name: "Sanderling", exact: true }).waitFor();
  await other
    .getByText(/Wet bench, right/)
    .first()
    .waitFor();
});

test("a double click on approve gives one signature; a second window is told in a sentence", async () => {
  const tam = await open("Tam");
  const submitted = await submitDraft(tam, await makeDraft(tam, "Curlew", "NE-1", demoCaptures("Curlew", 5)));
  await tam.context().close();

  const ida = await open("Ida", `/checks/${submitted.summary.id}`);
  const late = await ida.context().newPage();
  late.setDefaultTimeout(15_000);
  await late.goto(`/checks/${submitted.summary.id}`);
  const readyToSign = async (page: Page) => {
    for (const box of await page
      .getByRole("group", { name: /Tick each/ })
      .getByRole("checkbox")
      .all())
      await box.check();
    await page.getByRole("button", { name: "Approve and sign" }).click();
    await page.getByRole("dialog").getByLabel("Your password").fill(password);
  };
  await late.getByRole("heading", { level: 3, name: "Signatures" }).waitFor();
  await readyToSign(late);
  await ida.getByRole("heading", { level: 3, name: "Signatures" }).waitFor();
  await readyToSign(ida);
  const sign = ida.getByRole("dialog").getByRole("button", { name: "Approve and sign" });
  await sign.dblclick();
  await ida.getByText("Meaning: reviewed and approved.").waitFor();
  expect(await ida.getByRole("alert").count()).toBe(0);

  await late.getByRole("dialog").getByRole("button", { name: "Approve and sign" }).click();
  const told = late.getByRole("alert");
  await told.waitFor();
  expect(await told.textContent()).toMatch(/approved already|a moment ago/);
  const { signatures } = await read<Check>(ida, `/checks/${submitted.summary.id}`);
  expect(signatures.map(({ meaning }) => meaning)).toEqual(["made by", "reviewed and approved"]);
});

test("a wrong password signs nothing and can be typed again", async () => {
  const tam = await open("Tam");
  const submitted = await submitDraft(tam, await makeDraft(tam, "Curlew", "NE-1", demoCaptures("Curlew", 6)));
  await tam.context().close();
  const ida = await open("Ida", `/checks/${submitted.summary.id}`);
  await ida.getByRole("heading", { level: 3, name: "Signatures" }).waitFor();
  for (const box of await ida
    .getByRole("group", { name: /Tick each/ })
    .getByRole("checkbox")
    .all())
    await box.check();
  await ida.getByRole("button", { name: "Approve and sign" }).click();
  const dialog = ida.getByRole("dialog");
  await dialog.getByLabel("Your password").fill("bench-book-2028");
  await dialog.getByRole("button", { name: "Approve and sign" }).click();
  await dialog.getByRole("alert").waitFor();
  expect(await dialog.getByLabel("Your password").inputValue()).toBe("bench-book-2028");
  await dialog.getByRole("button", { name: "Cancel" }).click();
  // What was ticked stays ticked.
  await ida.getByRole("button", { name: "Approve and sign" }).click();
  await dialog.getByLabel("Your password").fill(password);
  await dialog.getByRole("button", { name: "Approve and sign" }).click();
  await ida.getByText("Meaning: reviewed and approved.").waitFor();
});
