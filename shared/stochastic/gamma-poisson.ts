import { checkNonNegative, checkProbability } from './check.ts';
import { drawGamma } from './gamma.ts';
import { deviancePart, logTwoPi, stirlingError } from './log-gamma.ts';
import { normalQuantile } from './normal.ts';
import { drawPoisson, poissonCdf, poissonExceedance, poissonLogPmf, poissonQuantile } from './poisson.ts';
import type { RandomStream } from './random.ts';
import { smallestCount } from './smallest-count.ts';

/**
 * The gamma–Poisson law (negative binomial): a Poisson count whose mean is m · W, W gamma with mean 1 and variance φ.
 * Mean m, variance m + φ m²; in the other parametrisation size r = 1/φ and prob 1/(1 + φ m). φ → 0 is Poisson.
 */

/** Below this φ the law cannot be told from Poisson, and 1/φ nears overflow. */
const poissonBelow = 1e-290;

/** ln P(N = n) for whole n ≥ 0, unchecked. */
function logPmf(n: number, mean: number, phi: number): number {
  if (mean === 0) return n === 0 ? 0 : -Infinity;
  if (n === 0) return -Math.log1p(mean * phi) / phi;
  const size = 1 / phi;
  const spread = 1 + mean * phi;
  const ratio = (1 + n * phi) / spread;
  const d = (n - mean) / spread;
  return (
    stirlingError(n + size) -
    stirlingError(size) -
    stirlingError(n) -
    deviancePart(size, size * ratio, -d) -
    deviancePart(n, mean * ratio, d) -
    0.5 * (Math.log1p(n * phi) + logTwoPi + Math.log(n))
  );
}

/**
 * ln P(N = n) for a gamma–Poisson count, in Loader's (2000) saddle-point form, written so that φ → 0 loses nothing.
 * Relative error of the probability about 10⁻¹³. −∞ below 0. @throws RangeError on a fractional n, a bad mean or φ.
 */
export function gammaPoissonLogPmf(n: number, mean: number, phi: number): number {
  checkNonNegative('phi', phi);
  if (phi < poissonBelow) return poissonLogPmf(n, mean);
  if (!Number.isInteger(n)) throw new RangeError(`n must be a whole number, got ${n}`);
  checkNonNegative('mean', mean);
  return n < 0 ? -Infinity : logPmf(n, mean, phi);
}

/** P(N = n) for a gamma–Poisson count. */
export function gammaPoissonPmf(n: number, mean: number, phi: number): number {
  return Math.exp(gammaPoissonLogPmf(n, mean, phi));
}

function sumDown(n: number, mean: number, phi: number): number {
  let term = Math.exp(logPmf(n, mean, phi));
  let sum = term;
  const spread = (1 + mean * phi) / mean;
  for (let k = n; k > 0; k -= 1) {
    const ratio = (k * spread) / (1 + (k - 1) * phi);
    term *= ratio;
    sum += term;
    // Terms may still rise towards the mode; once they fall they fall for good (the law is log-concave for φ ≤ 1, and
    // rises all the way to 0 for φ > 1).
    if (ratio < 1 && term < sum * 1e-18) break;
  }
  return sum;
}

function sumUp(n: number, mean: number, phi: number): number {
  let term = Math.exp(logPmf(n + 1, mean, phi));
  let sum = term;
  const spread = (1 + mean * phi) / mean;
  for (let k = n + 1; ; k += 1) {
    const ratio = (1 + k * phi) / ((k + 1) * spread);
    // The ratio of the terms still to come is at most the larger of this and its limit φ m / (1 + φ m).
    const bound = Math.max(ratio, phi / spread);
    if (term * bound <= sum * 1e-16 * (1 - bound)) break;
    term *= ratio;
    sum += term;
  }
  return sum;
}

/** P(N ≤ n) for a gamma–Poisson count; a fractional n is rounded down. Relative error about 10⁻¹². Cost: O(standard deviation). */
export function gammaPoissonCdf(n: number, mean: number, phi: number): number {
  checkNonNegative('phi', phi);
  if (phi < poissonBelow) return poissonCdf(n, mean);
  checkNonNegative('mean', mean);
  if (Number.isNaN(n)) throw new RangeError('n must be a number, got NaN');
  const whole = Math.floor(n);
  if (whole < 0) return 0;
  if (mean === 0 || whole === Infinity) return 1;
  return whole < mean ? Math.min(1, sumDown(whole, mean, phi)) : Math.max(0, 1 - sumUp(whole, mean, phi));
}

/** P(N > n) for a gamma–Poisson count, right in its own tail. */
export function gammaPoissonExceedance(n: number, mean: number, phi: number): number {
  checkNonNegative('phi', phi);
  if (phi < poissonBelow) return poissonExceedance(n, mean);
  checkNonNegative('mean', mean);
  if (Number.isNaN(n)) throw new RangeError('n must be a number, got NaN');
  const whole = Math.floor(n);
  if (whole < 0) return 1;
  if (mean === 0 || whole === Infinity) return 0;
  return whole < mean - 1 ? Math.max(0, 1 - sumDown(whole, mean, phi)) : Math.min(1, sumUp(whole, mean, phi));
}

/** The smallest n with P(N ≤ n) ≥ p for a gamma–Poisson count; ∞ at p = 1. @throws RangeError on a bad p, mean or φ. */
export function gammaPoissonQuantile(p: number, mean: number, phi: number): number {
  checkProbability('p', p);
  checkNonNegative('phi', phi);
  if (phi < poissonBelow) return poissonQuantile(p, mean);
  checkNonNegative('mean', mean);
  if (mean === 0 || p === 0) return 0;
  if (p === 1) return Infinity;
  const z = normalQuantile(p);
  const sd = Math.sqrt(mean * (1 + mean * phi));
  const skewness = (1 + 2 * mean * phi) / sd;
  const guess = Math.ceil(mean + sd * (z + (skewness * (z * z - 1)) / 6) - 0.5);
  return smallestCount(p, guess, (n) => gammaPoissonCdf(n, mean, phi));
}

/** A gamma–Poisson draw: a Poisson draw at a gamma mean. Exact. @throws RangeError on a bad mean or φ. */
export function drawGammaPoisson(stream: RandomStream, mean: number, phi: number): number {
  checkNonNegative('mean', mean);
  checkNonNegative('phi', phi);
  if (mean === 0 || phi < poissonBelow) return drawPoisson(stream, mean);
  return drawPoisson(stream, mean * phi * drawGamma(stream, 1 / phi));
}
