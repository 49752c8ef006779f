import { describe, expect, it } from 'vitest';
import { logGamma, stirlingError } from '../../../shared/stochastic/log-gamma.ts';
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectWithin } from '../../support/closeness.ts';

// Source of all values: mpmath in 50 digits (tests/reference/make-distributions.py).
describe('logGamma', () => {
  it.each(reference.gammaFunctions)('agree with mpmath at x = $x', (row) => {
    expectWithin(logGamma(row.x), row.logGamma, 1e-13 * Math.max(1, Math.abs(row.logGamma)), 'logGamma');
  });

  it('Stirling’s error is what is left of ln n! (n! exact up to 18)', () => {
    let factorial = 1;
    for (let n = 1; n <= 18; n += 1) {
      factorial *= n;
      const formula = (n + 0.5) * Math.log(n) - n + 0.5 * Math.log(2 * Math.PI);
      expectWithin(stirlingError(n), Math.log(factorial) - formula, 1e-13, `n = ${n}`);
      expectWithin(stirlingError(n + 1e-12), stirlingError(n), 1e-12, `beside n = ${n}`);
    }
  });

  it.each([0, -1, NaN, Infinity])('refuses %d', (x) => {
    expect(() => logGamma(x)).toThrow(RangeError);
  });
});
