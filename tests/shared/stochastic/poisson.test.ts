import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  drawPoisson,
  poissonCdf,
  poissonExceedance,
  poissonLogPmf,
  poissonPmf,
  poissonQuantile,
} from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import quantiles from '../../reference/count-quantiles.json' with { type: 'json' };
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectRelative } from '../../support/closeness.ts';
import { countFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('Poisson law', () => {
  it('probabilities agree with mpmath to mean 2,000 (76 cells)', () => {
    for (const row of reference.poisson) {
      const label = `mean ${row.mean}, n ${row.n}`;
      expectRelative(Math.exp(poissonLogPmf(row.n, row.mean) - row.logPmf), 1, 1e-11, `log pmf, ${label}`);
      expectRelative(poissonPmf(row.n, row.mean), row.pmf, 1e-11, `pmf, ${label}`);
      expectRelative(poissonCdf(row.n, row.mean), row.cdf, 1e-11, `cdf, ${label}`);
      expectRelative(poissonExceedance(row.n, row.mean), row.exceedance, 1e-11, `exceedance, ${label}`);
    }
  });

  it('quantiles agree with SciPy and R (16 means × 12 levels)', () => {
    for (const { mean, q } of quantiles.poisson) {
      for (const [p, n] of Object.entries(q)) expect(poissonQuantile(Number(p), mean), `mean ${mean}, p ${p}`).toBe(n);
    }
  });

  it('beds needed: the smallest b with P(N > b) ≤ risk (SciPy, R; 72 cells)', () => {
    for (const row of quantiles.bedsNeeded) {
      expect(poissonQuantile(1 - row.risk, row.mean), JSON.stringify(row)).toBe(row['beds_strict_P(N>b)']);
    }
  });

  it('the quantile undoes the distribution function, which rises to 1', () => {
    const mean = fc.double({ min: 0.01, max: 2500, noNaN: true });
    fc.assert(
      fc.property(mean, fc.double({ min: -4, max: 4, noNaN: true }), (m, z) => {
        const n = Math.max(0, Math.round(m + z * Math.sqrt(m)));
        expect(poissonQuantile(poissonCdf(n, m), m)).toBe(n);
        expect(poissonCdf(n + 1, m)).toBeGreaterThanOrEqual(poissonCdf(n, m));
        expect(Math.abs(poissonCdf(n, m) + poissonExceedance(n, m) - 1)).toBeLessThan(1e-12);
      }),
      { seed: 3 },
    );
  });

  it('mean 0 is certain 0; outside the range nothing', () => {
    expect(poissonPmf(0, 0)).toBe(1);
    expect(poissonPmf(1, 0)).toBe(0);
    expect(poissonPmf(-1, 3)).toBe(0);
    expect(poissonCdf(-1, 3)).toBe(0);
    expect(poissonCdf(Infinity, 3)).toBe(1);
    expect(poissonExceedance(-0.5, 3)).toBe(1);
    expect(poissonQuantile(0.99, 0)).toBe(0);
    expect(poissonQuantile(1, 3)).toBe(Infinity);
    expect(poissonCdf(3.9, 5)).toBe(poissonCdf(3, 5));
  });

  it.each([0.02, 1, 3, 9.99, 10, 12.5, 50, 411.7])('draws of mean %d follow the exact law', (mean) => {
    const stream = makeStream(51, Math.round(mean * 100));
    expect(
      countFit(
        drawMany(100_000, () => drawPoisson(stream, mean)),
        (n) => poissonPmf(n, mean),
      ),
    ).toBeGreaterThan(0.001);
  });

  it('refuses bad input by name', () => {
    const stream = makeStream(1);
    for (const bad of [-1, NaN, Infinity]) {
      expect(() => poissonLogPmf(1, bad)).toThrow(/mean/);
      expect(() => poissonCdf(1, bad)).toThrow(/mean/);
      expect(() => drawPoisson(stream, bad)).toThrow(/mean/);
    }
    for (const p of [-0.1, 1.1, NaN]) expect(() => poissonQuantile(p, 2)).toThrow(/p must/);
    expect(() => poissonLogPmf(1.5, 2)).toThrow(/whole/);
    expect(() => poissonCdf(NaN, 2)).toThrow(/n must/);
  });
});
