import { describe, expect, it } from 'vitest';
import {
  conditionalUniformTest,
  dispersionTest,
  equalBreaks,
  lewisTest,
  logTest,
  pooledDispersionTest,
  unround,
} from '../../../shared/stochastic/arrival-process-tests.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import reference from '../../reference/arrival-process.json' with { type: 'json' };
import data from '../../reference/real-event-times.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

const icu = [...data.intensiveCareArrivals].sort((a, b) => a - b);
const day = [0, 24];

function expectForms(times: ArrayLike<number>, expected: (typeof reference)['coal']) {
  for (const [test, want] of [
    [conditionalUniformTest, expected.conditionalUniform],
    [lewisTest, expected.lewis],
    [logTest, expected.log],
  ] as const) {
    const own = test(times, expected.breaks);
    expect(own.n).toBe(want.n);
    expectWithin(own.statistic, want.statistic, 1e-9, `${test.name} statistic`);
    if (want.p > 1e-300) expectRelative(own.p, want.p, 1e-6, `${test.name} p`);
    else expect(own.p).toBeLessThan(1e-290);
  }
}

// Source of values: SciPy kstest and chi2 (make-arrival-process.py); data sources in real-event-times.json.
describe('tests of the Poisson process on real series', () => {
  it('reject the coal-mining disasters as a homogeneous process', () => {
    expectForms(data.coalMiningDisasters, reference.coal);
    for (const test of [conditionalUniformTest, lewisTest, logTest]) {
      expect(test(data.coalMiningDisasters, [1851, 1963]).p).toBeLessThan(0.001);
    }
  });

  it('reject intensive-care arrivals with their rounding', () => {
    expectForms(icu, reference.icuRaw);
    expectForms(icu, reference.icuRawByHour);
    expect(lewisTest(icu, day).p).toBeLessThan(1e-60);
  });

  it('un-rounded by SciPy’s uniforms, agree with it, and the gaps’ distance falls by half', () => {
    expectForms(reference.icuUnroundedTimes, reference.icuUnrounded);
    expectForms(reference.icuUnroundedTimes, reference.icuUnroundedByHour);
    expect(reference.icuUnrounded.lewis.statistic).toBeLessThan(0.6 * reference.icuRaw.lewis.statistic);
  });

  it('un-rounding by the own stream does the same: ties go, the daily pattern stays', () => {
    const times = unround(makeStream(8), icu, 5 / 60);
    // Oracle for numpy’s stream: Lewis 0.27–0.29, conditional-uniform 0.22; rounded: 0.54 and 0.22.
    expectWithin(lewisTest(times, day).statistic, 0.28, 0.05, 'Lewis');
    expectWithin(
      conditionalUniformTest(times, day).statistic,
      reference.icuRaw.conditionalUniform.statistic,
      0.005,
      'CU',
    );
    expect(new Set(times).size).toBe(icu.length);
    const centred = unround(makeStream(8), icu, 5 / 60, 'nearest');
    expectWithin(centred[100], times[100] - 2.5 / 60, 1e-12, 'nearest');
  });

  it('dispersion of arrivals by hour of day and of disasters by decade', () => {
    for (const { counts, statistic, df, p } of [reference.dispersion.icuByHour, reference.dispersion.coalByDecade]) {
      const own = dispersionTest(counts);
      expectRelative(own.statistic, statistic, 1e-12, 'statistic');
      expect(own.df).toBe(df);
      expectRelative(own.index, statistic / df, 1e-12, 'index');
      expectRelative(own.p, p, 1e-9, 'p');
    }
  });
});

describe('rounding of a true Poisson process (Brown et al. 2005; Kim & Whitt 2014)', () => {
  const stream = makeStream(77);
  const times = Float64Array.from({ length: 3000 }, () => stream.uniform() * 480).sort();
  const rounded = times.map((t) => Math.floor(t * 12) / 12);
  const breaks = equalBreaks(0, 480, 60);

  it('is not rejected as drawn, is rejected rounded, and not rejected un-rounded', () => {
    for (const test of [conditionalUniformTest, lewisTest, logTest])
      expect(test(times, breaks).p).toBeGreaterThan(0.001);
    expect(lewisTest(rounded, breaks).p).toBeLessThan(1e-10);
    const again = unround(stream, rounded, 1 / 12);
    for (const test of [conditionalUniformTest, lewisTest, logTest])
      expect(test(again, breaks).p).toBeGreaterThan(0.001);
  });
});

describe('details', () => {
  it('an event on a break belongs to the later interval, on the end to the last', () => {
    const own = conditionalUniformTest([0, 1, 1.5, 2], [0, 1, 2]);
    // Positions 0 | 0, 0.5, 1, so the empirical law of 0, 0, 0.5, 1: distance ½ − 0.
    expect(own.statistic).toBe(0.5);
    expect(own.n).toBe(4);
  });

  it('groups pool by adding statistics and degrees of freedom; empty ones say nothing', () => {
    const a = dispersionTest([3, 5, 4]);
    const b = dispersionTest([10, 2]);
    const both = pooledDispersionTest([[3, 5, 4], [10, 2], [7], [0, 0, 0]]);
    expect(both.statistic).toBeCloseTo(a.statistic + b.statistic, 12);
    expect(both.df).toBe(3);
  });

  it('refuses bad input by name', () => {
    expect(() => dispersionTest([1])).toThrow(RangeError);
    expect(() => dispersionTest([1, -1])).toThrow(/count 1/);
    expect(() => conditionalUniformTest([], [0, 1])).toThrow(/empty/);
    expect(() => lewisTest([0.5], [1])).toThrow(/breaks/);
    expect(() => logTest([0.5], [1, 0])).toThrow(/breaks/);
    expect(() => logTest([0.5, 0.2], [0, 1])).toThrow(/ascend/);
    expect(() => logTest([0.5, NaN], [0, 1])).toThrow(RangeError);
    expect(() => logTest([0.5, 1.2], [0, 1])).toThrow(/within/);
    expect(() => unround(makeStream(1), [1], 0)).toThrow(/width/);
    expect(() => equalBreaks(2, 1, 3)).toThrow(RangeError);
  });
});
