/** One table of past results to one JSON document. */
import { assessDrift, coreVersion, type DriftAssessment } from "@wavekeep/core";
import type { CommandOptions } from "./options.ts";
import { readResults, type WrongRow } from "./read-results.ts";

/** Coverage of the crossing date's interval on the command line. */
const crossingCoverage = 0.95;

export interface DriftDocument {
  outcome: "judged" | "too-few" | "refused";
  /** Why it was not judged; null when it was. */
  reason: string | null;
  kind: DriftAssessment["kind"];
  why: string | null;
  signals: { index: number; date: string; kind: string; by: string }[];
  /** Of the error at mid-range; for kind `scale` of the scale error. */
  rateNmPerYear: number | null;
  rateUnc: number | null;
  crossing: { date: string | null; low: string | null; high: string | null; coverage: number } | null;
  charts: DriftAssessment["charts"];
  checks: number;
  probabilities: DriftAssessment["probabilities"];
  rates: { midNmPerYear: number | null; midUnc: number | null; scaleNmPerYear: number | null; scaleUnc: number | null };
  step: DriftAssessment["step"];
  temperature: DriftAssessment["temperature"];
  odd: DriftAssessment["odd"];
  probabilityOut: { date: string; probabilityOut: number }[];
  columns: Record<string, string>;
  wrongRows: WrongRow[];
  remarks: string[];
  coreVersion: string;
}

/** @param input  the file's bytes, or a sentence why there are none */
export function judgeFile(input: Uint8Array | string, options: CommandOptions): DriftDocument {
  if (typeof input === "string") return refused(input, []);
  const read = readResults(input, options);
  if (read.outcome === "refused") return refused(read.reason, read.wrongRows);
  const tolerance = options.toleranceNm === null ? [] : [{ fromNm: 0, toNm: 100000, toleranceNm: options.toleranceNm }];
  const result = assessDrift(read.checks, { tolerance, crossingCoverage });
  const remarks = [...read.remarks];
  if (options.toleranceNm === null) remarks.push("Without --tolerance there is no crossing date.");
  const [segment] = result.segments;
  if (segment?.crossing.past === true) remarks.push("The error is already beyond the tolerance.");
  const scale = result.kind === "scale";
  return {
    outcome: result.outcome,
    reason: result.reason,
    kind: result.kind,
    why: result.why,
    signals: result.signals,
    rateNmPerYear: scale ? result.scaleRateNmPerYear : result.rateNmPerYear,
    rateUnc: scale ? result.scaleRateUncNmPerYear : result.rateUncNmPerYear,
    crossing:
      segment === undefined
        ? null
        : {
            date: segment.crossing.date,
            low: segment.crossing.low,
            high: segment.crossing.high,
            coverage: segment.crossing.coverage,
          },
    charts: result.charts,
    checks: result.checks,
    probabilities: result.probabilities,
    rates: {
      midNmPerYear: result.rateNmPerYear,
      midUnc: result.rateUncNmPerYear,
      scaleNmPerYear: result.scaleRateNmPerYear,
      scaleUnc: result.scaleRateUncNmPerYear,
    },
    step: result.step,
    temperature: result.temperature,
    odd: result.odd,
    probabilityOut: segment?.days ?? [],
    columns: read.columns,
    wrongRows: read.wrongRows,
    remarks,
    coreVersion,
  };
}

function refused(reason: string, wrongRows: WrongRow[]): DriftDocument {
  return {
    outcome: "refused",
    reason,
    kind: null,
    why: null,
    signals: [],
    rateNmPerYear: null,
    rateUnc: null,
    crossing: null,
    charts: [],
    checks: 0,
    probabilities: null,
    rates: { midNmPerYear: null, midUnc: null, scaleNmPerYear: null, scaleUnc: null },
    step: null,
    temperature: null,
    odd: null,
    probabilityOut: [],
    columns: {},
    wrongRows,
    remarks: [],
    coreVersion,
  };
}
