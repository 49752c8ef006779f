import { describe, expect, it } from 'vitest';
import { QuickStream } from '../../../shared/forecasting/quick-stream.ts';
import { makeStream, makeStreamFromState } from '../../../shared/stochastic/random.ts';
import { continuousFit, drawMany } from '../../support/goodness-of-fit.ts';

describe('QuickStream', () => {
  it('is xoshiro128** from the first words of its seeded stream', () => {
    const quick = new QuickStream();
    quick.reseed(7, 5, 11, 2);
    const seeder = makeStream(7, 5, 11, 2);
    const [a, b, c, d] = [seeder.uint32(), seeder.uint32(), seeder.uint32(), seeder.uint32()];
    const same = makeStreamFromState([a, b, c, (d | 1) >>> 0]);
    for (let i = 0; i < 500; i += 1) expect(quick.uint32()).toBe(same.uint32());
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
