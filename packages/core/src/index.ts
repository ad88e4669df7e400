/**
 * The measuring core's front door: a capture and a setup in, one plain analysis out. Everything else here is what callers need to
 * prepare a setup and to show a result.
 */
export * from "./analysis/types.ts";
export { analyseCapture, analyseCaptures, type AnalysisResources } from "./analysis/analyse-captures.ts";
export { defaultSetup } from "./analysis/defaults.ts";
export { errorPerCm, expandedUncPerCm } from "./analysis/wavenumber-axis.ts";
export { readCapture } from "./capture/read-capture.ts";
export { assessDrift } from "./drift/assess-drift.ts";
export type * from "./drift/assess-drift.ts";
export type { DriftKind } from "./drift/choose-model.ts";
export { dayOfDate, dayOfIsoDate, isoDateOfDay } from "./drift/civil-date.ts";
export { driftPointOf, type DriftLine } from "./drift/drift-point.ts";
export type { DriftCheck } from "./drift/history.ts";
export { commonCauses } from "./drift/common-cause.ts";
export type * from "./drift/common-cause.ts";
export { proposeInterval } from "./interval/propose-interval.ts";
export type * from "./interval/propose-interval.ts";
export { axisNm, axisPx, axisSlope, axisUncNm, isMonotonic } from "./dispersion/axis.ts";
export { photonEnergyEv } from "./light/quantities.ts";
export { builtInLineList, elementsOf, isFromMemory, lineWavelengthNm, linesOf } from "./linelist/built-in.ts";
export { judgeError, toleranceAt } from "./uncertainty/conformity.ts";
export { roundResult, type RoundedResult } from "./uncertainty/rounding.ts";
export {
  applyAxis,
  naturalSteps,
  type AppliedAxis,
  type ApplyRefusal,
  type EvenSteps,
} from "./dispersion/apply-axis.ts";
export { updateAxis, type UpdatedDispersion } from "./dispersion/update-axis.ts";
export { globalRisks, type GlobalRisks, type RiskSettings } from "./uncertainty/global-risk.ts";
export {
  setupReproducibilityOf,
  type HistoryPoint,
  type SetupReproducibility,
} from "./uncertainty/setup-reproducibility.ts";
export { coreVersion } from "./version.ts";
