import { describe, expect, test } from "vitest";
import { addDays, dateIn, daysBetween, dueText, momentText, yearIn } from "../instruments/dates.ts";
import { errorText, toleranceText } from "../checks/words.ts";
import { rulerNote, todaySentence } from "./sentence.ts";

const items = (...kinds: Parameters<typeof todaySentence>[0][number]["kind"][]) => kinds.map((kind) => ({ kind }));

describe("the day in one sentence", () => {
  test("counts decisions, signatures and the rest in words", () => {
    expect(todaySentence(items("hold-decision", "impact", "alert", "review", "review"))).toBe(
      "Three decisions and two signatures wait for you.",
    );
    expect(todaySentence(items("review"))).toBe("One signature waits for you.");
    expect(todaySentence(items("due", "overdue", "draft"))).toBe("Two checks and one draft wait for you.");
    expect(todaySentence(items("recent"))).toBe("Nothing waits for you.");
    expect(todaySentence([])).toBe("Nothing waits for you.");
  });
});

test("the ruler of days: an as-left check goes before a first one, and both before the date", () => {
  const checked = { asLeftAsked: false, awaitsReview: false, checkedAt: "2027-01-04T10:00:00Z", dueDays: 6 };
  expect([
    rulerNote(checked),
    rulerNote({ ...checked, dueDays: -1 }),
    rulerNote({ ...checked, asLeftAsked: true, dueDays: -1 }),
    rulerNote({ ...checked, awaitsReview: true, dueDays: -1 }),
    rulerNote({ ...checked, checkedAt: null }),
    rulerNote({ ...checked, checkedAt: null, dueDays: -2 }),
  ]).toEqual(["in 6 days", "overdue 1 day", "as-left check", "awaits review", "first check", "overdue 2 days"]);
});

describe("dates are cut in the lab's zone", () => {
  const newYear = new Date("2026-12-31T23:30:00Z");

  test("half past eleven in the evening UTC is the next year in Berlin, and still this one in Lisbon", () => {
    expect([yearIn("Europe/Berlin", newYear), yearIn("Europe/Lisbon", newYear)]).toEqual([2027, 2026]);
    expect(dateIn("Pacific/Kiritimati", newYear)).toBe("2027-01-01");
    expect(momentText("Europe/Berlin", newYear)).toBe("1 Jan 2027, 00:30 CET");
  });

  test("days are counted over the change of the clocks: 28 to 29 March 2026 is one day", () => {
    expect([daysBetween("2026-03-28", "2026-03-29"), addDays("2026-02-27", 3), addDays("2026-01-01", -1)]).toEqual([
      1,
      "2026-03-02",
      "2025-12-31",
    ]);
  });

  test("due states are words", () => {
    expect([dueText(6), dueText(1), dueText(0), dueText(-3)]).toEqual([
      "due in 6 days",
      "due in 1 day",
      "due today",
      "overdue 3 days",
    ]);
  });
});

test("an error with its U: U to two digits, both to the same place, true minus, narrow space", () => {
  expect(errorText(0.54512, 0.0371)).toBe("+0.545 ± 0.037\u202fnm");
  expect(errorText(-0.144, 0.2)).toBe("\u22120.14 ± 0.20\u202fnm");
  expect([toleranceText(0.5), toleranceText(0.125)]).toEqual(["0.50\u202fnm", "0.125\u202fnm"]);
});
