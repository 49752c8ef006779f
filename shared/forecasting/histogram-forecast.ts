import { gammaPoissonLogPmf } from '../stochastic/gamma-poisson.ts';
import type { CountForecast } from './count-forecast.ts';

/** Replications that the smooth law beside the histogram counts for. */
const smoothWeight = 10;

/**
 * A simulated distribution as a forecast that can be scored: the histogram of replications, and beside it, with the
 * weight of ten replications, the gamma–Poisson law of the same mean and variance. Without it a count that no
 * replication happened to reach would be held impossible.
 * @param counts replications by count; at least one
 */
export function histogramForecast(counts: ArrayLike<number>): CountForecast {
  let total = 0;
  let sum = 0;
  let squares = 0;
  for (let n = 0; n < counts.length; n += 1) {
    total += counts[n];
    sum += counts[n] * n;
    squares += counts[n] * n * n;
  }
  if (!(total > 0)) throw new RangeError('a histogram needs at least one replication');
  const mean = sum / total;
  const smoothMean = Math.max(mean, 0.5 / total);
  const phi = Math.max(0, (squares / total - mean * mean - mean) / (smoothMean * smoothMean));
  const share = smoothWeight / (total + smoothWeight);
  const probability = (n: number): number =>
    ((1 - share) * (n < counts.length ? counts[n] : 0)) / total +
    share * Math.exp(gammaPoissonLogPmf(n, smoothMean, phi));
  const cumulative: number[] = [];
  const cdf = (n: number): number => {
    if (n < 0) return 0;
    const whole = Math.floor(n);
    while (cumulative.length <= whole) {
      const last = cumulative.at(-1) ?? 0;
      if (last > 1 - 1e-12 && cumulative.length >= counts.length) return 1;
      cumulative.push(Math.min(1, last + probability(cumulative.length)));
    }
    return cumulative[whole];
  };
  return {
    mean,
    logProbability: (n) => (Number.isInteger(n) && n >= 0 ? Math.log(probability(n)) : -Infinity),
    cdf,
    quantile(p) {
      if (!(p >= 0 && p <= 1)) throw new RangeError(`p must lie in 0..1, got ${p}`);
      let n = 0;
      while (cdf(n) < p * (1 - 1e-12)) n += 1;
      return n;
    },
  };
}
