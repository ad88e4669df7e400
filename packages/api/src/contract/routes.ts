/**
 * Every route of the API with its policy and shapes: the server mounts by it (a route that is not here cannot be mounted),
 * OpenAPI is generated from it, the security matrix walks it. Paths are below `/api`.
 */
import type { z } from "zod";
import * as checks from "./checks.ts";
import * as instruments from "./instruments.ts";
import * as people from "./people.ts";
import type { Action } from "./permissions.ts";
import * as records from "./records.ts";
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
  health: { method: "get", path: "/health", policy: "health.read", summary: "Whether the server is ready, with its version" },
  openapi: { method: "get", path: "/openapi.json", policy: "openapi.read", summary: "This description" },

  readSession: { method: "get", path: "/session", policy: "session.read", summary: "Who is signed in, and what they may do", reply: people.me },
  signIn: { method: "post", path: "/session", policy: "session.sign-in", summary: "Sign in", body: people.signInInput, reply: people.me },
  signOut: { method: "delete", path: "/session", policy: "session.sign-out", summary: "Sign out here" },
  signOutEverywhere: { method: "delete", path: "/sessions", policy: "session.sign-out-everywhere", summary: "Sign out on every device" },
  switchLab: { method: "put", path: "/session/lab", policy: "session.switch-lab", summary: "Work in another of my labs", body: people.switchLabInput, reply: people.me },
  forgetPassword: { method: "post", path: "/password/forgotten", policy: "password.forget", summary: "Ask for a reset link by mail", body: people.forgottenPasswordInput },
  resetPassword: { method: "post", path: "/password/reset", policy: "password.reset", summary: "Set a new password with a mailed token", body: people.resetPasswordInput },
  changeMe: { method: "put", path: "/me", policy: "me.change", summary: "Change my printed name", body: people.changeMeInput },
  changePassword: { method: "put", path: "/me/password", policy: "me.change", summary: "Change my password", body: people.changePasswordInput },
  changePin: { method: "put", path: "/me/pin", policy: "me.change", summary: "Set my PIN for bench mode", body: people.changePinInput },

  readInvitation: { method: "get", path: "/invitations/:token", policy: "invitation.read", summary: "What an invitation offers", reply: people.invitationReply },
  acceptInvitation: { method: "post", path: "/invitations/:token/accept", policy: "invitation.accept", summary: "Accept an invitation", body: people.acceptInvitationInput, reply: people.me },

  readBench: { method: "get", path: "/bench", policy: "bench.read", summary: "This shared PC and who may sign in on it", reply: people.benchReply },
  benchSignIn: { method: "post", path: "/bench/session", policy: "bench.sign-in", summary: "Sign in on a shared PC by name and PIN", body: people.benchSignInInput, reply: people.me },
  benchLock: { method: "delete", path: "/bench/session", policy: "bench.lock", summary: "Lock the shared PC" },
  enrolBench: { method: "post", path: "/bench/devices", policy: "bench.enrol", summary: "Enrol this PC for bench mode", body: people.enrolBenchInput },
  removeBench: { method: "delete", path: "/bench/devices/:deviceId", policy: "bench.enrol", summary: "End bench mode on a PC" },

  listPeople: { method: "get", path: "/people", policy: "people.read", summary: "People, invitations, shared PCs", reply: people.peopleReply },
  invite: { method: "post", path: "/invitations", policy: "people.invite", summary: "Invite a person by mail", body: people.inviteInput, reply: people.invitation },
  withdrawInvitation: { method: "delete", path: "/invitations/:invitationId", policy: "people.invite", summary: "Withdraw an invitation" },
  changeRoles: { method: "put", path: "/people/:personId/roles", policy: "people.change", summary: "Change a person's roles", body: people.changeRolesInput, reply: people.person },
  endMembership: { method: "post", path: "/people/:personId/end", policy: "people.change", summary: "End a membership", body: people.endMembershipInput },
  appointDeputy: { method: "post", path: "/deputies", policy: "people.change", summary: "Appoint a deputy with dates", body: people.appointDeputyInput },

  readLab: { method: "get", path: "/lab", policy: "lab.read", summary: "The lab's settings", reply: people.labSettings },
  changeLab: { method: "put", path: "/lab", policy: "lab.change", summary: "Change the lab's settings", body: people.changeLabInput, reply: people.labSettings },

  today: { method: "get", path: "/today", policy: "today.read", summary: "What waits for me, what is due, the fleet", reply: work.todayReply },
  search: { method: "get", path: "/search", policy: "search.read", summary: "Find instruments, check numbers, people", query: work.searchQuery, reply: work.searchReply },

  listInstruments: { method: "get", path: "/instruments", policy: "instrument.read", summary: "The fleet", reply: instruments.fleetReply },
  createInstrument: { method: "post", path: "/instruments", policy: "instrument.change", summary: "Register an instrument", body: instruments.createInstrumentInput, reply: instruments.instrument },
  readInstrument: { method: "get", path: "/instruments/:instrumentId", policy: "instrument.read", summary: "One instrument, as one of its configurations stands", query: instruments.instrumentQuery, reply: instruments.instrument },
  changeInstrument: { method: "put", path: "/instruments/:instrumentId", policy: "instrument.change", summary: "Change an instrument", body: instruments.changeInstrumentInput, reply: instruments.instrument },
  retireInstrument: { method: "post", path: "/instruments/:instrumentId/retire", policy: "instrument.change", summary: "Retire an instrument", body: instruments.retireInput, reply: instruments.instrument },
  nextConfiguration: { method: "post", path: "/instruments/:instrumentId/configurations", policy: "instrument.change", summary: "Begin a configuration, in place of one or beside those there are", body: instruments.nextConfigurationInput, reply: instruments.instrument },
  changeConfiguration: { method: "put", path: "/configurations/:configurationId", policy: "instrument.change", summary: "Change a configuration", body: instruments.changeConfigurationInput, reply: instruments.configuration },
  endConfiguration: { method: "post", path: "/configurations/:configurationId/end", policy: "instrument.change", summary: "End a configuration that nothing takes the place of", body: instruments.endConfigurationInput, reply: instruments.instrument },
  changeTolerance: { method: "post", path: "/configurations/:configurationId/tolerance", policy: "tolerance.change", summary: "Set a new tolerance", body: instruments.changeToleranceInput, reply: instruments.configuration },
  changeStanding: { method: "post", path: "/configurations/:configurationId/standing", policy: "standing.change", summary: "Confirm or lift a hold", body: instruments.changeStandingInput, reply: instruments.configuration },
  moveDueDate: { method: "post", path: "/configurations/:configurationId/due", policy: "due.change", summary: "Move the due date, assign", body: instruments.moveDueDateInput, reply: instruments.configuration },
  listAxes: { method: "get", path: "/configurations/:configurationId/axes", policy: "instrument.read", summary: "The axes a configuration has had", reply: instruments.axesReply },
  adoptAxis: { method: "post", path: "/configurations/:configurationId/axes", policy: "axis.change", summary: "Put the axis fitted by a check in force", body: instruments.adoptAxisInput, reply: instruments.configuration },
  readDrift: { method: "get", path: "/configurations/:configurationId/drift", policy: "instrument.read", summary: "The drift series", reply: instruments.driftReply },
  logEvent: { method: "post", path: "/events", policy: "event.log", summary: "Log an event of an instrument", body: instruments.logEventInput, reply: instruments.instrumentEvent },

  listSources: { method: "get", path: "/sources", policy: "source.read", summary: "Reference sources", reply: sources.sourcesReply },
  createSource: { method: "post", path: "/sources", policy: "source.change", summary: "Register a source", body: sources.sourceInput, reply: sources.source },
  readSource: { method: "get", path: "/sources/:sourceId", policy: "source.read", summary: "One source", reply: sources.source },
  changeSource: { method: "put", path: "/sources/:sourceId", policy: "source.change", summary: "Change a source", body: sources.changeSourceInput, reply: sources.source },
  retireSource: { method: "post", path: "/sources/:sourceId/retire", policy: "source.change", summary: "Retire a source", body: sources.retireSourceInput, reply: sources.source },
  storeCertificate: { method: "post", path: "/sources/:sourceId/certificate", policy: "source.change", summary: "Store a source's certificate", upload: { field: "file", maxFiles: 1, maxBytes: 20 * MEGABYTE }, reply: sources.source },
  readCertificate: { method: "get", path: "/sources/:sourceId/certificate", policy: "source.read", summary: "A source's certificate, as stored", replyType: "application/octet-stream" },
  listLineLists: { method: "get", path: "/line-lists", policy: "linelist.read", summary: "Versions of the line library", reply: sources.lineListsReply },
  listLines: { method: "get", path: "/line-lists/:lineListVersion/lines", policy: "linelist.read", summary: "Lines of one version", query: sources.linesQuery, reply: sources.linesReply },
  listProcedures: { method: "get", path: "/procedures", policy: "procedure.read", summary: "The lab's procedures", reply: sources.proceduresReply },

  listChecks: { method: "get", path: "/checks", policy: "check.read", summary: "Checks, newest first", query: checks.checksQuery, reply: checks.checksReply },
  beginCheck: { method: "post", path: "/checks", policy: "check.begin", summary: "Begin a check", body: checks.beginCheckInput, reply: checks.check },
  readCheck: { method: "get", path: "/checks/:checkId", policy: "check.read", summary: "One check", reply: checks.check },
  saveDraft: { method: "put", path: "/checks/:checkId/draft", policy: "check.edit", summary: "Keep the working copy", body: checks.draftInput, reply: checks.check },
  addCaptures: { method: "post", path: "/checks/:checkId/captures", policy: "capture.add", summary: "Store captures, byte for byte, before anything is judged", upload: { field: "files", maxFiles: 40, maxBytes: 50 * MEGABYTE }, reply: checks.uploadReply },
  readCapture: { method: "get", path: "/captures/:captureId/bytes", policy: "capture.read", summary: "A capture's bytes as received", replyType: "application/octet-stream" },
  newAttempt: { method: "post", path: "/checks/:checkId/attempts", policy: "check.edit", summary: "Abandon this attempt and begin the next", body: checks.newAttemptInput, reply: checks.check },
  analyse: { method: "post", path: "/checks/:checkId/analyses", policy: "check.edit", summary: "Analyse the current attempt", body: checks.analyseInput, reply: checks.check },
  readDrawing: { method: "get", path: "/checks/:checkId/analyses/:analysisVersion/drawing", policy: "check.read", summary: "The spectrum to draw", reply: checks.drawingShape },
  setAside: { method: "post", path: "/checks/:checkId/set-aside", policy: "check.edit", summary: "Set a draft aside", body: checks.setAsideInput, reply: checks.check },
  submitCheck: { method: "post", path: "/checks/:checkId/submit", policy: "check.submit", summary: "Sign as maker and submit", body: checks.submitInput, reply: checks.check },
  returnCheck: { method: "post", path: "/checks/:checkId/return", policy: "check.return", summary: "Send back with comments", body: checks.returnInput, reply: checks.check },
  approveCheck: { method: "post", path: "/checks/:checkId/approve", policy: "check.approve", summary: "Sign as reviewer and approve", body: checks.approveInput, reply: checks.check },
  acknowledgeCheck: { method: "post", path: "/checks/:checkId/acknowledge", policy: "check.acknowledge", summary: "The owner takes note", body: checks.acknowledgeCheckInput, reply: checks.check },
  readReport: { method: "get", path: "/checks/:checkId/report", policy: "report.read", summary: "The report as PDF", replyType: "application/pdf" },

  listAlerts: { method: "get", path: "/alerts", policy: "alert.read", summary: "Alerts", query: work.alertsQuery, reply: work.alertsReply },
  acknowledgeAlert: { method: "post", path: "/alerts/:alertId/acknowledge", policy: "alert.acknowledge", summary: "Acknowledge an alert", body: work.acknowledgeAlertInput, reply: work.alert },
  listImpactReviews: { method: "get", path: "/impact-reviews", policy: "impact.read", summary: "Impact reviews", reply: work.impactReply },
  readImpactReview: { method: "get", path: "/impact-reviews/:impactReviewId", policy: "impact.read", summary: "One impact review", reply: work.impactReview },
  decideImpact: { method: "post", path: "/impact-reviews/:impactReviewId/decision", policy: "impact.decide", summary: "The owner decides", body: work.decideImpactInput, reply: work.impactReview },

  listTrail: { method: "get", path: "/trail", policy: "records.read", summary: "Entries of the trail, newest first", query: records.trailQuery, reply: records.trailReply },
  trailDays: { method: "get", path: "/trail/days", policy: "records.read", summary: "Entries a day", reply: records.trailDaysReply },
  readChain: { method: "get", path: "/trail/state", policy: "records.read", summary: "Whether the chain holds", reply: records.chainState },
} as const satisfies Record<string, RouteContract>;

export type RouteName = keyof typeof routes;
