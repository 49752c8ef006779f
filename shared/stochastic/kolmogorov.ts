import { binomialPmf } from './binomial.ts';
import { checkNonNegative, checkPositiveCount, checkProbability } from './check.ts';

/** Up to this sample size the p-value is exact; beyond it the corrected limit law errs by less than 5 · 10⁻⁵. */
const exactUpTo = 400;

/** The largest distance between the empirical distribution of values (ascending) and the uniform law on 0..1. */
export function kolmogorovStatistic(sortedUniforms: ArrayLike<number>): number {
  const n = sortedUniforms.length;
  checkPositiveCount('sample size', n);
  let largest = 0;
  for (let i = 0; i < n; i += 1) {
    const u = sortedUniforms[i];
    checkProbability(`value ${i}`, u);
    largest = Math.max(largest, (i + 1) / n - u, u - i / n);
  }
  return largest;
}

/** P(D⁺ ≥ d), exact (Birnbaum & Tingey 1951): d Σ Binomial(j; n, d + j/n) / (d + j/n). All terms positive. */
function oneSided(d: number, n: number): number {
  let sum = 0;
  for (let j = 0; j <= n * (1 - d); j += 1) {
    const q = Math.min(1, d + j / n);
    sum += binomialPmf(j, n, q) / q;
  }
  return d * sum;
}

function multiplyMatrices(a: Float64Array, b: Float64Array, m: number): Float64Array {
  const product = new Float64Array(m * m);
  for (let i = 0; i < m; i += 1) {
    for (let k = 0; k < m; k += 1) {
      const factor = a[i * m + k];
      if (factor === 0) continue;
      for (let j = 0; j < m; j += 1) product[i * m + j] += factor * b[k * m + j];
    }
  }
  return product;
}

/** P(D < d), exact: the matrix power of Durbin in the form of Marsaglia, Tsang & Wang (2003), J. Statist. Software 8(18). */
function exactCdf(d: number, n: number): number {
  const k = Math.floor(n * d) + 1;
  const m = 2 * k - 1;
  const h = k - n * d;
  const matrix = new Float64Array(m * m);
  for (let i = 0; i < m; i += 1) for (let j = 0; j < m; j += 1) matrix[i * m + j] = i - j + 1 < 0 ? 0 : 1;
  for (let i = 0; i < m; i += 1) {
    matrix[i * m] -= Math.pow(h, i + 1);
    matrix[(m - 1) * m + i] -= Math.pow(h, m - i);
  }
  matrix[(m - 1) * m] += 2 * h - 1 > 0 ? Math.pow(2 * h - 1, m) : 0;
  for (let i = 0; i < m; i += 1) {
    for (let j = 0; j < m; j += 1) {
      for (let g = 2; g <= i - j + 1; g += 1) matrix[i * m + j] /= g;
    }
  }
  // matrix^n by squaring, with the exponents of ten kept apart against overflow.
  let power: Float64Array | null = null;
  let powerExponent = 0;
  let base: Float64Array = matrix;
  let baseExponent = 0;
  for (let left = n; left > 0; left = Math.floor(left / 2)) {
    if (left % 2 === 1) {
      power = power ? multiplyMatrices(power, base, m) : base.slice();
      powerExponent += baseExponent;
      if (power[(k - 1) * m + k - 1] > 1e140) {
        for (let i = 0; i < power.length; i += 1) power[i] *= 1e-140;
        powerExponent += 140;
      }
    }
    base = multiplyMatrices(base, base, m);
    baseExponent *= 2;
    if (base[(k - 1) * m + k - 1] > 1e140) {
      for (let i = 0; i < base.length; i += 1) base[i] *= 1e-140;
      baseExponent += 140;
    }
  }
  // n! / nⁿ, factor by factor.
  let result = power ? power[(k - 1) * m + k - 1] : 0;
  for (let i = 1; i <= n; i += 1) {
    result *= i / n;
    if (result < 1e-140) {
      result *= 1e140;
      powerExponent -= 140;
    }
  }
  return result * Math.pow(10, powerExponent);
}

/** 1 − K(x) for the limit law of √n D (Kolmogorov 1933). */
function limitExceedance(x: number): number {
  if (x <= 0) return 1;
  let sum = 0;
  if (x < 1) {
    const w = Math.PI ** 2 / (8 * x * x);
    for (let k = 1; k < 20; k += 2) sum += Math.exp(-k * k * w);
    return 1 - (Math.sqrt(2 * Math.PI) / x) * sum;
  }
  for (let k = 1; k < 20; k += 1) sum += (k % 2 === 1 ? 1 : -1) * Math.exp(-2 * k * k * x * x);
  return 2 * sum;
}

/**
 * The two-sided p-value of a Kolmogorov–Smirnov statistic d from n values: P(D ≥ d) when the values follow the law.
 * Exact up to n = 400 (far tail: twice the one-sided chance, which is exact to better than 10⁻⁹ there); above, the
 * limit law with Vrbik's (2018) correction of d in the centre (error under 5 · 10⁻⁵), and the exact tail.
 * @throws RangeError on a bad d or n. Cost: O((n d)³ log n) in the centre, O(n) in the tail.
 */
export function kolmogorovPValue(d: number, n: number): number {
  checkNonNegative('d', d);
  checkPositiveCount('n', n);
  if (d >= 1) return 0;
  if (2 * n * d <= 1) return 1;
  const nd2 = n * d * d;
  if (d >= 0.5 || nd2 >= 4) return Math.min(1, 2 * oneSided(d, n));
  if (n <= exactUpTo) return Math.min(1, Math.max(0, 1 - exactCdf(d, n)));
  const x = Math.sqrt(nd2);
  return Math.min(1, limitExceedance(x + 1 / (6 * Math.sqrt(n)) + (x - 1) / (4 * n)));
}
