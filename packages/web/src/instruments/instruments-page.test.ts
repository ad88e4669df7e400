import type { FleetRow } from "@wavekeep/api/contract";
import { describe, expect, test } from "vitest";
import { byToleranceUsed, kindNote } from "../shared/fleet-table.tsx";
import { fleetSentence } from "./instruments-page.tsx";

const row = (over: Partial<FleetRow>): FleetRow =>
  ({
    id: "1",
    name: "Dunlin",
    kind: "array",
    state: "in-tolerance",
    retiredAt: null,
    dueDays: 5,
    toleranceUsed: 0.5,
    configurationName: null,
    laserNm: null,
    rangeFirstNm: 200,
    rangeLastNm: 850,
    ...over,
  }) as FleetRow;

describe("the fleet in a sentence", () => {
  test("names what asks for somebody, worst first", () => {
    expect(
      fleetSentence([row({ state: "on-hold" }), row({ state: "near-limit" }), row({ dueDays: -3 }), row({})]),
    ).toBe("Four instruments: one on hold, one near the limit, one overdue.");
  });
  test("says so when nothing does", () => {
    expect(fleetSentence([row({})])).toBe("One instrument, all in tolerance and in time.");
    expect(fleetSentence([row({ retiredAt: "2026-01-01T00:00:00Z" })])).toBe("No instrument is registered yet.");
  });
});

describe("a row of the fleet", () => {
  test("a Raman bench is known by its laser, the others by their range", () => {
    expect(kindNote(row({}))).toBe("array, 200–850\u202fnm");
    expect(kindNote(row({ kind: "raman", laserNm: 532 }))).toBe("Raman, 532\u202fnm");
    expect(kindNote(row({ configurationName: "visible" }))).toBe("visible, array, 200–850\u202fnm");
  });
  test("the one nearest its limit comes first, the unjudged and the retired last", () => {
    const names = [
      row({ name: "a", toleranceUsed: null }),
      row({ name: "b", toleranceUsed: 0.2 }),
      row({ name: "c", toleranceUsed: 0.9, retiredAt: "2026-01-01T00:00:00Z" }),
      row({ name: "d", toleranceUsed: 0.8 }),
    ]
      .sort(byToleranceUsed)
      .map((item) => item.name);
    expect(names).toEqual(["d", "b", "a", "c"]);
  });
});
