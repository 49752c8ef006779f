import { jStat } from 'jstat';
import {
  linearRegression,
  mean,
  sampleCorrelation,
  sampleKurtosis,
  sampleSkewness,
  sampleVariance,
} from 'simple-statistics';
import { describe, expect, it } from 'vitest';
import { binomialCdf } from '../../../shared/stochastic/binomial.ts';
import { chiSquareQuantile, gammaCdf, gammaQuantile, logGamma } from '../../../shared/stochastic/gamma.ts';
import { drawNormal, normalQuantile } from '../../../shared/stochastic/normal.ts';
import { poissonCdf } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';

// Outside reference: jStat 1.9.6, an independent implementation (its Poisson is used at small means, where it is sound).
describe('laws agree with jStat', () => {
  const levels = [0.001, 0.025, 0.1, 0.5, 0.9, 0.975, 0.999];

  it('gamma and χ² quantiles to 1e-6', () => {
    for (const shape of [0.5, 1, 2.5, 10, 80, 400]) {
      for (const p of levels) {
        const expected = jStat.gamma.inv(p, shape, 1);
        expect(Math.abs(gammaQuantile(p, shape) - expected)).toBeLessThan(1e-6 * Math.max(1, expected));
        const chi = jStat.chisquare.inv(p, 2 * shape);
        expect(Math.abs(chiSquareQuantile(p, 2 * shape) - chi)).toBeLessThan(1e-6 * Math.max(1, chi));
      }
    }
  });

  it('gamma distribution function, log-gamma and normal quantiles', () => {
    for (const shape of [0.5, 3, 42]) {
      for (const x of [0.1, 1, 5, 40, 70]) {
        expect(gammaCdf(x, shape)).toBeCloseTo(jStat.gamma.cdf(x, shape, 1), 10);
      }
    }
    for (const x of [0.1, 1.5, 20, 1234.5]) expect(logGamma(x)).toBeCloseTo(jStat.gammaln(x), 8);
    for (const p of levels) expect(normalQuantile(p)).toBeCloseTo(jStat.normal.inv(p, 0, 1), 6);
  });

  it('Poisson and binomial distribution functions', () => {
    for (const rate of [0.3, 4, 30, 60]) {
      for (const n of [0, 2, 20, 50]) expect(poissonCdf(n, rate)).toBeCloseTo(jStat.poisson.cdf(n, rate), 9);
    }
    for (const k of [0, 3, 10, 20]) expect(binomialCdf(k, 20, 0.3)).toBeCloseTo(jStat.binomial.cdf(k, 20, 0.3), 9);
  });
});

// Outside reference: simple-statistics 7.12.1 computes the sample statistics.
describe('random streams', () => {
  const draws = 20_000;

  it('give normal draws with the moments of the law, within four standard errors', () => {
    const stream = makeStream(20_261_201, 3);
    const sample = Array.from({ length: draws }, () => drawNormal(stream));
    expect(Math.abs(mean(sample))).toBeLessThan(4 / Math.sqrt(draws));
    expect(Math.abs(sampleVariance(sample) - 1)).toBeLessThan(4 * Math.sqrt(2 / draws));
    expect(Math.abs(sampleSkewness(sample))).toBeLessThan(4 * Math.sqrt(6 / draws));
    expect(Math.abs(sampleKurtosis(sample))).toBeLessThan(4 * Math.sqrt(24 / draws));
  });

  it('have no correlation from draw to draw, nor between neighbouring substreams, nor a trend', () => {
    const uniforms = (path: number) => {
      const stream = makeStream(7, path);
      return Array.from({ length: draws }, () => stream.uniform());
    };
    const first = uniforms(1);
    const limit = 4 / Math.sqrt(draws);
    expect(Math.abs(sampleCorrelation(first.slice(1), first.slice(0, -1)))).toBeLessThan(limit);
    expect(Math.abs(sampleCorrelation(first, uniforms(2)))).toBeLessThan(limit);
    const starts = Array.from({ length: draws }, (_, index) => [index / draws, makeStream(7, 9, index).uniform()]);
    // Slope of uniforms on [0, 1]: standard error √(1/12) / √(n/12) = 1/√n.
    expect(Math.abs(linearRegression(starts).m)).toBeLessThan(limit);
  });
});
