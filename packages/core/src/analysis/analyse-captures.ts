/**
 * The front door: the captures of one check to lines, names, errors with uncertainties, an axis and a verdict.
 *
 * Data flows one way: text -> spectrum -> lines -> names -> axis -> verdict. Everything that was decided stands in the result with
 * its reason; what can't be decided is refused in a sentence, never guessed.
 */
import { textToBytes } from "../capture/decode.ts";
import { refuse } from "../capture/refusal.ts";
import { identifyLines, type IdentifiedLines, type IdentifyInput } from "../identify/identify-lines.ts";
import { builtInLineList } from "../linelist/built-in.ts";
import { smoothedAbove, type FoundLines } from "../spectrum/find-lines.ts";
import { coreVersion } from "../version.ts";
import { absorptionOf, combineAbsorption, toVacuumAbsorption } from "./absorption-captures.ts";
import { analyseBands, bandSettingsProblem } from "./analyse-bands.ts";
import { combineCaptures, mapSpectra, type CombinedCaptures } from "./combine-captures.ts";
import { drawSpectrum } from "./draw-spectrum.ts";
import { findMisplaced, fitAxis, misplacedReason } from "./fit-axis.ts";
import { indicatingAxisOf, type IndicatingAxis } from "./indicating-axis.ts";
import { driftPointOfLines, jointProbabilityOf, sharedUncOf, verdictsOf } from "./judge-check.ts";
import { judgeLine, type JudgedLineResult } from "./judge-lines.ts";
import { notIncludedIn } from "./line-budget.ts";
import { measureLines } from "./measure-lines.ts";
import { identifyRamanShifts, ramanCertificateProblem } from "./raman-names.ts";
import { errorCurveOf, judgeSegments } from "./segments.ts";
import { toleranceInNm, toVacuumWavelengths, toWavenumbers, turnedLike, wavenumberProblem } from "./wavenumber-axis.ts";
import { identifyWindows } from "./window-names.ts";
import type {
  AnalysedCheck,
  Analysis,
  AnalysisSetup,
  CaptureInput,
  FileFacts,
  FittedLine,
  LineList,
  Refusal,
  Spectrum,
} from "./types.ts";

/** What may be exchanged beside the setup; a lab's own line list travels here, its version in the setup. */
export interface AnalysisResources {
  lineList?: LineList;
  /** False: no drawing is made, for callers that show none. Default true. */
  withDrawing?: boolean;
}

/**
 * Analyse one capture.
 *
 * @param source  the file's bytes or text, or a spectrum already in columns
 */
export function analyseCapture(
  source: Uint8Array | string | Spectrum,
  setup: AnalysisSetup,
  resources: AnalysisResources = {},
): AnalysedCheck {
  if (typeof source === "string") return analyseCapture(textToBytes(source), setup, resources);
  if (source instanceof Uint8Array) {
    return analyseCaptures([{ name: "capture", bytes: source, sha256: null, part: "lamp" }], setup, resources);
  }
  if (setup.sampleKind === "absorption") return analyseAbsorption(absorptionOf(source), setup, resources);
  const combined: CombinedCaptures = {
    outcome: "read",
    spectrum: source,
    repeats: [source],
    saturated: null,
    ceilingCounts: null,
    files: [],
    darkCount: 0,
    remarks: [],
  };
  return analyseOnAxis(combined, setup, resources);
}

/**
 * Analyse the captures of one check: repeats of one lamp, with or without darks, all on one axis.
 *
 * @returns always a whole analysis; a refusal is one with outcome `refused`, its sentence in `reason` and its code among the warnings
 */
export function analyseCaptures(
  captures: readonly CaptureInput[],
  setup: AnalysisSetup,
  resources: AnalysisResources = {},
): AnalysedCheck {
  if (setup.sampleKind === "absorption") return analyseAbsorption(combineAbsorption(captures, setup), setup, resources);
  const combined = combineCaptures(captures, setup.reading);
  if (combined.outcome === "refused") return refused(combined.refusal, combined.files, setup, null);
  return analyseOnAxis(combined, setup, resources);
}

function analyseAbsorption(
  combined: ReturnType<typeof combineAbsorption>,
  setup: AnalysisSetup,
  resources: AnalysisResources,
): AnalysedCheck {
  if (combined.outcome === "refused") return refused(combined.refusal, combined.files, setup, null);
  const refuseWith = (problem: string): AnalysedCheck =>
    refused(refuse("bad-settings", problem), combined.files, setup, combined.spectrum);
  const withDrawing = resources.withDrawing !== false;
  if (combined.spectrum.axisKind !== "wavenumber") {
    const problem = bandSettingsProblem(combined.spectrum, setup);
    return problem === null ? analyseBands(combined, setup, withDrawing) : refuseWith(problem);
  }
  const inVacuum = toVacuumAbsorption(combined);
  const asked: AnalysisSetup = { ...setup, axisMeaning: "vacuum" };
  const problem = wavenumberProblem(combined.spectrum, null) ?? bandSettingsProblem(inVacuum.spectrum, asked);
  if (problem !== null) return refuseWith(problem);
  const check = analyseBands(inVacuum, asked, withDrawing);
  check.analysis.setup = setup;
  return toWavenumbers(check, null);
}

