import { checkCount, checkProbability } from './check.ts';
import { deviancePart, logTwoPi, stirlingError } from './log-gamma.ts';
import { normalQuantile } from './normal.ts';
import type { RandomStream } from './random.ts';
import { smallestCount } from './smallest-count.ts';

/** ln P(K = k) for whole 0 ≤ k ≤ n and 0 ≤ p ≤ 1, unchecked. */
function logPmf(k: number, n: number, p: number): number {
  if (p === 0) return k === 0 ? 0 : -Infinity;
  if (p === 1) return k === n ? 0 : -Infinity;
  if (k === 0) return n * Math.log1p(-p);
  if (k === n) return n * Math.log(p);
  const d = k - n * p;
  return (
    stirlingError(n) -
    stirlingError(k) -
    stirlingError(n - k) -
    deviancePart(k, n * p, d) -
    deviancePart(n - k, n * (1 - p), -d) -
    0.5 * (logTwoPi + Math.log(k) + Math.log1p(-k / n))
  );
}

function check(n: number, p: number): void {
  checkCount('n', n);
  checkProbability('p', p);
}

/**
 * ln P(K = k), K the number of successes in n trials of chance p, by Loader's (2000) saddle-point form; relative error
 * of the probability about 10⁻¹³. −∞ outside 0..n. @throws RangeError on a fractional k or n, or p outside 0..1.
 */
export function binomialLogPmf(k: number, n: number, p: number): number {
  check(n, p);
  if (!Number.isInteger(k)) throw new RangeError(`k must be a whole number, got ${k}`);
  return k < 0 || k > n ? -Infinity : logPmf(k, n, p);
}

/** P(K = k) for a binomial count. */
export function binomialPmf(k: number, n: number, p: number): number {
  return Math.exp(binomialLogPmf(k, n, p));
}

function sumDown(k: number, n: number, p: number): number {
  let term = Math.exp(logPmf(k, n, p));
  let sum = term;
  const odds = (1 - p) / p;
  for (let i = k; i > 0 && term > sum * 1e-18; i -= 1) {
    term *= (i * odds) / (n - i + 1);
    sum += term;
  }
  return sum;
}

function sumUp(k: number, n: number, p: number): number {
  let term = Math.exp(logPmf(k + 1, n, p));
  let sum = term;
  const odds = p / (1 - p);
  for (let i = k + 1; i < n && term > sum * 1e-18; i += 1) {
    term *= ((n - i) * odds) / (i + 1);
    sum += term;
  }
  return sum;
}

/** P(K ≤ k) for a binomial count; a fractional k is rounded down. Relative error about 10⁻¹³ in both tails. */
export function binomialCdf(k: number, n: number, p: number): number {
  check(n, p);
  if (Number.isNaN(k)) throw new RangeError('k must be a number, got NaN');
  const whole = Math.floor(k);
  if (whole < 0) return 0;
  if (whole >= n || p === 0) return 1;
  if (p === 1) return 0;
  return whole < n * p ? Math.min(1, sumDown(whole, n, p)) : Math.max(0, 1 - sumUp(whole, n, p));
}

/** P(K > k) for a binomial count, right in its own tail. */
export function binomialExceedance(k: number, n: number, p: number): number {
  check(n, p);
  if (Number.isNaN(k)) throw new RangeError('k must be a number, got NaN');
  const whole = Math.floor(k);
  if (whole < 0) return 1;
  if (whole >= n || p === 0) return 0;
  if (p === 1) return 1;
  return whole < n * p - 1 ? Math.max(0, 1 - sumDown(whole, n, p)) : Math.min(1, sumUp(whole, n, p));
}

/** The smallest k with P(K ≤ k) ≥ p for a binomial count of `n` trials of chance `chance`. @throws RangeError on bad input. */
export function binomialQuantile(p: number, n: number, chance: number): number {
  checkProbability('p', p);
  checkCount('n', n);
  checkProbability('chance', chance);
  if (p === 0 || n === 0 || chance === 0) return 0;
  if (p === 1 || chance === 1) return n;
  const z = normalQuantile(p);
  const sd = Math.sqrt(n * chance * (1 - chance));
  const guess = Math.ceil(n * chance + sd * z + ((1 - 2 * chance) * (z * z - 1)) / 6 - 0.5);
  return smallestCount(p, Math.min(n, guess), (k) => binomialCdf(k, n, chance));
}

/**
 * A binomial draw, exact: where the rarer outcome is expected fewer than 10 times by inversion (sequential search),
 * else by BTRS, transformed rejection with squeeze (Hörmann 1993, J. Statist. Comput. Simul. 46, 101).
 * @throws RangeError on a bad n or p.
 */
export function drawBinomial(stream: RandomStream, n: number, p: number): number {
  check(n, p);
  if (p > 0.5) return n - drawRarer(stream, n, 1 - p);
  return drawRarer(stream, n, p);
}

function drawRarer(stream: RandomStream, n: number, p: number): number {
  if (n === 0 || p === 0) return 0;
  return n * p < 10 ? drawBySearch(stream, n, p) : drawByRejection(stream, n, p);
}

function drawBySearch(stream: RandomStream, n: number, p: number): number {
  const odds = p / (1 - p);
  let left = stream.uniform();
  let term = Math.exp(n * Math.log1p(-p));
  let k = 0;
  while (left > term && k < n) {
    left -= term;
    term *= ((n - k) * odds) / (k + 1);
    k += 1;
    // What is left is rounding: no probability lies beyond.
    if (term < 1e-18 && k > n * p) break;
  }
  return k;
}

function drawByRejection(stream: RandomStream, n: number, p: number): number {
  const sd = Math.sqrt(n * p * (1 - p));
  const b = 1.15 + 2.53 * sd;
  const a = -0.0873 + 0.0248 * b + 0.01 * p;
  const centre = n * p + 0.5;
  const alpha = (2.83 + 5.1 / b) * sd;
  const squeeze = 0.92 - 4.2 / b;
  // Most draws are settled by the squeeze and never need the mode.
  let logMode = NaN;
  for (;;) {
    const u = stream.uniform() - 0.5;
    const v = stream.uniform();
    const us = 0.5 - Math.abs(u);
    const k = Math.floor(((2 * a) / us + b) * u + centre);
    if (us >= 0.07 && v <= squeeze) return k;
    if (k < 0 || k > n) continue;
    if (Number.isNaN(logMode)) logMode = logPmf(Math.floor((n + 1) * p), n, p);
    if (Math.log((v * alpha) / (a / (us * us) + b)) <= logPmf(k, n, p) - logMode) return k;
  }
}
