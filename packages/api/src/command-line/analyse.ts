/** `npm run -s analyse`: captures on the command line, through the same core as the server. */
import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import {
  analyseCaptures,
  defaultSetup,
  readCapture,
  type AnalysisSetup,
  type FileFacts,
  type IdentificationMode,
  type ReadOptions,
  type Spectrum,
} from "@wavekeep/core";
import {
  analysisDocument,
  documentText,
  readDocument,
  refusedDocument,
  type AnalyseDocument,
} from "./analyse-document.ts";
import { parseOptions, usage, UsageError, type AnalyseOptions } from "./analyse-options.ts";

/** As the server: larger files are refused before they are read. */
const largestFileBytes = 50_000_000;

/**
 * Run the command.
 *
 * @param args  what stands after `--`
 * @param print  one finished document or text
 * @returns exit code: 1 when a file was refused or the options are wrong
 */
export function analyse(args: readonly string[], print: (text: string) => void, warn: (text: string) => void): number {
  let options: AnalyseOptions;
  try {
    options = parseOptions(args);
  } catch (error) {
    if (!(error instanceof UsageError)) throw error;
    warn(error.message);
    return 1;
  }
  if (options.help || options.files.length === 0) {
    warn(usage);
    return options.help ? 0 : 1;
  }
  let exitCode = 0;
  for (const file of options.files) {
    const document = analyseFile(file, options);
    if (document.outcome === "refused") exitCode = 1;
    print(options.json ? JSON.stringify(document) : documentText(document));
  }
  return exitCode;
}

function analyseFile(file: string, options: AnalyseOptions): AnalyseDocument {
  const begun = performance.now();
  const elapsedMs = () => Math.round((performance.now() - begun) * 10) / 10;
  const name = path.basename(file);
  const loaded = loadFile(file);
  if ("reason" in loaded) return refusedDocument({ name, sha256: null }, loaded.reason, elapsedMs());
  const { bytes, sha256 } = loaded;

  const chosen = chooseChannel(bytes, name, options);
  if ("reason" in chosen) return refusedDocument({ name, sha256 }, chosen.reason, elapsedMs());
  const read = readCapture(bytes, name, chosen.reading);
  if (read.outcome === "refused") return refusedDocument({ name, sha256 }, read.reason, elapsedMs());
  const facts: FileFacts = { ...read.facts, sha256 };
  if (options.readOnly) return readDocument(facts, elapsedMs());

  const setup = setupFor(read.spectrum, chosen.reading, options);
  const { analysis } = analyseCaptures([{ name, bytes, sha256, part: "lamp" }], setup);
  if (analysis.outcome === "refused") {
    return refusedDocument(facts, analysis.reason ?? "The capture could not be analysed.", elapsedMs());
  }
  return analysisDocument(facts, analysis, elapsedMs());
}

function loadFile(file: string): { bytes: Uint8Array; sha256: string } | { reason: string } {
  try {
    const { size } = fs.statSync(file);
    if (size > largestFileBytes) {
      return {
        reason: `The file has ${(size / 1e6).toFixed(0)} MB; captures up to 50 MB are taken. Export one spectrum a file.`,
      };
    }
    const bytes = fs.readFileSync(file);
    return { bytes, sha256: createHash("sha256").update(bytes).digest("hex") };
  } catch (error) {
    const { code } = error as NodeJS.ErrnoException;
    const why = code === "ENOENT" ? "there is no such file" : code === "EISDIR" ? "it is a folder" : code;
    return { reason: `${file} could not be read: ${why}.` };
  }
}

/** The reader's options with the wanted intensity column, found by its heading or its number. */
function chooseChannel(
  bytes: Uint8Array,
  name: string,
  { channel, reading }: AnalyseOptions,
): { reading: ReadOptions } | { reason: string } {
  if (channel === null) return { reading };
  const read = readCapture(bytes, name, reading);
  if (read.outcome === "refused") return { reason: read.reason };
  const { columns } = read.facts;
  const byName = columns.findIndex((heading) => heading.trim().toLowerCase() === channel.trim().toLowerCase());
  const index = byName >= 0 ? byName : /^\d+$/.test(channel) ? Number(channel) - 1 : -1;
  if (index < 0 || index >= columns.length) {
    return { reason: `There is no column ${channel}. The columns are: ${columns.join(", ")}.` };
  }
  return { reading: { ...reading, intensityColumn: index } };
}

function setupFor(spectrum: Spectrum, reading: ReadOptions, { setup }: AnalyseOptions): AnalysisSetup {
  return defaultSetup({ ...setup, reading, mode: modeFor(spectrum, setup.mode) });
}

/** Without a range or an earlier axis the file's own wavelengths are what is judged. */
function modeFor(spectrum: Spectrum, mode: IdentificationMode | null): IdentificationMode {
  if (mode === null) return { kind: "earlier-axis", axis: "own" };
  if (mode.kind === "range" || mode.axis === "own") return mode;
  const { positions } = spectrum;
  return { kind: "earlier-axis", axis: { ...mode.axis, firstPx: positions[0]!, lastPx: positions.at(-1)! } };
}
