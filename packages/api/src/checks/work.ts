/** What the services of a check are given. */
import type { Config } from "../config.ts";
import type { Database } from "../db/connection.ts";
import type { Jobs } from "../jobs/jobs.ts";
import type { HeadSigner } from "../records/signing.ts";
import type { Analyser } from "./analyser.ts";

export interface CheckWork {
  db: Database;
  jobs: Jobs;
  signer: HeadSigner;
  analyser: Analyser;
  config: Pick<Config, "publicUrl">;
}

/** Enough to place a hold: its mail and the address in it. */
export type HoldWork = Pick<CheckWork, "jobs" | "config">;
