/**
 * Cuts Roboto Flex down to what the design uses: five axes within their ranges, the letters of European names, the
 * Greek of formulas. Made once into src/styles/generated (not kept in version control), remade when anything it
 * depends on changes. Axes that the design never moves are pinned at their defaults.
 */
import { createHash } from "node:crypto";
import fs from "node:fs/promises";
import { createRequire } from "node:module";
import path from "node:path";

const require = createRequire(import.meta.url);
const root = path.resolve(import.meta.dirname, "..");
const out = path.join(root, "src/styles/generated");

/** Ranges the type styles move in (design: weight 360-600, width 84-100 %, grade -25 on dark grounds, oblique 8 degrees). */
const variationAxes = {
  wght: { min: 360, max: 600 },
  wdth: { min: 84, max: 100 },
  opsz: { min: 8, max: 36 },
  GRAD: { min: -25, max: 0 },
  slnt: { min: -10, max: 0 },
  XTRA: 468,
  XOPQ: 96,
  YOPQ: 79,
  YTLC: 514,
  YTUC: 712,
  YTAS: 750,
  YTDE: -203,
  YTFI: 738,
};

const range = (from, to) => String.fromCodePoint(...Array.from({ length: to - from + 1 }, (_, i) => from + i));
const faces = [
  { name: "latin", text: range(0x20, 0x7e) + range(0xa0, 0x17f) + range(0x2000, 0x2190) + range(0x2190, 0x22ff) },
  { name: "latin-ext", text: range(0x100, 0x24f) },
  { name: "greek", text: range(0x386, 0x3ce) },
];

/** Makes the subset files unless they are there already. */
export async function makeRobotoFlex() {
  const { default: subsetFont } = await import("subset-font");
  const version = require("@fontsource-variable/roboto-flex/package.json").version;
  const key = createHash("sha256").update(JSON.stringify({ version, variationAxes, faces })).digest("hex");
  const stamp = path.join(out, "stamp");
  if ((await fs.readFile(stamp, "utf8").catch(() => "")) === key) return;
  await fs.mkdir(out, { recursive: true });
  for (const face of faces) {
    const source = require.resolve(`@fontsource-variable/roboto-flex/files/roboto-flex-${face.name}-full-normal.woff2`);
    const bytes = await subsetFont(await fs.readFile(source), face.text, {
      targetFormat: "woff2",
      variationAxes,
      noHinting: true,
    });
    await fs.writeFile(path.join(out, `roboto-flex-${face.name}.woff2`), bytes);
  }
  await fs.writeFile(stamp, key);
}

/** The same as a step of the build. @returns {import("vite").Plugin} */
export function robotoFlex() {
  return { name: "roboto-flex", configResolved: () => makeRobotoFlex() };
}
