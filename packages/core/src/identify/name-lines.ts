/**
 * Line by line: which published line is this one, once the axis is known?
 *
 * A name needs a place and odds.
 * Place   known to 0.3 FWHM from the other lines; within 3.5 standard uncertainties (line, axis without that line, scatter)
 *         and 0.22 FWHM of a published line, with no other one that the axis could not tell from it; and among the lines
 *         next to it that are not much fainter, at least a third lie on published lines too
 * Odds    P(the lamp's line) / P(a stray in its place, the lamp's own not seen) of at least 80 (outermost lines 160, faint ones there 400):
 *         density of the place times
 *         s/(1 - s), s the share of its class (published lines of about its strength) that was found, against strays of its
 *         brightness spread evenly over the capture; a height far from what its published intensity leads to expect counts
 *         against it, by no more than a factor of 90
 * Blends  published lines that no other found line claims and that lie within 0.6 FWHM of it (0.45 of its own, where
 *         that is more; broader than 1.9 times the usual it gets no name) belong to one found line.
 *         Companions below 12 % of the strongest of the group (1 % where they belong to another spectrum) give no name;
 *         what they may pull stays as uncertainty. If the place, judged by the other lines' axis, is nearer to one component
 *         than to the common centroid, the capture itself shows that this one carries most of the light: it gives the name,
 *         with its distance as uncertainty; else the centroid, whatever the published intensities, with half the
 *         spread / sqrt 3
 */
import { exp, log } from "../numeric/elementary.ts";
import { fitCorrection, type CorrectionFit } from "./correction.ts";
import type { Problem } from "./problem.ts";
import { lowerBound, type ReferenceTable } from "./reference-table.ts";
import { correctedNm } from "./score.ts";

const gateSds = 3.5;
const gateShare = 0.22;
const saturatedGateShare = 0.35;
const holdingGateShare = 0.3;
const leastGateShare = 0.05;
const vaguePlaceShare = 0.3;
const rivalSds = 3;
const rivalShare = 0.1;
const blendReachShare = 0.6;
/** Of a line broader than the others: the share of its own width. */
const broadReachShare = 0.45;
/** A line this many times as broad as the others is a crowd of lines, whatever lies in its middle. */
const crowdRatio = 1.9;
const companionShare = 0.12;
/** Between spectra published intensities do not compare: only next to nothing is ignored there. */
const companionShareOfOthers = 0.01;
/** Published ratios are good to a factor of three: an ignored companion pulls by up to this times its published share. */
const companionFactor = 2;
const negligiblePullNm = 0.0003;
/** From this many lines on their common agreement tells more than stated uncertainties, which may be generous. */
const fewestForAgreement = 7;
const leastShrink = 0.3;
/** A component that may carry a blend: at least this share of the group's strongest. */
const carrierShare = 0.5;
const leastOdds = 80;
/** Of the outermost lines, where nothing beyond bears the axis out, more is asked; of faint ones most. */
const leastOddsOutside = 160;
const leastOddsOfFaintOutside = 400;
/** Strays expected before any is seen: near the limit of detection unlisted lines are common. */
const brightStrays = 0.5;
const faintStrays = 2;
const faintSignalToNoise = 25;
/** Lines of ions are seldom seen: what counts in place of the first two of their class. */
const ionPrior = 0.2;
const largestHeightPenalty = 4.5;
/** Smallest scatter of ln(height/strength) believed: lamps differ from the tables by a factor of three (1 sd) and more. */
const leastHeightScatter = 1.5;
/** Unexplained lines at least this bright beside a line count as strays that it might be one of. */
const strayHeightShare = 0.3;
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
    const gate = (round === 0 ? 0.4 : holdingGateShare) * fwhmNm;
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
    const reach = Math.max(blendReachShare, broadReachShare * (problem.widthRatio[i] as number)) * problem.fwhmNm;
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
    const isSame = table.spectrum[j] === table.spectrum[strongest];
    if (ratio >= (isSame ? companionShare : companionShareOfOthers) || table.expected[j] === 1) share[kept++] = j;
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
  const agreement = agreementOf(problem, target, fit);
  for (let i = 0; i < count; i++) {
    const share = shares[i] as number[];
    if (share.length === 0 || problem.usable[i] === 0 || (problem.widthRatio[i] as number) > crowdRatio) continue;
    // Common agreement says nothing of lines whose tops are cut off or which hide others.
    const isSound = problem.saturated[i] === 0 && problem.broad[i] === 0;
    const own = (isSound ? agreement.shrink : 1) * (problem.lineUncNm[i] as number);
    const axis = fit.axisUncNm[i] as number;
    const sd = Math.sqrt(own * own + axis * axis + fit.scatterNm * fit.scatterNm);
    const most = (problem.saturated[i] === 1 ? saturatedGateShare : gateShare) * fwhmNm;
    const spread = Math.max(sd, agreement.scatterNm);
    const gate = Math.max(gateSds * spread, leastGateShare * fwhmNm);
    // Where the line itself held the axis, its place on an axis without it.
    const here = places[i] as number;
    const place = Number.isNaN(target[i] as number) ? here : (target[i] as number) - (fit.leaveOneOutNm[i] as number);
    const name =
      share.length === 1
        ? plainName(table, share)
        : blendName(table, share, place, Math.sqrt(axis * axis + fit.scatterNm * fit.scatterNm));
    // A line that alone says where the axis runs there can't be checked by it.
    if (axis > vaguePlaceShare * fwhmNm) continue;
    const reach = name.isCentroid ? Math.max(gate, 1.6 * name.blendUncNm) : gate;
    if (Math.abs(name.nm - here) > most || Math.abs(name.nm - place) > reach) continue;
    naming.explained[i] = 1;
    if (hasRival(table, share, name.nm, Math.max(rivalSds * sd, Math.min(gate, most)), place)) continue;
    naming.reference[i] = name.reference;
    naming.components[i] = share;
    naming.nm[i] = name.nm;
    const pull = pulls[i] as number;
    naming.blendUncNm[i] = Math.sqrt(name.blendUncNm * name.blendUncNm + pull * pull);
    const off = (place - name.nm) / spread;
    naming.logOdds[i] = name.isCentroid ? -log(2 * reach) : log(0.4 / spread) - 0.5 * off * off;
  }
  keepLikely(problem, table, places, shares, naming);
  return naming;
}

