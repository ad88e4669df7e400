/**
 * The shapes that travel through the measuring core, from a read capture to a verdict.
 *
 * Everything here is plain JSON-able data (typed arrays only in `Spectrum`, which never leaves the
 * core's own process). A name ending in `Nm`, `Px`, `Counts` carries that unit; `...Unc...` is a
 * standard uncertainty (k = 1) in the unit of the value; `...ExpandedUnc...` comes with a coverage factor.
 * `position`, `positionUnc` and `fwhm` of a line are in the capture's own axis unit (`axisUnit`).
 */

/** What the first column of a capture counts. A pixel axis counts samples from 0, centre of the first. */
export type AxisKind = "pixel" | "wavelength" | "wavenumber" | "step";
export type AxisUnit = "px" | "nm" | "Å" | "µm" | "cm-1" | "eV" | "step";
export type Medium = "air" | "vacuum";
/** What a wavelength axis means: vacuum, standard air (15 °C, 101 325 Pa, dry) or the air of the room. */
export type AxisMeaning = "vacuum" | "standard-air" | "room-air";
export type Verdict = "pass" | "inconclusive" | "fail";
export type Outcome = "identified" | "ambiguous" | "unidentified" | "refused";

/** One recorded spectrum as columns, strictly monotonic in `positions`, sorted ascending. */
export interface Spectrum {
  axisKind: AxisKind;
  /** Unit of `positions`; wavelengths are always converted to nm on reading (`Å`, `µm` stay in `FileFacts`). */
  axisUnit: AxisUnit;
  /** True when the file's own order ran downwards and the samples were turned round. */
  wasDescending: boolean;
  /** Sample centres in `axisUnit`, ascending, length n. */
  positions: Float64Array;
  /** Intensity as written (counts or the maker's unit), length n; NaN where the cell was blank. */
  counts: Float64Array;
  /** Known full scale of the detector in counts for one scan (12 bit: 4095), or null. */
  fullScaleCounts: number | null;
  /** Number of scans that were summed (not averaged) into each sample. */
  scansSummed: number;
  /** Set once a new axis was applied: which. A spectrum that has it is not corrected again. Absent = as recorded. */
  correctedBy?: { coefficients: number[]; meaning: AxisMeaning; isResampled: boolean };
  /** The file counted Raman shifts from this line, and the positions were made of them; absent = it did not. */
  ramanLaser?: LaserLine;
}

/** What a file said, as read: shown to the person, printed by `analyse`. */
export interface FileFacts {
  name: string;
  /** SHA-256 of the bytes, lower-case hex, when the caller computed it (the core has no crypto); else null. */
  sha256: string | null;
  rows: number;
  axis: AxisKind;
  axisUnit: AxisUnit;
  /** Axis value of the first and last data row, in file order. */
  first: number;
  last: number;
  intensitySum: number;
  intensityMax: number;
  metadata: Record<string, string>;
  delimiter: "," | ";" | "\t" | " ";
  decimal: "." | ",";
  /** Blank or NaN cells in the chosen columns. */
  missing: number;
  encoding: "utf-8" | "utf-16le" | "utf-16be" | "latin-1";
  headerLines: number;
  /** Column headings in file order (`column 1`… where there are none) and which were chosen. */
  columns: string[];
  axisColumn: number | null;
  intensityColumn: number;
  /** Lines that could not be read, at most 20, with the reason. */
  damagedLines: { line: number; reason: string }[];
  /** Plain sentences about guesses a person should see. */
  remarks: string[];
  /** The lines point down in the file and the signal was turned over; absent = as written. */
  inverted?: boolean;
  /** Which way the axis ran in the file; absent = from `first` to `last`. */
  direction?: "up" | "down";
  /** Tables below one another, or blocks of a compound file; absent = one. */
  tables?: number;
  /** A JCAMP-DX file, whose `delimiter` says nothing; absent = delimited text. */
  format?: "jcamp-dx";
}

