/**
 * An absorption standard (holmium oxide and the like) to band positions, errors against its certificate, and a verdict.
 *
 * The place of a band is the maximum of absorbance, which is the minimum of transmittance, of the recorded curve as the instrument's bandwidth
 * shows it: no background is taken off, since certificates are written so. The certificate must be that of the material and for the
 * bandwidth: another bandwidth moves bands by tenths of a nanometre. Where the two differ by up to a factor of two the shift that is
 * to be expected goes into the uncertainty, beyond that nothing is judged.
 */
import { findTops, type Top } from "../bands/find-bands.ts";
import { matchCertificate, type BandMatch } from "../bands/match-certificate.ts";
import { measureBands, type BandProblem, type MeasuredBand } from "../bands/measure-bands.ts";
import { turnOrdinate, type Ordinate } from "../bands/ordinate.ts";
import type { IdentifiedLines, LineName } from "../identify/identify-lines.ts";
import { smoothedAbove, type FittedWindow, type FoundLines } from "../spectrum/find-lines.ts";
import { median } from "../spectrum/median.ts";
import type { Contribution } from "../uncertainty/budget.ts";
import { coreVersion } from "../version.ts";
import type { AbsorptionCaptures } from "./absorption-captures.ts";
import { drawSpectrum, type DrawnLines } from "./draw-spectrum.ts";
import { indicatingAxisOf, type IndicatingAxis } from "./indicating-axis.ts";
import { driftPointOfLines, jointProbabilityOf, sharedUncOf, verdictsOf } from "./judge-check.ts";
import { judgeLine, type JudgedLineResult } from "./judge-lines.ts";
import { notIncludedIn, type LineRepeatability } from "./line-budget.ts";
import { repeatabilityFrom } from "./repeatability.ts";
import { errorCurveOf, judgeSegments } from "./segments.ts";
import type { AnalysedCheck, Analysis, AnalysisSetup, BandCertificate, FittedLine, Spectrum } from "./types.ts";

/** Bandwidths that differ by less than this share are the same. */
const sameBandwidthShare = 0.1;
const mostBandwidthRatio = 2;
/** A band whose place is not known to this share of its width is weak. */
const weakShare = 0.25;
/** Tops that are reported although the certificate does not know them. */
const mostUnnamed = 20;

/** What is wrong with the settings of an absorption check, or null. */
export function bandSettingsProblem(spectrum: Spectrum, setup: AnalysisSetup): string | null {
  const certificate = setup.bandCertificate ?? null;
  if (certificate === null || certificate.bands.length === 0) {
    return "An absorption check needs the certificate of its standard: the bands, each with its expanded uncertainty.";
  }
  const isPositive = (value: number): boolean => Number.isFinite(value) && value > 0;
  if (
    !certificate.bands.every(
      (band) => isPositive(band.wavelengthNm) && band.expandedUncNm >= 0 && isPositive(band.coverageFactor),
    )
  ) {
    return "The certificate's bands need wavelengths and coverage factors above 0, and expanded uncertainties that are not below 0.";
  }
  const bandwidth = setup.spectralBandwidthNm ?? null;
  if (bandwidth !== null && !isPositive(bandwidth)) return "The spectral bandwidth must be above 0 nm.";
  if (indicatingAxisOf(spectrum, setup) === null) {
    return "Bands are judged on a wavelength axis: give the earlier axis of the pixels, or export wavelengths.";
  }
  return null;
}

