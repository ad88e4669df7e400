/**
 * What the core is told: everything a decision uses, put together from the lab's records as they were in force.
 *
 * Pure: the same records give the same setup, and the setup is stored whole with every analysis.
 */
import {
  builtInLineList,
  linesOf,
  lineWavelengthNm,
  type AnalysisSetup,
  type IdentificationMode,
  type PixelAxis,
} from "@wavekeep/core";
import type { StoredDraft } from "../db/schema/checks.ts";
import type { StoredRule, StoredSegment } from "../db/schema/instruments.ts";
import { problem } from "../http/problem.ts";

/** How well a thermometer on the wall stands for the air in the light path, K, standard. Common practice, no source. */
const roomTemperatureUncC = 0.5;
/** Set-up reproducibility until a lab states one or its history shows it: a tenth of a pixel or step. Common practice, no source. */
const assumedReproducibility = 0.1;
/** Expected false lines per capture at detection. */
const falseLinesPerCapture = 0.01;
/** A required line is the listed one within this distance, nm. */
const sameLineNm = 0.05;

export interface SetupRecords {
  configuration: {
    axisKind: string;
    axisMeaning: string;
    rangeFirstNm: number;
    rangeLastNm: number;
    optics: { pixels: number | null; fullScaleCounts: number | null };
    setupReproducibilityNm: number | null;
    decisionRule: StoredRule;
    warningShare: number;
  };
  procedure: { code: string; elements: string[]; requiredLinesNm: number[] };
  sources: { label: string; kind: string; elements: string[]; laserLineNm: number | null }[];
  draft: StoredDraft;
  tolerance: StoredSegment[];
  axis: {
    coefficients: number[];
    firstPx: number;
    lastPx: number;
    chebyshevCovariance: number[] | null;
    degreesOfFreedom: number | null;
    meaning: string;
  } | null;
  /** Lab's altitude, or the instrument's own, m. */
  altitudeM: number | null;
  /** Scatter of this configuration between checks, from 8 checks on; else null. */
  history: { reproducibilityNm: number; degreesOfFreedom: number } | null;
  /** How the current attempt's captures were read. */
  reading: { axisKind: string; rows: number; first: number; last: number };
}

/** @throws problem "unusable" where sources, axis and captures don't go together; it says what to do */
export function buildSetup(records: SetupRecords): AnalysisSetup {
  const { configuration, draft, procedure } = records;
  const lit = sourceLines(records);
  return {
    ...lit,
    lineListVersion: builtInLineList.version,
    mode: modeOf(records),
    reading: fullScaleOf(records),
    axisMeaning: configuration.axisMeaning as AnalysisSetup["axisMeaning"],
    room: roomOf(records),
    setupReproducibility: reproducibilityOf(records),
    temperatureEffect: null,
    tolerance: records.tolerance,
    decisionRule: configuration.decisionRule,
    warningShare: configuration.warningShare,
    leftOut: draft.leftOut,
    useSaturated: false,
    degree:
      records.axis === null || records.axis.chebyshevCovariance === null ? null : records.axis.coefficients.length - 1,
    falseLinesPerCapture,
    requiredLinesNm: requiredLines(lit.elements, procedure.requiredLinesNm, configuration),
  };
}

function sourceLines({
  sources,
  procedure,
  configuration,
}: SetupRecords): Pick<AnalysisSetup, "elements" | "expectedLinesNm"> {
  if (sources.length === 0)
    throw problem("unusable", "Name the source first: without it no line can have a name. The captures are kept.");
  const lamps = sources.filter((source) => source.kind !== "laser");
  for (const lamp of lamps) {
    if (lamp.kind === "absorption-standard") {
      throw problem(
        "unusable",
        `${lamp.label} is an absorption standard; procedure ${procedure.code} judges emission lines. Choose a lamp or a laser. The captures are kept.`,
      );
    }
    const foreign = lamp.elements.filter((element) => !procedure.elements.includes(element));
    if (foreign.length > 0) {
      throw problem(
        "unusable",
        `${lamp.label} has lines of ${foreign.join(", ")}; procedure ${procedure.code} is made for ${procedure.elements.join(", ")}. Choose another source. The captures are kept.`,
      );
    }
  }
  const lampElements = [...new Set(lamps.flatMap((lamp) => lamp.elements))];
  const laserLines = sources.flatMap((source) =>
    source.kind === "laser" && source.laserLineNm !== null ? [source.laserLineNm] : [],
  );
  if (laserLines.length === 0) return { elements: lampElements, expectedLinesNm: [] };
  // A laser's line stands in the library under `laser`; naming all of them would let a neon line pass for a laser's.
  const margin = 0.1 * (configuration.rangeLastNm - configuration.rangeFirstNm);
  const lampLines = linesOf(
    builtInLineList,
    lampElements,
    configuration.rangeFirstNm - margin,
    configuration.rangeLastNm + margin,
  );
  return {
    elements: [...lampElements, "laser"],
    expectedLinesNm: [...lampLines.map((line) => lineWavelengthNm(line).wavelengthNm), ...laserLines],
  };
}

