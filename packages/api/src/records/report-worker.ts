/** The worker thread in which reports are drawn: laying out text takes longer than the event loop may wait. */
import type { ReportFacts } from "./report-facts.ts";
import { renderReport } from "./report.ts";

export interface ReportTask {
  facts: ReportFacts;
  keyFingerprint: string;
}

/** @returns the PDF's bytes */
export default async function run({ facts, keyFingerprint }: ReportTask): Promise<Uint8Array> {
  return renderReport(facts, keyFingerprint);
}
