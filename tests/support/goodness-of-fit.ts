import { chiSquareExceedance } from '../../shared/stochastic/gamma.ts';

/**
 * Pearson's χ² p-value of draws against an exact law on whole numbers 0, 1, 2, …; neighbouring cells are joined until
 * each expects 10 or more, the last cell is everything above.
 */
export function countFit(draws: ArrayLike<number>, pmf: (n: number) => number): number {
  const n = draws.length;
  const seen = new Map<number, number>();
  for (let i = 0; i < n; i += 1) seen.set(draws[i], (seen.get(draws[i]) ?? 0) + 1);
  let statistic = 0;
  let cells = 0;
  let expected = 0;
  let observed = 0;
  let expectedSoFar = 0;
  let observedSoFar = 0;
  for (let k = 0; n - expectedSoFar - expected >= 10; k += 1) {
    expected += n * pmf(k);
    observed += seen.get(k) ?? 0;
    if (expected >= 10) {
      statistic += (observed - expected) ** 2 / expected;
      cells += 1;
      expectedSoFar += expected;
      observedSoFar += observed;
      expected = 0;
      observed = 0;
    }
  }
  const restExpected = n - expectedSoFar;
  // A bounded law may leave nothing above its last cell; then nothing may be seen there either.
  if (restExpected < 1e-6) return observedSoFar === n ? chiSquareExceedance(statistic, cells - 1) : 0;
  statistic += (n - observedSoFar - restExpected) ** 2 / restExpected;
  return chiSquareExceedance(statistic, cells);
}

/** Pearson's χ² p-value of draws against a continuous law, through its distribution function, in equal cells. */
export function continuousFit(draws: ArrayLike<number>, cdf: (x: number) => number, cells = 100): number {
  const observed = new Float64Array(cells);
  for (let i = 0; i < draws.length; i += 1) observed[Math.min(cells - 1, Math.floor(cdf(draws[i]) * cells))] += 1;
  const expected = draws.length / cells;
  let statistic = 0;
  for (const count of observed) statistic += (count - expected) ** 2 / expected;
  return chiSquareExceedance(statistic, cells - 1);
}

/** `count` draws. */
export function drawMany(count: number, draw: () => number): Float64Array {
  return Float64Array.from({ length: count }, draw);
}
