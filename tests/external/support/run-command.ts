/** Calls a command line's `main` as a shell would: what it printed on either stream, and the code it ends with. */
import { vi } from "vitest";

export function runCommand(
  main: (argv: string[]) => number,
  argv: string[],
): { code: number; out: string; err: string } {
  let out = "";
  let err = "";
  const stdout = vi.spyOn(process.stdout, "write").mockImplementation((chunk) => (out += String(chunk)) !== "");
  const stderr = vi.spyOn(process.stderr, "write").mockImplementation((chunk) => (err += String(chunk)) !== "");
  try {
    return { code: main(argv), out, err };
  } finally {
    stdout.mockRestore();
    stderr.mockRestore();
  }
}
