/**
 * The line shape learned from a capture's own strong lines.
 *
 * What is learned is the shape as the samples show it, the pixel's width included, so that it is not averaged over the pixel again (effective
 * point-spread function: J. Anderson, I. R. King, PASP 112 (2000) 1360).
 * Method   the strong lines' samples, less background, over area and in units of each line's FWHM, lie at many places of one curve: cubic
 *          spline by weighted least squares, nodes 0.14 FWHM apart, third differences held weakly to zero; then area one and first moment
 *          zero, the lines fitted again with it, three rounds. Starts from the best closed shape
 * Unsure   the lines are parted in two halves that each learn a shape of their own; the root mean square difference of the strong
 *          lines' centres with the one and the other, in FWHM, is the learned shape's share of every position's standard uncertainty (twice what the
 *          whole set's shape would have if the lines were independent: they learn from themselves)
 * Limits   one shape for the whole capture, in units of the FWHM; 2.2 FWHM to either side of the centre, nothing beyond; four strong lines
 *          or more
 */
import { WithoutParameter, type Profile } from "../lineshape/profile.ts";
import { solveLeastSquares } from "../numeric/linear-least-squares.ts";
import { fitStrong, type ShapeInUse, type StrongLine } from "./capture-shape.ts";
import type { Prepared } from "./line-groups.ts";
import { median } from "./median.ts";

const fewestToLearn = 4;
const mostOfUsual = 1.25;
const spacing = 0.14;
const reach = 2.2;
const rounds = 3;
/** Weak hold on the third differences, in units of density times FWHM, and what the lines may differ among themselves. */
const roughness = 0.05;
const likeness = 0.003;
const splines = Math.ceil((2 * reach) / spacing) + 3;

/** Cubic B-spline of unit spacing about 0, and its slope. */
function basis(t: number): number {
  const a = Math.abs(t);
  if (a >= 2) return 0;
  if (a >= 1) return ((2 - a) * (2 - a) * (2 - a)) / 6;
  return (4 - 6 * a * a + 3 * a * a * a) / 6;
}
function basisSlope(t: number): number {
  const a = Math.abs(t);
  if (a >= 2) return 0;
  const slope = a >= 1 ? -0.5 * (2 - a) * (2 - a) : -2 * a + 1.5 * a * a;
  return t < 0 ? -slope : slope;
}

class LearnedProfile extends WithoutParameter {
  readonly name = "empirical";
  readonly hasClosedIntegral = false;
  readonly widthPerFwhm = 1;
  private shift = 0;
  private scale = 1;

  constructor(private readonly coefficients: Float64Array) {
    super();
    let [area, moment] = [0, 0];
    const out = new Float64Array(3);
    const step = spacing / 8;
    for (let u = -reach; u <= reach; u += step) {
      this.point(u, out);
      area += step * out[0]!;
      moment += step * u * out[0]!;
    }
    this.scale = 1 / area;
    this.shift = moment / area;
  }
  edge(): void {
    throw new RangeError("The learned shape holds the pixel already");
  }
  point(u: number, out: Float64Array): void {
    out[0] = 0;
    out[1] = 0;
    const at = u + this.shift;
    if (at <= -reach || at >= reach) return;
    const t = (at + reach) / spacing;
    const first = Math.floor(t) - 1;
    for (let j = Math.max(0, first); j <= Math.min(splines - 1, first + 3); j += 1) {
      const value = this.scale * this.coefficients[j]!;
      out[0] = out[0]! + value * basis(t - j);
      out[1] = out[1]! + (value * basisSlope(t - j)) / spacing;
    }
  }
}

function learn(
  prepared: Prepared,
  strong: readonly StrongLine[],
  from: Profile,
  known: ShapeInUse["held"],
  most: number,
): Profile | null {
  let profile: Profile = from;
  for (let round = 0; round < most; round += 1) {
    const rows: number[][] = [];
    for (const line of strong) {
      const fit = fitStrong(prepared, line, profile, round === 0 ? known : null);
      if (fit === null) continue;
      const { centre, fwhm, areaCounts } = fit.lines[0]!;
      const { positions, values, unc } = line.window;
      for (let i = 0; i < positions.length; i += 1) {
        const u = (positions[i]! - centre) / fwhm;
        if (u <= -reach || u >= reach) continue;
        const background = fit.baseline[0] + fit.baseline[1] * (positions[i]! - fit.windowCentre);
        const perCount = fwhm / areaCounts;
        const noise = unc[i]! * perCount;
        rows.push([u, (values[i]! - background) * perCount, Math.sqrt(noise * noise + likeness * likeness)]);
      }
    }
    if (rows.length < splines) return null;
    const count = rows.length + splines - 3;
    const design = new Float64Array(count * splines);
    const values = new Float64Array(count);
    const unc = new Float64Array(count);
    rows.forEach(([u, value, noise], i) => {
      const t = (u! + reach) / spacing;
      const first = Math.floor(t) - 1;
      for (let j = Math.max(0, first); j <= Math.min(splines - 1, first + 3); j += 1)
        design[i * splines + j] = basis(t - j);
      values[i] = value!;
      unc[i] = noise!;
    });
    for (let k = 0; k + 3 < splines; k += 1) {
      const row = rows.length + k;
      design.set([-1, 3, -3, 1], row * splines + k);
      unc[row] = roughness;
    }
    profile = new LearnedProfile(solveLeastSquares(design, count, splines, values, unc).coefficients as Float64Array);
  }
  return profile;
}

/** The learned shape; null where too few lines show it. */
export function learnShape(
  prepared: Prepared,
  candidates: readonly StrongLine[],
  start: ShapeInUse,
): ShapeInUse | null {
  // Two lines in one are broader than the others and would spoil the shape.
  const usual = median(candidates.map(({ group }) => group.members[0]!.width));
  const strong = candidates.filter(({ group }) => group.members[0]!.width < mostOfUsual * usual);
  if (strong.length < fewestToLearn) return null;
  const all = learn(
    prepared,
    strong,
    start.profile,
    start.held === null ? null : { value: start.held.value, unc: 0 },
    rounds,
  );
  if (all === null) return null;
  const halves = [0, 1].map((half) =>
    learn(
      prepared,
      strong.filter((_, k) => k % 2 === half),
      all,
      null,
      1,
    ),
  );
  let [squares, count] = [0, 0];
  for (const line of strong) {
    const [one, other] = halves.map((half) => (half === null ? null : fitStrong(prepared, line, half, null)));
    if (!one || !other) continue;
    const off = (one.lines[0]!.centre - other.lines[0]!.centre) / one.lines[0]!.fwhm;
    squares += off * off;
    count += 1;
  }
  if (count === 0) return null;
  return {
    name: "empirical",
    profile: all,
    held: null,
    knownFor: () => null,
    positionShare: Math.sqrt(squares / count),
    report: {
      name: "empirical",
      chosenBy: "setup",
      parameter: null,
      lines: strong.length,
      note: `The lines are fitted with the shape learned from the capture's ${strong.length} strong lines.`,
    },
  };
}
