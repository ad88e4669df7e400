/**
 * The main job in a browser, on neon captures of one Raman bench. Between 29 August and 3 September 2024 the bench stood
 * still within 0.02 nm; on 17 September it read 0.56 nm long (tests/fixtures/captures).
 */
import { createHash } from "node:crypto";
import fs from "node:fs";
import { expect, test } from "vitest";
import { pdfPages } from "../support/pdf-text.ts";
import { signIn, useBrowser } from "../support/browser.ts";
import {
  addFiles,
  approveCheck,
  beginCheck,
  mailTo,
  neonCapture,
  openCheck,
  stateConditions,
  submitCheck,
} from "./support/steps.ts";

const browser = useBrowser();
const numbers: { first: string; second: string; failed: string } = { first: "", second: "", failed: "" };

/** What stands between 4 and 4 of the first hexadecimal digits differs by font, never the digits. */
const shortHash = (bytes: Buffer) => {
  const hash = createHash("sha256").update(bytes).digest("hex");
  return new RegExp(`${hash.slice(0, 4)}.${hash.slice(4, 8)}`);
};

async function open(who: string) {
  const page = await browser.open("/");
  page.setDefaultTimeout(15_000);
  await signIn(page, who);
  return page;
}

test("a manager registers the bench", async () => {
  const page = await open("Ida");
  await page.getByRole("link", { name: "Instruments", exact: true }).click();
  await page.getByRole("link", { name: "Register an instrument" }).click();
  const field = (name: string) => page.getByLabel(name, { exact: true });
  await page.getByRole("button", { name: "Register the instrument" }).click();
  expect(await page.getByText("Fill this in.").count()).toBeGreaterThan(3);
  await field("Name").fill("Ruff");
  await field("Kind").selectOption("raman");
  await field("Owner").selectOption({ label: "Oto Shim" });
  await field("Range from").fill("545");
  await field("Range to").fill("658");
  await field("Its files count").selectOption("pixel");
  await field("Nominal resolution, FWHM").fill("0,5");
  await page.getByText("Read as 0.5").waitFor();
  await field("Laser").fill("532");
  await field("From").fill("540");
  await field("To").fill("660");
  await field("Tolerance ±").fill("0.3");
  await page.getByRole("button", { name: "Register the instrument" }).click();
  await page.getByRole("heading", { level: 1, name: "Ruff" }).waitFor();
});

test("a technician's first check: the receipt with its SHA-256 stands before any verdict", async () => {
  const page = await open("Tam");
  await page.getByRole("heading", { level: 2, name: "For you" }).waitFor();
  numbers.first = await beginCheck(page, "Ruff");
  await stateConditions(page, "NE-1");
  await page
    .getByText(/Ultraviolet|High voltage|eyes/i)
    .first()
    .waitFor();
  expect(await page.getByLabel("Lines are named by").inputValue()).toBe("range");

  // The server's analysis is held back: what stands then is the receipt, and no verdict.
  let release = () => {};
  const held = new Promise<void>((resolve) => (release = resolve));
  await page.route("**/api/checks/*/analyses", async (route) => {
    await held;
    await route.continue();
  });
  const capture = neonCapture("2024-08-29");
  await addFiles(page, [capture]);
  const result = page.getByRole("region", { name: "Result so far" });
  await result.getByText("Received", { exact: true }).waitFor();
  expect(await result.getByText(/^SHA-256/).textContent()).toMatch(shortHash(capture.bytes));
  await result.getByText("Being analysed…").waitFor();
  expect(await result.getByText(/tolerance:|lines named/).count()).toBe(0);
  expect(await page.getByRole("button", { name: "Sign and submit" }).isDisabled()).toBe(true);
  release();
  await result.getByText(/lines named\./).waitFor();
  // No axis was in force: nothing can be judged, an axis is fitted.
  await page
    .getByRole("heading", { name: /Dispersion/ })
    .first()
    .waitFor();
  await submitCheck(page);
  expect(await page.getByText("Tam Ferrule").first().isVisible()).toBe(true);
  expect(await page.getByRole("button", { name: "Approve and sign" }).count()).toBe(0);
});

test("a manager sees the four things, signs, and the axis is in force", async () => {
  const page = await open("Ida");
  await openCheck(page, numbers.first);
  await approveCheck(page);
  await page.getByRole("link", { name: "Ruff", exact: true }).first().click();
  await page.getByRole("link", { name: "Optics and tolerance" }).click();
  await page
    .getByText(/λ\(p\)\/nm/)
    .first()
    .waitFor();
});

