import { checkProbability } from './check.ts';
import type { Pmf } from './convolve.ts';

/** The smallest n with P(N ≤ n) ≥ p; the last entry where the array was cut short of p. @throws RangeError on a bad p or an empty array. */
export function pmfQuantile(pmf: Pmf, p: number): number {
  checkProbability('p', p);
  if (pmf.length === 0) throw new RangeError('pmf must have at least one entry');
  const target = p * (1 - 8 * Number.EPSILON);
  let cumulative = 0;
  for (let n = 0; n < pmf.length - 1; n += 1) {
    cumulative += pmf[n];
    if (cumulative >= target) return n;
  }
  return pmf.length - 1;
}

/** P(N > b), summed from the far end so that small chances keep their digits. */
export function pmfExceedance(pmf: Pmf, b: number): number {
  if (Number.isNaN(b)) throw new RangeError('b must be a number, got NaN');
  let sum = 0;
  for (let n = pmf.length - 1; n > b && n >= 0; n -= 1) sum += pmf[n];
  return sum;
}

/** The mean of a law as an array. */
export function pmfMean(pmf: Pmf): number {
  let sum = 0;
  for (let n = pmf.length - 1; n > 0; n -= 1) sum += n * pmf[n];
  return sum;
}

/** The variance of a law as an array. */
export function pmfVariance(pmf: Pmf): number {
  const mean = pmfMean(pmf);
  let sum = 0;
  for (let n = 0; n < pmf.length; n += 1) sum += (n - mean) * (n - mean) * pmf[n];
  return sum;
}
