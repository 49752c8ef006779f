import { deviancePart, logTwoPi, stirlingError } from './log-gamma.ts';

/** x^a e^−x / Γ(a + 1), with no cancellation for large a. Needs a > 0, x > 0. */
function prefactor(a: number, x: number): number {
  return Math.exp(-0.5 * (logTwoPi + Math.log(a)) - stirlingError(a) - deviancePart(a, x, a - x));
}

function lowerSeries(a: number, x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > sum * 1e-17; k += 1) {
    term *= x / (a + k);
    sum += term;
  }
  return prefactor(a, x) * sum;
}

/** Legendre's continued fraction by the modified Lentz method (Press et al., Numerical Recipes, 6.2). */
function upperFraction(a: number, x: number): number {
  let b = x + 1 - a;
  let c = 1e300;
  let d = 1 / b;
  let h = d;
  for (let i = 1; i < 1_000_000; i += 1) {
    const an = -i * (i - a);
    b += 2;
    d = an * d + b;
    if (Math.abs(d) < 1e-300) d = 1e-300;
    c = b + an / c;
    if (Math.abs(c) < 1e-300) c = 1e-300;
    d = 1 / d;
    const factor = d * c;
    h *= factor;
    if (Math.abs(factor - 1) < 1e-16) break;
  }
  return prefactor(a, x) * a * h;
}

/** P(a, x): the chance that a gamma variable of shape a and rate 1 is at most x. Unchecked: a > 0, x ≥ 0. */
export function lowerRegularised(a: number, x: number): number {
  if (x <= 0) return 0;
  if (x === Infinity) return 1;
  return x < a + 1 ? lowerSeries(a, x) : 1 - upperFraction(a, x);
}

/** Q(a, x) = 1 − P(a, x), right in its own tail. Unchecked: a > 0, x ≥ 0. */
export function upperRegularised(a: number, x: number): number {
  if (x <= 0) return 1;
  if (x === Infinity) return 0;
  return x < a + 1 ? 1 - lowerSeries(a, x) : upperFraction(a, x);
}
