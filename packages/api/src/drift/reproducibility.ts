/**
 * Set-up reproducibility from a configuration's own history: how much the error at mid-range scatters from check to check.
 *
 * Method    mean square of successive differences over 2, within runs that no event broke: a slow drift cancels out of it
 * Degrees   of freedom from the variance of that estimator for normal errors: a run of m differences adds (3m - 1) to
 *           sum(3m - 1) / M^2 = 2 / dof, M the differences in all (from the moments of squared differences)
 * Refuses   fewer than 8 checks
 */

/** Checks that a history needs before it speaks. */
export const leastHistory = 8;

/**
 * @param runs  error at mid-range, nm, in time order; a new run begins where an event broke the series
 * @returns null with too few checks
 */
export function reproducibilityOfRuns(
  runs: readonly (readonly number[])[],
): { reproducibilityNm: number; degreesOfFreedom: number } | null {
  const checkCount = runs.reduce((count, run) => count + run.length, 0);
  if (checkCount < leastHistory) return null;
  let squares = 0;
  let differences = 0;
  let spread = 0;
  for (const run of runs) {
    const steps = run.length - 1;
    if (steps < 1) continue;
    for (let i = 1; i < run.length; i += 1) squares += (run[i]! - run[i - 1]!) ** 2;
    differences += steps;
    spread += 3 * steps - 1;
  }
  // As many differences as checks in an unbroken series of the least length; a series broken in pieces tells less.
  if (differences < leastHistory - 2) return null;
  const reproducibilityNm = Math.sqrt(squares / (2 * differences));
  return reproducibilityNm > 0 ? { reproducibilityNm, degreesOfFreedom: (2 * differences ** 2) / spread } : null;
}