function requiredLines(
  elements: string[],
  required: number[],
  range: { rangeFirstNm: number; rangeLastNm: number },
): number[] {
  const lines = linesOf(builtInLineList, elements, range.rangeFirstNm, range.rangeLastNm).map(
    (line) => lineWavelengthNm(line).wavelengthNm,
  );
  return required.flatMap((wanted) => {
    const listed = lines.find((wavelengthNm) => Math.abs(wavelengthNm - wanted) <= sameLineNm);
    return listed === undefined ? [] : [listed];
  });
}

function modeOf({ configuration, draft, axis, reading }: SetupRecords): IdentificationMode {
  const own = reading.axisKind === "wavelength";
  if (configuration.axisKind === "wavelength") {
    if (!own) {
      throw problem(
        "unusable",
        "These captures hold no wavelength axis, and this configuration is judged by the one its instrument writes. Export with wavelengths, or have a manager change the kind of axis. The captures are kept.",
      );
    }
    return { kind: "earlier-axis", axis: "own" };
  }
  if (own) {
    throw problem(
      "unusable",
      "These captures hold wavelengths, and this configuration counts pixels. Export with pixel numbers, or have a manager change the kind of axis. The captures are kept.",
    );
  }
  if (draft.mode === "earlier-axis" && axis !== null) return { kind: "earlier-axis", axis: pixelAxis(axis) };
  if (draft.mode === "none") return { kind: "none" };
  const firstNm = draft.rangeFirstNm ?? configuration.rangeFirstNm;
  const lastNm = draft.rangeLastNm ?? configuration.rangeLastNm;
  if (draft.mode === "earlier-axis") {
    throw problem(
      "unusable",
      "No axis is in force for this configuration yet. Name the lines by the range instead (the first and last wavelength of the capture), or by the lamp alone. The captures are kept.",
    );
  }
  if (firstNm === lastNm)
    throw problem(
      "unusable",
      "The range has no width: give the wavelengths of the first and of the last pixel. The captures are kept.",
    );
  return { kind: "range", firstNm, lastNm };
}

function pixelAxis(axis: NonNullable<SetupRecords["axis"]>): PixelAxis {
  const { coefficients, firstPx, lastPx, chebyshevCovariance, degreesOfFreedom, meaning } = axis;
  return {
    coefficients,
    firstPx,
    lastPx,
    chebyshevCovariance,
    degreesOfFreedom,
    meaning: meaning as PixelAxis["meaning"],
  };
}

function fullScaleOf({ draft, configuration }: SetupRecords): AnalysisSetup["reading"] {
  const fullScaleCounts = draft.fullScaleCounts ?? configuration.optics.fullScaleCounts;
  return fullScaleCounts === null ? {} : { fullScaleCounts };
}

function roomOf({ draft, altitudeM }: SetupRecords): AnalysisSetup["room"] {
  if (draft.temperatureC === null && draft.pressureHpa === null && altitudeM === null) return null;
  return {
    temperatureC: draft.temperatureC,
    temperatureUncC: roomTemperatureUncC,
    pressurePa: draft.pressureHpa === null ? null : draft.pressureHpa * 100,
    altitudeM,
    relativeHumidity: draft.relativeHumidity,
  };
}

/** Set-up reproducibility: from the configuration's own history, else stated, else assumed; px on pixel and step axes, else nm. */
function reproducibilityOf({
  configuration,
  axis,
  history,
  reading,
}: SetupRecords): NonNullable<AnalysisSetup["setupReproducibility"]> {
  const unit = reading.axisKind === "wavelength" ? "nm" : "px";
  // nm per sample at the middle of the range, where the series is kept.
  const nmPerSample = unit === "nm" ? 1 : dispersionNmPerPx(configuration, axis, reading.rows);
  if (history !== null) {
    return {
      value: history.reproducibilityNm / nmPerSample,
      unit,
      basis: "history",
      degreesOfFreedom: history.degreesOfFreedom,
    };
  }
  if (configuration.setupReproducibilityNm !== null) {
    return { value: configuration.setupReproducibilityNm / nmPerSample, unit, basis: "stated", degreesOfFreedom: null };
  }
  const step = unit === "px" ? 1 : Math.abs(reading.last - reading.first) / Math.max(1, reading.rows - 1);
  return { value: assumedReproducibility * step, unit, basis: "assumed", degreesOfFreedom: null };
}

function dispersionNmPerPx(
  configuration: SetupRecords["configuration"],
  axis: SetupRecords["axis"],
  rows: number,
): number {
  const pixels = configuration.optics.pixels ?? rows;
  if (axis === null) return (configuration.rangeLastNm - configuration.rangeFirstNm) / Math.max(1, pixels - 1);
  const middle = (pixels - 1) / 2;
  const slope = axis.coefficients.reduce(
    (sum, coefficient, power) => (power === 0 ? sum : sum + power * coefficient * middle ** (power - 1)),
    0,
  );
  return Math.abs(slope);
}
