/**
 * The words of a PDF that embeds its fonts as subsets: content streams are inflated, glyphs are turned back into letters by
 * each font's ToUnicode map. Enough for reports made by pdfkit; it knows no other filters or encodings.
 */
import zlib from "node:zlib";

interface PdfObject {
  id: number;
  dictionary: string;
  stream: Buffer | null;
}

/** Text of each page in drawing order; pieces drawn one after the other are parted by a space. */
export function pdfPages(pdf: Uint8Array): string[] {
  const objects = readObjects(Buffer.from(pdf));
  const fonts = new Map<number, Map<number, string>>();
  for (const object of objects.values()) {
    const map = /\/ToUnicode (\d+) 0 R/.exec(object.dictionary);
    if (map !== null) fonts.set(object.id, readUnicodeMap(objects.get(Number(map[1]))!.stream!.toString("latin1")));
  }
  const pages = [...objects.values()]
    .filter((object) => /\/Type \/Page\b(?!s)/.test(object.dictionary))
    .sort((a, b) => a.id - b.id);
  return pages.map((page) => {
    const resources = resolve(objects, /\/Resources (\d+) 0 R/.exec(page.dictionary)) ?? page.dictionary;
    const names = new Map(
      [...resources.matchAll(/\/(F\d+) (\d+) 0 R/g)].map((found) => [found[1]!, fonts.get(Number(found[2]))]),
    );
    const contents = objects.get(Number(/\/Contents (\d+) 0 R/.exec(page.dictionary)![1]))!;
    return textOf(contents.stream!.toString("latin1"), names);
  });
}

function readObjects(pdf: Buffer): Map<number, PdfObject> {
  const text = pdf.toString("latin1");
  const objects = new Map<number, PdfObject>();
  for (const found of text.matchAll(/(?:^|\n)(\d+) 0 obj\n/g)) {
    const id = Number(found[1]);
    const from = found.index + found[0].length;
    const streamAt = text.indexOf("stream\n", from);
    const endAt = text.indexOf("endobj", from);
    const hasStream = streamAt !== -1 && streamAt < endAt;
    const dictionary = text.slice(from, hasStream ? streamAt : endAt);
    let stream: Buffer | null = null;
    if (hasStream) {
      const length = Number(/\/Length (\d+)/.exec(dictionary)![1]);
      const raw = pdf.subarray(streamAt + 7, streamAt + 7 + length);
      stream = dictionary.includes("/FlateDecode") ? zlib.inflateSync(raw) : raw;
    }
    objects.set(id, { id, dictionary, stream });
  }
  return objects;
}

const resolve = (objects: Map<number, PdfObject>, reference: RegExpExecArray | null): string | null =>
  reference === null ? null : (objects.get(Number(reference[1]))?.dictionary ?? null);

/** `beginbfrange <0000> <0002> [<0041> <0042> <0043>]` */
function readUnicodeMap(cmap: string): Map<number, string> {
  const map = new Map<number, string>();
  for (const found of cmap.matchAll(/<([0-9a-f]+)> <([0-9a-f]+)> \[([^\]]*)\]/gi)) {
    const first = parseInt(found[1]!, 16);
    // A ligature stands for several letters, written with a space between them.
    [...found[3]!.matchAll(/<([0-9a-f ]+)>/gi)].forEach((letter, index) => {
      map.set(first + index, Buffer.from(letter[1]!.replaceAll(" ", ""), "hex").swap16().toString("utf16le"));
    });
  }
  return map;
}

function textOf(content: string, fonts: Map<string, Map<number, string> | undefined>): string {
  const parts: string[] = [];
  let letters: Map<number, string> | undefined;
  for (const found of content.matchAll(/\/(F\d+) [\d.]+ Tf|\[([^\]]*)\] TJ/g)) {
    if (found[1] !== undefined) {
      letters = fonts.get(found[1]);
      continue;
    }
    let text = "";
    for (const piece of found[2]!.matchAll(/<([0-9a-f]+)>/gi)) {
      for (let at = 0; at < piece[1]!.length; at += 4)
        text += letters?.get(parseInt(piece[1]!.slice(at, at + 4), 16)) ?? "\uFFFD";
    }
    parts.push(text);
  }
  return parts.join(" ");
}
