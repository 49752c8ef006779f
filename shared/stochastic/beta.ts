import { checkPositive } from './check.ts';
import { drawGamma } from './gamma.ts';
import type { RandomStream } from './random.ts';

/**
 * A beta draw with mean a / (a + b): the share of one gamma draw in the sum of two. Below 1 the gammas are compared by
 * their logarithms, so that small parameters cannot give 0/0. @throws RangeError unless a and b are finite and above 0.
 */
export function drawBeta(stream: RandomStream, a: number, b: number): number {
  checkPositive('a', a);
  checkPositive('b', b);
  if (a >= 1 && b >= 1) {
    const x = drawGamma(stream, a);
    return x / (x + drawGamma(stream, b));
  }
  const logX = Math.log(drawGamma(stream, a + 1)) + Math.log(stream.uniform()) / a;
  const logY = Math.log(drawGamma(stream, b + 1)) + Math.log(stream.uniform()) / b;
  return 1 / (1 + Math.exp(logY - logX));
}
