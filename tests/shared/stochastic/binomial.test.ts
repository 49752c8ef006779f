import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  binomialCdf,
  binomialExceedance,
  binomialLogPmf,
  binomialPmf,
  binomialQuantile,
  drawBinomial,
} from '../../../shared/stochastic/binomial.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectRelative } from '../../support/closeness.ts';
import { countFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('binomial law', () => {
  it('probabilities agree with mpmath to 20,000 trials (126 cells)', () => {
    for (const row of reference.binomial) {
      const label = `n ${row.trials}, p ${row.chance}, k ${row.n}`;
      expectRelative(
        Math.exp(binomialLogPmf(row.n, row.trials, row.chance) - row.logPmf),
        1,
        1e-11,
        `log pmf, ${label}`,
      );
      expectRelative(binomialPmf(row.n, row.trials, row.chance), row.pmf, 1e-11, `pmf, ${label}`);
      expectRelative(binomialCdf(row.n, row.trials, row.chance), row.cdf, 1e-11, `cdf, ${label}`);
      expectRelative(binomialExceedance(row.n, row.trials, row.chance), row.exceedance, 1e-11, `exceedance, ${label}`);
    }
  });

  it('the quantile undoes the distribution function', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 3000 }),
        fc.double({ min: 0.01, max: 0.99, noNaN: true }),
        fc.double({ min: -4, max: 4, noNaN: true }),
        (n, p, z) => {
          const k = Math.min(n, Math.max(0, Math.round(n * p + z * Math.sqrt(n * p * (1 - p)))));
          fc.pre(binomialExceedance(k, n, p) > 1e-11 || k === n);
          fc.pre(k < n || binomialPmf(n, n, p) > 1e-11);
          expect(binomialQuantile(binomialCdf(k, n, p), n, p)).toBe(k);
          expect(binomialCdf(k + 1, n, p)).toBeGreaterThanOrEqual(binomialCdf(k, n, p));
        },
      ),
      { seed: 5 },
    );
  });

  it('certain outcomes', () => {
    expect(binomialPmf(0, 7, 0)).toBe(1);
    expect(binomialPmf(7, 7, 1)).toBe(1);
    expect(binomialCdf(6, 7, 1)).toBe(0);
    expect(binomialExceedance(6, 7, 1)).toBe(1);
    expect(binomialPmf(8, 7, 0.5)).toBe(0);
    expect(binomialPmf(-1, 7, 0.5)).toBe(0);
    expect(binomialPmf(0, 0, 0.5)).toBe(1);
    expect(binomialQuantile(1, 7, 0.5)).toBe(7);
    expect(binomialQuantile(0.4, 7, 1)).toBe(7);
    const stream = makeStream(1);
    expect(drawBinomial(stream, 9, 0)).toBe(0);
    expect(drawBinomial(stream, 9, 1)).toBe(9);
    expect(drawBinomial(stream, 0, 0.5)).toBe(0);
  });

  it.each([
    [1, 0.2],
    [12, 0.3],
    [20, 0.3],
    [20, 0.97],
    [60, 0.5],
    [400, 0.02],
    [400, 0.7],
    [20_000, 0.13],
  ])('draws of %d trials, chance %d follow the exact law', (n, p) => {
    const stream = makeStream(71, n, Math.round(p * 100));
    expect(
      countFit(
        drawMany(100_000, () => drawBinomial(stream, n, p)),
        (k) => binomialPmf(k, n, p),
      ),
    ).toBeGreaterThan(0.001);
  });

  it('refuses bad input by name', () => {
    const stream = makeStream(1);
    for (const bad of [-1, 1.5, NaN, Infinity]) {
      expect(() => drawBinomial(stream, bad, 0.5)).toThrow(/n must/);
      expect(() => binomialLogPmf(1, bad, 0.5)).toThrow(/n must/);
    }
    for (const bad of [-0.1, 1.1, NaN]) {
      expect(() => drawBinomial(stream, 5, bad)).toThrow(/p must/);
      expect(() => binomialCdf(1, 5, bad)).toThrow(/p must/);
      expect(() => binomialQuantile(bad, 5, 0.5)).toThrow(/p must/);
      expect(() => binomialQuantile(0.5, 5, bad)).toThrow(/chance must/);
    }
    expect(() => binomialPmf(0.5, 5, 0.5)).toThrow(/k must/);
  });
});