/** Analyse the combined captures of an absorption check; the settings were looked at before. */
export function analyseBands(captures: AbsorptionCaptures, setup: AnalysisSetup, withDrawing: boolean): AnalysedCheck {
  const { spectrum, ordinate, files } = captures;
  const certificate = setup.bandCertificate!;
  const axis = indicatingAxisOf(spectrum, setup)!;
  const view = ascendingView(spectrum, axis);
  const turned = view.isTurned ? turnOrdinate(ordinate) : ordinate;
  const bandwidthNm = setup.spectralBandwidthNm ?? null;
  const { tops, noise } = findTops(view.wavelengthsNm, turned.values, bandwidthNm);
  const n = view.wavelengthsNm.length;
  const stepNm = (view.wavelengthsNm[n - 1]! - view.wavelengthsNm[0]!) / (n - 1);
  const inside = Math.max(4 * stepNm, 0.5 * (bandwidthNm ?? 0), 1);
  const match = matchCertificate(
    certificate.bands.map((band) => ({ ...band, wavelengthNm: axis.referenceNm(band.wavelengthNm, "air") })),
    tops,
    view.wavelengthsNm[0]! + inside,
    view.wavelengthsNm[n - 1]! - inside,
    certificate.material,
  );
  const wanted = match.bands.flatMap(({ top }) => (top === null ? [] : [top])).sort((a, b) => a.index - b.index);
  const measured = measureBands(view.wavelengthsNm, turned, wanted, tops, bandwidthNm);
  const repeats = repeatedPositions(captures, view, wanted, tops, bandwidthNm);
  const isGood = (band: MeasuredBand | BandProblem): band is MeasuredBand => typeof band !== "string";
  const repeatability = repeatabilityFrom(
    wanted.map((_, k) => {
      const band = measured.bands[k]!;
      return { fitUnc: isGood(band) ? band.uncNm : 0, positions: repeats[k]! };
    }),
  );

  const lines: JudgedLineResult[] = [];
  const found: DrawnLines & Pick<FoundLines, "noiseCounts" | "noiseCorrelation" | "medianFwhm"> = {
    lines: [],
    windows: [],
    baseline: new Float64Array(n).fill(
      ordinate.kind === "absorbance" ? 0 : ordinate.kind === "transmittance" ? 1 : 100,
    ),
    noiseCounts: measured.noise > 0 ? measured.noise * scaleOf(ordinate) : noise * scaleOf(ordinate),
    noiseCorrelation: 1 - 1 / measured.smoothedOver,
    ceilingCounts: null,
    medianFwhm: null,
  };
  const add = (line: FittedLine, judged: JudgedLineResult, window: FittedWindow | null): void => {
    lines.push(judged);
    found.lines.push({ ...line, group: found.windows.length });
    found.windows.push(window);
  };
  const entries = [
    ...match.bands.map(({ band, top, expectedNm }) => ({ certified: band, top, expectedNm })),
    ...unnamedTops(wanted, tops).map((top) => ({ certified: null, top, expectedNm: top.wavelengthNm })),
  ].sort((a, b) => a.expectedNm - b.expectedNm);
  for (const { certified, top, expectedNm } of entries) {
    if (match.outcome !== "identified" && top === null) continue;
    const k = top === null ? -1 : wanted.indexOf(top);
    const band = k < 0 ? null : measured.bands[k]!;
    const line = lineOf(view, top, band, expectedNm, bandwidthNm ?? 2 * stepNm, measured.smoothedOver);
    const name = certified === null ? null : nameOf(certificate, certified, axis);
    const problem = problemOf(band, line, match, expectedNm);
    const mismatch = band !== null && isGood(band) ? bandwidthContribution(certificate, bandwidthNm, band) : null;
    const input = {
      line: view.toAxis(line),
      name,
      repeatability: k < 0 ? null : toAxisRepeatability(repeatability[k]!, view.slopeNm(line.position)),
      extra: mismatch === null ? [] : [mismatch],
    };
    const judged = judgeLine(input, name === null || problem === null ? axis : null, setup);
    if (name === null) judged.result.reason = "Not named: read off at its highest sample, not measured.";
    if (name !== null && problem !== null) refuseLine(judged, problem);
    const unlike = bandwidthProblem(certificate, bandwidthNm);
    if (name !== null && problem === null && unlike !== null) refuseLine(judged, unlike);
    add(input.line, judged, band !== null && isGood(band) ? windowOf(spectrum, ordinate, view, band) : null);
  }
  const identified = identifiedOf(match, captures, certificate, bandwidthNm, setup, measured.smoothedOver);
  const widths = lines.filter(({ result }) => result.errorNm !== null).map(({ result }) => result.fwhm);
  found.medianFwhm = widths.length === 0 ? null : median(widths);
  const results = lines.map(({ result }) => result);
  const verdicts = verdictsOf(lines, identified, setup, axis);
  const driftPoint = match.outcome === "identified" ? driftPointOfLines(lines) : null;
  const analysis: Analysis = {
    format: 1,
    coreVersion,
    outcome: identified.outcome,
    reason: identified.reason,
    setup,
    files,
    axisKind: spectrum.axisKind,
    axisUnit: spectrum.axisUnit,
    noiseCounts: found.noiseCounts,
    noiseCorrelation: found.noiseCorrelation,
    medianFwhm: found.medianFwhm,
    lines: results,
    missingLinesNm: identified.missingLinesNm,
    verdict: verdicts.asAsked,
    verdictWithEveryLine: verdicts.withEveryLine,
    jointConformanceProbability: jointProbabilityOf(lines),
    ordinate: ordinate.kind,
    segments: judgeSegments(results, setup.tolerance, errorCurveOf(axis, null, driftPoint, sharedUncOf(lines))),
    dispersion: null,
    driftPoint,
    confidence: { chanceProbability: match.chanceProbability, margin: match.margin, note: match.note },
    notIncluded: notIncludedIn(axis, setup),
    warnings: identified.warnings,
  };
  return { analysis, drawing: withDrawing ? drawSpectrum(spectrum, found, axis, null) : null };
}

