/**
 * The story that the demo lab tells. Everything in it is invented: the lab, its people, its instruments (named after
 * waders), their makers and their errors. Days count back from the day of the first start; clock times are the lab's own.
 *
 * Dunlin drifts slowly since it was adjusted and nears its limit; Whimbrel was out of tolerance yesterday and is on hold;
 * Redshank is overdue; Turnstone was judged by a tolerance that changed the same day; Sanderling follows the seasons;
 * Knot, Curlew and Plover are steady; Godwit waits for its first check.
 */
import type { InstrumentKind } from "../contract/common.ts";
import type { z } from "zod";
import type { eventKind } from "../contract/instruments.ts";
import type { PersonKey } from "./cast.ts";

export interface DemoEvent {
  daysAgo: number;
  time: string;
  kind: z.infer<typeof eventKind>;
  title: string;
  note: string;
  breaksDrift: boolean;
  by: PersonKey;
}
export interface DemoCheck {
  daysAgo: number;
  time: string;
  by: PersonKey;
  condition: "as-found" | "as-left";
  /** How far it goes. */
  until: "approved" | "submitted";
  reviewedBy: PersonKey;
  /** Kept with the working copy. */
  note?: string;
  /** An overexposed first attempt that is abandoned. */
  badFirstAttempt?: boolean;
  leaveOut?: {
    wavelengthNm: number;
    reason: "saturated" | "blended" | "spike" | "too-weak" | "disturbed";
    note: string;
  }[];
  ownerNote?: string;
}
export interface DemoInstrument {
  name: string;
  kind: InstrumentKind;
  maker: string;
  model: string;
  serial: string;
  owner: PersonKey;
  place: string;
  purchasedDaysAgo: number;
  registeredDaysAgo: number;
  axisKind: "pixel" | "wavelength";
  firstNm: number;
  lastNm: number;
  fwhmNm: number;
  laserNm: number | null;
  samples: number;
  pixelPitchUm: number | null;
  groovesPerMm: number | null;
  focalLengthMm: number | null;
  fullScaleCounts: number | null;
  toleranceNm: number;
  earlierTolerance?: { toleranceNm: number; changedDaysAgo: number; time: string; reason: string };
  intervalDays: number;
  graceDays: number;
  firstDueDaysAgo: number;
  assignedTo: PersonKey;
  /** nm: what the lab states until its own history speaks. */
  statedReproducibilityNm: number;
  repeats: number;
  sourceOn(daysAgo: number): string;
  /** Indicated minus true, nm; `temperatureC` is the room's. The simulator adds the set-up scatter. */
  errorNm(wavelengthNm: number, daysAgo: number, temperatureC: number): number;
  /** Standard deviation from check to check of the whole axis, nm. */
  scatterNm: number;
  checks: DemoCheck[];
  events: DemoEvent[];
}

/** Room of the lab, °C: the seasons through a building, coldest in early February. `dayOfYear` counts from 0. */
export const roomTemperatureC = (dayOfYear: number): number =>
  21.6 - 1.9 * Math.cos((2 * Math.PI * (dayOfYear - 35)) / 365.25);

/** Days before the first start of checks `everyDays` apart, oldest first, ending `lastDaysAgo`. */
function every(everyDays: number, lastDaysAgo: number, fromDaysAgo: number): number[] {
  const days: number[] = [];
  for (let daysAgo = lastDaysAgo; daysAgo <= fromDaysAgo; daysAgo += everyDays) days.unshift(daysAgo);
  return days;
}

const plain = (days: number[], by: PersonKey, time: string, reviewedBy: PersonKey = "ida"): DemoCheck[] =>
  days.map((daysAgo) => ({ daysAgo, time, by, condition: "as-found", until: "approved", reviewedBy }));

/** Share of the way through a range, 0 at the first wavelength and 1 at the last. */
const along = (wavelengthNm: number, firstNm: number, lastNm: number) => (wavelengthNm - firstNm) / (lastNm - firstNm);

const DUNLIN_MOVED = 390;
const DUNLIN_ADJUSTED = 279;
/** Error of Dunlin at 842 nm: steady, a step when it was moved, then a steady climb after the adjustment. */
function dunlinAt842(daysAgo: number): number {
  if (daysAgo > DUNLIN_MOVED) return 0.072;
  if (daysAgo > DUNLIN_ADJUSTED) return 0.236 + (0.066 * (DUNLIN_MOVED - daysAgo)) / (DUNLIN_MOVED - DUNLIN_ADJUSTED);
  return -0.008 + (0.405 * (DUNLIN_ADJUSTED - daysAgo)) / 365.25;
}

