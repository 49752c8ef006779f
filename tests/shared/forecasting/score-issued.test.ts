import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { gammaPoissonForecast } from '../../../shared/forecasting/count-forecast.ts';
import { forecastOfLaw, type KeptLaw } from '../../../shared/forecasting/outlook-laws.ts';
import { chanceFloor, lossesOf, scoreIssued, type IssuedScore } from '../../../shared/forecasting/score-issued.ts';
import { addScore, addSums, emptySums, summariseSums } from '../../../shared/forecasting/score-sums.ts';
import { drawPoisson } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';

/* Expected values: tests/reference/make-track-scores.py, written out with NumPy and SciPy from the definitions. */
const reference = JSON.parse(readFileSync(new URL('../../reference/track-scores.json', import.meta.url), 'utf8')) as {
  cases: {
    law: KeptLaw;
    observed: number;
    v: number;
    floor: 'its own law' | 'known rates';
    score: IssuedScore;
  }[];
};

describe('scores of kept forecasts agree with SciPy to 1e-6', () => {
  test.each(reference.cases.map((each, index) => [index, each] as const))('case %i', (_, each) => {
    const found = scoreIssued(forecastOfLaw(each.law), each.observed, each.v, each.floor);
    const expected = each.score;
    for (const key of ['logScore', 'absoluteError', 'median', 'pitLower', 'pitUpper', 'pit'] as const)
      expect(Math.abs(found[key] - expected[key]), key).toBeLessThan(1e-6);
    found.pinball.forEach((loss, t) => expect(Math.abs(loss - expected.pinball[t])).toBeLessThan(1e-6));
    found.intervals.flat().forEach((value, i) => {
      expect(Math.abs(value - expected.intervals.flat()[i])).toBeLessThan(1e-6);
    });
    expect(Math.abs(found.floorPinball - expected.floorPinball)).toBeLessThan(1e-6);
    expect(Math.abs(found.floorError - expected.floorError)).toBeLessThan(1e-6);
  });
});

describe('the floor of chance', () => {
  test('is what a forecast that is right loses in the long run', () => {
    const law = gammaPoissonForecast(20, 0);
    const stream = makeStream(3, 1);
    const runs = 40_000;
    let pinball = 0;
    let error = 0;
    for (let run = 0; run < runs; run += 1) {
      const losses = lossesOf(law, drawPoisson(stream, 20));
      pinball += losses.pinball / runs;
      error += losses.error / runs;
    }
    const floor = chanceFloor(law);
    // Five standard errors: the losses' own spread is about 3 and 1.
    expect(Math.abs(error - floor.error)).toBeLessThan((5 * 3) / Math.sqrt(runs));
    expect(Math.abs(pinball - floor.pinball)).toBeLessThan((5 * 1) / Math.sqrt(runs));
  });

  test('is zero where nothing is left to chance', () => {
    expect(chanceFloor(forecastOfLaw({ means: [0, 0] }))).toEqual({ pinball: 0, error: 0 });
  });
});

describe('sums of scores', () => {
  const scores = reference.cases.map(({ observed, score }, index) => ({
    ...score,
    observed,
    naiveError: index + 1,
    baselines: { lastWeek: { pinball: 2, error: 3 } },
    chance: index / 10,
    short: index % 2 === 0,
  }));
  const sumOf = (some: typeof scores) => {
    const sums = emptySums();
    some.forEach((score) => {
      addScore(sums, score);
    });
    return sums;
  };

  test('parts add up to the whole', () => {
    const whole = sumOf(scores);
    const merged = sumOf(scores.slice(0, 3));
    addSums(merged, sumOf(scores.slice(3)));
    const flat = (value: unknown): number[] =>
      typeof value === 'number' ? [value] : Object.values(value as object).flatMap(flat);
    flat(merged).forEach((value, i) => {
      expect(value).toBeCloseTo(flat(whole)[i], 9);
    });
  });

  test('say what the scores said', () => {
    const summary = summariseSums([sumOf(scores)]);
    const n = scores.length;
    const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
    expect(summary.n).toBe(n);
    expect(summary.logScore).toBeCloseTo(mean(scores.map(({ logScore }) => logScore)), 9);
    expect(summary.mase).toBeCloseTo(
      mean(scores.map(({ absoluteError }) => absoluteError)) / mean(scores.map(({ naiveError }) => naiveError)),
      9,
    );
    expect(summary.coverage[2].expected).toBeCloseTo(mean(scores.map(({ intervals }) => intervals[2][2])), 9);
    expect(summary.calledFor).toMatchObject({ n, share: 0.5 });
    expect(summary.pit.reduce((sum, height) => sum + height, 0)).toBeCloseTo(10, 9);
    // One week cannot tell how weeks differ.
    expect(summary.coverage[2].se).toBeNull();
  });

  test('an empty set gives nulls', () => {
    const summary = summariseSums([]);
    expect(summary).toMatchObject({ n: 0, mase: null, brier: null, logScore: null, chances: [] });
    expect(JSON.stringify(summary)).not.toContain('NaN');
  });

  test('a score without its whole law counts for the chance alone', () => {
    const sums = emptySums();
    addScore(sums, { ...scores[0], pinball: null, intervals: null, absoluteError: null, logScore: null });
    expect(sums).toMatchObject({ n: 1, laws: 0, pitN: 0 });
    expect(summariseSums([sums]).coverage[0].observed).toBeNull();
  });
});
