import { checkNonNegative, checkPositive, checkProbability } from './check.ts';
import { lowerRegularised, upperRegularised } from './incomplete-gamma.ts';
import { deviancePart, logGamma, logTwoPi, stirlingError } from './log-gamma.ts';
import { drawNormal, normalQuantile } from './normal.ts';
import type { RandomStream } from './random.ts';

export { logGamma };

/**
 * A gamma draw of the given shape and rate 1 (mean = variance = shape): Marsaglia & Tsang (2000), ACM Trans. Math.
 * Softw. 26, 363; below shape 1 the draw of shape + 1 times U^(1/shape), exact for any shape (it underflows to 0
 * where the law itself does, below shape 0.002 or so). @throws RangeError unless shape is finite and above 0.
 */
export function drawGamma(stream: RandomStream, shape: number): number {
  checkPositive('shape', shape);
  if (shape < 1) return drawFromOne(stream, shape + 1) * Math.pow(stream.uniform(), 1 / shape);
  return drawFromOne(stream, shape);
}

function drawFromOne(stream: RandomStream, shape: number): number {
  const d = shape - 1 / 3;
  const c = 1 / Math.sqrt(9 * d);
  for (;;) {
    const x = drawNormal(stream);
    const root = 1 + c * x;
    if (root <= 0) continue;
    const v = root * root * root;
    const u = stream.uniform();
    const square = x * x;
    if (u < 1 - 0.0331 * square * square) return d * v;
    if (Math.log(u) < 0.5 * square + d * (1 - v + Math.log(v))) return d * v;
  }
}

/** P(X ≤ x) for X gamma of the given shape and rate 1. Relative error about 10⁻¹² in the lower tail. */
export function gammaCdf(x: number, shape: number): number {
  checkPositive('shape', shape);
  if (Number.isNaN(x)) throw new RangeError('x must be a number, got NaN');
  return lowerRegularised(shape, x);
}

/** P(X > x) for X gamma of the given shape and rate 1. Relative error about 10⁻¹² in the upper tail. */
export function gammaExceedance(x: number, shape: number): number {
  checkPositive('shape', shape);
  if (Number.isNaN(x)) throw new RangeError('x must be a number, got NaN');
  return upperRegularised(shape, x);
}

/** ln of the gamma density times x, at shape a: a ln x − x − ln Γ(a). */
function logDensityTimesX(x: number, a: number): number {
  return 0.5 * (Math.log(a) - logTwoPi) - stirlingError(a) - deviancePart(a, x, a - x);
}

/**
 * The gamma quantile (rate 1): x with P(X ≤ x) = p. Newton's method on ln x against the log of the nearer tail, from
 * the Wilson–Hilferty start, kept inside a bracket. Relative error about 10⁻¹² unless p is so near 1 that 1 − p has
 * lost its digits. 0 at p = 0, ∞ at p = 1. @throws RangeError on a bad p or shape. Cost: 5–10 distribution functions.
 */
export function gammaQuantile(p: number, shape: number): number {
  checkProbability('p', p);
  checkPositive('shape', shape);
  if (p === 0) return 0;
  if (p === 1) return Infinity;
  const upper = p > 0.5;
  const target = upper ? Math.log1p(-p) : Math.log(p);
  // Below this the lower tail is x^a / Γ(a + 1) to the last digit.
  const logSmall = (Math.log(p) + logGamma(shape + 1)) / shape;
  if (logSmall < -40) return Math.exp(logSmall);

  const z = normalQuantile(p);
  const ninth = 1 / (9 * shape);
  const cube = 1 - ninth + z * Math.sqrt(ninth);
  let y = cube > 0.1 ? Math.log(shape) + 3 * Math.log(cube) : logSmall;
  let low = -Infinity;
  let high = Infinity;
  for (let i = 0; i < 200; i += 1) {
    const x = Math.exp(y);
    const tail = upper ? upperRegularised(shape, x) : lowerRegularised(shape, x);
    const gap = Math.log(tail) - target;
    // The upper tail falls in x, the lower rises.
    if (upper ? gap < 0 : gap > 0) high = y;
    else low = y;
    const slope = Math.exp(logDensityTimesX(x, shape) - Math.log(tail));
    let next = tail > 0 ? y + (upper ? gap : -gap) / slope : NaN;
    if (!(next > low && next < high)) {
      if (low === -Infinity) next = high - 1;
      else if (high === Infinity) next = low + 1;
      else next = (low + high) / 2;
    }
    const moved = Math.abs(next - y);
    y = next;
    if (moved <= 1e-15 * Math.max(1, Math.abs(y))) break;
  }
  return Math.exp(y);
}

/** The χ² quantile with df degrees of freedom (any positive number): 2 × the gamma quantile of shape df / 2. */
export function chiSquareQuantile(p: number, df: number): number {
  checkPositive('df', df);
  return 2 * gammaQuantile(p, df / 2);
}

/** P(χ² > x) with df degrees of freedom: the p-value of a χ² statistic. */
export function chiSquareExceedance(x: number, df: number): number {
  checkPositive('df', df);
  checkNonNegative('x', x);
  return upperRegularised(df / 2, x / 2);
}
