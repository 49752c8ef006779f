import { describe, expect, it } from 'vitest';
import { conditionalUniformTest, dispersionTest } from '../../../shared/stochastic/arrival-process-tests.ts';
import { drawExponential } from '../../../shared/stochastic/exponential.ts';
import { kolmogorovPValue, kolmogorovStatistic } from '../../../shared/stochastic/kolmogorov.ts';
import {
  drawTimesAtConstantRate,
  drawTimesByInversion,
  drawTimesByThinning,
} from '../../../shared/stochastic/point-process.ts';
import { poissonPmf } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import { continuousFit, countFit, drawMany } from '../../support/goodness-of-fit.ts';

const breaks = [0, 3, 3.5, 8, 12];
const rates = [2, 0, 9, 4.5];
const total = 6 + 0 + 40.5 + 18;

function cumulative(t: number): number {
  let sum = 0;
  for (let i = 0; i < rates.length; i += 1) sum += rates[i] * Math.max(0, Math.min(t, breaks[i + 1]) - breaks[i]);
  return sum;
}

const rateAt = (t: number) => rates[breaks.findIndex((b, i) => t >= b && t < breaks[i + 1])];

/** KS p-value of p-values against the uniform law: the second level of the test. */
function secondLevel(pValues: Float64Array): number {
  return kolmogorovPValue(kolmogorovStatistic(pValues.sort()), pValues.length);
}

describe('exponential draws', () => {
  it('follow the law', () => {
    const stream = makeStream(81);
    expect(
      continuousFit(
        drawMany(100_000, () => drawExponential(stream)),
        (x) => -Math.expm1(-x),
      ),
    ).toBeGreaterThan(0.001);
  });
});

describe('1,000 seeds: the p-values of each test are themselves uniform', () => {
  const seeds = Array.from({ length: 1000 }, (_, seed) => seed);

  it('gaps are exponential', () => {
    const pValues = Float64Array.from(seeds, (seed) => {
      const times = drawTimesAtConstantRate(makeStream(seed, 1), 5, 0, 40);
      // Gaps up to the last event of a fixed number, or long gaps would be missing.
      const uniforms = Float64Array.from({ length: 100 }, (_, i) => -Math.expm1(-5 * (times[i] - (times[i - 1] ?? 0))));
      return kolmogorovPValue(kolmogorovStatistic(uniforms.sort()), 100);
    });
    expect(secondLevel(pValues)).toBeGreaterThan(0.001);
  });

  it('counts are Poisson (dispersion)', () => {
    const pValues = Float64Array.from(seeds, (seed) => {
      const times = drawTimesByInversion(makeStream(seed, 2), [0, 120], [25]);
      const counts = new Float64Array(120);
      for (const t of times) counts[Math.floor(t)] += 1;
      return dispersionTest(counts).p;
    });
    expect(secondLevel(pValues)).toBeGreaterThan(0.001);
  });

  it('given their number, times are uniform', () => {
    const pValues = Float64Array.from(seeds, (seed) => {
      const times = drawTimesByInversion(makeStream(seed, 3), breaks, rates);
      return conditionalUniformTest(times.map(cumulative), [0, total]).p;
    });
    expect(secondLevel(pValues)).toBeGreaterThan(0.001);
  });

  it('clusters and long gaps follow from the exponential’s mode at 0 (common practice, no source)', () => {
    const stream = makeStream(9, 4);
    const times = drawTimesAtConstantRate(stream, 6, 0, 20_000);
    const gaps = times.slice(1).map((t, i) => t - times[i]);
    const share = (test: (gap: number) => boolean) => gaps.filter(test).length / gaps.length;
    // Exponential gaps of mean 10 minutes: 9.5 % under 1 minute, 5.0 % over 30 minutes.
    expect(share((gap) => gap < 1 / 60)).toBeCloseTo(1 - Math.exp(-0.1), 2);
    expect(share((gap) => gap > 0.5)).toBeCloseTo(Math.exp(-3), 2);
  });
});

describe('piecewise inversion and thinning (Lewis & Shedler 1979)', () => {
  const methods = {
    inversion: (seed: number) => drawTimesByInversion(makeStream(seed, 5), breaks, rates),
    thinning: (seed: number) => drawTimesByThinning(makeStream(seed, 6), rateAt, 9, 0, 12),
  };

  it.each(Object.entries(methods))('%s: counts are Poisson, places follow the cumulative rate', (_, draw) => {
    const runs = Array.from({ length: 4000 }, (_, seed) => draw(seed));
    expect(
      countFit(
        runs.map((times) => times.length),
        (n) => poissonPmf(n, total),
      ),
    ).toBeGreaterThan(0.001);
    expect(
      countFit(
        runs.map((times) => times.filter((t) => t < 3).length),
        (n) => poissonPmf(n, 6),
      ),
    ).toBeGreaterThan(0.001);
    const places = runs.slice(0, 1000).flatMap((times) => times.map((t) => cumulative(t) / total));
    expect(continuousFit(places, (u) => u)).toBeGreaterThan(0.001);
    for (const times of runs.slice(0, 50)) {
      expect(times.every((t, i) => t >= 0 && t < 12 && !(t > 3 && t < 3.5) && (i === 0 || t > times[i - 1]))).toBe(
        true,
      );
    }
  });

  it('refuse bad input by name', () => {
    const stream = makeStream(1);
    expect(() => drawTimesAtConstantRate(stream, -1, 0, 1)).toThrow(/rate/);
    expect(() => drawTimesAtConstantRate(stream, 1, 1, 0)).toThrow(/from/);
    expect(() => drawTimesAtConstantRate(stream, 1, 0, Infinity)).toThrow(/finite/);
    expect(() => drawTimesByInversion(stream, [0, 1], [1, 2])).toThrow(/breaks/);
    expect(() => drawTimesByInversion(stream, [0, 1, 2], [1, NaN])).toThrow(/rates\[1\]/);
    expect(() => drawTimesByInversion(stream, [0, 2, 1], [1, 1])).toThrow(RangeError);
    expect(() => drawTimesByThinning(stream, () => 3, 2, 0, 10)).toThrow(/highestRate/);
    expect(() => drawTimesByThinning(stream, () => NaN, 2, 0, 10)).toThrow(/rate at/);
    expect(drawTimesAtConstantRate(stream, 0, 0, 5)).toEqual([]);
    expect(drawTimesByThinning(stream, () => 0, 0, 0, 5)).toEqual([]);
  });
});
