import { describe, expect, it } from 'vitest';
import type { HourlyCounts } from '../../../shared/forecasting/arrival-model.ts';
import { regressionMeans } from '../../../shared/forecasting/baseline-regression.ts';
import { indexCalendar } from '../../../shared/forecasting/calendar-effect.ts';
import { fitDispersion } from '../../../shared/forecasting/fit-dispersion.ts';
import { filterLevel, firstState } from '../../../shared/forecasting/level-filter.ts';
import { conditionOnCounts, liveGammaFactor } from '../../../shared/forecasting/live-factor.ts';
import { factorMoments } from '../../../shared/forecasting/factor-moments.ts';
import { fitWeeklyProfile } from '../../../shared/forecasting/weekly-profile.ts';
import { localDate } from '../../../shared/domain/zoned-time.ts';
import scores from '../../reference/arrival-scores.json' with { type: 'json' };
import regression from '../../reference/baseline-regression.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { simulateArrivals } from '../../support/simulate-arrivals.ts';

describe('weekly profile', () => {
  it('is the penalised maximum that a general optimiser finds (SciPy, BFGS)', () => {
    const { counts, exposure, scales, ratePerHour } = scores.profile;
    const profile = fitWeeklyProfile(Float64Array.from(counts), Float64Array.from(exposure), false, scales);
    profile.ratePerHour.forEach((rate, hour) => {
      expectRelative(rate, ratePerHour[hour], 1e-6, `hour ${hour}`);
    });
  });

  it('of an area without arrivals is small, positive and finite', () => {
    const profile = fitWeeklyProfile(new Float64Array(168), new Float64Array(168).fill(20), false);
    for (const rate of profile.ratePerHour) {
      expect(rate).toBeGreaterThan(0);
      expect(rate).toBeLessThan(0.01);
    }
  });
});

describe('level filter', () => {
  it('follows the exact filter of a walking level (SciPy, by convolution on a grid)', () => {
    const { variancePerDay, expected, counts, mean, sd, logProbability } = scores.walkingLevel;
    const { state, logProbability: got } = filterLevel(
      {
        first: 0,
        daysPerBlock: 1,
        observed: Float64Array.from(counts),
        expected: new Float64Array(counts.length).fill(expected),
        effects: counts.map(() => ({ index: [], value: [] })),
        withinLogProbability: 0,
      },
      {
        levelVariancePerDay: variancePerDay,
        factorVariance: 0,
        factorCorrelation: 0,
        spellVariance: 0,
        spellCorrelationPerDay: 0,
      },
      firstState([], 0, 0),
    );
    // Laplace's approximation at 35 arrivals a day: a fiftieth of the standard deviation.
    expectWithin(state.mean[0], mean, 0.02 * sd, 'mean');
    expectRelative(Math.sqrt(state.covariance[0]), sd, 0.02, 'standard deviation');
    expectWithin(got, logProbability, 0.1, 'log probability of 80 days');
  });
});

describe('live factor', () => {
  it('gamma: Bayes’ rule on a grid gives the same (SciPy)', () => {
    for (const { phi, count, expected, mean, sd } of scores.liveGamma) {
      const after = liveGammaFactor(phi, count, expected);
      expectRelative(after.mean, mean, 1e-6, `mean, φ ${phi}`);
      expectRelative(after.shape / after.rate, mean, 1e-6, `shape / rate, φ ${phi}`);
      expectRelative(Math.sqrt(after.shape) / after.rate, sd, 1e-4, `sd, φ ${phi}`);
    }
    expect(liveGammaFactor(0, 50, 10).mean).toBe(1);
    expect(() => liveGammaFactor(0.1, NaN, 3)).toThrow(/count/);
  });

  it('normal: the posterior mode is a general optimiser’s (SciPy, Nelder–Mead)', () => {
    for (const { mean, covariance, counts, mode } of scores.liveNormal) {
      const after = conditionOnCounts(
        { mean: Float64Array.from(mean), covariance: Float64Array.from(covariance.flat()) },
        counts.map((row) => ({ count: row[0] as number, expected: Float64Array.from(row[1] as number[]) })),
      );
      mode.forEach((value, i) => expectWithin(after.mean[i], value, 1e-5, `mode ${i}`));
      expect(after.covariance[0]).toBeLessThan(covariance[0][0]);
    }
  });
});

describe('shared and own variation', () => {
  it('are told apart by covariances between areas, on a log whose truth is known', () => {
    const truth = { phi: 0.01, ownPhi: 0.02 };
    const { counts, rates } = simulateArrivals({ seed: 8, weeks: 156, perDay: [90, 60, 40], ...truth });
    const expected = rates.map((week) => counts.exposureHours.map((_, i) => week[i % 168]));
    const found = factorMoments(counts.counts, expected, counts.firstLocalHour, { hours: 24, cut: 0 });
    // Var(S A) with means 1: φ + ψ + φψ. Sampling error of a variance over 1,092 days is about √(2/1092) = 4 %.
    expectRelative(found.shared, truth.phi, 0.25, 'shared');
    found.own.forEach((own, area) => expectRelative(own, truth.ownPhi * (1 + truth.phi), 0.35, `area ${area}`));
  });
});

describe('baselines', () => {
  it('regression: fitted means agree with MASS::glm.nb in R', () => {
    const exposureHours = new Float64Array(regression.counts.length).fill(1);
    for (const [i, hours] of Object.entries(regression.exposure)) exposureHours[Number(i)] = hours;
    const counts: HourlyCounts = {
      firstLocalHour: regression.firstLocalHour,
      exposureHours,
      counts: [Float64Array.from(regression.counts)],
    };
    const calendar = regression.holidays.map((day) => ({
      date: localDate(day * 86_400),
      kind: 'public holiday' as const,
      name: `Day ${day}`,
      statedEffect: null,
    }));
    const { means } = regressionMeans(counts, indexCalendar(calendar, 0), exposureHours.length, exposureHours.length);
    // Weights use a dispersion that is found to 3 %, which moves the fitted means by far less.
    regression.fitted.forEach((mean, i) => expectRelative(means[i], mean, 1e-3, `hour ${i}`));
  });

  it('dispersion: maximum likelihood as MASS::theta.ml finds it', () => {
    const { means, counts, phi } = regression.dispersion;
    const repeated = counts.map((_, i) => means[i % means.length]);
    expectRelative(fitDispersion(repeated, counts, 1e-5), phi, 1e-4, 'φ');
    expect(fitDispersion([4, 4, 4, 4], [4, 4, 4, 4])).toBe(0);
  });
});
