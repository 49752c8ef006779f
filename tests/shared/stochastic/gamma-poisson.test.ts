import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  drawGammaPoisson,
  gammaPoissonCdf,
  gammaPoissonExceedance,
  gammaPoissonLogPmf,
  gammaPoissonPmf,
  gammaPoissonQuantile,
} from '../../../shared/stochastic/gamma-poisson.ts';
import { poissonCdf, poissonLogPmf } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import quantiles from '../../reference/count-quantiles.json' with { type: 'json' };
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectRelative } from '../../support/closeness.ts';
import { countFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('gamma–Poisson law', () => {
  it('probabilities agree with mpmath to mean 2,000 and φ from 10 to 10⁻¹² (143 cells)', () => {
    for (const row of reference.gammaPoisson) {
      const label = `mean ${row.mean}, φ ${row.phi}, n ${row.n}`;
      expectRelative(
        Math.exp(gammaPoissonLogPmf(row.n, row.mean, row.phi) - row.logPmf),
        1,
        1e-11,
        `log pmf, ${label}`,
      );
      expectRelative(gammaPoissonPmf(row.n, row.mean, row.phi), row.pmf, 1e-11, `pmf, ${label}`);
      expectRelative(gammaPoissonCdf(row.n, row.mean, row.phi), row.cdf, 1e-11, `cdf, ${label}`);
      expectRelative(gammaPoissonExceedance(row.n, row.mean, row.phi), row.exceedance, 1e-11, `exceedance, ${label}`);
    }
  });

  it('quantiles agree with SciPy and R (25 laws by mean and size, 48 predictive laws)', () => {
    for (const { mean, size, q, cdf_at_mean } of quantiles.gammaPoisson) {
      for (const [p, n] of Object.entries(q)) {
        expect(gammaPoissonQuantile(Number(p), mean, 1 / size), `mean ${mean}, size ${size}, p ${p}`).toBe(n);
      }
      expectRelative(
        gammaPoissonCdf(Math.floor(mean), mean, 1 / size),
        cdf_at_mean,
        1e-11,
        `mean ${mean}, size ${size}`,
      );
    }
    for (const { mean, size, q, pmf_0_to_5 } of quantiles.predictive) {
      for (const [p, n] of Object.entries(q)) {
        expect(gammaPoissonQuantile(Number(p), mean, 1 / size), `mean ${mean}, size ${size}, p ${p}`).toBe(n);
      }
      pmf_0_to_5.forEach((value, n) => {
        expectRelative(gammaPoissonPmf(n, mean, 1 / size), value, 1e-10, `mean ${mean}, size ${size}, n ${n}`);
      });
    }
  });

  it('φ → 0 is Poisson without a seam', () => {
    for (const phi of [0, 1e-320, 1e-300, 1e-200, 1e-20]) {
      for (const n of [0, 1, 90, 2000]) {
        expectRelative(Math.exp(gammaPoissonLogPmf(n, 95, phi) - poissonLogPmf(n, 95)), 1, 1e-12, `φ ${phi}, n ${n}`);
        expectRelative(gammaPoissonCdf(n, 95, phi), poissonCdf(n, 95), 1e-12, `φ ${phi}, n ${n}`);
      }
    }
  });

  it('the quantile undoes the distribution function', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.05, max: 500, noNaN: true }),
        fc.double({ min: 1e-6, max: 3, noNaN: true }),
        fc.double({ min: -2, max: 3, noNaN: true }),
        (mean, phi, z) => {
          const n = Math.max(0, Math.round(mean + z * Math.sqrt(mean + phi * mean * mean)));
          expect(gammaPoissonQuantile(gammaPoissonCdf(n, mean, phi), mean, phi)).toBe(n);
          expect(gammaPoissonCdf(n + 1, mean, phi)).toBeGreaterThanOrEqual(gammaPoissonCdf(n, mean, phi));
        },
      ),
      { seed: 4 },
    );
  });

  it.each([
    [0.6, 0.5],
    [3, 2],
    [40, 0.05],
    [160, 1e-12],
  ])('draws of mean %d, φ %d follow the exact law', (mean, phi) => {
    const stream = makeStream(61, Math.round(mean));
    const draws = drawMany(100_000, () => drawGammaPoisson(stream, mean, phi));
    expect(countFit(draws, (n) => gammaPoissonPmf(n, mean, phi))).toBeGreaterThan(0.001);
  });

  it('refuses bad input by name', () => {
    const stream = makeStream(1);
    for (const bad of [-1, NaN, Infinity]) {
      expect(() => gammaPoissonLogPmf(1, 2, bad)).toThrow(/phi/);
      expect(() => gammaPoissonCdf(1, bad, 0.1)).toThrow(/mean/);
      expect(() => drawGammaPoisson(stream, bad, 0.1)).toThrow(/mean/);
      expect(() => drawGammaPoisson(stream, 1, bad)).toThrow(/phi/);
    }
    expect(() => gammaPoissonQuantile(2, 1, 1)).toThrow(/p must/);
    expect(() => gammaPoissonPmf(0.5, 1, 1)).toThrow(/whole/);
    expect(gammaPoissonQuantile(1, 3, 0.1)).toBe(Infinity);
    expect(gammaPoissonPmf(-2, 3, 0.1)).toBe(0);
    expect(gammaPoissonPmf(0, 0, 0.1)).toBe(1);
  });
});
