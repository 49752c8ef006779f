import type { CountForecast } from './count-forecast.ts';

/*
 * Scores of forecasts of counts and chances: one code for the backtest and the track record. Lower is better throughout.
 */

/** Levels of the central intervals that are scored. */
export const intervalLevels = [0.5, 0.8, 0.9, 0.95] as const;
/** Quantile levels at which the pinball loss is taken. */
export const pinballLevels = [0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95] as const;

/** Log score −ln P(N = y), nats (Good 1952). Infinite where the forecast held y impossible. */
export function logScore(forecast: CountForecast, observed: number): number {
  checkObserved(observed);
  return -forecast.logProbability(observed);
}

/** Pinball loss of a τ-quantile q: (τ − 1{y < q})(y − q) (Gneiting & Raftery 2007, section 6.1), in the unit of y. */
export function pinballLoss(quantile: number, observed: number, tau: number): number {
  if (!(tau > 0 && tau < 1)) throw new RangeError(`tau must lie between 0 and 1, got ${tau}`);
  return observed >= quantile ? tau * (observed - quantile) : (1 - tau) * (quantile - observed);
}

/** The central interval of a level: from the (1 − level)/2 to the (1 + level)/2 quantile, and the mass it really holds. */
export function centralInterval(forecast: CountForecast, level: number): { low: number; high: number; mass: number } {
  if (!(level > 0 && level < 1)) throw new RangeError(`level must lie between 0 and 1, got ${level}`);
  const low = forecast.quantile((1 - level) / 2);
  const high = forecast.quantile((1 + level) / 2);
  return { low, high, mass: forecast.cdf(high) - (low > 0 ? forecast.cdf(low - 1) : 0) };
}

/** Interval score of a central interval: width + 2/α × the distance by which y lies outside (Gneiting & Raftery 2007, eq. 43). */
export function intervalScore(low: number, high: number, observed: number, level: number): number {
  const outside = Math.max(low - observed, observed - high, 0);
  return high - low + (2 / (1 - level)) * outside;
}

/** The probability integral transform of a count: the stretch [F(y − 1), F(y)] on which it is uniform if F is right. */
export function pitStretch(forecast: CountForecast, observed: number): { lower: number; upper: number } {
  checkObserved(observed);
  return { lower: observed > 0 ? forecast.cdf(observed - 1) : 0, upper: forecast.cdf(observed) };
}

/** Randomised PIT: F(y − 1) + v (F(y) − F(y − 1)), v uniform (Czado, Gneiting & Held 2009, eq. 1). */
export function randomisedPit(forecast: CountForecast, observed: number, v: number): number {
  const { lower, upper } = pitStretch(forecast, observed);
  return lower + v * (upper - lower);
}

/**
 * Histogram of the PIT without randomisation: each count spreads its stretch evenly (Czado, Gneiting & Held 2009, eq. 2).
 * @returns heights; all 1 if forecasts are right. An empty set gives zeros.
 */
export function pitHistogram(stretches: readonly { lower: number; upper: number }[], bins: number): number[] {
  const share = (u: number, { lower, upper }: { lower: number; upper: number }): number =>
    u <= lower ? 0 : u >= upper ? 1 : (u - lower) / (upper - lower);
  const mean = (u: number): number => stretches.reduce((sum, stretch) => sum + share(u, stretch), 0) / stretches.length;
  return Array.from({ length: bins }, (_, j) =>
    stretches.length === 0 ? 0 : bins * (mean((j + 1) / bins) - (j === 0 ? 0 : mean(j / bins))),
  );
}

/**
 * Ranked probability score Σ_n (F(n) − 1{y ≤ n})² (Epstein 1969; the CRPS of a count). Cost: width of the distribution.
 */
export function rankedProbabilityScore(forecast: CountForecast, observed: number): number {
  checkObserved(observed);
  let sum = 0;
  for (let n = 0; ; n += 1) {
    const below = forecast.cdf(n);
    const gap = n >= observed ? 1 - below : below;
    sum += gap * gap;
    if (n > observed && gap < 1e-12) return sum;
  }
}

/** Mean absolute scaled error: mean |y − point| over mean |y − naive| (Hyndman & Koehler 2006, with the naive error of the scored period). */
export function meanAbsoluteScaledError(meanAbsoluteError: number, naiveMeanAbsoluteError: number): number | null {
  return naiveMeanAbsoluteError > 0 ? meanAbsoluteError / naiveMeanAbsoluteError : null;
}

/** Brier score of chances: mean (p − outcome)² (Brier 1950). Null for none. */
export function brierScore(chances: readonly number[], outcomes: readonly boolean[]): number | null {
  checkPaired(chances, outcomes);
  if (chances.length === 0) return null;
  return chances.reduce((sum, chance, i) => sum + (chance - (outcomes[i] ? 1 : 0)) ** 2, 0) / chances.length;
}

/** How often it came true, by what was said. */
export interface ReliabilityBin {
  from: number;
  to: number;
  n: number;
  meanChance: number;
  observedShare: number;
}

/**
 * Reliability of chances: cases gathered by stated chance, with the mean chance and the share that came true in each bin
 * (Murphy & Winkler 1977). Bins without cases are left out.
 * @param edges ascending, from 0 to 1; the last bin holds 1
 */
export function reliability(
  chances: readonly number[],
  outcomes: readonly boolean[],
  edges: readonly number[] = [0, 0.02, 0.05, 0.1, 0.25, 0.5, 0.8, 1],
): ReliabilityBin[] {
  checkPaired(chances, outcomes);
  const bins: ReliabilityBin[] = [];
  for (let b = 0; b + 1 < edges.length; b += 1) {
    const [from, to] = [edges[b], edges[b + 1]];
    const here = chances.flatMap((chance, i) =>
      chance >= from && (chance < to || (to === 1 && chance === 1)) ? [i] : [],
    );
    if (here.length === 0) continue;
    bins.push({
      from,
      to,
      n: here.length,
      meanChance: here.reduce((sum, i) => sum + chances[i], 0) / here.length,
      observedShare: here.filter((i) => outcomes[i]).length / here.length,
    });
  }
  return bins;
}

function checkPaired(chances: readonly number[], outcomes: readonly boolean[]): void {
  if (chances.length !== outcomes.length)
    throw new RangeError(`${chances.length} chances but ${outcomes.length} outcomes`);
  chances.forEach((chance, i) => {
    if (!(chance >= 0 && chance <= 1)) throw new RangeError(`chance ${i} must lie in 0..1, got ${chance}`);
  });
}

function checkObserved(observed: number): void {
  if (!(Number.isInteger(observed) && observed >= 0)) throw new RangeError(`observed must be a count, got ${observed}`);
}
