/** Absorbs the rounding of a distribution function, so that the quantile of F(n) is n. */
const slack = 1 - 64 * Number.EPSILON;

/**
 * The smallest whole n ≥ 0 with F(n) ≥ p, for a distribution function on whole numbers: gallops from a guess until
 * it has a bracket, then halves it. Cost: two or three evaluations of F when the guess is right.
 */
export function smallestCount(p: number, guess: number, cdf: (n: number) => number): number {
  if (p <= 0) return 0;
  const target = p * slack;
  let high = Math.max(0, Math.round(guess));
  let low: number;
  let stride = 1;
  if (cdf(high) >= target) {
    low = high - 1;
    while (low >= 0 && cdf(low) >= target) {
      high = low;
      stride *= 2;
      low = high - stride;
    }
    low = Math.max(low, -1);
  } else {
    low = high;
    high = low + 1;
    while (cdf(high) < target) {
      low = high;
      stride *= 2;
      high = low + stride;
    }
  }
  // F(low) < p ≤ F(high), with F(−1) = 0.
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2);
    if (cdf(middle) >= target) high = middle;
    else low = middle;
  }
  return high;
}
