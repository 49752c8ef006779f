import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drawNormal, normalCdf, normalQuantile } from '../../../shared/stochastic/normal.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import reference from '../../reference/distributions.json' with { type: 'json' };
import queues from '../../reference/queue-formulas.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { continuousFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('normal law', () => {
  it.each(reference.normalCdf)('distribution function at $x (mpmath)', ({ x, cdf }) => {
    expectRelative(normalCdf(x), cdf, 1e-12, 'cdf');
  });

  it.each(reference.normalQuantile)('quantile at $p (SciPy ndtri)', ({ p, x }) => {
    expectWithin(normalQuantile(p), x, 1e-12 * Math.max(1, Math.abs(x)), 'quantile');
  });

  it.each(queues.halfinWhitt)('gives Halfin & Whitt’s delay chance at β = $beta', ({ beta, p_delay }) => {
    // Source: Halfin & Whitt 1981, [1 + β Φ(β) / φ(β)]⁻¹, values by SciPy.
    const density = Math.exp((-beta * beta) / 2) / Math.sqrt(2 * Math.PI);
    expectRelative(1 / (1 + (beta * normalCdf(beta)) / density), p_delay, 1e-12, 'delay');
  });

  it('the quantile undoes the distribution function', () => {
    fc.assert(
      fc.property(fc.double({ min: -8, max: 5, noNaN: true }), (x) => {
        expect(Math.abs(normalQuantile(normalCdf(x)) - x)).toBeLessThan(1e-9);
      }),
      { seed: 1 },
    );
  });

  it('draws follow the law', () => {
    const stream = makeStream(21);
    expect(
      continuousFit(
        drawMany(100_000, () => drawNormal(stream)),
        normalCdf,
      ),
    ).toBeGreaterThan(0.001);
  });

  it('refuses what is no probability', () => {
    for (const p of [-0.1, 1.1, NaN]) expect(() => normalQuantile(p)).toThrow(RangeError);
    expect(() => normalCdf(NaN)).toThrow(RangeError);
    expect(normalQuantile(0)).toBe(-Infinity);
    expect(normalQuantile(1)).toBe(Infinity);
  });
});
