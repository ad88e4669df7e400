import { describe, expect, test } from "vitest";
import {
  dayOf,
  daysBetween,
  dueWords,
  formatBytes,
  formatCount,
  formatDate,
  formatHash,
  formatInstant,
  formatLimit,
  formatNumber,
  formatPercent,
  formatQuantity,
  formatSeal,
  formatShortDay,
  parseDecimal,
  uncertaintyDecimals,
} from "./format.ts";

describe("numbers", () => {
  test("a real minus, a plus where an error is shown, none at zero", () => {
    expect(formatNumber(-0.144, { decimals: 3, signed: true })).toBe("−0.144");
    expect(formatNumber(0.313, { decimals: 3, signed: true })).toBe("+0.313");
    expect(formatNumber(-0.0001, { decimals: 3, signed: true })).toBe("0.000");
  });

  test("what is no number is a dash, never NaN", () => {
    expect([Number.NaN, Infinity, null, undefined].map((value) => formatNumber(value))).toEqual(["–", "–", "–", "–"]);
    expect(formatPercent(null)).toBe("–");
  });

  test("narrow spaces between thousands, before units and per cent", () => {
    expect(formatCount(4318)).toBe("4\u202f318");
    expect(formatCount(1234567)).toBe("1\u202f234\u202f567");
    expect(formatPercent(0.783)).toBe("78\u202f%");
    expect(formatLimit(0.4)).toBe("0.40\u202fnm");
    expect(formatLimit(0.125)).toBe("0.125\u202fnm");
    expect(formatLimit(12)).toBe("12\u202fnm");
  });

  // GUM 7.2.6: at most two significant digits of an uncertainty; the value to the same place.
  test.each([
    [0.313, 0.0312, "+0.313\u00a0±\u00a00.031\u202fnm"],
    [0.43, 0.131, "+0.43\u00a0±\u00a00.13\u202fnm"],
    [-0.0021, 0.0259, "−0.002\u00a0±\u00a00.026\u202fnm"],
    [12.3456, 9.96, "+12\u00a0±\u00a010\u202fnm"],
    [0.5, 0.0996, "+0.50\u00a0±\u00a00.10\u202fnm"],
    [1234, 56, "+1234\u00a0±\u00a056\u202fnm"],
  ])("%f with U = %f is written %s", (value, unc, text) => {
    expect(formatQuantity(value, unc, "nm", { signed: true })).toBe(text);
  });

  test("an uncertainty that is absent or zero has no digits to give", () => {
    expect([null, undefined, 0, Number.NaN].map(uncertaintyDecimals)).toEqual([null, null, null, null]);
  });
});

describe("reading numbers as people type them", () => {
  test.each([
    ["21,6", 21.6],
    ["21.6", 21.6],
    [" 1\u202f012 ", 1012],
    ["1.234,5", 1234.5],
    ["1,234.5", 1234.5],
    ["1,234,567", 1234567],
    ["−0,144", -0.144],
    ["546.075 nm", 546.075],
    ["21,4 °C", 21.4],
    ["1e-3", 0.001],
    [".5", 0.5],
  ])("%j is %f", (text, value) => {
    expect(parseDecimal(text)).toBe(value);
  });

  test.each(["", "abc", "1,2,3", "1.2.3,4", "12,34.5", "1 nm 2", "--1", ","])("%j is not one number", (text) => {
    expect(parseDecimal(text)).toBeNull();
  });
});

describe("times", () => {
  const at = "2027-03-08T23:30:00Z";

  test("an instant is cut into days in the lab's zone, and the zone is named", () => {
    expect(formatInstant(at, "Europe/Berlin")).toBe("9 Mar 2027, 00:30 CET");
    expect(dayOf(at, "Europe/Berlin")).toBe("2027-03-09");
    expect(dayOf(at, "America/Denver")).toBe("2027-03-08");
    expect(formatInstant("2027-07-01T10:00:00Z", "Europe/Berlin", true)).toBe("1 Jul 2027, 12:00:00 CEST");
  });

  test("a short day names its year only when it is another", () => {
    const now = new Date("2027-03-09T09:00:00Z");
    expect(formatShortDay("2027-02-15T10:00:00Z", "Europe/Berlin", now)).toBe("15 Feb");
    expect(formatShortDay("2026-12-07T10:00:00Z", "Europe/Berlin", now)).toBe("7 Dec 2026");
  });

  test("a due date is a date in every zone", () => {
    expect(formatDate("2027-04-05")).toBe("5 Apr 2027");
    expect(daysBetween("2027-03-27", "2027-03-29")).toBe(2);
  });

  test("due states are words", () => {
    expect([6, 1, 0, -1, -3].map((days) => dueWords(days).text)).toEqual([
      "due in 6 days",
      "due in 1 day",
      "due today",
      "overdue 1 day",
      "overdue 3 days",
    ]);
  });
});

test("hashes and sizes are shortened the same way everywhere", () => {
  const hash = `19d2c5e8${"0".repeat(52)}7b31`;
  expect(formatSeal(hash)).toBe("19d2\u202fc5e8");
  expect(formatHash(hash)).toBe("19d2\u202fc5e8 … 7b31");
  expect([0, 999, 30_240, 5_000_000].map(formatBytes)).toEqual([
    "0\u202fB",
    "999\u202fB",
    "30.2\u202fkB",
    "5.0\u202fMB",
  ]);
});
