/**
 * Which top of the spectrum is which certified band.
 *
 * Searched  one shift of the whole axis (up to 8 nm) that brings most certified bands to a top, strong tops before weak ones; then a straight
 *           line through the matches, about which each must lie
 * Judged    against chance: so many tops, each with its reach, scattered over the range by chance would match so many bands
 *           (binomial tail, times the number of independent shifts that were tried). A filter of another material is refused so, not
 *           matched
 * Few bands one or two in range can't be told from chance by their places: they are named only where each is the one strong top about
 */
import { binomialUpperTail } from "../numeric/distributions.ts";
import { solveLeastSquares } from "../numeric/linear-least-squares.ts";
import { median } from "../spectrum/median.ts";
import type { Top } from "./find-bands.ts";

export interface CertifiedBand {
  wavelengthNm: number;
  expandedUncNm: number;
  coverageFactor: number;
}

export interface BandMatch {
  outcome: "identified" | "unidentified";
  reason: string | null;
  /** One entry a certified band in range: the top it is, or null. */
  bands: { band: CertifiedBand; top: Top | null; expectedNm: number }[];
  chanceProbability: number;
  /** Bands matched less bands that the runner-up (another shift) matches. */
  margin: number;
  note: string;
}

const mostShiftNm = 8;
const fewBands = 2;
const fewShiftNm = 3;
/** Reach of a match before the straight line is known, and at least after it, nm. */
const reachNm = 1.5;
const leastReachNm = 0.6;
const chanceLevel = 0.005;
const leastShare = 0.5;
/** A top this much weaker than the strongest about is no rival for a lone band. */
const rivalShare = 0.5;

/**
 * @param fromNm,toNm  range in which a band can be measured
 * @param reachScale   1 for absorption bands; lines that are narrower and better placed are looked for within this share of the shifts and
 *                     reaches above
 */
export function matchCertificate(
  certified: readonly CertifiedBand[],
  tops: readonly Top[],
  fromNm: number,
  toNm: number,
  material: string,
  reachScale = 1,
): BandMatch {
  const inRange = certified.filter((band) => band.wavelengthNm >= fromNm && band.wavelengthNm <= toNm);
  const unmatched = (reason: string, chance: number): BandMatch => ({
    outcome: "unidentified",
    reason,
    bands: inRange.map((band) => ({ band, top: null, expectedNm: band.wavelengthNm })),
    chanceProbability: chance,
    margin: 0,
    note: "",
  });
  if (inRange.length === 0) {
    return unmatched("None of the certificate's bands lies in the range of the capture.", 1);
  }
  if (tops.length === 0) return unmatched("No band stands out of the noise. Is the standard in the beam?", 1);
  if (inRange.length <= fewBands) return matchFew(inRange, tops, fewShiftNm * reachScale, unmatched);

  const { shiftNm, margin } = bestShift(inRange, tops, reachScale);
  const matches = fitMatches(inRange, tops, shiftNm, reachScale);
  const reach = reachNm * reachScale;
  const count = matches.filter(({ top }) => top !== null).length;
  let covered = 0;
  for (const top of tops) if (top.wavelengthNm >= fromNm && top.wavelengthNm <= toNm) covered += 2 * reach;
  const share = Math.min(0.9, covered / Math.max(toNm - fromNm, 2 * reach));
  const tries = (2 * mostShiftNm) / reachNm;
  // One band is spent on the shift itself.
  const chance = Math.min(1, tries * binomialUpperTail(count - 1, inRange.length - 1, share));
  const counts = `${count} of the certificate's ${inRange.length} bands in range`;
  if (chance > chanceLevel || count < leastShare * inRange.length) {
    return unmatched(
      `Only ${counts} ${count === 1 ? "has a maximum" : "have maxima"} where one shift of the axis would put them, ` +
        `which says little. Is it ${material}, and recorded with a blank?`,
      chance,
    );
  }
  return {
    outcome: "identified",
    reason: null,
    bands: matches,
    chanceProbability: chance,
    margin,
    note: `${counts} found`,
  };
}

