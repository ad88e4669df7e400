/**
 * NIST StRD: what the core's least squares reach, as a table of digits for each set, start and parameter.
 *
 * Digits      -log10 of the relative difference to the certified value, at most 15; where the certified figure is 0, -log10 of what
 *             was found over the largest response
 * Nonlinear   `minimise` with analytic derivatives from both published starts, tolerance 1e-12
 * Linear      `solveLeastSquares` on the raw predictors; polynomials once more in Chebyshev's basis, converted to powers. Fitted
 *             values and residual standard deviation are compared with those of the certified estimates in exact rational
 *             arithmetic on the printed decimals, fitted values also with those of the exact solution (exact-rationals.ts)
 * Mind that Gauss1 to Gauss3 write exp(-((x - b4)/b5)²), so that b5 = sqrt(2) standard deviations.
 */
import { readFileSync } from "node:fs";
import {
  atan,
  chebyshevArgument,
  chebyshevToPowers,
  cos,
  exp,
  fillChebyshevBasis,
  log,
  minimise,
  PI,
  pow,
  sin,
  solveLeastSquares,
  type LeastSquaresProblem,
} from "../../../packages/core/src/numeric/index.ts";
import { exactLeastSquares, exactPolynomialFit } from "./exact-rationals.ts";

export interface StrdSet {
  about: { set: string; reachedInDoublePrecision: { start1: number; start2: number; rawPowers: number } };
  starts: number[][];
  certified: {
    estimates: number[];
    standardDeviations: number[];
    residualSumOfSquares: number;
    residualStandardDeviation: number;
    degreesOfFreedom: number;
  };
  x: number[] | number[][];
  y: number[];
}

export interface StrdRow {
  set: string;
  /** `start 1`, `start 2`, `raw` or `Chebyshev`. */
  way: string;
  outcome: string;
  degreesOfFreedom: number;
  parameterDigits: number[];
  standardErrorDigits: number[];
  residualSdDigits: number;
  /** Of the worst fitted value; null for nonlinear sets. */
  fittedDigits: number | null;
  /** The same against the exact solution of the printed data: free of the rounding of the certified estimates. Null as above. */
  fittedExactDigits: number | null;
  /** What the set's record says a double-precision fit reaches, or 15. */
  recordedDigits: number;
}

export function readStrd(name: string): StrdSet {
  return JSON.parse(
    readFileSync(new URL(`../../fixtures/strd/${name.toLowerCase()}.json`, import.meta.url), "utf8"),
  ) as StrdSet;
}

/** Digits agreed with a certified value; with a certified 0 those of the value over `scale`. */
export function digitsAgreed(value: number, certified: number, scale: number): number {
  const difference = certified === 0 ? value / scale : value / certified - 1;
  return Math.min(15, -Math.log10(Math.abs(difference) || 1e-16));
}

/** Value of a model at x; its gradient by the parameters goes into g. */
type Model = (b: Float64Array, x: number, g: Float64Array) => number;

const twoPeaksOnDecay: Model = (b, x, g) => {
  const decay = exp(-b[1]! * x);
  g[0] = decay;
  g[1] = -x * b[0]! * decay;
  let sum = b[0]! * decay;
  for (const at of [2, 5]) {
    const u = (x - b[at + 1]!) / b[at + 2]!;
    const shape = exp(-u * u);
    g[at] = shape;
    g[at + 1] = (2 * b[at]! * shape * u) / b[at + 2]!;
    g[at + 2] = (2 * b[at]! * shape * u * u) / b[at + 2]!;
    sum += b[at]! * shape;
  }
  return sum;
};

const onePeakByArea: Model = (b, x, g) => {
  const u = (x - b[2]!) / b[1]!;
  const shape = exp(-0.5 * u * u) / b[1]!;
  g[0] = shape;
  g[1] = (b[0]! * shape * (u * u - 1)) / b[1]!;
  g[2] = (b[0]! * shape * u) / b[1]!;
  return b[0]! * shape;
};

const threeDecays: Model = (b, x, g) => {
  let sum = 0;
  for (const at of [0, 2, 4]) {
    const decay = exp(-b[at + 1]! * x);
    g[at] = decay;
    g[at + 1] = -x * b[at]! * decay;
    sum += b[at]! * decay;
  }
  return sum;
};

