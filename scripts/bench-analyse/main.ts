/**
 * Times of the measuring core, warm, parse to verdict, on the mix of simulated captures that the tests use: elapsed and processor time,
 * beside a fixed piece of plain arithmetic timed in the same run, so that a busy or slow machine shows.
 */
import { analyseCapture, readCapture } from "@wavekeep/core";
import { simulatedCheck } from "../../tests/external/support/simulated-check.ts";

const warmUp = 200;
const measured = 300;

interface Times {
  elapsedMs: number;
  processorMs: number;
}

function timesOf(action: (k: number) => void, rounds = measured): Times {
  for (let k = 0; k < Math.min(warmUp, rounds); k += 1) action(k);
  const elapsed: number[] = [];
  const processor: number[] = [];
  for (let k = 0; k < rounds; k += 1) {
    const cpu = process.cpuUsage();
    const begun = performance.now();
    action(k);
    elapsed.push(performance.now() - begun);
    const { user, system } = process.cpuUsage(cpu);
    processor.push((user + system) / 1000);
  }
  const medianOf = (values: number[]): number => values.sort((a, b) => a - b)[values.length >> 1]!;
  return { elapsedMs: medianOf(elapsed), processorMs: medianOf(processor) };
}

function row(what: string, { elapsedMs, processorMs }: Times): void {
  process.stdout.write(`| ${what} | ${elapsedMs.toFixed(2)} | ${processorMs.toFixed(2)} |\n`);
}

/** A hundred thousand rows as an instrument writes them. */
function longCapture(): Uint8Array {
  let text = "Wavelength (nm)\tCounts\n";
  for (let i = 0; i < 100_000; i += 1) text += `${(200 + 0.005 * i).toFixed(3)}\t${900 + ((i * 7919) % 97)}\n`;
  return new TextEncoder().encode(text);
}

export function main(): number {
  process.stdout.write("| what (median, ms) | elapsed | processor |\n| --- | --- | --- |\n");
  row(
    "a million square roots, for comparison",
    timesOf(() => {
      let sum = 0;
      for (let i = 0; i < 1_000_000; i += 1) sum += Math.sqrt(i);
      if (sum < 0) throw new Error("never");
    }),
  );
  for (const mode of ["earlier-axis", "range"] as const) {
    const checks = Array.from({ length: 60 }, (_, k) => simulatedCheck(500 + k, mode));
    const files = checks.map(({ sim }) => new TextEncoder().encode(sim.text));
    row(
      `2,048 px, ${mode === "range" ? "range" : "earlier axis"}, parse to verdict`,
      timesOf((k) => void analyseCapture(files[k % files.length]!, checks[k % checks.length]!.setup)),
    );
  }
  const long = longCapture();
  row(
    "100,000 rows read",
    timesOf(() => void readCapture(long, "long.txt"), 30),
  );
  return 0;
}
