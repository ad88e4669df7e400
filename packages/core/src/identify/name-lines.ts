/**
 * Line by line: which published line is this one, once the axis is known?
 *
 * A name needs a place and odds.
 * Place   within 3.5 standard uncertainties (line, axis without that line, scatter) and 0.35 FWHM of a published line, with
 *         no other published line that the axis could not tell from it
 * Odds    P(the lamp's line) / P(a stray in its place, the lamp's own not seen) of at least 100, or 400 where its class was
 *         mostly not found: density of the place times s/(1 - s), s the share of its class (published lines of about its
 *         strength) that was found, against strays spread evenly over the capture;
 *         a height far from what its published intensity leads to expect counts against it, by no more than a factor of 90
 * Blends  published lines that no other found line claims and that lie within three quarters of a FWHM belong to one found
 *         line. Companions below 5 % of the strongest of the group give no name; what they may pull stays as uncertainty. If the place, judged by the other lines' axis,
 *         fits one strong component alone and contradicts the common centroid, the capture itself shows the lamp's ratio and
 *         the component's name is given with what is left open as its uncertainty; else the centroid, whatever the published
 *         intensities, with half the spread / sqrt 3
 */
import { exp, log } from "../numeric/elementary.ts";
import { fitCorrection, type CorrectionFit } from "./correction.ts";
import type { Problem } from "./problem.ts";
import { lowerBound, type ReferenceTable } from "./reference-table.ts";
import { correctedNm } from "./score.ts";

const gateSds = 3.5;
const gateShare = 0.35;
const saturatedGateShare = 0.5;
const leastGateShare = 0.05;
const rivalSds = 4;
const blendReachShare = 0.75;
const companionShare = 0.05;
/** Published ratios are good to a factor of three: an ignored companion pulls by up to this times its published share. */
const companionFactor = 2;
const negligiblePullNm = 0.0003;
/** A component that may carry a blend alone: at least this share of the group's strongest. */
const carrierShare = 0.2;
/** Odds asked of a line whose class was mostly found, and of one whose class was mostly not. */
const leastOdds = 100;
const leastOddsOfRare = 400;
const commonShare = 0.35;
const largestHeightPenalty = 4.5;
/** Smallest scatter of ln(height/strength) believed: lamps differ from the tables by a factor of three (1 sd) and more. */
const leastHeightScatter = 1.2;
const leastScatterShare = 0.008;

export interface Naming {
  /** Index of the reference that gives the name (of a blend: its strongest component), -1 where the line has none. */
  reference: Int32Array;
  /** References that share the line, ascending; one for a plain line, none for an unnamed one. */
  components: number[][];
  /** Wavelength of the name, nm, and what the blend leaves open. */
  nm: Float64Array;
  blendUncNm: Float64Array;
  /** ln odds that the name is right against a stray. */
  logOdds: Float64Array;
  /** 1 where the line lies on a published line or blend, whether the odds were enough for a name or not. */
  explained: Uint8Array;
  fit: CorrectionFit;
}

/** Names for all lines on an axis that is nearly right; null where the axis is held by too few lines. */
export function nameLines(problem: Problem, table: ReferenceTable, start: Float64Array): Naming | null {
  const { count, fwhmNm } = problem;
  const places = new Float64Array(count);
  let correction: Float64Array = start;
  let fit: CorrectionFit | null = null;
  const target = new Float64Array(count);
  const unc = new Float64Array(count);
  for (let round = 0; round < 4; round++) {
    for (let i = 0; i < count; i++) places[i] = correctedNm(problem, correction, i);
    const { shares } = shareReferences(problem, table, places);
    const gate = (round === 0 ? 0.4 : round === 1 ? 0.3 : gateShare) * fwhmNm;
    let clean = pickTargets(problem, table, places, shares, fit, gate, target, unc, false);
    if (clean < 4) clean = pickTargets(problem, table, places, shares, fit, gate, target, unc, true);
    if (clean < 3) return null;
    fit = fitCorrection(problem, target, unc, leastScatterShare * fwhmNm);
    if (fit === null) return null;
    correction = fit.correction;
  }
  const done = fit as CorrectionFit;
  for (let i = 0; i < count; i++) places[i] = correctedNm(problem, correction, i);
  return decide(problem, table, places, shareReferences(problem, table, places), target, done);
}

