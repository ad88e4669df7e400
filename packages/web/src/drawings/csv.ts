/** A drawing's data as CSV (RFC 4180): UTF-8 with a mark, comma, point, CRLF. */
import type { TableTwin } from "./drawing.tsx";

/**
 * One cell. Text that a spreadsheet would take for a formula gets an apostrophe before it; numbers are written plainly,
 * since a plain number is no formula, whatever its sign.
 */
export function csvCell(cell: string | number | null): string {
  if (cell === null) return "";
  if (typeof cell === "number") return Number.isFinite(cell) ? String(cell) : "";
  const safe = /^[=+\-@\t\r\u2212]/.test(cell) ? `'${cell}` : cell;
  return /[",\r\n']/.test(safe) || safe !== safe.trim() ? `"${safe.replaceAll('"', '""')}"` : safe;
}

export function toCsv(table: Pick<TableTwin, "head" | "rows">): string {
  return [table.head, ...table.rows].map((row) => `${row.map(csvCell).join(",")}\r\n`).join("");
}

/** Hands a file to the browser's downloads. */
export function saveFile(content: Blob, name: string): void {
  const link = document.createElement("a");
  link.href = URL.createObjectURL(content);
  link.download = name;
  link.click();
  // The download reads the address after the click returns.
  setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
}

export function saveCsv(table: TableTwin, fileName: string): void {
  saveFile(new Blob([`\ufeff${toCsv(table)}`], { type: "text/csv;charset=utf-8" }), `${fileName}.csv`);
}
