/** Hands that know no pointer: Tab to a thing, and at every stop the focus must be seen. */
import type { Locator, Page } from "playwright-core";

/** What is wrong with how the focus shows; null when it is seen. */
const focusFault = (page: Page): Promise<string | null> =>
  page.evaluate(() => {
    const element = document.activeElement;
    if (element === null || element === document.body) return null;
    const name = `${element.tagName.toLowerCase()} "${(element.getAttribute("aria-label") ?? element.textContent ?? "").trim().slice(0, 40)}"`;
    const shown = (one: Element | null): boolean => {
      if (one === null) return false;
      const style = getComputedStyle(one);
      return style.outlineStyle !== "none" && parseFloat(style.outlineWidth) >= 1;
    };
    const box = element.getBoundingClientRect();
    if (box.width < 2 || box.height < 2) return `${name} has the focus and is too small to be seen`;
    if (box.bottom <= 0 || box.top >= innerHeight || box.right <= 0 || box.left >= innerWidth)
      return `${name} has the focus outside of the window`;
    // A field's box carries the outline of what is typed in it.
    return shown(element) || shown(element.closest(".field-box")) ? null : `${name} has the focus and no outline`;
  });

/**
 * Press Tab until the thing has the focus.
 *
 * @throws when it is not reached, or when the focus cannot be seen at a stop on the way
 */
export async function tabTo(page: Page, target: Locator, key: "Tab" | "Shift+Tab" = "Tab"): Promise<void> {
  await target.waitFor();
  for (let stops = 0; stops < 150; stops += 1) {
    if (await target.evaluate((element) => element === document.activeElement)) return;
    await page.keyboard.press(key);
    const fault = await focusFault(page);
    if (fault !== null) throw new Error(`${fault} (${page.url()})`);
  }
  throw new Error(`Tab never comes to ${target.toString()} (${page.url()})`);
}

export async function pressOn(page: Page, target: Locator, key: "Enter" | "Space" = "Enter"): Promise<void> {
  await tabTo(page, target);
  await page.keyboard.press(key);
}

export async function typeInto(page: Page, target: Locator, text: string): Promise<void> {
  await tabTo(page, target);
  await page.keyboard.type(text);
}
