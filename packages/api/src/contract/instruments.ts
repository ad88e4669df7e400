/** Instruments, their configurations, tolerance, standing, events, drift series. */
import { z } from "zod";
import {
  checkSummary,
  condition,
  date,
  decisionRule,
  id,
  instant,
  instrumentKind,
  name,
  note,
  personRef,
  reason,
  shownState,
  standing,
  stripLine,
  toleranceSegment,
  version,
} from "./common.ts";

export const optics = z.object({
  pixels: z.number().int().min(1).max(1_000_000).nullable(),
  pixelPitchUm: z.number().positive().nullable(),
  groovesPerMm: z.number().positive().nullable(),
  focalLengthMm: z.number().positive().nullable(),
  includedAngleDeg: z.number().nullable(),
  slitUm: z.number().positive().nullable(),
  laserNm: z.number().positive().nullable(),
  fullScaleCounts: z.number().positive().nullable(),
  adjustmentNote: z.string().max(400).nullable(),
});
export type Optics = z.infer<typeof optics>;
export const axisKind = z.enum(["pixel", "wavelength", "step"]);
export const axisMeaning = z.enum(["vacuum", "standard-air", "room-air"]);

/** Everything of a configuration a manager may set; each change is in the trail. */
export const configurationInput = z.object({
  name: z.string().trim().max(120).nullable(),
  axisKind,
  axisMeaning,
  rangeFirstNm: z.number().min(100).max(5000),
  rangeLastNm: z.number().min(100).max(5000),
  nominalFwhmNm: z.number().positive().max(50).nullable(),
  optics,
  intervalDays: z.number().int().min(1).max(3660),
  graceDays: z.number().int().min(0).max(60),
  /** null: 0.1 px or 0.1 of the step is assumed and shown so. */
  setupReproducibilityNm: z.number().positive().nullable(),
  decisionRule,
  warningShare: z.number().min(0.3).max(1),
  /** nm, ascending powers of the pixel; only for pixel axes. null keeps the axis in force. */
  axisCoefficients: z.array(z.number()).min(2).max(8).nullable(),
});
export const createInstrumentInput = z.object({
  name,
  kind: instrumentKind,
  maker: z.string().trim().max(120),
  model: z.string().trim().max(120),
  serial: z.string().trim().max(120),
  ownerId: id,
  place: z.string().trim().max(120),
  altitudeM: z.number().min(-430).max(6000).nullable(),
  purchasedOn: date.nullable(),
  configuration: configurationInput,
  tolerance: z.array(toleranceSegment).min(1, "Give at least one tolerance segment."),
  firstDueOn: date,
});
export const changeInstrumentInput = z.object({
  name,
  maker: z.string().trim().max(120),
  model: z.string().trim().max(120),
  serial: z.string().trim().max(120),
  ownerId: id,
  place: z.string().trim().max(120),
  altitudeM: z.number().min(-430).max(6000).nullable(),
  purchasedOn: date.nullable(),
  version,
});
export const retireInput = z.object({ reason, version });
export const changeConfigurationInput = configurationInput.omit({ axisCoefficients: true }).extend({ version });
/**
 * Begin a configuration: in place of one that ends the same day (a grating, detector, slit or laser was replaced), or beside
 * those there are (a second channel). With more than one, each needs a name; the first may not have had any.
 */
export const nextConfigurationInput = z.object({
  /** The one that ends; null adds the new one beside the present ones. */
  replacesId: id.nullable(),
  /** Name for the present one, where it has none yet and stays. */
  presentName: z.string().trim().max(120).nullable(),
  reason,
  fromOn: date,
  configuration: configurationInput,
  tolerance: z.array(toleranceSegment).min(1),
  firstDueOn: date,
  version,
});
/** A configuration ends and nothing takes its place; the last one of an instrument ends when the instrument is retired. */
export const endConfigurationInput = z.object({ toOn: date, reason, version });
export const changeToleranceInput = z.object({ segments: z.array(toleranceSegment).min(1), reason, version });
export const moveDueDateInput = z.object({ dueOn: date, assignedToId: id.nullable(), reason, version });
/** A manager confirms a hold (out of service, restricted) or lifts it; also quarantine and back. */
export const changeStandingInput = z.object({
  standing: z.enum(["in-service", "on-hold", "restricted", "out-of-service", "quarantined"]),
  restriction: z.string().trim().max(400).nullable(),
  reason,
  version,
});

