/** Where the lines of a text begin and end: LF, CRLF and CR alone, mixed as they come. */
export interface LineIndex {
  /** Byte offset of each line's first character. */
  starts: Int32Array;
  /** Byte offset after each line's last character, line ending excluded. */
  ends: Int32Array;
  count: number;
}

export function indexLines(bytes: Uint8Array): LineIndex {
  let capacity = 1;
  for (let i = 0; i < bytes.length; i += 1) {
    const byte = bytes[i]!;
    if (byte === 10 || byte === 13) capacity += 1;
  }
  const starts = new Int32Array(capacity);
  const ends = new Int32Array(capacity);
  let count = 0;
  let start = 0;
  for (let i = 0; i < bytes.length; i += 1) {
    const byte = bytes[i]!;
    if (byte !== 10 && byte !== 13) continue;
    starts[count] = start;
    ends[count] = i;
    count += 1;
    if (byte === 13 && bytes[i + 1] === 10) i += 1;
    start = i + 1;
  }
  // Ctrl-Z closes some old text files; it is no line.
  if (start < bytes.length && !(start === bytes.length - 1 && bytes[start] === 26)) {
    starts[count] = start;
    ends[count] = bytes.length;
    count += 1;
  }
  return { starts, ends, count };
}

/** True when a line holds nothing but blanks. */
export function isBlankLine(bytes: Uint8Array, from: number, to: number): boolean {
  for (let i = from; i < to; i += 1) {
    const byte = bytes[i]!;
    if (byte !== 32 && byte !== 9) return false;
  }
  return true;
}