const quadraticOverQuadratic: Model = (b, x, g) => {
  const top = x * x + b[1]! * x;
  const bottom = x * x + b[2]! * x + b[3]!;
  const value = (b[0]! * top) / bottom;
  g[0] = top / bottom;
  g[1] = (b[0]! * x) / bottom;
  g[2] = (-value * x) / bottom;
  g[3] = -value / bottom;
  return value;
};

const cubicOverCubic: Model = (b, x, g) => {
  const top = b[0]! + x * (b[1]! + x * (b[2]! + x * b[3]!));
  const bottom = 1 + x * (b[4]! + x * (b[5]! + x * b[6]!));
  const value = top / bottom;
  for (let j = 0, power = 1; j < 4; j++, power *= x) g[j] = power / bottom;
  for (let j = 4, power = x; j < 7; j++, power *= x) g[j] = (-value * power) / bottom;
  return value;
};

const threeCycles: Model = (b, x, g) => {
  const year = (2 * PI * x) / 12;
  g[0] = 1;
  g[1] = cos(year);
  g[2] = sin(year);
  let sum = b[0]! + b[1]! * g[1]! + b[2]! * g[2]!;
  for (const at of [3, 6]) {
    const angle = (2 * PI * x) / b[at]!;
    g[at + 1] = cos(angle);
    g[at + 2] = sin(angle);
    g[at] = (angle / b[at]!) * (b[at + 1]! * g[at + 2]! - b[at + 2]! * g[at + 1]!);
    sum += b[at + 1]! * g[at + 1]! + b[at + 2]! * g[at + 2]!;
  }
  return sum;
};

const sigmoid: Model = (b, x, g) => {
  const growth = exp(b[1]! - b[2]! * x);
  const base = 1 + growth;
  const shape = pow(base, -1 / b[3]!);
  const value = b[0]! * shape;
  g[0] = shape;
  g[1] = (-value * growth) / (b[3]! * base);
  g[2] = -x * g[1]!;
  g[3] = (value * log(base)) / (b[3]! * b[3]!);
  return value;
};

const lineAndArcTangent: Model = (b, x, g) => {
  const distance = x - b[3]!;
  const square = distance * distance + b[2]! * b[2]!;
  g[0] = 1;
  g[1] = -x;
  g[2] = -distance / (square * PI);
  g[3] = -b[2]! / (square * PI);
  return b[0]! - b[1]! * x - atan(b[2]! / distance) / PI;
};

const shiftedPower: Model = (b, x, g) => {
  const base = b[1]! + x;
  const shape = pow(base, -1 / b[2]!);
  const value = b[0]! * shape;
  g[0] = shape;
  g[1] = -value / (b[2]! * base);
  g[2] = (value * log(base)) / (b[2]! * b[2]!);
  return value;
};

const NONLINEAR: [string, Model][] = [
  ["Gauss1", twoPeaksOnDecay],
  ["Gauss2", twoPeaksOnDecay],
  ["Gauss3", twoPeaksOnDecay],
  ["Lanczos3", threeDecays],
  ["MGH09", quadraticOverQuadratic],
  ["Thurber", cubicOverCubic],
  ["Hahn1", cubicOverCubic],
  ["ENSO", threeCycles],
  ["Rat43", sigmoid],
  ["Eckerle4", onePeakByArea],
  ["Roszman1", lineAndArcTangent],
  ["Bennett5", shiftedPower],
];
const LINEAR = ["Norris", "Pontius", "Filip", "Longley", "Wampler1", "Wampler2", "Wampler3", "Wampler4", "Wampler5"];

function problemOf(set: StrdSet, model: Model): LeastSquaresProblem {
  const n = set.certified.estimates.length;
  const gradient = new Float64Array(n);
  return {
    parameterCount: n,
    residualCount: set.y.length,
    evaluate(b, residuals, jacobian) {
      for (let i = 0; i < set.y.length; i++) {
        residuals[i] = model(b, set.x[i] as number, gradient) - set.y[i]!;
        if (!Number.isFinite(residuals[i])) return false;
        jacobian.set(gradient, i * n);
      }
      return true;
    },
  };
}