/** Corrections of the reader's guesses. */
export interface ReadOptions {
  axisColumn?: number | null;
  intensityColumn?: number;
  axisKind?: AxisKind;
  axisUnit?: AxisUnit;
  delimiter?: FileFacts["delimiter"];
  decimal?: FileFacts["decimal"];
  fullScaleCounts?: number;
  scansSummed?: number;
  /** Column of intensities by its heading (letter case ignored), or in a compound file the title of the block; `intensityColumn` wins. Absent = guessed. */
  intensityName?: string;
  /** Sign that groups thousands; `none`: no sign does. Absent = any but the decimal sign, where it can be nothing else. */
  thousands?: "," | "." | " " | "'" | "none";
  /** Where the comma is delimiter and decimal sign at once: how many pieces (1 or 2) make each column. Absent = told from all rows, or asked. */
  cellsPerColumn?: number[];
  /** `true`: lines point down, the signal is turned over; `false`: it stays as written. Absent = told from the signal, with a remark. */
  inverted?: boolean;
  /** Lines at the beginning of the file that are not looked at. Absent = 0. */
  skipLines?: number;
  /** Which of several tables below one another, or blocks of a compound file, counted from 0. Absent = the longest, with a remark. */
  table?: number;
}

/** One way to read a file that can be read in more than one. */
export interface PossibleReading {
  /** Given to `readCapture` (with the options of before), the file is read so. */
  options: ReadOptions;
  /** For people: what this reading makes of the file. */
  description: string;
  /** Numbers of the first data row as this reading has them. */
  firstRow: number[];
}

/** A refusal while reading or analysing: typed, with a sentence for people. */
export interface Refusal {
  outcome: "refused";
  code:
    | "empty-file"
    | "binary-file"
    | "no-numbers"
    | "one-column-text"
    | "too-few-rows"
    | "non-monotonic-axis"
    | "duplicate-positions"
    | "ambiguous-number-format"
    | "damaged-data"
    | "unsupported-content"
    | "no-such-column"
    | "different-axes"
    | "no-lines"
    | "bad-settings";
  /** What happened and what to do, one or two sentences. */
  reason: string;
  /** 1-based line of the file where it was seen, when there is one. */
  line: number | null;
  /** Two readings or more that fit alike: the person chooses one. Absent = nothing to choose. */
  readings?: PossibleReading[];
}

export type ReadCapture = { outcome: "read"; spectrum: Spectrum; facts: FileFacts } | Refusal;

export type LineFlag =
  | "saturated"
  | "blend"
  | "spike"
  | "edge"
  | "poor-fit"
  | "weak"
  | "outlier"
  | "second-order"
  | "smoothed"
  | "room-light";

/** A line found and fitted, before it has a name. Positions in the axis unit of the spectrum. */
export interface FittedLine {
  position: number;
  positionUnc: number;
  fwhm: number;
  fwhmUnc: number;
  areaCounts: number;
  peakHeightCounts: number;
  /** Height over the local noise. */
  signalToNoise: number;
  reducedChiSquare: number;
  degreesOfFreedom: number;
  /** First and last sample index of the window that was fitted. */
  windowFirst: number;
  windowLast: number;
  /** Index of the lines that were fitted together share this group number. */
  group: number;
  flags: LineFlag[];
  /** Shape that was fitted; absent = gaussian. */
  shape?: LineShapeName;
  /** By name (`docs/methods/lines.md`), without unit; unc 0 where the value was held; absent = the shape has none. */
  shapeParameters?: Record<string, { value: number; unc: number }>;
  /** Of position, FWHM and area, then the shape parameter where it was free: row-major. Absent = not kept. */
  covariance?: number[];
  /** Degrees of freedom of `positionUnc` where its noise was learned from few samples; absent = as the scatter about the fit says. */
  positionDegreesOfFreedom?: number;
  /** Names of the files this line was taken from: of several exposures or windows; absent = all of the check's captures. */
  takenFrom?: string[];
  /** Scanned upwards minus scanned downwards, axis unit, with standard uncertainty; absent = not seen in both directions. */
  backlash?: { value: number; unc: number };
}

/** One published line. */
export interface ReferenceLine {
  element: string;
  /** Spectrum in spectroscopic notation, e.g. `Hg I`. */
  spectrum: string;
  /** Standard air; null below 200 nm. */
  wavelengthAirNm: number | null;
  wavelengthVacuumNm: number;
  /** Standard uncertainty, nm; null where the source gives none (then 0.001 nm is assumed and marked). */
  uncertaintyNm: number | null;
  /** Qualitative, scale differs between spectra: evidence, never proof. null where the source gives none. */
  relativeIntensity: number | null;
  source: string;
  note: string;
}
export interface LineList {
  version: string;
  title: string;
  lines: readonly ReferenceLine[];
}

