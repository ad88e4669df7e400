/**
 * A drawing as PNG: its canvases and SVGs laid on the ground of the theme at twice the screen's pixels, with the labels
 * in the gutter and one line that says what it is and whose.
 */
import { saveFile } from "./csv.ts";

const GUTTER = 88;
const EDGE = 16;
const CAPTION = 28;
const DENSITY = 2;

const STYLES = [
  "fill",
  "fill-opacity",
  "stroke",
  "stroke-width",
  "stroke-dasharray",
  "stroke-linejoin",
  "stroke-opacity",
  "opacity",
  "paint-order",
  "font-family",
  "font-size",
  "font-weight",
  "font-stretch",
  "font-style",
  "font-variant-numeric",
  "font-variation-settings",
  "text-anchor",
  "visibility",
  "display",
];

/** The face that the page uses, as a data address: an SVG drawn as an image sees no fonts of the page. */
async function embeddedFont(): Promise<string> {
  for (const sheet of document.styleSheets) {
    for (const rule of sheet.cssRules) {
      if (!(rule instanceof CSSFontFaceRule) || !/latin-?[^e]|latin\./.test(rule.style.getPropertyValue("src")))
        continue;
      const address = /url\("?([^")]+)"?\)/.exec(rule.style.getPropertyValue("src"))?.[1];
      if (address === undefined || address.includes("latin-ext")) continue;
      const bytes = new Uint8Array(await (await fetch(new URL(address, sheet.href ?? location.href))).arrayBuffer());
      let binary = "";
      for (let i = 0; i < bytes.length; i += 0x8000) binary += String.fromCharCode(...bytes.subarray(i, i + 0x8000));
      return `@font-face{font-family:"Roboto Flex Variable";font-weight:360 600;font-stretch:84% 100%;font-style:oblique 0deg 10deg;src:url(data:font/woff2;base64,${btoa(binary)})}`;
    }
  }
  return "";
}

function withStyles(source: SVGSVGElement, font: string): SVGSVGElement {
  const copy = source.cloneNode(true) as SVGSVGElement;
  const originals = [source, ...source.querySelectorAll<SVGElement>("*")];
  const copies = [copy, ...copy.querySelectorAll<SVGElement>("*")];
  originals.forEach((original, i) => {
    const computed = getComputedStyle(original);
    copies[i]?.setAttribute("style", STYLES.map((name) => `${name}:${computed.getPropertyValue(name)}`).join(";"));
  });
  const style = document.createElementNS("http://www.w3.org/2000/svg", "style");
  style.textContent = font;
  copy.prepend(style);
  return copy;
}

async function svgImage(source: SVGSVGElement, font: string, box: DOMRect): Promise<HTMLImageElement> {
  const copy = withStyles(source, font);
  const height = box.height + 2 * EDGE;
  copy.setAttribute("xmlns", "http://www.w3.org/2000/svg");
  copy.setAttribute("viewBox", `${-GUTTER} ${-EDGE} ${box.width + GUTTER + EDGE} ${height}`);
  copy.setAttribute("width", String((box.width + GUTTER + EDGE) * DENSITY));
  copy.setAttribute("height", String(height * DENSITY));
  const image = new Image();
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(new XMLSerializer().serializeToString(copy))}`;
  await image.decode();
  return image;
}

/** @param caption one line below the drawing: what it is, whose, and *demo* where the lab is one */
export async function savePng(element: HTMLElement, fileName: string, caption: string): Promise<void> {
  const frame = element.getBoundingClientRect();
  const canvas = document.createElement("canvas");
  canvas.width = (frame.width + GUTTER + EDGE) * DENSITY;
  canvas.height = (frame.height + 2 * EDGE + CAPTION) * DENSITY;
  const context = canvas.getContext("2d");
  if (context === null) return;
  const style = getComputedStyle(document.documentElement);
  context.scale(DENSITY, DENSITY);
  context.fillStyle = style.getPropertyValue("--ground");
  context.fillRect(0, 0, canvas.width, canvas.height);
  const font = await embeddedFont();
  for (const part of element.querySelectorAll<HTMLCanvasElement | SVGSVGElement>("canvas, svg")) {
    const box = part.getBoundingClientRect();
    const x = GUTTER + box.left - frame.left;
    const y = EDGE + box.top - frame.top;
    if (part instanceof HTMLCanvasElement) context.drawImage(part, x, y, box.width, box.height);
    else
      context.drawImage(
        await svgImage(part, font, box),
        x - GUTTER,
        y - EDGE,
        box.width + GUTTER + EDGE,
        box.height + 2 * EDGE,
      );
  }
  context.fillStyle = style.getPropertyValue("--quiet");
  context.font = '400 12px "Roboto Flex Variable", sans-serif';
  context.fillText(caption, GUTTER, frame.height + 2 * EDGE + CAPTION / 2);
  const blob = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, "image/png"));
  if (blob !== null) saveFile(blob, `${fileName}.png`);
}