interface Shares {
  /** Published lines of each found line. */
  shares: number[][];
  /** How far companions too weak for a name may pull its centre, nm. */
  pulls: Float64Array;
}

/** Published lines to the found line nearest to each, where that is within reach. */
function shareReferences(problem: Problem, table: ReferenceTable, places: Float64Array): Shares {
  const order: number[] = [];
  for (let i = 0; i < problem.count; i++) if (problem.usable[i] === 1) order.push(i);
  order.sort((a, b) => (places[a] as number) - (places[b] as number));
  const shares: number[][] = Array.from({ length: problem.count }, () => []);
  const reach = blendReachShare * problem.fwhmNm;
  let k = 0;
  for (let j = 0; j < table.nm.length && order.length > 0; j++) {
    const nm = table.nm[j] as number;
    while (
      k + 1 < order.length &&
      Math.abs((places[order[k + 1] as number] as number) - nm) <= Math.abs((places[order[k] as number] as number) - nm)
    ) {
      k += 1;
    }
    const i = order[k] as number;
    if (Math.abs((places[i] as number) - nm) <= reach) (shares[i] as number[]).push(j);
  }
  const pulls = new Float64Array(problem.count);
  for (let i = 0; i < problem.count; i++) pulls[i] = dropWeakCompanions(table, shares[i] as number[]);
  return { shares, pulls };
}

/** Takes companions out that are too weak to give a name; returns how far they may pull the centre, nm. */
function dropWeakCompanions(table: ReferenceTable, share: number[]): number {
  if (share.length < 2) return 0;
  let strongest = share[0] as number;
  for (const j of share) if ((table.brightness[j] as number) > (table.brightness[strongest] as number)) strongest = j;
  let kept = 0;
  let pull = 0;
  for (const j of share) {
    const ratio = (table.brightness[j] as number) / (table.brightness[strongest] as number);
    if (ratio >= companionShare || table.expected[j]) share[kept++] = j;
    else pull += companionFactor * ratio * Math.abs((table.nm[j] as number) - (table.nm[strongest] as number));
  }
  share.length = kept;
  return pull < negligiblePullNm ? 0 : pull;
}

/** Lines that may hold the working axis: alone in their place, not cut off, close by. Returns how many. */
function pickTargets(
  problem: Problem,
  table: ReferenceTable,
  places: Float64Array,
  shares: number[][],
  fit: CorrectionFit | null,
  gate: number,
  target: Float64Array,
  unc: Float64Array,
  withBlends: boolean,
): number {
  let picked = 0;
  for (let i = 0; i < problem.count; i++) {
    target[i] = Number.NaN;
    const share = shares[i] as number[];
    if (share.length === 0 || problem.usable[i] === 0) continue;
    const own = problem.lineUncNm[i] as number;
    let nm: number;
    let spread = 0;
    if (share.length === 1) {
      nm = table.nm[share[0] as number] as number;
    } else {
      const carrier = onlyNear(table, share, places[i] as number, 0.15 * problem.fwhmNm);
      const halfSpread =
        ((table.nm[share[share.length - 1] as number] as number) - (table.nm[share[0] as number] as number)) / 2;
      if (halfSpread < 0.03 * problem.fwhmNm || withBlends) {
        nm = carrier >= 0 && withBlends ? (table.nm[carrier] as number) : centroid(table, share);
        spread = halfSpread / Math.sqrt(3);
      } else {
        continue;
      }
    }
    if ((problem.saturated[i] === 1 || problem.broad[i] === 1) && !withBlends) continue;
    let allowed = gate;
    if (fit !== null) {
      const axis = fit.axisUncNm[i] as number;
      const sd = Math.sqrt(own * own + axis * axis + fit.scatterNm * fit.scatterNm + spread * spread);
      allowed = Math.min(gate, Math.max(gateSds * sd, leastGateShare * problem.fwhmNm));
    }
    if (Math.abs(nm - (places[i] as number)) > allowed) continue;
    target[i] = nm;
    unc[i] = Math.sqrt(own * own + spread * spread);
    picked += 1;
  }
  return picked;
}

