/** Chromium for the browser tests: one a file, a page a test, and what every screen must hold to. */
import fs from "node:fs";
import path from "node:path";
import { AxeBuilder } from "@axe-core/playwright";
import { chromium, type Browser, type BrowserContext, type Page } from "playwright-core";
import { afterAll, afterEach, beforeAll, expect, inject } from "vitest";

/** Pictures of the screens; the folder is not part of the repository. */
const screenshots = path.resolve(import.meta.dirname, "../../screenshots");

export const themes = ["paper", "ink", "dark-room"] as const;
export type Theme = (typeof themes)[number];

export interface BrowserHandle {
  /** A page in a context of its own (no cookies of other tests), 1440 x 900 unless said otherwise. */
  open(address?: string, viewport?: { width: number; height: number }): Promise<Page>;
}

/**
 * Chromium for this test file. A page that logs an error, or throws, fails the test that opened it.
 *
 * @example const browser = useBrowser();  test("…", async () => { const page = await browser.open("/today"); });
 */
export function useBrowser(): BrowserHandle {
  let browser: Browser;
  const contexts: BrowserContext[] = [];
  let faults: string[] = [];
  beforeAll(async () => {
    browser = await chromium.launch({ executablePath: inject("wavekeep").chromium });
  });
  afterEach(async () => {
    await Promise.all(contexts.splice(0).map((context) => context.close()));
    const seen = faults;
    faults = [];
    expect(seen, "errors on the page").toEqual([]);
  });
  afterAll(() => browser.close());
  return {
    async open(address = "/", viewport = { width: 1440, height: 900 }) {
      const context = await browser.newContext({ viewport, baseURL: inject("wavekeep").address, locale: "en-GB" });
      contexts.push(context);
      const page = await context.newPage();
      page.on("pageerror", (error) => faults.push(error.message));
      page.on("console", (message) => {
        // A refused request is logged by Chromium itself, also where the page expects and shows the refusal.
        if (message.type() === "error" && !/^Failed to load resource/.test(message.text())) faults.push(message.text());
      });
      await page.goto(address);
      return page;
    },
  };
}

/**
 * Sign in as one of the demo lab's people.
 *
 * @param who part of the name or the role that `npm start` prints beside the e-mail, e.g. "technician"
 */
export async function signIn(page: Page, who: string): Promise<void> {
  const person = inject("wavekeep").signIns.find(({ name, role }) => `${name}, ${role}`.includes(who));
  if (person === undefined) throw new Error(`The demo lab prints no sign-in for "${who}".`);
  await page.getByLabel("E-mail").fill(person.email);
  await page.getByLabel("Password", { exact: true }).fill(person.password);
  await page.getByRole("button", { name: "Sign in", exact: true }).click();
  await page.getByRole("navigation").first().waitFor();
}

/** Keep a picture of the whole page for people to look at. */
export async function takePicture(page: Page, name: string): Promise<void> {
  fs.mkdirSync(screenshots, { recursive: true });
  await page.evaluate(() => document.fonts.ready.then(() => true));
  await page.screenshot({ path: path.join(screenshots, `${name}.png`), fullPage: true });
}

/** @returns in words what is wider than the window; null when nothing is */
export async function sidewaysFault(page: Page): Promise<string | null> {
  const { content, window: width } = await page.evaluate(() => ({
    content: document.documentElement.scrollWidth,
    window: document.documentElement.clientWidth,
  }));
  return content <= width ? null : `the page is ${content} px wide in a window of ${width} px`;
}

/** What axe finds against WCAG 2.2 AA, a line a finding. `rules`: only these. */
export async function accessFaults(page: Page, rules?: string[]): Promise<string[]> {
  // No page of ours holds a frame: axe runs in the page itself.
  const axe = new AxeBuilder({ page }).setLegacyMode(true).options({ resultTypes: ["violations"] });
  const { violations } = await (
    rules === undefined ? axe.withTags(["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"]) : axe.withRules(rules)
  ).analyze();
  return violations.flatMap((rule) =>
    rule.nodes.map((node) => `${rule.id} at ${node.target.join(" ")}: ${node.html.slice(0, 120)}`),
  );
}