/** The axis that an approved check has fitted is put in force: an adjustment of a configuration that counts pixels. */
export const adoptAxisInput = z.object({ checkId: id, reason, version });

export const eventKind = z.enum([
  "moved",
  "serviced",
  "lamp-changed",
  "slit-changed",
  "adjusted",
  "firmware",
  "environment",
  "other",
]);
export const instrumentEvent = z.object({
  id,
  configurationId: id,
  kind: eventKind,
  title: z.string(),
  happenedOn: date,
  note: z.string(),
  breaksDrift: z.boolean(),
  recordedAt: instant,
  recordedBy: personRef,
  /** Change of the error at mid-range across the event, nm; null where either side has no check. */
  stepNm: z.number().nullable(),
});
export const logEventInput = z.object({
  configurationId: id,
  kind: eventKind,
  title: name,
  happenedOn: date,
  note,
  breaksDrift: z.boolean(),
});

export const tolerance = z.object({
  version: z.number().int(),
  segments: z.array(toleranceSegment),
  inForceFrom: instant,
  reason: z.string(),
  by: personRef,
});
export const standingEntry = z.object({
  standing,
  restriction: z.string().nullable(),
  since: instant,
  reason: z.string(),
  by: personRef.nullable(),
  checkId: id.nullable(),
  checkNumber: z.string().nullable(),
});
/** One axis of a configuration's history. */
export const axisEntry = z.object({
  id,
  number: z.number().int(),
  degree: z.number().int(),
  coefficients: z.array(z.number()),
  meaning: axisMeaning,
  firstPx: z.number(),
  lastPx: z.number(),
  inForceFrom: instant,
  /** When the next one took over; null for the one in force. */
  inForceTo: instant.nullable(),
  reason: z.string(),
  by: personRef,
  fromCheck: z.object({ id, number: z.string() }).nullable(),
});
export type AxisEntry = z.infer<typeof axisEntry>;
/** Newest first. */
export const axesReply = z.object({ items: z.array(axisEntry) });
export const axisInForce = z.object({
  number: z.number().int(),
  degree: z.number().int(),
  coefficients: z.array(z.number()),
  meaning: axisMeaning,
  inForceFrom: instant,
  fromCheckNumber: z.string().nullable(),
});

export const configuration = z.object({
  id,
  name: z.string().nullable(),
  fromOn: date,
  toOn: date.nullable(),
  endedReason: z.string().nullable(),
  replacesId: id.nullable(),
  axisKind,
  axisMeaning,
  rangeFirstNm: z.number(),
  rangeLastNm: z.number(),
  nominalFwhmNm: z.number().nullable(),
  optics,
  intervalDays: z.number().int(),
  graceDays: z.number().int(),
  dueOn: date.nullable(),
  assignedTo: personRef.nullable(),
  setupReproducibilityNm: z.number().nullable(),
  decisionRule,
  warningShare: z.number(),
  tolerance,
  standing: standingEntry,
  axis: axisInForce.nullable(),
  procedureId: id,
  procedureTitle: z.string(),
  version,
});
export type Configuration = z.infer<typeof configuration>;

/** One present configuration of an instrument, as far as a list or a choice needs it. */
export const configurationState = z.object({
  id,
  name: z.string().nullable(),
  state: shownState,
  restriction: z.string().nullable(),
  toleranceUsed: z.number().nullable(),
  dueOn: date.nullable(),
  dueDays: z.number().int().nullable(),
  asLeftAsked: z.boolean(),
  assignedTo: personRef.nullable(),
  lastCheckId: id.nullable(),
  lastCheckNumber: z.string().nullable(),
});
export type ConfigurationState = z.infer<typeof configurationState>;

