/** The document as text for the terminal. */
import type { DriftDocument } from "./judge-file.ts";

export function textOf(document: DriftDocument): string {
  const lines: string[] = [];
  if (document.outcome !== "judged") lines.push(`${document.outcome}: ${document.reason}`);
  else {
    lines.push(`${document.kind} (${document.checks} checks)`, document.why!, "");
    for (const signal of document.signals)
      lines.push(`signal  ${signal.date}  check ${signal.index}  ${signal.kind}  (${signal.by})`);
    if (document.signals.length === 0) lines.push("signal  none");
    if (document.crossing !== null) lines.push(crossingLine(document.crossing));
    for (const { date, probabilityOut } of document.probabilityOut)
      lines.push(`${date}  out of tolerance with probability ${(100 * probabilityOut).toFixed(1)} %`);
  }
  for (const row of document.wrongRows.slice(0, 20)) lines.push(`line ${row.line}: ${row.reason}`);
  if (document.wrongRows.length > 20) lines.push(`… and ${document.wrongRows.length - 20} more rows`);
  for (const remark of document.remarks) lines.push(remark);
  return `${lines.join("\n")}\n`;
}

function crossingLine({ date, low, high, coverage }: NonNullable<DriftDocument["crossing"]>): string {
  const interval = low === null ? "" : `, ${100 * coverage} % interval ${low} to ${high ?? "open"}`;
  return `tolerance crossed  ${date ?? "not within five years"}${interval}`;
}
