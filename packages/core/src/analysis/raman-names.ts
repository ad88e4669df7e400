/**
 * Lines of a material's Raman spectrum named by the certified shifts of that material, in place of a lamp's lines.
 *
 * The error of a shift is the indicated minus the certified shift: both count from the same laser, so that the laser's own uncertainty is no part of
 * it (it is of a lamp's lines on a Raman axis). Matched as absorption bands are, on a scale that fits narrower lines: against chance, and a
 * material of few lines only where each is the one strong line about its place.
 */
import { matchCertificate } from "../bands/match-certificate.ts";
import type { IdentifiedLines, LineName } from "../identify/identify-lines.ts";
import { scatteredWavelengthNm } from "../light/quantities.ts";
import type { FittedLine, LaserLine, RamanCertificate } from "./types.ts";

/** Shifts are looked for within about 25 cm-1 of their places: as nm, a tenth of what absorption bands are given, at 532 nm. */
const reachAt532 = 0.1;
/** Part of the stretch at each end in which a line has no baseline, in line widths. */
const edgeWidths = 2;

/** Why a material's shifts can't be used, or null. */
export function ramanCertificateProblem(certificate: RamanCertificate, laser: LaserLine | null): string | null {
  if (laser === null) return "Certified Raman shifts need an axis of Raman shifts and the wavelength of its laser.";
  const limit = 1e7 / laser.wavelengthVacuumNm;
  const isGood = certificate.shifts.every(
    ({ shiftPerCm, expandedUncPerCm, coverageFactor }) =>
      Number.isFinite(shiftPerCm) && shiftPerCm < limit && expandedUncPerCm >= 0 && coverageFactor > 0,
  );
  return isGood && certificate.shifts.length > 0
    ? null
    : "The certificate's shifts must lie below the laser's wavenumber, with uncertainties not below 0 and coverage factors above 0.";
}

/** @param lines  in vacuum wavelengths, nm; `firstNm` and `lastNm` those of the capture's ends */
export function identifyRamanShifts(
  lines: readonly FittedLine[],
  firstNm: number,
  lastNm: number,
  certificate: RamanCertificate,
  laser: LaserLine,
): IdentifiedLines {
  const laserNm = laser.wavelengthVacuumNm;
  const bands = certificate.shifts.map(({ shiftPerCm, expandedUncPerCm, coverageFactor }) => {
    const wavelengthNm = scatteredWavelengthNm(laserNm, shiftPerCm);
    return {
      wavelengthNm,
      expandedUncNm: (expandedUncPerCm * wavelengthNm * wavelengthNm) / 1e7,
      coverageFactor,
    };
  });
  const usable = lines.filter(({ flags }) => !flags.includes("spike"));
  const tops = usable.map((line, index) => ({
    index,
    wavelengthNm: line.position,
    prominence: line.peakHeightCounts,
    widthNm: line.fwhm,
  }));
  const edge = usable.reduce((widest, line) => Math.max(widest, line.fwhm), 0) * edgeWidths;
  const ratio = laserNm / 532;
  const match = matchCertificate(
    bands,
    tops,
    firstNm + edge,
    lastNm - edge,
    certificate.material,
    reachAt532 * ratio * ratio,
  );
  const names = lines.map((line): LineName | null => {
    const entry = match.bands.find(({ top }) => top !== null && usable[top.index] === line);
    if (entry === undefined) return null;
    return {
      wavelengthNm: entry.band.wavelengthNm,
      medium: "vacuum",
      element: certificate.material,
      species: certificate.material,
      order: 1,
      blendOf: [],
      blendUncNm: 0,
      referenceUncNm: entry.band.expandedUncNm / entry.band.coverageFactor,
      referenceUncAssumed: false,
      referenceSource: `certificate of the material, k = ${entry.band.coverageFactor}`,
      relativeIntensity: null,
    };
  });
  return {
    outcome: match.outcome,
    reason: match.reason,
    names,
    axis: null,
    chanceProbability: match.chanceProbability,
    margin: match.margin,
    note: match.note,
    warnings: [],
    missingLinesNm: match.bands.filter(({ top }) => top === null).map(({ band }) => band.wavelengthNm),
    otherGases: [],
  };
}