/** A polynomial axis: nm in ascending powers of the pixel, with covariance for honest uncertainties. */
export interface PixelAxis {
  /** nm, ascending powers of the pixel: c0 + c1 p + c2 p² + … */
  coefficients: number[];
  /** First and last pixel that the axis was fitted on (its outermost lines). */
  firstPx: number;
  lastPx: number;
  /** Covariance of the coefficients of T_j(t), t = (2p - firstPx - lastPx)/(lastPx - firstPx), in nm²; row-major (n+1)². null when unknown (typed in by hand). */
  chebyshevCovariance: number[] | null;
  degreesOfFreedom: number | null;
  /** What its wavelengths mean. */
  meaning: AxisMeaning;
}

export type IdentificationMode =
  /** The file's own wavelength axis (axisKind wavelength) or an earlier pixel axis. */
  | { kind: "earlier-axis"; axis: PixelAxis | "own" }
  /** First and last wavelength of the capture, each good to 5 % of the span. */
  | { kind: "range"; firstNm: number; lastNm: number }
  /** Nothing but the lamp's elements; the wavelength may rise or fall with the pixel. */
  | { kind: "none" };

/** What a capture shows: bright lines of a lamp, or the absorption bands of a standard. */
export type SampleKind = "emission" | "absorption";

/** Profile of a line; each is averaged over the pixel on a pixel axis. `empirical` is learned from the capture's own strong lines. */
export type LineShapeName =
  "gaussian" | "lorentzian" | "voigt" | "pseudo-voigt" | "exponentially-modified-gaussian" | "box" | "empirical";
/** `automatic`: one shape for the whole capture, chosen from its strong lines by an information criterion. */
export type LineShapeChoice = LineShapeName | "automatic";

/** The shape that a capture's lines were fitted with. */
export interface CaptureLineShape {
  name: LineShapeName;
  /** `evidence`: by an information criterion over the strong lines. */
  chosenBy: "default" | "setup" | "evidence";
  /** Shape parameter over the strong lines, and its scatter between them beyond their uncertainties; null: it has none, or no line shows it. */
  parameter: { name: string; value: number; unc: number; scatter: number } | null;
  /** Strong, single, unsaturated lines that it rests on. */
  lines: number;
  /** A sentence. */
  note: string;
}

/**
 * What a line's position means. `fitted`: centre of symmetry of the fitted shape, for a skewed one its first moment. The other two
 * are an instrument's own way of reading a maximum. A configuration keeps one; a change is an event in its series.
 */
export type PositionDefinition = "fitted" | "highest-sample" | "three-point-parabola";

/** Certified bands of an absorption standard, for one spectral bandwidth of the instrument. */
export interface BandCertificate {
  material: string;
  /** Spectral bandwidth that the values are certified for, nm; null where the certificate names none. */
  bandwidthNm: number | null;
  bands: { wavelengthNm: number; expandedUncNm: number; coverageFactor: number }[];
}

/** Certified Raman shifts of a material. */
export interface RamanCertificate {
  material: string;
  shifts: { shiftPerCm: number; expandedUncPerCm: number; coverageFactor: number }[];
}

/** The line that a wavenumber axis of Raman shifts counts from. */
export interface LaserLine {
  wavelengthVacuumNm: number;
  uncNm: number;
}

export interface ToleranceSegment {
  fromNm: number;
  toNm: number;
  toleranceNm: number;
}
export type DecisionRule = { kind: "simple" } | { kind: "guarded"; r: number };

export type LeaveOutReason = "saturated" | "blended" | "spike" | "too-weak" | "disturbed";
export interface LeftOutLine {
  wavelengthNm: number;
  reason: LeaveOutReason;
  note: string;
}

/** Conditions of the room; each null when it was not recorded. */
export interface RoomConditions {
  temperatureC: number | null;
  temperatureUncC: number;
  pressurePa: number | null;
  altitudeM: number | null;
  relativeHumidity: number | null;
}

