/** What services are given: made once at start, handed to every capability's mount function. */
import type { Logger } from "pino";
import type { Analyser } from "./checks/analyser.ts";
import type { Config } from "./config.ts";
import type { Database } from "./db/connection.ts";
import type { Jobs } from "./jobs/jobs.ts";
import type { HeadSigner } from "./records/signing.ts";

export interface Services {
  config: Config;
  db: Database;
  logger: Logger;
  jobs: Jobs;
  signer: HeadSigner;
  analyser: Analyser;
}
