import { analyseFile } from "./analyse-file.ts";
import { readOptions } from "./options.ts";
import { tableOf } from "./table.ts";
import { UsageError } from "./usage.ts";

/** @returns the exit code: 0, 1 when a file was refused, 2 when the command itself could not be understood */
export function main(argv: string[]): number {
  let options;
  try {
    options = readOptions(argv);
  } catch (error) {
    if (!(error instanceof UsageError)) throw error;
    process.stderr.write(`${error.message}\n`);
    return 2;
  }
  let code = 0;
  for (const file of options.files) {
    const result = analyseFile(file, options);
    process.stdout.write(options.json ? `${JSON.stringify(result)}\n` : tableOf(result));
    if (result.outcome === "refused") code = 1;
  }
  return code;
}