/** The capture with wavelengths that rise, and the way back to its own axis. */
interface AscendingView {
  wavelengthsNm: Float64Array;
  isTurned: boolean;
  /** nm per unit of the capture's axis, without sign, at a wavelength. */
  slopeNm(wavelengthNm: number): number;
  toAxis(line: FittedLine): FittedLine;
}

function ascendingView(spectrum: Spectrum, axis: IndicatingAxis): AscendingView {
  const { positions } = spectrum;
  const n = positions.length;
  const isTurned = axis.indicatedNm(positions[n - 1]!) < axis.indicatedNm(positions[0]!);
  const at = (i: number): number => positions[isTurned ? n - 1 - i : i]!;
  const wavelengthsNm = Float64Array.from({ length: n }, (_, i) => axis.indicatedNm(at(i)));
  const positionOf = (wavelengthNm: number): number => {
    let low = 0;
    let high = n - 1;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (wavelengthsNm[middle]! <= wavelengthNm) low = middle;
      else high = middle;
    }
    // Newton from the straight line between the samples: the axis may bend within a step.
    const share = (wavelengthNm - wavelengthsNm[low]!) / (wavelengthsNm[high]! - wavelengthsNm[low]!);
    let position = at(low) + share * (at(high) - at(low));
    for (let round = 0; round < 3; round += 1) {
      position -= (axis.indicatedNm(position) - wavelengthNm) / axis.slopeNm(position);
    }
    return position;
  };
  const slopeNm = (wavelengthNm: number): number => Math.abs(axis.slopeNm(positionOf(wavelengthNm)));
  return {
    wavelengthsNm,
    isTurned,
    slopeNm,
    toAxis(line) {
      const slope = slopeNm(line.position);
      const turnIndex = (i: number): number => (isTurned ? n - 1 - i : i);
      return {
        ...line,
        position: positionOf(line.position),
        positionUnc: line.positionUnc / slope,
        fwhm: line.fwhm / slope,
        fwhmUnc: line.fwhmUnc / slope,
        areaCounts: line.areaCounts / slope,
        windowFirst: turnIndex(isTurned ? line.windowLast : line.windowFirst),
        windowLast: turnIndex(isTurned ? line.windowFirst : line.windowLast),
      };
    },
  };
}

/** Units of the recorded ordinate per unit of `Ordinate.values`. */
function scaleOf(ordinate: Ordinate): number {
  return ordinate.kind === "percent-transmittance" ? 100 : 1;
}

/** Tops that the certificate does not know, the strongest only: they are told, not measured. */
function unnamedTops(wanted: readonly Top[], tops: readonly Top[]): Top[] {
  return tops
    .filter((top) => !wanted.includes(top))
    .sort((a, b) => b.prominence - a.prominence)
    .slice(0, mostUnnamed);
}

/** Wavelength of each top in each repeat. */
function repeatedPositions(
  captures: AbsorptionCaptures,
  view: AscendingView,
  wanted: readonly Top[],
  tops: readonly Top[],
  bandwidthNm: number | null,
): number[][] {
  if (captures.repeats.length < 2) return wanted.map(() => []);
  const each = captures.repeats.map(
    (one) => measureBands(view.wavelengthsNm, view.isTurned ? turnOrdinate(one) : one, wanted, tops, bandwidthNm).bands,
  );
  return wanted.map((_, k) =>
    each.flatMap((bands) => {
      const band = bands[k]!;
      return typeof band === "string" ? [] : [band.wavelengthNm];
    }),
  );
}

