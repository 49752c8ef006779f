import { describe, expect, it } from 'vitest';
import { binomialPmf } from '../../../shared/stochastic/binomial.ts';
import {
  binomialPmfArray,
  convolve,
  convolveAll,
  gammaPoissonPmfArray,
  poissonPmfArray,
} from '../../../shared/stochastic/convolve.ts';
import { gammaPoissonPmf, gammaPoissonQuantile } from '../../../shared/stochastic/gamma-poisson.ts';
import { pmfExceedance, pmfMean, pmfQuantile, pmfVariance } from '../../../shared/stochastic/pmf.ts';
import { poissonExceedance, poissonPmf, poissonQuantile } from '../../../shared/stochastic/poisson.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';

const sum = (pmf: Float64Array) => pmf.reduce((total, p) => total + p, 0);

describe('laws as arrays', () => {
  it.each([1e-6, 0.4, 7, 159, 2000])('Poisson of mean %d: entries, what is cut off, mean and variance', (mean) => {
    const pmf = poissonPmfArray(mean);
    expect(poissonExceedance(pmf.length - 1, mean)).toBeLessThan(1e-14);
    pmf.forEach((p, n) => {
      if (p > 1e-300) expectRelative(p, poissonPmf(n, mean), 1e-11, `n ${n}`);
    });
    expectWithin(sum(pmf), 1, 1e-12, 'sum');
    expectRelative(pmfMean(pmf), mean, 1e-11, 'mean');
    expectRelative(pmfVariance(pmf), mean, 1e-9, 'variance');
    for (const p of [0.05, 0.5, 0.9, 0.999]) expect(pmfQuantile(pmf, p)).toBe(poissonQuantile(p, mean));
  });

  it.each([
    [0.3, 4],
    [12, 1],
    [25, 0.05],
    [900, 0.003],
    [40, 1e-12],
  ])('gamma–Poisson of mean %d, φ %d', (mean, phi) => {
    const pmf = gammaPoissonPmfArray(mean, phi);
    pmf.forEach((p, n) => {
      if (p > 1e-300) expectRelative(p, gammaPoissonPmf(n, mean, phi), 1e-10, `n ${n}`);
    });
    expectWithin(sum(pmf), 1, 1e-12, 'sum');
    expectRelative(pmfMean(pmf), mean, 1e-9, 'mean');
    expectRelative(pmfVariance(pmf), mean + phi * mean * mean, 1e-7, 'variance');
    for (const p of [0.05, 0.5, 0.9, 0.999]) expect(pmfQuantile(pmf, p)).toBe(gammaPoissonQuantile(p, mean, phi));
  });

  it.each([
    [0, 0.3],
    [9, 0],
    [9, 1],
    [33, 0.27],
    [1500, 0.8],
  ])('binomial of %d trials, chance %d', (n, p) => {
    const pmf = binomialPmfArray(n, p);
    expect(pmf.length).toBe(n + 1);
    pmf.forEach((value, k) => {
      if (value > 1e-300) expectRelative(value, binomialPmf(k, n, p), 1e-10, `k ${k}`);
    });
    expectWithin(sum(pmf), 1, 1e-12, 'sum');
  });

  it('a smaller tail makes a longer array', () => {
    expect(poissonPmfArray(20, 1e-20).length).toBeGreaterThan(poissonPmfArray(20, 1e-3).length);
    expect(poissonExceedance(poissonPmfArray(20, 1e-3).length - 1, 20)).toBeLessThan(1e-3);
  });
});

describe('convolve', () => {
  it('Poisson + Poisson is Poisson; binomials of one chance add up (additivity, Feller 1968, VI.10)', () => {
    const poisson = convolve(poissonPmfArray(3.5), poissonPmfArray(20));
    for (let n = 0; n < 60; n += 1) expectWithin(poisson[n], poissonPmf(n, 23.5), 1e-14, `n ${n}`);
    const binomial = convolve(binomialPmfArray(7, 0.3), binomialPmfArray(12, 0.3), 0);
    expect(binomial.length).toBe(20);
    for (let k = 0; k <= 19; k += 1) expectRelative(binomial[k], binomialPmf(k, 19, 0.3), 1e-12, `k ${k}`);
  });

  it('cuts less than the tail, keeps order and empties nothing', () => {
    const a = Float64Array.of(0.5, 0.5);
    const b = Float64Array.of(0.25, 0.75 - 1e-16, 1e-16);
    expect(Array.from(convolve(a, b, 0))).toEqual(Array.from(convolve(b, a, 0)));
    expect(convolve(a, b).length).toBe(3);
    expect(convolve(a, b, 0).length).toBe(4);
    expect(Array.from(convolveAll([]))).toEqual([1]);
    expect(sum(convolveAll([a, a, a, b]))).toBeCloseTo(1, 14);
    expect(pmfExceedance(convolve(a, a), 0)).toBe(0.75);
    expect(pmfExceedance(a, -1)).toBe(1);
    expect(pmfExceedance(a, 1)).toBe(0);
  });

  it('refuses bad input by name', () => {
    expect(() => poissonPmfArray(-1)).toThrow(/mean/);
    expect(() => poissonPmfArray(1, 0)).toThrow(/tail/);
    expect(() => gammaPoissonPmfArray(1, NaN)).toThrow(/phi/);
    expect(() => binomialPmfArray(2.5, 0.1)).toThrow(/n must/);
    expect(() => binomialPmfArray(2, 1.1)).toThrow(/p must/);
    expect(() => convolve(new Float64Array(0), Float64Array.of(1))).toThrow(RangeError);
    expect(() => pmfQuantile(Float64Array.of(1), -1)).toThrow(/p must/);
    expect(() => pmfQuantile(new Float64Array(0), 0.5)).toThrow(RangeError);
    expect(() => pmfExceedance(Float64Array.of(1), NaN)).toThrow(RangeError);
  });
});
