import { checkNonNegative, checkProbability } from './check.ts';
import { deviancePart, logTwoPi, stirlingError } from './log-gamma.ts';
import { normalQuantile } from './normal.ts';
import type { RandomStream } from './random.ts';
import { smallestCount } from './smallest-count.ts';

/** ln P(N = n) for whole n ≥ 0 and mean ≥ 0, unchecked. */
function logPmf(n: number, mean: number): number {
  if (mean === 0) return n === 0 ? 0 : -Infinity;
  if (n === 0) return -mean;
  return -stirlingError(n) - deviancePart(n, mean, n - mean) - 0.5 * (logTwoPi + Math.log(n));
}

function checkWhole(n: number): void {
  if (!Number.isInteger(n)) throw new RangeError(`n must be a whole number, got ${n}`);
}

/**
 * ln P(N = n) for a Poisson count: −mean + n ln mean − ln n!, by Loader's (2000) saddle-point form, which keeps
 * 10⁻¹³ at any mean. −∞ below 0. @throws RangeError on a fractional n or a bad mean.
 */
export function poissonLogPmf(n: number, mean: number): number {
  checkWhole(n);
  checkNonNegative('mean', mean);
  return n < 0 ? -Infinity : logPmf(n, mean);
}

/** P(N = n) for a Poisson count. */
export function poissonPmf(n: number, mean: number): number {
  return Math.exp(poissonLogPmf(n, mean));
}

/** P(N ≤ n), n < mean: sums downwards from n, where the terms are largest. */
function sumDown(n: number, mean: number): number {
  let term = Math.exp(logPmf(n, mean));
  let sum = term;
  for (let k = n; k > 0 && term > sum * 1e-18; k -= 1) {
    term *= k / mean;
    sum += term;
  }
  return sum;
}

/** P(N > n), n ≥ mean − 1: sums upwards. */
function sumUp(n: number, mean: number): number {
  let term = Math.exp(logPmf(n + 1, mean));
  let sum = term;
  for (let k = n + 2; term > sum * 1e-18; k += 1) {
    term *= mean / k;
    sum += term;
  }
  return sum;
}

/** P(N ≤ n) for a Poisson count; a fractional n is rounded down. Relative error about 10⁻¹³ in both tails. Cost: O(√mean). */
export function poissonCdf(n: number, mean: number): number {
  checkNonNegative('mean', mean);
  if (Number.isNaN(n)) throw new RangeError('n must be a number, got NaN');
  const whole = Math.floor(n);
  if (whole < 0) return 0;
  if (mean === 0 || whole === Infinity) return 1;
  return whole < mean ? Math.min(1, sumDown(whole, mean)) : 1 - sumUp(whole, mean);
}

/** P(N > n) for a Poisson count, right in its own tail. */
export function poissonExceedance(n: number, mean: number): number {
  checkNonNegative('mean', mean);
  if (Number.isNaN(n)) throw new RangeError('n must be a number, got NaN');
  const whole = Math.floor(n);
  if (whole < 0) return 1;
  if (mean === 0 || whole === Infinity) return 0;
  return whole < mean - 1 ? Math.max(0, 1 - sumDown(whole, mean)) : Math.min(1, sumUp(whole, mean));
}

/**
 * The smallest n with P(N ≤ n) ≥ p for a Poisson count; ∞ at p = 1. A p that equals a value of the distribution
 * function to 2 · 10⁻¹⁴ counts as equal. @throws RangeError on a bad p or mean. Cost: a few distribution functions.
 */
export function poissonQuantile(p: number, mean: number): number {
  checkProbability('p', p);
  checkNonNegative('mean', mean);
  if (mean === 0 || p === 0) return 0;
  if (p === 1) return Infinity;
  const z = normalQuantile(p);
  const guess = mean + z * Math.sqrt(mean) + (z * z - 1) / 6 - 0.5;
  return smallestCount(p, Math.ceil(guess), (n) => poissonCdf(n, mean));
}

/**
 * A Poisson draw, exact at any mean: below 10 by inversion (sequential search), from 10 on by PTRS, transformed
 * rejection with squeeze (Hörmann 1993, Insurance: Mathematics and Economics 12, 39).
 * @throws RangeError unless mean is finite and not negative.
 */
export function drawPoisson(stream: RandomStream, mean: number): number {
  checkNonNegative('mean', mean);
  return mean < 10 ? drawBySearch(stream, mean) : drawByRejection(stream, mean);
}

function drawBySearch(stream: RandomStream, mean: number): number {
  if (mean === 0) return 0;
  let left = stream.uniform();
  let p = Math.exp(-mean);
  let n = 0;
  while (left > p) {
    left -= p;
    n += 1;
    p *= mean / n;
    // What is left is rounding: no probability lies beyond.
    if (p < 1e-18 && n > mean) break;
  }
  return n;
}

function drawByRejection(stream: RandomStream, mean: number): number {
  const b = 0.931 + 2.53 * Math.sqrt(mean);
  const a = -0.059 + 0.02483 * b;
  const inverseAlpha = 1.1239 + 1.1328 / (b - 3.4);
  const squeeze = 0.9277 - 3.6224 / (b - 2);
  for (;;) {
    const u = stream.uniform() - 0.5;
    const v = stream.uniform();
    const us = 0.5 - Math.abs(u);
    const n = Math.floor(((2 * a) / us + b) * u + mean + 0.43);
    if (us >= 0.07 && v <= squeeze) return n;
    if (n < 0 || (us < 0.013 && v > us)) continue;
    if (Math.log((v * inverseAlpha) / (a / (us * us) + b)) <= logPmf(n, mean)) return n;
  }
}
