import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  gammaPoissonForecast,
  mixtureForecast,
  type CountForecast,
} from '../../../shared/forecasting/count-forecast.ts';
import { scoreCount, summariseScores, weekResampledError } from '../../../shared/forecasting/score-summary.ts';
import {
  brierScore,
  centralInterval,
  intervalScore,
  logScore,
  pinballLoss,
  pitHistogram,
  pitStretch,
  randomisedPit,
  rankedProbabilityScore,
  reliability,
} from '../../../shared/forecasting/scoring.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import scores from '../../reference/arrival-scores.json' with { type: 'json' };
import evaluation from '../../reference/forecast-evaluation.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

interface ScoredCase {
  y: number;
  logScore: number;
  quantiles: Record<string, number>;
  pinball: Record<string, number>;
  intervals: Record<string, { low: number; high: number; mass: number }>;
  pit: number[];
  rankedProbability: number;
}

function expectScores(forecast: CountForecast, expected: ScoredCase, label: string): void {
  const { y } = expected;
  expectRelative(logScore(forecast, y), expected.logScore, 1e-9, `log score, ${label}`);
  expectRelative(rankedProbabilityScore(forecast, y), expected.rankedProbability, 1e-6, `ranked probability, ${label}`);
  for (const [tau, q] of Object.entries(expected.quantiles)) {
    expect(forecast.quantile(Number(tau)), `quantile ${tau}, ${label}`).toBe(q);
    expectWithin(pinballLoss(q, y, Number(tau)), expected.pinball[tau], 1e-9, `pinball ${tau}, ${label}`);
  }
  for (const [level, { low, high, mass }] of Object.entries(expected.intervals)) {
    const interval = centralInterval(forecast, Number(level));
    expect([interval.low, interval.high], `interval ${level}, ${label}`).toEqual([low, high]);
    expectWithin(interval.mass, mass, 1e-9, `mass ${level}, ${label}`);
  }
  const pit = pitStretch(forecast, y);
  expectWithin(pit.lower, expected.pit[0], 1e-9, `lower PIT, ${label}`);
  expectWithin(pit.upper, expected.pit[1], 1e-9, `upper PIT, ${label}`);
}

describe('scores of counts', () => {
  it('equal SciPy and R on ten Poisson forecasts', () => {
    const e = evaluation;
    const stretches = e.y.map((y, i) => pitStretch(gammaPoissonForecast(e.poisson_mean[i], 0), y));
    e.y.forEach((y, i) => {
      const forecast = gammaPoissonForecast(e.poisson_mean[i], 0);
      expectWithin(logScore(forecast, y), e.log_score_poisson[i], 1e-9, `log score ${i}`);
      expectWithin(rankedProbabilityScore(forecast, y), e.crps_poisson[i], 1e-9, `CRPS ${i}`);
      for (const tau of ['0.1', '0.25', '0.5', '0.75', '0.9'] as const) {
        expect(forecast.quantile(Number(tau))).toBe(e.q[tau][i]);
        expectWithin(pinballLoss(e.q[tau][i], y, Number(tau)), e.pinball_each[tau][i], 1e-9, `pinball ${tau} ${i}`);
      }
      const { low, high, mass } = centralInterval(forecast, 0.9);
      expectWithin(mass, e.exact_prob_inside90[i], 1e-9, `mass ${i}`);
      expectWithin(intervalScore(low, high, y, 0.9), e.interval_score90_each[i], 1e-9, `interval score ${i}`);
      expectWithin(stretches[i].lower, e.pit_lower[i], 1e-9, `PIT ${i}`);
      expectWithin(stretches[i].upper, e.pit_upper[i], 1e-9, `PIT ${i}`);
      expectWithin(randomisedPit(forecast, y, 0.3), e['randomised_pit_v=0.3'][i], 1e-9, `randomised PIT ${i}`);
      expectWithin(
        rankedProbabilityScore(gammaPoissonForecast(e.poisson_mean[i], 0.2), y),
        e.crps_nb_size5[i],
        1e-9,
        `CRPS, size 5, ${i}`,
      );
    });
    pitHistogram(stretches, 10).forEach((height, j) => {
      expectWithin(height, e.nonrandomised_pit_hist_10_bins[j], 1e-9, `PIT bin ${j}`);
    });
  });

  it('equal SciPy on gamma–Poisson forecasts and on mixtures of Poisson laws', () => {
    for (const row of scores.gammaPoisson) {
      expectScores(gammaPoissonForecast(row.mean, row.phi), row, `mean ${row.mean}, φ ${row.phi}`);
    }
    for (const row of scores.mixture) {
      expectScores(mixtureForecast(Float64Array.from(row.means)), row, `means ${row.means.join(' ')}`);
    }
  });

  it('are the definition’s for the Brier score and reliability (Brier 1950; Murphy & Winkler 1977)', () => {
    // By hand: (0.1² + 0.7² + 0.2²) / 3.
    expectWithin(brierScore([0.1, 0.3, 0.8], [false, true, true]) ?? NaN, 0.54 / 3, 1e-12, 'Brier');
    const bins = reliability([0.3, 0.4, 0.9, 1], [true, false, true, true], [0, 0.5, 1]);
    expect(bins.map(({ n, observedShare }) => [n, observedShare])).toEqual([
      [2, 0.5],
      [2, 1],
    ]);
    expectWithin(bins[0].meanChance, 0.35, 1e-12, 'mean chance');
    expectWithin(bins[1].meanChance, 0.95, 1e-12, 'mean chance');
    expect(brierScore([], [])).toBeNull();
  });

  it('refuse what cannot be scored', () => {
    expect(() => logScore(gammaPoissonForecast(3, 0), 2.5)).toThrow(/observed.*2.5/);
    expect(() => pinballLoss(1, 2, 1)).toThrow(/tau/);
    expect(() => brierScore([1.2], [true])).toThrow(/chance 0/);
    expect(() => mixtureForecast(Float64Array.of(1, NaN))).toThrow(/mean 1/);
  });
});

