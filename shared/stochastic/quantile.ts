import { checkProbability } from './check.ts';

function checkSample(sorted: ArrayLike<number>): void {
  if (sorted.length === 0) throw new RangeError('the sample must not be empty');
}

/**
 * Sample quantile, type 7 of Hyndman & Fan (1996), the default of R and NumPy: linear between order statistics at
 * position (n − 1) p. @param sorted ascending values, not checked. @throws RangeError on an empty sample or a bad p.
 */
export function sampleQuantile(sorted: ArrayLike<number>, p: number): number {
  checkSample(sorted);
  checkProbability('p', p);
  const position = (sorted.length - 1) * p;
  const below = Math.floor(position);
  const above = Math.min(below + 1, sorted.length - 1);
  return sorted[below] + (position - below) * (sorted[above] - sorted[below]);
}

/**
 * The smallest value of the sample with at least a share p at or below it (type 1 of Hyndman & Fan): the convention
 * used for counts. @param sorted ascending values, not checked. @throws RangeError on an empty sample or a bad p.
 */
export function smallestQuantile(sorted: ArrayLike<number>, p: number): number {
  checkSample(sorted);
  checkProbability('p', p);
  const n = sorted.length;
  return sorted[Math.max(0, Math.ceil(n * p * (1 - 4 * Number.EPSILON)) - 1)];
}
