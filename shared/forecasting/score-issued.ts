import { gammaPoissonForecast, type CountForecast } from './count-forecast.ts';
import { scoreCount, type ScoredCount } from './score-summary.ts';
import { centralInterval, intervalLevels, pinballLevels, pinballLoss } from './scoring.ts';

/** Scores of one issued forecast, as the track record keeps them. */
export interface IssuedScore extends Omit<ScoredCount, 'week' | 'naiveError' | 'covered' | 'mass'> {
  median: number;
  /** The intervals of `intervalLevels`: low, high and the mass that they really hold. */
  intervals: [low: number, high: number, mass: number][];
  /** Randomised PIT. */
  pit: number;
  /** Mean pinball loss, and mean absolute error of the median, that chance alone leaves: see `chanceFloor`. */
  floorPinball: number;
  floorError: number;
}

/**
 * Scores an issued forecast with the code of the backtest.
 * @param v uniform in 0..1 for the randomised PIT, drawn with a seed of the outlook's
 * @param floor the law whose own expected loss is the floor: the forecast itself, or for arrivals Poisson counts of known rates
 */
export function scoreIssued(
  forecast: CountForecast,
  observed: number,
  v: number,
  floor: 'its own law' | 'known rates',
): IssuedScore {
  const { logScore, absoluteError, pinball, pitLower, pitUpper } = scoreCount(forecast, observed, 0, NaN);
  const least = chanceFloor(floor === 'known rates' ? gammaPoissonForecast(forecast.mean, 0) : forecast);
  return {
    logScore,
    absoluteError,
    pinball,
    pitLower,
    pitUpper,
    median: forecast.quantile(0.5),
    intervals: intervalLevels.map((level) => {
      const { low, high, mass } = centralInterval(forecast, level);
      return [low, high, mass];
    }),
    pit: pitLower + v * (pitUpper - pitLower),
    floorPinball: least.pinball,
    floorError: least.error,
  };
}

/** Mean of the pinball losses over the scored levels. */
export function meanPinball(pinball: readonly number[]): number {
  return pinball.reduce((sum, loss) => sum + loss, 0) / pinball.length;
}

/** Mean pinball loss over the scored levels, and absolute error of the median, of a forecast whose intervals are not asked for. */
export function lossesOf(forecast: CountForecast, observed: number): { pinball: number; error: number } {
  const losses = pinballLevels.map((tau) => pinballLoss(forecast.quantile(tau), observed, tau));
  return { pinball: meanPinball(losses), error: Math.abs(observed - forecast.quantile(0.5)) };
}

/**
 * What even a forecast that is exactly right loses on average: the expected losses of a law's own quantiles when counts are
 * drawn from it. No forecast can do better in the long run (propriety; Gneiting & Raftery 2007). Cost: width × levels.
 */
export function chanceFloor(law: CountForecast): { pinball: number; error: number } {
  const quantiles = pinballLevels.map((tau) => law.quantile(tau));
  const median = law.quantile(0.5);
  let pinball = 0;
  let error = 0;
  let below = 0;
  for (let n = law.quantile(1e-9); below < 1 - 1e-10; n += 1) {
    const up = law.cdf(n);
    const p = up - below;
    below = up;
    if (p <= 0) {
      if (up >= 1) break;
      continue;
    }
    error += p * Math.abs(n - median);
    for (let t = 0; t < quantiles.length; t += 1) pinball += p * pinballLoss(quantiles[t], n, pinballLevels[t]);
  }
  return { pinball: pinball / quantiles.length, error };
}
