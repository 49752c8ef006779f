import { choleskyFactor, choleskyInverse, choleskySolve } from './cholesky.ts';
import type { BlockBelief } from './log-level-belief.ts';

/**
 * A gamma factor after counting: W ~ Gamma(1/φ, rate 1/φ) with mean 1 and variance φ; given n arrivals where Λ were
 * expected at W = 1, W ~ Gamma(1/φ + n, rate 1/φ + Λ) (the gamma is conjugate to Poisson).
 * @returns shape, rate and the mean (1 + φ n) / (1 + φ Λ); φ = 0 leaves the factor at 1.
 */
export function liveGammaFactor(
  phi: number,
  count: number,
  expected: number,
): { shape: number; rate: number; mean: number } {
  if (!(phi >= 0 && count >= 0 && expected >= 0)) {
    throw new RangeError(`live factor needs phi, count and expected of 0 or more, got ${phi}, ${count}, ${expected}`);
  }
  return { shape: 1 / phi + count, rate: 1 / phi + expected, mean: (1 + phi * count) / (1 + phi * expected) };
}

/**
 * Joint normal belief about log multipliers, after counts of some of them: n_j ~ Poisson(Σ_k e_jk exp(x_k)).
 * The posterior mode by Fisher scoring and the curvature there (Laplace's approximation). Several multipliers may stand
 * behind one count, as when only the sum over a night was counted.
 * @param expected per count, arrivals expected of each multiplier at x = 0
 * Cost: a few inversions of blocks × blocks.
 */
export function conditionOnCounts(
  belief: BlockBelief,
  counts: readonly { count: number; expected: Float64Array }[],
): BlockBelief {
  const size = belief.mean.length;
  const jitter = belief.covariance.slice();
  for (let i = 0; i < size; i += 1) jitter[i * size + i] += 1e-9;
  const priorPrecision = choleskyInverse(choleskyFactor(jitter, size), size);
  const at = belief.mean.slice();
  let covariance = belief.covariance;
  for (let iteration = 0; iteration < 30; iteration += 1) {
    const precision = priorPrecision.slice();
    const gradient = new Float64Array(size);
    for (let i = 0; i < size; i += 1) {
      for (let j = 0; j < size; j += 1) gradient[i] -= priorPrecision[i * size + j] * (at[j] - belief.mean[j]);
    }
    for (const { count, expected } of counts) {
      const part = expected.map((value, k) => value * Math.exp(at[k]));
      const rate = part.reduce((sum, value) => sum + value, 0);
      if (!(rate > 0)) continue;
      for (let i = 0; i < size; i += 1) {
        if (part[i] === 0) continue;
        gradient[i] += (part[i] * (count - rate)) / rate;
        for (let j = 0; j < size; j += 1) precision[i * size + j] += (part[i] * part[j]) / rate;
      }
    }
    const factor = choleskyFactor(precision, size);
    const step = choleskySolve(factor, size, gradient);
    let largest = 0;
    for (let i = 0; i < size; i += 1) largest = Math.max(largest, Math.abs(step[i]));
    const share = largest > 0.5 ? 0.5 / largest : 1;
    for (let i = 0; i < size; i += 1) at[i] += share * step[i];
    covariance = choleskyInverse(factor, size);
    if (largest < 1e-8) break;
  }
  return { mean: at, covariance };
}
