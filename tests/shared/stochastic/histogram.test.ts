import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Histogram } from '../../../shared/stochastic/histogram.ts';
import { smallestQuantile } from '../../../shared/stochastic/quantile.ts';

function of(...values: number[]): Histogram {
  const histogram = new Histogram(4);
  for (const value of values) histogram.add(value);
  return histogram;
}

describe('Histogram', () => {
  it('quantile is the smallest n with P(N ≤ n) ≥ p; exceedance is P(N > b)', () => {
    // Worked by hand from the definitions.
    const histogram = of(0, 1, 1, 2, 2, 2, 3, 3, 5, 9);
    expect([0, 0.1, 0.11, 0.3, 0.5, 0.6, 0.61, 0.8, 0.9, 0.91, 1].map((p) => histogram.quantile(p))).toEqual([
      0, 0, 1, 1, 2, 2, 3, 3, 5, 9, 9,
    ]);
    expect([-1, 0, 2, 2.5, 3, 8, 9, 100].map((b) => histogram.exceedance(b))).toEqual([
      1, 0.9, 0.4, 0.4, 0.2, 0.1, 0, 0,
    ]);
    expect(histogram.mean).toBeCloseTo(2.8, 12);
    expect(histogram.variance).toBeCloseTo(5.96, 12);
    expect(histogram.total).toBe(10);
    expect(histogram.max).toBe(9);
    expect(histogram.cdf(2)).toBeCloseTo(0.6, 12);
  });

  it('agrees with the sorted sample', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 0, max: 400 }), { minLength: 1, maxLength: 60 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (values, p) => {
          const histogram = of(...values);
          const sorted = [...values].sort((a, b) => a - b);
          expect(histogram.quantile(p)).toBe(smallestQuantile(sorted, p));
          expect(histogram.exceedance(7)).toBe(values.filter((value) => value > 7).length / values.length);
        },
      ),
      { seed: 6 },
    );
  });

  it('merges, weighs, travels as counts and can be emptied', () => {
    const left = of(1, 2, 2);
    const right = new Histogram();
    right.add(2, 3);
    right.add(300, 2);
    right.add(500, 0);
    left.merge(right);
    expect([left.count(1), left.count(2), left.count(300), left.count(9999)]).toEqual([1, 5, 2, 0]);
    expect(left.total).toBe(8);
    expect(left.max).toBe(300);
    const copy = Histogram.fromCounts(left.toCounts());
    expect(copy.toCounts()).toEqual(left.toCounts());
    expect(copy.quantile(0.8)).toBe(300);
    left.clear();
    expect(left.total).toBe(0);
    expect(left.toCounts().length).toBe(0);
    expect(copy.total).toBe(8);
  });

  it('refuses what it cannot count', () => {
    const histogram = of(1);
    for (const bad of [-1, 0.5, NaN, Infinity, 70.5]) expect(() => histogram.add(bad)).toThrow(RangeError);
    for (const bad of [-1, 0.5, NaN]) expect(() => histogram.add(1, bad)).toThrow(/weight/);
    expect(() => histogram.quantile(1.1)).toThrow(/p must/);
    expect(() => histogram.exceedance(NaN)).toThrow(RangeError);
    expect(() => new Histogram().mean).toThrow(/empty/);
    expect(() => new Histogram().quantile(0.5)).toThrow(/empty/);
    expect(() => new Histogram(0)).toThrow(/capacity/);
  });
});
