import { describe, expect, it } from 'vitest';
import { sampleQuantile, smallestQuantile } from '../../../shared/stochastic/quantile.ts';
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectWithin } from '../../support/closeness.ts';

describe('sample quantiles', () => {
  it.each(reference.sampleQuantiles)('at $p (NumPy, methods linear and inverted_cdf)', (row) => {
    expectWithin(sampleQuantile(reference.sample, row.p), row.type7, 1e-12, 'type 7');
    expect(smallestQuantile(reference.sample, row.p)).toBe(row.smallest);
  });

  it('of one value are that value; bad input is refused', () => {
    expect(sampleQuantile([4], 0.3)).toBe(4);
    expect(smallestQuantile([4], 0)).toBe(4);
    for (const f of [sampleQuantile, smallestQuantile]) {
      expect(() => f([], 0.5)).toThrow(/empty/);
      expect(() => f([1], 1.5)).toThrow(/p must/);
      expect(() => f([1], NaN)).toThrow(/p must/);
    }
  });
});
