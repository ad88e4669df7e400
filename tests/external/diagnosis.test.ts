/** Diagnosis of simulated changes: false findings at the stated rate, the true cause among those named; the table is printed. */
import { afterAll, describe, expect, test } from "vitest";
import { diagnosisStudy, diagnosisStudyText, type StudyRow } from "./support/diagnosis-study.ts";

const rows = diagnosisStudy(60, 20260401);
afterAll(() => process.stdout.write(`\n${diagnosisStudyText(rows)}\n`));
const named = (row: StudyRow): [string, StudyRow] => [
  `${row.instrument}, ${row.lines} lines, ${row.cause} ${row.strength}`,
  row,
];

describe("noise alone", () => {
  test.each(rows.filter((row) => row.cause === "none").map(named))("%s: explained in 5 %% of changes", (_, row) => {
    expect(Math.abs(row.share - 0.05)).toBeLessThan(3 * row.shareUnc);
  });
});
describe("one cause", () => {
  test.each(rows.filter((row) => row.cause !== "none").map(named))(
    "%s: among those named in 95 %% of changes or more",
    (_, row) => {
      expect(row.share).toBeGreaterThan(0.95 - 3 * row.shareUnc);
    },
  );
});
