import type { AnalysisSetup } from "./types.ts";

/** Everything an analysis is told, with the defaults of a plain check; what is given replaces a default. */
export function defaultSetup(given: Partial<AnalysisSetup> = {}): AnalysisSetup {
  return {
    elements: [],
    expectedLinesNm: [],
    requiredLinesNm: [],
    lineListVersion: "2026.1",
    mode: { kind: "earlier-axis", axis: "own" },
    reading: {},
    axisMeaning: "standard-air",
    room: null,
    setupReproducibility: null,
    temperatureEffect: null,
    tolerance: [],
    decisionRule: { kind: "guarded", r: 1 },
    warningShare: 0.75,
    leftOut: [],
    useSaturated: false,
    degree: null,
    falseLinesPerCapture: 0.01,
    lineShape: "automatic",
    ...given,
  };
}
