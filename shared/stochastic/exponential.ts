import type { RandomStream } from './random.ts';

/**
 * An exponential draw of mean 1, by inversion: −ln(1 − U). One uniform a draw, so a draw scaled by a mean keeps step
 * with its uniform (common random numbers). Divide by a rate to get a gap or a lifetime.
 */
export function drawExponential(stream: RandomStream): number {
  return -Math.log(1 - stream.uniform());
}
