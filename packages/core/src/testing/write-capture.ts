/**
 * A simulated capture as text, in the ways that instruments write: what the reader must cope with.
 */
export type CaptureDialect =
  /** Heading line, commas, decimal points. */
  | "comma"
  /** Lines of `key: value` first, then tabs. */
  | "tab-with-metadata"
  /** Semicolons, decimal commas, CRLF, byte order mark. */
  | "semicolon-decimal-comma"
  /** Two numbers a line, spaces, no heading. */
  | "spaces"
  /** Commas, the axis running downwards. */
  | "comma-descending";

export interface CaptureTable {
  axisHeading: string;
  axisDecimals: number;
  positions: Float64Array;
  countsDecimals: number;
  counts: Float64Array;
  metadata: Readonly<Record<string, string>>;
}

export function writeCapture(table: CaptureTable, dialect: CaptureDialect): string {
  const { positions, counts } = table;
  const separator = {
    comma: ",",
    "tab-with-metadata": "\t",
    "semicolon-decimal-comma": ";",
    spaces: " ",
    "comma-descending": ",",
  }[dialect];
  const lines: string[] = [];
  if (dialect === "tab-with-metadata") {
    for (const [key, value] of Object.entries(table.metadata)) lines.push(`${key}: ${value}`);
    lines.push("");
  }
  if (dialect !== "spaces") lines.push(`${table.axisHeading}${separator}Intensity (counts)`);
  for (let k = 0; k < positions.length; k++) {
    const i = dialect === "comma-descending" ? positions.length - 1 - k : k;
    lines.push(`${positions[i]!.toFixed(table.axisDecimals)}${separator}${counts[i]!.toFixed(table.countsDecimals)}`);
  }
  if (dialect !== "semicolon-decimal-comma") return `${lines.join("\n")}\n`;
  const [heading, ...rows] = lines;
  return `\uFEFF${heading}\r\n${rows.map((row) => row.replaceAll(".", ",")).join("\r\n")}\r\n`;
}