const dunlinChecks: DemoCheck[] = [
  ...plain(every(21, 397, 535), "tam", "10:20"),
  ...plain(every(21, 300, 384), "tam", "10:05"),
  {
    daysAgo: DUNLIN_ADJUSTED,
    time: "09:10",
    by: "tam",
    condition: "as-found",
    until: "approved",
    reviewedBy: "ida",
    note: "Near the limit since the move: adjust now, before it crosses.",
    ownerNote: "Agreed with Ida: the maker's offset and scale are to be set anew today.",
  },
  { daysAgo: DUNLIN_ADJUSTED, time: "14:30", by: "tam", condition: "as-left", until: "approved", reviewedBy: "ida" },
  ...plain(every(21, 22, 258), "tam", "10:15"),
  {
    daysAgo: 1,
    time: "15:27",
    by: "tam",
    condition: "as-found",
    until: "submitted",
    reviewedBy: "ida",
    badFirstAttempt: true,
    leaveOut: [
      {
        wavelengthNm: 840.821,
        reason: "blended",
        note: "Ar 842.465 nm stands in its wing: the two are hardly apart and pull each other's centre.",
      },
    ],
  },
];

export const instruments: DemoInstrument[] = [
  {
    name: "Dunlin",
    kind: "array",
    maker: "Saltmarsh Optics (invented)",
    model: "Array 2048",
    serial: "SO-41-0093",
    owner: "nell",
    place: "Bench 3",
    purchasedDaysAgo: 1460,
    registeredDaysAgo: 540,
    axisKind: "wavelength",
    firstNm: 200,
    lastNm: 850,
    fwhmNm: 1.25,
    laserNm: null,
    samples: 2048,
    pixelPitchUm: 14,
    groovesPerMm: 600,
    focalLengthMm: 101,
    fullScaleCounts: 65535,
    toleranceNm: 0.4,
    intervalDays: 28,
    graceDays: 3,
    firstDueDaysAgo: 535,
    assignedTo: "tam",
    statedReproducibilityNm: 0.02,
    repeats: 3,
    sourceOn: (daysAgo) => (daysAgo > 145 ? "HA-1" : "HA-2"),
    errorNm: (nm, daysAgo) => dunlinAt842(daysAgo) * (0.02 + 0.98 * along(nm, 253.65, 842.46)),
    scatterNm: 0.006,
    checks: dunlinChecks,
    events: [
      {
        daysAgo: DUNLIN_MOVED,
        time: "16:40",
        kind: "moved",
        title: "Moved to bench 3",
        note: "Carried by two, fibre left plugged in.",
        breaksDrift: true,
        by: "tam",
      },
      {
        daysAgo: DUNLIN_ADJUSTED,
        time: "13:10",
        kind: "adjusted",
        title: "Adjusted, offset and scale",
        note: "The maker's own offset and scale set anew from the as-found check.",
        breaksDrift: true,
        by: "ida",
      },
      {
        daysAgo: 145,
        time: "08:50",
        kind: "lamp-changed",
        title: "Lamp HA-1 to HA-2",
        note: "HA-1 grew weak in the ultraviolet.",
        breaksDrift: false,
        by: "tam",
      },
    ],
  },
  {
    name: "Whimbrel",
    kind: "array",
    maker: "Saltmarsh Optics (invented)",
    model: "Array 2048 red",
    serial: "SO-44-0210",
    owner: "nell",
    place: "Bench 1",
    purchasedDaysAgo: 1010,
    registeredDaysAgo: 538,
    axisKind: "wavelength",
    firstNm: 340,
    lastNm: 1030,
    fwhmNm: 1.4,
    laserNm: null,
    samples: 2048,
    pixelPitchUm: 14,
    groovesPerMm: 600,
    focalLengthMm: 101,
    fullScaleCounts: 65535,
    toleranceNm: 0.5,
    intervalDays: 42,
    graceDays: 3,
    firstDueDaysAgo: 528,
    assignedTo: "tam",
    statedReproducibilityNm: 0.025,
    repeats: 3,
    sourceOn: (daysAgo) => (daysAgo > 145 ? "HA-1" : "HA-2"),
    errorNm: (nm, daysAgo) => (daysAgo > 20 ? 0.09 + 0.08 * along(nm, 404, 966) : 0.31 + 0.232 * along(nm, 404, 966)),
    scatterNm: 0.008,
    checks: [
      ...plain(every(42, 43, 530), "tam", "10:20"),
      { daysAgo: 1, time: "08:29", by: "tam", condition: "as-found", until: "submitted", reviewedBy: "ida" },
    ],
    events: [
      {
        daysAgo: 9,
        time: "17:05",
        kind: "environment",
        title: "Air conditioning serviced",
        note: "The bench was wheeled aside and back for it.",
        breaksDrift: false,
        by: "nell",
      },
    ],
  },
  {
    name: "Redshank",
    kind: "scanning",
    maker: "Fenland Instruments (invented)",
    model: "Scan 320",
    serial: "FI-320-77",
    owner: "oto",
    place: "Optics room",
    purchasedDaysAgo: 3100,
    registeredDaysAgo: 536,
    axisKind: "wavelength",
    firstNm: 200,
    lastNm: 900,
    fwhmNm: 0.9,
    laserNm: null,
    samples: 3501,
    pixelPitchUm: null,
    groovesPerMm: 1200,
    focalLengthMm: 320,
    fullScaleCounts: null,
    toleranceNm: 0.2,
    intervalDays: 42,
    graceDays: 0,
    firstDueDaysAgo: 535,
    assignedTo: "alix",
    statedReproducibilityNm: 0.01,
    repeats: 3,
    sourceOn: (daysAgo) => (daysAgo > 145 ? "HA-1" : "HA-2"),
    errorNm: (nm, daysAgo) => -0.02 - (0.115 - (0.06 * (daysAgo - 45)) / 500) * along(nm, 404, 867),
    scatterNm: 0.004,
    checks: plain(every(42, 45, 535), "alix", "13:40"),
    events: [],
  },
  {
    name: "Turnstone",
    kind: "raman",
    maker: "Fenland Instruments (invented)",
    model: "Raman 785",
    serial: "FI-R785-12",
    owner: "oto",
    place: "Raman room",
    purchasedDaysAgo: 890,
    registeredDaysAgo: 537,
    axisKind: "wavelength",
    firstNm: 788,
    lastNm: 935,
    fwhmNm: 0.28,
    laserNm: 785,
    samples: 2048,
    pixelPitchUm: 14,
    groovesPerMm: 830,
    focalLengthMm: 200,
    fullScaleCounts: 65535,
    toleranceNm: 0.1,
    earlierTolerance: {
      toleranceNm: 0.12,
      changedDaysAgo: 4,
      time: "13:55",
      reason: "The new nitrate method asks for 0.10 nm.",
    },
    intervalDays: 49,
    graceDays: 3,
    firstDueDaysAgo: 536,
    assignedTo: "alix",
    statedReproducibilityNm: 0.006,
    repeats: 3,
    sourceOn: () => "AR-1",
    errorNm: (nm) => 0.02 + 0.036 * along(nm, 794, 923),
    scatterNm: 0.0025,
    checks: [
      ...plain(every(42, 46, 536), "alix", "10:50"),
      { daysAgo: 4, time: "10:41", by: "alix", condition: "as-found", until: "submitted", reviewedBy: "ida" },
    ],
    events: [],
  },
  {
    name: "Knot",
    kind: "spectrophotometer",
    maker: "Saltmarsh Optics (invented)",
    model: "UV 60",
    serial: "SO-60-1188",
    owner: "oto",
    place: "Wet bench",
    purchasedDaysAgo: 2050,
    registeredDaysAgo: 536,
    axisKind: "wavelength",
    firstNm: 230,
    lastNm: 700,
    fwhmNm: 1.6,
    laserNm: null,
    samples: 2351,
    pixelPitchUm: null,
    groovesPerMm: 1200,
    focalLengthMm: null,
    fullScaleCounts: null,
    toleranceNm: 1,
    intervalDays: 70,
    graceDays: 5,
    firstDueDaysAgo: 530,
    assignedTo: "tam",
    statedReproducibilityNm: 0.05,
    repeats: 2,
    sourceOn: () => "HG-1",
    errorNm: (nm) => 0.19 + 0.24 * along(nm, 254, 579),
    scatterNm: 0.012,
    checks: plain(every(70, 64, 530), "tam", "14:20"),
    events: [],
  },
  {
    name: "Sanderling",
    kind: "spectrophotometer",
    maker: "Saltmarsh Optics (invented)",
    model: "UV 88",
    serial: "SO-88-2107",
    owner: "oto",
    place: "Wet bench",
    purchasedDaysAgo: 700,
    registeredDaysAgo: 536,
    axisKind: "wavelength",
    firstNm: 400,
    lastNm: 700,
    fwhmNm: 1.2,
    laserNm: null,
    samples: 1501,
    pixelPitchUm: null,
    groovesPerMm: 1200,
    focalLengthMm: null,
    fullScaleCounts: null,
    toleranceNm: 1,
    intervalDays: 50,
    graceDays: 5,
    firstDueDaysAgo: 528,
    assignedTo: "alix",
    statedReproducibilityNm: 0.05,
    repeats: 2,
    sourceOn: () => "D-S",
    errorNm: (_nm, _daysAgo, temperatureC) => -0.2 - 0.055 * (temperatureC - 21.6),
    scatterNm: 0.015,
    checks: plain(every(50, 40, 528), "alix", "15:10"),
    events: [],
  },
  {
    name: "Curlew",
    kind: "raman",
    maker: "Fenland Instruments (invented)",
    model: "Raman 532",
    serial: "FI-R532-05",
    owner: "nell",
    place: "Raman room",
    purchasedDaysAgo: 1200,
    registeredDaysAgo: 537,
    axisKind: "wavelength",
    firstNm: 538,
    lastNm: 720,
    fwhmNm: 0.36,
    laserNm: 532,
    samples: 2048,
    pixelPitchUm: 14,
    groovesPerMm: 600,
    focalLengthMm: 200,
    fullScaleCounts: 65535,
    toleranceNm: 0.12,
    intervalDays: 42,
    graceDays: 3,
    firstDueDaysAgo: 536,
    assignedTo: "tam",
    statedReproducibilityNm: 0.005,
    repeats: 3,
    sourceOn: () => "NE-1",
    errorNm: (nm) => 0.006 + 0.018 * along(nm, 540, 717),
    scatterNm: 0.002,
    checks: plain(every(42, 8, 536), "tam", "09:35"),
    events: [],
  },
  {
    name: "Plover",
    kind: "array",
    maker: "Saltmarsh Optics (invented)",
    model: "Array 2048 red",
    serial: "SO-44-0377",
    owner: "nell",
    place: "Bench 2",
    purchasedDaysAgo: 560,
    registeredDaysAgo: 536,
    axisKind: "pixel",
    firstNm: 340,
    lastNm: 1030,
    fwhmNm: 1.4,
    laserNm: null,
    samples: 2048,
    pixelPitchUm: 14,
    groovesPerMm: 600,
    focalLengthMm: 101,
    fullScaleCounts: 65535,
    toleranceNm: 0.5,
    intervalDays: 182,
    graceDays: 14,
    firstDueDaysAgo: 520,
    assignedTo: "tam",
    statedReproducibilityNm: 0.03,
    repeats: 3,
    sourceOn: (daysAgo) => (daysAgo > 145 ? "HA-1" : "HA-2"),
    errorNm: (nm) => 0.03 + 0.066 * along(nm, 404, 966),
    scatterNm: 0.008,
    checks: plain([520, 341, 190, 15], "tam", "11:10"),
    events: [],
  },
  {
    name: "Godwit",
    kind: "scanning",
    maker: "Fenland Instruments (invented)",
    model: "Scan 320",
    serial: "FI-320-112",
    owner: "oto",
    place: "Optics room",
    purchasedDaysAgo: 20,
    registeredDaysAgo: 6,
    axisKind: "wavelength",
    firstNm: 220,
    lastNm: 750,
    fwhmNm: 0.9,
    laserNm: null,
    samples: 2651,
    pixelPitchUm: null,
    groovesPerMm: 1200,
    focalLengthMm: 320,
    fullScaleCounts: null,
    toleranceNm: 0.2,
    intervalDays: 28,
    graceDays: 3,
    firstDueDaysAgo: -2,
    assignedTo: "alix",
    statedReproducibilityNm: 0.01,
    repeats: 2,
    sourceOn: () => "HA-2",
    errorNm: () => 0,
    scatterNm: 0.004,
    checks: [],
    events: [],
  },
];
