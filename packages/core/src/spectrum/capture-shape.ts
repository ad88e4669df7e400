/**
 * The line shape of a capture: which one, and what its strong lines say of its parameter.
 *
 * Strong lines   single, unsaturated, 30 noise deviations high or more, at most twelve
 * Is a Gaussian  enough: `shape-scores.ts`; nothing else is tried where it is
 * Which          else the least BIC over the strong lines (G. Schwarz, Ann. Statist. 6 (1978) 461), the noise's scale free for every line:
 *                sum of m ln(chi² / m) + k ln M, k = shape parameters of the whole capture, m and M samples of a line and of all; where the
 *                noise is correlated, the first term over the sum of its correlations. BIC and not AICc, because a needless parameter costs
 *                accuracy in every line, and hundreds of samples make a needed one plain
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
  /** By the top's sample index. */
  each: Map<number, KnownParameter>;
}

/** The parameter of each strong line by itself, and over all. */
function learn(prepared: Prepared, strong: readonly StrongLine[], profile: Profile): Learned {
  const each = new Map<number, KnownParameter>();
  const atLimit: number[] = [];
  for (const line of strong) {
    const fit = fitStrong(prepared, line, profile, null);
    const found = fit?.shapeParameter ?? null;
    if (found === null) continue;
    each.set(line.group.members[0]!.top, found);
    if (found.unc === 0) atLimit.push(line.group.members[0]!.top);
  }
  // A line whose parameter stands at its limit says so, about as surely as the others.
  const uncs = [...each.values()].map((one) => one.unc).filter((unc) => unc > 0);
  const usual = uncs.length > 0 ? median(uncs) : 0.1 * (profile.most - profile.least);
  for (const top of atLimit) each.set(top, { value: each.get(top)!.value, unc: usual });
  return { pooled: pool([...each.values()]), each };
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

/** BIC of a shape over the strong lines, its parameter held at their common value; Infinity where it fits no line. */
function criterion(
  prepared: Prepared,
  strong: readonly StrongLine[],
  profile: Profile,
  pooled: Pooled | null,
): { perLine: number[]; samples: number } {
  let samples = 0;
  const perLine = strong.map((line) => {
    const m = line.window.positions.length;
    samples += m;
    const known = pooled === null ? null : { value: pooled.value, unc: 0 };
    const fit = fitStrong(prepared, line, profile, known);
    if (fit === null) return Infinity;
    const chiSquare = fit.reducedChiSquare * fit.degreesOfFreedom;
    return m * log(Math.max(chiSquare / m, 1e-12));
  });
  return { perLine, samples };
}

/** The shape with the least BIC over the strong lines; a line that no shape fits is left out. */
export function shapeByEvidence(prepared: Prepared, strong: readonly StrongLine[]): ShapeInUse {
  const redundancy = redundancyOf(prepared);
  const tried = candidates.map((name) => {
    const profile = profileOf(name);
    const learned = profile.hasParameter ? learn(prepared, strong, profile) : null;
    return { name, profile, learned, ...criterion(prepared, strong, profile, learned?.pooled ?? null) };
  });
  const usable = strong.map((_, k) => tried.some(({ perLine }) => perLine[k]! < Infinity));
  let best = tried[0]!;
  let least = Infinity;
  for (const one of tried) {
    let sum = one.profile.hasParameter ? log(Math.max(one.samples, 1)) : 0;
    one.perLine.forEach((value, k) => {
      if (usable[k]) sum += value / redundancy;
    });
    if (sum >= least) continue;
    best = one;
    least = sum;
  }
  if (best.name === "gaussian") {
    const shape = gaussianShape("evidence", strong.length);
    const note = `${strong.length} strong lines are no Gaussian, and no other shape that was tried describes them better.`;
    return { ...shape, report: { ...shape.report, note } };
  }
  const note = `Of the shapes tried on ${strong.length} strong lines, ${words[best.name]} describes them best (least BIC).`;
  const shape = shapeOf(best.name, best.profile, best.learned, "evidence", note);
  return { ...shape, report: { ...shape.report, lines: strong.length } };
}
