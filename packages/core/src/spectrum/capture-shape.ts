/**
 * The line shape of a capture: which one, and what its strong lines say of its parameter.
 *
 * Strong lines   single, unsaturated, 30 noise deviations high or more, at most twelve
 * Is a Gaussian  enough: `shape-scores.ts`; nothing else is tried where it is
 * Which          else the least BIC over the strong lines (G. Schwarz, Ann. Statist. 6 (1978) 461), the noise's scale free for every line:
 *                sum of m ln(chi² / m) + k ln M, k = shape parameters of the whole capture, m and M samples of a line and of all; where the
 *                noise is correlated, the first term over the sum of its correlations. BIC and not AICc, because a needless parameter costs
 *                accuracy in every line, and hundreds of samples make a needed one plain
 * Adopted        only where it describes the lines: at half of them a misfit near chance or near one percent of the height; a tail, which moves
 *                centres, only where the lines' own tails agree (spread up to 0.15 beyond their uncertainties) and no narrow line contradicts
 *                it. Limits set on simulated skewed captures (misfit up to 1.0 %, spread up to 0.13) and real ones whose tail changes along
 *                the detector (1.2 % and a line contradicting; 2.2 % and 0.40)
 * Parameter      fitted to each strong line by itself, then their mean with a scatter between lines (R. DerSimonian, N. Laird, Control. Clin.
 *                Trials 7 (1986) 177). A symmetric shape's is held at it: the centre does not depend on it. To a skewed shape's line it is given
 *                as what the other lines say, never its own word twice: a value with an uncertainty, which the position's then holds
 */
import type { CaptureLineShape, LineShapeChoice, LineShapeName } from "../analysis/types.ts";
import { log } from "../numeric/elementary.ts";
import { fitLines, type FittedWindowOfLines } from "../lineshape/fit-line.ts";
import type { KnownParameter } from "../lineshape/line-solver.ts";
import { profileOf, type Profile } from "../lineshape/profile.ts";
import { TabulatedProfile } from "../lineshape/tabulated.ts";
import { startsOf, windowOf, type Group, type GroupWindow, type Prepared } from "./line-groups.ts";
import { median } from "./median.ts";

/** A shape to fit a capture's lines with. */
export interface ShapeInUse {
  name: LineShapeName;
  profile: Profile;
  /** Parameter of a symmetric shape: held for all lines, since the centre does not depend on it; null: not held. */
  held: KnownParameter | null;
  /** What the other strong lines say of the parameter, for a line whose top is at this sample; null: nothing, it is free. */
  knownFor(top: number): KnownParameter | null;
  /** What the shape's own uncertainty adds to a position's, in FWHM; absent = nothing. */
  positionShare?: number;
  report: CaptureLineShape;
}

export interface StrongLine {
  group: Group;
  window: GroupWindow;
}

const strongSigmas = 30;
const mostStrong = 12;
/** Narrower or broader than the typical line by this factor: no line to learn from. */
const likeTypical = 1.7;
const fewestSamplesOver = 4;
const fewestToTell = 2;
/** Share of a parameter's range that stands in for its uncertainty where no line shows it. */
const unseenShare = 0.25;
/**
 * A shape describes the lines where it leaves at half of them no more than this share of the height, about what pixels of one percent unequal
 * response leave, or no more than chance does. A symmetric shape is held to less: the Gaussian's centre is right without it.
 */
const describedShare = 0.01;
const describedShareSkewed = 0.0125;
const chanceChiSquare = 2;
/** An instrument's tail is one tail: the lines' own tails spread no more than this beyond their uncertainties. */
const mostTailSpread = 0.15;
/** So different is another tail; a line is no broader than the others up to this factor. */
const otherTail = 0.3;
const noBroader = 1.05;
/** A line's parameter further than this from the middle of all is not the instrument's. */
const oddSigmas = 4;
const madToStd = 1.4826;

/** The shapes that evidence may choose; the pseudo-Voigt is left to the setup, since a true Voigt takes its place. */
const candidates: LineShapeName[] = ["gaussian", "exponentially-modified-gaussian", "box", "voigt", "lorentzian"];

const parameterNames: Partial<Record<LineShapeName, string>> = {
  "pseudo-voigt": "lorentzShare",
  voigt: "lorentzShare",
  "exponentially-modified-gaussian": "tail",
  box: "flatness",
};

