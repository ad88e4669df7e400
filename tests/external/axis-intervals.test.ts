/**
 * Quick form of the study of stated intervals (`support/interval-study.ts`; the full one, 10,000 and more a stage, runs in `npm run validate`): the share
 * that holds lies within what is asked, widened by three standard deviations of the count.
 */
import { afterAll, describe, expect, it } from "vitest";
import { runIntervalStudy, type IntervalStage } from "./support/interval-study.ts";

const table: string[] = [];
afterAll(() => {
  process.stdout.write(`\nStated 95.45 % intervals\n${table.join("\n")}\n`);
});

describe("stated intervals hold", () => {
  it.each<[IntervalStage, number]>([
    ["line-error", 700],
    ["line-error-smoothed", 400],
    ["axis-given-order", 2500],
    ["axis-chosen-order", 2500],
    ["axis-update", 2500],
    ["axis-captures", 80],
  ])("%s, %d intervals", (stage, runs) => {
    const { share, from, to, intervals, held, note } = runIntervalStudy({ runs, seed: 1, stage });
    const spread = 3 * Math.sqrt((0.9545 * 0.0455) / intervals);
    table.push(`${stage}  ${held} of ${intervals}, ${(100 * share).toFixed(1)} %  (${note})`);
    expect(share).toBeGreaterThan(from - spread);
    expect(share).toBeLessThan(Math.min(to + spread, 1));
  });
});