/** The one component within reach of a place, when the others are at least three times as far; else -1. */
function onlyNear(table: ReferenceTable, share: readonly number[], place: number, reach: number): number {
  let nearest = -1;
  let distance = Number.POSITIVE_INFINITY;
  let next = Number.POSITIVE_INFINITY;
  for (const j of share) {
    const d = Math.abs((table.nm[j] as number) - place);
    if (d < distance) {
      next = distance;
      distance = d;
      nearest = j;
    } else if (d < next) next = d;
  }
  return distance <= reach && next > 3 * distance ? nearest : -1;
}

function centroid(table: ReferenceTable, share: readonly number[]): number {
  let sum = 0;
  for (const j of share) sum += table.nm[j] as number;
  return sum / share.length;
}

function decide(
  problem: Problem,
  table: ReferenceTable,
  places: Float64Array,
  { shares, pulls }: Shares,
  target: Float64Array,
  fit: CorrectionFit,
): Naming {
  const { count, fwhmNm } = problem;
  const naming: Naming = {
    reference: new Int32Array(count).fill(-1),
    components: Array.from({ length: count }, () => []),
    nm: new Float64Array(count),
    blendUncNm: new Float64Array(count),
    logOdds: new Float64Array(count),
    explained: new Uint8Array(count),
    fit,
  };
  for (let i = 0; i < count; i++) {
    const share = shares[i] as number[];
    if (share.length === 0 || problem.usable[i] === 0) continue;
    const own = problem.lineUncNm[i] as number;
    const axis = fit.axisUncNm[i] as number;
    const sd = Math.sqrt(own * own + axis * axis + fit.scatterNm * fit.scatterNm);
    const most = (problem.saturated[i] === 1 ? saturatedGateShare : gateShare) * fwhmNm;
    const gate = Math.min(most, Math.max(gateSds * sd, leastGateShare * fwhmNm));
    // Where the line itself held the axis, its place on an axis without it.
    const place = Number.isNaN(target[i] as number)
      ? (places[i] as number)
      : (target[i] as number) - (fit.leaveOneOutNm[i] as number);
    const name = share.length === 1 ? plainName(table, share, place, gate) : blendName(table, share, place, gate, sd);
    if (name === null) continue;
    naming.explained[i] = 1;
    if (hasRival(table, share, name.nm, Math.max(rivalSds * sd, gate), place)) continue;
    naming.reference[i] = name.reference;
    naming.components[i] = share;
    naming.nm[i] = name.nm;
    const pull = pulls[i] as number;
    naming.blendUncNm[i] = Math.sqrt(name.blendUncNm * name.blendUncNm + pull * pull);
    naming.logOdds[i] = log(0.4 / sd) - 0.5 * ((place - name.nm) / sd) * ((place - name.nm) / sd);
    if (name.blendUncNm > 0) naming.logOdds[i] = -log(2 * Math.max(gate, 2 * name.blendUncNm));
  }
  keepLikely(problem, table, places, naming);
  return naming;
}

interface Name {
  reference: number;
  nm: number;
  blendUncNm: number;
}

function plainName(table: ReferenceTable, share: readonly number[], place: number, gate: number): Name | null {
  const reference = share[0] as number;
  const nm = table.nm[reference] as number;
  return Math.abs(nm - place) <= gate ? { reference, nm, blendUncNm: 0 } : null;
}

function blendName(
  table: ReferenceTable,
  share: readonly number[],
  place: number,
  gate: number,
  sd: number,
): Name | null {
  let strongest = share[0] as number;
  for (const j of share) if ((table.strength[j] as number) > (table.strength[strongest] as number)) strongest = j;
  const first = table.nm[share[0] as number] as number;
  const last = table.nm[share[share.length - 1] as number] as number;
  const middle = centroid(table, share);
  const open = (last - first) / 2 / Math.sqrt(3);
  const carrier = onlyNear(table, share, place, gate);
  if (carrier >= 0 && (table.strength[carrier] as number) >= carrierShare * (table.strength[strongest] as number)) {
    const nm = table.nm[carrier] as number;
    const off = Math.abs(nm - place);
    if (off <= 2 * sd && Math.abs(middle - place) >= 2.5 * sd) {
      return { reference: carrier, nm, blendUncNm: Math.min(open, Math.sqrt(off * off + sd * sd)) };
    }
  }
  // Any mixture lies between its components; one that hardly any mixture makes is left to a person.
  if (Math.abs(place - middle) > Math.min((last - first) / 2, 1.5 * open) + gate) return null;
  return { reference: strongest, nm: middle, blendUncNm: open };
}

