/**
 * Makes roboto-flex.ts: Roboto Flex at two weights as static TrueType, cut to what a report prints, for embedding in PDF.
 * Run by hand when the font package changes: `node packages/api/src/records/fonts/generate.mjs`.
 */
import fs from "node:fs/promises";
import { createRequire } from "node:module";
import path from "node:path";

const web = createRequire(path.resolve(import.meta.dirname, "../../../../web/package.json"));
const { default: subsetFont } = await import(web.resolve("subset-font"));

const range = (from, to) => String.fromCodePoint(...Array.from({ length: to - from + 1 }, (_, i) => from + i));
const faces = {
  latin:
    range(0x20, 0x7e) +
    range(0xa0, 0xff) +
    "\u0131\u0152\u0153\u2013\u2014\u2018\u2019\u201c\u201d\u2022\u2026\u20ac\u2212",
  latinExt: range(0x100, 0x24f) + range(0x1e00, 0x1eff),
  greek: range(0x370, 0x3ff),
};
const folders = { latin: "latin", latinExt: "latin-ext", greek: "greek" };
const pinned = {
  wdth: 100,
  opsz: 14,
  GRAD: 0,
  slnt: 0,
  XOPQ: 96,
  YOPQ: 79,
  XTRA: 468,
  YTUC: 712,
  YTLC: 514,
  YTAS: 750,
  YTDE: -203,
  YTFI: 738,
};

const lines = [];
for (const [face, text] of Object.entries(faces)) {
  const source = web.resolve(`@fontsource-variable/roboto-flex/files/roboto-flex-${folders[face]}-full-normal.woff2`);
  const bytes = await fs.readFile(source);
  for (const [weight, wght] of [
    ["Regular", 400],
    ["Strong", 600],
  ]) {
    const font = await subsetFont(bytes, text, {
      targetFormat: "truetype",
      noHinting: true,
      variationAxes: { ...pinned, wght },
    });
    lines.push(`export const ${face}${weight} =\n  "${font.toString("base64")}";`);
  }
}
await fs.writeFile(
  path.join(import.meta.dirname, "roboto-flex.ts"),
  `/**
 * Roboto Flex as static TrueType, base64: made by generate.mjs, embedded in reports.
 * Copyright The Roboto Flex Project Authors (https://github.com/googlefonts/roboto-flex), SIL Open Font License 1.1.
 */
${lines.join("\n")}
`,
);