test("in tolerance: a line left out for what is seen, with the verdict of every line beside", async () => {
  const page = await open("Tam");
  numbers.second = await beginCheck(page, "Ruff");
  await stateConditions(page, "NE-1");
  await addFiles(page, [neonCapture("2024-09-03")]);
  const result = page.getByRole("region", { name: "Result so far" });
  await result.getByText(/In tolerance as it stands: the worst of \d+ lines/).waitFor();

  // Two lines stand here, closer than the bench parts them.
  const lines = page.getByRole("table", { name: "Lines", exact: true });
  await lines.getByRole("row").filter({ hasText: "597.5534" }).click();
  await page.getByRole("button", { name: /^Leave Ne 597\.553 out/ }).click();
  const dialog = page.getByRole("dialog");
  await dialog.getByLabel("What is seen").selectOption("too-weak");
  await dialog.getByLabel("Where it is seen").fill("It does not please me.");
  await dialog.getByRole("button", { name: "Leave it out" }).click();
  await dialog
    .getByText(/never for its error/)
    .nth(1)
    .waitFor();
  expect(await dialog.getByLabel("Where it is seen").inputValue()).toBe("It does not please me.");
  await dialog.getByLabel("What is seen").selectOption("blended");
  await dialog.getByLabel("Where it is seen").fill("A weaker line stands in its blue wing.");
  await dialog.getByRole("button", { name: "Leave it out" }).click();
  await dialog.waitFor({ state: "detached" });
  await result.getByText("With every line").waitFor();
  await result.getByText("1 blended").waitFor();
  await page.getByText("A weaker line stands in its blue wing.").first().waitFor();
  await submitCheck(page);
  await page.getByText("With every line").waitFor();
  await page.getByText("1 blended").first().waitFor();
});

test("approved: the report is a PDF with every line, and the drift page has the point", async () => {
  const page = await open("Ida");
  await openCheck(page, numbers.second);
  await approveCheck(page);
  const link = page.getByRole("link", { name: /^Report REP-.*PDF$/ });
  const download = page.waitForEvent("download");
  await link.click();
  const bytes = fs.readFileSync((await (await download).path())!);
  expect(bytes.subarray(0, 5).toString("latin1")).toBe("%PDF-");
  const text = pdfPages(bytes).join("\n").replace(/\s/g, "");
  for (const words of [numbers.second, "Ruff", "TamFerrule", "IdaVernier", "640.2248", "597.5534"])
    expect(text).toContain(words);

  await page.getByRole("link", { name: "Ruff", exact: true }).first().click();
  await page.getByRole("link", { name: "Drift", exact: true }).click();
  const drift = page.getByRole("region", { name: "Drift" });
  await drift.getByRole("button", { name: "Table" }).click();
  await drift.getByRole("row", { name: new RegExp(numbers.second) }).waitFor();
});

test("an auditor reads all of it and has nothing to press that changes anything", async () => {
  const page = await open("Odd");
  const changes =
    /^(start|begin|go on|take|approve|sign|send|submit|register|edit|change|retire|log|acknowledge|lift|confirm|record|set|leave|bring|invite|enrol|keep|add)/i;
  const nothingToChange = async () => {
    const main = page.getByRole("main");
    const names = [
      ...(await main.getByRole("button").allTextContents()),
      ...(await main.getByRole("link").allTextContents()),
      ...(await main.getByRole("textbox").allTextContents()),
    ];
    expect(
      names.filter((name) => changes.test(name.trim())),
      page.url(),
    ).toEqual([]);
  };
  await nothingToChange();
  await openCheck(page, numbers.second);
  await nothingToChange();
  await page.getByRole("link", { name: "Ruff", exact: true }).first().click();
  await page.getByRole("link", { name: "Drift", exact: true }).waitFor();
  await nothingToChange();
  await page.getByRole("link", { name: "Optics and tolerance" }).click();
  await page.getByRole("heading", { name: "Standing" }).waitFor();
  await nothingToChange();

  await page.getByRole("link", { name: "Records", exact: true }).click();
  await page.getByRole("heading", { level: 1, name: /chain|whole|holds/i }).waitFor();
  await page.getByLabel("Instrument", { exact: true }).selectOption({ label: "Ruff" });
  for (const words of [
    /Ida Vernier.*registered Ruff/,
    new RegExp(`Tam Ferrule.*brought in 1 capture for ${numbers.second}.*stored byte for byte`),
    new RegExp(`left out Ne I 597\\.5534\\d*.nm in ${numbers.second}, blended: “A weaker line`),
    new RegExp(`Tam Ferrule.*signed ${numbers.second} “made by” and submitted it`),
    new RegExp(`Ida Vernier.*signed ${numbers.second} “reviewed and approved”.*locked`),
  ]) {
    await page.getByRole("main").getByText(words).first().waitFor();
  }
  await nothingToChange();
});

