import { checkProbability } from './check.ts';
import { lowerRegularised, upperRegularised } from './incomplete-gamma.ts';
import type { RandomStream } from './random.ts';

/** The standard normal distribution function, right in both tails: Φ(x) = ½ Q(½, x²/2) for x ≤ 0. */
export function normalCdf(x: number): number {
  if (Number.isNaN(x)) throw new RangeError('x must be a number, got NaN');
  const half = (x * x) / 2;
  if (x <= 0) return 0.5 * upperRegularised(0.5, half);
  return 0.5 + 0.5 * lowerRegularised(0.5, half);
}

/** Σ c[i] x^i by Horner. */
function polynomial(c: readonly number[], x: number): number {
  let sum = 0;
  for (let i = c.length - 1; i >= 0; i -= 1) sum = sum * x + c[i];
  return sum;
}

const centreTop = [
  3.387132872796366608, 133.14166789178437745, 1971.5909503065514427, 13731.693765509461125, 45921.953931549871457,
  67265.770927008700853, 33430.575583588128105, 2509.0809287301226727,
] as const;
const centreBottom = [
  1, 42.313330701600911252, 687.1870074920579083, 5394.1960214247511077, 21213.794301586595867, 39307.89580009271061,
  28729.085735721942674, 5226.495278852545925,
] as const;
const tailTop = [
  1.42343711074968357734, 4.6303378461565452959, 5.7694972214606914055, 3.64784832476320460504, 1.27045825245236838258,
  0.24178072517745061177, 0.0227238449892691845833, 7.7454501427834140764e-4,
] as const;
const tailBottom = [
  1, 2.05319162663775882187, 1.6763848301838038494, 0.68976733498510000455, 0.14810397642748007459,
  0.0151986665636164571966, 5.475938084995344946e-4, 1.05075007164441684324e-9,
] as const;
const farTop = [
  6.6579046435011037772, 5.4637849111641143699, 1.7848265399172913358, 0.29656057182850489123, 0.026532189526576123093,
  0.0012426609473880784386, 2.71155556874348757815e-5, 2.01033439929228813265e-7,
] as const;
const farBottom = [
  1, 0.59983220655588793769, 0.13692988092273580531, 0.0148753612908506148525, 7.868691311456132591e-4,
  1.8463183175100546818e-5, 1.4215117583164458887e-7, 2.04426310338993978564e-15,
] as const;

function quantile(p: number): number {
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) {
    const r = 0.180625 - q * q;
    return (q * polynomial(centreTop, r)) / polynomial(centreBottom, r);
  }
  const r = Math.sqrt(-Math.log(q < 0 ? p : 1 - p));
  const x =
    r <= 5
      ? polynomial(tailTop, r - 1.6) / polynomial(tailBottom, r - 1.6)
      : polynomial(farTop, r - 5) / polynomial(farBottom, r - 5);
  return q < 0 ? -x : x;
}

/**
 * The standard normal quantile: x with Φ(x) = p. Algorithm AS 241, PPND16 (Wichura 1988, Applied Statistics 37, 477),
 * relative error about 10⁻¹⁶. −∞ at 0 and ∞ at 1. @throws RangeError unless p lies in 0..1.
 */
export function normalQuantile(p: number): number {
  checkProbability('p', p);
  if (p === 0) return -Infinity;
  if (p === 1) return Infinity;
  return quantile(p);
}

/** A standard normal draw by inversion: one uniform a draw, monotone in it (common random numbers). */
export function drawNormal(stream: RandomStream): number {
  return quantile(stream.uniform());
}
