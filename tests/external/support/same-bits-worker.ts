/** The browser's side of the test: fetches the jobs, says so, runs them, posts the digests. */
import { canonicalResult, digestOf, type SameBitsJob } from "./same-bits-jobs.ts";

const reply = (message: unknown): void =>
  (self as unknown as { postMessage(value: unknown): void }).postMessage(message);

async function run(): Promise<void> {
  const response = await fetch("/jobs.json");
  const jobs = (await response.json()) as SameBitsJob[];
  reply({ loaded: jobs.length });
  const digests: string[] = [];
  for (const job of jobs) digests.push(await digestOf(job));
  reply({ digests });
  self.addEventListener("message", (event: MessageEvent<number>) =>
    reply({ text: canonicalResult(jobs[event.data]!) }),
  );
}

run().catch((error: unknown) => reply({ failure: String(error) }));
