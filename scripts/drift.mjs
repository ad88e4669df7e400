/** `npm run -s drift -- RESULTS.csv --tolerance 0.5`: installs and bundles what is missing, then hands over. stdout holds results only. */
import { pathToFileURL } from "node:url";
import { ensureCommand } from "./build.mjs";
import { ensureInstall, runCommand } from "./setup.mjs";

await runCommand(async () => {
  await ensureInstall((line) => void process.stderr.write(`${line}\n`));
  const { main } = await import(pathToFileURL(await ensureCommand("scripts/drift")).href);
  // npm runs scripts in the project folder; file names are meant from where the person stands.
  process.chdir(process.env["INIT_CWD"] ?? process.cwd());
  return main(process.argv.slice(2));
});
