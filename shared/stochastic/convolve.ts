import { checkCount, checkLevel, checkNonNegative, checkProbability } from './check.ts';
import { binomialPmf } from './binomial.ts';
import { gammaPoissonPmf } from './gamma-poisson.ts';
import { poissonPmf } from './poisson.ts';

/**
 * A probability mass function as an array: pmf[n] = P(N = n) from n = 0 on. Arrays of unbounded laws end at the first
 * n past the mean beyond which less than `tail` is left, which is dropped (the sum is then 1 − tail at least).
 */
export type Pmf = Float64Array;

/** Probability left beyond the end of an array unless stated otherwise. */
export const defaultTail = 1e-14;

/** Fills an array outwards from its mode by the ratio of neighbours: no underflow at 0, one exponential. */
function fillFromMode(
  mode: number,
  atMode: number,
  ratioUp: (n: number) => number,
  ratioDown: (n: number) => number,
  limitRatio: number,
  tail: number,
): Pmf {
  const up = [atMode];
  let term = atMode;
  for (let n = mode; ; n += 1) {
    // What is left is at most a geometric series of this ratio or of the limit, whichever is larger.
    const ratio = ratioUp(n);
    const bound = Math.max(ratio, limitRatio);
    if (term * bound < tail * (1 - bound)) break;
    term *= ratio;
    up.push(term);
  }
  const pmf = new Float64Array(mode + up.length);
  pmf.set(up, mode);
  term = atMode;
  for (let n = mode; n > 0; n -= 1) {
    term *= ratioDown(n);
    pmf[n - 1] = term;
  }
  return pmf;
}

/**
 * The Poisson law as an array, ending where less than `tail` is left. @throws RangeError on a bad mean or tail.
 * Cost: O(mean + √mean).
 */
export function poissonPmfArray(mean: number, tail = defaultTail): Pmf {
  checkNonNegative('mean', mean);
  checkLevel('tail', tail);
  if (mean === 0) return Float64Array.of(1);
  const mode = Math.floor(mean);
  return fillFromMode(
    mode,
    poissonPmf(mode, mean),
    (n) => mean / (n + 1),
    (n) => n / mean,
    0,
    tail,
  );
}

/** The gamma–Poisson law (variance mean + φ mean²) as an array, ending where less than `tail` is left. */
export function gammaPoissonPmfArray(mean: number, phi: number, tail = defaultTail): Pmf {
  checkNonNegative('mean', mean);
  checkNonNegative('phi', phi);
  checkLevel('tail', tail);
  if (mean === 0) return Float64Array.of(1);
  const mode = phi < 1 ? Math.floor(mean * (1 - phi)) : 0;
  const spread = (1 + mean * phi) / mean;
  return fillFromMode(
    mode,
    gammaPoissonPmf(mode, mean, phi),
    (n) => (1 + n * phi) / ((n + 1) * spread),
    (n) => (n * spread) / (1 + (n - 1) * phi),
    phi / spread,
    tail,
  );
}

/** The binomial law of n trials of chance p as an array of n + 1, nothing cut off. @throws RangeError on a bad n or p. */
export function binomialPmfArray(n: number, p: number): Pmf {
  checkCount('n', n);
  checkProbability('p', p);
  const pmf = new Float64Array(n + 1);
  const mode = Math.min(n, Math.floor((n + 1) * p));
  pmf[mode] = binomialPmf(mode, n, p);
  const odds = p / (1 - p);
  for (let k = mode; k < n; k += 1) pmf[k + 1] = pmf[k] * (((n - k) * odds) / (k + 1));
  for (let k = mode; k > 0; k -= 1) pmf[k - 1] = pmf[k] * (k / ((n - k + 1) * odds));
  return pmf;
}

/**
 * The law of the sum of two independent counts. The result has a.length + b.length − 1 entries, less those at its end
 * that together hold under `tail` (0 keeps them all). @throws RangeError when a law is empty. Cost: a.length × b.length.
 */
export function convolve(a: Pmf, b: Pmf, tail = defaultTail): Pmf {
  if (a.length === 0 || b.length === 0) throw new RangeError('a law must have at least one entry');
  const [short, long] = a.length < b.length ? [a, b] : [b, a];
  const sum = new Float64Array(a.length + b.length - 1);
  for (let i = 0; i < short.length; i += 1) {
    const weight = short[i];
    if (weight === 0) continue;
    for (let j = 0; j < long.length; j += 1) sum[i + j] += weight * long[j];
  }
  let length = sum.length;
  let dropped = sum[length - 1];
  while (length > 1 && dropped < tail) {
    length -= 1;
    dropped += sum[length - 1];
  }
  return length === sum.length ? sum : sum.slice(0, length);
}

/** The law of the sum of any number of independent counts; that of none is certain 0. */
export function convolveAll(laws: readonly Pmf[], tail = defaultTail): Pmf {
  let sum: Pmf = Float64Array.of(1);
  for (const law of laws) sum = convolve(sum, law, tail);
  return sum;
}
