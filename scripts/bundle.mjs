/** Bundles programs that run in Node, with esbuild. */
import fs from "node:fs";
import path from "node:path";
import { build } from "esbuild";
import { projectDir } from "./processes.mjs";

/** @type {import("esbuild").BuildOptions} */
const forNode = { bundle: true, platform: "node", target: "node20", format: "esm", logLevel: "warning" };
const apiDir = path.join(projectDir, "packages/api");

/**
 * Programs of packages/api.
 *
 * @param {Record<string, string>} programs name in the build -> source relative to packages/api/src
 * @param {string} outdir below packages/api, where the api's packages are found at run time
 */
export async function bundleServerPrograms(programs, outdir) {
  const { dependencies } = JSON.parse(fs.readFileSync(path.join(apiDir, "package.json"), "utf8"));
  // The api's own dependencies stay packages; the core is bundled, and whatever only the core depends on with it.
  const external = Object.keys(dependencies)
    .filter((name) => !name.startsWith("@wavekeep/"))
    .flatMap((name) => [name, `${name}/*`]);
  await build({
    ...forNode,
    absWorkingDir: apiDir,
    entryPoints: Object.fromEntries(Object.entries(programs).map(([name, file]) => [name, path.join("src", file)])),
    outdir,
    external,
    sourcemap: true,
  });
}

/**
 * One program that stands on the core alone, with everything it needs in one file.
 *
 * @param {string} entry relative to the project
 * @param {string} outfile
 */
export async function bundleCommand(entry, outfile) {
  await build({ ...forNode, absWorkingDir: projectDir, entryPoints: [entry], outfile });
}
