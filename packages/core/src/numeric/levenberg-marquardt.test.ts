import { describe, expect, test } from "vitest";
import { minimise, type LeastSquaresProblem } from "./levenberg-marquardt.ts";

/** H. H. Rosenbrock, Comput. J. 3 (1960) 175: minimum 0 at (1, 1). */
const valley: LeastSquaresProblem = {
  parameterCount: 2,
  residualCount: 2,
  evaluate(p, r, j) {
    r[0] = 10 * (p[1]! - p[0]! * p[0]!);
    r[1] = 1 - p[0]!;
    j.set([-20 * p[0]!, 10, -1, 0]);
    return true;
  },
};

describe("minimise", () => {
  test("finds Rosenbrock's minimum at (1, 1) from (-1.2, 1)", () => {
    const fit = minimise(valley, [-1.2, 1]);
    expect(fit.outcome).toBe("converged");
    expect(fit.parameters[0]).toBeCloseTo(1, 10);
    expect(fit.parameters[1]).toBeCloseTo(1, 10);
  });
  test("a linear problem is solved in one step, its covariance is (J'J)^-1: mean of 3 values, 1/3", () => {
    const values = [1, 2, 6];
    const fit = minimise(
      {
        parameterCount: 1,
        residualCount: 3,
        evaluate(p, r, j) {
          values.forEach((v, i) => {
            r[i] = p[0]! - v;
            j[i] = 1;
          });
          return true;
        },
      },
      [100],
    );
    expect(fit.parameters[0]).toBeCloseTo(3, 12);
    expect(fit.covariance![0]).toBeCloseTo(1 / 3, 12);
    expect(fit.sumOfSquares).toBeCloseTo(4 + 1 + 9, 12);
    expect(fit.iterations).toBeLessThanOrEqual(2);
  });
  test("parameters that are not allowed shorten the step, never enter the answer", () => {
    const fit = minimise(
      {
        parameterCount: 1,
        residualCount: 2,
        evaluate(p, r, j) {
          if (p[0]! <= 0) return false;
          const root = Math.sqrt(p[0]!);
          r[0] = root - 2;
          r[1] = 2 * (root - 2);
          j.set([0.5 / root, 1 / root]);
          return true;
        },
      },
      [100],
    );
    expect(fit.parameters[0]).toBeCloseTo(4, 9);
  });
  test("a parameter without effect leaves no covariance, and the rest is still fitted", () => {
    const fit = minimise(
      {
        parameterCount: 2,
        residualCount: 3,
        evaluate(p, r, j) {
          [1, 2, 3].forEach((v, i) => {
            r[i] = p[0]! - v;
            j[2 * i] = 1;
            j[2 * i + 1] = 0;
          });
          return true;
        },
      },
      [10, 7],
    );
    expect(fit.covariance).toBeNull();
    expect(fit.parameters[0]).toBeCloseTo(2, 9);
  });
  test("a start that is not allowed is said to be one", () => {
    expect(minimise({ parameterCount: 1, residualCount: 1, evaluate: () => false }, [1]).outcome).toBe("bad-start");
    expect(() => minimise(valley, [1])).toThrow(RangeError);
  });
});
