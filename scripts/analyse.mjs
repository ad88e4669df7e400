/** `npm run -s analyse -- FILE...`: installs and bundles what is missing, then hands over. stdout holds results only. */
import path from "node:path";
import { pathToFileURL } from "node:url";
import { ensureCommand } from "./build.mjs";
import { ensureInstall, runCommand } from "./setup.mjs";

await runCommand(async () => {
  await ensureInstall((line) => void process.stderr.write(`${line}\n`));
  const program = await ensureCommand("command-line/main-analyse.ts");
  // npm runs scripts in the project folder; file names are meant from where the person stands.
  process.chdir(process.env["INIT_CWD"] ?? process.cwd());
  await import(pathToFileURL(path.resolve(program)).href);
  return Number(process.exitCode ?? 0);
});
