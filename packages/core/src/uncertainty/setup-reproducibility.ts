/**
 * Set-up reproducibility of a configuration from its own checks: what its errors scatter between checks beyond what each check's own
 * uncertainty explains. Successive differences are used (J. von Neumann et al., Ann. Math. Stat. 12 (1941) 153), so that a slow drift,
 * which is no scatter, does not count: s² = sum of (e_i+1 - e_i)² / (2 (n - 1)), with 2 (n - 1)² / (3 n - 4) degrees of freedom.
 */
export interface HistoryPoint {
  /** Error at mid-range of one check, nm. */
  errorNm: number;
  /** Its standard uncertainty without set-up reproducibility, nm; 0 = not known. */
  ownUncNm: number;
  /** True where an adjustment or a service lies between this check and the one before: that difference tells nothing. */
  isAfterAdjustment?: boolean;
}

export interface SetupReproducibility {
  valueNm: number;
  degreesOfFreedom: number;
  /** Scatter between checks before each check's own uncertainty was taken off, nm. */
  scatterNm: number;
  checks: number;
}

/** The configuration's own scatter counts from this many checks on. */
const fewestChecks = 8;

/**
 * @param points  in order of time
 * @returns null below eight checks, or where adjustments leave fewer than seven differences. The value is never below a tenth of
 *          the scatter itself: uncertainties that seem to explain all of it may be stated too large
 */
export function setupReproducibilityOf(points: readonly HistoryPoint[]): SetupReproducibility | null {
  let squares = 0;
  let own = 0;
  let count = 0;
  for (let i = 1; i < points.length; i++) {
    const here = points[i]!;
    if (here.isAfterAdjustment === true) continue;
    const before = points[i - 1]!;
    const difference = here.errorNm - before.errorNm;
    squares += difference * difference;
    own += here.ownUncNm * here.ownUncNm + before.ownUncNm * before.ownUncNm;
    count += 1;
  }
  if (points.length < fewestChecks || count < fewestChecks - 1) return null;
  const variance = squares / (2 * count);
  const beyond = Math.max(variance - own / (2 * count), variance / 100);
  const n = count + 1;
  return {
    valueNm: Math.sqrt(beyond),
    degreesOfFreedom: (2 * (n - 1) * (n - 1)) / (3 * n - 4),
    scatterNm: Math.sqrt(variance),
    checks: points.length,
  };
}
