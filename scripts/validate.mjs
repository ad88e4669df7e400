/**
 * `npm run validate [-- --quick] [-- --only WORD]`: every study of the measuring core in its full form, and the report docs/validation.md
 * with its drawings. The quick form, and a choice of studies, print the report and write nothing.
 */
import { spawn } from "node:child_process";
import { once } from "node:events";
import path from "node:path";
import { projectDir } from "./processes.mjs";
import { ensureInstall, runCommand } from "./setup.mjs";

await runCommand(async () => {
  await ensureInstall((line) => void process.stderr.write(`${line}\n`));
  const main = path.join(projectDir, "scripts/validate/main.ts");
  const child = spawn(process.execPath, ["--import", "tsx", main, ...process.argv.slice(2)], {
    cwd: projectDir,
    stdio: "inherit",
  });
  const [code] = await once(child, "exit");
  return code ?? 1;
});