/** Whether the axis leaves open which of two published lines it is: another one, not of this group, within reach. */
function hasRival(table: ReferenceTable, share: readonly number[], nm: number, reach: number, place: number): boolean {
  let strongest = 0;
  for (const j of share) strongest = Math.max(strongest, table.strength[j] as number);
  for (let j = lowerBound(table.nm, place - reach); j < table.nm.length; j++) {
    const other = table.nm[j] as number;
    if (other > place + reach) return false;
    if (share.includes(j) || other === nm) continue;
    if ((table.strength[j] as number) >= 0.1 * strongest) return true;
  }
  return false;
}

/** Takes back names whose odds against a stray are too small; see the module's header. */
function keepLikely(problem: Problem, table: ReferenceTable, places: Float64Array, naming: Naming): void {
  const { count } = problem;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  let strays = 0.5;
  const heights: number[] = [];
  for (let i = 0; i < count; i++) {
    low = Math.min(low, places[i] as number);
    high = Math.max(high, places[i] as number);
    const reference = naming.reference[i] as number;
    if (naming.explained[i] === 0) strays += 1;
    if (reference >= 0) heights.push(brightness(problem, table, i, reference));
  }
  const strayDensity = strays / Math.max(problem.spanNm, high - low);
  heights.sort((a, b) => a - b);
  const usual = medianOf(heights);
  const deviations = heights.map((value) => Math.abs(value - usual)).sort((a, b) => a - b);
  const scatter = Math.max(leastHeightScatter, 1.4826 * medianOf(deviations));
  const found = new Uint8Array(table.nm.length);
  for (let i = 0; i < count; i++) {
    if ((naming.reference[i] as number) >= 0) for (const j of naming.components[i] as number[]) found[j] = 1;
  }
  for (let i = 0; i < count; i++) {
    const reference = naming.reference[i] as number;
    if (reference < 0) continue;
    const brighter = (brightness(problem, table, i, reference) - usual) / scatter;
    // The top of a saturated line is cut off: that it looks dim says nothing.
    const z = problem.saturated[i] === 1 ? Math.max(brighter, 0) : brighter;
    const share = shareFound(table, found, reference, low, high);
    const odds =
      (naming.logOdds[i] as number) + log(share) - log(strayDensity) - Math.min(0.5 * z * z, largestHeightPenalty);
    naming.logOdds[i] = odds;
    if (exp(odds) >= (share >= commonShare ? leastOdds : leastOddsOfRare)) continue;
    naming.reference[i] = -1;
    naming.components[i] = [];
  }
}

const brightness = (problem: Problem, table: ReferenceTable, i: number, j: number): number =>
  log(Math.max(problem.heightCounts[i] as number, 1e-9)) - log(Math.max(table.strength[j] as number, 0.001));

const medianOf = (sorted: readonly number[]): number =>
  sorted.length === 0 ? 0 : ((sorted[(sorted.length - 1) >> 1] as number) + (sorted[sorted.length >> 1] as number)) / 2;

/** Share of the published lines of about the same strength, in the same spectrum and in range, that were found. */
function shareFound(table: ReferenceTable, found: Uint8Array, reference: number, low: number, high: number): number {
  const strength = table.strength[reference] as number;
  const { spectrum } = table.lines[reference] as { spectrum: string };
  let all = 0;
  let seen = 0;
  for (let widening = 0; widening < 2; widening++) {
    all = 0;
    seen = 0;
    for (let j = lowerBound(table.nm, low); j < table.nm.length && (table.nm[j] as number) <= high; j++) {
      if (j === reference || (table.lines[j] as { spectrum: string }).spectrum !== spectrum) continue;
      const ratio = (table.strength[j] as number) / strength;
      if (ratio < 1 / 3 || (widening === 0 && ratio > 3)) continue;
      all += 1;
      seen += found[j] as number;
    }
    if (all >= 4) break;
  }
  return (seen + 0.5) / (all + 1);
}
