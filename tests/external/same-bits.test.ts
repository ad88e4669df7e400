/**
 * The same bits in Node and in headless Chromium: every capture among the fixtures in every mode it allows, 2,000 simulated captures with
 * every line shape and mode, absorption standards, and drift assessments. The libraries that the core imports are in it: jcampconverter reads the packed JCAMP-DX
 * fixtures, ml-regression draws the pairwise slopes of every drift assessment.
 */
import { once } from "node:events";
import fs from "node:fs";
import http from "node:http";
import type { AddressInfo } from "node:net";
import path from "node:path";
import { build } from "esbuild";
import { chromium } from "playwright-core";
import { expect, test } from "vitest";
import { ensureChromium } from "../../scripts/chromium.mjs";
import { defaultSetup, type AnalysisSetup, type LineShapeChoice } from "../../packages/core/src/index.ts";
import { setupFor } from "../validation/judge.ts";
import { mixes, Random, simulate } from "../validation/simulator/index.ts";
import { holmiumCentres, plainScene, recordBands } from "./support/band-generator.ts";
import { bandCases } from "./support/band-study.ts";
import { createDraws, realisticSettings, simulateHistory, toDriftChecks, trueKinds } from "./support/drift-history.ts";
import { canonicalResult, digestOf, type SameBitsJob } from "./support/same-bits-jobs.ts";

const fixtures = path.resolve(import.meta.dirname, "../fixtures");
const simulatedCaptures = 2000;
const shapes: (LineShapeChoice | undefined)[] = [
  undefined,
  "automatic",
  "gaussian",
  "lorentzian",
  "voigt",
  "pseudo-voigt",
  "exponentially-modified-gaussian",
  "box",
  "empirical",
];

function filesBelow(folder: string): string[] {
  return fs
    .readdirSync(folder, { withFileTypes: true })
    .flatMap((entry) =>
      entry.isDirectory()
        ? filesBelow(path.join(folder, entry.name))
        : /\.(csv|txt|tsv|jdx|dx)$/.test(entry.name) && !entry.name.endsWith(".truth.csv")
          ? [path.join(folder, entry.name)]
          : [],
    )
    .sort();
}

function fixtureJobs(): SameBitsJob[] {
  const jobs: SameBitsJob[] = [];
  for (const file of filesBelow(path.join(fixtures, "capture-text")))
    jobs.push({ kind: "read-bytes", name: path.basename(file), base64: fs.readFileSync(file, "base64") });
  for (const file of filesBelow(path.join(fixtures, "captures"))) {
    const isArgon = path.basename(file).startsWith("ar-");
    const range = isArgon ? { firstNm: 540, lastNm: 970 } : { firstNm: 545, lastNm: 658 };
    const modes: AnalysisSetup["mode"][] = [{ kind: "range", ...range }, { kind: "none" }];
    if (isArgon) modes.push({ kind: "earlier-axis", axis: "own" });
    for (const mode of modes)
      for (const lineShape of ["gaussian", "automatic"] as const)
        jobs.push({
          kind: "analyse-bytes",
          name: `${path.basename(file)} ${mode.kind} ${lineShape}`,
          base64: fs.readFileSync(file, "base64"),
          setup: defaultSetup({ elements: [isArgon ? "Ar" : "Ne"], mode, lineShape }),
        });
  }
  return jobs;
}

/**
 * Five hundred scenes, each recorded four times with noise of its own: once as the file of an instrument, then as plain columns. Spectra are
 * short: what is compared is every branch of the arithmetic, not its length (the captures among the fixtures are long).
 */
function simulatedJobs(): SameBitsJob[] {
  const jobs: SameBitsJob[] = [];
  for (let scene = 0; jobs.length < simulatedCaptures; scene += 1) {
    // A few by the elements alone: they cost most.
    const usual = scene % 3 === 0 ? "range" : "earlier-axis";
    const isAlone = scene % 100 === 50;
    const mix = { ...mixes[scene % 4 === 0 ? "hard" : "main"], leastLines: 3 };
    const sim = simulate(70_000 + scene, mix, { samples: scene % 10 === 0 ? 512 : 256, onlyUnnamedAxes: true });
    const random = new Random(scene, 5);
    const spread = 1e-4 * sim.fullScaleCounts * sim.scansSummed;
    for (let take = 0; take < 4; take += 1) {
      const mode = isAlone && take === 0 ? "none" : usual;
      const setup = setupFor(sim, mode, take === 3 ? shapes[scene % shapes.length] : undefined);
      const rows = Array.from(sim.counts, (value, i) => `${i}\t${(value + spread * random.normal()).toFixed(2)}`);
      jobs.push({ kind: "analyse", name: sim.name, text: take === 0 ? sim.text : rows.join("\n"), setup });
    }
  }
  return jobs;
}

