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

/** A share by block: mean and the strength, in visits, of the beta law with its mean and variance. */
interface HeldShare {
  mean: number;
  strength: number;
}

/**
 * Shares p_b of a yes-or-no split, each block held to the overall share: p_b ~ Beta(k·overall, k·(1 − overall)), averaged
 * over the strength k by its beta–binomial likelihood under a uniform prior on the standard deviation between blocks,
 * ∝ k^−1/2 (Gelman 2006). A likelihood that is nearly flat in k, as six blocks give, would hold far too hard at its peak.
 */
function holdShare(yes: readonly number[], visits: readonly number[], overall: number): HeldShare[] {
  const logWeights = strengths.map((k) => {
    let score = -Math.log(k) / 2;
    const [a, b] = [k * overall, k * (1 - overall)];
    visits.forEach((n, block) => {
      const hits = yes[block];
      score += logGamma(a + hits) - logGamma(a) + logGamma(b + n - hits) - logGamma(b) + logGamma(k) - logGamma(k + n);
    });
    return score;
  });
  const highest = Math.max(...logWeights);
  const weights = logWeights.map((score) => Math.exp(score - highest));
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  return visits.map((n, block) => {
    let mean = 0;
    let square = 0;
    strengths.forEach((k, i) => {
      const own = (k * overall + yes[block]) / (k + n);
      const weight = weights[i] / total;
      mean += weight * own;
      square += weight * (own * own + (own * (1 - own)) / (k + n + 1));
    });
    return { mean, strength: (mean * (1 - mean)) / (square - mean * mean) - 1 };
  });
}

/**
 * Dirichlet parameters of the disposition shares by block of the day, from three splits one within the other, each held
 * to the area's own share as strongly as its own blocks say: left before treatment or not, of those who stay admitted or
 * not, of the rest transferred or home. The certainty is that of the admitted share, on which need hangs most. The
 * area's overall shares are held to `prior` by a weight of 4 visits, so that an area without visits has shares too.
 * @param counts [block · 4 + disposition]. @param prior shares of the whole site, 4, each above 0.
 */
export function shrinkShares(counts: Float64Array, prior: readonly number[]): number[][] {
  const blocks = Array.from({ length: counts.length / 4 }, (_, b) => Array.from(counts.subarray(4 * b, 4 * b + 4)));
  const [home, admitted, transferred, left] = prior.map((share, d) =>
    blocks.reduce((sum, block) => sum + block[d], 4 * share),
  );
  const going = blocks.map((block) => block[0] + block[2]);
  const staying = blocks.map((block, b) => going[b] + block[1]);
  const leftShare = holdShare(
    blocks.map((block) => block[3]),
    staying.map((n, b) => n + blocks[b][3]),
    left / (home + admitted + transferred + left),
  );
  const admittedShare = holdShare(
    blocks.map((block) => block[1]),
    staying,
    admitted / (home + admitted + transferred),
  );
  const transferredShare = holdShare(
    blocks.map((block) => block[2]),
    going,
    transferred / (home + transferred),
  );
  return blocks.map((_, b) => {
    const leaving = leftShare[b].mean;
    const admitting = admittedShare[b].mean;
    const moving = transferredShare[b].mean;
    const rest = (1 - leaving) * (1 - admitting);
    const strength = admittedShare[b].strength / (1 - leaving);
    return [rest * (1 - moving), (1 - leaving) * admitting, rest * moving, leaving].map((share) => share * strength);
  });
}