function lineOf(
  view: AscendingView,
  top: Top | null,
  band: MeasuredBand | BandProblem | null,
  expectedNm: number,
  leastWidthNm: number,
  smoothedOver: number,
): FittedLine {
  const widthNm = top === null ? leastWidthNm : Math.max(top.widthNm, 1e-6);
  const height = top?.prominence ?? 0;
  const isMeasured = band !== null && typeof band !== "string";
  const flags: FittedLine["flags"] = [];
  if (top === null) flags.push("blend");
  if (band === "edge") flags.push("edge");
  if (band === "flat") flags.push("saturated");
  if (band === "few-samples" || band === "no-maximum") flags.push("poor-fit");
  if (isMeasured && band.uncNm > weakShare * widthNm) flags.push("weak");
  if (1 - 1 / smoothedOver > smoothedAbove) flags.push("smoothed");
  return {
    position: isMeasured ? band.wavelengthNm : (top?.wavelengthNm ?? expectedNm),
    positionUnc: isMeasured ? band.uncNm : widthNm / 4,
    fwhm: widthNm,
    fwhmUnc: widthNm / 10,
    areaCounts: 1.0645 * height * widthNm,
    peakHeightCounts: height,
    signalToNoise: isMeasured && band.noise > 0 ? height / band.noise : 0,
    reducedChiSquare: isMeasured ? band.reducedChiSquare : 0,
    degreesOfFreedom: isMeasured ? band.degreesOfFreedom : 0,
    windowFirst: isMeasured ? band.windowFirst : (top?.index ?? 0),
    windowLast: isMeasured ? band.windowLast : (top?.index ?? view.wavelengthsNm.length - 1),
    group: -1,
    flags,
    ...(isMeasured ? { positionDegreesOfFreedom: band.degreesOfFreedom } : {}),
  };
}

/** `band.wavelengthNm` is as the axis means wavelengths; the name keeps the certificate's own figure. */
function nameOf(
  certificate: BandCertificate,
  band: { wavelengthNm: number; expandedUncNm: number; coverageFactor: number },
  axis: IndicatingAxis,
): LineName {
  const own = certificate.bands.reduce((a, b) =>
    Math.abs(axis.referenceNm(b.wavelengthNm, "air") - band.wavelengthNm) <
    Math.abs(axis.referenceNm(a.wavelengthNm, "air") - band.wavelengthNm)
      ? b
      : a,
  );
  return {
    wavelengthNm: own.wavelengthNm,
    medium: "air",
    element: certificate.material,
    species: certificate.material,
    order: 1,
    blendOf: [],
    blendUncNm: 0,
    referenceUncNm: own.expandedUncNm / own.coverageFactor,
    referenceUncAssumed: false,
    referenceSource: `certificate of the standard, k = ${own.coverageFactor}`,
    relativeIntensity: null,
  };
}

const problemWords: Record<BandProblem, string> = {
  edge: "At the edge of the capture: one side of the band is missing.",
  flat: "No light is left at its middle: its top is flat, so its place is not known. Use a thinner or weaker standard, or a longer integration.",
  "few-samples": "Too few samples for its place to be known. Record smaller steps.",
  "no-maximum": "It has no maximum of its own that stands out of the noise.",
};

function problemOf(
  band: MeasuredBand | BandProblem | null,
  line: FittedLine,
  match: BandMatch,
  expectedNm: number,
): string | null {
  if (typeof band === "string") return problemWords[band];
  if (band !== null)
    return line.flags.includes("weak")
      ? "Too weak or too broad: its place is not known to a quarter of its width."
      : null;
  const near = match.bands.find(
    (entry) =>
      entry.top !== null && Math.abs(entry.top.wavelengthNm - expectedNm) < Math.max(2 * line.fwhm, entry.top.widthNm),
  );
  return near === undefined
    ? "It has no maximum of its own at this bandwidth: it shows as a shoulder at most."
    : `It has no maximum of its own at this bandwidth: it merges with the band at ${near.band.wavelengthNm.toFixed(1)} nm or shows as its shoulder.`;
}

function refuseLine(judged: JudgedLineResult, reason: string): void {
  judged.judgement = null;
  judged.fitsAxis = false;
  const { result } = judged;
  result.status = "refused";
  result.reason = reason;
  result.verdict = null;
  result.nearLimit = false;
  result.guardBandNm = null;
  result.toleranceUsed = null;
  result.conformanceProbability = null;
  delete result.specificRisk;
}

function isUnlike(certificate: BandCertificate, bandwidthNm: number | null): boolean {
  if (certificate.bandwidthNm === null || bandwidthNm === null) return false;
  return Math.abs(certificate.bandwidthNm - bandwidthNm) > sameBandwidthShare * bandwidthNm;
}