/** Everything the analysis is told. Echoed whole in the result, so that it can be repeated. */
export interface AnalysisSetup {
  /** Elements of the source, e.g. ["Hg","Ar"]. */
  elements: string[];
  /** Only these lines are expected (a procedure's list); empty = every line of the elements. Air nm above 200, vacuum below. */
  expectedLinesNm: number[];
  /** Lines of which each must be judged, else the check is inconclusive. Air nm above 200, vacuum below. */
  requiredLinesNm: number[];
  lineListVersion: string;
  mode: IdentificationMode;
  reading: ReadOptions;
  axisMeaning: AxisMeaning;
  room: RoomConditions | null;
  /** px for pixel axes, else nm; null = leave it out and say so (`practice`, the command line). */
  setupReproducibility: {
    value: number;
    unit: "px" | "nm";
    basis: "history" | "stated" | "assumed";
    degreesOfFreedom: number | null;
  } | null;
  /** Shift of the axis per kelvin and the spread of the room's temperature that it is multiplied with; null = none. */
  temperatureEffect: { coefficientNmPerK: number; spreadK: number } | null;
  tolerance: ToleranceSegment[];
  decisionRule: DecisionRule;
  /** Share of the tolerance above which a pass is called near limit. */
  warningShare: number;
  leftOut: LeftOutLine[];
  /** Saturated lines are never used unless asked for. */
  useSaturated: boolean;
  /** Polynomial degree of the axis when it is known from earlier calibrations; null = chosen by leave-one-out. */
  degree: number | null;
  /** False-alarm rate of detection, expected false lines per capture (default 0.01). */
  falseLinesPerCapture: number;

  // What follows came later: setups stored before lack it, and absence means the default.

  /** Default `emission`. */
  sampleKind?: SampleKind;
  /** Absorption: the standard's certificate, and the instrument's spectral bandwidth, nm. */
  bandCertificate?: BandCertificate | null;
  spectralBandwidthNm?: number | null;
  /** Absent = `gaussian`; the default setup says `automatic`. */
  lineShape?: LineShapeChoice;
  /** Default `fitted`. */
  positionDefinition?: PositionDefinition;
  /** Unit of every `toleranceNm` of `tolerance`: on a wavenumber axis it may be cm-1. Default nm. */
  toleranceUnit?: "nm" | "cm-1";
  /** A wavenumber axis counts Raman shifts from this line; null or absent: absolute wavenumbers in vacuum. */
  laser?: LaserLine | null;
  /** Raman axis: the lines are those of a material, with these shifts. Null or absent: a lamp's. */
  ramanCertificate?: RamanCertificate | null;
  /**
   * How an earlier axis becomes the new one: `fit` all coefficients anew, or only its offset, or offset and scale, curvature and its
   * covariance kept from the earlier axis. Absent: the earlier axis and a correction whose degree (0 to 5) predicts left-out lines best;
   * with a given `degree` anew.
   */
  axisUpdate?: "fit" | "offset" | "offset-and-scale";
  /** Family of a new pixel axis: a polynomial (default), or the geometry of the spectrometer, for which `optics` must be known. */
  axisFamily?: Dispersion["family"];
  /** Geometry of an array spectrometer as far as it is known; what the lines can tell better is fitted. Absent or null: not known. */
  optics?: ArrayOptics | null;
  /**
   * Resolution of the instrument's display or drive, nm, as the lab states it; it moves all lines alike. Absent or null: with a set-up
   * reproducibility at most a tenth of the sample step is assumed on an evenly spaced wavelength axis, else it is left out and named.
   */
  displayResolutionNm?: number | null;
}

/** Geometry of a spectrometer with a flat detector behind a plane grating. */
export interface ArrayOptics {
  groovesPerMm: number;
  order: number;
  focalLengthMm: number;
  pixelPitchUm: number;
  /** Angle between the incoming beam and the optical axis of the camera, degrees. */
  includedAngleDeg: number;
}

export interface BudgetEntry {
  contribution:
    | "reference"
    | "fit"
    | "repeatability"
    | "set-up"
    | "resolution"
    | "dispersion"
    | "air"
    | "temperature"
    | "blend"
    | "laser"
    | "bandwidth";
  uncNm: number;
  /** null = infinite. */
  degreesOfFreedom: number | null;
  sensitivity: number;
  shareOfVariance: number;
  /** True where the figure is an assumption (shown so, oblique). */
  assumed: boolean;
  note: string;
}

