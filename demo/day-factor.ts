import { drawNormal } from '../shared/stochastic/normal.ts';
import { makeStream } from '../shared/stochastic/random.ts';

/**
 * A factor of mean 1 for every whole number (a day, a week) whose logarithm is a first-order autoregression:
 * exp(sd·z − sd²/2), z(k) = √(1 − carry²) Σ_j carry^j ε(k − j). The sum is cut where carry^j falls under 10⁻⁶, so the
 * factor of a day depends on the day alone, never on the window asked for.
 * @param path names the factor's random stream. Cost: one normal a day and about 15 / (1 − carry) products, then cached.
 */
export function makeDayFactor(options: {
  seed: number;
  path: readonly number[];
  sd: number;
  carry: number;
}): (index: number) => number {
  const { seed, path, sd, carry } = options;
  const terms = carry === 0 ? 1 : Math.ceil(Math.log(1e-6) / Math.log(carry));
  const shocks = new Map<number, number>();
  const factors = new Map<number, number>();

  function shock(index: number): number {
    let value = shocks.get(index);
    if (value === undefined) {
      value = drawNormal(makeStream(seed, ...path, index));
      shocks.set(index, value);
    }
    return value;
  }

  return (index) => {
    let factor = factors.get(index);
    if (factor === undefined) {
      let z = 0;
      for (let j = terms - 1; j >= 0; j -= 1) z = carry * z + shock(index - j);
      factor = Math.exp(sd * Math.sqrt(1 - carry * carry) * z - (sd * sd) / 2);
      factors.set(index, factor);
    }
    return factor;
  };
}