function matchFew(
  bands: readonly CertifiedBand[],
  tops: readonly Top[],
  within: number,
  unmatched: (reason: string, chance: number) => BandMatch,
): BandMatch {
  const matches = bands.map((band) => {
    const near = tops.filter((top) => Math.abs(top.wavelengthNm - band.wavelengthNm) <= 2 * within);
    const strongest = near.reduce<Top | null>((a, b) => (a === null || b.prominence > a.prominence ? b : a), null);
    const isAlone =
      strongest !== null &&
      Math.abs(strongest.wavelengthNm - band.wavelengthNm) <= within &&
      near.every((top) => top === strongest || top.prominence < rivalShare * strongest.prominence);
    return { band, top: isAlone ? strongest : null, expectedNm: band.wavelengthNm };
  });
  if (matches.some(({ top }) => top === null)) {
    return unmatched(
      `With ${bands.length === 1 ? "one band" : "two bands"} in range each must be the one strong maximum within ${Number(within.toPrecision(2))} nm of its place; it is not so. Record a wider range.`,
      1,
    );
  }
  const note = "few bands in range: named by their place alone";
  return { outcome: "identified", reason: null, bands: matches, chanceProbability: 0.05, margin: bands.length, note };
}

/** Shift (spectrum - certificate) that most bands agree with; ties go to the stronger tops, then to the smaller shift. */
function bestShift(
  bands: readonly CertifiedBand[],
  tops: readonly Top[],
  reachScale: number,
): { shiftNm: number; margin: number } {
  const reach = reachNm * reachScale;
  const trials: { shiftNm: number; count: number; score: number }[] = [];
  let strongest = 0;
  for (const top of tops) strongest = Math.max(strongest, top.prominence);
  for (const { wavelengthNm } of bands) {
    for (const top of tops) {
      const shiftNm = top.wavelengthNm - wavelengthNm;
      if (Math.abs(shiftNm) > mostShiftNm * reachScale) continue;
      let count = 0;
      let score = (-0.05 * Math.abs(shiftNm)) / reachScale;
      for (const band of bands) {
        const near = nearest(tops, band.wavelengthNm + shiftNm, reach);
        if (near === null) continue;
        count += 1;
        const off = Math.abs(near.wavelengthNm - band.wavelengthNm - shiftNm) / reach;
        score += 1 - 0.5 * off * off + 0.3 * Math.sqrt(near.prominence / strongest);
      }
      trials.push({ shiftNm, count, score });
    }
  }
  let best = trials[0] ?? { shiftNm: 0, count: 0, score: 0 };
  for (const trial of trials) if (trial.score > best.score) best = trial;
  let second = 0;
  for (const trial of trials) {
    if (Math.abs(trial.shiftNm - best.shiftNm) > 2 * reach) second = Math.max(second, trial.count);
  }
  return { shiftNm: best.shiftNm, margin: best.count - second };
}

function nearest(tops: readonly Top[], wavelengthNm: number, within: number): Top | null {
  let found: Top | null = null;
  for (const top of tops) {
    const off = Math.abs(top.wavelengthNm - wavelengthNm);
    if (off <= within && (found === null || off < Math.abs(found.wavelengthNm - wavelengthNm))) found = top;
  }
  return found;
}

/** Straight line of shift against wavelength through the matches; a band keeps its top where that lies about the line. */
function fitMatches(
  bands: readonly CertifiedBand[],
  tops: readonly Top[],
  shiftNm: number,
  reachScale: number,
): BandMatch["bands"] {
  const reach = reachNm * reachScale;
  const first = bands.map((band) => nearest(tops, band.wavelengthNm + shiftNm, reach));
  const known = bands.flatMap((band, k) =>
    first[k] === null ? [] : [{ x: band.wavelengthNm, y: first[k]!.wavelengthNm - band.wavelengthNm }],
  );
  let offset = shiftNm;
  let slope = 0;
  let middle = 0;
  let spread = 0;
  if (known.length > 0) {
    for (const { x } of known) middle += x / known.length;
    // A median first: one wrong match must not turn the line.
    const typical = median(known.map(({ y }) => y));
    const near = known.filter(({ y }) => Math.abs(y - typical) <= reach);
    offset = typical;
    if (near.length >= 4) {
      const design = new Float64Array(near.length * 2);
      near.forEach(({ x }, k) => {
        design[2 * k] = 1;
        design[2 * k + 1] = x - middle;
      });
      const fit = solveLeastSquares(
        design,
        near.length,
        2,
        near.map(({ y }) => y),
        null,
      );
      offset = fit.coefficients[0]!;
      slope = fit.coefficients[1]!;
    }
    spread = 1.4826 * median(known.map(({ x, y }) => Math.abs(y - offset - slope * (x - middle))));
  }
  const taken = new Set<Top>();
  return bands.map((band) => {
    const expectedNm = band.wavelengthNm + offset + slope * (band.wavelengthNm - middle);
    const within = Math.max(leastReachNm * reachScale, 4 * spread, band.expandedUncNm);
    const top = nearest(tops, expectedNm, within);
    if (top === null || taken.has(top)) return { band, top: null, expectedNm };
    taken.add(top);
    return { band, top, expectedNm };
  });
}
