/**
 * Times and memory of the measuring core beside the same job done with general-purpose packages from npm, in one run on one thread, on
 * captures of the validation's independent simulator (invented data). Medians after 200 captures; a fixed piece of plain arithmetic is
 * timed in the same run, so that a busy or slow machine shows.
 */
import { execFileSync } from "node:child_process";
import { setFlagsFromString } from "node:v8";
import { runInNewContext } from "node:vm";
import {
  analyseCapture,
  builtInLineList,
  defaultSetup,
  linesOf,
  readCapture,
  type Analysis,
  type LineResult,
} from "@wavekeep/core";
import { compare, setupFor, type Judged, type ModeName } from "../../tests/validation/judge.ts";
import { mixes, simulate, type Simulated } from "../../tests/validation/simulator/index.ts";
import { medianOf } from "../../tests/validation/study.ts";
import { readTable, runPipeline, type PipelineResult } from "./npm-pipeline.ts";

const warmUp = 200;
const measured = 200;
const distinct = 60;
const words: Record<ModeName, string> = { "earlier-axis": "earlier axis", range: "range", none: "the elements alone" };

setFlagsFromString("--expose-gc");
const collect = runInNewContext("gc") as () => void;

interface Cost {
  elapsedMs: number;
  memoryMb: number;
}

/** Median elapsed time after the warm-up, and what one run allocates on the heap and in buffers. */
function costOf(action: (k: number) => unknown, rounds = measured, warm = warmUp): Cost {
  for (let k = 0; k < warm; k += 1) action(k);
  const elapsed: number[] = [];
  for (let k = 0; k < rounds; k += 1) {
    const begun = performance.now();
    action(k);
    elapsed.push(performance.now() - begun);
  }
  const memory: number[] = [];
  for (let k = 0; k < 7; k += 1) {
    collect();
    const before = process.memoryUsage();
    action(k);
    const after = process.memoryUsage();
    memory.push(after.heapUsed - before.heapUsed + after.arrayBuffers - before.arrayBuffers);
  }
  return { elapsedMs: medianOf(elapsed), memoryMb: medianOf(memory) / 2 ** 20 };
}

const print = (line: string): void => void process.stdout.write(`${line}\n`);
const row = (what: string, { elapsedMs, memoryMb }: Cost): void =>
  print(`| ${what} | ${elapsedMs.toFixed(2)} | ${memoryMb.toFixed(1)} |`);

function capturesOf(samples: number, seed: number): Simulated[] {
  // Arrays of pixels with Gaussian lines: "one shape", and files that both ways can read.
  const mix = { ...mixes.main, chance: { ...mixes.main.chance, ownAxis: 0, oddShape: 0, smoothing: 0 } };
  return Array.from({ length: distinct }, (_, k) => simulate(seed + k, mix, { samples, onlyUnnamedAxes: true }));
}

/** A hundred thousand rows as an instrument writes them, mercury and argon on an even axis. */
function longCapture(): Uint8Array {
  const lines = linesOf(builtInLineList, ["Hg I", "Ar I"], 205, 695);
  const counts = new Float64Array(100_000);
  for (const line of lines) {
    const at = (line.wavelengthAirNm! - 200) / 0.005;
    const height = 30 * Math.sqrt(line.relativeIntensity ?? 1);
    for (let i = Math.max(0, Math.round(at) - 60); i < Math.min(counts.length, Math.round(at) + 60); i += 1)
      counts[i] = counts[i]! + height * Math.exp(-0.5 * ((i - at) / 9) ** 2);
  }
  let text = "Wavelength (nm)\tCounts\n";
  for (let i = 0; i < counts.length; i += 1)
    text += `${(200 + 0.005 * i).toFixed(3)}\t${Math.round(900 + counts[i]! + ((i * 7919) % 97) / 10)}\n`;
  return new TextEncoder().encode(text);
}

