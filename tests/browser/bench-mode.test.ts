/** A shared PC at the bench: enrolled by a manager, then people come and go by name and PIN. */
import { expect, test } from "vitest";
import { signIn, useBrowser } from "../support/browser.ts";
import { password } from "./support/steps.ts";

const browser = useBrowser();
const pin = "73915";

test("enrolled, a name and a PIN open it, and it locks", async () => {
  const page = await browser.open("/");
  page.setDefaultTimeout(15_000);

  // Alix sets a PIN of her own first: without one her name is not offered.
  await signIn(page, "Alix");
  await page.goto("/settings/me");
  const form = page.getByRole("region", { name: "PIN" });
  await form.getByLabel("Present password").fill("not this one");
  await form.getByLabel("New PIN").fill(pin);
  await form.getByRole("button", { name: /^(Set|Change) (a|the) PIN$/ }).click();
  await form.getByRole("alert").first().waitFor();
  expect(await form.getByLabel("New PIN").inputValue()).toBe(pin);
  await form.getByLabel("Present password").fill(password);
  await form.getByRole("button", { name: /^(Set|Change) (a|the) PIN$/ }).click();
  await form.getByText("Kept.").waitFor();
  await signOutTo(page);

  await signIn(page, "Ida");
  await page.goto("/settings/people");
  await page.getByRole("button", { name: "Enrol this PC" }).click();
  await page.getByLabel("Name of this PC").fill("Optics room");
  await page.getByRole("button", { name: "Enrol this PC" }).click();
  await page.getByRole("table", { name: "Shared PCs" }).getByText("Optics room").first().waitFor();
  await signOutTo(page);

  await page.getByRole("heading", { level: 1, name: "Who is at the bench?" }).waitFor();
  const people = page.getByRole("list", { name: "People of this lab" });
  await people.getByRole("button", { name: "Alix Dowel" }).click();
  const pad = page.getByRole("group", { name: "PIN of Alix Dowel" });
  // Keys and fingers do the same; a wrong PIN is said in words and can be typed again.
  await page.keyboard.type("00000");
  await page.keyboard.press("Enter");
  await pad.getByRole("alert").waitFor();
  for (const digit of pin) await pad.getByRole("button", { name: digit, exact: true }).click();
  await pad.getByRole("button", { name: "Enter" }).click();
  await page.getByRole("button", { name: "Alix Dowel, technician" }).waitFor();

  // Locked by hand: the name pad again, and nothing of hers can be reached.
  await page.getByRole("button", { name: "Alix Dowel, technician" }).click();
  await page.getByRole("menuitem", { name: "Lock this PC" }).click();
  await page.getByRole("heading", { level: 1, name: "Who is at the bench?" }).waitFor();
  expect((await page.request.get("/api/today")).status()).toBe(401);
  await page.goto("/checks");
  await page.getByRole("heading", { level: 1, name: "Who is at the bench?" }).waitFor();

  // By e-mail and password it opens too.
  await page.getByRole("button", { name: "Sign in with e-mail and password" }).click();
  await signIn(page, "Ida");
  await page.goto("/settings/people");
  await page
    .getByRole("row")
    .filter({ hasText: "Optics room" })
    .getByRole("button", { name: "End bench mode" })
    .click();
  // The bench's session ends with the bench, and the door says so.
  await page.getByRole("heading", { level: 1, name: "Sign in" }).waitFor();
  await page.getByText("Bench mode on this PC was ended, and with it you were signed out.").waitFor();
});

test("after two minutes at rest the bench is covered; what was typed is there for the same person", async () => {
  const page = await browser.open("/");
  page.setDefaultTimeout(15_000);
  await signIn(page, "Ida");
  await page.goto("/settings/people");
  await page.getByRole("button", { name: "Enrol this PC" }).click();
  await page.getByLabel("Name of this PC").fill("Wet bench");
  await page.getByRole("button", { name: "Enrol this PC" }).click();
  await page.getByRole("table", { name: "Shared PCs" }).getByText("Wet bench").first().waitFor();
  await signOutTo(page);
  await page.getByRole("button", { name: "Sign in with e-mail and password" }).click();
  await signIn(page, "Ida");
  await page.clock.install();
  await page.goto("/settings/lab");
  const name = page.getByLabel("Name", { exact: true });
  await name.fill("Larkmere Water Lab, east");
  await page.clock.fastForward("01:50");
  expect(await page.getByRole("heading", { name: "Who is at the bench?" }).count()).toBe(0);
  await page.clock.fastForward("00:15");
  await page.getByRole("heading", { level: 1, name: "Who is at the bench?" }).waitFor();
  await page.getByText("for Ida Vernier").waitFor();
  await page.getByRole("button", { name: "Sign in with e-mail and password" }).click();
  await page.getByLabel("Password", { exact: true }).fill(password);
  await page.getByRole("button", { name: "Sign in", exact: true }).click();
  await page.getByRole("heading", { name: "Sign in" }).waitFor({ state: "detached" });
  expect(await name.inputValue()).toBe("Larkmere Water Lab, east");
  await page.goto("/settings/people");
  await page
    .getByRole("row")
    .filter({ hasText: "Wet bench" })
    .getByRole("button", { name: "End bench mode" })
    .first()
    .click();
  await page.getByRole("heading", { level: 1, name: "Sign in" }).waitFor();
});

async function signOutTo(page: Awaited<ReturnType<typeof browser.open>>) {
  await page
    .getByRole("banner")
    .getByRole("button", { name: /, (technician|lab manager)$/ })
    .click();
  await page.getByRole("menuitem", { name: "Sign out", exact: true }).click();
  await page.getByRole("heading", { level: 1, name: /Sign in|Who is at the bench/ }).waitFor();
}
