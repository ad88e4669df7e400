/**
 * The worker thread in which captures are read and analysed: the event loop never waits for the core.
 * Everything in and out is plain data; typed arrays stay on this side.
 */
import {
  analyseCaptures,
  readCapture,
  type AnalysedCheck,
  type AnalysisSetup,
  type CaptureInput,
  type ReadOptions,
} from "@wavekeep/core";
import type { CaptureReceipt } from "../contract/checks.ts";
import { firstRowsOf } from "../captures/first-rows.ts";

export type Reading =
  { reading: NonNullable<CaptureReceipt["reading"]>; refusal: null } | { reading: null; refusal: string };

export type WorkerTask =
  | { kind: "read"; bytes: Uint8Array; name: string; options: ReadOptions }
  | { kind: "analyse"; captures: CaptureInput[]; setup: AnalysisSetup };

export default function run(task: WorkerTask): Reading | AnalysedCheck {
  return task.kind === "read" ? read(task.bytes, task.name, task.options) : analyseCaptures(task.captures, task.setup);
}

function read(bytes: Uint8Array, name: string, options: ReadOptions): Reading {
  const found = readCapture(bytes, name, options);
  if (found.outcome === "refused") return { reading: null, refusal: found.reason };
  const { facts, spectrum } = found;
  return {
    refusal: null,
    reading: {
      rows: facts.rows,
      columns: facts.columns,
      axisColumn: facts.axisColumn,
      intensityColumn: facts.intensityColumn,
      axisKind: spectrum.axisKind,
      axisUnit: facts.axisUnit,
      first: facts.first,
      last: facts.last,
      remarks: facts.remarks,
      delimiter: facts.delimiter,
      decimal: facts.decimal,
      metadata: facts.metadata,
      firstRows: firstRowsOf(bytes, facts),
    },
  };
}
