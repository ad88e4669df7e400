/** Bundles programs of packages/api with esbuild. */
import fs from "node:fs";
import path from "node:path";
import { build } from "esbuild";
import { projectDir } from "./processes.mjs";

const apiDir = path.join(projectDir, "packages/api");

/**
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
    absWorkingDir: apiDir,
    entryPoints: Object.fromEntries(Object.entries(programs).map(([name, file]) => [name, path.join("src", file)])),
    outdir,
    bundle: true,
    platform: "node",
    target: "node20",
    format: "esm",
    external,
    sourcemap: true,
    logLevel: "warning",
  });
}