/** How well the lines that hold the axis agree with it, beside what their uncertainties say. */
function agreementOf(
  problem: Problem,
  target: Float64Array,
  fit: CorrectionFit,
): { shrink: number; scatterNm: number } {
  const sizes: number[] = [];
  let sum = 0;
  for (let i = 0; i < problem.count; i++) {
    if (Number.isNaN(target[i] as number)) continue;
    const own = problem.lineUncNm[i] as number;
    const axis = fit.axisUncNm[i] as number;
    const miss = fit.leaveOneOutNm[i] as number;
    sizes.push(Math.abs(miss));
    sum += (miss * miss) / (own * own + axis * axis + fit.scatterNm * fit.scatterNm);
  }
  if (sizes.length < fewestForAgreement) return { shrink: 1, scatterNm: 0 };
  sizes.sort((a, b) => a - b);
  return {
    shrink: Math.min(1, Math.max(leastShrink, Math.sqrt(sum / sizes.length))),
    scatterNm: 1.4826 * medianOf(sizes),
  };
}

interface Name {
  reference: number;
  nm: number;
  blendUncNm: number;
  /** The centroid of a blend, rather than one line. */
  isCentroid: boolean;
}

function plainName(table: ReferenceTable, share: readonly number[]): Name {
  const reference = share[0] as number;
  return { reference, nm: table.nm[reference] as number, blendUncNm: 0, isCentroid: false };
}

/** `axisSd`: how sure the place is but for the line's own fit, whose uncertainty is counted with the position. */
function blendName(table: ReferenceTable, share: readonly number[], place: number, axisSd: number): Name {
  let strongest = share[0] as number;
  for (const j of share) if ((table.brightness[j] as number) > (table.brightness[strongest] as number)) strongest = j;
  const first = table.nm[share[0] as number] as number;
  const last = table.nm[share[share.length - 1] as number] as number;
  const open = (last - first) / 2 / Math.sqrt(3);
  const middle = centroid(table, share);
  for (const j of share) {
    const nm = table.nm[j] as number;
    const off = Math.abs(nm - place);
    // Nearer to this component than to any other and than to the middle: this one carries the light, or most of it.
    if (off >= Math.abs(middle - place) || share.some((k) => Math.abs((table.nm[k] as number) - place) < off)) continue;
    if ((table.brightness[j] as number) < carrierShare * (table.brightness[strongest] as number)) continue;
    return { reference: j, nm, blendUncNm: Math.min(open, Math.sqrt(off * off + axisSd * axisSd)), isCentroid: false };
  }
  return { reference: strongest, nm: middle, blendUncNm: open, isCentroid: true };
}

/** Whether the axis leaves open which of two published lines it is: another one, not of this group, within reach. */
function hasRival(table: ReferenceTable, share: readonly number[], nm: number, reach: number, place: number): boolean {
  let strongest = 0;
  for (const j of share) strongest = Math.max(strongest, table.brightness[j] as number);
  for (let j = lowerBound(table.nm, place - reach); j < table.nm.length; j++) {
    const other = table.nm[j] as number;
    if (other > place + reach) return false;
    if (share.includes(j) || other === nm) continue;
    if ((table.brightness[j] as number) >= rivalShare * strongest) return true;
  }
  return false;
}