export function parameterName(name: LineShapeName): string {
  return parameterNames[name] ?? "parameter";
}

/** Strong single lines with whole windows, strongest first. */
export function strongLines(prepared: Prepared, groups: readonly Group[], gain: number): StrongLine[] {
  const { typicalWidth, readNoise, excluded, counts } = prepared;
  const chosen = groups.filter(({ members, first, last }) => {
    const one = members[0]!;
    if (members.length > 1 || one.saturated || one.height < strongSigmas * readNoise[one.top]!) return false;
    if (one.width > likeTypical * typicalWidth || one.width < typicalWidth / likeTypical) return false;
    if (one.centre < 2 * one.width || one.centre > counts.length - 1 - 2 * one.width) return false;
    for (let i = first; i <= last; i += 1) if (excluded[i] !== 0) return false;
    return last - first + 1 >= 5 + fewestSamplesOver;
  });
  chosen.sort((a, b) => b.members[0]!.height - a.members[0]!.height);
  return chosen.slice(0, mostStrong).map((group) => ({ group, window: windowOf(prepared, group, gain) }));
}

/** A fit of one strong line under noise taken as white: what it is compared by is corrected for correlation as a whole. */
export function fitStrong(
  prepared: Prepared,
  { group, window }: StrongLine,
  profile: Profile,
  known: KnownParameter | null,
): FittedWindowOfLines | null {
  const fit = fitLines(
    {
      positions: window.positions,
      counts: window.values,
      countsUnc: window.unc,
      pixelIntegrated: prepared.pixelIntegrated,
      noiseCorrelation: 0,
    },
    startsOf(prepared, group),
    { shape: profile, shapeParameter: known },
  );
  return fit.outcome === "fitted" ? fit : null;
}

/** Root mean square of what the fit leaves over beyond the noise, counts. */
export function misfitOf({ values, unc }: GroupWindow, fit: FittedWindowOfLines): number {
  let left = 0;
  let noise = 0;
  for (let k = 0; k < values.length; k += 1) {
    const residual = values[k]! - fit.fittedCounts[k]!;
    left += residual * residual;
    noise += unc[k]! * unc[k]!;
  }
  const free = Math.max(1, values.length - 3 * fit.lines.length - 2);
  return Math.sqrt(Math.max(0, left / free - noise / values.length));
}

/** Sum of the correlations at all lags: by how much fewer samples tell than there are. */
export function redundancyOf(prepared: Prepared): number {
  let sum = 1;
  for (const value of prepared.autocorrelation) sum += 2 * value;
  return Math.max(1, sum);
}

interface Pooled {
  value: number;
  unc: number;
  scatter: number;
}

/** Mean of the lines' parameters with a scatter between them. */
function pool(each: readonly KnownParameter[]): Pooled | null {
  if (each.length === 0) return null;
  let [w, ww, mean] = [0, 0, 0];
  for (const { value, unc } of each) {
    const weight = 1 / (unc * unc);
    w += weight;
    ww += weight * weight;
    mean += weight * value;
  }
  mean /= w;
  let q = 0;
  for (const { value, unc } of each) q += ((value - mean) / unc) * ((value - mean) / unc);
  const room = w - ww / w;
  const scatter = each.length > 1 && room > 0 ? Math.sqrt(Math.max(0, (q - (each.length - 1)) / room)) : 0;
  let [total, sum] = [0, 0];
  for (const { value, unc } of each) {
    const weight = 1 / (unc * unc + scatter * scatter);
    total += weight;
    sum += weight * value;
  }
  return { value: sum / total, unc: Math.sqrt(1 / total), scatter };
}

interface Learned {
  pooled: Pooled | null;
  /** Robust standard deviation of the lines' parameters beyond their uncertainties. */
  spread: number;
  /** A line that is no broader than the others, and that the shape describes, has another parameter: no blend, another tail. */
  isContradicted: boolean;
  /** By the top's sample index. */
  each: Map<number, KnownParameter>;
}

