import { logGamma } from '../stochastic/log-gamma.ts';

const strengths = Array.from({ length: 25 }, (_, i) => 2 ** (1 + i / 2));

/**
 * How strongly a stream's block factors are to be held to 1: the strength k, in departures, that makes the blocks'
 * departures most likely when g ~ Gamma(k, k) and departures given g are Poisson (a gamma–Poisson marginal likelihood,
 * as in empirical Bayes; Robbins 1956, Efron & Morris 1973).
 * @param expected departures expected in each block with g = 1. @returns k between 2 and 8,192.
 */
export function chooseBlockShrinkage(departures: ArrayLike<number>, expected: ArrayLike<number>): number {
  let best = strengths[0];
  let bestScore = -Infinity;
  for (const k of strengths) {
    let score = 0;
    for (let b = 0; b < departures.length; b += 1) {
      if (!(expected[b] > 0)) continue;
      const n = departures[b];
      score += logGamma(k + n) - logGamma(k) + k * Math.log(k) - (k + n) * Math.log(k + expected[b]);
      score += n * Math.log(expected[b]);
    }
    if (score > bestScore) {
      bestScore = score;
      best = k;
    }
  }
  return best;
}

/**
 * Dirichlet parameters of the disposition shares by block of the day: each block's counts added to the area's overall
 * shares times a strength chosen by the Dirichlet–multinomial marginal likelihood. The overall shares themselves are
 * held to `prior` by a weight of 4 visits, so that an area without visits has shares too.
 * @param counts [block · 4 + disposition]. @param prior shares of the whole site, 4.
 */
export function shrinkShares(counts: Float64Array, prior: readonly number[]): number[][] {
  const blocks = counts.length / 4;
  const overall = prior.map((share) => 4 * share);
  for (let i = 0; i < counts.length; i += 1) overall[i % 4] += counts[i];
  const total = overall.reduce((sum, value) => sum + value, 0);
  const shares = overall.map((value) => value / total);
  let best = strengths[0];
  let bestScore = -Infinity;
  for (const strength of strengths) {
    let score = 0;
    for (let b = 0; b < blocks; b += 1) {
      let n = 0;
      for (let d = 0; d < 4; d += 1) {
        const alpha = strength * shares[d];
        n += counts[b * 4 + d];
        score += logGamma(alpha + counts[b * 4 + d]) - logGamma(alpha);
      }
      score += logGamma(strength) - logGamma(strength + n);
    }
    if (score > bestScore) {
      bestScore = score;
      best = strength;
    }
  }
  return Array.from({ length: blocks }, (_, b) => shares.map((share, d) => best * share + counts[b * 4 + d]));
}