/** Takes back names whose odds against a stray are too small; see the module's header. */
function keepLikely(
  problem: Problem,
  table: ReferenceTable,
  places: Float64Array,
  shares: number[][],
  naming: Naming,
): void {
  const { count } = problem;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  let firstExplained = Number.POSITIVE_INFINITY;
  let lastExplained = Number.NEGATIVE_INFINITY;
  const strayHeights: number[] = [];
  const heights: number[] = [];
  for (let i = 0; i < count; i++) {
    low = Math.min(low, places[i] as number);
    high = Math.max(high, places[i] as number);
    if (naming.explained[i] === 1) {
      firstExplained = Math.min(firstExplained, places[i] as number);
      lastExplained = Math.max(lastExplained, places[i] as number);
    }
    const reference = naming.reference[i] as number;
    if (naming.explained[i] === 0 && problem.usable[i] === 1 && (shares[i] as number[]).length === 0)
      strayHeights.push(problem.heightCounts[i] as number);
    if (reference >= 0) heights.push(brightness(problem, table, i, reference));
  }
  const range = Math.max(problem.spanNm, high - low);
  heights.sort((a, b) => a - b);
  const usual = medianOf(heights);
  const deviations = heights.map((value) => Math.abs(value - usual)).sort((a, b) => a - b);
  const scatter = Math.max(leastHeightScatter, 1.4826 * medianOf(deviations));
  const found = new Uint8Array(table.nm.length);
  for (let i = 0; i < count; i++) {
    if ((naming.reference[i] as number) >= 0) for (const j of naming.components[i] as number[]) found[j] = 1;
  }
  const order: number[] = [];
  for (let i = 0; i < count; i++) if (problem.usable[i] === 1) order.push(i);
  order.sort((a, b) => (places[a] as number) - (places[b] as number));
  for (let i = 0; i < count; i++) {
    const reference = naming.reference[i] as number;
    if (reference < 0) continue;
    if (standsAlone(problem, naming, order, i)) {
      naming.reference[i] = -1;
      naming.components[i] = [];
      continue;
    }
    const height = problem.heightCounts[i] as number;
    const isFaint = (problem.signalToNoise[i] as number) < faintSignalToNoise;
    let strays = isFaint ? faintStrays : brightStrays;
    for (const other of strayHeights) if (other >= strayHeightShare * height) strays += 1;
    const brighter = (brightness(problem, table, i, reference) - usual) / scatter;
    // The top of a saturated line is cut off: that it looks dim says nothing.
    const z = problem.saturated[i] === 1 ? Math.max(brighter, 0) : brighter;
    const share = shareFound(table, found, reference, low, high);
    const odds =
      (naming.logOdds[i] as number) +
      log(share / (1 - share)) -
      log(strays / range) -
      Math.min(0.5 * z * z, largestHeightPenalty);
    naming.logOdds[i] = odds;
    const isOutside = (places[i] as number) <= firstExplained || (places[i] as number) >= lastExplained;
    const least = !isOutside ? leastOdds : isFaint ? leastOddsOfFaintOutside : leastOddsOutside;
    if (exp(odds) >= least) continue;
    naming.reference[i] = -1;
    naming.components[i] = [];
  }
}

/** Whether most of the lines next to one, two each way and not much fainter, are no published lines. */
function standsAlone(problem: Problem, naming: Naming, order: readonly number[], i: number): boolean {
  const at = order.indexOf(i);
  const least = strayHeightShare * (problem.heightCounts[i] as number);
  let neighbours = 0;
  let explained = 0;
  for (const step of [-1, 1]) {
    let taken = 0;
    for (let k = at + step; k >= 0 && k < order.length && taken < 2; k += step) {
      const other = order[k] as number;
      if ((problem.heightCounts[other] as number) < least) continue;
      taken += 1;
      neighbours += 1;
      explained += naming.explained[other] as number;
    }
  }
  return neighbours >= 3 && 3 * explained < neighbours;
}

const brightness = (problem: Problem, table: ReferenceTable, i: number, j: number): number =>
  log(Math.max(problem.heightCounts[i] as number, 1e-9)) - log(Math.max(table.strength[j] as number, 0.001));

const medianOf = (sorted: readonly number[]): number =>
  sorted.length === 0 ? 0 : ((sorted[(sorted.length - 1) >> 1] as number) + (sorted[sorted.length >> 1] as number)) / 2;

/** Share of the published lines of about the same strength, in the same spectrum and in range, that were found. */
function shareFound(table: ReferenceTable, found: Uint8Array, reference: number, low: number, high: number): number {
  const strength = table.strength[reference] as number;
  const spectrum = table.spectrum[reference];
  let all = 0;
  let seen = 0;
  for (let widening = 0; widening < 2; widening++) {
    all = 0;
    seen = 0;
    for (let j = lowerBound(table.nm, low); j < table.nm.length && (table.nm[j] as number) <= high; j++) {
      if (j === reference || table.spectrum[j] !== spectrum) continue;
      const ratio = (table.strength[j] as number) / strength;
      if (ratio < 1 / 3 || (widening === 0 && ratio > 3)) continue;
      all += 1;
      seen += found[j] as number;
    }
    if (all >= 4) break;
  }
  return (seen + (table.ion[reference] === 1 ? ionPrior : 1)) / (all + 2);
}
