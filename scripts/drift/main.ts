import fs from "node:fs";
import { judgeFile } from "./judge-file.ts";
import { readOptions, UsageError } from "./options.ts";
import { textOf } from "./text.ts";

/** @returns the exit code: 0, 1 when the table was refused, 2 when the command itself could not be understood */
export function main(argv: string[]): number {
  let options;
  try {
    options = readOptions(argv);
  } catch (error) {
    if (!(error instanceof UsageError)) throw error;
    process.stderr.write(`${error.message}\n`);
    return 2;
  }
  let bytes: Uint8Array | null = null;
  let problem = "";
  try {
    bytes = fs.readFileSync(options.file);
  } catch (error) {
    problem = `The file could not be opened (${(error as NodeJS.ErrnoException).code ?? "unknown"}).`;
  }
  const document = judgeFile(bytes ?? problem, options);
  process.stdout.write(options.json ? `${JSON.stringify(document)}\n` : textOf(document));
  return document.outcome === "refused" ? 1 : 0;
}
