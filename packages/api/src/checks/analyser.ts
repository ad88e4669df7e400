/** Reading and analysing captures in worker threads (piscina), with a limit on time and a plain refusal where it is passed. */
import type { AnalysedCheck, AnalysisSetup, CaptureInput, ReadOptions } from "@wavekeep/core";
import { Piscina } from "piscina";
import { problem } from "../http/problem.ts";
import type { Reading, WorkerTask } from "./analysis-worker.ts";

export interface Analyser {
  /** How a file is understood; a file that can't be read is a refusal with its sentence, never an error. */
  read(bytes: Uint8Array, name: string, options?: ReadOptions): Promise<Reading>;
  /** Captures to lines, names, axis, errors, verdict. */
  analyse(captures: CaptureInput[], setup: AnalysisSetup): Promise<AnalysedCheck>;
  close(): Promise<void>;
}

/** Far beyond what the slowest honest capture takes: a hundred thousand rows are analysed in a tenth of a second. */
const timeLimitMs = 60_000;

export interface AnalyserOptions {
  threads?: number;
  /** Told of what went wrong inside a worker: a fault of ours, kept for the log. */
  onFault?: (error: unknown) => void;
}

/** Start the worker threads. They are idle until asked; `close` ends them. */
export function openAnalyser(options: AnalyserOptions = {}): Analyser {
  // Built, the worker lies beside the server as JavaScript; in development and tests it is the TypeScript source.
  const inSource = import.meta.url.endsWith(".ts");
  const pool = new Piscina({
    filename: new URL(inSource ? "./analysis-worker.ts" : "./analysis-worker.js", import.meta.url).href,
    minThreads: 0,
    maxThreads: options.threads ?? 2,
    idleTimeout: 30_000,
    ...(inSource ? { execArgv: ["--import", "tsx"] } : {}),
  });
  const onFault = options.onFault ?? (() => {});
  // Without a listener a worker that dies would end the server.
  pool.on("error", onFault);

  const run = async <T>(task: WorkerTask, what: string): Promise<T> => {
    const limit = AbortSignal.timeout(timeLimitMs);
    try {
      return (await pool.run(task, { signal: limit })) as T;
    } catch (error) {
      onFault(error);
      if (limit.aborted) {
        throw problem(
          "unusable",
          `${what} took longer than a minute and was stopped. The captures are kept; try fewer or shorter ones.`,
        );
      }
      throw problem(
        "unusable",
        `${what} failed in the measuring core. The captures are kept as they are; the fault has been noted for the people who run Wavekeep.`,
      );
    }
  };
  return {
    read: (bytes, name, readOptions = {}) =>
      run<Reading>({ kind: "read", bytes, name, options: readOptions }, `Reading ${name}`),
    analyse: (captures, setup) => run<AnalysedCheck>({ kind: "analyse", captures, setup }, "The analysis"),
    close: () => pool.destroy(),
  };
}