export type LineStatus = "judged" | "left-out" | "refused" | "not-judged" | "unnamed";

export interface LineResult extends Omit<FittedLine, "windowFirst" | "windowLast" | "group"> {
  /** null: found but not named. */
  wavelengthNm: number | null;
  medium: Medium;
  element: string | null;
  species: string | null;
  /** Wavelengths of a blend's components (two or more), else empty. */
  blendOfNm: number[];
  order: number;
  referenceUncNm: number | null;
  referenceUncAssumed: boolean;
  referenceSource: string | null;
  indicatedNm: number | null;
  /** indicated - reference */
  errorNm: number | null;
  errorUncNm: number | null;
  errorExpandedUncNm: number | null;
  coverageFactor: number | null;
  effectiveDegreesOfFreedom: number | null;
  budget: BudgetEntry[];
  toleranceNm: number | null;
  guardBandNm: number | null;
  toleranceUsed: number | null;
  conformanceProbability: number | null;
  verdict: Verdict | null;
  nearLimit: boolean;
  status: LineStatus;
  /** Why it was left out, refused, or is not judged: a sentence. */
  reason: string | null;
  leftOut: LeftOutLine | null;
  required: boolean;
  /** Used in the dispersion fit. */
  usedInAxis: boolean;
  residualNm: number | null;
  /** |error| + U: for use where a known error is left uncorrected. Absent where `errorNm` is null. */
  errorForUseNm?: number;
  /**
   * JCGM 106: of a line in tolerance (or inconclusive) the probability that its true error lies outside, of a line out of tolerance
   * that it lies inside. Absent = not judged.
   */
  specificRisk?: number;
  /** Influence of the line on the fitted axis at its own place, 0..1 (0: not used). Absent = it was no candidate for the axis. */
  leverage?: number;
  /** `residualNm` over its own standard deviation. Absent = it was no candidate for the axis. */
  studentisedResidual?: number;
}

export interface VerdictSummary {
  verdict: Verdict;
  nearLimit: boolean;
  /** Index in `lines` of the line that decided; null when no line was judged. */
  worstLine: number | null;
  toleranceUsed: number | null;
  judgedCount: number;
  namedCount: number;
  /** Sentences: missing required lines, ambiguity. Empty when verdict is plain. */
  reasons: string[];
}

export interface SegmentResult extends ToleranceSegment {
  judgedCount: number;
  /** Largest |error| + U in the segment; null = not judged. */
  largestErrorForUseNm: number | null;
  worstLine: number | null;
  notJudgedBecause: string | null;
  /**
   * Largest |error| + U of the fitted error curve anywhere in the segment, between its lines too, with the error, its U and the place.
   * Absent or null = not judged, or no error curve could be fitted.
   */
  fitted?: { errorForUseNm: number; errorNm: number; expandedUncNm: number; atNm: number } | null;
}

export interface Dispersion {
  /** `grating`: fitted as the geometry of the spectrometer; `coefficients` and `axis` are a polynomial that follows it to 1e-6 px. */
  family: "polynomial" | "grating";
  degree: number;
  degreeChosenBy: "given" | "leave-one-out" | "earlier-axis";
  /** nm, ascending powers of the pixel; of the axis' own unit on a step axis, and of nm on a wavelength axis (a correction). */
  coefficients: number[];
  axis: PixelAxis;
  rmsPx: number;
  rmsNm: number;
  leaveOneOutRmsNm: number;
  /** 11 equally spaced pixels, first to last. */
  samples: { px: number; nm: number; uncNm: number }[];
  rejected: { line: number; reason: string }[];
  /**
   * How well each family predicts lines it was not fitted to, where both were tried: evidence which describes the instrument.
   * Absent = only one was.
   */
  families?: { family: "polynomial" | "grating"; parameters: number; leaveOneOutRmsNm: number; note: string }[];
  /** Fitted geometry of the family `grating`, each parameter with its standard uncertainty (0: held). Absent = a polynomial. */
  geometry?: { parameter: string; value: number; unc: number; unit: string }[];
  /** How an earlier axis was moved: a line that stood at pixel p + offset + scale (p - centre) stands at p. Absent = fitted anew. */
  update?: {
    kind: "offset" | "offset-and-scale";
    offsetPx: number;
    offsetUncPx: number;
    centrePx: number;
    scale: number;
    scaleUnc: number;
    /** Whether the curvature's own uncertainty was known from the earlier axis; else `axis` states too little. */
    isCurvatureUncKnown: boolean;
  };
}