test("a failing check puts the instrument on hold, mails its owner and opens an impact review", async () => {
  const page = await open("Tam");
  numbers.failed = await beginCheck(page, "Ruff");
  await stateConditions(page, "NE-1");
  await addFiles(page, [neonCapture("2024-09-17")]);
  await page.getByText(/Out of tolerance as it stands: the worst of \d+ lines/).waitFor();
  await page.getByRole("button", { name: "Sign and submit" }).click();
  await page
    .getByRole("dialog")
    .getByText(/put on hold as you submit/)
    .waitFor();
  await page.getByRole("dialog").getByRole("button", { name: "Cancel" }).click();
  await submitCheck(page);
  await page.getByText(/Ruff is on hold since/).waitFor();
  const address = page.url();
  await page.getByRole("link", { name: "Ruff", exact: true }).first().click();
  await page.getByText("on hold", { exact: true }).first().waitFor();

  const mail = await mailTo("oto.shim@larkmere.example", address);
  expect(mail.subject).toContain("Ruff");
  expect(mail.text).toMatch(/reads \+0\.5\d+.±.0\.\d+.nm where 0\.30.nm is allowed/);
  expect(mail.text).toContain("on hold");
  await page.goto("/dev/mail");
  await page.getByRole("heading", { name: mail.subject }).first().waitFor();
});

test("a manager confirms the hold, then lifts it with a reason", async () => {
  const page = await open("Ida");
  await page.getByRole("link", { name: "Instruments", exact: true }).click();
  await page.getByRole("table").getByRole("link", { name: "Ruff", exact: true }).click();
  await page.getByRole("button", { name: "Confirm or lift the hold" }).click();
  const dialog = page.getByRole("dialog");
  await dialog.getByRole("button", { name: "Confirm" }).click();
  await dialog.getByText("Write a reason, at least a few words.").waitFor();
  await dialog.getByLabel("Decision").selectOption("out-of-service");
  await dialog.getByLabel("Reason").fill("0.56 nm long at every line.");
  await dialog.getByRole("button", { name: "Confirm" }).click();
  await dialog.waitFor({ state: "detached" });
  await page.getByText("out of service", { exact: true }).first().waitFor();

  await page.getByRole("link", { name: "Optics and tolerance" }).click();
  await page.getByRole("button", { name: "Change the standing" }).click();
  await dialog.getByLabel("Decision").selectOption("in-service");
  await dialog.getByLabel("Reason").fill("The fibre was found loose and is seated again; seen by two.");
  await dialog.getByRole("button", { name: "Change" }).click();
  await dialog.waitFor({ state: "detached" });
  await page.getByText(/^In service since/).waitFor();
});

test("the owner decides the impact review", async () => {
  const page = await open("Oto");
  await page
    .getByRole("link", { name: /^Alerts/ })
    .first()
    .click();
  await page.getByRole("listitem").filter({ hasText: "Ruff" }).getByRole("link", { name: /^IR-/ }).first().click();
  await page.getByText(numbers.second).waitFor();
  await page.getByText(numbers.failed).first().waitFor();
  await page.getByLabel("Results").selectOption("some");
  await page.getByLabel("Work it concerns").fill("S-0412\nS-0413");
  await page.getByRole("button", { name: "Record the decision" }).click();
  await page.getByText("Write a reason, at least a few words.").waitFor();
  await page.getByLabel("What is done, and why").fill("Both samples are measured again.");
  await page.getByRole("button", { name: "Record the decision" }).click();
  await page.getByRole("heading", { level: 1, name: /Some results are affected/ }).waitFor();
  await page.getByText("Both samples are measured again.").waitFor();
});