/** The parameter of each strong line by itself, and over all. */
function learn(prepared: Prepared, strong: readonly StrongLine[], profile: Profile): Learned {
  const each = new Map<number, KnownParameter>();
  const plain = new Map<number, number>();
  const atLimit: number[] = [];
  for (const line of strong) {
    const fit = fitStrong(prepared, line, profile, null);
    const found = fit?.shapeParameter ?? null;
    if (found === null) continue;
    each.set(line.group.members[0]!.top, found);
    if (found.unc === 0) atLimit.push(line.group.members[0]!.top);
    const { fwhm, peakHeightCounts } = fit!.lines[0]!;
    if (misfitOf(line.window, fit!) < describedShareSkewed * peakHeightCounts)
      plain.set(line.group.members[0]!.top, fwhm);
  }
  // A line whose parameter stands at its limit says so, about as surely as the others.
  const uncs = [...each.values()].map((one) => one.unc).filter((unc) => unc > 0);
  const usual = uncs.length > 0 ? median(uncs) : 0.1 * (profile.most - profile.least);
  for (const top of atLimit) each.set(top, { value: each.get(top)!.value, unc: usual });
  // Two lines in one, or a line whose background bends, say nothing of the shape.
  const middle = median([...each.values()].map(({ value }) => value));
  const robust = madToStd * median([...each.values()].map(({ value }) => Math.abs(value - middle)));
  const width = median([...plain.values()]);
  const isContradicted = [...plain].some(([top, fwhm]) => {
    const off = Math.abs(each.get(top)!.value - middle);
    return fwhm <= noBroader * width && off > otherTail && off > oddSigmas * each.get(top)!.unc;
  });
  for (const [top, { value, unc }] of each)
    if (Math.abs(value - middle) > oddSigmas * Math.sqrt(robust * robust + unc * unc)) each.delete(top);
  const spread = Math.sqrt(Math.max(0, robust * robust - usual * usual));
  return { pooled: pool([...each.values()]), spread, isContradicted, each };
}

function shapeOf(
  name: LineShapeName,
  profile: Profile,
  learned: Learned | null,
  chosenBy: CaptureLineShape["chosenBy"],
  note: string,
): ShapeInUse {
  const unseen = { value: profile.usual, unc: unseenShare * (profile.most - profile.least) };
  const knownFor = (top: number): KnownParameter | null => {
    if (!profile.hasParameter) return null;
    if (learned === null || learned.pooled === null) return unseen;
    if (!learned.each.has(top)) {
      const { value, unc, scatter } = learned.pooled;
      return { value, unc: Math.sqrt(unc * unc + scatter * scatter) };
    }
    const others = pool([...learned.each].filter(([other]) => other !== top).map(([, one]) => one));
    if (others === null) return null;
    return { value: others.value, unc: Math.sqrt(others.unc * others.unc + others.scatter * others.scatter) };
  };
  const known = new Map<number, KnownParameter | null>();
  const pooled = learned?.pooled ?? null;
  const isHeld = profile.hasParameter && name !== "exponentially-modified-gaussian";
  const held = isHeld ? (pooled ?? unseen) : null;
  return {
    name,
    profile: held !== null && !profile.hasClosedIntegral ? new TabulatedProfile(profile, held.value) : profile,
    held:
      held === null
        ? null
        : { value: held.value, unc: Math.sqrt(held.unc * held.unc + (pooled?.scatter ?? 0) * (pooled?.scatter ?? 0)) },
    knownFor: (top) => {
      if (held !== null) return { value: held.value, unc: 0 };
      if (!known.has(top)) known.set(top, knownFor(top));
      return known.get(top)!;
    },
    report: {
      name,
      chosenBy,
      parameter: pooled === null ? null : { name: parameterName(name), ...pooled },
      lines: learned?.each.size ?? 0,
      note,
    },
  };
}

const words: Record<LineShapeName, string> = {
  gaussian: "a Gaussian",
  lorentzian: "a Lorentzian",
  voigt: "a Voigt shape",
  "pseudo-voigt": "a pseudo-Voigt shape",
  "exponentially-modified-gaussian": "a Gaussian with an exponential tail",
  box: "a box blurred by a Gaussian",
  empirical: "the shape learned from the capture's own strong lines",
};

/** The Gaussian, as a default or because nothing speaks against it. */
export function gaussianShape(chosenBy: CaptureLineShape["chosenBy"], lines: number): ShapeInUse {
  const note =
    chosenBy === "evidence"
      ? lines < fewestToTell
        ? "Too few strong single lines to tell their shape: a Gaussian is taken."
        : `${lines} strong lines show nothing that a Gaussian does not.`
      : "The lines are fitted with a Gaussian.";
  const shape = shapeOf("gaussian", profileOf("gaussian"), null, chosenBy, note);
  return { ...shape, report: { ...shape.report, lines } };
}

