/**
 * Every route of the API with its policy and shapes: the server mounts by it (a route that is not here cannot be mounted),
 * OpenAPI is generated from it, the security matrix walks it. Paths are below `/api`.
 */
import type { z } from "zod";
import * as checks from "./checks.ts";
import * as instruments from "./instruments.ts";
import type { Action } from "./permissions.ts";
import * as records from "./records.ts";
import { peopleRoutes } from "./routes-people.ts";
import * as sources from "./sources.ts";
import * as work from "./work.ts";

export interface RouteContract {
  method: "get" | "post" | "put" | "delete";
  path: string;
  policy: Action;
  summary: string;
  query?: z.ZodType;
  body?: z.ZodType;
  /** multipart/form-data with these file fields. */
  upload?: { field: string; maxFiles: number; maxBytes: number };
  reply?: z.ZodType;
  /** Not JSON: bytes of this type. */
  replyType?: string;
}

const MEGABYTE = 1024 * 1024;

export const routes = {
  ...peopleRoutes,

  today: {
    method: "get",
    path: "/today",
    policy: "today.read",
    summary: "What waits for me, what is due, the fleet",
    reply: work.todayReply,
  },
  search: {
    method: "get",
    path: "/search",
    policy: "search.read",
    summary: "Find instruments, check numbers, people",
    query: work.searchQuery,
    reply: work.searchReply,
  },

  listInstruments: {
    method: "get",
    path: "/instruments",
    policy: "instrument.read",
    summary: "The fleet",
    reply: instruments.fleetReply,
  },
  createInstrument: {
    method: "post",
    path: "/instruments",
    policy: "instrument.change",
    summary: "Register an instrument",
    body: instruments.createInstrumentInput,
    reply: instruments.instrument,
  },
  readInstrument: {
    method: "get",
    path: "/instruments/:instrumentId",
    policy: "instrument.read",
    summary: "One instrument, as one of its configurations stands",
    query: instruments.instrumentQuery,
    reply: instruments.instrument,
  },
  changeInstrument: {
    method: "put",
    path: "/instruments/:instrumentId",
    policy: "instrument.change",
    summary: "Change an instrument",
    body: instruments.changeInstrumentInput,
    reply: instruments.instrument,
  },
  retireInstrument: {
    method: "post",
    path: "/instruments/:instrumentId/retire",
    policy: "instrument.change",
    summary: "Retire an instrument",
    body: instruments.retireInput,
    reply: instruments.instrument,
  },
  nextConfiguration: {
    method: "post",
    path: "/instruments/:instrumentId/configurations",
    policy: "instrument.change",
    summary: "Begin a configuration, in place of one or beside those there are",
    body: instruments.nextConfigurationInput,
    reply: instruments.instrument,
  },
  changeConfiguration: {
    method: "put",
    path: "/configurations/:configurationId",
    policy: "instrument.change",
    summary: "Change a configuration",
    body: instruments.changeConfigurationInput,
    reply: instruments.configuration,
  },
  endConfiguration: {
    method: "post",
    path: "/configurations/:configurationId/end",
    policy: "instrument.change",
    summary: "End a configuration that nothing takes the place of",
    body: instruments.endConfigurationInput,
    reply: instruments.instrument,
  },
  changeTolerance: {
    method: "post",
    path: "/configurations/:configurationId/tolerance",
    policy: "tolerance.change",
    summary: "Set a new tolerance",
    body: instruments.changeToleranceInput,
    reply: instruments.configuration,
  },
  changeStanding: {
    method: "post",
    path: "/configurations/:configurationId/standing",
    policy: "standing.change",
    summary: "Confirm or lift a hold",
    body: instruments.changeStandingInput,
    reply: instruments.configuration,
  },
  moveDueDate: {
    method: "post",
    path: "/configurations/:configurationId/due",
    policy: "due.change",
    summary: "Move the due date, assign",
    body: instruments.moveDueDateInput,
    reply: instruments.configuration,
  },
  listAxes: {
    method: "get",
    path: "/configurations/:configurationId/axes",
    policy: "instrument.read",
    summary: "The axes a configuration has had",
    reply: instruments.axesReply,
  },
  adoptAxis: {
    method: "post",
    path: "/configurations/:configurationId/axes",
    policy: "axis.change",
    summary: "Put the axis fitted by a check in force",
    body: instruments.adoptAxisInput,
    reply: instruments.configuration,
  },
  readDrift: {
    method: "get",
    path: "/configurations/:configurationId/drift",
    policy: "instrument.read",
    summary: "The drift series",
    reply: instruments.driftReply,
  },
  logEvent: {
    method: "post",
    path: "/events",
    policy: "event.log",
    summary: "Log an event of an instrument",
    body: instruments.logEventInput,
    reply: instruments.instrumentEvent,
  },

  listSources: {
    method: "get",
    path: "/sources",
    policy: "source.read",
    summary: "Reference sources",
    reply: sources.sourcesReply,
  },
  createSource: {
    method: "post",
    path: "/sources",
    policy: "source.change",
    summary: "Register a source",
    body: sources.sourceInput,
    reply: sources.source,
  },
  readSource: {
    method: "get",
    path: "/sources/:sourceId",
    policy: "source.read",
    summary: "One source",
    reply: sources.source,
  },
  changeSource: {
    method: "put",
    path: "/sources/:sourceId",
    policy: "source.change",
    summary: "Change a source",
    body: sources.changeSourceInput,
    reply: sources.source,
  },
  retireSource: {
    method: "post",
    path: "/sources/:sourceId/retire",
    policy: "source.change",
    summary: "Retire a source",
    body: sources.retireSourceInput,
    reply: sources.source,
  },
  storeCertificate: {
    method: "post",
    path: "/sources/:sourceId/certificate",
    policy: "source.change",
    summary: "Store a source's certificate",
    upload: { field: "file", maxFiles: 1, maxBytes: 20 * MEGABYTE },
    reply: sources.source,
  },
  readCertificate: {
    method: "get",
    path: "/sources/:sourceId/certificate",
    policy: "source.read",
    summary: "A source's certificate, as stored",
    replyType: "application/octet-stream",
  },
  listLineLists: {
    method: "get",
    path: "/line-lists",
    policy: "linelist.read",
    summary: "Versions of the line library",
    reply: sources.lineListsReply,
  },
  listLines: {
    method: "get",
    path: "/line-lists/:lineListVersion/lines",
    policy: "linelist.read",
    summary: "Lines of one version",
    query: sources.linesQuery,
    reply: sources.linesReply,
  },
  listProcedures: {
    method: "get",
    path: "/procedures",
    policy: "procedure.read",
    summary: "The lab's procedures",
    reply: sources.proceduresReply,
  },

  listChecks: {
    method: "get",
    path: "/checks",
    policy: "check.read",
    summary: "Checks, newest first",
    query: checks.checksQuery,
    reply: checks.checksReply,
  },
  beginCheck: {
    method: "post",
    path: "/checks",
    policy: "check.begin",
    summary: "Begin a check",
    body: checks.beginCheckInput,
    reply: checks.check,
  },
  readCheck: {
    method: "get",
    path: "/checks/:checkId",
    policy: "check.read",
    summary: "One check",
    reply: checks.check,
  },
  saveDraft: {
    method: "put",
    path: "/checks/:checkId/draft",
    policy: "check.edit",
    summary: "Keep the working copy",
    body: checks.draftInput,
    reply: checks.check,
  },
  addCaptures: {
    method: "post",
    path: "/checks/:checkId/captures",
    policy: "capture.add",
    summary: "Store captures, byte for byte, before anything is judged",
    upload: { field: "files", maxFiles: 40, maxBytes: 50 * MEGABYTE },
    reply: checks.uploadReply,
  },
  readCapture: {
    method: "get",
    path: "/captures/:captureId/bytes",
    policy: "capture.read",
    summary: "A capture's bytes as received",
    replyType: "application/octet-stream",
  },
  newAttempt: {
    method: "post",
    path: "/checks/:checkId/attempts",
    policy: "check.edit",
    summary: "Abandon this attempt and begin the next",
    body: checks.newAttemptInput,
    reply: checks.check,
  },
  analyse: {
    method: "post",
    path: "/checks/:checkId/analyses",
    policy: "check.edit",
    summary: "Analyse the current attempt",
    body: checks.analyseInput,
    reply: checks.check,
  },
  readDrawing: {
    method: "get",
    path: "/checks/:checkId/analyses/:analysisVersion/drawing",
    policy: "check.read",
    summary: "The spectrum to draw",
    reply: checks.drawingShape,
  },
  setAside: {
    method: "post",
    path: "/checks/:checkId/set-aside",
    policy: "check.edit",
    summary: "Set a draft aside",
    body: checks.setAsideInput,
    reply: checks.check,
  },
  submitCheck: {
    method: "post",
    path: "/checks/:checkId/submit",
    policy: "check.submit",
    summary: "Sign as maker and submit",
    body: checks.submitInput,
    reply: checks.check,
  },
  returnCheck: {
    method: "post",
    path: "/checks/:checkId/return",
    policy: "check.return",
    summary: "Send back with comments",
    body: checks.returnInput,
    reply: checks.check,
  },
  approveCheck: {
    method: "post",
    path: "/checks/:checkId/approve",
    policy: "check.approve",
    summary: "Sign as reviewer and approve",
    body: checks.approveInput,
    reply: checks.check,
  },
  acknowledgeCheck: {
    method: "post",
    path: "/checks/:checkId/acknowledge",
    policy: "check.acknowledge",
    summary: "The owner takes note",
    body: checks.acknowledgeCheckInput,
    reply: checks.check,
  },
  readReport: {
    method: "get",
    path: "/checks/:checkId/report",
    policy: "report.read",
    summary: "The report as PDF",
    replyType: "application/pdf",
  },

  listAlerts: {
    method: "get",
    path: "/alerts",
    policy: "alert.read",
    summary: "Alerts",
    query: work.alertsQuery,
    reply: work.alertsReply,
  },
  acknowledgeAlert: {
    method: "post",
    path: "/alerts/:alertId/acknowledge",
    policy: "alert.acknowledge",
    summary: "Acknowledge an alert",
    body: work.acknowledgeAlertInput,
    reply: work.alert,
  },
  listImpactReviews: {
    method: "get",
    path: "/impact-reviews",
    policy: "impact.read",
    summary: "Impact reviews",
    reply: work.impactReply,
  },
  readImpactReview: {
    method: "get",
    path: "/impact-reviews/:impactReviewId",
    policy: "impact.read",
    summary: "One impact review",
    reply: work.impactReview,
  },
  decideImpact: {
    method: "post",
    path: "/impact-reviews/:impactReviewId/decision",
    policy: "impact.decide",
    summary: "The owner decides",
    body: work.decideImpactInput,
    reply: work.impactReview,
  },

  listTrail: {
    method: "get",
    path: "/trail",
    policy: "records.read",
    summary: "Entries of the trail, newest first",
    query: records.trailQuery,
    reply: records.trailReply,
  },
  trailDays: {
    method: "get",
    path: "/trail/days",
    policy: "records.read",
    summary: "Entries a day",
    reply: records.trailDaysReply,
  },
  readChain: {
    method: "get",
    path: "/trail/state",
    policy: "records.read",
    summary: "Whether the chain holds",
    reply: records.chainState,
  },
} as const satisfies Record<string, RouteContract>;

export type RouteName = keyof typeof routes;
