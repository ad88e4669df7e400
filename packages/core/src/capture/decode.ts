/**
 * Bytes of a file to UTF-8 or Latin-1 bytes that the scanner can walk: byte-order marks, UTF-16 with and without one, and files that
 * are no text at all. Written here because a text decoder of the engine is no part of the language, and must give the same bits everywhere.
 */

export type TextEncoding = "utf-8" | "utf-16le" | "utf-16be" | "latin-1";

export type DecodedBytes =
  { kind: "text"; bytes: Uint8Array; encoding: TextEncoding } | { kind: "binary"; looksLike: string | null };

/** How far into a file its nature is judged by; beyond it only NUL bytes count. */
const judgedBytes = 8192;
/** Share of control characters above which a file is no text. Common practice, no source. */
const controlShareLimit = 0.02;

const signatures: { bytes: number[]; looksLike: string }[] = [
  { bytes: [0x50, 0x4b, 0x03, 0x04], looksLike: "a packed file (a workbook or an archive)" },
  { bytes: [0x25, 0x50, 0x44, 0x46], looksLike: "a PDF document" },
  { bytes: [0x89, 0x50, 0x4e, 0x47], looksLike: "a picture" },
  { bytes: [0xff, 0xd8, 0xff], looksLike: "a picture" },
  { bytes: [0x1f, 0x8b], looksLike: "a packed file" },
  { bytes: [0xd0, 0xcf, 0x11, 0xe0], looksLike: "a workbook or another office document" },
];

/** Turn a file's bytes into text bytes, or say that they are no text. Never throws. */
export function decodeBytes(bytes: Uint8Array): DecodedBytes {
  for (const signature of signatures) {
    if (signature.bytes.every((byte, index) => bytes[index] === byte)) {
      return { kind: "binary", looksLike: signature.looksLike };
    }
  }
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return decodeUtf16(bytes, 2, "utf-16le");
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return decodeUtf16(bytes, 2, "utf-16be");
  const start = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;

  const judged = Math.min(bytes.length, judgedBytes);
  let evenNuls = 0;
  let oddNuls = 0;
  let controls = 0;
  for (let i = start; i < judged; i += 1) {
    const byte = bytes[i]!;
    if (byte === 0) {
      if ((i & 1) === 0) evenNuls += 1;
      else oddNuls += 1;
    } else if (byte < 32 && !(byte >= 9 && byte <= 13) && byte !== 26 && byte !== 27) controls += 1;
  }
  if (evenNuls + oddNuls > 0) {
    // Western text in UTF-16 has a NUL in nearly every other byte, always on the same side.
    const half = judged / 2;
    if (oddNuls > 0.7 * half && evenNuls < 0.05 * half) return decodeUtf16(bytes, 0, "utf-16le");
    if (evenNuls > 0.7 * half && oddNuls < 0.05 * half) return decodeUtf16(bytes, 0, "utf-16be");
    return { kind: "binary", looksLike: null };
  }
  if (controls > controlShareLimit * Math.max(judged - start, 1)) return { kind: "binary", looksLike: null };

  const body = start === 0 ? bytes : bytes.subarray(start);
  const nature = natureOf(body);
  if (nature === "nul") return { kind: "binary", looksLike: null };
  return { kind: "text", bytes: body, encoding: nature };
}

/** Valid UTF-8, else Latin-1; "nul" when a NUL byte stands anywhere. */
function natureOf(bytes: Uint8Array): "utf-8" | "latin-1" | "nul" {
  if (bytes.includes(0)) return "nul";
  let valid = true;
  let pending = 0;
  for (let i = firstBeyondAscii(bytes); i < bytes.length; i += 1) {
    const byte = bytes[i]!;
    if (pending > 0) {
      if ((byte & 0xc0) === 0x80) {
        pending -= 1;
        continue;
      }
      valid = false;
      pending = 0;
    }
    if (byte < 0x80) continue;
    if (byte >= 0xc2 && byte < 0xe0) pending = 1;
    else if (byte >= 0xe0 && byte < 0xf0) pending = 2;
    else if (byte >= 0xf0 && byte < 0xf5) pending = 3;
    else valid = false;
  }
  return valid && pending === 0 ? "utf-8" : "latin-1";
}