/** Wavenumbers are analysed in vacuum wavelengths and come back as wavenumbers. */
function analyseOnAxis(combined: CombinedCaptures, setup: AnalysisSetup, resources: AnalysisResources): AnalysedCheck {
  if (combined.spectrum.axisKind !== "wavenumber") return analyseCombined(combined, setup, resources);
  const laser = setup.laser ?? null;
  const certificate = setup.ramanCertificate ?? null;
  const problem =
    wavenumberProblem(combined.spectrum, laser) ??
    (certificate === null ? null : ramanCertificateProblem(certificate, laser));
  if (problem !== null) return refused(refuse("bad-settings", problem), combined.files, setup, combined.spectrum);
  const inVacuum = mapSpectra(
    combined,
    // Shifts of a material count from the same laser as the axis does, whatever its wavelength.
    (spectrum) =>
      toVacuumWavelengths(spectrum, laser === null || certificate === null ? laser : { ...laser, uncNm: 0 }),
    (mask) => turnedLike(mask, laser),
  );
  const check = analyseCombined(inVacuum, { ...setup, axisMeaning: "vacuum" }, resources);
  check.analysis.setup = setup;
  return toWavenumbers(check, laser);
}

function analyseCombined(
  combined: CombinedCaptures,
  setup: AnalysisSetup,
  resources: AnalysisResources,
): AnalysedCheck {
  const { files } = combined;
  const lineList = resources.lineList ?? builtInLineList;
  const problem = settingsProblem(combined.spectrum, setup, lineList);
  if (problem !== null) return refused(refuse("bad-settings", problem), files, setup, combined.spectrum);
  const { spectrum, found, repeatability, backlash, stretches } = measureLines(combined, setup);
  const axis = indicatingAxisOf(spectrum, setup);
  const n = spectrum.positions.length;
  const firstPosition = spectrum.positions[0]!;
  const lastPosition = spectrum.positions[n - 1]!;
  const certificate = spectrum.ramanLaser === undefined ? null : (setup.ramanCertificate ?? null);
  const identify = (input: IdentifyInput): IdentifiedLines =>
    certificate !== null
      ? identifyRamanShifts(input.lines, firstPosition, lastPosition, certificate, spectrum.ramanLaser!)
      : stretches === null
        ? identifyLines(input)
        : identifyWindows(input, stretches, axis);
  const identified: IdentifiedLines =
    found.lines.length === 0 || found.medianFwhm === null
      ? nothingFound()
      : identify({
          lines: found.lines,
          firstPosition,
          lastPosition,
          axisKind: spectrum.axisKind,
          medianFwhm: found.medianFwhm,
          elements: setup.elements,
          expectedLinesNm: setup.expectedLinesNm,
          lineList,
          mode: setup.mode,
          axisMeaning: setup.axisMeaning,
          toleranceNm: tightestTolerance(setup, firstPosition),
        });
  const judge = (): JudgedLineResult[] =>
    found.lines.map((line, index) =>
      judgeLine(
        { line, name: identified.names[index] ?? null, repeatability: repeatability[index] ?? null },
        axis,
        setup,
      ),
    );
  let lines = judge();
  let newAxis = fitAxis(spectrum, found, lines, setup, identified);
  const misplaced = findMisplaced(found, newAxis.dispersion, setup, identified);
  if (misplaced.length > 0) {
    for (const index of misplaced) identified.names[index] = null;
    lines = judge();
    for (const index of misplaced) lines[index]!.result.reason = misplacedReason;
    newAxis = fitAxis(spectrum, found, lines, setup, identified);
  }
  const { dispersion } = newAxis;
  const results = lines.map((one) => one.result);
  const verdicts = verdictsOf(lines, identified, setup, axis);
  const driftPoint = driftPointOfLines(lines);
  const curve = errorCurveOf(axis, dispersion, driftPoint, sharedUncOf(lines));
  const analysis: Analysis = {
    format: 1,
    coreVersion,
    outcome: identified.outcome,
    reason: identified.outcome === "identified" ? null : identified.reason,
    setup,
    files,
    axisKind: spectrum.axisKind,
    axisUnit: spectrum.axisUnit,
    noiseCounts: found.noiseCounts,
    noiseCorrelation: found.noiseCorrelation,
    ...(found.noiseAutocorrelation === undefined ? {} : { noiseAutocorrelation: found.noiseAutocorrelation }),
    ...(found.lineShape === undefined ? {} : { lineShape: found.lineShape }),
    medianFwhm: found.medianFwhm,
    ...(backlash === null || axis === null ? {} : { backlashNm: backlashInNm(backlash, axis, found.lines) }),
    lines: results,
    missingLinesNm: identified.missingLinesNm,
    verdict: verdicts.asAsked,
    verdictWithEveryLine: verdicts.withEveryLine,
    jointConformanceProbability: jointProbabilityOf(lines),
    segments: judgeSegments(results, setup.tolerance, curve),
    dispersion,
    driftPoint,
    confidence: { chanceProbability: identified.chanceProbability, margin: identified.margin, note: identified.note },
    notIncluded: notIncludedIn(axis, setup),
    warnings: [...warningsOf(found, combined), ...identified.warnings, ...newAxis.warnings],
  };
  return {
    analysis,
    drawing: resources.withDrawing === false ? null : drawSpectrum(spectrum, found, axis, dispersion),
  };
}