/** Why nothing is judged at this bandwidth, or null. */
function bandwidthProblem(certificate: BandCertificate, bandwidthNm: number | null): string | null {
  if (!isUnlike(certificate, bandwidthNm)) return null;
  const ratio = certificate.bandwidthNm! / bandwidthNm!;
  if (ratio <= mostBandwidthRatio && ratio >= 1 / mostBandwidthRatio) return null;
  return `The certificate is for a bandwidth of ${certificate.bandwidthNm} nm, the instrument's is ${bandwidthNm} nm: its bands lie elsewhere. Use the certificate's values for this bandwidth.`;
}

/** The shift that the certificate's bandwidth would make, as a standard uncertainty. */
function bandwidthContribution(
  certificate: BandCertificate,
  bandwidthNm: number | null,
  band: MeasuredBand,
): Contribution | null {
  if (!isUnlike(certificate, bandwidthNm)) return null;
  const variance = (certificate.bandwidthNm! * certificate.bandwidthNm! - bandwidthNm! * bandwidthNm!) / 6;
  return {
    contribution: "bandwidth",
    uncNm: Math.abs(band.shiftPerNm2 * variance),
    degreesOfFreedom: null,
    sensitivity: 1,
    assumed: true,
    note: `shift to be expected between ${bandwidthNm} nm and the certificate's ${certificate.bandwidthNm} nm, not corrected`,
  };
}

function toAxisRepeatability(repeatability: LineRepeatability | null, slopeNm: number): LineRepeatability | null {
  return repeatability === null ? null : { ...repeatability, beyondUnc: repeatability.beyondUnc / slopeNm };
}

function windowOf(spectrum: Spectrum, ordinate: Ordinate, view: AscendingView, band: MeasuredBand): FittedWindow {
  const n = spectrum.positions.length;
  const scale = scaleOf(ordinate);
  const recorded = (value: number): number => (ordinate.kind === "absorbance" ? value : scale * (1 - value));
  const samples = Int32Array.from(band.curve, (_, k) =>
    view.isTurned ? n - 1 - (band.windowFirst + k) : band.windowFirst + k,
  );
  return {
    first: samples[0]!,
    last: samples[samples.length - 1]!,
    samples,
    fittedCounts: band.curve.map(recorded),
    baselineCounts: band.curve.map(() => recorded(0)),
    countsUnc: band.curve.map(() => Math.max(scale * band.noise, 1e-300)),
  };
}

function identifiedOf(
  match: BandMatch,
  captures: AbsorptionCaptures,
  certificate: BandCertificate,
  bandwidthNm: number | null,
  setup: AnalysisSetup,
  smoothedOver: number,
): IdentifiedLines {
  const warnings: Analysis["warnings"] = [];
  for (const file of captures.files) {
    for (const text of file.remarks)
      warnings.push({ code: "reading", text: captures.files.length > 1 ? `${file.name}: ${text}` : text });
  }
  for (const text of captures.remarks) warnings.push({ code: "ordinate", text });
  if (1 - 1 / smoothedOver > smoothedAbove) {
    warnings.push({
      code: "smoothed",
      text: `The noise of about ${smoothedOver} neighbouring samples is alike: the capture was smoothed. The uncertainties take that in; what smoothing itself moves they do not.`,
    });
  }
  if (bandwidthNm === null) {
    warnings.push({
      code: "bandwidth",
      text: "The instrument's spectral bandwidth is not stated: bands lie elsewhere at another one.",
    });
  } else if (certificate.bandwidthNm === null) {
    warnings.push({
      code: "bandwidth",
      text: `The certificate names no bandwidth: it is taken to hold for ${bandwidthNm} nm.`,
    });
  } else if (isUnlike(certificate, bandwidthNm)) {
    warnings.push({
      code: "bandwidth",
      text:
        bandwidthProblem(certificate, bandwidthNm) ??
        `The certificate is for a bandwidth of ${certificate.bandwidthNm} nm, the instrument's is ${bandwidthNm} nm: the shift to be expected is in the uncertainty.`,
    });
  }
  const missing = match.bands.filter(({ top }) => top === null).map(({ band }) => band.wavelengthNm);
  return {
    outcome: match.outcome,
    reason: match.reason,
    names: [],
    axis: null,
    chanceProbability: match.chanceProbability,
    margin: match.margin,
    note: match.note,
    warnings,
    missingLinesNm: match.outcome === "identified" ? missing : setup.requiredLinesNm.slice(),
    otherGases: [],
  };
}