/** Index of a byte at most three before the first above 0x7f; the length when there is none. Four at a time: most files are plain ASCII. */
function firstBeyondAscii(bytes: Uint8Array): number {
  const aligned = (4 - (bytes.byteOffset & 3)) & 3;
  const head = Math.min(aligned, bytes.length);
  for (let i = 0; i < head; i += 1) if (bytes[i]! >= 0x80) return i;
  const words = new Int32Array(bytes.buffer, bytes.byteOffset + head, (bytes.length - head) >> 2);
  for (let w = 0; w < words.length; w += 1) if ((words[w]! & 0x80808080) !== 0) return head + 4 * w;
  const tail = head + 4 * words.length;
  for (let i = tail; i < bytes.length; i += 1) if (bytes[i]! >= 0x80) return i;
  return bytes.length;
}

function decodeUtf16(bytes: Uint8Array, start: number, encoding: "utf-16le" | "utf-16be"): DecodedBytes {
  const high = encoding === "utf-16le" ? 1 : 0;
  const units = (bytes.length - start) >> 1;
  const codes = new Uint16Array(units);
  for (let i = 0; i < units; i += 1) {
    const at = start + 2 * i;
    const code = (bytes[at + high]! << 8) | bytes[at + 1 - high]!;
    if (code === 0) return { kind: "binary", looksLike: null };
    codes[i] = code;
  }
  return { kind: "text", bytes: encodeUtf8((i) => codes[i]!, units), encoding };
}

/** UTF-8 bytes of a string; lone surrogates become U+FFFD. */
export function textToBytes(text: string): Uint8Array {
  const start = text.charCodeAt(0) === 0xfeff ? 1 : 0;
  return encodeUtf8((i) => text.charCodeAt(i + start), text.length - start);
}

function encodeUtf8(codeAt: (index: number) => number, length: number): Uint8Array {
  const out = new Uint8Array(length * 3);
  let at = 0;
  for (let i = 0; i < length; i += 1) {
    let code = codeAt(i);
    if (code >= 0xd800 && code < 0xe000) {
      const next = i + 1 < length ? codeAt(i + 1) : 0;
      if (code < 0xdc00 && next >= 0xdc00 && next < 0xe000) {
        code = 0x10000 + ((code - 0xd800) << 10) + (next - 0xdc00);
        i += 1;
      } else code = 0xfffd;
    }
    if (code < 0x80) out[at++] = code;
    else if (code < 0x800) {
      out[at++] = 0xc0 | (code >> 6);
      out[at++] = 0x80 | (code & 63);
    } else if (code < 0x10000) {
      out[at++] = 0xe0 | (code >> 12);
      out[at++] = 0x80 | ((code >> 6) & 63);
      out[at++] = 0x80 | (code & 63);
    } else {
      out[at++] = 0xf0 | (code >> 18);
      out[at++] = 0x80 | ((code >> 12) & 63);
      out[at++] = 0x80 | ((code >> 6) & 63);
      out[at++] = 0x80 | (code & 63);
    }
  }
  return out.subarray(0, at);
}

/** Text of a stretch of decoded bytes (a heading, a metadata line). */
export function sliceText(bytes: Uint8Array, from: number, to: number, encoding: TextEncoding): string {
  let text = "";
  for (let i = from; i < to;) {
    const byte = bytes[i]!;
    let code = byte;
    let length = 1;
    if (encoding !== "latin-1" && byte >= 0x80) {
      length = byte < 0xe0 ? 2 : byte < 0xf0 ? 3 : 4;
      code = byte & (0x7f >> length);
      for (let k = 1; k < length; k += 1) code = (code << 6) | ((bytes[i + k] ?? 0x80) & 63);
    }
    text += String.fromCodePoint(Math.min(code, 0x10ffff));
    i += length;
  }
  return text;
}
