/** The first rows of a capture as they stand in the file, to show under the guessed columns. */
import type { FileFacts } from "@wavekeep/core";

const shownRows = 8;
/** Enough for a long header and the rows after it. */
const readBytes = 256 * 1024;

/** @returns at most 8 rows of cells as written, the heading's row first where there is one */
export function firstRowsOf(
  bytes: Uint8Array,
  facts: Pick<FileFacts, "encoding" | "delimiter" | "headerLines">,
): string[][] {
  const label = { "utf-8": "utf-8", "utf-16le": "utf-16le", "utf-16be": "utf-16be", "latin-1": "latin1" }[
    facts.encoding
  ];
  const text = new TextDecoder(label).decode(bytes.subarray(0, readBytes));
  const lines = text.split(/\r\n|\n|\r/);
  const from = Math.max(0, facts.headerLines - 1);
  return lines
    .slice(from)
    .filter((line) => line.trim() !== "")
    .slice(0, shownRows)
    .map((line) => cellsOf(line, facts.delimiter));
}

function cellsOf(line: string, delimiter: FileFacts["delimiter"]): string[] {
  const cells = delimiter === " " ? line.trim().split(/\s+/) : line.split(delimiter);
  return cells.slice(0, 20).map((cell) =>
    cell
      .trim()
      .replace(/^"(.*)"$/, "$1")
      .slice(0, 60),
  );
}
