import { describe, expect, it } from 'vitest';
import { kolmogorovPValue, kolmogorovStatistic } from '../../../shared/stochastic/kolmogorov.ts';
import { makeStream, makeStreamFromState, reseed } from '../../../shared/stochastic/random.ts';
import { continuousFit, countFit, drawMany } from '../../support/goodness-of-fit.ts';

const mask = (1n << 64n) - 1n;

/** SplitMix64 written with whole numbers of any size: the plain form against which the 32-bit form is compared. */
function splitMix64(start: bigint): () => bigint {
  let state = start & mask;
  return () => {
    state = (state + 0x9e3779b97f4a7c15n) & mask;
    let z = state;
    z = ((z ^ (z >> 30n)) * 0xbf58476d1ce4e5b9n) & mask;
    z = ((z ^ (z >> 27n)) * 0x94d049bb133111ebn) & mask;
    return z ^ (z >> 31n);
  };
}

/** The stream that a seed and path should give, by the plain form. */
function plainStream(seed: number, path: number[]) {
  let h = BigInt(seed) & mask;
  for (const word of path) h = splitMix64(h)() ^ (BigInt(word) & mask);
  const next = splitMix64(h);
  const [first, second] = [next(), next()];
  const half = (x: bigint, shift: bigint) => Number((x >> shift) & 0xffffffffn);
  return makeStreamFromState([half(first, 0n), half(first, 32n), half(second, 0n), half(second, 32n)]);
}

describe('xoshiro128**', () => {
  it('gives the sequence of the authors’ C program', () => {
    // Source: reference vector of crate rand_xoshiro (rust-random/rngs, xoshiro128starstar.rs), produced with
    // xoshiro128starstar.c v1.1 by Blackman & Vigna.
    const stream = makeStreamFromState([1, 2, 3, 4]);
    expect(Array.from({ length: 10 }, () => stream.uint32())).toEqual([
      11520, 0, 5927040, 70819200, 2031721883, 1637235492, 1287239034, 3734860849, 3729100597, 4258142804,
    ]);
  });

  it('refuses the state that never leaves zero', () => {
    expect(() => makeStreamFromState([0, 0, 0, 0])).toThrow(RangeError);
  });
});

describe('makeStream', () => {
  it('is seeded as SplitMix64 says', () => {
    // Source: reference vector of crate rand_xoshiro (splitmix64.rs), produced with splitmix64.c by Vigna.
    const next = splitMix64(1477776061723855037n);
    expect([next(), next(), next(), next(), next()]).toEqual([
      1985237415132408290n,
      2979275885539914483n,
      13511426838097143398n,
      8488337342461049707n,
      15141737807933549159n,
    ]);
    for (const seed of [0, 1, 42, -1, -7_000_000_001, 4294967296, 2 ** 53 - 1, -(2 ** 53) + 1]) {
      for (const path of [[], [0], [1], [0, 0], [3, 141_592, 6], [-5], [2 ** 40 + 17, 9, -1]]) {
        const stream = makeStream(seed, ...path);
        const plain = plainStream(seed, path);
        for (let i = 0; i < 8; i += 1) expect(stream.uint32()).toBe(plain.uint32());
      }
    }
  });

  it('gives the same digits again, and after a reseed in place', () => {
    const first = makeStream(7, 1, 2);
    const digits = drawMany(20, () => first.uniform());
    const other = makeStream(99);
    other.uniform();
    reseed(other, 7, 1, 2);
    expect(drawMany(20, () => other.uniform())).toEqual(digits);
  });

  it('gives different streams for different paths, also of different length', () => {
    const seen = new Set<string>();
    const key = (seed: number, ...path: number[]) => {
      const stream = makeStream(seed, ...path);
      seen.add(`${stream.uint32()}-${stream.uint32()}-${stream.uint32()}`);
    };
    for (let i = 0; i < 200; i += 1) {
      key(i);
      key(0, i);
      key(i, 0);
      key(0, 0, i);
      for (let j = 1; j < 20; j += 1) key(1, i, j);
    }
    // key(0) .. key(199); key(0, 0) occurs twice (as key(0, i = 0) and key(i = 0, 0)).
    expect(seen.size).toBe(200 * 4 - 1 + 200 * 19);
  });

  it('first draws of neighbouring paths are uniform and uncorrelated', () => {
    const n = 20_000;
    const first = drawMany(n, () => 0);
    for (let i = 0; i < n; i += 1) first[i] = makeStream(5, 3, i).uniform();
    let product = 0;
    for (let i = 1; i < n; i += 1) product += (first[i] - 0.5) * (first[i - 1] - 0.5);
    // The sum of n products of two centred uniforms has standard deviation √n / 12.
    expect(Math.abs(product / (Math.sqrt(n) / 12))).toBeLessThan(4);
    expect(kolmogorovPValue(kolmogorovStatistic(first.sort()), n)).toBeGreaterThan(0.001);
  });

  it('stays inside the open interval and fills it evenly, down to its low bits', () => {
    const stream = makeStream(11);
    const draws = drawMany(200_000, () => stream.uniform());
    expect(Math.min(...draws.slice(0, 50_000))).toBeGreaterThan(0);
    expect(draws.every((u) => u > 0 && u < 1)).toBe(true);
    expect(continuousFit(draws, (u) => u, 1000)).toBeGreaterThan(0.001);
    expect(continuousFit(draws, (u) => (u * 2 ** 26) % 1, 1000)).toBeGreaterThan(0.001);
    const low = drawMany(100_000, () => stream.uint32() & 15);
    expect(countFit(low, (k) => (k < 16 ? 1 / 16 : 0))).toBeGreaterThan(0.001);
  });

  it('names a seed or path that is not a whole number', () => {
    expect(() => makeStream(0.5)).toThrow(/seed/);
    expect(() => makeStream(NaN)).toThrow(RangeError);
    expect(() => makeStream(1, 2, Infinity)).toThrow(/path\[1\]/);
  });
});
