/** Reading and analysing captures, and drawing reports, in worker threads (piscina), with a limit on time and a plain refusal where it is passed. */
import type { AnalysedCheck, AnalysisSetup, CaptureInput, ReadOptions } from "@wavekeep/core";
import { Piscina } from "piscina";
import { problem } from "../http/problem.ts";
import type { ReportTask } from "../records/report-worker.ts";
import type { Reading, WorkerTask } from "./analysis-worker.ts";

export interface Analyser {
  /** How a file is understood; a file that can't be read is a refusal with its sentence, never an error. */
  read(bytes: Uint8Array, name: string, options?: ReadOptions): Promise<Reading>;
  /** Captures to lines, names, axis, errors, verdict. */
  analyse(captures: CaptureInput[], setup: AnalysisSetup): Promise<AnalysedCheck>;
  /** A report as PDF: the same facts are the same bytes. */
  drawReport(task: ReportTask): Promise<Buffer>;
  close(): Promise<void>;
}

/** Far beyond what the slowest honest capture takes: a hundred thousand rows are analysed in a tenth of a second. */
const timeLimitMs = 60_000;

export interface AnalyserOptions {
  threads?: number;
  /** Told of what went wrong inside a worker: a fault of ours, kept for the log. */
  onFault?: (error: unknown) => void;
}

/** What a task that was stopped or failed is called, and what is not lost by it. */
interface TaskWords {
  what: string;
  where: string;
  kept: string;
  advice: string;
}

/** Start the worker threads. They are idle until asked; `close` ends them. */
export function openAnalyser(options: AnalyserOptions = {}): Analyser {
  // Built, the worker lies beside the server as JavaScript; in development and tests it is the TypeScript source.
  const inSource = import.meta.url.endsWith(".ts");
  const workerFile = (folder: string, name: string): string =>
    new URL(inSource ? `${folder}${name}.ts` : `./${name}.js`, import.meta.url).href;
  const reportWorker = workerFile("../records/", "report-worker");
  const pool = new Piscina({
    filename: workerFile("./", "analysis-worker"),
    minThreads: 0,
    maxThreads: options.threads ?? 2,
    idleTimeout: 30_000,
    ...(inSource ? { execArgv: ["--import", "tsx"] } : {}),
  });
  const onFault = options.onFault ?? (() => {});
  // Without a listener a worker that dies would end the server.
  pool.on("error", onFault);

  const run = async <T>(task: WorkerTask | ReportTask, words: TaskWords, filename?: string): Promise<T> => {
    const limit = AbortSignal.timeout(timeLimitMs);
    try {
      return (await pool.run(task, { signal: limit, ...(filename === undefined ? {} : { filename }) })) as T;
    } catch (error) {
      onFault(error);
      const { what, where, kept, advice } = words;
      if (limit.aborted) {
        throw problem("unusable", `${what} took longer than a minute and was stopped. ${kept}; ${advice}.`);
      }
      throw problem(
        "unusable",
        `${what} failed${where}. ${kept} as they are; the fault has been noted for the people who run Wavekeep.`,
      );
    }
  };
  const ofCaptures = (what: string): TaskWords => ({
    what,
    where: " in the measuring core",
    kept: "The captures are kept",
    advice: "try fewer or shorter ones",
  });
  const ofReport: TaskWords = {
    what: "Drawing the report",
    where: "",
    kept: "The check and its signatures are kept",
    advice: "ask for the report again",
  };
  return {
    read: (bytes, name, readOptions = {}) =>
      run<Reading>({ kind: "read", bytes, name, options: readOptions }, ofCaptures(`Reading ${name}`)),
    analyse: (captures, setup) => run<AnalysedCheck>({ kind: "analyse", captures, setup }, ofCaptures("The analysis")),
    drawReport: async (task) => {
      const bytes = await run<Uint8Array>(task, ofReport, reportWorker);
      return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    },
    close: () => pool.destroy(),
  };
}
