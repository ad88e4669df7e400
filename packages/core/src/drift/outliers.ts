/**
 * Outliers of a sample that is otherwise normal. Any unit.
 *
 * Grubbs           G = largest |x - mean| / s against ((n-1)/sqrt(n)) sqrt(t² / (n - 2 + t²)), t = Student quantile with n - 2 degrees
 *                  of freedom at alpha/(2n), or alpha/n where one side alone is looked at (F. E. Grubbs, Technometrics 11 (1969) 1)
 * Generalised ESD  the same statistic after taking out one value after the other; the number of outliers is the largest i whose statistic
 *                  exceeds its critical value (B. Rosner, Technometrics 25 (1983) 165; NIST/SEMATECH e-Handbook 1.3.5.17.3)
 */
import { studentQuantile } from "../numeric/distributions.ts";

export interface GrubbsTest {
  statistic: number;
  critical: number;
  /** Index of the value farthest from the mean. */
  index: number;
  isOutlier: boolean;
}

/** @param sides  1: only the farthest value's own side is looked at; 2: both */
export function grubbsTest(values: readonly number[], alpha: number, sides: 1 | 2): GrubbsTest {
  const { statistic, index } = farthest(values);
  const critical = criticalValue(values.length, alpha / (sides * values.length));
  return { statistic, critical, index, isOutlier: statistic > critical };
}

export interface EsdTest {
  statistics: number[];
  criticals: number[];
  /** Indices of the outliers, farthest first. */
  outliers: number[];
}

/** @param most  largest number of outliers looked for */
export function generalizedEsd(values: readonly number[], most: number, alpha: number): EsdTest {
  const left = values.map((value, index) => ({ value, index }));
  const statistics: number[] = [];
  const criticals: number[] = [];
  const taken: number[] = [];
  let found = 0;
  for (let i = 1; i <= most && left.length > 2; i++) {
    const { statistic, index } = farthest(left.map((one) => one.value));
    const critical = criticalValue(left.length, alpha / (2 * left.length));
    statistics.push(statistic);
    criticals.push(critical);
    taken.push(left[index]!.index);
    left.splice(index, 1);
    if (statistic > critical) found = i;
  }
  return { statistics, criticals, outliers: taken.slice(0, found) };
}

function farthest(values: readonly number[]): { statistic: number; index: number } {
  const n = values.length;
  let sum = 0;
  for (const value of values) sum += value;
  const mean = sum / n;
  let squares = 0;
  let index = 0;
  values.forEach((value, i) => {
    squares += (value - mean) * (value - mean);
    if (Math.abs(value - mean) > Math.abs(values[index]! - mean)) index = i;
  });
  const sd = Math.sqrt(squares / (n - 1));
  return { statistic: sd > 0 ? Math.abs(values[index]! - mean) / sd : 0, index };
}

function criticalValue(n: number, tail: number): number {
  const t = studentQuantile(1 - tail, n - 2);
  return ((n - 1) / Math.sqrt(n)) * Math.sqrt((t * t) / (n - 2 + t * t));
}
