/** What a study is: parts that can be computed side by side in processes of their own, and a section of the report made of their results. */
export interface Size {
  isQuick: boolean;
}

export interface Section {
  markdown: string;
  /** File name below docs/validation -> drawing. */
  drawings: Record<string, string>;
  /** What falls short of what is demanded, a sentence each. */
  short: string[];
}

export interface Study<Arguments, Result> {
  name: string;
  parts(size: Size): Arguments[];
  /** Plain data in, plain data out: crosses a process. */
  run(part: Arguments): Result;
  write(results: { part: Arguments; result: Result }[]): Section;
}

/** A table in Markdown. */
export function table(headings: string[], rows: string[][]): string {
  const line = (cells: string[]): string => `| ${cells.join(" | ")} |`;
  return [line(headings), line(headings.map(() => "---")), ...rows.map(line)].join("\n");
}

export function shareUnc(part: number, whole: number): number {
  const p = part / whole;
  return Math.sqrt(Math.max(p * (1 - p), 1 / (3 * whole)) / whole);
}
