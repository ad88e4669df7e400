import type { DriftReply } from "@wavekeep/api/contract";
import { expect, test } from "vitest";
import {
  errorSpan,
  joinedRuns,
  monthTicks,
  placeEventFlags,
  seriesBreaks,
  seriesPoints,
  timeSpan,
  type RibbonPoint,
} from "./ribbon-layout.ts";

const DAY = 86_400_000;
const point = (atMs: number, error: number, unc = 0.03): RibbonPoint => ({
  index: 0,
  atMs,
  error,
  unc,
  isAsLeft: false,
});

test("a series that climbs shows its upper limit and is cropped at the half limit below", () => {
  const span = errorSpan([point(0, 0.07), point(1, 0.31)], 0.4);
  expect(span.high).toBeCloseTo(0.46, 9);
  expect(span.low).toBeCloseTo(-0.2, 9);
  expect(span.ticks).toEqual([-0.2, 0, 0.2, 0.4]);
});

test("a quiet series shows both limits", () => {
  const span = errorSpan([point(0, 0.01, 0.02)], 0.4);
  expect(span.ticks).toEqual([-0.4, -0.2, 0, 0.2, 0.4]);
});

test("a point beyond the limit with its U is inside the drawing", () => {
  const span = errorSpan([point(0, -0.6, 0.05)], 0.5);
  expect(span.low).toBeLessThan(-0.65);
});

test("a line joins no two points across an event that broke the series", () => {
  const runs = joinedRuns([point(1, 0), point(2, 0), point(4, 0)], [3]);
  expect(runs.map((run) => run.map((p) => p.atMs))).toEqual([[1, 2], [4]]);
});

test("an as-left check at the moment of the adjustment belongs to what follows", () => {
  expect(joinedRuns([point(1, 0), point(3, 0)], [3])).toHaveLength(2);
});

test("an adjustment in the morning and its as-left check that day break the series once, at the check", () => {
  const left = { ...point(Date.UTC(2026, 5, 3, 9), 0), isAsLeft: true };
  const event = {
    ...drift.events[0],
    kind: "adjusted",
    happenedOn: "2026-06-03",
    breaksDrift: true,
  } as DriftReply["events"][number];
  expect(seriesBreaks([event], [left])).toEqual([left.atMs]);
  expect(
    seriesBreaks(
      [
        { ...event, happenedOn: "2026-07-01" },
        { ...event, breaksDrift: false },
      ],
      [],
    ),
  ).toEqual([Date.UTC(2026, 6, 1, 12)]);
});

test("months are ticked, quarters labelled, January named by its year", () => {
  const ticks = monthTicks(Date.UTC(2025, 8, 2), Date.UTC(2027, 8, 30), 1032);
  expect(ticks.filter((tick) => tick.label !== null).map((tick) => tick.label)).toEqual([
    "Oct 2025",
    "2026",
    "Apr",
    "Jul",
    "Oct",
    "2027",
    "Apr",
    "Jul",
  ]);
  expect(ticks).toHaveLength(24);
});

test("on a phone only what has room is labelled", () => {
  const labels = monthTicks(Date.UTC(2025, 8, 2), Date.UTC(2027, 8, 30), 343).filter((tick) => tick.label !== null);
  expect(labels.map((tick) => tick.label)).toEqual(["2026", "Jul", "2027", "Jul"]);
});

test("names of events that would run together take the second row, then none", () => {
  const flags = placeEventFlags(
    [
      { x: 100, textWidth: 90 },
      { x: 150, textWidth: 90 },
      { x: 170, textWidth: 90 },
      { x: 980, textWidth: 90 },
    ],
    1032,
  );
  expect(flags.map((flag) => flag.tier)).toEqual([0, 1, null, 0]);
  expect(flags.map((flag) => flag.isTurned)).toEqual([false, false, false, true]);
});

const drift: DriftReply = {
  configurationId: "00000000-0000-7000-8000-000000000000",
  toleranceNm: 0.4,
  guardBandNm: 0.03,
  midNm: 550,
  fromNm: 254,
  toNm: 842,
  dueOn: "2027-04-05",
  points: [],
  events: [],
};

test("the ribbon reaches eighteen months back and a month past the due date", () => {
  const at = (days: number) => new Date(Date.UTC(2027, 2, 9) - days * DAY).toISOString();
  const points = [700, 20].map((days) => ({
    checkId: "a",
    checkNumber: "CHK",
    at: at(days),
    condition: "as-left" as const,
    state: "approved" as const,
    verdict: "pass" as const,
    largestErrorNm: 0.3,
    largestExpandedUncNm: 0.03,
    largestAtNm: 842,
    midErrorNm: 0.1,
    midExpandedUncNm: 0.01,
    scaleErrorNm: 0.2,
    scaleExpandedUncNm: 0.02,
    temperatureC: null,
    sourceLabels: [],
  }));
  const span = timeSpan({ ...drift, points }, "2027-03-09");
  expect((Date.UTC(2027, 2, 9) - span.fromMs) / DAY).toBeCloseTo(556.5, 0);
  expect(span.toMs).toBeGreaterThanOrEqual(Date.UTC(2027, 4, 5));
  expect(seriesPoints({ ...drift, points }, "mid").map((p) => [p.error, p.unc, p.isAsLeft])).toEqual([
    [0.1, 0.01, true],
    [0.1, 0.01, true],
  ]);
});
