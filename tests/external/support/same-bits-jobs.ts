/**
 * Pieces of work that must give the same bits in every engine, as plain JSON, and what runs them: bundled for the browser's worker and
 * imported by the test in Node. A result's digest is the SHA-256 of its JSON with every double in full (shortest text that reads back as
 * the same bits; minus zero and not-a-number told apart, which plain JSON does not).
 */
import {
  analyseCaptures,
  assessDrift,
  readCapture,
  type AnalysisSetup,
  type DriftCheck,
  type DriftSettings,
} from "../../../packages/core/src/index.ts";

export type SameBitsJob =
  | { kind: "analyse"; name: string; text: string; setup: AnalysisSetup }
  | { kind: "analyse-bytes"; name: string; base64: string; setup: AnalysisSetup }
  | { kind: "read-bytes"; name: string; base64: string }
  | { kind: "drift"; name: string; history: DriftCheck[]; settings: DriftSettings };

const bytesOf = (base64: string): Uint8Array => Uint8Array.from(atob(base64), (one) => one.charCodeAt(0));

function resultOf(job: SameBitsJob): unknown {
  const lamp = (bytes: Uint8Array) => ({ name: job.name, bytes, sha256: null, part: "lamp" as const });
  switch (job.kind) {
    case "analyse":
      return analyseCaptures([lamp(new TextEncoder().encode(job.text))], job.setup);
    case "analyse-bytes":
      return analyseCaptures([lamp(bytesOf(job.base64))], job.setup);
    case "read-bytes":
      return readCapture(bytesOf(job.base64), job.name);
    case "drift":
      return assessDrift(job.history, job.settings);
  }
}

function canonical(_key: string, value: unknown): unknown {
  if (typeof value === "number") {
    if (Object.is(value, -0)) return "-0";
    if (!Number.isFinite(value)) return String(value);
  }
  return ArrayBuffer.isView(value) ? Array.from(value as Float64Array) : value;
}

/** The result as text; what the core throws is part of it. */
export function canonicalResult(job: SameBitsJob): string {
  try {
    return JSON.stringify(resultOf(job), canonical) ?? "undefined";
  } catch (error) {
    return `threw ${String(error)}`;
  }
}

export async function digestOf(job: SameBitsJob): Promise<string> {
  const digest = await crypto.subtle.digest("SHA-256", new TextEncoder().encode(canonicalResult(job)));
  return Array.from(new Uint8Array(digest), (one) => one.toString(16).padStart(2, "0")).join("");
}
