/** Real captures with their hand-made truth, and the plain unweighted polynomial fit of that truth which the core is held to. */
import fs from "node:fs";
import path from "node:path";
import { readCapture, type Spectrum } from "../../../packages/core/src/index.ts";
import { chebyshevToPowers, fillChebyshevBasis, solveLeastSquares } from "../../../packages/core/src/numeric/index.ts";

export interface TruthLine {
  /** In the unit of `Spectrum.positions`. */
  position: number;
  wavelengthNm: number;
  fwhm: number;
  flags: string[];
  inFit: boolean;
}

export interface RealCapture {
  name: string;
  elements: string[];
  spectrum: Spectrum;
  truth: TruthLine[];
}

const fixtures = path.resolve(import.meta.dirname, "../../fixtures/captures");
/** The two mercury captures carry no licence: they are measured where they lie beside the project, and never copied into it. */
const beside = path.resolve(import.meta.dirname, "../../../../shared/captures");

export const neonSeries = fs
  .readdirSync(path.join(fixtures, "neon-series"))
  .filter((name) => name.endsWith(".csv") && !name.endsWith(".truth.csv"))
  .map((name) => `neon-series/${name}`)
  .sort();

export const mercuryCaptures = ["hg-ar-array-saturated.txt", "hg-array-ultraviolet.txt"];

export function fileOf(name: string): string {
  return path.join(mercuryCaptures.includes(name) ? beside : fixtures, name);
}

export function isPresent(name: string): boolean {
  return fs.existsSync(fileOf(name));
}

export function loadCapture(name: string, elements: string[]): RealCapture {
  const file = fileOf(name);
  const read = readCapture(fs.readFileSync(file), name);
  if (read.outcome === "refused") throw new Error(read.reason);
  const perUnit = read.facts.axisUnit === "Å" ? 0.1 : 1;
  const truth = fs
    .readFileSync(`${file}.truth.csv`, "utf8")
    .trim()
    .split("\n")
    .slice(1)
    .map((row) => row.split(","))
    .map((cells) => ({
      position: Number(cells[0]) * perUnit,
      wavelengthNm: Number(cells[1]),
      fwhm: Number(cells[4]) * perUnit,
      flags: cells[5] === "" ? [] : cells[5]!.split(" "),
      inFit: cells[6] === "1",
    }));
  return { name, elements, spectrum: read.spectrum, truth };
}

interface Point {
  position: number;
  wavelengthNm: number;
}

export interface PolynomialFit {
  degree: number;
  /** nm, ascending powers of the position. */
  coefficients: number[];
  leaveOneOutRmsNm: number;
}

/** Unweighted polynomial through the points; each line is left out by a fit without it, not by a formula. */
export function fitPolynomial(points: Point[], degree: number): PolynomialFit {
  const low = Math.min(...points.map((one) => one.position));
  const high = Math.max(...points.map((one) => one.position));
  const solve = (kept: Point[]): number[] => {
    const n = degree + 1;
    const design = new Float64Array(kept.length * n);
    kept.forEach((one, i) => fillChebyshevBasis(design, i * n, degree, argument(one.position, low, high)));
    const fit = solveLeastSquares(
      design,
      kept.length,
      n,
      Float64Array.from(kept, (one) => one.wavelengthNm),
      null,
    );
    return Array.from(chebyshevToPowers(fit.coefficients, low, high));
  };
  let sum = 0;
  points.forEach((one, i) => {
    const left = one.wavelengthNm - evaluate(solve(points.filter((_, k) => k !== i)), one.position);
    sum += left * left;
  });
  return { degree, coefficients: solve(points), leaveOneOutRmsNm: Math.sqrt(sum / points.length) };
}

const argument = (position: number, low: number, high: number): number => (2 * position - low - high) / (high - low);

export function evaluate(coefficients: number[], position: number): number {
  return coefficients.reduceRight((value, coefficient) => value * position + coefficient, 0);
}

/** The best order under the cap: degree 5 at most, and two lines more than coefficients. */
export function bestPolynomial(points: Point[]): PolynomialFit {
  const fits = [1, 2, 3, 4, 5]
    .filter((degree) => points.length >= degree + 3)
    .map((degree) => fitPolynomial(points, degree));
  return fits.reduce((best, fit) => (fit.leaveOneOutRmsNm < best.leaveOneOutRmsNm ? fit : best));
}