/** One check as a point of its drift series. Straight line of error against wavelength, weighted. */
export interface DriftPoint {
  midNm: number;
  /** Last minus first judged wavelength. */
  rangeNm: number;
  midErrorNm: number;
  midErrorUncNm: number;
  /** Slope times the range. */
  scaleErrorNm: number;
  scaleErrorUncNm: number;
  covarianceNm2: number;
  /** Largest |offset + scale| within the judged range, signed, with U (k = 2). */
  largestErrorNm: number;
  largestErrorUncNm: number;
  largestAtNm: number;
}

export interface Analysis {
  format: 1;
  coreVersion: string;
  outcome: Outcome;
  /** Why it is not identified, in a sentence; null when it is. */
  reason: string | null;
  setup: AnalysisSetup;
  files: FileFacts[];
  axisKind: AxisKind;
  axisUnit: AxisUnit;
  noiseCounts: number;
  /** Lag-one correlation of the quiet samples; > 0.2 is said as *smoothed*. */
  noiseCorrelation: number;
  /** Correlation by lag, first entry lag one; empty = white. Absent = only lag one was measured. */
  noiseAutocorrelation?: number[];
  /** Shape that the lines were fitted with and who chose it; absent = gaussian, by default. */
  lineShape?: CaptureLineShape;
  medianFwhm: number | null;
  lines: LineResult[];
  /** Published lines of the lamp inside the range that were expected (required or strong) and not found. */
  missingLinesNm: number[];
  /** The verdict as asked for; null without tolerance or when nothing can be judged and outcome is refused. */
  verdict: VerdictSummary | null;
  /** The verdict with every line that could be judged, none left out by a person. */
  verdictWithEveryLine: VerdictSummary | null;
  /** Probability that the true errors of all judged lines lie within their tolerances together. Absent or null = none was judged. */
  jointConformanceProbability?: number | null;
  /** What the ordinate of an absorption spectrum was taken for; absent = an emission spectrum. */
  ordinate?: "absorbance" | "transmittance" | "percent-transmittance";
  /** Weighted mean over the lines of scanned upwards minus scanned downwards, nm; absent = not scanned in both directions. */
  backlashNm?: { value: number; unc: number };
  segments: SegmentResult[];
  dispersion: Dispersion | null;
  driftPoint: DriftPoint | null;
  confidence: { chanceProbability: number; margin: number; note: string };
  /** Components that U does not hold, as words: e.g. "set-up reproducibility". */
  notIncluded: string[];
  warnings: { code: string; text: string }[];
}

/** What the spectrum bench draws, thinned to at most 4,096 minimum/maximum pairs. */
export interface SpectrumDrawing {
  /** Wavelength in nm of each drawn sample; the position where nothing was identified (then `axisLabel` says so). */
  x: number[];
  counts: number[];
  /** Baseline under each drawn sample, counts: what a net spectrum leaves off. */
  baseline: number[];
  axisLabel: string;
  axisUnit: AxisUnit;
  ceilingCounts: number | null;
  /** Fitted curves, one a line of `Analysis.lines` (empty arrays where it was not fitted). */
  fits: { line: number; x: number[]; counts: number[]; baseline: number[] }[];
  /** Fit residuals over their standard uncertainty, within fitted windows only. */
  residuals: { x: number; ratio: number; line: number }[];
}

export interface AnalysedCheck {
  analysis: Analysis;
  drawing: SpectrumDrawing | null;
}

/** One file as the caller has it. */
export interface CaptureInput {
  name: string;
  bytes: Uint8Array;
  sha256: string | null;
  /** `reference`: the empty beam or the blank that a sample's transmittance is taken against. */
  part: "lamp" | "dark" | "reference";
  /** Exposure time, ms, where it is known; absent = read from the file's header, else told from the light. */
  exposureMs?: number;
}