/** A row of the fleet: the instrument with its worst configuration; due is what comes first of any of them. */
export const fleetRow = z.object({
  id,
  name: z.string(),
  kind: instrumentKind,
  place: z.string(),
  owner: personRef,
  retiredAt: instant.nullable(),
  configurationId: id,
  configurationName: z.string().nullable(),
  rangeFirstNm: z.number(),
  rangeLastNm: z.number(),
  laserNm: z.number().nullable(),
  state: shownState,
  restriction: z.string().nullable(),
  toleranceUsed: z.number().nullable(),
  guardShare: z.number().nullable(),
  worst: z
    .object({
      wavelengthNm: z.number(),
      species: z.string(),
      errorNm: z.number(),
      expandedUncNm: z.number(),
      toleranceNm: z.number(),
    })
    .nullable(),
  strip: z.array(stripLine),
  checkedAt: instant.nullable(),
  lastCheckId: id.nullable(),
  lastCheckNumber: z.string().nullable(),
  dueOn: date.nullable(),
  dueDays: z.number().int().nullable(),
  asLeftAsked: z.boolean(),
  assignedTo: personRef.nullable(),
  /** A check of the configuration whose date this is waits for its review: it is not overdue. */
  awaitsReview: z.boolean(),
  /** The present ones, the worst first. */
  configurations: z.array(configurationState),
});
export type FleetRow = z.infer<typeof fleetRow>;

export const instrumentQuery = z.object({ configurationId: id.optional() });
export const instrument = z.object({
  id,
  name: z.string(),
  kind: instrumentKind,
  maker: z.string(),
  model: z.string(),
  serial: z.string(),
  owner: personRef,
  place: z.string(),
  altitudeM: z.number().nullable(),
  purchasedOn: date.nullable(),
  retiredAt: instant.nullable(),
  retiredReason: z.string().nullable(),
  version,
  configurations: z.array(configuration),
  /** The present one that needs a look first: the worst. */
  currentConfigurationId: id,
  /** The one that all below speaks of: the one asked for, else the current one. */
  shownConfigurationId: id,
  state: shownState,
  restriction: z.string().nullable(),
  toleranceUsed: z.number().nullable(),
  guardShare: z.number().nullable(),
  /** One sentence: where it stands and what comes. */
  prognosis: z.string(),
  lastCheck: z.object({ summary: checkSummary, strip: z.array(stripLine) }).nullable(),
  /** Of the instrument while it has one configuration, else of the one shown. */
  recentChecks: z.array(checkSummary),
  checkCount: z.number().int(),
  firstCheckAt: instant.nullable(),
  openDraft: z.object({ id, number: z.string() }).nullable(),
  openAlertCount: z.number().int(),
});
export type Instrument = z.infer<typeof instrument>;

/** A drift series of one configuration, oldest first. */
export const driftReply = z.object({
  configurationId: id,
  toleranceNm: z.number(),
  guardBandNm: z.number().nullable(),
  midNm: z.number().nullable(),
  fromNm: z.number().nullable(),
  toNm: z.number().nullable(),
  dueOn: date.nullable(),
  points: z.array(
    z.object({
      checkId: id,
      checkNumber: z.string(),
      at: instant,
      condition,
      state: z.enum(["submitted", "approved", "returned"]),
      verdict: z.enum(["pass", "inconclusive", "fail"]).nullable(),
      largestErrorNm: z.number(),
      largestExpandedUncNm: z.number(),
      largestAtNm: z.number(),
      midErrorNm: z.number(),
      midExpandedUncNm: z.number(),
      scaleErrorNm: z.number(),
      scaleExpandedUncNm: z.number(),
      temperatureC: z.number().nullable(),
      sourceLabels: z.array(z.string()),
    }),
  ),
  events: z.array(instrumentEvent),
});
export type DriftReply = z.infer<typeof driftReply>;
export const fleetReply = z.object({ items: z.array(fleetRow) });
