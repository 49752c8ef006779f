import { describe, expect, it } from 'vitest';
import { gammaPoissonForecast } from '../../../shared/forecasting/count-forecast.ts';
import { comparisonSentences, differenceVerdict } from '../../../shared/forecasting/comparison-sentences.ts';
import { pairScores } from '../../../shared/forecasting/pair-scores.ts';
import { scoreCount, type ScoredCount } from '../../../shared/forecasting/score-summary.ts';
import { expectWithin } from '../../support/closeness.ts';

/** Counts of eight weeks, forecast by a Poisson law of some mean. */
const scoresOf = (mean: number, noise = 0): ScoredCount[] =>
  [9, 12, 10, 7, 11, 14, 8, 10].map((count, week) =>
    scoreCount(gammaPoissonForecast(mean + noise, 0), count, week, 10),
  );

describe('paired scores', () => {
  it('differ by the mean of what they differ by, as worked by hand', () => {
    const { n, difference, candidate, inUse } = pairScores([scoresOf(10)], [scoresOf(12)], 1);
    expect(n).toBe(8);
    // Poisson: −log p₁ + log p₂ = λ₁ − λ₂ + n̄·ln(λ₂ / λ₁), n̄ = 81 / 8.
    const byHand = 10 - 12 + (81 / 8) * Math.log(12 / 10);
    expectWithin(difference?.logScore.value ?? NaN, byHand, 1e-9, 'log score');
    expectWithin((candidate.logScore ?? NaN) - (inUse.logScore ?? NaN), byHand, 1e-9, 'difference of means');
    expect(difference?.logScore.monteCarlo).toBeNull();
    // The bootstrap's standard error of a mean of eight weeks: the root of its population variance over n (Efron & Tibshirani 1993, 5.3).
    const each = [9, 12, 10, 7, 11, 14, 8, 10].map((count) => -2 + count * Math.log(1.2));
    const sd = Math.sqrt(each.reduce((sum, value) => sum + (value - byHand) ** 2, 0) / 8 / 8);
    expectWithin(difference?.logScore.se ?? NaN, sd, 0.15 * sd, 'standard error');
  });

  it('know what repeats of the simulation leave', () => {
    const { difference } = pairScores([scoresOf(10), scoresOf(10, 0.2)], [scoresOf(12), scoresOf(12)], 1);
    const [one, two] = [10, 10.2].map((mean) => mean - 12 + (81 / 8) * Math.log(12 / mean));
    expectWithin(difference?.logScore.value ?? NaN, (one + two) / 2, 1e-9, 'mean of repeats');
    // Standard error of a mean of two: half their distance.
    expectWithin(difference?.logScore.monteCarlo ?? NaN, Math.abs(one - two) / 2, 1e-9, 'simulation');
  });

  it('must be of the same forecasts, and may be none', () => {
    expect(() => pairScores([scoresOf(10)], [scoresOf(12).slice(1)], 1)).toThrow(/same forecasts/);
    expect(pairScores([[]], [[]], 1)).toMatchObject({ n: 0, difference: null });
  });
});

describe('the words', () => {
  const scale = (value: number, se: number | null) => ({
    ...pairScores([scoresOf(10)], [scoresOf(10)], 1),
    difference: { logScore: { value, se, monteCarlo: 0 }, pinball: { value, se, monteCarlo: 0 } },
  });
  const comparison = (hour: number, need: number, weeksAlike = 0) => ({
    fromLocalHour: 0,
    toLocalHour: 2184,
    weeks: 13,
    weeksAlike,
    arrivals: [{ level: 'hour' as const, ...scale(hour, 0.01) }],
    need: [{ leadHours: 12, ...scale(need, 0.01) }],
    draws: 1000,
    replications: 300,
    batches: 2,
  });

  it('call a difference one only past two standard errors, those of weeks and simulation together', () => {
    expect(differenceVerdict({ value: -0.021, se: 0.01, monteCarlo: 0 })).toBe('better');
    expect(differenceVerdict({ value: -0.021, se: 0.01, monteCarlo: 0.01 })).toBe('alike');
    expect(differenceVerdict({ value: 0.021, se: 0.01, monteCarlo: null })).toBe('worse');
    expect(differenceVerdict({ value: 5, se: null, monteCarlo: 0 })).toBe('too few');
    expect(differenceVerdict(null)).toBe('too few');
  });

  it.each([
    [
      -0.1,
      -0.1,
      'The candidate did better over the last 13 weeks at arrivals by hour and need 12 h ahead, and worse at nothing.',
    ],
    [0.1, 0, 'The candidate did worse over the last 13 weeks at arrivals by hour, and better at nothing.'],
    [-0.1, 0.1, 'The candidate did better over the last 13 weeks at arrivals by hour, but worse at need 12 h ahead.'],
    [
      0.01,
      -0.01,
      'The candidate and the model in use did equally well over the last 13 weeks, as far as chance lets one tell.',
    ],
  ])('differences %f and %f', (hour, need, headline) => {
    expect(comparisonSentences(comparison(hour, need)).headline).toBe(headline);
  });

  it('say when nothing can tell the two apart', () => {
    const words = comparisonSentences(comparison(0, 0, 13));
    expect(words.headline).toBe('No past week tells the candidate from the model in use.');
    expect(words.grounds).toContain('the same visits by the same method');
  });
});
