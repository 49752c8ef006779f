import type { Chance, PercentilesByHour } from './outlook-types.ts';

/** A share of replications with its Monte Carlo standard error; the error never is 0, not even when nothing was seen. */
export function chanceOf(count: number, replications: number): Chance {
  const chance = count / replications;
  const held = (count + 1) / (replications + 2);
  return { chance, se: Math.sqrt((held * (1 - held)) / replications) };
}

function totalOf(counts: ArrayLike<number>): number {
  let total = 0;
  for (let n = 0; n < counts.length; n += 1) total += counts[n];
  return total;
}

/** P(N > bound) from counts of replications. */
export function chanceAbove(counts: ArrayLike<number>, bound: number): Chance {
  let above = 0;
  for (let n = Math.max(0, bound + 1); n < counts.length; n += 1) above += counts[n];
  return chanceOf(above, totalOf(counts));
}

/** Smallest n with at least a share p of replications at or below it. */
export function histogramQuantile(counts: ArrayLike<number>, p: number): number {
  // A share of a whole number of replications may come out a rounding error above the whole number meant.
  const target = p * totalOf(counts) * (1 - 4 * Number.EPSILON);
  let sum = 0;
  for (let n = 0; n < counts.length; n += 1) {
    sum += counts[n];
    if (sum >= target && sum > 0) return n;
  }
  return counts.length - 1;
}

/** Smallest number of beds with P(N > beds) at most a risk. */
export function smallestBeds(counts: ArrayLike<number>, risk: number): number {
  const allowed = risk * totalOf(counts) * (1 + 4 * Number.EPSILON);
  let above = 0;
  for (let n = counts.length - 1; n >= 0; n -= 1) {
    above += counts[n];
    if (above > allowed) return n;
  }
  return 0;
}

function meanOf(counts: ArrayLike<number>): number {
  let sum = 0;
  for (let n = 1; n < counts.length; n += 1) sum += n * counts[n];
  return sum / totalOf(counts);
}

/** Percentiles and means of a histogram an hour. */
export function percentilesOf(laws: readonly ArrayLike<number>[]): PercentilesByHour {
  const at = (p: number): number[] => laws.map((law) => histogramQuantile(law, p));
  return {
    p5: at(0.05),
    p10: at(0.1),
    p25: at(0.25),
    p50: at(0.5),
    p75: at(0.75),
    p90: at(0.9),
    p95: at(0.95),
    mean: laws.map(meanOf),
  };
}
