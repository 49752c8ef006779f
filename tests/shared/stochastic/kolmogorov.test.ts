import { describe, expect, it } from 'vitest';
import { kolmogorovPValue, kolmogorovStatistic } from '../../../shared/stochastic/kolmogorov.ts';
import reference from '../../reference/arrival-process.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

describe('kolmogorovPValue', () => {
  it('agrees with SciPy kstwo (exact there up to n = 140, Pelz & Good’s expansion to about 10⁻⁶ above)', () => {
    for (const { n, d, p } of reference.kolmogorov) {
      const label = `n ${n}, d ${d}`;
      if (n <= 140 || n * d * d >= 4) expectRelative(kolmogorovPValue(d, n), p, 1e-9, label);
      else if (n <= 400) expectWithin(kolmogorovPValue(d, n), p, 2e-6, label);
      else expectWithin(kolmogorovPValue(d, n), p, 5e-5, label);
    }
  });

  it('n = 1: P(D ≥ d) = 2 (1 − d) from d = ½ on (worked by hand)', () => {
    for (const d of [0.5, 0.6, 0.9]) expectRelative(kolmogorovPValue(d, 1), 2 * (1 - d), 1e-12, `d ${d}`);
    expect(kolmogorovPValue(0.4, 1)).toBe(1);
    expect(kolmogorovPValue(1, 1)).toBe(0);
  });

  it('falls in d without a jump where the method changes', () => {
    for (const n of [60, 400, 401, 2000]) {
      const edge = Math.sqrt(4 / n);
      const below = kolmogorovPValue(edge * (1 - 1e-9), n);
      expectWithin(below, kolmogorovPValue(edge, n), 1e-5, `n ${n}`);
    }
  });

  it('the statistic is the largest step distance', () => {
    expect(kolmogorovStatistic([0.5])).toBe(0.5);
    expect(kolmogorovStatistic([0.1, 0.2, 0.9])).toBeCloseTo(2 / 3 - 0.2, 14);
    expect(() => kolmogorovStatistic([])).toThrow(RangeError);
    expect(() => kolmogorovStatistic([0.3, 1.2])).toThrow(/value 1/);
    expect(() => kolmogorovPValue(NaN, 4)).toThrow(/d must/);
    expect(() => kolmogorovPValue(0.1, 0)).toThrow(/n must/);
  });
});
