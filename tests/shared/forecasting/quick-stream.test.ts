import { describe, expect, it } from 'vitest';
import { QuickStream } from '../../../shared/forecasting/quick-stream.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import { drawQuickGamma, drawQuickNormal } from '../../../shared/forecasting/quick-normal.ts';
import { gammaCdf } from '../../../shared/stochastic/gamma.ts';
import { normalCdf } from '../../../shared/stochastic/normal.ts';
import { continuousFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('QuickStream', () => {
  it('has the words of makeStream of the same seed and path, one by one or many at once', () => {
    const quick = new QuickStream();
    const many = new Uint32Array(40);
    for (const [seed, place] of [
      [7, 2],
      [0, 0],
      [Number.MAX_SAFE_INTEGER, 4_294_967_299],
      [-3, 1],
    ]) {
      const same = makeStream(seed, 5, 11, place);
      quick.reseed(seed, 5, 11, place);
      for (let i = 0; i < 320; i += 1) expect(quick.uint32()).toBe(same.uint32());
      quick.make(many, 40);
      expect(Array.from(many)).toEqual(Array.from({ length: 40 }, () => same.uint32()));
      expect(quick.uint32()).toBe(same.uint32());
    }
  });

  it('starts anew on the same path and elsewhere on another', () => {
    const quick = new QuickStream();
    const first = [1, 1, 2].map((place) => {
      quick.reseed(7, 5, 11, place);
      return Array.from({ length: 5 }, () => quick.uint32());
    });
    expect(first[1]).toEqual(first[0]);
    expect(first[2]).not.toEqual(first[0]);
  });

  // Source: the exponential law itself, P(X ≤ x) = 1 − e^(−x), by Pearson's χ² in 1,000 cells of equal chance.
  it('draws exponentials by the ziggurat and uniforms as they should be (a million each)', () => {
    const quick = new QuickStream();
    quick.reseed(20, 1, 1, 1);
    const exponentials = drawMany(1_000_000, () => quick.exponential());
    expect(continuousFit(exponentials, (x) => -Math.expm1(-x), 1000)).toBeGreaterThan(0.001);
    expect(Math.min(...exponentials.subarray(0, 10_000))).toBeGreaterThan(0);
    // The tail begins anew beyond 7.697: e^(−7.697) of a million is 454.
    const far = exponentials.filter((x) => x > 7.69711747013105).length;
    expect(Math.abs(far - 454)).toBeLessThan(4 * Math.sqrt(454));
    const uniforms = drawMany(1_000_000, () => quick.uniform());
    expect(continuousFit(uniforms, (x) => x, 1000)).toBeGreaterThan(0.001);
  });
});

describe('drawQuickNormal', () => {
  // Source: the normal law itself, Φ, by Pearson's χ² in 1,000 cells of equal chance.
  it('draws from the normal law, tails beyond the last layer included (a million)', () => {
    const quick = new QuickStream();
    quick.reseed(21, 1, 1, 1);
    const normals = drawMany(1_000_000, () => drawQuickNormal(quick));
    expect(continuousFit(normals, normalCdf, 1000)).toBeGreaterThan(0.001);
    // 2 Φ(−3.6542) of a million is 258.
    const far = normals.filter((x) => Math.abs(x) > 3.6541528853610088).length;
    const expected = 2e6 * normalCdf(-3.6541528853610088);
    expect(Math.abs(far - expected)).toBeLessThan(4 * Math.sqrt(expected));
  });
});

describe('drawQuickGamma', () => {
  // Source: the gamma law itself, P(a, x), by Pearson's χ² in 200 cells of equal chance.
  it.each([0.3, 1, 1.7, 9])('draws from the gamma law of shape %f (200,000)', (shape) => {
    const quick = new QuickStream();
    quick.reseed(22, 1, 1, 1);
    const draws = drawMany(200_000, () => drawQuickGamma(quick, shape));
    expect(continuousFit(draws, (x) => gammaCdf(x, shape), 200)).toBeGreaterThan(0.001);
  });
});
