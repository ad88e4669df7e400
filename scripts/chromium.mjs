/** Debian's Chromium for the browser tests: found, or installed as root. Node's own modules only. */
import fs from "node:fs";
import { installDebianPackages } from "./postgres.mjs";
import { PlainError } from "./setup.mjs";

export const chromium = "/usr/bin/chromium";

/**
 * @param {(line: string) => void} [say]
 * @returns {Promise<string>} path of the program
 * @throws {PlainError} with the command to type, where it cannot be installed
 */
export async function ensureChromium(say = () => {}) {
  if (fs.existsSync(chromium)) return chromium;
  const advice = `Chromium is not installed, and the browser tests need it. Install it once with

    sudo apt-get install chromium

and run npm test again.`;
  if (process.getuid?.() !== 0 || !fs.existsSync("/usr/bin/apt-get")) throw new PlainError(advice);
  say("Chromium is not installed: installing Debian's package (once)");
  await installDebianPackages(["chromium"], advice);
  if (!fs.existsSync(chromium)) throw new PlainError(advice);
  return chromium;
}