const publishedOf = new Map<string, { nm: number; strength: number }[]>();
function published(elements: string[]): { nm: number; strength: number }[] {
  const key = elements.join(",");
  let found = publishedOf.get(key);
  if (found === undefined) {
    const lines = linesOf(builtInLineList, elements).filter((line) => line.wavelengthAirNm !== null);
    const top = new Map<string, number>();
    for (const line of lines)
      top.set(line.spectrum, Math.max(top.get(line.spectrum) ?? 1, line.relativeIntensity ?? 0));
    found = lines
      .map((line) => ({
        nm: line.wavelengthAirNm!,
        strength: ((line.relativeIntensity ?? 0) / top.get(line.spectrum)!) * (line.spectrum.endsWith(" I") ? 1 : 0.1),
      }))
      .sort((a, b) => a.nm - b.nm);
    publishedOf.set(key, found);
  }
  return found;
}

function pipelineOf(sim: Simulated, text: string, mode: "range" | "earlier-axis"): PipelineResult {
  const hint =
    mode === "range"
      ? ({ kind: "range", ...sim.range } as const)
      : ({ kind: "earlier-axis", coefficients: sim.earlierCoefficients! } as const);
  const ceiling = 0.999 * sim.fullScaleCounts * sim.scansSummed;
  return runPipeline(text, ceiling, published(sim.elements), hint);
}

/** The pipeline's result in the core's form, so that the same judge looks at both. */
function asAnalysis(result: PipelineResult, sim: Simulated): Analysis {
  const lines = result.lines.map(
    (line) =>
      ({
        position: line.position,
        positionUnc: 0,
        wavelengthNm: line.wavelengthNm,
        order: 1,
        blendOfNm: [],
        flags: [],
        errorNm: null,
        errorExpandedUncNm: null,
        usedInAxis: line.isUsed,
        peakHeightCounts: line.height,
      }) as unknown as LineResult,
  );
  const axis = {
    coefficients: result.coefficients ?? [],
    firstPx: sim.first,
    lastPx: sim.last,
    chebyshevCovariance: null,
    degreesOfFreedom: null,
    meaning: "standard-air",
  };
  return {
    outcome: result.coefficients === null ? "unidentified" : "identified",
    reason: null,
    lines,
    dispersion: result.coefficients === null ? null : { axis },
  } as unknown as Analysis;
}

function accuracy(judged: Judged[]): string {
  const centres = judged.flatMap((one) => one.centreOff.map(Math.abs));
  const axes = judged.map((one) => one.axisOffSamples).filter((value) => !Number.isNaN(value));
  const solved = judged.filter((one) => one.isSolved).length;
  const wrong = judged.reduce((sum, one) => sum + one.wrong.length, 0);
  return `${medianOf(centres).toFixed(4)} | ${medianOf(axes).toFixed(3)} | ${((100 * solved) / judged.length).toFixed(0)} % | ${wrong} `;
}

/** A mercury-to-xenon lamp's capture with about sixty lines. */
function sixtyLines(): { sim: Simulated; lines: number } {
  const mix = { ...mixes.plain, lamps: ["HgArNeKrXe"] };
  for (let seed = 1; ; seed += 1) {
    const sim = simulate(seed, mix, { samples: 2048, onlyUnnamedAxes: true });
    const { analysis } = analyseCapture(new TextEncoder().encode(sim.text), setupFor(sim, "earlier-axis"));
    if (analysis.lines.length >= 56 && analysis.lines.length <= 64) return { sim, lines: analysis.lines.length };
  }
}

/** Time of the first capture of a process, for the child process that measures it. */
export function first(): void {
  const sim = capturesOf(2048, 9100)[0]!;
  const bytes = new TextEncoder().encode(sim.text);
  const setup = setupFor(sim, "range");
  const begun = performance.now();
  analyseCapture(bytes, setup);
  process.stdout.write(String(performance.now() - begun));
}

