/** One line a step on the terminal, with what became of it and how long it took. */

/** @param {number} since from performance.now() */
const seconds = (since) => `${((performance.now() - since) / 1000).toFixed(1)} s`;

/**
 * Run a step and show it. Lines said while it runs stand indented below it.
 *
 * @template T
 * @param {string} name
 * @param {(say: (line: string) => void, outcome: (words: string) => void) => Promise<T>} action
 *   `outcome` sets the closing word (default: done)
 * @returns {Promise<T>}
 */
export async function step(name, action) {
  const begun = performance.now();
  let said = false;
  let words = "done";
  process.stdout.write(`  ${name.padEnd(16)} `);
  /** @param {string} line */
  const say = (line) => {
    if (line.trim() === "") return;
    process.stdout.write(`${said ? "" : "\n"}      ${line.trimEnd()}\n`);
    said = true;
  };
  try {
    const value = await action(say, (text) => (words = text));
    process.stdout.write(`${said ? `  ${"".padEnd(16)} ` : ""}${words}, ${seconds(begun)}\n`);
    return value;
  } catch (error) {
    process.stdout.write(`${said ? `  ${"".padEnd(16)} ` : ""}failed after ${seconds(begun)}\n`);
    throw error;
  }
}
