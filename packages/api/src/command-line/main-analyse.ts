import { analyse } from "./analyse.ts";

process.exitCode = analyse(
  process.argv.slice(2),
  (text) => process.stdout.write(`${text}\n`),
  (text) => process.stderr.write(`${text}\n`),
);
