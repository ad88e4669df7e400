import { expect, test } from "vitest";
import hues from "./dark-room-hues.css?raw";
import tokens from "./tokens.css?raw";

/** Colours of one theme as the style sheet holds them. */
function colours(css: string, theme: string): Record<string, string> {
  const block = new RegExp(`\\[data-theme="${theme}"\\]\\s*\\{([^}]*)\\}`).exec(css)?.[1] ?? "";
  return Object.fromEntries(
    [...block.matchAll(/--([\w-]+):\s*(#[0-9A-F]{6})/gi)].map((match) => [match[1] ?? "", match[2] ?? ""]),
  );
}

const linear = (channel: number) => (channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4);
function luminance(hex: string): number {
  const [r = 0, g = 0, b = 0] = [1, 3, 5].map((i) => linear(Number.parseInt(hex.slice(i, i + 2), 16) / 255));
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}
const contrast = (a: string, b: string) =>
  (Math.max(luminance(a), luminance(b)) + 0.05) / (Math.min(luminance(a), luminance(b)) + 0.05);

const red = colours(tokens, "dark-room");

test.each(["amber", "green"])("%s keeps every contrast of the red dark room", (hue) => {
  const theme = colours(hues, `dark-room-${hue}`);
  expect(Object.keys(theme)).toHaveLength(16);
  expect(Object.keys(theme).sort()).toEqual(Object.keys(red).sort());
  for (const [name, colour] of Object.entries(theme)) {
    expect(contrast(colour, theme["ground"] ?? ""), name).toBeCloseTo(
      contrast(red[name] ?? "", red["ground"] ?? ""),
      1,
    );
  }
});

test.each(["paper", "ink", "dark-room"])(
  "text on %s reads at 4.5:1 on every ground, graphics at 3:1 (WCAG 2.2)",
  (name) => {
    const css = tokens.replace(':root, [data-theme="paper"]', '[data-theme="paper"]');
    const theme = colours(css, name);
    const of = (token: string) => theme[token] ?? "";
    for (const ground of ["ground", "sheet", "chosen", "band"]) {
      for (const text of ["ink", "quiet", "accent", "near", "out"])
        expect(contrast(of(text), of(ground)), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
      expect(contrast(of("graph"), of(ground)), `graph on ${ground}`).toBeGreaterThanOrEqual(3);
    }
  },
);