export function main(): number {
  print(`Node ${process.versions.node}, one thread, medians after ${warmUp} captures (invented data)\n`);
  print("| what | ms | memory taken, MiB |\n| --- | --- | --- |");
  row(
    "a million square roots, for comparison",
    costOf(() => {
      let sum = 0;
      for (let i = 0; i < 1_000_000; i += 1) sum += Math.sqrt(i);
      return sum;
    }),
  );
  const child = execFileSync(process.execPath, [
    "-e",
    `import(${JSON.stringify(import.meta.url)}).then((m) => m.first())`,
  ]);
  print(`| first capture of a process, 2,048 px, range | ${Number(child).toFixed(0)} | |`);

  const sets = new Map([1024, 2048, 3648].map((samples) => [samples, capturesOf(samples, 9000 + samples)]));
  const bytesOf = (sims: Simulated[]): Uint8Array[] => sims.map((sim) => new TextEncoder().encode(sim.text));
  const at2048 = bytesOf(sets.get(2048)!);
  row(
    "read, 2,048 px",
    costOf((k) => readCapture(at2048[k % distinct]!, "a.txt")),
  );
  const texts2048 = sets.get(2048)!.map((sim) => sim.text);
  row(
    "read with csv-parse, 2,048 px",
    costOf((k) => readTable(texts2048[k % distinct]!)),
  );
  const long = longCapture();
  row(
    "read, 100,000 rows",
    costOf(() => readCapture(long, "long.txt"), 20, 20),
  );
  const longText = new TextDecoder().decode(long);
  row(
    "read with csv-parse, 100,000 rows",
    costOf(() => readTable(longText), 5, 3),
  );
  const longSetup = defaultSetup({ elements: ["Hg", "Ar"], mode: { kind: "earlier-axis", axis: "own" } });
  row(
    "analyse, 100,000 rows, earlier axis",
    costOf(() => analyseCapture(long, longSetup), 15, 15),
  );

  const costs = new Map<string, Cost>();
  for (const [samples, sims] of sets) {
    const bytes = bytesOf(sims);
    for (const mode of ["earlier-axis", "range", "none"] as const) {
      const setups = sims.map((sim) => setupFor(sim, mode));
      const cost = costOf(
        (k) => analyseCapture(bytes[k % distinct]!, setups[k % distinct]!),
        // The process is warm by the two rows before; a search with the elements alone is long enough for few rounds.
        mode === "none" ? 40 : measured,
        mode === "none" ? 20 : warmUp,
      );
      costs.set(`${samples} ${mode}`, cost);
      row(`analyse, ${samples.toLocaleString("en-GB")} px, ${words[mode]}`, cost);
    }
  }
  const sixty = sixtyLines();
  const sixtyBytes = new TextEncoder().encode(sixty.sim.text);
  const sixtySetup = setupFor(sixty.sim, "none");
  row(
    `analyse, 2,048 px, ${sixty.lines} lines of five elements, the elements alone`,
    costOf(() => analyseCapture(sixtyBytes, sixtySetup), 10, 5),
  );

  print(
    "\nThe same job with csv-parse, ml-gsd, ml-levenberg-marquardt and ml-regression-polynomial, and how near the truth both come:\n",
  );
  print(
    "| captures | ms core | ms packages | times faster | memory core, packages, MiB | centre off, px (core) | axis off, px | solved | wrong lines | centre off, px (packages) | axis off, px | solved | wrong lines |\n| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |",
  );
  for (const [samples, sims] of sets) {
    const bytes = bytesOf(sims);
    for (const mode of ["earlier-axis", "range"] as const) {
      const decoder = new TextDecoder();
      const theirs = costOf((k) => pipelineOf(sims[k % distinct]!, decoder.decode(bytes[k % distinct]!), mode), 40, 20);
      const ours = costs.get(`${samples} ${mode}`)!;
      const judgedOurs = sims.map((sim, k) =>
        compare(analyseCapture(bytes[k]!, setupFor(sim, mode)).analysis, sim, mode),
      );
      const judgedTheirs = sims.map((sim) => compare(asAnalysis(pipelineOf(sim, sim.text, mode), sim), sim, "range"));
      print(
        `| ${samples.toLocaleString("en-GB")} px, ${words[mode]} | ${ours.elapsedMs.toFixed(2)} | ${theirs.elapsedMs.toFixed(1)} | ${(theirs.elapsedMs / ours.elapsedMs).toFixed(1)} | ${ours.memoryMb.toFixed(1)}, ${theirs.memoryMb.toFixed(1)} | ${accuracy(judgedOurs)}| ${accuracy(judgedTheirs)}|`,
      );
    }
  }
  return 0;
}
