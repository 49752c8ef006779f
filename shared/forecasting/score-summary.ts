import { makeStream } from '../stochastic/random.ts';
import type { CountForecast } from './count-forecast.ts';
import {
  centralInterval,
  intervalLevels,
  logScore,
  meanAbsoluteScaledError,
  pinballLevels,
  pinballLoss,
  pitStretch,
} from './scoring.ts';

/** One forecast scored against what happened; plain, so that it may be stored. */
export interface ScoredCount {
  /** Which week it belongs to; weeks are what is resampled. */
  week: number;
  logScore: number;
  absoluteError: number;
  /** |y − y a week before|, or NaN where that is not known. */
  naiveError: number;
  pinball: number[];
  covered: boolean[];
  mass: number[];
  pitLower: number;
  pitUpper: number;
}

/** Scores one forecast. `naive` is the count of a week before, for the scaled error. */
export function scoreCount(forecast: CountForecast, observed: number, week: number, naive: number): ScoredCount {
  const pit = pitStretch(forecast, observed);
  const intervals = intervalLevels.map((level) => centralInterval(forecast, level));
  return {
    week,
    logScore: logScore(forecast, observed),
    absoluteError: Math.abs(observed - forecast.quantile(0.5)),
    naiveError: Math.abs(observed - naive),
    pinball: pinballLevels.map((tau) => pinballLoss(forecast.quantile(tau), observed, tau)),
    covered: intervals.map(({ low, high }) => observed >= low && observed <= high),
    mass: intervals.map(({ mass }) => mass),
    pitLower: pit.lower,
    pitUpper: pit.upper,
  };
}

/** Mean scores of many forecasts. `expected` is the exact mass of the intervals, `se` from resampling whole weeks. */
export interface ScoreSummary {
  n: number;
  logScore: number | null;
  mae: number | null;
  mase: number | null;
  pinball: Record<string, number | null>;
  coverage: Record<string, { observed: number | null; expected: number | null; se: number | null }>;
}

/** Summarises scores; an empty set gives nulls, never NaN. */
export function summariseScores(scores: readonly ScoredCount[], resamples = 500, seed = 1): ScoreSummary {
  const mean = (value: (score: ScoredCount) => number): number | null =>
    scores.length > 0 ? scores.reduce((sum, score) => sum + value(score), 0) / scores.length : null;
  const withNaive = scores.filter((score) => !Number.isNaN(score.naiveError));
  const average = (values: number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
  return {
    n: scores.length,
    logScore: mean((score) => score.logScore),
    mae: mean((score) => score.absoluteError),
    mase:
      withNaive.length > 0
        ? meanAbsoluteScaledError(
            average(withNaive.map((score) => score.absoluteError)),
            average(withNaive.map((score) => score.naiveError)),
          )
        : null,
    pinball: Object.fromEntries(pinballLevels.map((tau, t) => [String(tau), mean((score) => score.pinball[t])])),
    coverage: Object.fromEntries(
      intervalLevels.map((level, l) => [
        String(level),
        {
          observed: mean((score) => (score.covered[l] ? 1 : 0)),
          expected: mean((score) => score.mass[l]),
          se: weekResampledError(
            scores.map((score) => ({ week: score.week, value: (score.covered[l] ? 1 : 0) - score.mass[l] })),
            resamples,
            seed,
          ),
        },
      ]),
    ),
  };
}

/**
 * Standard error of a mean by resampling whole weeks with replacement (block bootstrap; Künsch 1989, Efron & Tibshirani
 * 1993), so that what hours of one week have in common is not taken for independent evidence. Null below two weeks.
 */
export function weekResampledError(
  values: readonly { week: number; value: number }[],
  resamples = 500,
  seed = 1,
): number | null {
  const byWeek = new Map<number, { sum: number; n: number }>();
  for (const { week, value } of values) {
    const known = byWeek.get(week) ?? { sum: 0, n: 0 };
    byWeek.set(week, { sum: known.sum + value, n: known.n + 1 });
  }
  return resampledError([...byWeek.values()], resamples, seed);
}

/** The same from each week's sum and number of cases. */
export function resampledError(weeks: readonly { sum: number; n: number }[], resamples = 500, seed = 1): number | null {
  if (weeks.length < 2) return null;
  const stream = makeStream(seed, 7);
  let first = 0;
  let second = 0;
  for (let r = 0; r < resamples; r += 1) {
    let sum = 0;
    let n = 0;
    for (let i = 0; i < weeks.length; i += 1) {
      const week = weeks[Math.floor(stream.uniform() * weeks.length)];
      sum += week.sum;
      n += week.n;
    }
    first += sum / n;
    second += (sum / n) ** 2;
  }
  return Math.sqrt(Math.max(0, (second - (first * first) / resamples) / (resamples - 1)));
}