describe('summary of scores', () => {
  it('has the scaled error against the same hour last week, and the resampled error of a mean', () => {
    const forecast = gammaPoissonForecast(5, 0);
    // Medians are 5: errors 1, 2, 0, 3; errors of last week's counts 2, 4, 1, 5.
    const cases = [
      [6, 8],
      [3, 7],
      [5, 4],
      [8, 3],
    ].map(([y, naive], i) => scoreCount(forecast, y, i, naive));
    const summary = summariseScores(cases);
    expectWithin(summary.mae ?? NaN, 1.5, 1e-12, 'MAE');
    expectWithin(summary.mase ?? NaN, 6 / 12, 1e-12, 'MASE');

    // Independent values in weeks of ten: the error of the mean is the standard deviation of week means / √weeks.
    const stream = makeStream(3);
    const values = Array.from({ length: 400 }, (_, i) => ({ week: Math.floor(i / 10), value: stream.uniform() }));
    const means = Array.from(
      { length: 40 },
      (_, w) => values.filter(({ week }) => week === w).reduce((sum, { value }) => sum + value, 0) / 10,
    );
    const mean = means.reduce((sum, value) => sum + value, 0) / 40;
    const exact = Math.sqrt(means.reduce((sum, value) => sum + (value - mean) ** 2, 0) / 40 / 40);
    expectRelative(weekResampledError(values, 4000) ?? NaN, exact, 0.05, 'error by resampling');
  });

  it('of nothing is nulls, and never holds NaN', () => {
    expect(JSON.stringify(summariseScores([]))).not.toMatch(/NaN/);
    expect(summariseScores([]).logScore).toBeNull();
    expect(weekResampledError([{ week: 1, value: 3 }])).toBeNull();
  });

  it('mixtures: the quantile is the smallest count that reaches p, for any means', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 0, max: 400, noNaN: true }), { minLength: 1, maxLength: 8 }),
        fc.double({ min: 0.001, max: 0.999, noNaN: true }),
        (means, p) => {
          const forecast = mixtureForecast(Float64Array.from(means));
          const q = forecast.quantile(p);
          expect(forecast.cdf(q)).toBeGreaterThanOrEqual(p - 1e-12);
          if (q > 0) expect(forecast.cdf(q - 1)).toBeLessThan(p);
        },
      ),
      { numRuns: 200, seed: 5 },
    );
  });
});