function settingsProblem(spectrum: Spectrum, setup: AnalysisSetup, lineList: LineList): string | null {
  if (setup.lineListVersion !== lineList.version) {
    return `The analysis asks for line list ${setup.lineListVersion}; the one at hand is ${lineList.version}.`;
  }
  const { mode } = setup;
  if (mode.kind === "range") {
    if (!(mode.firstNm > 0 && mode.lastNm > 0) || mode.firstNm === mode.lastNm) {
      return "The range needs two different wavelengths above 0 nm.";
    }
    return null;
  }
  if (mode.kind === "none") return null;
  if (mode.axis === "own") {
    return spectrum.axisKind === "wavelength"
      ? null
      : "The capture counts pixels or steps and says no wavelength. Give an earlier axis, or the first and last wavelength of its range.";
  }
  if (spectrum.axisKind === "wavelength") {
    return "The capture has a wavelength axis of its own, and an earlier pixel axis was given. Choose the file's own axis, or export pixels.";
  }
  if (mode.axis.coefficients.length < 2 || mode.axis.coefficients.some((value) => !Number.isFinite(value))) {
    return "The earlier axis needs at least two coefficients, all of them numbers.";
  }
  return null;
}

/** Backlash in nm at the middle line; positive where the upward scan indicates more. */
function backlashInNm(
  { value, unc }: { value: number; unc: number },
  axis: IndicatingAxis,
  lines: readonly FittedLine[],
): { value: number; unc: number } {
  const slope = axis.slopeNm(lines[lines.length >> 1]!.position);
  return { value: value * slope, unc: unc * Math.abs(slope) };
}

function nothingFound(): IdentifiedLines {
  return {
    outcome: "unidentified",
    reason: "No line stands out of the noise. Is the lamp on, and its light in the slit?",
    names: [],
    axis: null,
    chanceProbability: 1,
    margin: 0,
    note: "no line was found",
    warnings: [{ code: "no-lines", text: "No line stands out of the noise." }],
    missingLinesNm: [],
    otherGases: [],
  };
}

/** In nm; one in cm-1 is smallest where the wavelength is, at the first position of an axis of wavelengths. */
function tightestTolerance(setup: AnalysisSetup, firstNm: number): number | null {
  let tightest: number | null = null;
  for (const { toleranceNm } of setup.tolerance)
    if (tightest === null || toleranceNm < tightest) tightest = toleranceNm;
  return tightest === null ? null : toleranceInNm(tightest, setup, firstNm, firstNm);
}

function warningsOf(found: FoundLines, combined: CombinedCaptures): Analysis["warnings"] {
  const warnings: Analysis["warnings"] = [];
  for (const file of combined.files) {
    for (const text of file.remarks)
      warnings.push({ code: "reading", text: combined.files.length > 1 ? `${file.name}: ${text}` : text });
  }
  for (const text of combined.remarks) warnings.push({ code: "captures", text });
  for (const text of found.notes) {
    const code =
      found.noiseCorrelation > smoothedAbove && text.includes("smoothed")
        ? "smoothed"
        : text.includes("saturated")
          ? "saturated"
          : "spikes";
    warnings.push({ code, text });
  }
  return warnings;
}

function refused(refusal: Refusal, files: FileFacts[], setup: AnalysisSetup, spectrum: Spectrum | null): AnalysedCheck {
  const analysis: Analysis = {
    format: 1,
    coreVersion,
    outcome: "refused",
    reason: refusal.reason,
    setup,
    files,
    axisKind: spectrum?.axisKind ?? "pixel",
    axisUnit: spectrum?.axisUnit ?? "px",
    noiseCounts: 0,
    noiseCorrelation: 0,
    medianFwhm: null,
    lines: [],
    missingLinesNm: [],
    verdict: null,
    verdictWithEveryLine: null,
    segments: [],
    dispersion: null,
    driftPoint: null,
    confidence: { chanceProbability: 1, margin: 0, note: "" },
    notIncluded: [],
    warnings: [{ code: refusal.code, text: refusal.reason }],
  };
  return { analysis, drawing: null };
}
