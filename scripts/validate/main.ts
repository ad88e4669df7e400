/**
 * Runs the studies, two processes side by side, and puts the report together. Called by scripts/validate.mjs.
 *
 * docs/validation.md holds everything that the seeds decide, then the day, the core's version and the times of that run. When all that the
 * seeds decide is as it was, the file stays untouched: it changes only when a figure does.
 */
import { spawn } from "node:child_process";
import { once } from "node:events";
import fs from "node:fs";
import os from "node:os";
import path from "node:path";
import { parseArgs } from "node:util";
import { coreVersion } from "@wavekeep/core";
import { identification, timesOf } from "./identification.ts";
import { ownSimulator } from "./own-simulator.ts";
import { bands, diagnosis, drift, intervals, lineFits, strd } from "./stages.ts";
import type { Section, Study } from "./study.ts";

const studies = [identification, ownSimulator, strd, lineFits, intervals, bands, drift, diagnosis] as unknown as Study<
  unknown,
  unknown
>[];
const docs = path.resolve(import.meta.dirname, "../../docs");
const runMark = "## This run\n";

interface Task {
  study: Study<unknown, unknown>;
  part: unknown;
  result: unknown;
  seconds: number;
}

async function inProcess(task: Task): Promise<void> {
  const begun = performance.now();
  const child = spawn(
    process.execPath,
    ["--import", "tsx", import.meta.filename, "--part", JSON.stringify([task.study.name, task.part])],
    {
      stdio: ["ignore", "pipe", "inherit"],
    },
  );
  let output = "";
  child.stdout.setEncoding("utf8").on("data", (chunk: string) => (output += chunk));
  const [code] = (await once(child, "close")) as [number | null];
  if (code !== 0)
    throw new Error(
      `A part of the study "${task.study.name}" ended with ${String(code)}: ${JSON.stringify(task.part)}`,
    );
  task.result = JSON.parse(output);
  task.seconds = (performance.now() - begun) / 1000;
  process.stderr.write(`${task.study.name} ${JSON.stringify(task.part)}: ${task.seconds.toFixed(1)} s\n`);
}

async function runAll(tasks: Task[]): Promise<void> {
  // The drift study is one long piece: it begins first. Two processes take what comes next.
  const waiting = [...tasks].sort((a, b) => Number(b.study.name === "drift") - Number(a.study.name === "drift"));
  const worker = async (): Promise<void> => {
    for (let task = waiting.shift(); task !== undefined; task = waiting.shift()) await inProcess(task);
  };
  await Promise.all(Array.from({ length: Math.min(2, os.availableParallelism()) }, worker));
}

/** Of parts that differ in their seed and size alone, the first ones: a shorter run of the same study. At least one of each stays. */
function firstOf(parts: readonly unknown[], share: number): unknown[] {
  const kindOf = (part: unknown): string =>
    JSON.stringify(part, (key, value: unknown) => (key === "seed" || key === "captures" ? undefined : value));
  const total = new Map<string, number>();
  for (const part of parts) total.set(kindOf(part), (total.get(kindOf(part)) ?? 0) + 1);
  const taken = new Map<string, number>();
  return parts.filter((part) => {
    const kind = kindOf(part);
    const count = (taken.get(kind) ?? 0) + 1;
    taken.set(kind, count);
    return count <= Math.ceil(share * total.get(kind)!);
  });
}

function reportOf(
  tasks: Task[],
  chosen: Study<unknown, unknown>[],
  partShare: number,
): { body: string; drawings: Record<string, string> } {
  const sections: Section[] = chosen.map((study) =>
    study.write(tasks.filter((task) => task.study === study).map(({ part, result }) => ({ part, result }))),
  );
  const short = sections.flatMap((section) => section.short);
  const body = `# Validation of the measuring core

Written by \`npm run validate\`; every figure comes from seeded simulation with known truth, or from published values named beside it. A value after ± is the figure's own standard
uncertainty, from the number of runs. Drawings show two of them on each side; a diamond lies outside what is asked for.
${partShare === 1 ? "" : `\nA shorter run (\`--share ${partShare}\`): the first of each study's parts; the tables say how many captures that are.\n`}
## What falls short

${short.length === 0 ? "Nothing: every figure below is within what is asked for." : short.map((one) => `- ${one}`).join("\n")}

${sections.map((section) => section.markdown).join("\n")}`;
  return {
    body,
    drawings: Object.assign({}, ...sections.map((section) => section.drawings)) as Record<string, string>,
  };
}

async function main(): Promise<number> {
  const { values } = parseArgs({
    options: {
      quick: { type: "boolean", default: false },
      only: { type: "string" },
      share: { type: "string", default: "1" },
      part: { type: "string" },
    },
  });
  if (values.part !== undefined) {
    const [name, part] = JSON.parse(values.part) as [string, unknown];
    process.stdout.write(JSON.stringify(studies.find((study) => study.name === name)!.run(part)));
    return 0;
  }
  const chosen = studies.filter((study) => values.only === undefined || study.name.includes(values.only));
  if (chosen.length === 0) {
    process.stderr.write(`No study is called so. There are: ${studies.map((study) => study.name).join(", ")}.\n`);
    return 2;
  }
  const partShare = Number(values.share);
  if (!(partShare > 0 && partShare <= 1)) {
    process.stderr.write(`--share is a number above 0, at most 1; got "${values.share}".\n`);
    return 2;
  }
  const begun = performance.now();
  const tasks = chosen.flatMap((study) =>
    firstOf(study.parts({ isQuick: values.quick }), partShare).map((part): Task => ({
      study,
      part,
      result: null,
      seconds: 0,
    })),
  );
  await runAll(tasks);
  const { body, drawings } = reportOf(tasks, chosen, partShare);
  const times = `${runMark}
Core ${coreVersion}, ${new Date().toISOString().slice(0, 10)}, Node ${process.versions.node}, ${((performance.now() - begun) / 60_000).toFixed(1)} minutes on ${os.availableParallelism()} cores (${os.cpus()[0]?.model ?? "unknown"}).
${values.only === undefined || identification.name.includes(values.only) ? `Median of a whole analysis, mix main, all sizes, warm: ${timesOf().join(", ")}. (\`npm run bench -- analyse\` measures times.)\n` : ""}`;
  if (values.quick || values.only !== undefined) {
    process.stdout.write(`${body}\n${times}`);
    return 0;
  }
  const file = path.join(docs, "validation.md");
  const former = fs.existsSync(file) ? fs.readFileSync(file, "utf8").split(runMark)[0] : null;
  if (former === `${body}\n`) {
    process.stdout.write("Every figure is as it was: docs/validation.md stays as it is.\n");
    return 0;
  }
  fs.mkdirSync(path.join(docs, "validation"), { recursive: true });
  for (const [name, drawing] of Object.entries(drawings))
    fs.writeFileSync(path.join(docs, "validation", name), drawing);
  fs.writeFileSync(file, `${body}\n${times}`);
  process.stdout.write("docs/validation.md and its drawings are written.\n");
  return 0;
}

process.exitCode = await main();