/** A shape that the setup names, with its parameter learned from the strong lines. */
export function givenShape(
  prepared: Prepared,
  strong: readonly StrongLine[],
  name: Exclude<LineShapeChoice, "automatic" | "empirical">,
): ShapeInUse {
  const profile = profileOf(name);
  const learned = profile.hasParameter ? learn(prepared, strong, profile) : null;
  const shape = shapeOf(name, profile, learned, "setup", `The lines are fitted with ${words[name]}, as set up.`);
  return learned === null ? { ...shape, report: { ...shape.report, lines: strong.length } } : shape;
}

interface Tried {
  name: LineShapeName;
  profile: Profile;
  learned: Learned | null;
  /** By strong line, the parameter held at its common value; Infinity where the shape fits no line. */
  perLine: { misfit: number; deviance: number; samples: number }[];
}

/** The strong lines under a shape, its parameter held at their common value. */
function tryShape(prepared: Prepared, strong: readonly StrongLine[], name: (typeof candidates)[number]): Tried {
  const profile = profileOf(name);
  const learned = profile.hasParameter ? learn(prepared, strong, profile) : null;
  const pooled = learned?.pooled ?? null;
  const known = pooled === null ? null : { value: pooled.value, unc: 0 };
  const perLine = strong.map((line) => {
    const samples = line.window.positions.length;
    const fit = fitStrong(prepared, line, profile, known);
    if (fit === null) return { misfit: Infinity, deviance: Infinity, samples };
    const chiSquare = fit.reducedChiSquare * fit.degreesOfFreedom;
    return {
      misfit: fit.reducedChiSquare < chanceChiSquare ? 0 : misfitOf(line.window, fit) / fit.lines[0]!.peakHeightCounts,
      deviance: samples * log(Math.max(chiSquare / samples, 1e-12)),
      samples,
    };
  });
  return { name, profile, learned, perLine };
}

/** Does a shape describe the strong lines, with one parameter for all? */
function describes({ name, learned, perLine }: Tried): boolean {
  const typical = median(perLine.map(({ misfit }) => misfit));
  if (name !== "exponentially-modified-gaussian") return typical <= describedShare;
  if (typical > describedShareSkewed) return false;
  return learned !== null && learned.pooled !== null && learned.spread <= mostTailSpread && !learned.isContradicted;
}

/**
 * The shape with the least BIC over the strong lines among those that describe them; a line that no shape fits is left out. A shape that does
 * not describe them would move centres by a tail that is not the instrument's: the Gaussian stays then.
 */
export function shapeByEvidence(prepared: Prepared, strong: readonly StrongLine[]): ShapeInUse {
  const redundancy = redundancyOf(prepared);
  const tried = candidates.map((name) => tryShape(prepared, strong, name));
  const usable = strong.map((_, k) => tried.some(({ perLine }) => perLine[k]!.deviance < Infinity));
  let best = tried[0]!;
  let least = Infinity;
  let isRefused = false;
  for (const one of tried) {
    let sum = 0;
    let samples = 0;
    one.perLine.forEach((line, k) => {
      samples += line.samples;
      if (usable[k]) sum += line.deviance / redundancy;
    });
    if (one.profile.hasParameter) sum += log(Math.max(samples, 1));
    if (sum >= least) continue;
    if (one.name !== "gaussian" && !describes(one)) {
      isRefused = true;
      continue;
    }
    best = one;
    least = sum;
  }
  if (best.name === "gaussian") {
    const shape = gaussianShape("evidence", strong.length);
    const lines = `${strong.length} strong lines are no Gaussian`;
    const note = isRefused
      ? `${lines}, but no other shape that was tried describes them with one parameter for all either: the Gaussian is kept.`
      : `${lines}, and no other shape that was tried describes them better.`;
    return { ...shape, report: { ...shape.report, note } };
  }
  const note = `Of the shapes tried on ${strong.length} strong lines, ${words[best.name]} describes them best (least BIC).`;
  const shape = shapeOf(best.name, best.profile, best.learned, "evidence", note);
  return { ...shape, report: { ...shape.report, lines: strong.length } };
}