/** Spectra of an absorption standard, as text with named columns. */
function absorptionJobs(): SameBitsJob[] {
  return bandCases.map(({ name, scene }, k) => {
    const whole = { ...plainScene, ...scene };
    const { wavelengthsNm, ordinate } = recordBands(whole, 300 + k, 0.3);
    const rows = Array.from(wavelengthsNm, (nm, i) => `${nm.toFixed(2)}\t${ordinate[i]!}`);
    const bands = holmiumCentres.map((wavelengthNm) => ({ wavelengthNm, expandedUncNm: 0.1, coverageFactor: 2 }));
    const setup = defaultSetup({
      sampleKind: "absorption",
      spectralBandwidthNm: whole.bandwidthNm,
      bandCertificate: { material: "holmium-like, invented", bandwidthNm: whole.bandwidthNm, bands },
    });
    return { kind: "analyse" as const, name, text: `Wavelength (nm)\t${whole.ordinate}\n${rows.join("\n")}\n`, setup };
  });
}

function driftJobs(): SameBitsJob[] {
  const draws = createDraws(11);
  return Array.from({ length: 24 }, (_, k) => {
    const history = simulateHistory(trueKinds[k % trueKinds.length]!, draws, realisticSettings);
    const settings = { tolerance: [{ fromNm: 0, toNm: 10_000, toleranceNm: 6 * history.checkSdNm }] };
    return { kind: "drift" as const, name: `drift ${k}`, history: toDriftChecks(history), settings };
  });
}

async function workerBundle(): Promise<string> {
  const result = await build({
    entryPoints: [path.join(import.meta.dirname, "support/same-bits-worker.ts")],
    bundle: true,
    write: false,
    platform: "browser",
    target: "es2023",
    format: "iife",
    logLevel: "error",
  });
  return result.outputFiles[0]!.text;
}

test("Node and Chromium give the same bits", { timeout: 600_000 }, async () => {
  const jobs = [...fixtureJobs(), ...absorptionJobs(), ...driftJobs(), ...simulatedJobs()];
  const pages: Record<string, [type: string, body: string]> = {
    "/": ["text/html", "<!doctype html><title>same bits</title>"],
    "/worker.js": ["text/javascript", await workerBundle()],
    "/jobs.json": ["application/json", JSON.stringify(jobs)],
  };
  const server = http.createServer((request, response) => {
    const page = pages[request.url ?? ""];
    response.writeHead(page === undefined ? 404 : 200, { "content-type": page?.[0] ?? "text/plain" }).end(page?.[1]);
  });
  server.listen(0, "127.0.0.1");
  await once(server, "listening");
  const browser = await chromium.launch({ executablePath: await ensureChromium() });
  try {
    const page = await browser.newPage();
    await page.goto(`http://127.0.0.1:${(server.address() as AddressInfo).port}/`);
    const loaded = await page.evaluate(
      () =>
        new Promise<number>((resolve, reject) => {
          const worker = new Worker("/worker.js");
          const here = window as unknown as { worker: Worker; digests: Promise<string[]> };
          here.worker = worker;
          here.digests = new Promise((done) => {
            worker.addEventListener("message", ({ data }) => {
              if (data.failure !== undefined) reject(new Error(data.failure));
              if (data.loaded !== undefined) resolve(data.loaded);
              if (data.digests !== undefined) done(data.digests);
            });
          });
          worker.addEventListener("error", (event) => reject(new Error(event.message)));
        }),
    );
    expect(loaded).toBe(jobs.length);
    // The browser computes on the other core meanwhile.
    const inNode: string[] = [];
    for (const job of jobs) inNode.push(await digestOf(job));
    const inBrowser = await page.evaluate(() => (window as unknown as { digests: Promise<string[]> }).digests);
    expect(inBrowser.length).toBe(jobs.length);
    const different = jobs.flatMap((job, i) => (inNode[i] === inBrowser[i] ? [] : [i]));
    const first = different[0];
    if (first !== undefined) {
      const theirs = await page.evaluate(
        (index) =>
          new Promise<string>((resolve) => {
            const { worker } = window as unknown as { worker: Worker };
            worker.addEventListener("message", ({ data }) => resolve(data.text));
            worker.postMessage(index);
          }),
        first,
      );
      const ours = canonicalResult(jobs[first]!);
      let at = 0;
      while (at < ours.length && ours[at] === theirs[at]) at += 1;
      expect.fail(
        `${different.length} of ${jobs.length} differ, first ${jobs[first]!.name}: Node …${ours.slice(Math.max(0, at - 80), at + 60)}…, Chromium …${theirs.slice(Math.max(0, at - 80), at + 60)}…`,
      );
    }
    // The comparison is about results, not about one sentence said 2,000 times.
    expect(new Set(inNode).size).toBeGreaterThan(0.9 * jobs.length);
    expect([...absorptionJobs(), ...jobs.slice(-50)].filter((job) => canonicalResult(job).startsWith("threw"))).toEqual(
      [],
    );
  } finally {
    await browser.close();
    server.close();
  }
});