function nonlinearRow(set: StrdSet, model: Model, start: 0 | 1): StrdRow {
  const fit = minimise(problemOf(set, model), set.starts[start]!, { tolerance: 1e-12, maxIterations: 2000 });
  const { estimates, standardDeviations, residualStandardDeviation } = set.certified;
  const n = estimates.length;
  const variance = fit.sumOfSquares / fit.degreesOfFreedom;
  return {
    set: set.about.set,
    way: `start ${start + 1}`,
    outcome: `${fit.outcome} after ${fit.iterations}`,
    degreesOfFreedom: fit.degreesOfFreedom,
    parameterDigits: estimates.map((certified, j) => digitsAgreed(fit.parameters[j]!, certified, 1)),
    standardErrorDigits: standardDeviations.map((certified, j) =>
      fit.covariance ? digitsAgreed(Math.sqrt(fit.covariance[j * n + j]! * variance), certified, 1) : 0,
    ),
    residualSdDigits: digitsAgreed(Math.sqrt(variance), residualStandardDeviation, 1),
    fittedDigits: null,
    fittedExactDigits: null,
    recordedDigits: set.about.reachedInDoublePrecision[start === 0 ? "start1" : "start2"],
  };
}

function linearRow(set: StrdSet, isOrthogonal: boolean): StrdRow {
  const { estimates, standardDeviations } = set.certified;
  const m = set.y.length;
  const n = estimates.length;
  const design = new Float64Array(m * n);
  const flat = set.x as number[];
  const [first, last] = [Math.min(...flat), Math.max(...flat)];
  set.x.forEach((x, i) => {
    if (Array.isArray(x)) design.set([1, ...x], i * n);
    else if (isOrthogonal) fillChebyshevBasis(design, i * n, n - 1, chebyshevArgument(x, first, last));
    else for (let j = 0, power = 1; j < n; j++, power *= x) design[i * n + j] = power;
  });
  const fit = solveLeastSquares(design, m, n, set.y, null);
  const coefficients = isOrthogonal ? chebyshevToPowers(fit.coefficients, first, last) : fit.coefficients;
  const exact = exactPolynomialFit(set.x, set.y, estimates);
  const largest = Math.max(...set.y.map(Math.abs));
  const worstFitted = (fitted: number[]): number =>
    Math.min(...set.y.map((y, i) => digitsAgreed(y - fit.residuals[i]!, fitted[i]!, largest)));
  return {
    set: set.about.set,
    way: isOrthogonal ? "Chebyshev" : "raw",
    outcome: fit.rank === n ? "solved" : `rank ${fit.rank} of ${n}`,
    degreesOfFreedom: fit.degreesOfFreedom,
    parameterDigits: estimates.map((certified, j) => digitsAgreed(coefficients[j]!, certified, largest)),
    // Standard errors are the coefficients' own: in Chebyshev's basis they are others than the certified ones.
    standardErrorDigits: isOrthogonal
      ? []
      : standardDeviations.map((certified, j) =>
          digitsAgreed(Math.sqrt(fit.covariance[j * n + j]!), certified, largest),
        ),
    residualSdDigits: digitsAgreed(fit.residualSd!, exact.residualSd, largest),
    fittedDigits: worstFitted(exact.fitted),
    fittedExactDigits: Array.isArray(set.x[0]) ? null : worstFitted(exactLeastSquares(flat, set.y, n)),
    recordedDigits: set.about.reachedInDoublePrecision.rawPowers,
  };
}

/** Every set of the fixtures, each by each of its ways. */
export function strdTable(): StrdRow[] {
  const rows: StrdRow[] = [];
  for (const [name, model] of NONLINEAR)
    for (const start of [0, 1] as const) rows.push(nonlinearRow(readStrd(name), model, start));
  for (const name of LINEAR) {
    const set = readStrd(name);
    rows.push(linearRow(set, false));
    if (!Array.isArray(set.x[0])) rows.push(linearRow(set, true));
  }
  return rows;
}

/** The table as lines of text, digits to one decimal, for reports and test output. */
export function strdTableText(rows: readonly StrdRow[]): string {
  const shown = (values: readonly number[]): string => values.map((value) => value.toFixed(1)).join(" ");
  const lines = rows.map((row) =>
    [
      row.set.padEnd(9),
      row.way.padEnd(9),
      `parameters ${shown(row.parameterDigits)}`,
      row.standardErrorDigits.length > 0 ? `standard errors ${shown(row.standardErrorDigits)}` : "",
      `residual SD ${row.residualSdDigits.toFixed(1)}`,
      row.fittedDigits === null ? "" : `worst fitted value ${row.fittedDigits.toFixed(1)}`,
      row.fittedExactDigits === null ? "" : `of the exact solution ${row.fittedExactDigits.toFixed(1)}`,
      `recorded ${row.recordedDigits}`,
      row.outcome,
    ]
      .filter((cell) => cell !== "")
      .join("  "),
  );
  return ["Digits agreed with NIST StRD", ...lines].join("\n");
}
