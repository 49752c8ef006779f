import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drawBeta } from '../../../shared/stochastic/beta.ts';
import {
  chiSquareExceedance,
  chiSquareQuantile,
  drawGamma,
  gammaCdf,
  gammaExceedance,
  gammaQuantile,
} from '../../../shared/stochastic/gamma.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import published from '../../reference/continuous-quantiles.json' with { type: 'json' };
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { continuousFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('gamma law', () => {
  it.each(reference.gammaCdf)('distribution function at $x, shape $shape (mpmath)', (row) => {
    expectRelative(gammaCdf(row.x, row.shape), row.cdf, 1e-11, 'cdf');
    expectRelative(gammaExceedance(row.x, row.shape), row.exceedance, 1e-11, 'exceedance');
  });

  it.each(reference.gammaQuantile)('quantile $p, shape $shape (SciPy)', (row) => {
    expectRelative(gammaQuantile(row.p, row.shape), row.x, 1e-9, 'quantile');
  });

  it('quantiles agree with SciPy and R (56 gamma, 80 χ²)', () => {
    for (const row of published.gamma)
      expectRelative(gammaQuantile(row.p, row.shape), row.x, 1e-10, JSON.stringify(row));
    for (const row of published.chiSquare) {
      expectRelative(chiSquareQuantile(row.p, row.df), row.x, 1e-10, JSON.stringify(row));
    }
  });

  it.each(published.publishedChiSquare)('printed χ² quantile $published, p = $p, df $df ($source, $how)', (cell) => {
    expectWithin(chiSquareQuantile(cell.p, cell.df), cell.published, cell.tolerance, 'half the last digit');
  });

  it('the quantile undoes the distribution function, which rises', () => {
    const shape = fc.double({ min: 0.05, max: 3000, noNaN: true });
    fc.assert(
      fc.property(fc.double({ min: 1e-9, max: 1 - 1e-9, noNaN: true }), shape, (p, a) => {
        const x = gammaQuantile(p, a);
        expect(Math.abs(gammaCdf(x, a) / p - 1)).toBeLessThan(1e-10);
        expect(gammaCdf(x * 1.01, a)).toBeGreaterThanOrEqual(gammaCdf(x, a));
      }),
      { seed: 2 },
    );
  });

  it.each([0.05, 0.4, 1, 1.7, 30, 2500])('draws of shape %d follow the law', (shape) => {
    const stream = makeStream(31, Math.round(shape * 100));
    const draws = drawMany(50_000, () => drawGamma(stream, shape));
    expect(continuousFit(draws, (x) => gammaCdf(x, shape))).toBeGreaterThan(0.001);
  });

  it('refuses bad input by name', () => {
    const stream = makeStream(1);
    for (const bad of [0, -1, NaN, Infinity]) {
      expect(() => drawGamma(stream, bad)).toThrow(/shape/);
      expect(() => gammaCdf(1, bad)).toThrow(/shape/);
      expect(() => chiSquareQuantile(0.5, bad)).toThrow(/df/);
    }
    for (const p of [-0.1, 1.5, NaN]) expect(() => gammaQuantile(p, 2)).toThrow(/p must/);
    expect(() => chiSquareExceedance(-1, 2)).toThrow(/x must/);
    expect(gammaQuantile(0, 2)).toBe(0);
    expect(gammaQuantile(1, 2)).toBe(Infinity);
  });
});

describe('drawBeta', () => {
  it('Beta(a, 1) has distribution function x^a, Beta(½, ½) the arcsine law, Beta(2, 3) its polynomial', () => {
    const stream = makeStream(41);
    const fit = (a: number, b: number, cdf: (x: number) => number) =>
      continuousFit(
        drawMany(50_000, () => drawBeta(stream, a, b)),
        cdf,
      );
    expect(fit(0.3, 1, (x) => x ** 0.3)).toBeGreaterThan(0.001);
    expect(fit(4, 1, (x) => x ** 4)).toBeGreaterThan(0.001);
    expect(fit(0.5, 0.5, (x) => (2 / Math.PI) * Math.asin(Math.sqrt(x)))).toBeGreaterThan(0.001);
    expect(fit(2, 3, (x) => x * x * (6 - 8 * x + 3 * x * x))).toBeGreaterThan(0.001);
  });

  it('holds for tiny parameters and refuses bad ones', () => {
    const stream = makeStream(42);
    const draws = drawMany(5000, () => drawBeta(stream, 1e-4, 1e-4));
    expect(draws.every((x) => x >= 0 && x <= 1)).toBe(true);
    expect(() => drawBeta(stream, 0, 1)).toThrow(/a must/);
    expect(() => drawBeta(stream, 1, NaN)).toThrow(/b must/);
  });
});
